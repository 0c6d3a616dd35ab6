package delaunay

import (
	"context"
	"math"
	"math/rand/v2"
	"reflect"
	"slices"
	"testing"

	"gonum.org/v1/gonum/spatial/r3"
)

// stored copies what Store gives, as a file would.
func stored(t *T) *Stored {
	s := t.Store()
	return &Stored{slices.Clone(s.Facts), slices.Clone(s.Order), slices.Clone(s.Place), slices.Clone(s.Repeats),
		slices.Clone(s.Points), slices.Clone(s.Tets)}
}

func sitesFor(seed uint64, n, dimension int) []float64 {
	r := rand.New(rand.NewPCG(seed, 5))
	flat := make([]float64, 0, 3*n)
	for range n {
		p := [3]float64{float64(r.IntN(40)), 0, 0} // some repeat
		for k := 1; k < dimension; k++ {
			p[k] = float64(r.IntN(40))
		}
		flat = append(flat, p[:]...)
	}
	return flat
}

// What is restored is what was stored, and edits of it leave the arrays alone.
func TestStored(t *testing.T) {
	for dimension := 1; dimension <= 3; dimension++ {
		for _, n := range []int{1, 4, 60, 3000} {
			sites := sitesFor(uint64(n), n, dimension)
			a, err := BuildFlat(context.Background(), sites, Options{Threads: 2})
			if err != nil {
				t.Fatal(err)
			}
			kept := stored(a)
			b, err := Restore(kept, sites, 2)
			if err != nil {
				t.Fatalf("dimension %d, %d sites: %v", dimension, n, err)
			}
			if err := b.Validate(); err != nil {
				t.Fatal(err)
			}
			if x, y := a.Arrays(), b.Arrays(); !reflect.DeepEqual(x, y) {
				t.Fatalf("dimension %d, %d sites: restored otherwise", dimension, n)
			}
			before := stored(b)
			if _, err := b.Insert(r3.Vec{X: 3.25, Y: 7.5, Z: 1.125}); err != nil {
				t.Fatal(err)
			}
			if err := b.Remove(0); err != nil {
				t.Fatal(err)
			}
			if err := b.Validate(); err != nil {
				t.Fatal(err)
			}
			if !reflect.DeepEqual(kept.Tets, before.Tets) || !slices.Equal(bitsOf(kept.Points), bitsOf(before.Points)) ||
				!slices.Equal(kept.Place, before.Place) || !slices.Equal(kept.Order, before.Order) {
				t.Fatal("an edit wrote to the stored arrays")
			}
		}
	}
}

// Numbers that lead out of the arrays, and arrays that do not fit, are refused.
func TestStoredRefusesWhatLeadsOut(t *testing.T) {
	sites := sitesFor(1, 500, 3)
	a, err := BuildFlat(context.Background(), sites, Options{})
	if err != nil {
		t.Fatal(err)
	}
	spoil := map[string]func(s *Stored){
		"a corner":      func(s *Stored) { s.Tets[16*7+2] = 501 },
		"less than one": func(s *Stored) { s.Tets[16*7] = -3 },
		"a neighbour":   func(s *Stored) { s.Tets[16*9+5] = int32(len(s.Tets) / 16 * 4) },
		"a place":       func(s *Stored) { s.Place[3] = -1 },
		"an order":      func(s *Stored) { s.Order[3] = 500 },
		"a repeat":      func(s *Stored) { s.Repeats = append(s.Repeats, 500) },
		"real":          func(s *Stored) { s.Facts[1] = int32(len(s.Tets)) },
		"short points":  func(s *Stored) { s.Points = s.Points[:len(s.Points)-4] },
		"short tets":    func(s *Stored) { s.Tets = s.Tets[:len(s.Tets)-1] },
		"no facts":      func(s *Stored) { s.Facts = nil },
		"dimension":     func(s *Stored) { s.Facts[0] = 4 },
	}
	for name, f := range spoil {
		s := stored(a)
		f(s)
		if _, err := Restore(s, sites, 1); err == nil {
			t.Errorf("%s was taken", name)
		}
	}
}

func bitsOf(x []float64) []uint64 {
	out := make([]uint64, len(x))
	for i := range x {
		out[i] = math.Float64bits(x[i])
	}
	return out
}
