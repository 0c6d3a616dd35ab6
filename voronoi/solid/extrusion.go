package solid

import (
	"encoding/binary"
	"hash/fnv"
	"math"
	"slices"

	"nearcell/voronoi/polyhedron"
)

// extrusion is a floor plan raised from z0 to z1: what boxes and prisms have in
// common.
type extrusion struct {
	plan   *plan
	z0, z1 float64
	// near is the distance below which a face of a cell lies in a wall: far above
	// rounding, far below anything that is built.
	near float64
	kind string
	key  [16]byte
}

// nearFactor times the size of the solid is extrusion.near, as long as that is well
// above the rounding of far-away coordinates and well below the solid's thickness.
const nearFactor = 1e-10

func newExtrusion(kind string, p *plan, z0, z1 float64) (*extrusion, error) {
	if !(math.Abs(z0) <= largest && math.Abs(z1) <= largest) {
		e := fault(NotFinite, -1)
		e.Axis = 2
		return nil, e
	}
	if z1 < z0 {
		z0, z1 = z1, z0
	}
	x := &extrusion{plan: p, z0: z0 + 0, z1: z1 + 0, kind: kind}
	size := max(math.Abs(p.lo.X), math.Abs(p.hi.X), math.Abs(p.lo.Y), math.Abs(p.hi.Y), math.Abs(z0), math.Abs(z1))
	height := x.z1 - x.z0
	if !(height > snapFactor*size) || !(x.Volume() >= smallest) {
		e := fault(NoExtent, -1)
		e.Axis = 2
		return nil, e
	}
	far := 64 * (math.Nextafter(size, math.Inf(1)) - size)
	x.near = nearFactor*norm3(Vec{X: p.hi.X - p.lo.X, Y: p.hi.Y - p.lo.Y, Z: height}) + far
	x.near = min(x.near, height/1000, p.area/p.length/1000)
	x.key = x.makeKey()
	return x, nil
}

// makeKey hashes the boundary, in an order that does not depend on how the plan was
// written down.
func (x *extrusion) makeKey() (key [16]byte) {
	edges := slices.Clone(x.plan.edges)
	slices.SortFunc(edges, func(a, b edge) int {
		if c := compare2(a.a, b.a); c != 0 {
			return c
		}
		return compare2(a.b, b.b)
	})
	h := fnv.New128a()
	h.Write([]byte("extrusion 1"))
	put := func(v float64) {
		var b [8]byte
		binary.LittleEndian.PutUint64(b[:], math.Float64bits(v))
		h.Write(b[:])
	}
	put(x.z0)
	put(x.z1)
	for _, e := range edges {
		put(e.a.X)
		put(e.a.Y)
		put(e.b.X)
		put(e.b.Y)
	}
	h.Sum(key[:0])
	return key
}

func (x *extrusion) Bounds() (lo, hi Vec) {
	return Vec{X: x.plan.lo.X, Y: x.plan.lo.Y, Z: x.z0}, Vec{X: x.plan.hi.X, Y: x.plan.hi.Y, Z: x.z1}
}

func (x *extrusion) Volume() float64 { return x.plan.area * (x.z1 - x.z0) }

func (x *extrusion) Area() float64 { return 2*x.plan.area + x.plan.length*(x.z1-x.z0) }

func (x *extrusion) Key() [16]byte { return x.key }

func (x *extrusion) Pieces() int { return x.plan.parts }

func (x *extrusion) Facts() Facts {
	return Facts{
		Kind: x.kind, Walls: int(x.plan.walls) + 2, Corners: 2 * x.plan.nodes,
		Holes: x.plan.holes, Pieces: x.plan.parts, Convex: x.plan.convex,
	}
}

// Side tells where p lies: exactly, by the signs of exact predicates, when tol is 0.
func (x *extrusion) Side(p Vec, tol float64) Side {
	side := Outside
	if p.Z >= x.z0 && p.Z <= x.z1 {
		side = x.plan.side(Vec2{X: p.X, Y: p.Y})
		if side == Inside && (p.Z == x.z0 || p.Z == x.z1) {
			side = On
		}
	}
	if tol > 0 && side != On && x.Distance(p) <= tol {
		return On
	}
	return side
}

// Distance is the distance from p to the surface.
func (x *extrusion) Distance(p Vec) float64 {
	q := Vec2{X: p.X, Y: p.Y}
	wall := x.plan.distance(q)
	above := max(x.z0-p.Z, p.Z-x.z1) // positive outside
	if x.plan.side(q) == Outside {
		return math.Hypot(wall, max(above, 0))
	}
	if above > 0 {
		return above
	}
	return min(wall, -above)
}

// floor and ceiling are the numbers of the horizontal walls.
func (x *extrusion) floor() int32   { return x.plan.walls }
func (x *extrusion) ceiling() int32 { return x.plan.walls + 1 }

func (x *extrusion) Planes() []Plane {
	if !x.plan.convex {
		return nil
	}
	var out []Plane
	for _, e := range x.plan.edges {
		out = append(out, Plane{Vec{X: e.n.X, Y: e.n.Y}, dot2(e.n, e.a), e.wall})
	}
	return append(out, Plane{Vec{Z: -1}, -x.z0, x.floor()}, Plane{Vec{Z: 1}, x.z1, x.ceiling()})
}

// offset is where the edge's plane stands, seen from the site. It is taken from the
// nearer end, where the rounding of the normal matters least.
func (e *edge) offset(site Vec) float64 {
	s := Vec2{X: site.X, Y: site.Y}
	u, v := sub2(e.a, s), sub2(e.b, s)
	if dot2(v, v) < dot2(u, u) {
		u = v
	}
	return dot2(e.n, u)
}

func (e *edge) normal() Vec { return Vec{X: e.n.X, Y: e.n.Y} }

func (x *extrusion) ClipConvex(c *polyhedron.Cell, site Vec) polyhedron.Result {
	if !x.plan.convex {
		panic("solid: ClipConvex of a solid that is not convex")
	}
	result := x.clipHeights(c, site)
	for i := range x.plan.edges {
		e := &x.plan.edges[i]
		result = max(result, c.Clip(e.normal(), e.offset(site), polyhedron.Wall(e.wall)))
	}
	return result
}

// clipHeights cuts c by floor and ceiling.
func (x *extrusion) clipHeights(c *polyhedron.Cell, site Vec) polyhedron.Result {
	low := c.Clip(Vec{Z: -1}, site.Z-x.z0, polyhedron.Wall(x.floor()))
	return max(low, c.Clip(Vec{Z: 1}, x.z1-site.Z, polyhedron.Wall(x.ceiling())))
}
