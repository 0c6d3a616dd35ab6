package field

import (
	"bufio"
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"strings"
	"testing"

	"nearcell/voronoi"
	"nearcell/voronoi/solid"
)

func v(x, y, z float64) Vec { return Vec{X: x, Y: y, Z: z} }

func box(t testing.TB, lo, hi Vec) solid.Solid {
	t.Helper()
	b, err := solid.NewBox(lo, hi)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

// fieldOf is a field over sites, in a solid or without (nil), with all that makes it
// quick.
func fieldOf(t testing.TB, sites []Vec, body solid.Solid, o Options) *Field {
	t.Helper()
	d, err := voronoi.New(sites, voronoi.Options{Solid: body})
	if err != nil {
		t.Fatal(err)
	}
	f, err := New(context.Background(), d, 0, o)
	if err != nil {
		t.Fatal(err)
	}
	if err := f.Prepare(context.Background(), 1<<20); err != nil {
		t.Fatal(err)
	}
	return f
}

// at is the weights at p, by site.
func at(t testing.TB, f *Field, p Vec) map[int32]float64 {
	t.Helper()
	var w Work
	place, weights, err := f.At(context.Background(), p, &w)
	if err != nil {
		t.Fatal(err)
	}
	if place > AtSite {
		t.Fatalf("at %v there are no weights: %v", p, place)
	}
	return byNumber(t, weights)
}

func byNumber(t testing.TB, weights []Weight) map[int32]float64 {
	t.Helper()
	m := map[int32]float64{}
	sum := 0.0
	for i, x := range weights {
		if i > 0 && weights[i-1].Site >= x.Site || !(x.Weight > 0) {
			t.Fatalf("weights %v", weights)
		}
		m[x.Site] = x.Weight
		sum += x.Weight
	}
	if math.Abs(sum-1) > 4e-15 {
		t.Fatalf("the weights add up to %v", sum)
	}
	return m
}

func same(t testing.TB, what string, got map[int32]float64, want map[int32]float64, tol float64) {
	t.Helper()
	for s, x := range want {
		if math.Abs(got[s]-x) > tol {
			t.Errorf("%s: site %d has the weight %.15g, want %.15g", what, s, got[s], x)
		}
	}
	for s, x := range got {
		if _, ok := want[s]; !ok && x > tol {
			t.Errorf("%s: site %d has the weight %g, want none", what, s, x)
		}
	}
}

func random(n int, seed uint64) []Vec {
	r := rand.New(rand.NewPCG(seed, 8))
	p := make([]Vec, n)
	for i := range p {
		p[i] = v(r.Float64(), r.Float64(), r.Float64())
	}
	return p
}

// twenty are the twenty sites of the reference set, with their temperatures.
func twenty(t testing.TB) (sites []Vec, temp []float64) {
	t.Helper()
	f, err := os.Open("../testdata/twenty.txt")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	for lines := bufio.NewScanner(f); lines.Scan(); {
		if rest, ok := strings.CutPrefix(lines.Text(), "site "); ok {
			var p Vec
			if _, err := fmt.Sscan(rest, &p.X, &p.Y, &p.Z); err != nil {
				t.Fatal(err)
			}
			sites = append(sites, p)
		}
	}
	temp = []float64{20.9, 22.0, 21.5, 18.3, 18.8, 18.9, 20.2, 18.8, 20.8, 19.1, 18.4, 18.2, 20.6, 19.0, 18.7, 18.9, 19.0, 18.7, 21.8, 18.1}
	if len(sites) != len(temp) {
		t.Fatalf("%d sites", len(sites))
	}
	return sites, temp
}

func estimate(weights map[int32]float64, value func(int32) float64) float64 {
	sum := 0.0
	for s := range int32(1 << 20) {
		if x, ok := weights[s]; ok {
			sum += x * value(s)
		}
		if len(weights) == 0 || s > 100000 {
			break
		}
	}
	return sum
}
