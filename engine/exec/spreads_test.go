package exec

import (
	"math"
	"testing"

	"nearcell/catalog/column"
	"nearcell/engine/plan"
	"nearcell/engine/relation"
	"pgregory.net/rapid"
)

// TestSpreadsMerge: rows in two parts, whose groups have other numbers, merge to what
// the formulae √Σw²u² / Σw and Σwv / Σw give for all rows of a group.
func TestSpreadsMerge(t *testing.T) {
	of := plan.Instruments{Each: []int{2}, Common: []int{3},
		Of: relation.Uncertain{EachBy: []relation.UncertainBy{{Name: "u"}}, CommonBy: []relation.UncertainBy{{Name: "v"}}}}
	rapid.Check(t, func(t *rapid.T) {
		all, other := &spreads{of: of}, &spreads{of: of}
		var squares, shared, weights [2]float64
		for part, s := range []*spreads{all, other} {
			n := rapid.IntRange(1, 9).Draw(t, "rows")
			b := &column.Batch{N: n, Cols: make([]column.Vector, 4)}
			for i := range b.Cols {
				b.Cols[i] = column.New(column.Real, nil, n)
			}
			groups := make([]int32, n)
			for i := range n {
				for _, c := range b.Cols {
					c.F[i] = float64(rapid.IntRange(0, 50).Draw(t, "value"))
				}
				w, u, v := b.Cols[0].F[i], b.Cols[2].F[i], b.Cols[3].F[i]
				g := rapid.IntRange(0, 1).Draw(t, "group")
				groups[i] = int32(g ^ part) // the other part's group 0 is 1 here
				weights[g] += w
				squares[g] += float64(w * w * u * u)
				shared[g] += float64(w * v)
			}
			if _, err := s.add(b, nil, groups, b.Cols[1:2], &b.Cols[0]); err != nil {
				t.Fatal(err)
			}
		}
		all.merge(other, []int32{1, 0})
		for g := range weights {
			if weights[g] == 0 {
				continue
			}
			own, common, ok := all.parts(g, weights[g])
			if want := math.Sqrt(squares[g]) / weights[g]; !ok || math.Abs(own-want) > 1e-14*want {
				t.Fatalf("own errors of group %d are %g, want %g", g, own, want)
			}
			if want := shared[g] / weights[g]; math.Abs(common-want) > 1e-14*want {
				t.Fatalf("shared errors of group %d are %g, want %g", g, common, want)
			}
		}
	})
}
