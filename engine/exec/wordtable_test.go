package exec

import (
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/catalog/column"
)

// Whatever the words are and however they come (close together, then far apart, at
// the ends of the range, one by one or in batches), a word has one key, different
// words have different keys, and keys are numbered as they come.
func TestWordTable(t *testing.T) {
	near := func(rng *rand.Rand, base int64, width int64) func() int64 {
		return func() int64 { return base + rng.Int64N(width) }
	}
	for seed := range uint64(40) {
		rng := rand.New(rand.NewPCG(3, seed))
		draws := []func() int64{
			near(rng, 20_000, 900), near(rng, -70_000, 140_000), near(rng, math.MaxInt64-500, 500), near(rng, math.MinInt64, 500),
			func() int64 { return rng.Int64() - rng.Int64() }, func() int64 { return int64(rng.IntN(50)) * 900_000_000 }}
		table := newKeyTable([]column.Type{column.Timestamp})
		reader := newKeyReader(table)
		naive := map[int64]int32{}
		null := int32(-1)
		for range 12 {
			draw := draws[rng.IntN(len(draws))]
			n := max(0, rng.IntN(330)-30) // no row at all, too
			v := column.New(column.Timestamp, nil, n)
			for i := range n {
				v.I[i] = draw()
				if seed%2 == 1 && rng.IntN(9) == 0 {
					v.SetNull(i)
				}
			}
			keys := make([]int32, n)
			if rng.IntN(3) == 0 { // as absorb puts them
				for i := range n {
					if v.IsNull(i) {
						keys[i] = table.put([]uint64{0, 1})
					} else {
						keys[i] = table.put([]uint64{uint64(v.I[i]), 0})
					}
				}
			} else {
				reader.put([]column.Vector{v}, nil, n, keys)
			}
			for i := range n {
				if v.IsNull(i) {
					if null < 0 {
						null = int32(len(naive))
						naive[math.MinInt64+1000] = null // one number less for the others
					}
					if keys[i] != null {
						t.Fatalf("seed %d: NULL has key %d, want %d", seed, keys[i], null)
					}
					continue
				}
				want, known := naive[v.I[i]]
				if !known {
					want = int32(len(naive))
					naive[v.I[i]] = want
				}
				if keys[i] != want || table.findWord(uint64(v.I[i])) != want {
					t.Fatalf("seed %d: %d has key %d, found %d, want %d", seed, v.I[i], keys[i], table.findWord(uint64(v.I[i])), want)
				}
			}
		}
		for range 200 {
			x := draws[rng.IntN(len(draws))]()
			want, known := naive[x]
			if !known {
				want = -1
			}
			if got := table.find([]uint64{uint64(x), 0}); got != want && x != math.MinInt64+1000 {
				t.Fatalf("seed %d: %d is found as %d, want %d", seed, x, got, want)
			}
		}
	}
}
