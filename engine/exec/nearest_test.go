package exec

import (
	"context"
	"fmt"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/plan"
	"nearcell/engine/plan/plantest"
	"nearcell/lang"
)

// scattered is a table of places on a coarse lattice, so that distances repeat, with
// NULLs, equal places, and now and then coordinates whose squares leave the range.
func scattered(rng *rand.Rand, n int) *column.Table {
	t := &column.Table{Schema: column.Schema{{Name: "id", Type: column.Integer}, {Name: "g", Type: column.Integer},
		{Name: "x", Type: column.Real}, {Name: "y", Type: column.Real}, {Name: "z", Type: column.Real}}, N: n}
	scale := []float64{1, 0.1, 1e-170, 1e170}[min(rng.IntN(12), 3)]
	if rng.IntN(2) == 0 {
		scale = 1
	}
	for c, f := range t.Schema {
		b := column.NewBuilder(f.Type, nil)
		for i := range n {
			switch {
			case c == 0:
				b.Append(column.Int(int64(i)))
			case rng.IntN(25) == 0:
				b.Append(column.NullOf(f.Type))
			case c == 1:
				b.Append(column.Int(int64(rng.IntN(5))))
			default:
				b.Append(column.Float(float64(rng.IntN(6)) * scale))
			}
		}
		t.Cols = append(t.Cols, b.Finish())
	}
	return t
}

func pointOf(x, y, z expr.Expr) expr.Expr { return must(expr.NewPoint(x, y, z, plantest.Nowhere)) }

func distanceOf(p, q expr.Expr) expr.Expr {
	return must(expr.NewCall(function.LookupScalar("DISTANCE"), []expr.Expr{p, q}, plantest.Nowhere))
}

func pointOfRow(t *column.Table) expr.Expr {
	c := columns(t.Schema, 2, 3, 4)
	return pointOf(c[0], c[1], c[2])
}

// byDistance is id and distance of the first rows of a table by their distance to at,
// as a binder writes it: with the distance as a column or in the key.
func byDistance(rng *rand.Rand, t *column.Table, at expr.Expr, keep expr.Expr) plan.Node {
	var n plan.Node = plantest.Scan(t)
	if keep != nil {
		n = &plan.Filter{Input: n, Cond: keep, Clause: "WHERE"}
	}
	far := distanceOf(pointOfRow(t), at)
	if rng.IntN(2) == 0 {
		far = distanceOf(at, pointOfRow(t))
	}
	key := plan.SortKey{Expr: far, Descending: rng.IntN(8) == 0, NullsFirst: rng.IntN(8) == 0}
	if rng.IntN(3) > 0 {
		p := &plan.Project{Input: n, Exprs: append(columns(t.Schema, 0, 1), far)}
		p.Fields = append(fields(t.Schema, 0, 1), column.Field{Name: "far", Type: column.Real})
		n, key.Expr = p, plantest.Column(p.Fields, 2)
	}
	s := &plan.Sort{Input: n, Keys: []plan.SortKey{key}}
	if rng.IntN(3) == 0 {
		s.Keys = append(s.Keys, plan.SortKey{Expr: plantest.Column(n.Schema(), 1), Descending: rng.IntN(2) == 0})
	}
	return &plan.Limit{Input: s, Count: int64(1 + rng.IntN(6)), Offset: int64(rng.IntN(3))}
}

func has[T plan.Node](n plan.Node) bool {
	found := false
	plan.Everywhere(n, func(n plan.Node) {
		_, is := n.(T)
		found = found || is
	})
	return found
}

