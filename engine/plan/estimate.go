package plan

import (
	"math"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/relation"
)

// Estimate is how many rows a node gives, as far as the plan tells.
type Estimate struct {
	Rows  float64
	Exact bool
	// Geometry is the work of a Relation, nil for other nodes.
	Geometry *relation.Forecast
}

// Estimator estimates the rows of the nodes of a plan. It counts what stored
// tables hold and computes nothing of the plan itself; Look does, for relations
// over few stored rows.
type Estimator struct {
	// Look tells what a relation will do; nil: nobody looks. It is asked only
	// where the sites come from at most LookedAt stored rows and no other relation.
	Look func(*Relation) (*relation.Forecast, error)
	// Threads are those of the geometry, for the time of what is not looked at.
	Threads int

	known   map[Node]Estimate
	counted map[counted]values
	idle    int // nodes above that never run what is below them
}

// LookedAt is the largest number of stored rows, and of rows in between, from
// which the sites of a relation are computed so as to count them.
const LookedAt = 1 << 20

// Estimates are those of n and of everything below it.
func (e *Estimator) Estimates(n Node) (map[Node]Estimate, error) {
	e.known = map[Node]Estimate{}
	e.counted = map[counted]values{}
	if err := e.walk(n); err != nil {
		return nil, err
	}
	return e.known, nil
}

// walk estimates from the leaves up.
func (e *Estimator) walk(n Node) error {
	l, ok := n.(*Limit)
	unused := ok && l.Count == 0
	if unused {
		e.idle++
	}
	for _, in := range n.Inputs() {
		if err := e.walk(in); err != nil {
			return err
		}
	}
	if err := e.elsewhere(n); err != nil {
		return err
	}
	if unused {
		e.idle--
	}
	x, err := e.node(n)
	if err != nil {
		return err
	}
	if math.IsNaN(x.Rows) || x.Rows > math.MaxInt64 {
		x.Rows = math.MaxInt64
	}
	e.known[n] = x
	return nil
}

// elsewhere estimates the common part that a node uses and the queries in its
// expressions. Nobody looks at what depends on the row outside.
func (e *Estimator) elsewhere(n Node) error {
	if c := CommonOf(n); c != nil {
		if _, done := e.known[c.Plan]; !done {
			if err := e.walk(c.Plan); err != nil {
				return err
			}
		}
	}
	for _, q := range QueriesOf(n) {
		if len(q.Outer) > 0 {
			e.idle++
		}
		err := e.walk(q.Query.(*Query).Plan)
		if len(q.Outer) > 0 {
			e.idle--
		}
		if err != nil {
			return err
		}
	}
	return nil
}

func (e *Estimator) rows(n Node) float64 { return e.known[n].Rows }

func (e *Estimator) node(n Node) (Estimate, error) {
	switch n := n.(type) {
	case *One:
		return Estimate{Rows: 1, Exact: true}, nil
	case *Values:
		return Estimate{Rows: float64(len(n.Rows)), Exact: true}, nil
	case *Scan:
		return Estimate{Rows: float64(n.Table.N), Exact: true}, nil
	case *Relation:
		return e.relation(n)
	case *Filter:
		return e.filter(n), nil
	case *Aggregate:
		return e.groups(n.Input, n.Keys), nil
	case *Distinct:
		return e.groups(n.Input, columnsOf(n.Schema())), nil
	case *Join:
		return e.join(n), nil
	case *Limit:
		return e.limit(n), nil
	case *Matched:
		return e.matched(n), nil
	case *Shared:
		in := e.known[n.Common.Plan]
		return Estimate{Rows: in.Rows, Exact: in.Exact}, nil
	case *Nearest:
		rows := e.rows(n.Common.Plan)
		if n.Keep != nil {
			rows *= e.share(n.Keep, n.Common.Plan)
		}
		return Estimate{Rows: min(rows, float64(n.Most))}, nil
	case *Lookup:
		rows := e.rows(n.Common.Plan)
		for _, k := range n.Keys {
			rows /= max(1, e.values(k, n.Common.Plan).count)
		}
		return Estimate{Rows: rows}, nil
	case *Union:
		sum := Estimate{Exact: true}
		for _, in := range n.Parts {
			sum.Rows += e.rows(in)
			sum.Exact = sum.Exact && e.known[in].Exact
		}
		return sum, nil
	case *Sort:
		in := e.known[n.Input]
		if n.Top > 0 {
			in.Rows = min(in.Rows, float64(n.Top))
		}
		return Estimate{Rows: in.Rows, Exact: in.Exact}, nil
	case *Project, *Number, *Window:
		in := e.known[n.Inputs()[0]]
		return Estimate{Rows: in.Rows, Exact: in.Exact}, nil
	case *Interpolate:
		in := e.known[n.Input]
		return Estimate{Rows: in.Rows, Exact: in.Exact}, nil
	}
	return Estimate{}, nil
}

func (e *Estimator) filter(n *Filter) Estimate {
	in := e.known[n.Input]
	share := e.share(n.Cond, n.Input)
	_, constant := expr.Const(n.Cond)
	return Estimate{Rows: in.Rows * share, Exact: in.Exact && (constant || in.Rows == 0)}
}

func (e *Estimator) limit(n *Limit) Estimate {
	in := e.known[n.Input]
	rows := max(0, in.Rows-float64(n.Offset))
	if n.Count >= 0 {
		rows = min(rows, float64(n.Count))
	}
	return Estimate{Rows: rows, Exact: in.Exact || n.Count == 0}
}

