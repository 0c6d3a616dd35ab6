package spatial

import (
	"context"
	"math"
	"math/rand/v2"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// lattice links the points of a box of points to those one step away.
func lattice(nx, ny, nz int) *Graph {
	var links []Link
	at := func(x, y, z int) int32 { return int32(x + nx*(y+ny*z)) }
	for z := range nz {
		for y := range ny {
			for x := range nx {
				if x+1 < nx {
					links = append(links, Link{at(x, y, z), at(x+1, y, z), 1})
				}
				if y+1 < ny {
					links = append(links, Link{at(x, y, z), at(x, y+1, z), 1})
				}
				if z+1 < nz {
					links = append(links, Link{at(x, y, z+1), at(x, y, z), 1})
				}
			}
		}
	}
	return NewGraph(nx*ny*nz, links)
}

func upTo(n int) []float64 {
	v := make([]float64, n)
	for i := range v {
		v[i] = float64(i + 1)
	}
	return v
}

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s is %.12g, wanted %.12g", what, got, want)
	}
}

// TestByHand: values worked out as fractions by hand, which spdep 1.2-7 of R agrees with.
// 469/4374 is also the variance over all 210 ways to place the ones of the line.
func TestByHand(t *testing.T) {
	for _, c := range []struct {
		name                     string
		g                        *Graph
		values                   []float64
		i, geary, variance, z    float64
		noVariance, checkerboard bool
	}{
		{name: "line", g: lattice(10, 1, 1), values: []float64{0, 0, 0, 1, 1, 1, 0, 1, 0, 0}, i: 1. / 9, geary: 5. / 6, variance: 469. / 4374, z: .678641563},
		{name: "3 by 3", g: lattice(3, 3, 1), values: upTo(9), i: .5, geary: 1. / 3, variance: .0596875, z: 2.558222550},
		{name: "cube of 2", g: lattice(2, 2, 2), values: upTo(8), i: 1. / 3, geary: 7. / 12, variance: .055631141, z: 2.018932133},
		{name: "cube of 3", g: lattice(3, 3, 3), values: upTo(27), i: 2. / 3, geary: 13. / 54, variance: .016138349, z: 5.550582186},
		{name: "chain", g: lattice(4, 1, 1), values: []float64{1, 2, 3, 10}, i: 4. / 75, geary: 51. / 100, noVariance: true},
	} {
		r, err := Autocorrelation(context.Background(), c.g, c.values, Options{})
		if err != nil {
			t.Fatal(err)
		}
		near(t, c.name+": I", r.I, c.i, 1e-14)
		near(t, c.name+": c", r.C, c.geary, 1e-14)
		near(t, c.name+": expected", r.Expected, -1/float64(len(c.values)-1), 0)
		if !c.noVariance {
			near(t, c.name+": variance", r.Variance, c.variance, 5e-10)
			near(t, c.name+": z", r.Z, c.z, 5e-10)
		}
	}
	for n := 2; n <= 3; n++ {
		var board []float64
		for i := range n * n * n {
			board = append(board, float64((i%n+i/n%n+i/n/n)%2))
		}
		r, _ := Autocorrelation(context.Background(), lattice(n, n, n), board, Options{})
		if n == 2 {
			near(t, "checkerboard", r.I, -1, 1e-14)
		} else if !(r.I < -0.99) {
			t.Errorf("I of a checkerboard is %g", r.I)
		}
	}
}

// TestLocalByHand: local I and G* by hand; the G* are also those of gonum 0.17 for the line.
func TestLocalByHand(t *testing.T) {
	for _, c := range []struct {
		name   string
		g      *Graph
		values []float64
		i, g2  []float64
	}{
		{"chain", lattice(4, 1, 1), []float64{1, 2, 3, 10}, []float64{12. / 25, 16. / 25, -8. / 25, -12. / 25},
			[]float64{-1.224744871, -1.697056275, 0.848528137, 1.224744871}},
		{"line", lattice(10, 1, 1), []float64{0, 0, 0, 1, 1, 1, 0, 1, 0, 0}, nil,
			[]float64{-1.224744871, -1.603567451, -.267261242, 1.069044968, 2.405351177, 1.069044968, 1.069044968, -.267261242, -.267261242, -1.224744871}},
		{"3 by 3", lattice(3, 3, 1), upTo(9), []float64{2.4, 2.7, .6, .3, 0, .3, .6, 2.7, 2.4},
			[]float64{-2.065591, -2.204541, -1.032796, -.734847, 0, .734847, 1.032796, 2.204541, 2.065591}},
	} {
		list, err := Clusters(context.Background(), c.g, c.values, Options{})
		if err != nil {
			t.Fatal(err)
		}
		for k, l := range list {
			if c.i != nil {
				near(t, c.name+": local I", l.I, c.i[k], 1e-14)
			}
			near(t, c.name+": G*", l.G, c.g2[k], 5e-7)
		}
	}
}

