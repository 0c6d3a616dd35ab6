package coverage

import (
	"context"
	"math"
	"math/rand/v2"
	"reflect"
	"strconv"
	"testing"

	"nearcell/voronoi/solid"
)

func placesOf(t testing.TB, sites []Vec, body solid.Solid, n int, o PlaceOptions) []Placement {
	t.Helper()
	p, err := Places(context.Background(), diagramOf(t, sites, body), sites, n, o)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// Each place is the largest gap among the sites and the places before it, the radius after
// it the largest gap then, and radii never increase: against gaps found anew each time.
func TestPlacesAreGapsFoundAnew(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 1))
	for k := range 8 {
		var body solid.Solid = box(t, Vec{}, Vec{X: 10, Y: 8, Z: 4})
		sites := twenty(t)
		if k > 0 {
			m := newRoom(t, r, k&1 == 1)
			body, sites = m.solid, m.places(r, 1+3*k)
		}
		if k > 5 {
			body = asMesh(t, body)
		}
		placed := placesOf(t, sites, body, 12, PlaceOptions{})
		if len(placed) != 12 {
			t.Fatalf("room %d: %d places", k, len(placed))
		}
		all := append([]Vec{}, sites...)
		for i, p := range placed {
			if g := gapsOf(t, all, body); math.Abs(g[0].Radius-p.Radius) > 1e-9*p.Radius {
				t.Fatalf("room %d, place %d: radius %.15g, the largest gap has %.15g", k, i, p.Radius, g[0].Radius)
			}
			if d := toNearest(all, p.At); math.Abs(d-p.Radius) > 1e-12 || body.Side(p.At, 1e-9) == solid.Outside {
				t.Errorf("room %d, place %d at %v: %.15g from the nearest, not %.15g", k, i, p.At, d, p.Radius)
			}
			all = append(all, p.At)
			if g := gapsOf(t, all, body); math.Abs(g[0].Radius-p.After) > 1e-9*p.After {
				t.Fatalf("room %d, place %d: radius after %.15g, the largest gap has %.15g", k, i, p.After, g[0].Radius)
			}
			if i > 0 && (p.Radius > placed[i-1].Radius*(1+1e-12) || math.Abs(p.Radius-placed[i-1].After) > 1e-12) {
				t.Errorf("room %d, place %d: radius %.17g after %.17g", k, i, p.Radius, placed[i-1].After)
			}
		}
		if again := placesOf(t, sites, body, 12, PlaceOptions{Options: Options{Threads: 1}}); !reflect.DeepEqual(placed, again) {
			t.Errorf("room %d: one thread gives other places", k)
		}
	}
}

// A site in the middle of a cube: the eight corners are equal, and come by x, y, z.
func TestEqualPlaces(t *testing.T) {
	placed := placesOf(t, []Vec{{X: 0.5, Y: 0.5, Z: 0.5}}, box(t, Vec{}, Vec{X: 1, Y: 1, Z: 1}), 8, PlaceOptions{})
	for i, p := range placed {
		want := Vec{X: float64(i >> 2), Y: float64(i >> 1 & 1), Z: float64(i & 1)}
		if p.At != want || math.Abs(p.Radius-math.Sqrt(0.75)) > 1e-15 {
			t.Errorf("place %d at %v, radius %g; want %v", i, p.At, p.Radius, want)
		}
	}
	if last := placed[7].After; !(last < 0.8) {
		t.Errorf("radius after all corners: %g", last)
	}
}

