package plan

import (
	"fmt"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
)

// Nearest is the rows of a common part that can be among the Most nearest to At of
// those for which Keep holds, in the order of the part: all rows that are as near as the
// last of them, and a few more where rounding could hide one. Where there are fewer, where
// At is NULL or has no place, or where a row has none, it is all rows for which Keep
// holds. It decides no order: the step above does, as it would over all rows.
type Nearest struct {
	Common *Common
	Fields column.Schema
	Point  expr.Expr // a POINT over the columns of the part
	At     expr.Expr // a POINT that reads no column
	Keep   expr.Expr // over the columns; it may read the row outside, nil: all rows
	Most   int64
}

// Schema is the columns of the common part.
func (n *Nearest) Schema() column.Schema { return n.Fields }

// Inputs is empty: a common part is no input.
func (n *Nearest) Inputs() []Node { return nil }

func nearestLine(n *Nearest) string {
	line := fmt.Sprintf("nearest-site search: %d of %s by DISTANCE(%s, %s)", n.Most, n.Common.Name, n.Point, n.At)
	if n.Keep != nil {
		line += fmt.Sprintf(", where %s", n.Keep)
	}
	return line
}

// nearest finds by a k-d tree the rows of a stored table that ORDER BY DISTANCE(…)
// LIMIT k can take. Those of queries that depend on the row outside hoist finds.
//
// Safe: the sort above sees all rows that can be among its first ones, in their order,
// and sorts them as it did. What is computed below the sort, the distances of rows that
// are far away, and conditions on them, are not computed any more: that can only spare an
// error. Where a condition fails for a row that is near, all rows are looked at, and the
// one that is at fault comes out as ever.
func nearest(n Node) (Node, error) {
	return rewrite(n, func(n Node) (Node, error) {
		s, ok := n.(*Sort)
		if !ok {
			return n, nil
		}
		out, _ := nearestFirst(s, func(base Node) bool {
			_, stored := base.(*Scan)
			return stored
		})
		return out, nil
	})
}

// nearestFirst gives a sort by distance that takes its first rows alone those that
// can be among them; from says of which nodes.
func nearestFirst(s *Sort, from func(Node) bool) (Node, bool) {
	if s.Top <= 0 || len(s.Keys) == 0 || s.Keys[0].Descending || s.Keys[0].NullsFirst {
		return s, false
	}
	in, ok := nearestRows(s.Input, s.Keys[0].Expr, s.Top, from)
	if !ok {
		return s, false
	}
	c := *s
	c.Input = in
	return &c, true
}

// nearestLeast does the same below MIN(DISTANCE(…)).
func nearestLeast(a *Aggregate, from func(Node) bool) (Node, bool) {
	if len(a.Keys) > 0 || len(a.Calls) != 1 {
		return a, false
	}
	call := &a.Calls[0]
	if call.Fn.Name != "MIN" || call.Filter != nil || call.Weight != nil {
		return a, false
	}
	in, ok := nearestRows(a.Input, call.Args[0], 1, from)
	if !ok {
		return a, false
	}
	c := *a
	c.Input = in
	return &c, true
}

// nearestRows puts a Nearest in the place of what filters and projections below n
// read. key is what is ordered by, over the columns of n.
func nearestRows(n Node, key expr.Expr, most int64, from func(Node) bool) (Node, bool) {
	switch n := n.(type) {
	case *Project:
		in, ok := nearestRows(n.Input, computed(key, n), most, from)
		if !ok {
			return n, false
		}
		c := *n
		c.Input = in
		return &c, true
	case *Filter:
		if expr.HasQuery(n.Cond) {
			return n, false
		}
		return nearestIn(n.Input, key, n.Cond, most, from)
	}
	return nearestIn(n, key, nil, most, from)
}

func nearestIn(base Node, key, keep expr.Expr, most int64, from func(Node) bool) (Node, bool) {
	point, at, ok := distance(key)
	if !ok || !from(base) {
		return nil, false
	}
	near := &Nearest{Fields: base.Schema(), Point: point, At: at, Keep: keep, Most: most}
	switch b := base.(type) {
	case *Shared:
		near.Common = b.Common
	case *Scan:
		near.Common = &Common{Name: b.Name, Plan: b}
	default:
		near.Common = &Common{Name: "rows of a query", Plan: base}
	}
	return near, true
}

// distance takes a DISTANCE apart into the point that reads columns and the one that
// reads none.
func distance(e expr.Expr) (point, at expr.Expr, ok bool) {
	call, is := e.(*expr.Call)
	if !is || call.Fn.Name != "DISTANCE" || expr.HasQuery(e) {
		return nil, nil, false
	}
	point, at = call.Args[0], call.Args[1]
	if !readsColumns(point) {
		point, at = at, point
	}
	ok = readsColumns(point) && !readsColumns(at) && !expr.HasOuter(point) && !point.CanFail()
	return point, at, ok
}

// computed is an expression over the columns of a Project over those of its input.
func computed(e expr.Expr, p *Project) expr.Expr {
	return expr.Rewrite(e, func(e expr.Expr) expr.Expr {
		if c, ok := e.(*expr.Column); ok {
			return p.Exprs[c.Index]
		}
		return e
	})
}
