package exec

import (
	"fmt"
	"math/rand/v2"
	"testing"

	"nearcell/catalog/column"
	"nearcell/engine/plan"
	"nearcell/engine/plan/plantest"
)

// A sort of which only the first rows are wanted gives the first rows of the whole
// sort: for keys of every type, in both directions, with NULLs at either end, with
// ties, with a second key, with rows that a filter left out, for any number of workers.
func TestTopIsTheBeginningOfTheSort(t *testing.T) {
	rng := rand.New(rand.NewPCG(8, 1))
	table := plantest.Table(rng, 9000)
	for key := range plantest.Schema {
		for way := range 4 {
			keys := []plan.SortKey{{Expr: plantest.Column(plantest.Schema, key), Descending: way&1 != 0, NullsFirst: way&2 != 0},
				{Expr: plantest.Column(plantest.Schema, 0)}}
			var input plan.Node = plantest.Scan(table)
			if key%2 == 1 {
				input = &plan.Filter{Input: input, Cond: compare(">", plantest.Schema, 2, 0), Clause: "WHERE"}
			}
			for _, top := range []int64{1, 7, 500} {
				whole, err := run(t, testEnv(0, 0), &plan.Limit{Input: &plan.Sort{Input: input, Keys: keys}, Count: top})
				if err != nil {
					t.Fatal(err)
				}
				for _, threads := range []int{1, 2, 4} {
					env := testEnv(640, 64)
					env.Threads = threads
					got, err := run(t, env, &plan.Sort{Input: input, Keys: keys, Top: top})
					if err != nil || fmt.Sprint(got) != fmt.Sprint(whole) {
						t.Fatalf("%s, way %d, top %d, %d threads: %v\n%v\nwant\n%v", plantest.Schema[key].Name, way, top, threads, err, got, whole)
					}
				}
			}
		}
	}
}

// The first rows are kept, not all of them: the bound lets few of a million rows by.
func TestTopKeepsFewRows(t *testing.T) {
	const n = 1 << 20
	rng := rand.New(rand.NewPCG(8, 2))
	schema := column.Schema{{Name: "x", Type: column.Real}}
	table := &column.Table{Schema: schema, N: n, Cols: []column.Vector{column.New(column.Real, nil, n)}}
	for i := range n {
		table.Cols[0].F[i] = rng.NormFloat64()
	}
	env := testEnv(0, 0)
	env.Memory = 1 << 20
	got, err := run(t, env, &plan.Sort{Input: plantest.Scan(table), Keys: []plan.SortKey{{Expr: plantest.Column(schema, 0)}}, Top: 10})
	if err != nil || len(got) != 10 {
		t.Fatalf("%d rows, %v", len(got), err)
	}
}
