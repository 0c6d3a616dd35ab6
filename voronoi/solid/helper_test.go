package solid

import (
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/polyhedron"
)

// everything asks for all measures.
const everything = WantVolume | WantCentroid | WantContacts | WantWalls | WantFarthest | WantShape

// example is a plan with what is known about it.
type example struct {
	name   string
	outer  []Vec2
	holes  [][]Vec2
	convex [][]Vec2 // a decomposition into convex polygons, counter-clockwise
	area   float64
	length float64
	parts  int
	inner  int // holes that do not reach the outline
	walls  int // upright ones
	slack  float64
}

func v2(xy ...float64) []Vec2 {
	var out []Vec2
	for i := 0; i < len(xy); i += 2 {
		out = append(out, Vec2{X: xy[i], Y: xy[i+1]})
	}
	return out
}

func rect(x0, y0, x1, y1 float64) []Vec2 { return v2(x0, y0, x1, y0, x1, y1, x0, y1) }

var hall = v2(0, 0, 30, 0, 30, 12, 18, 12, 18, 18, 0, 18)

var examples = []example{
	{name: "rectangle", outer: rect(0, 0, 6, 4), convex: [][]Vec2{rect(0, 0, 6, 4)}, area: 24, length: 20, parts: 1, walls: 4},
	{name: "triangle, clockwise", outer: v2(0, 0, 3, 5, 7, 1), convex: [][]Vec2{v2(0, 0, 7, 1, 3, 5)},
		area: 16, length: math.Sqrt(34) + math.Sqrt(32) + math.Sqrt(50), parts: 1, walls: 3},
	{name: "L", outer: hall, convex: [][]Vec2{rect(0, 0, 30, 12), rect(0, 12, 18, 18)}, area: 468, length: 96, parts: 1, walls: 6},
	{name: "L with a hole in the corner", outer: hall, holes: [][]Vec2{rect(0, 0, 4, 3)},
		convex: [][]Vec2{rect(4, 0, 30, 3), rect(0, 3, 30, 12), rect(0, 12, 18, 18)}, area: 456, length: 96, parts: 1, walls: 8},
	{name: "L with a hole on a side", outer: hall, holes: [][]Vec2{rect(10, 0, 14, 3)},
		convex: [][]Vec2{rect(0, 0, 10, 3), rect(14, 0, 30, 3), rect(0, 3, 30, 12), rect(0, 12, 18, 18)}, area: 456, length: 102, parts: 1, walls: 10},
	{name: "U", outer: v2(0, 0, 10, 0, 10, 8, 7, 8, 7, 3, 3, 3, 3, 8, 0, 8),
		convex: [][]Vec2{rect(0, 0, 10, 3), rect(0, 3, 3, 8), rect(7, 3, 10, 8)}, area: 60, length: 46, parts: 1, walls: 8},
	{name: "frame", outer: rect(0, 0, 10, 8), holes: [][]Vec2{rect(3, 2, 7, 6)},
		convex: [][]Vec2{rect(0, 0, 10, 2), rect(0, 6, 10, 8), rect(0, 2, 3, 6), rect(7, 2, 10, 6)}, area: 64, length: 52, parts: 1, inner: 1, walls: 8},
	{name: "triangle and square holes", outer: rect(0, 0, 12, 6), holes: [][]Vec2{v2(1, 1, 5, 1, 3, 5), rect(7, 2, 10, 5)},
		convex: [][]Vec2{rect(0, 0, 12, 1), rect(0, 5, 12, 6), v2(0, 1, 1, 1, 3, 5, 0, 5), v2(5, 1, 7, 1, 7, 5, 3, 5),
			rect(7, 1, 10, 2), rect(10, 1, 12, 5)},
		area: 72 - 8 - 9, length: 36 + 4 + 2*math.Sqrt(20) + 12, parts: 1, inner: 2, walls: 11},
	{name: "hole touches a side in a corner", outer: rect(0, 0, 8, 8), holes: [][]Vec2{v2(4, 0, 6, 3, 2, 3)},
		convex: [][]Vec2{v2(0, 0, 4, 0, 2, 3, 0, 3), v2(4, 0, 8, 0, 8, 3, 6, 3), rect(0, 3, 8, 8)},
		area:   58, length: 32 + 4 + 2*math.Sqrt(13), parts: 1, walls: 7},
	{name: "hole touches a corner of the outline", outer: rect(0, 0, 8, 8), holes: [][]Vec2{v2(0, 0, 6, 2, 2, 6)},
		convex: [][]Vec2{v2(0, 0, 8, 0, 8, 2, 6, 2), v2(0, 0, 2, 6, 2, 8, 0, 8), v2(6, 2, 8, 2, 8, 8, 2, 8, 2, 6)},
		area:   48, length: 32 + 2*math.Sqrt(40) + math.Sqrt(32), parts: 1, walls: 7},
	{name: "two holes share a side", outer: rect(0, 0, 10, 6), holes: [][]Vec2{rect(2, 2, 4, 4), rect(4, 2, 7, 5)},
		convex: [][]Vec2{rect(0, 0, 10, 2), rect(0, 2, 2, 6), rect(2, 4, 4, 6), rect(4, 5, 7, 6), rect(7, 2, 10, 6)},
		area:   60 - 13, length: 32 + 2 + 3 + 3 + 3 + 1 + 2 + 2, parts: 1, inner: 1, walls: 10},
	{name: "hole cuts the hall in two", outer: rect(0, 0, 10, 4), holes: [][]Vec2{rect(4, 0, 5, 4)},
		convex: [][]Vec2{rect(0, 0, 4, 4), rect(5, 0, 10, 4)}, area: 36, length: 34, parts: 2, walls: 8},
	{name: "bow of two rooms through a corner", outer: rect(0, 0, 4, 4), holes: [][]Vec2{rect(0, 2, 2, 4), rect(2, 0, 4, 2)},
		convex: [][]Vec2{rect(0, 0, 2, 2), rect(2, 2, 4, 4)}, area: 8, length: 16, parts: 2, walls: 8},
}

