package plan

import (
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/relation"
)

// Query is a query inside an expression. Its plan reads the row outside by
// expr.Outer; For computes it for one such row. A query of EXISTS has a plan that
// gives at most one row, that of a scalar query gives two where it is one too many.
type Query struct {
	Plan Node
}

// Field is the first column; of EXISTS there may be none.
func (q *Query) Field() column.Field {
	if s := q.Plan.Schema(); len(s) > 0 {
		return s[0]
	}
	return column.Field{}
}

// CanFail reports whether the plan may raise an error.
func (q *Query) CanFail() bool { return canFail(q.Plan) }

// OneRow reports whether the plan never gives more than one row.
func (q *Query) OneRow() bool { return oneRow(q.Plan) }

// Same reports whether two queries are the same.
func (q *Query) Same(other expr.Query) bool {
	o, ok := other.(*Query)
	return ok && (q == o || Equal(q.Plan, o.Plan))
}

// String names what the query reads.
func (q *Query) String() string {
	var names []string
	Everywhere(q.Plan, func(n Node) {
		switch n := n.(type) {
		case *Scan:
			names = append(names, n.Name)
		case *Relation:
			names = append(names, n.Bound.Title())
		}
	})
	if len(names) == 0 {
		return "(query)"
	}
	return "(query of " + strings.Join(compact(names), ", ") + ")"
}

// compact drops names that stand there already.
func compact(names []string) []string {
	var out []string
	seen := map[string]bool{}
	for _, n := range names {
		if !seen[n] {
			seen[n] = true
			out = append(out, n)
		}
	}
	return out
}

// For is the plan of a query for one row outside, whose values are given, with
// the common parts that were made for this row.
func (q *Query) For(outer []column.Value) (Node, []*Common) {
	if len(outer) == 0 {
		return q.Plan, nil
	}
	consts := make([]expr.Expr, len(outer))
	give := func(e expr.Expr) expr.Expr {
		o, ok := e.(*expr.Outer)
		if !ok {
			return e
		}
		if consts[o.Index] == nil {
			v := outer[o.Index]
			v.Type, v.Unit = o.Type(), o.Unit()
			consts[o.Index] = expr.NewConst(v, o.Place())
		}
		return consts[o.Index]
	}
	commons := map[*Common]*Common{}
	n := substitute(q.Plan, give, commons)
	var fresh []*Common
	for _, c := range commons {
		fresh = append(fresh, c)
	}
	return n, fresh
}

// substitute gives constants in the place of Outer. What does not read the row
// outside stays the same node. A common part that does read it becomes another
// one.
func substitute(n Node, give func(expr.Expr) expr.Expr, commons map[*Common]*Common) Node {
	if !ReadsOuter(n) {
		return n
	}
	if s, ok := n.(*Shared); ok {
		c := commons[s.Common]
		if c == nil {
			c = &Common{Name: s.Common.Name, Plan: substitute(s.Common.Plan, give, commons)}
			commons[s.Common] = c
		}
		return &Shared{Common: c, Fields: s.Fields}
	}
	in := n.Inputs()
	if len(in) > 0 {
		out := make([]Node, len(in))
		for i, child := range in {
			out[i] = substitute(child, give, commons)
		}
		n = withInputs(n, out)
	}
	return mapExprs(n, func(e expr.Expr) expr.Expr { return expr.Rewrite(e, give) })
}

// ReadsOuter reports whether a plan reads the row outside of the query that it
// belongs to.
func ReadsOuter(n Node) bool {
	found := false
	for _, e := range exprsOf(n) {
		found = found || expr.HasOuter(e)
	}
	if s, ok := n.(*Shared); ok && !found {
		return ReadsOuter(s.Common.Plan)
	}
	for _, in := range n.Inputs() {
		found = found || ReadsOuter(in)
	}
	return found
}

// Everywhere visits the nodes of a plan, those of common parts (once each) and
// those of the queries in its expressions.
func Everywhere(n Node, visit func(Node)) { everywhere(n, visit, map[*Common]bool{}) }

func everywhere(n Node, visit func(Node), seen map[*Common]bool) {
	visit(n)
	for _, e := range exprsOf(n) {
		expr.Walk(e, func(e expr.Expr) {
			if s, ok := e.(*expr.Subquery); ok {
				everywhere(s.Query.(*Query).Plan, visit, seen)
			}
		})
	}
	if c := CommonOf(n); c != nil && !seen[c] {
		seen[c] = true
		everywhere(c.Plan, visit, seen)
	}
	for _, in := range n.Inputs() {
		everywhere(in, visit, seen)
	}
}

// exprsOf lists the expressions of a node itself.
func exprsOf(n Node) []expr.Expr {
	var list []expr.Expr
	add := func(e expr.Expr) expr.Expr {
		list = append(list, e)
		return e
	}
	switch n.(type) {
	case *Values, *Relation, *Filter, *Project, *Aggregate, *Join, *Interpolate, *Sort, *Window, *Lookup, *Nearest:
		mapExprs(n, add)
	}
	return list
}

