package coverage

import (
	"context"
	"encoding/csv"
	"math"
	"math/rand/v2"
	"os"
	"strconv"
	"testing"

	"nearcell/voronoi"
	"nearcell/voronoi/solid"
)

// twenty are the sites of testdata/reference, whose README says what they are.
func twenty(t testing.TB) []Vec {
	t.Helper()
	f, err := os.Open("../../testdata/reference/twenty.csv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	lines, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var out []Vec
	for _, l := range lines[1:] {
		var p [3]float64
		for i := range p {
			if p[i], err = strconv.ParseFloat(l[1+i], 64); err != nil {
				t.Fatal(err)
			}
		}
		out = append(out, Vec{X: p[0], Y: p[1], Z: p[2]})
	}
	return out
}

func box(t testing.TB, lo, hi Vec) solid.Solid {
	t.Helper()
	b, err := solid.NewBox(lo, hi)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

// gapsOf takes sites on walls in, on whichever side rounding put them.
func gapsOf(t testing.TB, sites []Vec, body solid.Solid) []Gap {
	t.Helper()
	d, err := voronoi.New(sites, voronoi.Options{Solid: body, Tolerance: 1e-9})
	if err != nil {
		t.Fatal(err)
	}
	g, err := Gaps(context.Background(), d, sites, Options{})
	if err != nil {
		t.Fatal(err)
	}
	for i := 1; i < len(g); i++ {
		if g[i].Radius > g[i-1].Radius {
			t.Fatalf("gap %d is larger than the one before", i)
		}
	}
	return g
}

// toNearest is the distance from p to the nearest site, from the definition.
func toNearest(sites []Vec, p Vec) float64 {
	best := math.Inf(1)
	for _, s := range sites {
		best = min(best, math.Sqrt(dot(sub(s, p), sub(s, p))))
	}
	return best
}

func inside(body solid.Solid, p Vec) bool {
	return body == nil || body.Side(p, 0) != solid.Outside
}

func direction(r *rand.Rand) Vec {
	for {
		v := Vec{X: r.NormFloat64(), Y: r.NormFloat64(), Z: r.NormFloat64()}
		if l := length(v); l > 1e-3 {
			return scale(1/l, v)
		}
	}
}

// room is a prism as its plan.
type room struct {
	rings  [][]solid.Vec2
	z0, z1 float64
	solid  solid.Solid
}

// newRoom is an L-shaped room of random size, with up to two holes, turned by an
// angle if turned.
func newRoom(t testing.TB, r *rand.Rand, turned bool) *room {
	t.Helper()
	a, b := 4+6*r.Float64(), 4+6*r.Float64()
	c, d := a*(0.3+0.4*r.Float64()), b*(0.3+0.4*r.Float64()) // the corner that is missing begins here
	rings := [][]solid.Vec2{{{X: 0, Y: 0}, {X: a, Y: 0}, {X: a, Y: d}, {X: c, Y: d}, {X: c, Y: b}, {X: 0, Y: b}}}
	holes := r.IntN(3)
	if holes > 0 { // a pillar, wholly inside
		x, y, s := 0.3*c, 0.3*d, 0.2*min(c, d)
		rings = append(rings, []solid.Vec2{{X: x, Y: y}, {X: x + s, Y: y + 0.3*s}, {X: x + 0.4*s, Y: y + s}})
	}
	if holes > 1 { // a shaft in the corner
		rings = append(rings, []solid.Vec2{{X: a, Y: 0}, {X: a, Y: 0.3 * d}, {X: 0.8 * a, Y: 0.3 * d}, {X: 0.8 * a, Y: 0}})
	}
	if turned {
		sin, cos := math.Sincos(2 * math.Pi * r.Float64())
		for _, ring := range rings {
			for i, p := range ring {
				ring[i] = solid.Vec2{X: cos*p.X - sin*p.Y, Y: sin*p.X + cos*p.Y}
			}
		}
	}
	m := &room{rings: rings, z0: -1, z1: -1 + 1 + 3*r.Float64()}
	p, err := solid.NewPrism(rings[0], rings[1:], m.z0, m.z1)
	if err != nil {
		t.Fatal(err)
	}
	m.solid = p
	return m
}

// place is a random place in the room.
func (m *room) place(r *rand.Rand) Vec { return placeIn(m.solid, r) }

func placeIn(body solid.Solid, r *rand.Rand) Vec {
	lo, hi := body.Bounds()
	for {
		p := Vec{X: lo.X + r.Float64()*(hi.X-lo.X), Y: lo.Y + r.Float64()*(hi.Y-lo.Y), Z: lo.Z + r.Float64()*(hi.Z-lo.Z)}
		if body.Side(p, 0) == solid.Inside {
			return p
		}
	}
}

func (m *room) places(r *rand.Rand, n int) []Vec {
	out := make([]Vec, n)
	for i := range out {
		out[i] = m.place(r)
	}
	return out
}

// find is the gap at a place.
func find(g []Gap, at Vec, tol float64) (Gap, bool) {
	for _, x := range g {
		if length(sub(x.At, at)) <= tol {
			return x, true
		}
	}
	return Gap{}, false
}

func count(g []Gap) map[Place]int {
	n := map[Place]int{}
	for _, x := range g {
		n[x.Place]++
	}
	return n
}
