package coverage

import (
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/solid"
)

// The twenty sites in their box. The places and distances were computed in rational
// numbers by an independent program: these are the places with the greatest distance
// among corners of the box, edges of the box on faces of cells, walls on edges of
// cells, and vertices of the diagram. Not all of them are gaps: from (353/40, 8, 0) the
// distance grows along the edge of the box towards (10, 8, 0), and from the best vertex
// of the diagram in the box towards the floor.
func TestTwenty(t *testing.T) {
	sites := twenty(t)
	body := box(t, Vec{}, Vec{X: 10, Y: 8, Z: 4})
	g := gapsOf(t, sites, body)
	want := []struct {
		at     Vec
		radius float64
		site   int32 // its number - 1
		place  Place
		gap    bool
		uphill Vec // where it is none
	}{
		{Vec{X: 10, Y: 8}, 4.102438299, 16, Corner, true, Vec{}},
		{Vec{Y: 8, Z: 4}, 3.661966685, 10, Corner, true, Vec{}},
		{Vec{Y: 919. / 124, Z: 4}, 3.644943256, 10, Edge, true, Vec{}},
		{Vec{X: 10, Y: 8, Z: 4}, 3.581898938, 16, Corner, true, Vec{}},
		{Vec{X: 353. / 40, Y: 8}, 3.578494795, 0, Edge, false, Vec{X: 1}},
		{Vec{X: 2.354402516, Y: 5.259433962, Z: 0.370125786}, 2.796509657, 0, Inside, false, Vec{Z: -1}},
	}
	seen := 0
	for _, w := range want {
		if d := toNearest(sites, w.at); math.Abs(d-w.radius) > 1e-9 {
			t.Errorf("from %v it is %.10g to the nearest site, want %.10g", w.at, d, w.radius)
		}
		x, ok := find(g, w.at, 1e-8)
		if ok != w.gap {
			t.Errorf("%v is a gap: %v", w.at, ok)
			continue
		}
		if !ok {
			up := add(w.at, scale(1e-3, w.uphill))
			if !inside(body, up) || toNearest(sites, up) <= w.radius {
				t.Errorf("%v has no way up towards %v", w.at, w.uphill)
			}
			continue
		}
		if x != g[seen] {
			t.Errorf("%v is not gap %d", w.at, seen)
		}
		seen++
		if math.Abs(x.Radius-w.radius) > 1e-9 || x.Site != w.site || x.Place != w.place {
			t.Errorf("the gap %+v, want %+v", x, w)
		}
		if w.place == Corner && x.At != w.at {
			t.Errorf("a corner of the box is told as %v", x.At)
		}
	}
}

func cubeCorners() []Vec {
	var out []Vec
	for i := range 8 {
		out = append(out, Vec{X: float64(i & 1), Y: float64(i >> 1 & 1), Z: float64(i >> 2)})
	}
	return out
}

