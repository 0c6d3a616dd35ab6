package exec

import (
	"context"
	"math/rand/v2"
	"testing"

	"nearcell/catalog/column"
	"nearcell/engine/plan"
	"nearcell/engine/plan/plantest"
)

// COUNT(DISTINCT x) of more values and groups than have bits of their own, whichever
// worker meets a value first.
func TestDistinctCountsOfManyValues(t *testing.T) {
	for _, size := range []struct{ rows, groups, values int }{
		{150_000, 3, 2000}, {150_000, denseGroups + 4000, 50}, {200_000, 40, mostCodes + 9000}, {200_000, denseGroups + 900, mostCodes + 900},
	} {
		rng := rand.New(rand.NewPCG(7, uint64(size.rows+size.values)))
		table := &column.Table{N: size.rows, Schema: column.Schema{{Name: "g", Type: column.Integer}, {Name: "v", Type: column.Real}}}
		table.Cols = []column.Vector{column.New(column.Integer, nil, size.rows), column.New(column.Real, nil, size.rows)}
		want := map[int64]map[float64]bool{}
		for i := range size.rows {
			g, v := int64(rng.IntN(size.groups)), float64(rng.IntN(size.values))/8
			if want[g] == nil {
				want[g] = map[float64]bool{}
			}
			table.Cols[0].I[i] = g
			if rng.IntN(50) == 0 {
				table.Cols[1].SetNull(i)
				continue
			}
			table.Cols[1].F[i] = v
			want[g][v] = true
		}
		call := calls(table.Schema, "COUNT", 1)
		call[0].Distinct = true
		n := &plan.Aggregate{Input: plantest.Scan(table), Keys: columns(table.Schema, 0), Calls: call,
			Fields: column.Schema{table.Schema[0], {Name: "n", Type: column.Integer}}}
		for _, threads := range []int{1, 4} {
			env := testEnv(8192, 2048)
			env.Threads = threads
			got, err := Collect(context.Background(), env, n)
			if err != nil {
				t.Fatal(err)
			}
			if got.N != len(want) {
				t.Fatalf("%d groups, want %d", got.N, len(want))
			}
			for i := range got.N {
				if g := got.Cols[0].I[i]; got.Cols[1].I[i] != int64(len(want[g])) {
					t.Fatalf("%+v, %d threads: %d values of group %d, want %d", size, threads, got.Cols[1].I[i], g, len(want[g]))
				}
			}
		}
	}
}
