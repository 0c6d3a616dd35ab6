package relation

import (
	"cmp"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"nearcell/catalog/column"
)

// BenchmarkArrange sorts a million sites that come in any order.
func BenchmarkArrange(b *testing.B) {
	for _, text := range []bool{false, true} {
		in := table(shuffled(randomSites(1000000, 1), 2), text)
		s := &setup{def: cells, input: in}
		bound := s.bound()
		b.Run(fmt.Sprintf("text=%v", text), func(b *testing.B) {
			for range b.N {
				if _, err := arrange(bound, s.env, in, newOrder(bound, in), newFindings()); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// Keys keep the order of values of every type, whichever way the rows are sorted.
func TestOrderOfValues(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		n := rapid.SampledFrom([]int{3, 40, 700}).Draw(r, "rows")
		seed := rapid.Uint64().Draw(r, "seed")
		rnd := rand.New(rand.NewPCG(seed, 1))
		reals := []float64{0, math.Copysign(0, -1), 1, -1, math.Inf(1), math.Inf(-1), 1e-300, -1e-300, math.Pi}
		texts := []string{"", "a", "ab", "abcdefgh", "abcdefghi", "abcdefghj", "abcdefgh\x00", "Z", "ä", "L10", "L9", "\U0001F600"}
		in := &column.Table{N: n, Schema: column.Schema{{Name: "id", Type: column.Text}, {Name: "r", Type: column.Real}, {Name: "n", Type: column.Integer},
			{Name: "b", Type: column.Boolean}, {Name: "p", Type: column.Point}}}
		var builders []*column.Builder
		for _, f := range in.Schema {
			builders = append(builders, column.NewBuilder(f.Type, nil))
		}
		for range n {
			builders[0].AppendText(texts[rnd.IntN(len(texts))])
			builders[1].AppendFloat(reals[rnd.IntN(len(reals))])
			builders[2].AppendInt([]int64{0, -1, 1, math.MinInt64, math.MaxInt64}[rnd.IntN(5)])
			builders[3].AppendBool(rnd.IntN(2) == 0)
			builders[4].AppendPoint([3]float64{reals[rnd.IntN(2)], 0, reals[rnd.IntN(4)]})
		}
		for _, b := range builders {
			in.Cols = append(in.Cols, b.Finish())
		}
		b := &Bound{ID: 0, Clauses: Clauses{Each: [][]int{{1, 2}, {4, 3}, {2}, {}}[rnd.IntN(4)]}}
		o := newOrder(b, in)
		rows := make([]int32, n)
		for i := range rows {
			rows[i] = int32(i)
		}
		o.sort(rows)
		for k := 1; k < n; k++ {
			c := 0
			for _, col := range append(slices.Clone(b.Clauses.Each), 0) {
				if c = compareValues(in.Cols[col].Value(int(rows[k-1])), in.Cols[col].Value(int(rows[k]))); c != 0 {
					break
				}
			}
			if c > 0 || c == 0 && rows[k-1] > rows[k] {
				r.Fatalf("rows %d and %d are out of order", rows[k-1], rows[k])
			}
		}
	})
}

// compareValues orders values the slow way.
func compareValues(a, b column.Value) int {
	switch a.Type {
	case column.Text:
		return strings.Compare(a.S, b.S)
	case column.Real:
		return cmp.Compare(a.F, b.F)
	case column.Point:
		return slices.Compare(a.P[:], b.P[:])
	}
	return cmp.Compare(a.I, b.I)
}
