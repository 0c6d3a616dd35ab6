package coverage

import (
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/solid"
)

// climb improves a place by steps in random directions, ever shorter, and never
// leaves the solid.
func climb(sites []Vec, body solid.Solid, p Vec, r *rand.Rand) (Vec, float64) {
	best := toNearest(sites, p)
	for step := best; step > 1e-9*best; {
		better := false
		for range 24 {
			q := add(p, scale(step, direction(r)))
			if d := toNearest(sites, q); d > best && inside(body, q) {
				p, best, better = q, d, true
			}
		}
		if !better {
			step /= 2
		}
	}
	return p, best
}

// No place that a dense search with refinement finds is farther from every site than
// the first gap; and the refinement of a place near a gap never leads above it.
func TestDenseSearch(t *testing.T) {
	places := map[Place]int{}
	for seed := range uint64(40) {
		r := rand.New(rand.NewPCG(seed, 17))
		m := newRoom(t, r, seed%2 == 1)
		n := []int{1, 2, 3, 5, 8, 20, 60, 200}[seed%8]
		sites := m.places(r, n)
		g := gapsOf(t, sites, m.solid)
		places[g[0].Place]++
		top := make([]Vec, 0, 4)
		for range 1500 {
			p := m.place(r)
			if len(top) < cap(top) {
				top = append(top, p)
				continue
			}
			worst := 0
			for i := range top {
				if toNearest(sites, top[i]) < toNearest(sites, top[worst]) {
					worst = i
				}
			}
			if toNearest(sites, p) > toNearest(sites, top[worst]) {
				top[worst] = p
			}
		}
		reached := 0.0
		for _, p := range top {
			_, d := climb(sites, m.solid, p, r)
			reached = max(reached, d)
		}
		if reached > g[0].Radius*(1+1e-12) {
			t.Errorf("room %d: a search finds %.15g, the largest gap is %.15g", seed, reached, g[0].Radius)
		}
		if n <= 8 && reached < g[0].Radius*0.99 {
			t.Errorf("room %d: a search finds no more than %.15g, the largest gap is %.15g", seed, reached, g[0].Radius)
		}
	}
	if places[Corner] == 0 || places[Edge] == 0 {
		t.Errorf("the winners are all alike: %v", places)
	}
}

// Every gap is as far from the nearest site as it says, lies in the solid, and is
// higher than all around it: at steps of all sizes the distance never grows at first
// order, and from a short step on not at all.
func TestGapsArePeaks(t *testing.T) {
	total := map[Place]int{}
	for seed := range uint64(30) {
		r := rand.New(rand.NewPCG(seed, 5))
		m := newRoom(t, r, seed%2 == 1)
		sites := m.places(r, []int{1, 2, 4, 10, 40}[seed%5])
		for _, g := range gapsOf(t, sites, m.solid) {
			total[g.Place]++
			if d := toNearest(sites, g.At); d != g.Radius || length(sub(sites[g.Site], g.At)) > d*(1+1e-9) {
				t.Fatalf("room %d: %+v is %.17g from the nearest site", seed, g, d)
			}
			if m.solid.Side(g.At, 1e-12) == solid.Outside {
				t.Fatalf("room %d: %+v lies outside", seed, g)
			}
			if on := m.solid.Side(g.At, 1e-12) == solid.On; on != (g.Place != Inside) {
				t.Fatalf("room %d: %+v lies on a wall: %v", seed, g, on)
			}
			for range 400 {
				// Moving by t along a ridge makes the distance grow by less than t²/2r.
				q := add(g.At, scale(1e-6*g.Radius, direction(r)))
				if inside(m.solid, q) && toNearest(sites, q) > g.Radius*(1+1e-12) {
					t.Fatalf("room %d: %v is higher than %+v", seed, q, g)
				}
			}
		}
	}
	for _, p := range []Place{Inside, Wall, Edge, Corner} {
		if total[p] < 20 {
			t.Errorf("only %d gaps with the place %v were looked at", total[p], p)
		}
	}
}