// The first rows by distance are those of the sort over all rows, in its order, ties
// and NULLs included: the first time that they are asked for, from a tree, and from a
// tree that a statement before has left.
func TestNearestAgainstSorting(t *testing.T) {
	used := 0
	rapid.Check(t, func(t *rapid.T) {
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
		table := scattered(rng, rng.IntN(400))
		at := pointOf(realConst(float64(rng.IntN(60))/10), realConst(float64(rng.IntN(6))), realConst(2))
		var keep expr.Expr
		if rng.IntN(2) == 0 {
			keep = compare([]string{"<>", "="}[rng.IntN(2)], table.Schema, 1, float64(rng.IntN(5)))
		} else if rng.IntN(2) == 0 { // one that can fail, and sometimes does
			by := arith("-", plantest.Column(table.Schema, 1), realConst(float64(rng.IntN(9))))
			keep = must(expr.NewCompare(lang.Less, arith("/", realConst(1), by), realConst(0.6), plantest.Nowhere))
		}
		n := byDistance(rng, table, at, keep)
		want, err := run(t, testEnv(0, 0), n)
		if err != nil {
			t.Skip(err) // distances beyond the range
		}
		better, err := plan.Optimise(n)
		if err != nil {
			t.Fatal(err)
		}
		if has[*plan.Nearest](better) {
			used++
		}
		places := &Places{}
		for range 2 {
			env := testEnv(128, 64)
			env.Places = places
			got, err := run(t, env, better)
			if err != nil {
				t.Fatal(err)
			}
			if err := sameRows(n, got, want); err != nil {
				t.Fatalf("%v\n%s", err, plan.Format(better))
			}
		}
	})
	if used < 20 {
		t.Errorf("the rule was used %d times", used)
	}
}

func realConst(f float64) expr.Expr { return expr.NewConst(column.Float(f), plantest.Nowhere) }

// The same in queries that depend on the row outside: the nearest other row, and the
// least distance.
func TestNearestOfEachRow(t *testing.T) {
	used := 0
	rapid.Check(t, func(t *rapid.T) {
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 2))
		table, of := scattered(rng, rng.IntN(200)), scattered(rng, rng.IntN(40))
		outer := make([]expr.Expr, 4)
		for i := range outer {
			outer[i] = expr.NewOuter(i, of.Schema[i+1], plantest.Nowhere)
		}
		var keep expr.Expr
		if rng.IntN(2) == 0 {
			keep = must(expr.NewCompare(lang.NotEquals, plantest.Column(table.Schema, 1), outer[0], plantest.Nowhere))
		}
		at := pointOf(outer[1], outer[2], outer[3])
		var inner plan.Node
		if rng.IntN(3) == 0 {
			inner = plantest.Scan(table)
			if keep != nil {
				inner = &plan.Filter{Input: inner, Cond: keep, Clause: "WHERE"}
			}
			far := distanceOf(pointOfRow(table), at)
			inner = &plan.Aggregate{Input: inner, Fields: column.Schema{{Name: "least", Type: column.Real}},
				Calls: []plan.Call{{Fn: function.LookupAggregate("MIN"), Args: []expr.Expr{far}, Text: "MIN"}}}
		} else {
			l := byDistance(rng, table, at, keep).(*plan.Limit)
			l.Count = 1
			inner = &plan.Project{Input: l, Exprs: columns(l.Schema(), 0), Fields: fields(l.Schema(), 0)}
		}
		n := &plan.Project{Input: plantest.Scan(of), Fields: column.Schema{of.Schema[0], {Name: "near", Type: inner.Schema()[0].Type}}}
		n.Exprs = append(columns(of.Schema, 0), expr.NewScalarQuery(&plan.Query{Plan: inner}, columns(of.Schema, 1, 2, 3, 4), plantest.Nowhere))
		want, err := run(t, testEnv(0, 0), n)
		if err != nil {
			t.Skip(err)
		}
		better, err := plan.Optimise(n)
		if err != nil {
			t.Fatal(err)
		}
		if has[*plan.Nearest](better) {
			used++
		}
		for threads := 1; threads <= 2; threads++ {
			env := testEnv(128, 64)
			env.Threads = threads
			got, err := run(t, env, better)
			if err != nil {
				t.Fatal(err)
			}
			if err := sameRows(n, got, want); err != nil {
				t.Fatalf("%v\n%s", err, plan.Format(better))
			}
		}
	})
	if used < 20 {
		t.Errorf("the rule was used %d times", used)
	}
}

