package exec

import (
	"context"
	"fmt"
	"math/rand/v2"
	"testing"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/plan"
	"nearcell/engine/plan/plantest"
	"nearcell/lang"
)

const million = 1 << 20

// readings is a million rows: a logger (1,000 names), a group (1,000 numbers)
// and a temperature of which 1 % is missing.
func readings() *column.Table {
	rng := rand.New(rand.NewPCG(1, 1))
	schema := column.Schema{{Name: "logger", Type: column.Text}, {Name: "g", Type: column.Integer}, {Name: "temp", Type: column.Real}}
	dict := &column.Dict{}
	for i := range 1000 {
		dict.Texts = append(dict.Texts, fmt.Sprintf("L%03d", i))
	}
	t := &column.Table{Schema: schema, N: million, Cols: []column.Vector{
		column.New(column.Text, nil, million), column.New(column.Integer, nil, million), column.New(column.Real, nil, million)}}
	t.Cols[0].Dict = dict
	for i := range million {
		t.Cols[0].C[i] = uint32(rng.IntN(1000))
		t.Cols[1].I[i] = int64(rng.IntN(1000)) * 977
		t.Cols[2].F[i] = 2 + 6*rng.Float64()
		if rng.IntN(100) == 0 {
			t.Cols[2].SetNull(i)
		}
	}
	return t
}

func benchmark(b *testing.B, n plan.Node, rows int) {
	for _, threads := range []int{1, 2} {
		b.Run(fmt.Sprintf("threads=%d", threads), func(b *testing.B) {
			b.ReportAllocs()
			for b.Loop() {
				env := testEnv(0, 0)
				env.Threads = threads
				t, err := Collect(context.Background(), env, n)
				if err != nil || t.N != rows {
					b.Fatalf("%d rows, want %d, %v", t.N, rows, err)
				}
			}
			b.ReportMetric(float64(million)*float64(b.N)/b.Elapsed().Seconds()/1e6, "Mrows/s")
		})
	}
}

func countStar() []plan.Call {
	return []plan.Call{{Fn: function.LookupAggregate("COUNT"), Text: "COUNT(*)"}}
}

func BenchmarkFilterCount(b *testing.B) {
	t := readings()
	benchmark(b, &plan.Aggregate{Input: &plan.Filter{Input: plantest.Scan(t), Cond: compare(">", t.Schema, 2, 7), Clause: "WHERE"},
		Calls: countStar(), Fields: column.Schema{{Name: "n", Type: column.Integer}}}, 1)
}

func benchmarkGroup(b *testing.B, key int) {
	t := readings()
	benchmark(b, &plan.Aggregate{Input: plantest.Scan(t), Keys: columns(t.Schema, key), Calls: calls(t.Schema, "AVG", 2),
		Fields: fields(t.Schema, key, 2)}, 1000)
}

func BenchmarkGroupByText(b *testing.B)    { benchmarkGroup(b, 0) }
func BenchmarkGroupByInteger(b *testing.B) { benchmarkGroup(b, 1) }

func BenchmarkHashJoin(b *testing.B) {
	t := readings()
	small := &column.Table{Schema: column.Schema{{Name: "logger", Type: column.Text}, {Name: "height", Type: column.Real}}, N: 1000,
		Cols: []column.Vector{column.New(column.Text, nil, 1000), column.New(column.Real, nil, 1000)}}
	for i := range 1000 {
		small.Cols[0].Dict.Texts = append(small.Cols[0].Dict.Texts, fmt.Sprintf("L%03d", 999-i))
		small.Cols[0].C[i] = uint32(i)
		small.Cols[1].F[i] = float64(i % 7)
	}
	j := &plan.Join{Left: plantest.Scan(t), Right: plantest.Scan(small), LeftKeys: columns(t.Schema, 0), RightKeys: columns(small.Schema, 0)}
	schema := j.Schema()
	sum := must(expr.NewArith(lang.Plus, plantest.Column(schema, 2), plantest.Column(schema, 4), plantest.Nowhere))
	benchmark(b, &plan.Aggregate{Input: j, Calls: []plan.Call{{Fn: function.LookupAggregate("MAX"), Args: []expr.Expr{sum}, Text: "MAX"}},
		Fields: column.Schema{{Name: "m", Type: column.Real}}}, 1)
}

func benchmarkSort(b *testing.B, top int64, keys ...int) {
	t := readings()
	n := &plan.Sort{Input: plantest.Scan(t), Top: top}
	for _, k := range keys {
		n.Keys = append(n.Keys, plan.SortKey{Expr: plantest.Column(t.Schema, k)})
	}
	rows := million
	if top > 0 {
		rows = int(top)
	}
	benchmark(b, n, rows)
}

func BenchmarkSortReal(b *testing.B)     { benchmarkSort(b, 0, 2) }
func BenchmarkSortTextReal(b *testing.B) { benchmarkSort(b, 0, 0, 2) }
func BenchmarkSortTop(b *testing.B)      { benchmarkSort(b, 10, 2) }

func BenchmarkDistinct(b *testing.B) {
	t := readings()
	benchmark(b, &plan.Distinct{Input: &plan.Project{Input: plantest.Scan(t), Exprs: columns(t.Schema, 0), Fields: fields(t.Schema, 0)}}, 1000)
}
