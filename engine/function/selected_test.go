package function

import (
	"math/rand/v2"
	"slices"
	"testing"
)

// The element at a place is that of the sorted list, whatever the list looks like.
func TestSelected(t *testing.T) {
	rng := rand.New(rand.NewPCG(2, 1))
	for range 400 {
		n := 1 + rng.IntN(700)
		x := make([]int64, n)
		for i := range x {
			switch n % 4 {
			case 0:
				x[i] = rng.Int64() - rng.Int64()
			case 1:
				x[i] = rng.Int64N(3)
			case 2:
				x[i] = int64(i)
			default:
				x[i] = int64(min(i, n-i))
			}
		}
		sorted := slices.Sorted(slices.Values(x))
		k := rng.IntN(n)
		if got := selected(slices.Clone(x), k); got != sorted[k] {
			t.Fatalf("place %d of %v: %d, want %d", k, x, got, sorted[k])
		}
	}
}