// grid is the remotely sensed grid of Getis and Ord (1996): 16 by 16 values 30 m apart, row
// by row. The data are in the public domain (CC0, package spData of R, go_xyz).
const grid = `
40 41 42 43 49 54 47 44 42 44 43 46 52 56 56 61
40 42 41 40 43 49 46 42 42 43 43 49 59 62 53 62
43 42 40 42 42 42 41 42 42 43 42 53 66 61 51 62
44 41 39 42 44 43 42 42 42 43 43 49 56 53 53 61
42 43 44 43 42 41 42 44 43 43 44 47 58 59 55 61
52 59 61 56 41 40 43 44 46 48 50 52 68 69 60 61
62 62 86 85 55 59 64 72 75 70 70 62 66 61 55 57
65 62 68 72 102 94 90 83 74 81 96 69 52 50 51 54
62 59 55 61 99 97 93 80 65 87 107 80 59 60 67 66
62 55 56 56 80 90 99 88 64 91 112 94 76 91 100 85
63 57 58 58 77 92 82 71 59 90 105 92 79 98 110 83
59 58 60 64 88 99 82 81 71 80 89 89 89 102 104 75
55 54 53 61 82 102 88 93 96 94 110 114 109 103 92 68
55 55 56 60 91 95 86 98 115 105 110 107 101 89 85 68
62 63 64 59 85 88 95 106 110 99 89 82 79 84 97 79
55 56 54 58 65 75 82 77 74 74 69 61 62 71 73 63
`

// TestGetisOrdGrid: G* of the place at x = y = 210 m with the neighbours within 30 m, as
// spdep 1.2-7 of R computes it (Getis and Ord, in Longley and Batty, Spatial Analysis, 1996,
// print it with another variance, 1.447943).
func TestGetisOrdGrid(t *testing.T) {
	var values []float64
	sum := 0.0
	for _, field := range strings.Fields(grid) {
		v, err := strconv.ParseFloat(field, 64)
		if err != nil {
			t.Fatal(err)
		}
		values = append(values, v)
		sum += v
	}
	if len(values) != 256 || sum != 17052 {
		t.Fatalf("%d values, in all %g", len(values), sum)
	}
	g := lattice(16, 16, 1)
	const place = 7 + 16*7
	if values[place] != 83 {
		t.Fatalf("the value there is %g", values[place])
	}
	list, err := Clusters(context.Background(), g, values, Options{})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "G*", list[place].G, 1.450779807, 5e-10)
	near(t, "G* of the printed variance", list[place].G*math.Sqrt(255./256), 1.447943481, 5e-9)
}

// scattered is a graph of random links with random weights, one place without any.
func scattered(seed uint64, n int) (*Graph, []Link, []float64) {
	r := rand.New(rand.NewPCG(seed, 1))
	var links []Link
	for i := range n - 1 {
		for j := range i {
			if r.IntN(4) == 0 {
				links = append(links, Link{int32(i), int32(j), 0.1 + r.Float64()})
			}
		}
	}
	values := make([]float64, n)
	for i := range values {
		values[i] = r.NormFloat64()
	}
	return NewGraph(n, links), links, values
}

// TestLaws: scales and shifts change nothing; the local I add up; the order of links does
// not count.
func TestLaws(t *testing.T) {
	o := Options{Permutations: 199, Seed: 1, Threads: 2}
	for seed := range uint64(5) {
		g, links, values := scattered(seed, 40)
		r, _ := Autocorrelation(context.Background(), g, values, o)
		local, _ := Clusters(context.Background(), g, values, o)
		sum, s0 := 0.0, 0.0
		for _, l := range local {
			if !math.IsNaN(l.I) {
				sum += l.I
			}
		}
		for _, l := range links {
			s0 += 2 * l.Weight
		}
		near(t, "sum of local I", sum, s0*r.I, 1e-12*s0)

		slices.Reverse(links)
		for i := range links {
			links[i].A, links[i].B, links[i].Weight = links[i].B, links[i].A, 1024*links[i].Weight
		}
		scaled := make([]float64, len(values))
		for i, v := range values {
			scaled[i] = 1e6 + 64*v
		}
		h := NewGraph(len(values), links)
		q, _ := Autocorrelation(context.Background(), h, scaled, o)
		for _, x := range [][2]float64{{q.I, r.I}, {q.Variance, r.Variance}, {q.Z, r.Z}, {q.C, r.C}, {q.P, r.P}} {
			near(t, "scaled", x[0], x[1], 1e-7)
		}
		again, _ := Clusters(context.Background(), h, scaled, o)
		for i := range again {
			if math.IsNaN(local[i].G) != math.IsNaN(again[i].G) {
				t.Errorf("place %d: %v and scaled %v", i, local[i], again[i])
			} else if !math.IsNaN(local[i].G) {
				near(t, "scaled G*", again[i].G, local[i].G, 1e-6)
				near(t, "scaled p", again[i].P, local[i].P, 0)
			}
		}
	}
}

