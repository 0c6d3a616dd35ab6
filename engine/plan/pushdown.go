package plan

import (
	"slices"

	"nearcell/engine/expr"
)

// condition is one part of an AND on its way down, with the clause that the
// user wrote it in.
type condition struct {
	e      expr.Expr
	clause string
}

// pushDown splits conditions and moves each part as near to the rows as it may
// go. Only parts that cannot fail move: a part that can would meet rows that a
// step above would have taken out before. Those that stay see fewer rows than
// they did, never more.
func pushDown(n Node) (Node, error) { return push(n, nil), nil }

// push gives a node with the rows of n for which all conditions hold, in their
// order. No condition can fail; their columns are those of n.
func push(n Node, conds []condition) Node {
	switch n := n.(type) {
	case *Filter:
		return pushFilter(n, conds)
	case *Project:
		return pushProject(n, conds)
	case *Join:
		return pushJoin(n, conds)
	case *Interpolate:
		return pushInterpolate(n, conds)
	case *Relation:
		return pushRelation(n, conds)
	case *Sort:
		if n.Top == 0 { // else it counts the rows
			c := *n
			c.Input = push(n.Input, conds)
			return &c
		}
	case *Window:
		return pushWindow(n, conds)
	case *Union:
		c := *n
		c.Parts = make([]Node, len(n.Parts))
		for i, p := range n.Parts {
			c.Parts[i] = push(p, conds)
		}
		return &c
	}
	in := n.Inputs()
	if len(in) > 0 {
		out := make([]Node, len(in))
		for i, child := range in {
			out[i] = push(child, nil)
		}
		n = withInputs(n, out)
	}
	return filtered(n, conds)
}

// filtered puts conditions over a node, those of one clause in one filter.
func filtered(n Node, conds []condition) Node {
	for len(conds) > 0 {
		clause := conds[0].clause
		var same, queries []expr.Expr
		var others []condition
		for _, c := range conds {
			switch {
			case c.clause != clause:
				others = append(others, c)
			case expr.HasQuery(c.e):
				queries = append(queries, c.e) // last, for fewer rows
			default:
				same = append(same, c.e)
			}
		}
		n = &Filter{Input: n, Cond: expr.AndAll(append(same, queries...)), Clause: clause}
		conds = others
	}
	return n
}

// pushFilter sends on what cannot fail and keeps the rest above it: what
// guarded it before guards it still.
func pushFilter(n *Filter, conds []condition) Node {
	var down []condition
	var stay []expr.Expr
	for _, e := range expr.Conjuncts(n.Cond) {
		// what reads the row outside of a query stays above what does not: that
		// is computed once for all of these rows
		if e.CanFail() || expr.HasOuter(e) {
			stay = append(stay, e)
		} else {
			down = append(down, condition{e, n.Clause})
		}
	}
	out := push(n.Input, append(down, conds...))
	if len(stay) > 0 {
		out = &Filter{Input: out, Cond: expr.AndAll(stay), Clause: n.Clause}
	}
	return out
}

// pushProject moves the conditions whose columns are only handed through.
func pushProject(n *Project, conds []condition) Node {
	to := make([]int, len(n.Exprs))
	for i, e := range n.Exprs {
		to[i] = -1
		if c, ok := expr.AsColumn(e); ok {
			to[i] = c
		}
	}
	down, stay := split(conds, to)
	c := *n
	c.Input = push(n.Input, down)
	return filtered(&c, stay)
}

// split parts the conditions into those whose columns all have a place to go,
// with their new columns, and the others.
func split(conds []condition, to []int) (down, stay []condition) {
	for _, c := range conds {
		if readsOnly(c.e, to) {
			down = append(down, condition{expr.Remap(c.e, to), c.clause})
		} else {
			stay = append(stay, c)
		}
	}
	return down, stay
}

// readsOnly reports whether e reads columns and all of them have a place in to.
func readsOnly(e expr.Expr, to []int) bool {
	used := make([]bool, len(to))
	expr.Columns(e, used)
	any := false
	for c, u := range used {
		if u && to[c] < 0 {
			return false
		}
		any = any || u
	}
	return any
}

// pushJoin moves conditions into the sides. An inner join has no other rows
// than those for which its condition holds, so that a condition from above
// joins it. A left join shows each left row whatever its condition says: only
// what speaks of the left side alone may go there from above, and of the join's
// own condition only what speaks of the right side alone may go there.
func pushJoin(n *Join, conds []condition) Node {
	c := *n
	left, right := len(n.Left.Schema()), len(n.Right.Schema())
	toLeft, toRight := sides(left, right)
	var own, stay []condition
	c.Rest = nil
	if n.Rest != nil {
		var rest []expr.Expr
		for _, e := range expr.Conjuncts(n.Rest) {
			switch {
			case e.CanFail():
				rest = append(rest, e)
			case n.Kind == Inner && expr.HasOuter(e):
				stay = append(stay, condition{e, "ON"})
			default:
				own = append(own, condition{e, "ON"})
			}
		}
		c.Rest = expr.AndAll(rest)
	}
	var forLeft, forRight []condition
	if n.Kind == Inner {
		forLeft, own = split(slices.Concat(conds, own), toLeft)
		forRight, own = split(own, toRight)
	} else {
		forLeft, stay = split(conds, toLeft)
		forRight, own = split(own, toRight)
	}
	// what cannot fail stands first and spares the rest some pairs
	var rest []expr.Expr
	for _, o := range own {
		rest = append(rest, o.e)
	}
	if c.Rest != nil {
		rest = append(rest, c.Rest)
	}
	c.Rest = expr.AndAll(rest)
	c.Left, c.Right = push(n.Left, forLeft), push(n.Right, forRight)
	return filtered(&c, stay)
}

// sides are the ways of a join's columns into its left and its right input.
func sides(left, right int) (toLeft, toRight []int) {
	toLeft, toRight = make([]int, left+right), make([]int, left+right)
	for i := range toLeft {
		toLeft[i], toRight[i] = -1, -1
		if i < left {
			toLeft[i] = i
		} else {
			toRight[i] = i - left
		}
	}
	return toLeft, toRight
}

// pushRelation makes conditions on the sites' own columns a matter of which
// sites are shown. They must not go further: all sites of the input partition.
func pushRelation(n *Relation, conds []condition) Node {
	c := *n
	c.Input = push(n.Input, nil)
	c.Beside = make([]Node, len(n.Beside))
	for i, in := range n.Beside {
		c.Beside[i] = push(in, nil)
	}
	to := make([]int, len(n.Bound.Columns))
	for i, col := range n.Bound.Columns {
		to[i] = col.Site
	}
	shown, stay := split(conds, to)
	var wanted []expr.Expr
	if n.Wanted != nil {
		wanted = append(wanted, n.Wanted)
	}
	for _, s := range shown {
		wanted = append(wanted, s.e)
	}
	c.Wanted = expr.AndAll(wanted)
	return filtered(&c, stay)
}
