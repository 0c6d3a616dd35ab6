package exec

import (
	"cmp"
	"context"
	"fmt"
	"math"
	"math/big"
	"slices"
	"sort"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/plan"
	"nearcell/engine/relation"
)

// naive computes a plan row by row with the plainest means: lists of values,
// nested loops, texts as keys. Pipelines are checked against it.
type row = []column.Value

func naive(n plan.Node) ([]row, error) {
	switch n := n.(type) {
	case *plan.One:
		return []row{{}}, nil
	case *plan.Values:
		var rows []row
		for _, r := range n.Rows {
			out, err := naiveAll(r, nil, nil)
			if err != nil {
				return nil, err
			}
			rows = append(rows, out)
		}
		return rows, nil
	case *plan.Scan:
		rows := make([]row, n.Table.N)
		for i := range rows {
			for _, c := range n.Use {
				rows[i] = append(rows[i], n.Table.Cols[c].Value(i))
			}
		}
		return rows, nil
	case *plan.Join:
		return naiveJoin(n)
	case *plan.Matched:
		return naiveMatched(n)
	case *plan.Union:
		var rows []row
		for _, p := range n.Parts {
			part, err := naive(p)
			if err != nil {
				return nil, err
			}
			rows = append(rows, part...)
		}
		return rows, nil
	}
	in, err := naive(n.Inputs()[0])
	if err != nil {
		return nil, err
	}
	schema := n.Inputs()[0].Schema()
	return naiveStep(n, in, schema)
}

// naiveStep computes a node with one input.
func naiveStep(n plan.Node, in []row, schema column.Schema) ([]row, error) {
	switch n := n.(type) {
	case *plan.Relation:
		return naiveRelation(n, in, schema)
	case *plan.Filter:
		var rows []row
		for _, r := range in {
			v, err := naiveEval(n.Cond, schema, r)
			if err != nil {
				return nil, err
			}
			if !v.Null && v.I != 0 {
				rows = append(rows, r)
			}
		}
		return rows, nil
	case *plan.Project:
		var rows []row
		for _, r := range in {
			out, err := naiveAll(n.Exprs, schema, r)
			if err != nil {
				return nil, err
			}
			rows = append(rows, out)
		}
		return rows, nil
	case *plan.Aggregate:
		return naiveAggregate(n, in, schema)
	case *plan.Sort:
		return naiveSort(n, in, schema)
	case *plan.Limit:
		in = in[min(int(n.Offset), len(in)):]
		if n.Count >= 0 {
			in = in[:min(int(n.Count), len(in))]
		}
		return in, nil
	case *plan.Distinct:
		seen := map[string]bool{}
		var rows []row
		for _, r := range in {
			if k := keyText(r); !seen[k] {
				seen[k] = true
				rows = append(rows, r)
			}
		}
		return rows, nil
	}
	return nil, fmt.Errorf("naive: %T", n)
}

func naiveEval(e expr.Expr, schema column.Schema, r row) (column.Value, error) {
	if c, ok := expr.AsColumn(e); ok {
		return r[c], nil
	}
	b := &column.Batch{N: 1}
	used := make([]bool, len(schema))
	expr.Columns(e, used)
	for i, f := range schema {
		if !used[i] {
			b.Cols = append(b.Cols, column.Vector{Type: column.Null, N: 1})
			continue
		}
		builder := column.NewBuilder(f.Type, f.Unit)
		builder.Append(r[i])
		b.Cols = append(b.Cols, builder.Finish())
	}
	v, err := e.Eval(new(expr.Work), b, nil)
	if err != nil {
		return column.Value{}, err
	}
	return v.Value(0), nil
}

func naiveAll(list []expr.Expr, schema column.Schema, r row) (row, error) {
	out := make(row, 0, len(list))
	for _, e := range list {
		v, err := naiveEval(e, schema, r)
		if err != nil {
			return nil, err
		}
		out = append(out, v)
	}
	return out, nil
}

// keyText is a text that equal keys share: -0 is 0, NULL is NULL.
func keyText(r row) string {
	s := ""
	for _, v := range r {
		v.F += 0
		for i := range v.P {
			v.P[i] += 0
		}
		s += fmt.Sprint(v.Null, v.I, v.F, v.P, len(v.S), v.S, ";")
	}
	return s
}

func compareValues(a, b column.Value) int {
	switch a.Type {
	case column.Real:
		return cmp.Compare(a.F, b.F)
	case column.Text:
		return cmp.Compare(a.S, b.S)
	case column.Point:
		return slices.Compare(a.P[:], b.P[:])
	}
	return cmp.Compare(a.I, b.I)
}