// TestMoments: over many permutations, the mean and variance of I are those of the closed
// forms.
func TestMoments(t *testing.T) {
	g, _, values := scattered(9, 30)
	want, _ := Autocorrelation(context.Background(), g, values, Options{})
	r := rand.New(rand.NewPCG(5, 5))
	const n = 20_000
	var sum, squares float64
	for range n {
		r.Shuffle(len(values), func(a, b int) { values[a], values[b] = values[b], values[a] })
		x, _ := Autocorrelation(context.Background(), g, values, Options{})
		sum += x.I
		squares += (x.I - want.Expected) * (x.I - want.Expected)
	}
	near(t, "mean", sum/n, want.Expected, 4*math.Sqrt(want.Variance/n))
	near(t, "variance", squares/n/want.Variance, 1, 0.06)
}

// TestThreads: any number of goroutines gives the same bits, and p is that of the seed.
func TestThreads(t *testing.T) {
	g, _, values := scattered(2, 60)
	first, _ := Autocorrelation(context.Background(), g, values, Options{999, 1, 1})
	local, _ := Clusters(context.Background(), g, values, Options{99, 1, 1})
	for threads := 2; threads <= 4; threads++ {
		if r, _ := Autocorrelation(context.Background(), g, values, Options{999, 1, threads}); r != first {
			t.Errorf("%d goroutines: %v, not %v", threads, r, first)
		}
		again, _ := Clusters(context.Background(), g, values, Options{99, 1, threads})
		for i := range again {
			if x, y := again[i], local[i]; x != y && !math.IsNaN(x.I) {
				t.Errorf("%d goroutines: %v, not %v", threads, x, y)
			}
		}
	}
	smooth, _ := Autocorrelation(context.Background(), lattice(5, 5, 5), upTo(125), Options{999, 1, 2})
	if smooth.P != 0.001 || smooth.Z < 5 {
		t.Errorf("a field that rises evenly has p %g, z %g", smooth.P, smooth.Z)
	}
}

// TestEveryArrangement: where all arrangements can be gone through, p comes near their
// share: 210 ways to place four ones in a line of ten.
func TestEveryArrangement(t *testing.T) {
	g := lattice(10, 1, 1)
	values := []float64{0, 0, 0, 1, 1, 1, 0, 1, 0, 0}
	r, _ := Autocorrelation(context.Background(), g, values, Options{Permutations: 19_999, Seed: 1, Threads: 2})
	far, all := 0, 0
	for bits := range 1 << 10 {
		x := make([]float64, 10)
		ones := 0
		for i := range x {
			x[i] = float64(bits >> i & 1)
			ones += bits >> i & 1
		}
		if ones != 4 {
			continue
		}
		all++
		q, _ := Autocorrelation(context.Background(), g, x, Options{})
		if math.Abs(q.I-q.Expected) >= math.Abs(r.I-r.Expected)-1e-12 {
			far++
		}
	}
	if all != 210 {
		t.Fatalf("%d arrangements", all)
	}
	near(t, "p", r.P, float64(far)/210, 0.015)
}

// TestUndefined: what has no answer has NaN and not a number.
func TestUndefined(t *testing.T) {
	o := Options{99, 1, 2}
	for name, c := range map[string]struct {
		g      *Graph
		values []float64
		i, z   bool // defined
	}{
		"none":       {NewGraph(0, nil), nil, false, false},
		"one":        {NewGraph(1, nil), []float64{1}, false, false},
		"two":        {lattice(2, 1, 1), []float64{1, 2}, true, false},
		"three":      {lattice(3, 1, 1), []float64{1, 2, 4}, true, false},
		"constant":   {lattice(3, 3, 1), []float64{.1, .1, .1, .1, .1, .1, .1, .1, .1}, false, false},
		"no links":   {NewGraph(5, nil), upTo(5), false, false},
		"everywhere": {NewGraph(4, []Link{{0, 1, 1}, {0, 2, 1}, {0, 3, 1}, {1, 2, 1}, {1, 3, 1}, {2, 3, 1}}), upTo(4), true, false},
		"nine":       {lattice(3, 3, 1), upTo(9), true, true},
	} {
		r, err := Autocorrelation(context.Background(), c.g, c.values, o)
		if err != nil || math.IsNaN(r.I) == c.i || math.IsNaN(r.C) == c.i || math.IsNaN(r.Z) == c.z {
			t.Errorf("%s: %+v %v", name, r, err)
		}
		list, err := Clusters(context.Background(), c.g, c.values, o)
		if err != nil || len(list) != c.g.Len() {
			t.Errorf("%s: %v %v", name, list, err)
		}
		for _, l := range list {
			if name != "nine" && name != "three" && !math.IsNaN(l.G) {
				t.Errorf("%s: G* is %g", name, l.G)
			}
		}
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := Autocorrelation(ctx, lattice(3, 3, 1), upTo(9), o); err == nil {
		t.Error("no error of a context that was cancelled")
	}
}

// TestDiscoveries is the example of Benjamini and Hochberg (1995): fifteen probabilities, of
// which four stand at 5 %.
func TestDiscoveries(t *testing.T) {
	p := []float64{.0001, .0004, .0019, .0095, .0201, .0278, .0298, .0344, .0459, .3240, .4262, .5719, .6528, .7590, 1, math.NaN()}
	if n := Discoveries(p, .05); n != 4 {
		t.Errorf("%d, wanted 4", n)
	}
}
