package plan

import (
	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/lang"
)

// unnest makes joins of queries in expressions where that is plain, so that they
// need not be computed for every row outside:
//
//   - EXISTS and NOT EXISTS become semi and anti joins where they stand alone in a
//     condition and equalities tie them to the row outside; IN likewise (NOT IN is
//     no join: a NULL on either side makes it unknown).
//   - An aggregate over the rows that equalities tie to the row outside becomes a
//     left join with the groups by these columns; the rows without a group get the
//     aggregate's value of no rows.
//
// Safe: only where nothing in the query can fail, since a join computes it for
// rows that nobody asks for. Left rows keep their order, and each is given once.
// Rows of relations are left alone, for what is to be said of left-out cells.
func unnest(n Node) (Node, error) {
	return rewrite(n, func(n Node) (Node, error) {
		if !hasQueries(n) {
			return n, nil
		}
		if f, ok := n.(*Filter); ok {
			n = semiJoins(f)
		}
		switch n.(type) {
		case *Filter, *Project, *Aggregate:
			n = merges(n)
		}
		switch n := n.(type) {
		case *Filter, *Project, *Aggregate:
			return groupedJoins(n), nil
		}
		return n, nil
	})
}

// semiJoins turns parts of a condition into joins below it.
func semiJoins(f *Filter) Node {
	for _, o := range Lineage(f.Input) {
		if o.Relation != nil {
			return f
		}
	}
	in := f.Input
	var rest []expr.Expr
	for _, c := range expr.Conjuncts(f.Cond) {
		if j, ok := semiJoin(in, c); ok {
			in = j
			continue
		}
		rest = append(rest, c)
	}
	if len(rest) == 0 {
		return in
	}
	return &Filter{Input: in, Cond: expr.AndAll(rest), Clause: f.Clause}
}

// semiJoin is the rows of left for which a condition holds that is one query.
func semiJoin(left Node, cond expr.Expr) (*Join, bool) {
	kind := Semi
	if not, ok := cond.(*expr.Not); ok {
		kind, cond = Anti, not.X
	}
	s, ok := cond.(*expr.Subquery)
	if !ok || s.Query.CanFail() || len(s.Outer) == 0 || anyFails(s.Children()) {
		return nil, false
	}
	if s.Kind == expr.ScalarQuery || s.Kind == expr.InQuery && (s.Not || kind == Anti) {
		return nil, false
	}
	rows, value, ok := plainRows(s.Query.(*Query).Plan, s.Kind == expr.ExistsQuery)
	if !ok {
		return nil, false
	}
	width := len(left.Schema())
	var conds []expr.Expr
	if rows.Cond != nil {
		conds = expr.Conjuncts(beside(rows.Cond, width, s.Outer))
	}
	if s.Kind == expr.InQuery {
		same, err := expr.NewCompare(lang.Equals, s.X, beside(value, width, s.Outer), s.Place())
		if err != nil {
			return nil, false
		}
		conds = append(conds, same)
	}
	j := &Join{Kind: kind, Left: left, Right: rows.Input, Rest: expr.AndAll(conds)}
	for _, c := range conds {
		if _, _, ok := keyPair(c, width, len(rows.Input.Schema())); ok {
			return j, true
		}
	}
	return nil, false
}

func anyFails(list []expr.Expr) bool {
	for _, e := range list {
		if e.CanFail() {
			return true
		}
	}
	return false
}

// plainRows takes a query apart into rows that do not read the row outside and a
// condition that may; value is its first column over these rows, nil where there
// is none. exists: how many rows there are, and in which order, does not matter.
func plainRows(n Node, exists bool) (rows Filter, value expr.Expr, ok bool) {
	for {
		switch x := n.(type) {
		case *Limit:
			if !exists || x.Count == 0 || x.Offset > 0 {
				return rows, nil, false
			}
			n = x.Input
			continue
		case *Distinct:
			n = x.Input
			continue
		case *Sort:
			if x.Top == 0 || exists {
				n = x.Input
				continue
			}
		case *Project:
			if value == nil && len(x.Exprs) > 0 {
				value = x.Exprs[0]
			} else if value != nil {
				return rows, nil, false
			}
			n = x.Input
			continue
		}
		break
	}
	if f, is := n.(*Filter); is {
		rows.Cond, n = f.Cond, f.Input
	}
	if value == nil && len(n.Schema()) > 0 {
		value = columnsOf(n.Schema())[0]
	}
	rows.Input = n
	return rows, value, !ReadsOuter(n)
}

// beside is an expression of a query over the columns of a join: its own columns
// stand behind those of the left side, and the row outside is the left one.
func beside(e expr.Expr, width int, outer []expr.Expr) expr.Expr {
	return expr.Rewrite(e, func(e expr.Expr) expr.Expr {
		switch x := e.(type) {
		case *expr.Column:
			return expr.NewColumn(x.Index+width, x.Field, x.Place())
		case *expr.Outer:
			return outer[x.Index]
		}
		return e
	})
}