func sameNumber(a, b column.Value) bool {
	if a.Type == column.Integer && b.Type == column.Real {
		a, b = b, a
	}
	if a.Type == column.Real && b.Type == column.Integer {
		return float64(b.I) == a.F // the values of tests are small
	}
	return compareValues(a, b) == 0
}

func naiveJoin(n *plan.Join) ([]row, error) {
	left, err := naive(n.Left)
	if err != nil {
		return nil, err
	}
	right, err := naive(n.Right)
	if err != nil {
		return nil, err
	}
	schema := n.Both()
	var rows []row
	for _, l := range left {
		matched := false
		for _, r := range right {
			ok, err := naiveMatch(n, schema, l, r)
			if err != nil {
				return nil, err
			}
			if ok {
				matched = true
				if n.Kind == plan.Inner || n.Kind == plan.Left {
					rows = append(rows, slices.Concat(l, r))
				}
			}
		}
		if n.Kind == plan.Semi && matched || n.Kind == plan.Anti && !matched {
			rows = append(rows, l)
		}
		if !matched && n.Kind == plan.Left {
			joined := slices.Clone(l)
			for _, f := range n.Right.Schema() {
				joined = append(joined, column.NullOf(f.Type))
			}
			rows = append(rows, joined)
		}
	}
	return rows, nil
}

func naiveMatch(n *plan.Join, schema column.Schema, l, r row) (bool, error) {
	for i := range n.LeftKeys {
		a, err := naiveEval(n.LeftKeys[i], n.Left.Schema(), l)
		if err != nil {
			return false, err
		}
		b, err := naiveEval(n.RightKeys[i], n.Right.Schema(), r)
		if err != nil {
			return false, err
		}
		if a.Null || b.Null || !sameNumber(a, b) {
			return false, nil
		}
	}
	if n.Rest == nil {
		return true, nil
	}
	v, err := naiveEval(n.Rest, schema, slices.Concat(l, r))
	return !v.Null && v.I != 0, err
}

func naiveSort(n *plan.Sort, in []row, schema column.Schema) ([]row, error) {
	type keyed struct {
		r    row
		keys row
	}
	list := make([]keyed, len(in))
	for i, r := range in {
		for _, k := range n.Keys {
			v, err := naiveEval(k.Expr, schema, r)
			if err != nil {
				return nil, err
			}
			list[i].keys = append(list[i].keys, v)
		}
		list[i].r = r
	}
	sort.SliceStable(list, func(i, j int) bool {
		for k, key := range n.Keys {
			a, b := list[i].keys[k], list[j].keys[k]
			if a.Null != b.Null {
				return a.Null == key.NullsFirst
			}
			c := 0
			if !a.Null {
				c = compareValues(a, b)
			}
			if key.Descending {
				c = -c
			}
			if c != 0 {
				return c < 0
			}
		}
		return false
	})
	out := make([]row, len(list))
	for i, l := range list {
		out[i] = l.r
	}
	if n.Top > 0 {
		out = out[:min(int(n.Top), len(out))]
	}
	return out, nil
}

func naiveAggregate(n *plan.Aggregate, in []row, schema column.Schema) ([]row, error) {
	type group struct {
		keys row
		rows []row
	}
	groups := map[string]*group{}
	if len(n.Keys) == 0 {
		groups[""] = &group{}
	}
	for _, r := range in {
		keys, err := naiveAll(n.Keys, schema, r)
		if err != nil {
			return nil, err
		}
		g := groups[keyText(keys)]
		if g == nil {
			g = &group{keys: keys}
			groups[keyText(keys)] = g
		}
		g.rows = append(g.rows, r)
	}
	var list []*group
	for _, g := range groups {
		list = append(list, g)
	}
	slices.SortFunc(list, func(a, b *group) int {
		for i := range a.keys {
			x, y := a.keys[i], b.keys[i]
			switch {
			case x.Null && y.Null:
			case x.Null:
				return 1
			case y.Null:
				return -1
			case compareValues(x, y) != 0:
				return compareValues(x, y)
			}
		}
		return 0
	})
	var out []row
	for _, g := range list {
		r := slices.Clone(g.keys)
		for i := range n.Calls {
			v, err := naiveCall(&n.Calls[i], g.rows, schema)
			if err != nil {
				return nil, err
			}
			r = append(r, v)
		}
		out = append(out, r)
	}
	return out, nil
}