// Cases that can be worked out by hand.
func TestByHand(t *testing.T) {
	one := Vec{X: 1, Y: 1, Z: 1}
	middle := Vec{X: 0.5, Y: 0.5, Z: 0.5}
	root := math.Sqrt
	for _, c := range []struct {
		name  string
		sites []Vec
		body  solid.Solid
		n     int
		at    Vec // of the first
		r     float64
		place Place
	}{
		{"eight on a sphere make one gap", cubeCorners(), nil, 1, middle, root(3) / 2, Inside},
		{"and in the cube", cubeCorners(), box(t, Vec{}, one), 1, middle, root(3) / 2, Inside},
		{"octahedron", []Vec{{X: 1}, {X: -1}, {Y: 1}, {Y: -1}, {Z: 1}, {Z: -1}}, nil, 1, Vec{}, 1, Inside},
		{"the vertices of the cube with its centre lie outside the hull", append(cubeCorners(), middle), nil, 0, Vec{}, 0, Inside},
		{"in the cube they are on the walls", append(cubeCorners(), middle), box(t, Vec{}, one), 24,
			Vec{X: 0, Y: 0.25, Z: 0.5}, root(5) / 4, Wall},
		{"one site without a solid", []Vec{middle}, nil, 0, Vec{}, 0, Inside},
		{"one site in a box", []Vec{{X: 0.1, Y: 0.2, Z: 0.3}}, box(t, Vec{}, one), 8, one, root(0.81 + 0.64 + 0.49), Corner},
		{"a site in a corner", []Vec{{}}, box(t, Vec{}, one), 1, one, root(3), Corner},
		{"a site on an edge", []Vec{{X: 0.25}}, box(t, Vec{}, one), 2, one, root(2 + 0.5625), Corner},
		// The place with the greatest distance on the middle plane is a ridge that
		// leads up to its corners; these are edges of the box.
		{"two sites", []Vec{{X: 2, Y: 2, Z: 1.5}, {X: 6, Y: 2, Z: 1.5}}, box(t, Vec{}, Vec{X: 10, Y: 4, Z: 3}), 12,
			Vec{X: 10}, root(16 + 4 + 2.25), Corner},
		{"sites in a plane without a solid", []Vec{{}, {X: 1}, {Y: 1}, {X: 1, Y: 1}, {X: 0.3, Y: 0.4}}, nil, 0, Vec{}, 0, Inside},
		// The middle of a right triangle's hypotenuse is surrounded in no plane but its own.
		{"right angles", []Vec{{}, {X: 1}, {Y: 1}, {Z: 1}}, nil, 0, Vec{}, 0, Inside},
	} {
		t.Run(c.name, func(t *testing.T) {
			g := gapsOf(t, c.sites, c.body)
			if len(g) != c.n {
				t.Fatalf("%d gaps, want %d: %v", len(g), c.n, g)
			}
			if c.n == 0 {
				return
			}
			if length(sub(g[0].At, c.at)) > 1e-15 || math.Abs(g[0].Radius-c.r) > 1e-15*c.r || g[0].Place != c.place {
				t.Errorf("the first is %+v, want %v, %v, %v", g[0], c.at, c.r, c.place)
			}
		})
	}
}

// A grid in the middles of bricks: every corner of a brick is a gap, once, on all
// parts of the box.
func TestGrid(t *testing.T) {
	for _, shift := range []float64{0, 2.5e6, 0.1} {
		var sites []Vec
		for i := range 64 {
			sites = append(sites, Vec{X: shift + float64(i&3) + 0.5, Y: shift + float64(i>>2&3) + 0.5, Z: shift + float64(i>>4) + 0.5})
		}
		g := gapsOf(t, sites, box(t, Vec{X: shift, Y: shift, Z: shift}, Vec{X: shift + 4, Y: shift + 4, Z: shift + 4}))
		if n := count(g); n[Corner] != 8 || n[Edge] != 12*3 || n[Wall] != 6*9 || n[Inside] != 27 || len(g) != 125 {
			t.Errorf("shifted by %v: %d gaps, by place %v", shift, len(g), n)
		}
		for _, x := range g {
			if math.Abs(x.Radius-math.Sqrt(3)/2) > 1e-15+1e-15*shift {
				t.Errorf("shifted by %v: a radius is %v", shift, x.Radius)
			}
		}
	}
}

// lattice is the points a·i + b·j + c·k + one of the motif in a cube about the origin.
func lattice(a, b, c Vec, motif []Vec, size float64) []Vec {
	var out []Vec
	const n = 8
	for i := -n; i <= n; i++ {
		for j := -n; j <= n; j++ {
			for k := -n; k <= n; k++ {
				for _, m := range motif {
					p := add(add(add(scale(float64(i), a), scale(float64(j), b)), scale(float64(k), c)), m)
					if largest(p) <= size {
						out = append(out, p)
					}
				}
			}
		}
	}
	return out
}