// groupedJoins puts a join with groups under a node for each of its scalar
// queries that is an aggregate of tied rows.
func groupedJoins(n Node) Node {
	input := n.Inputs()[0]
	width := len(input.Schema())
	in := input
	known := map[expr.Query]expr.Expr{}
	replaced := mapExprs(n, func(e expr.Expr) expr.Expr {
		return expr.Rewrite(e, func(e expr.Expr) expr.Expr {
			s, ok := e.(*expr.Subquery)
			if !ok || s.Kind != expr.ScalarQuery || len(s.Outer) == 0 {
				return e
			}
			if known[s.Query] != nil {
				return known[s.Query]
			}
			g, ok := groupsOf(s, len(in.Schema()))
			if !ok {
				return e
			}
			in = &Join{Kind: Left, Left: in, Right: g.rows, LeftKeys: g.left, RightKeys: g.right}
			known[s.Query] = g.value
			return g.value
		})
	})
	if in == input {
		return n
	}
	out := withInputs(replaced, []Node{in})
	if _, filter := n.(*Filter); !filter {
		return out
	}
	p := &Project{Input: out, Fields: input.Schema()}
	p.Exprs = columnsOf(in.Schema())[:width]
	return p
}

// groups is the right side of such a join, with its keys and what the query's
// value is over the joined columns.
type groups struct {
	rows        Node
	left, right []expr.Expr
	value       expr.Expr
}

// groupsOf makes groups of a query of the form aggregate of (rows where columns
// equal values of the row outside). width is the number of columns of the join's
// left side.
func groupsOf(s *expr.Subquery, width int) (groups, bool) {
	q := s.Query.(*Query)
	p, ok := q.Plan.(*Project)
	if !ok || len(p.Exprs) != 1 || canFailHere(q.Plan) || anyFails(s.Outer) || expr.HasOuter(p.Exprs[0]) {
		return groups{}, false
	}
	a, ok := p.Input.(*Aggregate)
	if !ok || len(a.Keys) > 0 {
		return groups{}, false
	}
	f, ok := a.Input.(*Filter)
	if !ok || ReadsOuter(f.Input) || callsReadOuter(a) {
		return groups{}, false
	}
	g := groups{}
	grouped := &Aggregate{Calls: a.Calls}
	schema := f.Input.Schema()
	var rest []expr.Expr
	for _, c := range expr.Conjuncts(f.Cond) {
		if key, value, ok := equalsOuter(c); ok && !value.CanFail() {
			grouped.Keys = append(grouped.Keys, key)
			grouped.Fields = append(grouped.Fields, column.Field{Name: key.String(), Type: key.Type(), Unit: key.Unit()})
			g.left = append(g.left, beside(value, 0, s.Outer))
			continue
		}
		if expr.HasOuter(c) {
			return groups{}, false
		}
		rest = append(rest, c)
	}
	empty, ok := ofNoRows(p.Exprs[0], a)
	if !ok || len(g.left) == 0 || len(schema) == 0 {
		return groups{}, false
	}
	grouped.Fields = append(grouped.Fields, a.Fields...)
	grouped.Input = f.Input
	if len(rest) > 0 {
		grouped.Input = &Filter{Input: f.Input, Cond: expr.AndAll(rest), Clause: f.Clause}
	}
	g.project(grouped, p, s, width, empty)
	return g, true
}

func callsReadOuter(a *Aggregate) bool {
	for _, e := range exprsOf(a) {
		if expr.HasOuter(e) {
			return true
		}
	}
	return false
}

// project gives the groups their columns: keys, value, and TRUE, which is NULL
// only where a left row has no group.
func (g *groups) project(grouped *Aggregate, p *Project, s *expr.Subquery, width int, empty *expr.Literal) {
	keys := len(grouped.Keys)
	out := &Project{Input: grouped}
	add := func(e expr.Expr, f column.Field) {
		out.Exprs, out.Fields = append(out.Exprs, e), append(out.Fields, f)
	}
	for i := range keys {
		add(expr.NewColumn(i, grouped.Fields[i], noPlace), grouped.Fields[i])
		g.right = append(g.right, expr.NewColumn(i, grouped.Fields[i], noPlace))
	}
	value := column.Field{Name: p.Fields[0].Name, Type: s.Type(), Unit: s.Unit()}
	add(expr.Shift(p.Exprs[0], keys), value)
	g.value = expr.NewColumn(width+keys, value, s.Place())
	if !empty.Value.Null {
		there := column.Field{Name: "found", Type: column.Boolean}
		add(expr.NewConst(column.Bool(true), noPlace), there)
		found := expr.NewColumn(width+keys+1, there, noPlace)
		if e, err := expr.NewCase(nil, []expr.When{{Cond: found, Result: g.value}}, empty, s.Place()); err == nil {
			g.value = e
		}
	}
	g.rows = out
}

// ofNoRows is the value of an expression over the aggregates of no rows.
func ofNoRows(e expr.Expr, a *Aggregate) (*expr.Literal, bool) {
	e = expr.Rewrite(e, func(e expr.Expr) expr.Expr {
		c, ok := e.(*expr.Column)
		if !ok {
			return e
		}
		v := column.Value{Type: c.Type(), Null: true, Unit: c.Unit()}
		if a.Calls[c.Index].Fn.Name == "COUNT" {
			v = column.Value{Type: column.Integer, Unit: c.Unit()}
		}
		return expr.NewConst(v, c.Place())
	})
	l, ok := expr.Fold(e).(*expr.Literal)
	return l, ok
}