func naiveCall(c *plan.Call, rows []row, schema column.Schema) (column.Value, error) {
	var values []column.Value
	seen := map[string]bool{}
	if len(c.OrderBy) > 0 {
		sorted, err := naiveSort(&plan.Sort{Keys: c.OrderBy}, rows, schema)
		if err != nil {
			return column.Value{}, err
		}
		rows = sorted
	}
	for _, r := range rows {
		if c.Filter != nil {
			v, err := naiveEval(c.Filter, schema, r)
			if err != nil {
				return v, err
			}
			if v.Null || v.I == 0 {
				continue
			}
		}
		if len(c.Args) == 0 {
			values = append(values, column.Int(1))
			continue
		}
		v, err := naiveEval(c.Args[0], schema, r)
		if err != nil {
			return v, err
		}
		if len(c.OrderBy) > 0 {
			// a row without an order key is neither first nor last
			k, err := naiveEval(c.OrderBy[0].Expr, schema, r)
			if err != nil {
				return v, err
			}
			if k.Null {
				continue
			}
		}
		if v.Null || c.Distinct && seen[keyText(row{v})] {
			continue
		}
		seen[keyText(row{v})] = true
		values = append(values, v)
	}
	return naiveFold(c, values)
}

func naiveFold(c *plan.Call, values []column.Value) (column.Value, error) {
	if c.Fn.Name == "COUNT" {
		return column.Int(int64(len(values))), nil
	}
	if len(values) == 0 {
		return column.NullOf(c.Args[0].Type()), nil
	}
	if c.Fn.Name == "SUM" && values[0].Type == column.Real {
		return column.Float(exactSum(values)), nil
	}
	best := values[0]
	for _, v := range values[1:] {
		switch c.Fn.Name {
		case "SUM":
			best.I += v.I
		case "MIN":
			if compareValues(v, best) < 0 {
				best = v
			}
		case "MAX":
			if compareValues(v, best) > 0 {
				best = v
			}
		case "LAST":
			best = v
		}
	}
	return best, nil
}

// exactSum rounds once, at the end: added one after another, 0.1 + 0.1 + … drifts away from
// what sums in double-double give.
func exactSum(values []column.Value) float64 {
	plain, sum := 0.0, new(big.Float).SetPrec(2200) // holds every sum of float64
	for _, v := range values {
		if plain += v.F; math.IsInf(v.F, 0) {
			sum = nil
		}
		if sum != nil {
			sum.Add(sum, new(big.Float).SetFloat64(v.F))
		}
	}
	if sum == nil {
		return plain
	}
	f, _ := sum.Float64()
	return f
}

// naiveRelation asks the relation for everything and then drops what is not
// wanted, which it must not tell from being asked for less.
func naiveRelation(n *plan.Relation, in []row, schema column.Schema) ([]row, error) {
	t := &column.Table{Schema: schema, N: len(in)}
	wanted := make([]uint64, column.Words(len(in)))
	for i, f := range schema {
		b := column.NewBuilder(f.Type, f.Unit)
		for _, r := range in {
			b.Append(r[i])
		}
		t.Cols = append(t.Cols, b.Finish())
	}
	for i, r := range in {
		keep := n.Wanted == nil
		if !keep {
			v, err := naiveEval(n.Wanted, schema, r)
			if err != nil {
				return nil, err
			}
			keep = !v.Null && v.I != 0
		}
		if keep {
			column.SetBit(wanted, i)
		}
	}
	need := slices.Repeat([]bool{true}, len(n.Bound.Columns))
	rows, err := n.Bound.Def.Open(n.Bound, &relation.Env{}, t, relation.Request{Need: need, Wanted: wanted})
	if err != nil {
		return nil, err
	}
	var out []row
	err = rows.Run(context.Background(), func(b *column.Batch) error {
		out = append(out, rowsOf(b)...)
		return nil
	})
	return out, err
}

// rowsOf is the active rows of a batch.
func rowsOf(b *column.Batch) []row {
	var rows []row
	forEachOn(b.On, b.N, func(i int) {
		r := make(row, len(b.Cols))
		for c := range b.Cols {
			r[c] = b.Cols[c].Value(i)
		}
		rows = append(rows, r)
	})
	return rows
}

// naiveMatched takes the right rows off one by one.
func naiveMatched(n *plan.Matched) ([]row, error) {
	left, err := naive(n.Left)
	if err != nil {
		return nil, err
	}
	right, err := naive(n.Right)
	if err != nil {
		return nil, err
	}
	there := map[string]int{}
	for _, r := range right {
		there[keyText(r)]++
	}
	seen := map[string]bool{}
	var rows []row
	for _, l := range left {
		k := keyText(l)
		if !n.All && seen[k] {
			continue
		}
		seen[k] = true
		is := there[k] > 0
		if n.All {
			there[k]--
		}
		if is == (n.Kind == plan.Intersect) {
			rows = append(rows, l)
		}
	}
	return rows, nil
}