// The holes of lattices: covering radius and holes of face-centred, body-centred and
// hexagonal lattices (Conway & Sloane, Sphere Packings, Lattices and Groups), and
// how many there are for each site. More than four sites around a hole and walls of
// nothing are the rule here, also where the coordinates are rounded.
func TestLattices(t *testing.T) {
	root := math.Sqrt
	ex, ey, ez := Vec{X: 1}, Vec{Y: 1}, Vec{Z: 1}
	fcc := []Vec{{}, {X: 0.5, Y: 0.5}, {X: 0.5, Z: 0.5}, {Y: 0.5, Z: 0.5}}
	hex, height := Vec{X: 0.5, Y: root(3) / 2}, root(8./3)
	for _, c := range []struct {
		name    string
		a, b, c Vec
		motif   []Vec
		holes   map[float64]float64 // radius: holes in the volume of a unit cell
	}{
		{"cubic", ex, ey, ez, []Vec{{}}, map[float64]float64{root(3) / 2: 1}},
		{"body-centred", ex, ey, ez, []Vec{{}, {X: 0.5, Y: 0.5, Z: 0.5}}, map[float64]float64{root(5) / 4: 12}},
		{"face-centred", ex, ey, ez, fcc, map[float64]float64{0.5: 4, root(3) / 4: 8}},
		{"hexagonal", ex, hex, ez, []Vec{{}}, map[float64]float64{root(1./3 + 0.25): 2}},
		{"hexagonal close-packed", ex, hex, Vec{Z: height}, []Vec{{}, {X: 0.5, Y: root(3) / 6, Z: height / 2}},
			map[float64]float64{root(0.5): 2, root(3. / 8): 4}},
	} {
		for _, shift := range []float64{0, 1.0 / 3, 5e5} {
			sites := lattice(c.a, c.b, c.c, c.motif, 2.7)
			for i := range sites {
				sites[i] = add(scale(0.7, sites[i]), Vec{X: shift, Y: shift / 2, Z: -shift})
			}
			// Around the origin, in one unit cell, away from its sides.
			got := map[float64]float64{}
			for _, g := range gapsOf(t, sites, nil) {
				p := scale(1/0.7, sub(g.At, Vec{X: shift, Y: shift / 2, Z: -shift}))
				z := p.Z / c.c.Z
				y := p.Y / c.b.Y
				x := p.X - y*c.b.X
				const off = 0.0137
				if x < -off || x >= 1-off || y < -off || y >= 1-off || z < -off || z >= 1-off {
					continue
				}
				known := false
				for r := range c.holes {
					if math.Abs(g.Radius/0.7-r) <= 1e-9 {
						got[r]++
						known = true
					}
				}
				if !known {
					t.Errorf("%s, shifted by %v: a hole of the radius %v", c.name, shift, g.Radius/0.7)
				}
			}
			for r, n := range c.holes {
				if got[r] != n {
					t.Errorf("%s, shifted by %v: %v holes of the radius %v in a cell, want %v", c.name, shift, got[r], r, n)
				}
			}
		}
	}
}

// Sites on a sphere, as well as they can be written down: its centre is one gap,
// although no four of them have quite the same centre.
func TestSphere(t *testing.T) {
	for _, n := range []int{8, 60, 900} {
		r := rand.New(rand.NewPCG(3, uint64(n)))
		centre := Vec{X: 1000, Y: -30, Z: 0.7}
		sites := make([]Vec, n)
		for i := range sites {
			sites[i] = add(centre, direction(r))
		}
		for i := range 4 { // so that few of them surround it, too
			sites[2*i], sites[2*i+1] = add(centre, direction(r)), sites[2*i]
			sites[2*i+1] = sub(add(centre, centre), sites[2*i])
		}
		g := gapsOf(t, sites, nil)
		if len(g) != 1 || length(sub(g[0].At, centre)) > 1e-10 || math.Abs(g[0].Radius-1) > 1e-10 {
			t.Errorf("%d sites: %d gaps, %+v", n, len(g), g[:min(len(g), 3)])
		}
	}
}