const (
	testFloor   = -0.5
	testCeiling = 3
)

// motion turns a plan about the origin and shifts it.
type motion struct {
	angle float64
	shift Vec2
}

func (m motion) plan(p Vec2) Vec2 {
	s, c := math.Sincos(m.angle)
	return Vec2{X: c*p.X - s*p.Y + m.shift.X, Y: s*p.X + c*p.Y + m.shift.Y}
}

func (m motion) point(p Vec) Vec {
	q := m.plan(Vec2{X: p.X, Y: p.Y})
	return Vec{X: q.X, Y: q.Y, Z: p.Z}
}

func (m motion) ring(ring []Vec2) []Vec2 {
	out := make([]Vec2, len(ring))
	for i, p := range ring {
		out[i] = m.plan(p)
	}
	return out
}

func (m motion) ringsOf(rings [][]Vec2) [][]Vec2 {
	var out [][]Vec2
	for _, r := range rings {
		out = append(out, m.ring(r))
	}
	return out
}

// moved is the example under a motion.
func (e example) moved(m motion) example {
	e.outer, e.holes, e.convex = m.ring(e.outer), m.ringsOf(e.holes), m.ringsOf(e.convex)
	return e
}

func (e example) prism(t testing.TB) *Prism {
	t.Helper()
	p, err := NewPrism(e.outer, e.holes, testFloor, testCeiling)
	if err != nil {
		t.Fatalf("%s: %v", e.name, err)
	}
	return p
}

// cellOf is the cell of sites[i], by all half-spaces, in the solid's bounds. Labels of
// the bounds are all the same, since Measure must not need them.
func cellOf(sites []Vec, i int, s Solid) *polyhedron.Cell {
	lo, hi := s.Bounds()
	p := sites[i]
	c := &polyhedron.Cell{}
	c.SetBox(sub3(lo, p), sub3(hi, p), [6]int32{-1, -1, -1, -1, -1, -1})
	for j, q := range sites {
		if j != i {
			n := sub3(q, p)
			c.Clip(n, (n.X*n.X+n.Y*n.Y+n.Z*n.Z)/2, int32(j))
		}
	}
	return c
}

