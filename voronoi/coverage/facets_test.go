package coverage

import (
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/solid"
	"nearcell/voronoi/solid/mesh"
)

// A room told by its plan and the same room told by its triangles have the same gaps.
func TestRoomIsItsMesh(t *testing.T) {
	total := map[Place]int{}
	for seed := range uint64(12) {
		r := rand.New(rand.NewPCG(seed, 31))
		room := newRoom(t, r, seed%2 == 1)
		v, tri := room.solid.(mesh.Surfaced).Surface()
		m, _, err := mesh.New(v, tri, mesh.Options{})
		if err != nil {
			t.Fatal(err)
		}
		sites := room.places(r, []int{1, 3, 10, 40}[seed%4])
		a, b := gapsOf(t, sites, room.solid), gapsOf(t, sites, m)
		if len(a) != len(b) {
			t.Errorf("room %d: %d gaps by its plan, %d by its triangles", seed, len(a), len(b))
		}
		for _, g := range a {
			total[g.Place]++
			if other, ok := find(b, g.At, 1e-9); !ok || other.Place != g.Place || other.Site != g.Site {
				t.Errorf("room %d: %+v against %+v, found %v", seed, g, other, ok)
			}
		}
	}
	for _, p := range []Place{Inside, Wall, Edge, Corner} {
		if total[p] < 8 {
			t.Errorf("only %d gaps with the place %v were looked at", total[p], p)
		}
	}
}

// Solids that no plan describes: boxes joined and taken away. No search finds a place
// farther from every site than the first gap, and no place around a gap is higher.
func TestCombinedRooms(t *testing.T) {
	for seed := range uint64(16) {
		r := rand.New(rand.NewPCG(seed, 37))
		corner := func(lo, hi float64) Vec {
			return Vec{X: lo + r.Float64()*(hi-lo), Y: lo + r.Float64()*(hi-lo), Z: lo + r.Float64()*(hi-lo)}
		}
		body := box(t, Vec{}, Vec{X: 8, Y: 6, Z: 4})
		for k := range 3 {
			at := corner(-1, 6)
			op := mesh.Minus
			if k == 2 {
				op = mesh.Plus
			}
			m, err := mesh.Combine(op, body, box(t, at, add(at, corner(1, 4))))
			if err != nil {
				t.Fatal(err)
			}
			body = m
		}
		sites := make([]Vec, 1+seed*2)
		for i := range sites {
			sites[i] = placeIn(body, r)
		}
		g := gapsOf(t, sites, body)
		if len(g) == 0 {
			t.Fatalf("solid %d has no gap", seed)
		}
		for _, x := range g {
			if on := body.Side(x.At, 1e-9) == solid.On; on != (x.Place != Inside) {
				t.Errorf("solid %d: %+v lies on a wall: %v", seed, x, on)
			}
			for range 100 {
				q := add(x.At, scale(1e-6*x.Radius, direction(r)))
				if inside(body, q) && toNearest(sites, q) > x.Radius*(1+1e-12) {
					t.Fatalf("solid %d: %v is higher than %+v", seed, q, x)
				}
			}
		}
		for range 25 {
			if p, d := climb(sites, body, placeIn(body, r), r); d > g[0].Radius*(1+1e-9) {
				t.Errorf("solid %d: %v is %v from every site, the largest gap %v", seed, p, d, g[0].Radius)
			}
		}
	}
}