// join takes the values of the side with fewer of them to be among those of
// the other: a pair of keys leaves one of max(d_left, d_right) pairs.
func (e *Estimator) join(n *Join) Estimate {
	left, right := e.known[n.Left], e.known[n.Right]
	if n.Kind == Semi || n.Kind == Anti {
		return e.matching(n)
	}
	rows := left.Rows * right.Rows
	for i := range n.LeftKeys {
		l, r := e.values(n.LeftKeys[i], n.Left), e.values(n.RightKeys[i], n.Right)
		rows /= max(1, l.count, r.count)
	}
	if n.Rest != nil {
		rows *= e.share(n.Rest, n)
	}
	exact := left.Exact && right.Exact && (rows == 0 && n.Kind == Inner || len(n.LeftKeys) == 0 && n.Rest == nil)
	if n.Kind == Left {
		rows = max(rows, left.Rows)
		exact = exact && right.Rows > 0
	}
	return Estimate{Rows: rows, Exact: exact}
}

// matching takes a left row to have as many partners as there are right rows for
// each value of the keys, if the right side has its value, and to fail the rest of
// the condition with each of them by chance.
func (e *Estimator) matching(n *Join) Estimate {
	left, right := e.known[n.Left], e.known[n.Right]
	share, partners := 1.0, right.Rows
	for i := range n.LeftKeys {
		l, r := e.values(n.LeftKeys[i], n.Left), e.values(n.RightKeys[i], n.Right)
		share *= min(1, r.count/max(1, l.count))
		partners /= max(1, r.count)
	}
	if n.Rest != nil {
		partners *= e.share(n.Rest, n)
	}
	share *= min(1, partners)
	if n.Kind == Anti {
		share = 1 - share
	}
	return Estimate{Rows: left.Rows * share, Exact: left.Exact && (left.Rows == 0 || right.Exact && right.Rows == 0)}
}

// matched takes half of the rows of the smaller side to stand on both.
func (e *Estimator) matched(n *Matched) Estimate {
	left := e.known[n.Left]
	if !n.All {
		left = e.groups(n.Left, columnsOf(n.Left.Schema()))
	}
	both := min(left.Rows, e.rows(n.Right)) / 2
	if n.Kind == Except {
		return Estimate{Rows: left.Rows - both, Exact: left.Exact && e.known[n.Right].Exact && both == 0}
	}
	return Estimate{Rows: both, Exact: left.Exact && e.known[n.Right].Exact && both == 0}
}

// groups counts the combinations of the values of keys, at most the rows there
// are. One key that is a column of a stored table, of which all rows come, is
// counted exactly.
func (e *Estimator) groups(input Node, keys []expr.Expr) Estimate {
	in := e.known[input]
	if len(keys) == 0 {
		return Estimate{Rows: 1, Exact: true}
	}
	combinations := 1.0
	exact := in.Exact && len(keys) == 1
	for _, k := range keys {
		v := e.values(k, input)
		groups := v.count
		if v.nulls {
			groups++
		}
		combinations *= max(1, groups)
		exact = exact && v.exact
	}
	if in.Rows == 0 {
		return Estimate{Rows: 0, Exact: in.Exact}
	}
	return Estimate{Rows: min(in.Rows, combinations), Exact: exact}
}

// relation looks, where sites are few and at hand, else it guesses.
func (e *Estimator) relation(n *Relation) (Estimate, error) {
	var f *relation.Forecast
	if n.Bound.Def.Over == relation.OverRows {
		rows := e.rows(n.Input)
		if n.Bound.Def.Guess != nil {
			rows = n.Bound.Def.Guess(n.Bound, rows, func(c int) float64 { return e.columnValues(n.Input, c).count })
		}
		return Estimate{Rows: rows}, nil
	}
	if e.Look != nil && e.idle == 0 && e.atHand(n.Input) {
		var err error
		if f, err = e.Look(n); err != nil {
			return Estimate{}, err
		}
	}
	if f == nil {
		shown, parts := 1.0, 1.0
		if n.Wanted != nil {
			shown = e.share(n.Wanted, n.Input)
		}
		for _, c := range n.Bound.Clauses.Each {
			parts *= max(1, e.columnValues(n.Input, c).count)
		}
		f = n.Bound.Guess(e.rows(n.Input), shown, parts, n.Need, e.Threads)
	}
	if n.Most > 0 && !n.Bound.MeasuredIn() {
		f = f.First(n.Most)
	}
	return Estimate{Rows: f.Rows, Exact: f.RowsExact, Geometry: f}, nil
}

// atHand reports whether the rows of n come from a few stored ones, by way of
// not too many in between.
func (e *Estimator) atHand(n Node) bool {
	stored := 0.0
	ok := true
	var look func(Node)
	look = func(n Node) {
		if r, is := n.(*Relation); is && r.Bound.Def.Over == relation.OverSites || e.rows(n) > LookedAt || len(QueriesOf(n)) > 0 {
			ok = false
			return
		}
		if c := CommonOf(n); c != nil {
			look(c.Plan)
		}
		if s, is := n.(*Scan); is {
			stored += float64(s.Table.N)
		}
		if j, is := n.(*Join); is && len(j.LeftKeys) == 0 && e.rows(j.Left)*e.rows(j.Right) > LookedAt {
			ok = false
		}
		for _, in := range n.Inputs() {
			look(in)
		}
	}
	look(n)
	return ok && stored <= LookedAt
}

func columnsOf(schema column.Schema) []expr.Expr {
	list := make([]expr.Expr, len(schema))
	for i, f := range schema {
		list[i] = expr.NewColumn(i, f, noPlace)
	}
	return list
}
