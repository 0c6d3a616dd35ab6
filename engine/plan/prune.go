package plan

import (
	"slices"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/problem"
)

// prune drops the columns that nobody reads, down to the scans and to what a
// relation computes. Rows are never dropped with them, and no step but Distinct
// looks at more than what its expressions read. Columns named id stay where
// they are at hand and an expression may fail or be weighted, so that its row
// can be named.
func prune(n Node) (Node, error) {
	out, _ := pruned(n, slices.Repeat([]bool{true}, len(n.Schema())))
	return out, nil
}

// pruned gives a node with at least the needed columns of n, in their order,
// and where each column of n is now, -1 where it is gone.
func pruned(n Node, need []bool) (Node, []int) {
	switch n := n.(type) {
	case *Values:
		return prunedValues(n, need)
	case *Scan:
		return prunedScan(n, need)
	case *Relation:
		return prunedRelation(n, need)
	case *Filter:
		need = slices.Clone(need)
		mark(need, n.Schema(), n.Cond)
		in, to := pruned(n.Input, need)
		return &Filter{in, expr.Remap(n.Cond, to), n.Clause}, to
	case *Project:
		return prunedProject(n, need)
	case *Aggregate:
		return prunedAggregate(n, need)
	case *Join:
		return prunedJoin(n, need)
	case *Interpolate:
		return prunedInterpolate(n, need)
	case *Sort:
		need = slices.Clone(need)
		for _, k := range n.Keys {
			mark(need, n.Schema(), k.Expr)
		}
		in, to := pruned(n.Input, need)
		return &Sort{in, remapKeys(n.Keys, to), n.Top}, to
	case *Window:
		return prunedWindow(n, need)
	case *Limit:
		in, to := pruned(n.Input, need)
		return &Limit{in, n.Count, n.Offset}, to
	case *Distinct:
		in, to := pruned(n.Input, slices.Repeat([]bool{true}, len(need)))
		return &Distinct{in}, to
	case *Number:
		last := len(need) - 1
		in, to := pruned(n.Input, need[:last:last])
		return &Number{in, n.Field}, append(slices.Clone(to), len(in.Schema()))
	case *Union:
		return prunedUnion(n, need)
	case *Matched:
		c := *n
		all := slices.Repeat([]bool{true}, len(need))
		c.Left, c.Right = exactlyAll(n.Left, all), exactlyAll(n.Right, all)
		return &c, numbered(all)
	}
	return n, numbered(slices.Repeat([]bool{true}, len(need)))
}

// exactlyAll is a node pruned inside, with all its columns.
func exactlyAll(n Node, all []bool) Node {
	in, to := pruned(n, all)
	return exactly(in, to, all)
}

// numbered gives the needed columns their numbers, in order.
func numbered(need []bool) []int {
	to := make([]int, len(need))
	next := 0
	for i, keep := range need {
		to[i] = -1
		if keep {
			to[i] = next
			next++
		}
	}
	return to
}

// kept is the elements of list that are needed.
func kept[T any](list []T, need []bool) []T {
	var out []T
	for i, keep := range need {
		if keep {
			out = append(out, list[i])
		}
	}
	return out
}

// mark needs the columns that e reads, and the id where e may fail.
func mark(need []bool, schema column.Schema, e expr.Expr) {
	if e == nil {
		return
	}
	expr.Columns(e, need)
	if e.CanFail() {
		markID(need, schema)
	}
}

func markID(need []bool, schema column.Schema) {
	if id := idColumn(schema); id >= 0 {
		need[id] = true
	}
}

func remapAll(list []expr.Expr, to []int) []expr.Expr {
	return mapList(list, func(e expr.Expr) expr.Expr { return expr.Remap(e, to) })
}

func remapKeys(keys []SortKey, to []int) []SortKey {
	return mapKeys(keys, func(e expr.Expr) expr.Expr { return expr.Remap(e, to) })
}

func prunedValues(n *Values, need []bool) (Node, []int) {
	c := &Values{Fields: kept(n.Fields, need), Rows: make([][]expr.Expr, len(n.Rows))}
	for i, row := range n.Rows {
		c.Rows[i] = kept(row, need)
	}
	return c, numbered(need)
}

func prunedScan(n *Scan, need []bool) (Node, []int) {
	c := *n
	c.Use, c.Fields = kept(n.Use, need), kept(n.Fields, need)
	return &c, numbered(need)
}

func prunedProject(n *Project, need []bool) (Node, []int) {
	c := *n
	c.Exprs, c.Fields = kept(n.Exprs, need), kept(n.Fields, need)
	schema := n.Input.Schema()
	below := make([]bool, len(schema))
	for _, e := range c.Exprs {
		mark(below, schema, e)
	}
	in, to := pruned(n.Input, below)
	c.Input, c.Exprs = in, remapAll(c.Exprs, to)
	return &c, numbered(need)
}

