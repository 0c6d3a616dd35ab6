package bind

import (
	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// grouping collects the keys and the aggregates of one SELECT. Expressions above
// the aggregation refer to its columns: the keys, then the calls.
type grouping struct {
	keys     []expr.Expr // over the columns of FROM
	written  []lang.Expr // the keys as written
	calls    []plan.Call
	fields   []column.Field // of the calls
	implicit bool           // no GROUP BY: one group
}

// key finds an expression among the keys.
func (g *grouping) key(x *exprs, e lang.Expr) (expr.Expr, bool) {
	candidate := false
	for _, w := range g.written {
		candidate = candidate || sameShape(w, e)
	}
	if !candidate {
		return nil, false
	}
	plain := &exprs{binder: x.binder, scope: x.scope, clause: x.clause}
	b, err := plain.bind(e)
	if err != nil {
		return nil, false // said again, with the right words, where e is bound
	}
	for i, k := range g.keys {
		if expr.Equal(k, b) {
			return expr.NewColumn(i, g.keyField(x, i), x.at(e)), true
		}
	}
	return nil, false
}

// sameShape is a cheap test that comes before binding: two expressions that
// bind alike have the same outermost node.
func sameShape(a, b lang.Expr) bool {
	switch a := a.(type) {
	case *lang.Column:
		b, ok := b.(*lang.Column)
		return ok && lang.Fold(a.Name.Text) == lang.Fold(b.Name.Text)
	case *lang.Binary:
		b, ok := b.(*lang.Binary)
		return ok && a.Op == b.Op
	case *lang.Unary:
		b, ok := b.(*lang.Unary)
		return ok && a.Op == b.Op
	case *lang.Call:
		b, ok := b.(*lang.Call)
		return ok && lang.Fold(a.Name.Text) == lang.Fold(b.Name.Text)
	case *lang.Case:
		_, ok := b.(*lang.Case)
		return ok
	case *lang.Cast:
		_, ok := b.(*lang.Cast)
		return ok
	case *lang.Is:
		_, ok := b.(*lang.Is)
		return ok
	case *lang.In:
		_, ok := b.(*lang.In)
		return ok
	case *lang.Quantified:
		b, ok := b.(*lang.Quantified)
		return ok && a.Op == b.Op && a.All == b.All
	case *lang.Between:
		_, ok := b.(*lang.Between)
		return ok
	case *lang.Like:
		_, ok := b.(*lang.Like)
		return ok
	case *lang.Subquery:
		_, ok := b.(*lang.Subquery)
		return ok
	case *lang.Exists:
		_, ok := b.(*lang.Exists)
		return ok
	case *lang.AtTimeZone:
		_, ok := b.(*lang.AtTimeZone)
		return ok
	}
	return false
}

func (g *grouping) keyField(x *exprs, i int) column.Field {
	k := g.keys[i]
	f := column.Field{Name: x.text(g.written[i]), Type: k.Type(), Unit: k.Unit(), System: SystemOf(k)}
	if c, ok := expr.AsColumn(k); ok {
		f.Name, f.Meaning = x.scope.columns[c].Name, x.scope.columns[c].Meaning
	}
	return f
}

// call adds an aggregate, or finds it where it was added before, and gives its
// column.
func (g *grouping) call(x *exprs, c plan.Call, f column.Field) expr.Expr {
	at := -1
	for i := range g.calls {
		if sameCall(&g.calls[i], &c) {
			at = i
		}
	}
	if at < 0 {
		at = len(g.calls)
		g.calls = append(g.calls, c)
		g.fields = append(g.fields, f)
	}
	return expr.NewColumn(len(g.keys)+at, g.fields[at], c.Place)
}

func sameCall(a, b *plan.Call) bool {
	if a.Fn != b.Fn || a.Distinct != b.Distinct || len(a.Args) != len(b.Args) || len(a.OrderBy) != len(b.OrderBy) {
		return false
	}
	for i := range a.Args {
		if !expr.Equal(a.Args[i], b.Args[i]) {
			return false
		}
	}
	for i := range a.OrderBy {
		k, l := a.OrderBy[i], b.OrderBy[i]
		if k.Descending != l.Descending || k.NullsFirst != l.NullsFirst || !expr.Equal(k.Expr, l.Expr) {
			return false
		}
	}
	return sameOptional(a.Filter, b.Filter) && sameOptional(a.Weight, b.Weight)
}

func sameOptional(a, b expr.Expr) bool {
	if a == nil || b == nil {
		return a == nil && b == nil
	}
	return expr.Equal(a, b)
}

// notGrouped refuses a column that has no single value in a group.
func (g *grouping) notGrouped(x *exprs, c *lang.Column, i int) error {
	name := x.scope.columns[i].Name
	p := problem.New("not-grouped", x.at(c), "the column '%s' has many values where %s has one row for each group", name, x.clause)
	take := "MIN(" + name + "), MAX(" + name + ") …"
	if x.scope.columns[i].Type.Numeric() {
		take = "AVG(" + name + "), MAX(" + name + ") …"
	}
	if g.implicit {
		return p.WithHint("an aggregate makes one row of all: write GROUP BY %s, or take %s", name, take)
	}
	return p.WithHint("add it to GROUP BY, or take %s", take)
}

// plan is the aggregation over the rows of FROM and WHERE.
func (g *grouping) plan(x *exprs, input plan.Node) plan.Node {
	fields := make(column.Schema, 0, len(g.keys)+len(g.calls))
	for i := range g.keys {
		fields = append(fields, g.keyField(x, i))
	}
	return &plan.Aggregate{Input: input, Keys: g.keys, Calls: g.calls, Fields: append(fields, g.fields...)}
}

// hasAggregate reports whether an aggregate stands in an expression, not in a
// query inside it.
func hasAggregate(e lang.Expr) bool {
	found := false
	walk(e, func(e lang.Expr) {
		if c, ok := e.(*lang.Call); ok && c.Over == nil && isAggregate(c.Name.Text) {
			found = true
		}
	})
	return found
}
