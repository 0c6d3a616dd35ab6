package plantest

import (
	"fmt"
	"math/rand/v2"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/plan"
)

// Scan reads all columns of a table.
func Scan(t *column.Table) *plan.Scan {
	use := make([]int, len(t.Schema))
	for i := range use {
		use[i] = i
	}
	return &plan.Scan{Name: "x", Kind: "table", Table: t, Use: use, Fields: t.Schema}
}

// Plan is a random plan of about so many steps over tables of up to rows rows.
func Plan(rng *rand.Rand, depth, rows int) plan.Node {
	if depth == 0 {
		return leaf(rng, rows)
	}
	in := func() plan.Node { return Plan(rng, depth-1, rows) }
	switch rng.IntN(11) {
	case 0, 1, 2:
		n := in()
		return &plan.Filter{Input: n, Cond: Condition(rng, n.Schema(), 2), Clause: "WHERE"}
	case 3, 4:
		return project(rng, in())
	case 5:
		return Join(rng, in(), Plan(rng, rng.IntN(depth), rows))
	case 6:
		return Aggregate(rng, in())
	case 7:
		n := in()
		return &plan.Sort{Input: n, Keys: sortKeys(rng, n.Schema())}
	case 8:
		n := in()
		if rng.IntN(2) == 0 {
			n = &plan.Sort{Input: n, Keys: sortKeys(rng, n.Schema())}
		}
		l := &plan.Limit{Input: n, Count: int64(rng.IntN(12)) - 1, Offset: int64(rng.IntN(4))}
		return l
	case 9:
		if rng.IntN(2) == 0 {
			return &plan.Distinct{Input: project(rng, in())}
		}
		n := in()
		other := &plan.Filter{Input: n, Cond: Condition(rng, n.Schema(), 1), Clause: "WHERE"}
		if rng.IntN(2) == 0 {
			return &plan.Matched{Kind: plan.MatchedKind(rng.IntN(2)), All: rng.IntN(2) == 0, Left: n, Right: other}
		}
		return &plan.Union{Parts: []plan.Node{n, other}, Fields: n.Schema()}
	}
	return crowd(rng, in())
}

func leaf(rng *rand.Rand, rows int) plan.Node {
	if rng.IntN(6) == 0 {
		n := &plan.Values{Fields: Schema}
		for range rng.IntN(4) {
			row := make([]expr.Expr, len(Schema))
			for i, f := range Schema {
				row[i] = expr.NewConst(Value(rng, f.Type), Nowhere)
			}
			n.Rows = append(n.Rows, row)
		}
		return n
	}
	return Scan(Table(rng, rng.IntN(rows+1)))
}

func project(rng *rand.Rand, n plan.Node) plan.Node {
	schema := n.Schema()
	p := &plan.Project{Input: n}
	for i := range 1 + rng.IntN(5) {
		e := Scalar(rng, schema, Schema[rng.IntN(len(Schema))].Type, 1)
		if len(schema) > 0 && rng.IntN(3) > 0 {
			e = Column(schema, rng.IntN(len(schema)))
		}
		name := fmt.Sprintf("c%d", i)
		if c, ok := expr.AsColumn(e); ok {
			name = schema[c].Name
		}
		p.Exprs = append(p.Exprs, e)
		p.Fields = append(p.Fields, column.Field{Name: name, Type: e.Type(), Unit: e.Unit()})
	}
	return p
}

// Join is a random join: of equalities, other conditions, both or neither.
func Join(rng *rand.Rand, left, right plan.Node) *plan.Join {
	j := &plan.Join{Kind: plan.JoinKind(rng.IntN(4)), Left: left, Right: right}
	var conds []expr.Expr
	for range rng.IntN(3) {
		if len(left.Schema()) > 0 && len(right.Schema()) > 0 {
			conds = append(conds, Equality(rng, left.Schema(), right.Schema()))
		}
	}
	for range rng.IntN(2) {
		conds = append(conds, Condition(rng, j.Both(), 1))
	}
	j.Rest = expr.AndAll(conds)
	return j
}

func sortKeys(rng *rand.Rand, schema column.Schema) []plan.SortKey {
	var keys []plan.SortKey
	for range 1 + rng.IntN(2) {
		e := Scalar(rng, schema, Schema[rng.IntN(len(Schema))].Type, 0)
		keys = append(keys, plan.SortKey{Expr: e, Descending: rng.IntN(2) == 0, NullsFirst: rng.IntN(3) == 0})
	}
	return keys
}

// Aggregate groups by up to two random keys and computes random aggregates.
func Aggregate(rng *rand.Rand, n plan.Node) *plan.Aggregate {
	schema := n.Schema()
	a := &plan.Aggregate{Input: n}
	for i := range rng.IntN(3) {
		e := Scalar(rng, schema, Schema[rng.IntN(len(Schema))].Type, 0)
		a.Keys = append(a.Keys, e)
		a.Fields = append(a.Fields, column.Field{Name: fmt.Sprintf("k%d", i), Type: e.Type()})
	}
	for i := range 1 + rng.IntN(3) {
		c := call(rng, schema)
		a.Calls = append(a.Calls, c)
		t := column.Integer
		if c.Fn.Name != "COUNT" {
			t = c.Args[0].Type()
		}
		a.Fields = append(a.Fields, column.Field{Name: fmt.Sprintf("a%d", i), Type: t})
	}
	return a
}

func call(rng *rand.Rand, schema column.Schema) plan.Call {
	names := []string{"COUNT", "COUNT", "SUM", "MIN", "MAX", "FIRST", "LAST"}
	c := plan.Call{Fn: function.LookupAggregate(names[rng.IntN(len(names))]), Place: Nowhere}
	c.Text = c.Fn.Name + "(…)"
	types := []column.Type{column.Integer, column.Real}
	if c.Fn.Name != "SUM" {
		types = append(types, column.Text, column.Timestamp)
	}
	if c.Fn.Name != "COUNT" || rng.IntN(2) == 0 {
		c.Args = []expr.Expr{Scalar(rng, schema, types[rng.IntN(len(types))], 1)}
	}
	if c.Fn.Ordered {
		c.OrderBy = []plan.SortKey{{Expr: Scalar(rng, schema, column.Integer, 0), Descending: rng.IntN(2) == 0}}
	} else if len(c.Args) > 0 {
		c.Distinct = rng.IntN(3) == 0
	}
	if rng.IntN(3) == 0 {
		c.Filter = Condition(rng, schema, 1)
	}
	return c
}

// crowd is the relation Crowd over n, if it has a text to identify its rows.
func crowd(rng *rand.Rand, n plan.Node) plan.Node {
	schema := n.Schema()
	ids := ofType(schema, column.Text)
	if len(ids) == 0 {
		return n
	}
	each := -1
	if times := ofType(schema, column.Timestamp); len(times) > 0 && rng.IntN(2) == 0 {
		each = times[rng.IntN(len(times))]
	}
	return &plan.Relation{Bound: Bound(schema, ids[rng.IntN(len(ids))], rng.IntN(len(schema)), each), Input: n}
}
