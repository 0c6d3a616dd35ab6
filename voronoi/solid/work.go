package solid

import (
	"math"

	"nearcell/voronoi/polyhedron"
)

// Work is the scratch that Solid.Measure needs: one for each goroutine. The zero
// value is ready. Once warm it allocates nothing.
type Work struct {
	// Own is the scratch of solids of other rooms, theirs to fill.
	Own any

	x    *extrusion
	site Vec
	want Want
	out  *Measures

	base  *polyhedron.Cell // the cell between floor and ceiling
	under polyhedron.Cell  // base where it is not the given cell
	body  polyhedron.Cell  // base cut by a convex piece of the plan, or by one wall
	trim  polyhedron.Cell  // base without what lies flat on walls from outside
	shape polyhedron.Cell  // base cut by the walls in it
	poly  polyhedron.Polygon
	lo    Vec // bounds of base
	hi    Vec
	size  float64 // surface of base
	near  []nearEdge
	faces []baseFace
	stops []float64
	cut   bool // the base was cut by the pieces of the plan
	outer bool // base lies beyond the plane of a near edge and touches it
}

// upright is the upright plane n·(x, y) = d, seen from the site; n has length 1.
type upright struct {
	n Vec2
	d float64
}

// across is how far v lies beyond the plane, along where it lies along its line in
// the plan.
func (u upright) across(v Vec) float64 { return float64(u.n.X*v.X) + float64(u.n.Y*v.Y) - u.d }
func (u upright) along(v Vec) float64  { return float64(u.n.X*v.Y) - float64(u.n.Y*v.X) }

// nearEdge is an edge of the plan that touches the cell, or comes so near that
// rounding cannot tell.
type nearEdge struct {
	*edge
	at   upright // its plane
	in   float64 // how far the base reaches inwards of the plane
	out  float64 // and outwards
	cut  float64 // area of the face it cut, where the base is cut to a convex shape, else -1
	area float64 // of this part of the wall in the base
}

// oneSided tells that the base lies on one side of the edge's plane.
func (e *nearEdge) oneSided(near float64) bool { return e.in <= near || e.out <= near }

// baseFace is a face of the base and the area of it that lies in the solid.
type baseFace struct {
	face  int // its number; the largest where rounding left several faces in one plane
	n     Vec
	d     float64
	label int32
	area  float64
	wall  float64 // of it, where it lies in upright walls that have the base inside
	flush int32   // a near edge in whose plane it lies, flat for floor and ceiling, else -1
}

const (
	notFlush = -1
	flat     = -2
)

// Labels of faces that are not walls: where the base is cut into pieces, and where a
// wall's plane cuts the base. Cells of neighbours and walls never carry them.
const (
	seam    = math.MinInt32 + 1
	section = math.MinInt32 + 2
)

// begin readies the scratch for one cell. It reports whether anything of the cell
// lies between floor and ceiling.
func (w *Work) begin(x *extrusion, c *polyhedron.Cell, site Vec, want Want, out *Measures) bool {
	contacts := out.Contacts[:0]
	*out = Measures{Contacts: contacts}
	if want&WantContacts != 0 {
		for range c.NumFaces() {
			out.Contacts = append(out.Contacts, 0)
		}
	}
	if want&WantShape != 0 {
		want |= WantWalls | WantVolume
	}
	if want&WantCentroid != 0 {
		want |= WantVolume
	}
	w.x, w.site, w.want, w.out, w.base = x, site, want, out, c
	w.near, w.faces, w.outer = w.near[:0], w.faces[:0], false
	w.cut = false
	if c.Empty() {
		return false
	}
	w.lo, w.hi = c.Bounds()
	if w.lo.Z < x.z0-site.Z || w.hi.Z > x.z1-site.Z {
		w.under.CopyFrom(c)
		w.base = &w.under
		if x.clipHeights(w.base, site) == polyhedron.Empty {
			return false
		}
		w.lo, w.hi = w.base.Bounds()
	}
	return true
}