// sitesIn scatters sites in the solid.
func sitesIn(r *rand.Rand, s Solid, n int) []Vec {
	lo, hi := s.Bounds()
	var out []Vec
	for len(out) < n {
		p := Vec{X: lo.X + r.Float64()*(hi.X-lo.X), Y: lo.Y + r.Float64()*(hi.Y-lo.Y), Z: lo.Z + r.Float64()*(hi.Z-lo.Z)}
		if s.Side(p, 0) == Inside {
			out = append(out, p)
		}
	}
	return out
}

// clipTo cuts a local cell by a convex polygon raised from z0 to z1: the oracle's way.
func clipTo(c *polyhedron.Cell, site Vec, ring []Vec2, z0, z1 float64) {
	for i, a := range ring {
		b := ring[(i+1)%len(ring)]
		n := Vec{X: b.Y - a.Y, Y: a.X - b.X}
		l := math.Hypot(n.X, n.Y)
		n = Vec{X: n.X / l, Y: n.Y / l}
		c.Clip(n, n.X*(a.X-site.X)+n.Y*(a.Y-site.Y), -7)
	}
	c.Clip(Vec{Z: -1}, site.Z-z0, -7)
	c.Clip(Vec{Z: 1}, z1-site.Z, -7)
}

// byDecomposition is the oracle's volume, first moment and farthest distance.
func byDecomposition(c *polyhedron.Cell, site Vec, e example) (volume float64, first Vec, farthest float64) {
	for _, ring := range e.convex {
		var d polyhedron.Cell
		d.CopyFrom(c)
		clipTo(&d, site, ring, testFloor, testCeiling)
		v, f := d.VolumeAndFirst()
		volume += v
		first = add3(first, f)
		if v > 1e-13*c.Volume() {
			farthest = max(farthest, d.Farthest())
		}
	}
	return volume, first, farthest
}

// bySlabs is another oracle: one slab below each edge of the given rings, with the
// sign of the edge's direction (no decomposition of the plan at all).
func bySlabs(c *polyhedron.Cell, site Vec, e example) (volume float64, first Vec) {
	rings := append([][]Vec2{e.outer}, e.holes...)
	for k, ring := range rings {
		area := 0.0
		for i, a := range ring {
			b := ring[(i+1)%len(ring)]
			area += (a.X-ring[0].X)*(b.Y-ring[0].Y) - (a.Y-ring[0].Y)*(b.X-ring[0].X)
		}
		for i, a := range ring {
			b := ring[(i+1)%len(ring)]
			if a.X == b.X {
				continue
			}
			sign := 1.0
			if (area > 0) == (a.X < b.X) {
				sign = -1 // the ring's inside is above the edge
			}
			if k > 0 {
				sign = -sign
			}
			if a.X > b.X {
				a, b = b, a
			}
			var d polyhedron.Cell
			d.CopyFrom(c)
			d.Clip(Vec{X: -1}, site.X-a.X, -7)
			d.Clip(Vec{X: 1}, b.X-site.X, -7)
			n := Vec{X: a.Y - b.Y, Y: b.X - a.X}
			d.Clip(n, n.X*(a.X-site.X)+n.Y*(a.Y-site.Y), -7)
			d.Clip(Vec{Z: -1}, site.Z-testFloor, -7)
			d.Clip(Vec{Z: 1}, testCeiling-site.Z, -7)
			v, f := d.VolumeAndFirst()
			volume += sign * v
			first = add3(first, Vec{X: sign * f.X, Y: sign * f.Y, Z: sign * f.Z})
		}
	}
	return volume, first
}

func near(a, b, tol float64) bool { return math.Abs(a-b) <= tol }