func prunedAggregate(n *Aggregate, need []bool) (Node, []int) {
	need = slices.Clone(need)
	for i := range n.Keys {
		need[i] = true // the keys make the groups
	}
	c := *n
	c.Fields = kept(n.Fields, need)
	c.Calls = slices.Clone(kept(n.Calls, need[len(n.Keys):]))
	schema := n.Input.Schema()
	below := make([]bool, len(schema))
	for _, k := range c.Keys {
		mark(below, schema, k)
	}
	for i := range c.Calls {
		markCall(below, schema, &c.Calls[i])
	}
	for _, s := range CellSums(&c) {
		for _, at := range s.Identity {
			below[at] = true
		}
	}
	for _, u := range Uncertainties(&c) {
		u.mark(below, schema)
	}
	in, to := pruned(n.Input, below)
	c.Input, c.Keys = in, remapAll(n.Keys, to)
	for i := range c.Calls {
		call := &c.Calls[i]
		call.Args = remapAll(call.Args, to)
		call.Filter, call.Weight = expr.Remap(call.Filter, to), expr.Remap(call.Weight, to)
		call.OrderBy = remapKeys(call.OrderBy, to)
	}
	return &c, numbered(need)
}

func markCall(below []bool, schema column.Schema, c *Call) {
	for _, a := range c.Args {
		mark(below, schema, a)
	}
	mark(below, schema, c.Filter)
	mark(below, schema, c.Weight)
	for _, k := range c.OrderBy {
		mark(below, schema, k.Expr)
	}
	if c.Weight != nil {
		markID(below, schema) // of the largest weight, and of one that is none
	}
}

func prunedJoin(n *Join, need []bool) (Node, []int) {
	split := len(n.Left.Schema())
	both := make([]bool, len(n.Both()))
	copy(both, need)
	mark(both, n.Both(), n.Rest)
	mark(both, n.Both(), n.Whole)
	left, right := both[:split], both[split:]
	for i := range n.LeftKeys {
		mark(left, n.Left.Schema(), n.LeftKeys[i])
		mark(right, n.Right.Schema(), n.RightKeys[i])
	}
	c := *n
	var toLeft, toRight []int
	c.Left, toLeft = pruned(n.Left, left)
	c.Right, toRight = pruned(n.Right, right)
	c.LeftKeys, c.RightKeys = remapAll(n.LeftKeys, toLeft), remapAll(n.RightKeys, toRight)
	to := slices.Clone(toLeft)
	shift := len(c.Left.Schema())
	for _, t := range toRight {
		if t >= 0 {
			t += shift
		}
		to = append(to, t)
	}
	c.Rest, c.Whole = expr.Remap(n.Rest, to), expr.Remap(n.Whole, to)
	return &c, to[:len(need)]
}

// prunedUnion brings all parts to the same columns, which they may have pruned
// to in different ways.
func prunedUnion(n *Union, need []bool) (Node, []int) {
	c := &Union{Parts: make([]Node, len(n.Parts)), Fields: kept(n.Fields, need)}
	for i, p := range n.Parts {
		in, to := pruned(p, need)
		c.Parts[i] = exactly(in, to, need)
	}
	return c, numbered(need)
}

// exactly is a node with just the needed columns.
func exactly(n Node, to []int, need []bool) Node {
	schema := n.Schema()
	want := kept(to, need)
	if len(want) == len(schema) && slices.IsSorted(want) {
		return n
	}
	p := &Project{Input: n}
	for _, c := range want {
		p.Exprs = append(p.Exprs, expr.NewColumn(c, schema[c], problem.Place{}))
		p.Fields = append(p.Fields, schema[c])
	}
	return p
}

// prunedRelation asks the relation for the needed columns alone, and its input
// for what these, the partition and the choice of sites rest on. Sites' own
// columns that nobody needs leave the relation's columns; computed ones keep
// their place and are only marked.
func prunedRelation(n *Relation, need []bool) (Node, []int) {
	b := n.Bound
	below := make([]bool, len(b.Input))
	for _, c := range b.Reads() {
		below[c] = true
	}
	mark(below, b.Input, n.Wanted)
	own := 0
	if b.Def.Own {
		own = len(b.Input) // column i of the relation is column i of the input
	}
	for i, c := range b.Columns {
		switch {
		case !need[i]:
		case i < own:
			below[i] = true
		case c.Site >= 0:
			below[c.Site] = true
		case c.From > 0:
			below[c.From-1] = true
		}
	}
	in, to := pruned(n.Input, below)
	stay := slices.Repeat([]bool{true}, len(need))
	for i, t := range to[:own] {
		stay[i] = t >= 0 // own columns are those of the input, one by one
	}
	c := *n
	c.Bound = b.Pruned(to)
	c.Bound.Columns = kept(c.Bound.Columns, stay)
	c.Input, c.Need = in, kept(need, stay)
	c.Wanted = expr.Remap(n.Wanted, to)
	c.Beside = make([]Node, len(n.Beside))
	for i, in := range n.Beside {
		c.Beside[i] = exactlyAll(in, slices.Repeat([]bool{true}, len(in.Schema())))
	}
	return &c, numbered(stay)
}