// A site put at the largest gap makes that one go, and no gap grow.
func TestFillingGaps(t *testing.T) {
	for seed := range uint64(8) {
		r := rand.New(rand.NewPCG(seed, 11))
		m := newRoom(t, r, seed%2 == 0)
		sites := m.places(r, 5)
		before := gapsOf(t, sites, m.solid)
		for range 12 {
			at := before[0].At
			sites = append(sites, at)
			after := gapsOf(t, sites, m.solid)
			if g, ok := find(after, at, 1e-9); ok {
				t.Fatalf("room %d: %+v is a gap although a site stands there", seed, g)
			}
			for _, g := range after {
				if g.Radius > before[0].Radius*(1+1e-12) {
					t.Fatalf("room %d: a gap grew to %v", seed, g.Radius)
				}
				if g.Radius > length(sub(g.At, at))*(1+1e-12) {
					t.Fatalf("room %d: %+v does not know the new site", seed, g)
				}
			}
			before = after
		}
	}
}

// A wall that stands in the middle of nothing: the seams between the parts of a plan
// make no gaps and lose none. The same space is told as a rectangle and as a plan that
// is cut into many parts.
func TestSeams(t *testing.T) {
	for seed := range uint64(10) {
		r := rand.New(rand.NewPCG(seed, 23))
		whole := box(t, Vec{}, Vec{X: 6, Y: 5, Z: 3})
		// A notch so narrow at the far end that it only makes seams.
		outline := []solid.Vec2{{X: 0, Y: 0}, {X: 6, Y: 0}, {X: 6, Y: 5}, {X: 3.001, Y: 5}, {X: 3, Y: 4.999}, {X: 2.999, Y: 5}, {X: 0, Y: 5}}
		cut, err := solid.NewPrism(outline, nil, 0, 3)
		if err != nil {
			t.Fatal(err)
		}
		sites := make([]Vec, 12)
		for i := range sites {
			sites[i] = placeIn(cut, r)
		}
		notch := Vec{X: 3, Y: 5}
		off := func(g Gap) bool { return math.Hypot(g.At.X-notch.X, g.At.Y-notch.Y) > 0.01 }
		a, b := gapsOf(t, sites, whole), gapsOf(t, sites, cut)
		for _, pair := range [2][2][]Gap{{a, b}, {b, a}} {
			for _, g := range pair[0] {
				other, ok := find(pair[1], g.At, 1e-12)
				if off(g) && (!ok || other.Place != g.Place || other.Site != g.Site) {
					t.Errorf("room %d: %+v against %+v, found %v", seed, g, other, ok)
				}
			}
		}
	}
}

// Plans that touch themselves: holes that stand on a side with a corner, share a corner
// with the outline or with one another, and cut the plan in two. Around such corners the
// directions into the room are several cones.
func TestTouchingHoles(t *testing.T) {
	square := []solid.Vec2{{X: 0, Y: 0}, {X: 8, Y: 0}, {X: 8, Y: 8}, {X: 0, Y: 8}}
	total := 0
	for i, holes := range [][][]solid.Vec2{
		{{{X: 4, Y: 0}, {X: 6, Y: 3}, {X: 2, Y: 3}}},
		{{{X: 0, Y: 0}, {X: 6, Y: 2}, {X: 2, Y: 6}}},
		{{{X: 2, Y: 2}, {X: 4, Y: 4}, {X: 2, Y: 5}}, {{X: 4, Y: 4}, {X: 6, Y: 3}, {X: 6, Y: 6}}},
		{{{X: 3, Y: 0}, {X: 5, Y: 0}, {X: 5, Y: 8}, {X: 3, Y: 8}}},
		{{{X: 0, Y: 4}, {X: 4, Y: 0}, {X: 8, Y: 4}, {X: 4, Y: 8}}},
	} {
		body, err := solid.NewPrism(square, holes, 0, 3)
		if err != nil {
			t.Fatal(err)
		}
		r := rand.New(rand.NewPCG(uint64(i), 41))
		sites := make([]Vec, 3+4*i)
		for k := range sites {
			sites[k] = placeIn(body, r)
		}
		g := gapsOf(t, sites, body)
		for _, x := range g {
			total++
			for range 300 {
				q := add(x.At, scale(1e-6*x.Radius, direction(r)))
				if inside(body, q) && toNearest(sites, q) > x.Radius*(1+1e-12) {
					t.Fatalf("plan %d: %v is higher than %+v", i, q, x)
				}
			}
		}
		for range 6 {
			if p, d := climb(sites, body, placeIn(body, r), r); d > g[0].Radius*(1+1e-12) {
				t.Errorf("plan %d: %v is %v from every site, the largest gap %v", i, p, d, g[0].Radius)
			}
		}
	}
	if total < 40 {
		t.Errorf("only %d gaps", total)
	}
}