func BenchmarkNearestOfEachRow(b *testing.B) {
	for _, n := range []int{1000, 10_000, 100_000} {
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			rng := rand.New(rand.NewPCG(1, 1))
			table := scattered(rng, n)
			for c := 2; c < 5; c++ {
				for i := range n {
					table.Cols[c].F[i] = rng.Float64()
				}
				table.Cols[c].Valid = nil
			}
			outer := make([]expr.Expr, 3)
			for i := range outer {
				outer[i] = expr.NewOuter(i, table.Schema[i+2], plantest.Nowhere)
			}
			far := distanceOf(pointOfRow(table), pointOf(outer[0], outer[1], outer[2]))
			s := &plan.Sort{Input: plantest.Scan(table), Keys: []plan.SortKey{{Expr: far}}}
			l := &plan.Limit{Input: s, Count: 1}
			inner := &plan.Project{Input: l, Exprs: columns(l.Schema(), 0), Fields: fields(l.Schema(), 0)}
			p := &plan.Project{Input: &plan.Limit{Input: plantest.Scan(table), Count: 1000}, Fields: fields(table.Schema, 0)}
			p.Exprs = []expr.Expr{expr.NewScalarQuery(&plan.Query{Plan: inner}, columns(table.Schema, 2, 3, 4), plantest.Nowhere)}
			better, err := plan.Optimise(p)
			if err != nil {
				b.Fatal(err)
			}
			for b.Loop() {
				if _, err := Collect(context.Background(), testEnv(0, 0), better); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// Joins bounded by a distance give the rows of the nested loop, in its order.
func TestNearJoinsAgainstPairs(t *testing.T) {
	used := 0
	rapid.Check(t, func(t *rapid.T) {
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 3))
		left, right := scattered(rng, rng.IntN(60)), scattered(rng, rng.IntN(60))
		j := &plan.Join{Kind: plan.JoinKind(rng.IntN(4)), Left: plantest.Scan(left), Right: plantest.Scan(right)}
		c := columns(j.Both(), 0, 1, 2, 3, 4, 5, 6, 7, 8, 9)
		far := distanceOf(pointOf(c[2], c[3], c[4]), pointOf(c[7], c[8], c[9]))
		if rng.IntN(2) == 0 {
			far = distanceOf(pointOf(c[7], c[8], c[9]), pointOf(c[2], c[3], c[4]))
		}
		within := []expr.Expr{realConst(1.5), realConst(-1), realConst(0), c[1], leastOf(right, c[2:5:5]),
			c[6], leastOf(left, c[7:10:10])}[rng.IntN(7)]
		var cond expr.Expr
		if rng.IntN(2) == 0 {
			op := []lang.Op{lang.Less, lang.LessOrEqual, lang.Equals}[rng.IntN(3)]
			cond = must(expr.NewCompare(op, far, within, plantest.Nowhere))
		} else {
			op := []lang.Op{lang.Greater, lang.GreaterOrEqual, lang.Equals}[rng.IntN(3)]
			cond = must(expr.NewCompare(op, within, far, plantest.Nowhere))
		}
		if rng.IntN(2) == 0 {
			cond = expr.AndAll([]expr.Expr{must(expr.NewCompare(lang.NotEquals, c[1], c[6], plantest.Nowhere)), cond})
		}
		var n plan.Node = j
		if j.Kind == plan.Inner && rng.IntN(2) == 0 {
			n = &plan.Filter{Input: j, Cond: cond, Clause: "WHERE"}
		} else {
			j.Rest = cond
		}
		want, err := run(t, testEnv(0, 0), n)
		if err != nil {
			t.Skip(err)
		}
		better, err := plan.Optimise(n)
		if err != nil {
			t.Fatal(err)
		}
		plan.Everywhere(better, func(n plan.Node) {
			if j, ok := n.(*plan.Join); ok && j.Near != nil {
				used++
			}
		})
		for threads := 1; threads <= 2; threads++ {
			env := testEnv(128, 64)
			env.Threads = threads
			got, err := run(t, env, better)
			if err != nil {
				t.Fatal(err)
			}
			if err := sameRows(n, got, want); err != nil {
				t.Fatalf("%v\n%s", err, plan.Format(better))
			}
		}
	})
	if used < 20 {
		t.Errorf("the rule was used %d times", used)
	}
}

// leastOf is the least distance of a table's rows to the place at.
func leastOf(t *column.Table, at []expr.Expr) expr.Expr {
	var outer []expr.Expr
	for i := range 3 {
		outer = append(outer, expr.NewOuter(i, t.Schema[i+2], plantest.Nowhere))
	}
	far := distanceOf(pointOfRow(t), pointOf(outer[0], outer[1], outer[2]))
	least := &plan.Aggregate{Input: plantest.Scan(t), Fields: column.Schema{{Name: "least", Type: column.Real}},
		Calls: []plan.Call{{Fn: function.LookupAggregate("MIN"), Args: []expr.Expr{far}, Text: "MIN"}}}
	return expr.NewScalarQuery(&plan.Query{Plan: least}, at, plantest.Nowhere)
}
