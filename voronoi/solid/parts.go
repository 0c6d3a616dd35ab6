package solid

import (
	"math"
	"slices"
)

// Seam is the number, in Plane.Wall, of a plane between two parts of a solid: no wall.
const Seam int32 = -1

// Divided is a solid that knows convex parts of itself and its own walls and corners,
// for users that need the places of a surface and not only measures of it.
//
// The parts cover the solid and their interiors are apart. Where two meet, the planes
// between them are the same to the last bit.
type Divided interface {
	Solid
	// NumParts is the number of convex parts, at least 1.
	NumParts() int
	// PartBounds is a box that holds part i.
	PartBounds(i int) (lo, hi Vec)
	// PartPlanes appends the half-spaces N·x <= D whose intersection is part i, in
	// coordinates local to site: D is computed from differences to it, so that places
	// far from the origin lose nothing. Planes that are not of walls have the number
	// Seam. A side of a part with the number Seam can still lie in a wall.
	PartPlanes(i int, site Vec, buf []Plane) []Plane
	// WallsAt appends the planes of the walls that come within tol of p, each wall
	// once, by number. D is as in Planes.
	WallsAt(p Vec, tol float64, buf []Plane) []Plane
	// Corners are the corners of the surface, ordered by x, y, z: a new slice.
	Corners() []Vec
}

var (
	_ Divided = (*Box)(nil)
	_ Divided = (*Prism)(nil)
)

func (x *extrusion) NumParts() int {
	if x.plan.convex {
		return 1
	}
	return len(x.plan.pieces)
}

func (x *extrusion) PartBounds(i int) (lo, hi Vec) {
	if x.plan.convex {
		return x.Bounds()
	}
	q := &x.plan.pieces[i]
	return Vec{X: q.lo.X, Y: q.lo.Y, Z: x.z0}, Vec{X: q.hi.X, Y: q.hi.Y, Z: x.z1}
}

func (x *extrusion) PartPlanes(i int, site Vec, buf []Plane) []Plane {
	buf = append(buf, Plane{Vec{Z: -1}, site.Z - x.z0, x.floor()}, Plane{Vec{Z: 1}, x.z1 - site.Z, x.ceiling()})
	upright := func(e *edge) { buf = append(buf, Plane{e.normal(), e.offset(site), e.wall}) }
	if x.plan.convex {
		for k := range x.plan.edges {
			upright(&x.plan.edges[k])
		}
		return buf
	}
	q := &x.plan.pieces[i]
	bottom, top := &x.plan.edges[q.bottom], &x.plan.edges[q.top]
	buf = append(buf, Plane{Vec{X: -1}, site.X - q.x0, Seam}, Plane{Vec{X: 1}, q.x1 - site.X, Seam})
	upright(bottom)
	upright(top)
	if isSteep(bottom) || isSteep(top) {
		buf = append(buf, Plane{Vec{Y: -1}, site.Y - q.lo.Y, Seam}, Plane{Vec{Y: 1}, q.hi.Y - site.Y, Seam})
	}
	return buf
}

// isSteep tells of an edge that hardly bounds the heights in the plan: its ends do.
func isSteep(e *edge) bool { return math.Abs(e.n.Y) < 1e-3 }

func (x *extrusion) WallsAt(p Vec, tol float64, buf []Plane) []Plane {
	q := Vec2{X: p.X, Y: p.Y}
	if !(p.Z >= x.z0-tol && p.Z <= x.z1+tol) {
		return buf
	}
	base := len(buf)
	for i := range x.plan.edges {
		e := &x.plan.edges[i]
		if e.distance(q) > tol || slices.ContainsFunc(buf[base:], func(w Plane) bool { return w.Wall == e.wall }) {
			continue
		}
		buf = append(buf, Plane{e.normal(), dot2(e.n, e.a), e.wall})
	}
	if len(buf) > base || x.plan.side(q) != Outside {
		if p.Z <= x.z0+tol {
			buf = append(buf, Plane{Vec{Z: -1}, -x.z0, x.floor()})
		}
		if p.Z >= x.z1-tol {
			buf = append(buf, Plane{Vec{Z: 1}, x.z1, x.ceiling()})
		}
	}
	slices.SortFunc(buf[base:], func(a, b Plane) int { return int(a.Wall - b.Wall) })
	return buf
}

func (x *extrusion) Corners() []Vec {
	nodes := make([]Vec2, 0, len(x.plan.edges))
	for i := range x.plan.edges {
		nodes = append(nodes, x.plan.edges[i].a)
	}
	slices.SortFunc(nodes, compare2)
	nodes = slices.Compact(nodes)
	out := make([]Vec, 0, 2*len(nodes))
	for _, n := range nodes {
		out = append(out, Vec{X: n.X, Y: n.Y, Z: x.z0}, Vec{X: n.X, Y: n.Y, Z: x.z1})
	}
	return out
}
