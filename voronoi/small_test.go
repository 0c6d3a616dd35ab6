package voronoi

import (
	"math"
	"testing"
)

func TestSum(t *testing.T) {
	for _, k := range []struct {
		numbers []float64
		want    float64
	}{
		{nil, 0},
		{[]float64{1, 1e100, 1, -1e100}, 2}, // Neumaier's own example
		{[]float64{0.1, 0.2, 0.3, -0.6}, 0},
		{[]float64{inf, 1, 2}, inf},
		{[]float64{math.MaxFloat64, math.MaxFloat64}, inf},
	} {
		if got := Total(k.numbers); math.Abs(got-k.want) > 1e-16 && got != k.want {
			t.Errorf("%v add up to %v, want %v", k.numbers, got, k.want)
		}
	}
}

func TestOrigin(t *testing.T) {
	for _, k := range []struct {
		name  string
		sites []Vec
		moved bool // along x
	}{
		{"near zero", []Vec{v(-1, 0, 0), v(3, 0, 0)}, false},
		{"a map", []Vec{v(5e6+0.125, 0, 0), v(5e6+30.7, 0, 0)}, true},
		{"one site", []Vec{v(1234.5678, 0, 0)}, true},
		{"decimals", []Vec{v(512345.678, 1, 1), v(512346.789, 1, 1), v(512999.001, 1, 1)}, true},
		// 1/3 cannot be told from a place near 10^6 without loss of its last bits.
		{"far apart", []Vec{v(1e6, 0, 0), v(1e6+1, 0, 0), v(1.0/3, 0, 0)}, false},
	} {
		o := exactOrigin(k.sites)
		if (o.X != 0) != k.moved {
			t.Errorf("%s: origin %v", k.name, o)
		}
		for _, p := range k.sites {
			if add(sub(p, o), o) != p || lostBySub(p, o, sub(p, o)) != (Vec{}) {
				t.Errorf("%s: %v is not shifted exactly by %v", k.name, p, o)
			}
		}
	}
	if lostBySub(v(1.0/3, 0, 0), v(1e6, 0, 0), sub(v(1.0/3, 0, 0), v(1e6, 0, 0))) == (Vec{}) {
		t.Error("a loss was not seen")
	}
}

func TestFactsOfShape(t *testing.T) {
	f := diagram(t, sheet(1000, 51), Options{}).Facts()
	if !f.Flat || f.Dimension != 3 || f.Extent[2] > 6e-4 || f.Extent[0] < 1 {
		t.Errorf("a sheet: %+v", f)
	}
	if f := diagram(t, random(1000, 52), Options{}).Facts(); f.Flat || f.Extent[2] < 0.9 {
		t.Errorf("a cube: %+v", f)
	}
	var plane []Vec
	for _, p := range grid(6) {
		x, y := math.Round(p.X*12), math.Round(p.Y*12) // small integers: the plane is exact
		plane = append(plane, v(x, y, 2*x-y))
	}
	if f := diagram(t, plane, Options{}).Facts(); f.Dimension != 2 || len(f.Groups) != 36 {
		t.Errorf("a plane: dimension %d, %d groups", f.Dimension, len(f.Groups))
	}
}

func TestNearest(t *testing.T) {
	sites := random(500, 53)
	by := v(1e6, -2e6, 0)
	for i := range sites {
		sites[i] = add(sites[i], by)
	}
	d := diagram(t, append(sites, sites[3]), Options{})
	for i, p := range sites {
		if s, dist := d.Nearest(p); int(s) != i || dist != 0 {
			t.Errorf("nearest to site %d: %d at %v", i, s, dist)
		}
	}
	none := diagram(t, []Vec{v(9, 9, 9)}, Options{Solid: unitBox})
	if s, dist := none.Nearest(v(0, 0, 0)); s != -1 || !math.IsInf(dist, 1) {
		t.Errorf("nearest of none: %d at %v", s, dist)
	}
}

// The key follows the content, not the place in memory, and knows -0 from nothing
// else.
func TestKey(t *testing.T) {
	sites := random(20, 54)
	sites[0].X = 0
	key := func(sites []Vec, o Options) [16]byte { return diagram(t, sites, o).Key() }
	want := key(sites, Options{Solid: unitBox})
	again := append([]Vec{}, sites...)
	again[0].X = math.Copysign(0, -1)
	if key(again, Options{Solid: brick{v(0, 0, 0), v(1, 1, 1)}, Threads: 5}) != want {
		t.Error("equal content, different keys")
	}
	again[3].Y = math.Nextafter(again[3].Y, 2)
	seen := map[[16]byte]bool{want: true}
	for _, k := range [][16]byte{
		key(again, Options{Solid: unitBox}), key(sites, Options{}), key(sites[:19], Options{Solid: unitBox}),
		key(sites, Options{Solid: unitBox, Tolerance: 0.5}), key(sites, Options{Solid: brick{v(0, 0, 0), v(1, 1, 2)}}),
	} {
		if seen[k] {
			t.Error("different content, equal keys")
		}
		seen[k] = true
	}
}