// Clear of the walls of a box the corners are those of the smaller box; in rooms no place of a
// search is farther by more than what is promised.
func TestClearance(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 2))
	placed := placesOf(t, []Vec{{X: 15, Y: 6, Z: 2}}, box(t, Vec{}, Vec{X: 30, Y: 12, Z: 7.5}), 4, PlaceOptions{Clearance: 0.3})
	for _, p := range placed[:2] {
		if (p.At.X != 0.3 && p.At.X != 29.7) || (p.At.Y != 0.3 && p.At.Y != 11.7) || p.At.Z != 7.2 {
			t.Errorf("placed at %v", p.At)
		}
	}
	for k := range 4 {
		m := newRoom(t, r, k > 1)
		body := m.solid
		if k == 3 {
			body = asMesh(t, body)
		}
		sites := m.places(r, 3+k)
		const clearance = 0.2
		placed := placesOf(t, sites, body, 4, PlaceOptions{Clearance: clearance})
		if len(placed) != 4 {
			t.Fatalf("room %d: %d places", k, len(placed))
		}
		all := append([]Vec{}, sites...)
		for i, p := range placed {
			if body.Side(p.At, 0) != solid.Inside || body.Distance(p.At) < clearance-1e-10 {
				t.Errorf("room %d, place %d at %v is %g from the walls", k, i, p.At, body.Distance(p.At))
			}
			if d := toNearest(all, p.At); math.Abs(d-p.Radius) > 1e-12 {
				t.Errorf("room %d, place %d: radius %.15g, %.15g from the nearest", k, i, p.Radius, d)
			}
			for range 3000 {
				if q := m.place(r); body.Distance(q) >= clearance && toNearest(all, q) > p.Radius*(1+ClearanceWithin) {
					t.Fatalf("room %d, place %d: %v is %g from the nearest, more than %g", k, i, q, toNearest(all, q), p.Radius)
				}
			}
			all = append(all, p.At)
			if g := gapsOf(t, all, body); math.Abs(g[0].Radius-p.After) > 1e-9*p.After {
				t.Errorf("room %d, place %d: radius after %g, the largest gap has %g", k, i, p.After, g[0].Radius)
			}
		}
	}
}

// From a list: the farthest each time, those outside never, until none is left but sites.
func TestAmong(t *testing.T) {
	body := box(t, Vec{}, Vec{X: 10, Y: 1, Z: 1})
	at := func(x float64) Vec { return Vec{X: x, Y: 0.5, Z: 0.5} }
	list := []Vec{at(9), at(2), at(12), at(6), at(9.95), at(1)}
	placed := placesOf(t, []Vec{at(1)}, body, 9, PlaceOptions{Among: list, Clearance: 0.1})
	var index []int32
	for _, p := range placed {
		index = append(index, p.Index)
	}
	if want := []int32{0, 3, 1}; !reflect.DeepEqual(index, want) { // 8, then 3 from 9, then 1 from 1
		t.Errorf("chosen %v, want %v", index, want)
	}
	if placed[0].Radius != 8 || placed[1].Radius != 3 || placed[2].Radius != 1 {
		t.Errorf("%+v", placed)
	}
}

// Without a solid only places among the sites are known.
func TestPlacesWithoutASolid(t *testing.T) {
	if p := placesOf(t, []Vec{{}, {X: 1}}, nil, 3, PlaceOptions{}); len(p) != 0 {
		t.Errorf("%+v", p)
	}
	if p := placesOf(t, twenty(t), nil, 3, PlaceOptions{}); len(p) != 3 || p[0].Radius < p[2].Radius {
		t.Errorf("%+v", p)
	}
}

// One and fifty further sites among ten thousand in an L-shaped room. Gaps are found once; what
// fifty take longer is the figure of a place.
func BenchmarkPlaces(b *testing.B) {
	r := rand.New(rand.NewPCG(7, 3))
	m := newRoom(b, r, false)
	sites := m.places(r, 10_000)
	d := diagramOf(b, sites, m.solid)
	for _, n := range []int{1, 50} {
		b.Run(strconv.Itoa(n), func(b *testing.B) {
			for b.Loop() {
				if _, err := Places(context.Background(), d, sites, n, PlaceOptions{}); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Microseconds())/float64(b.N)/10_000, "µs/site")
		})
	}
}