// canFail reports whether computing a plan may raise an error.
func canFail(n Node) bool {
	fails := false
	Everywhere(n, func(n Node) {
		for _, e := range exprsOf(n) {
			fails = fails || e.CanFail()
		}
		switch n := n.(type) {
		case *Relation:
			fails = true
		case *Window:
			fails = fails || windowFails(n)
		case *Aggregate:
			for i := range n.Calls {
				fails = fails || callFails(&n.Calls[i])
			}
		}
	})
	return fails
}

// callFails reports whether an aggregate may have no value for some rows: sums
// may leave their type, infinities of both signs have no mean, a weight may be
// none.
func callFails(c *Call) bool {
	if c.Weight != nil {
		return true
	}
	switch c.Fn.Name {
	case "COUNT", "MIN", "MAX", "FIRST", "LAST", "SHARE":
		return false
	case "AVG":
		return c.Args[0].Type() != column.Integer
	}
	return true
}

// oneRow reports whether a plan never gives more than one row.
func oneRow(n Node) bool {
	switch n := n.(type) {
	case *One:
		return true
	case *Values:
		return len(n.Rows) <= 1
	case *Aggregate:
		return len(n.Keys) == 0
	case *Limit:
		return n.Count == 0 || n.Count == 1 || oneRow(n.Input)
	case *Project, *Filter, *Sort, *Window, *Distinct, *Interpolate:
		return oneRow(n.Inputs()[0])
	case *Join:
		return (n.Kind == Semi || n.Kind == Anti || oneRow(n.Right)) && oneRow(n.Left)
	case *Shared:
		return oneRow(n.Common.Plan)
	}
	return false
}

// Equal reports whether two plans compute the same in the same way.
func Equal(a, b Node) bool {
	if a == b {
		return true
	}
	if !sameStep(a, b) || !sameExprs(exprsOf(a), exprsOf(b)) {
		return false
	}
	x, y := a.Inputs(), b.Inputs()
	if len(x) != len(y) {
		return false
	}
	for i := range x {
		if !Equal(x[i], y[i]) {
			return false
		}
	}
	return true
}

func sameExprs(a, b []expr.Expr) bool {
	if len(a) != len(b) {
		return false
	}
	for i := range a {
		if !expr.Equal(a[i], b[i]) {
			return false
		}
	}
	return true
}

// sameStep compares what two nodes are beside their inputs and expressions.
func sameStep(a, b Node) bool {
	switch a := a.(type) {
	case *One:
		_, ok := b.(*One)
		return ok
	case *Values:
		b, ok := b.(*Values)
		return ok && len(a.Rows) == len(b.Rows)
	case *Scan:
		b, ok := b.(*Scan)
		return ok && a.Table == b.Table && same(a.Use, b.Use)
	case *Filter:
		_, ok := b.(*Filter)
		return ok
	case *Project:
		_, ok := b.(*Project)
		return ok
	case *Distinct:
		_, ok := b.(*Distinct)
		return ok
	case *Number:
		_, ok := b.(*Number)
		return ok
	case *Aggregate:
		b, ok := b.(*Aggregate)
		return ok && len(a.Keys) == len(b.Keys) && sameCalls(a.Calls, b.Calls)
	case *Join:
		b, ok := b.(*Join)
		return ok && a.Kind == b.Kind && len(a.LeftKeys) == len(b.LeftKeys) && (a.Near == nil) == (b.Near == nil)
	case *Interpolate:
		b, ok := b.(*Interpolate)
		return ok && a.Outside == b.Outside && len(a.LeftKeys) == len(b.LeftKeys)
	case *Sort:
		b, ok := b.(*Sort)
		return ok && a.Top == b.Top && sameKeys(a.Keys, b.Keys)
	case *Window:
		b, ok := b.(*Window)
		return ok && sameWindow(a, b)
	case *Limit:
		b, ok := b.(*Limit)
		return ok && a.Count == b.Count && a.Offset == b.Offset
	case *Union:
		_, ok := b.(*Union)
		return ok
	case *Matched:
		b, ok := b.(*Matched)
		return ok && a.Kind == b.Kind && a.All == b.All
	case *Shared:
		b, ok := b.(*Shared)
		return ok && a.Common == b.Common
	case *Relation:
		b, ok := b.(*Relation)
		return ok && a.Most == b.Most && sameRelation(a.Bound, b.Bound)
	}
	return false
}

// sameRelation knows only what it can tell for sure.
func sameRelation(a, b *relation.Bound) bool { return a == b }

func same(a, b []int) bool {
	if len(a) != len(b) {
		return false
	}
	for i := range a {
		if a[i] != b[i] {
			return false
		}
	}
	return true
}

func sameCalls(a, b []Call) bool {
	if len(a) != len(b) {
		return false
	}
	for i := range a {
		x, y := &a[i], &b[i]
		if x.Fn != y.Fn || x.Distinct != y.Distinct || len(x.Args) != len(y.Args) || (x.Filter == nil) != (y.Filter == nil) ||
			(x.Weight == nil) != (y.Weight == nil) || !sameKeys(x.OrderBy, y.OrderBy) {
			return false
		}
	}
	return true
}

func sameKeys(a, b []SortKey) bool {
	if len(a) != len(b) {
		return false
	}
	for i := range a {
		if a[i].Descending != b[i].Descending || a[i].NullsFirst != b[i].NullsFirst {
			return false
		}
	}
	return true
}