// findNear collects the edges that touch the base: a segment and a box meet if their
// extents along x, y and across the segment do; the base itself, narrower than its
// box, is used across the segment.
func (w *Work) findNear() {
	near := w.x.near
	lo := Vec2{X: w.lo.X - near, Y: w.lo.Y - near}
	hi := Vec2{X: w.hi.X + near, Y: w.hi.Y + near}
	for i := range w.x.plan.edges {
		e := &w.x.plan.edges[i]
		ax, bx := e.a.X-w.site.X, e.b.X-w.site.X
		if (ax < lo.X && bx < lo.X) || (ax > hi.X && bx > hi.X) {
			continue
		}
		ay, by := e.a.Y-w.site.Y, e.b.Y-w.site.Y
		if (ay < lo.Y && by < lo.Y) || (ay > hi.Y && by > hi.Y) {
			continue
		}
		n := nearEdge{edge: e, at: upright{e.n, e.offset(w.site)}, in: math.Inf(-1), out: math.Inf(-1), cut: -1}
		for _, v := range w.base.Vertices() {
			s := n.at.across(v)
			n.out, n.in = max(n.out, s), max(n.in, -s)
		}
		if n.in < -near || n.out < -near {
			continue
		}
		w.outer = w.outer || n.in <= near
		w.near = append(w.near, n)
	}
}

// listFaces lists the faces of the base and finds those that lie in walls.
func (w *Work) listFaces() {
	floor, ceiling := w.x.z0-w.site.Z, w.x.z1-w.site.Z
	for i := range w.base.NumFaces() {
		label, loop := w.base.Face(i)
		n, d := w.base.FacePlane(i)
		f := baseFace{face: i, n: n, d: d, label: label, flush: notFlush}
		k := w.faceOf(n, d, label)
		if k >= 0 && norm3(w.base.FaceArea(i)) <= norm3(w.base.FaceArea(w.faces[k].face)) {
			continue
		}
		low, high := math.Inf(1), math.Inf(-1)
		for _, j := range loop {
			z := w.base.Vertex(int(j)).Z
			low, high = min(low, z), max(high, z)
		}
		if high <= floor+w.x.near || low >= ceiling-w.x.near {
			f.flush = flat
		}
		for j := range w.near {
			if f.flush == notFlush && w.near[j].oneSided(w.x.near) && w.isFlush(loop, w.near[j].at) {
				f.flush = int32(j)
			}
		}
		if k >= 0 {
			w.faces[k] = f
		} else {
			w.faces = append(w.faces, f)
		}
	}
}

// isFlush tells whether all these vertices of the base lie in an upright plane.
func (w *Work) isFlush(loop []int32, u upright) bool {
	for _, j := range loop {
		if math.Abs(u.across(w.base.Vertex(int(j)))) > w.x.near {
			return false
		}
	}
	return true
}

// faceOf is the number of the base's face that lies in this plane, -1 if none does.
// Cuts hand planes down unchanged, so equal means equal to the last bit.
func (w *Work) faceOf(n Vec, d float64, label int32) int {
	for i := range w.faces {
		f := &w.faces[i]
		if f.label == label && f.d == d && f.n == n {
			return i
		}
	}
	return -1
}

// stripArea is the area of w.poly between two lines upright on an upright plane, at
// the distances t0 and t1 along it.
func (w *Work) stripArea(u upright, t0, t1 float64) float64 {
	if w.poly.Clip(Vec{X: u.n.Y, Y: -u.n.X}, -t0) == polyhedron.Empty ||
		w.poly.Clip(Vec{X: -u.n.Y, Y: u.n.X}, t1) == polyhedron.Empty {
		return 0
	}
	return norm3(w.poly.Area())
}

// local is a corner of the plan seen from the site.
func (w *Work) local(p Vec2) Vec { return Vec{X: p.X - w.site.X, Y: p.Y - w.site.Y} }
