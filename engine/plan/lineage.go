package plan

import (
	"slices"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// Origin says from which column of which relation a column comes unchanged.
// The zero Origin says that it comes from elsewhere or was computed on the way.
type Origin struct {
	Relation *Relation
	Column   int // of Bound.Columns
}

// Lineage gives the origin of each column of a node: through filters, sorts,
// joins, keys of groups and projections that simply read columns, which views
// and subqueries are made of.
func Lineage(n Node) []Origin {
	switch n := n.(type) {
	case *Relation:
		origins := make([]Origin, len(n.Bound.Columns))
		for i := range origins {
			origins[i] = Origin{n, i}
		}
		return origins
	case *Filter, *Sort, *Limit, *Distinct:
		return Lineage(n.Inputs()[0])
	case *Window:
		return append(slices.Clone(Lineage(n.Input)), make([]Origin, len(n.Calls))...)
	case *Number:
		return append(slices.Clone(Lineage(n.Input)), Origin{})
	case *Shared:
		return Lineage(n.Common.Plan)
	case *Project:
		return through(Lineage(n.Input), n.Exprs, len(n.Exprs))
	case *Aggregate:
		return through(Lineage(n.Input), n.Keys, len(n.Keys)+len(n.Calls))
	case *Interpolate:
		return append(append([]Origin(nil), Lineage(n.Input)...), Origin{}, Origin{})
	case *Join:
		left := append([]Origin(nil), Lineage(n.Left)...)
		if n.Kind == Semi || n.Kind == Anti {
			return left
		}
		return append(left, Lineage(n.Right)...)
	}
	return make([]Origin, len(n.Schema()))
}

// through is the origins of the first columns where they simply read input
// columns; there are n columns.
func through(input []Origin, list []expr.Expr, n int) []Origin {
	origins := make([]Origin, n)
	for i, e := range list {
		if c, ok := expr.AsColumn(e); ok {
			origins[i] = input[c]
		}
	}
	return origins
}

// extensive reports whether the column adds up over the cells of a partition.
func (o Origin) extensive() bool {
	return o.Relation != nil && o.Relation.Bound.Columns[o.Column].Extensive
}

// isEach reports whether the column is one of FOR EACH, or another that is the same in
// all rows of a partition, such as zone.
func (o Origin) isEach() bool {
	if o.Relation == nil {
		return false
	}
	b := o.Relation.Bound
	if b.Columns[o.Column].Role != relation.NoRole {
		return true
	}
	for _, c := range b.Clauses.Each {
		if b.Columns[o.Column].Site == c {
			return true
		}
	}
	return false
}

// reads is the origins of the columns that an expression reads.
func reads(e expr.Expr, input []Origin) []Origin {
	if e == nil {
		return nil
	}
	used := make([]bool, len(input))
	expr.Columns(e, used)
	var origins []Origin
	for c, u := range used {
		if u {
			origins = append(origins, input[c])
		}
	}
	return origins
}

// Removal is a step that may leave out cells whose space an aggregate then
// misses: a *Filter straight above a relation, or a *Relation with Wanted.
// Parted is the part of its condition that speaks of the columns of FOR EACH
// alone: it leaves out whole partitions and tears no hole into one.
type Removal struct {
	Step     Node
	Relation *Relation
	Parted   expr.Expr // over the same columns as the condition, nil: TRUE
}

// Removals are the steps below an aggregate that may leave out cells from its
// weights and sums. Relations whose rows are not sites (contacts) divide no
// space among their rows and have none to lose.
func Removals(n *Aggregate) []Removal {
	input := Lineage(n.Input)
	var found []Removal
	seen := map[*Relation]bool{}
	for i := range n.Calls {
		c := &n.Calls[i]
		used := reads(c.Weight, input)
		if isSum(c) {
			used = append(used, reads(c.Args[0], input)...)
		}
		for _, o := range used {
			if o.extensive() && (o.Relation.Bound.Def.Own || o.Relation.Bound.Def.Pairs) && !seen[o.Relation] {
				seen[o.Relation] = true
				found = append(found, removalsAbove(n.Input, o.Relation)...)
			}
		}
	}
	return found
}

func isSum(c *Call) bool { return c.Fn.Name == "SUM" && len(c.Args) == 1 }

// removalsAbove looks for the filters between n and the relation r. Above a
// join a row is no longer a cell, so only those below every join count.
func removalsAbove(n Node, r *Relation) []Removal {
	switch n := n.(type) {
	case *Relation:
		if n == r && n.Wanted != nil {
			return appendRemoval(nil, n, r, n.Wanted, siteOrigins(n))
		}
		return nil
	case *Interpolate:
		return removalsAbove(n.Input, r)
	case *Join:
		if n.Kind == Semi || n.Kind == Anti {
			return removalsAbove(n.Left, r)
		}
		return append(removalsAbove(n.Left, r), removalsAbove(n.Right, r)...)
	case *Filter:
		found := removalsAbove(n.Input, r)
		if n.Clause == "WHERE" && cellsOf(n.Input) == r {
			found = appendRemoval(found, n, r, n.Cond, Lineage(n.Input))
		}
		return found
	case *Aggregate, *Union, *Matched:
		return nil
	}
	var found []Removal
	for _, in := range n.Inputs() {
		found = append(found, removalsAbove(in, r)...)
	}
	return found
}

// cellsOf is the relation whose rows are those of n, less some.
func cellsOf(n Node) *Relation {
	switch n := n.(type) {
	case *Relation:
		return n
	case *Filter:
		return cellsOf(n.Input)
	case *Project, *Sort, *Window, *Interpolate:
		return cellsOf(n.Inputs()[0])
	}
	return nil
}

// siteOrigins is the lineage of the columns of a relation's input, as far as
// the relation shows them.
func siteOrigins(r *Relation) []Origin {
	origins := make([]Origin, len(r.Bound.Input))
	for i, c := range r.Bound.Columns {
		if c.Site >= 0 {
			origins[c.Site] = Origin{r, i}
		}
	}
	return origins
}

// WholePartitions is the part of the condition on the sites of a relation that leaves out
// whole partitions only; nil: none.
func WholePartitions(r *Relation) expr.Expr {
	if r.Wanted == nil {
		return nil
	}
	parted := wholePartitions(expr.Conjuncts(r.Wanted), siteOrigins(r))
	if parted == nil {
		return nil
	}
	return expr.AndAll(parted)
}

func appendRemoval(found []Removal, step Node, r *Relation, cond expr.Expr, input []Origin) []Removal {
	conds := expr.Conjuncts(cond)
	parted := wholePartitions(conds, input)
	if len(parted) == len(conds) {
		return found
	}
	return append(found, Removal{step, r, expr.AndAll(parted)})
}

// wholePartitions are the conditions that speak of the columns of FOR EACH alone.
func wholePartitions(conds []expr.Expr, input []Origin) []expr.Expr {
	var parted []expr.Expr
next:
	for _, c := range conds {
		used := reads(c, input)
		if c.CanFail() {
			continue
		}
		for _, o := range used {
			if !o.isEach() {
				continue next
			}
		}
		parted = append(parted, c)
	}
	return parted
}

// CellSum is a SUM of measures that would count a cell twice where two rows of
// a group are the same cell.
type CellSum struct {
	Call     int
	Relation *Relation
	// Identity are the columns of the aggregate's input that tell which cell a
	// row is (of whatever partition); nil where they do not reach it.
	Identity []int
}

// CellSums are the sums of an aggregate that may count cells twice: those of
// extensive columns of a relation with FOR EACH or behind a join.
func CellSums(n *Aggregate) []CellSum {
	input := Lineage(n.Input)
	var found []CellSum
	for i := range n.Calls {
		c := &n.Calls[i]
		if !isSum(c) || c.Weight != nil || c.Distinct {
			continue
		}
		if !addsOnly(c.Args[0]) {
			continue
		}
		r := measuresOnly(reads(c.Args[0], input))
		if r == nil || len(r.Bound.Clauses.Each) == 0 && cellsOf(n.Input) == r {
			continue
		}
		found = append(found, CellSum{i, r, identity(r, input)})
	}
	return found
}

// addsOnly reports whether an expression is a column, or columns added up and
// taken off. A factor says that more than space is meant: volume * HOURS(…) over
// the partitions of FOR EACH adds up to cubic metre hours. The bare number 1 says
// nothing.
func addsOnly(e expr.Expr) bool {
	switch e := e.(type) {
	case *expr.Column:
		return true
	case *expr.Neg:
		return addsOnly(e.X)
	case *expr.Arith:
		switch e.Op {
		case lang.Plus, lang.Minus:
			return addsOnly(e.Left) && addsOnly(e.Right)
		case lang.Times:
			return isOne(e.Left) && addsOnly(e.Right) || isOne(e.Right) && addsOnly(e.Left)
		case lang.Divide:
			return isOne(e.Right) && addsOnly(e.Left)
		}
	}
	return false
}

// isOne reports whether an expression is the number 1 without a unit.
func isOne(e expr.Expr) bool {
	v, ok := expr.Const(e)
	return ok && !v.Null && v.Unit == nil && (v.Type == column.Integer && v.I == 1 || v.Type == column.Real && v.F == 1)
}

// measuresOnly is the one relation whose extensive columns, and no others, are
// given.
func measuresOnly(used []Origin) *Relation {
	var r *Relation
	for _, o := range used {
		if !o.extensive() || r != nil && o.Relation != r {
			return nil
		}
		r = o.Relation
	}
	return r
}

// identity finds the columns that tell cells apart: the site's identifier, or
// the two of a contact.
func identity(r *Relation, input []Origin) []int {
	b := r.Bound
	var want []int
	for i, c := range b.Columns {
		if c.Role != relation.NoRole {
			if c.Role == relation.PartRole { // a cell has a row in each part
				want = append(want, i)
			}
		} else if b.Def.Pairs {
			if c.Name == "a" || c.Name == "b" {
				want = append(want, i)
			}
		} else if b.Def.Own {
			if c.Site == b.ID {
				want = append(want, i)
			}
		} else if o := (Origin{r, i}); c.Measures == 0 && c.Power == 0 && !o.extensive() && !o.isEach() {
			want = append(want, i)
		}
	}
	var found []int
	for _, w := range want {
		if c := slices.Index(input, Origin{r, w}); c >= 0 {
			found = append(found, c)
		}
	}
	if len(found) < len(want) || len(want) == 0 {
		return nil
	}
	return found
}

// idColumn is the first column named id, -1 where there is none.
func idColumn(schema column.Schema) int {
	for i, f := range schema {
		if strings.EqualFold(f.Name, "id") {
			return i
		}
	}
	return -1
}
