package solid

import (
	"math"
	"slices"

	"nearcell/voronoi/polyhedron"
)

// crumb times the surface of a cell is the area below which a wall in it does not
// count as one.
const crumb = 1e-11

// least is the area below which a wall in the base does not count: a strip narrower
// than near is an artefact of rounding, as is a crumb.
func (w *Work) least() float64 {
	return max(crumb*w.size, 2*w.x.near*math.Sqrt(w.size))
}

// contacts sets the area inside the solid of the faces towards neighbours.
//
// A face across the solid has the area that the convex bodies found. A face that lies
// in a wall, or in a plane that the plan was cut into pieces by, is a null set for
// them: rounding would choose which piece gets it, none, one or two. There the plan
// itself is asked: the face is a contact where the solid is on both of its sides (the
// two-sided rule).
func (w *Work) contacts(c *polyhedron.Cell) {
	for i := range w.faces {
		if f := &w.faces[i]; f.label >= 0 {
			w.out.Contacts[w.indexIn(c, f)] += w.contact(f)
		}
	}
}

// contact is the area of one face of the base where it is a contact.
func (w *Work) contact(f *baseFace) float64 {
	if f.flush == flat {
		return 0
	}
	if f.flush >= 0 {
		return w.twoSided(f.face, w.near[f.flush].at)
	}
	if u, ok := w.uprightOf(f); ok && w.cut {
		return w.twoSided(f.face, u)
	}
	return f.area
}

// mixed tells that a face is a contact in one part and a wall in another.
func (w *Work) mixed() bool {
	for i := range w.faces {
		if f := &w.faces[i]; f.label >= 0 && f.wall > w.least() && w.contact(f) > w.least() {
			return true
		}
	}
	return false
}

// uprightOf is the plane of a face that stands upright.
func (w *Work) uprightOf(f *baseFace) (upright, bool) {
	n := Vec2{X: f.n.X, Y: f.n.Y}
	l := norm2(n)
	if !(l > math.Abs(f.n.Z)) {
		return upright{}, false
	}
	u := upright{Vec2{X: n.X / l, Y: n.Y / l}, f.d / l}
	_, loop := w.base.Face(f.face)
	return u, w.isFlush(loop, u)
}

// indexIn is the number of the base's face in the given cell: that of the largest
// face in its plane.
func (w *Work) indexIn(c *polyhedron.Cell, f *baseFace) int {
	if w.base == c {
		return f.face
	}
	best, most := -1, -1.0
	for k := range c.NumFaces() {
		n, d := c.FacePlane(k)
		if label, _ := c.Face(k); label == f.label && d == f.d && n == f.n {
			if a := norm3(c.FaceArea(k)); a > most {
				best, most = k, a
			}
		}
	}
	return best
}

// twoSided is the area of the base's face i, which lies in the upright plane u, where
// the solid is on both sides of it. Along the plan's line the sides change only where
// an edge ends at the line or crosses it; between two such stops, one place on either
// side tells.
func (w *Work) twoSided(i int, u upright) float64 {
	_, loop := w.base.Face(i)
	t0, t1 := math.Inf(1), math.Inf(-1)
	for _, j := range loop {
		t := u.along(w.base.Vertex(int(j)))
		t0, t1 = min(t0, t), max(t1, t)
	}
	w.findStops(u, t0, t1)
	const step = 3 // times near: clear of the face and of the wall
	var total sum
	for k := 1; k < len(w.stops); k++ {
		from, to := w.stops[k-1], w.stops[k]
		if to-from <= 2*w.x.near {
			continue
		}
		t := from + (to-from)/2
		m := Vec2{
			X: w.site.X + (float64(u.d*u.n.X) - float64(t*u.n.Y)),
			Y: w.site.Y + (float64(u.d*u.n.Y) + float64(t*u.n.X)),
		}
		off := scale2(step*w.x.near, u.n)
		if w.x.plan.side(add2(m, off)) != Inside || w.x.plan.side(sub2(m, off)) != Inside {
			continue
		}
		w.poly.SetFace(w.base, i)
		total.add(w.stripArea(u, from, to))
	}
	return total.value()
}

// findStops lists t0, t1 and the places between them where near edges end at the
// line of u or cross it.
func (w *Work) findStops(u upright, t0, t1 float64) {
	w.stops = append(w.stops[:0], t0, t1)
	stop := func(t float64) {
		if t > t0 && t < t1 {
			w.stops = append(w.stops, t)
		}
	}
	for k := range w.near {
		a, b := w.local(w.near[k].a), w.local(w.near[k].b)
		sa, sb := u.across(a), u.across(b)
		ta, tb := u.along(a), u.along(b)
		onA, onB := math.Abs(sa) <= 4*w.x.near, math.Abs(sb) <= 4*w.x.near
		if onA { // every corner is the first end of an edge
			stop(ta)
		} else if !onB && (sa < 0) != (sb < 0) {
			stop(ta + float64(sa/(sa-sb)*(tb-ta)))
		}
	}
	slices.Sort(w.stops)
}

// walls adds up the area of the solid's surface in the base.
//
// A wall that passes through the base is the section of the base by the wall's plane,
// between the ends of the wall. Where the base lies on one side of the plane and has
// faces in it, the wall is these faces, if the base is on the wall's inner side: so a
// wall in the common face of two cells counts for the one that has the solid. Floor
// and ceiling are the faces that lie in them.
func (w *Work) walls() {
	var total sum
	floor, ceiling := 0.0, 0.0
	for i := range w.faces {
		if f := &w.faces[i]; f.flush == flat && f.n.Z > 0 {
			ceiling += f.area
		} else if f.flush == flat {
			floor += f.area
		} else if f.flush == notFlush && f.label < 0 && !w.cut {
			// A side of the bounding box that rounding left in front of a wall which
			// leans by next to nothing.
			total.add(f.area)
		}
	}
	least := w.least()
	for _, a := range [2]float64{floor, ceiling} {
		total.add(a)
		if a > least {
			w.out.WallFaces++
		}
	}
	for k := range w.near {
		e := &w.near[k]
		e.area = w.wallArea(e)
		total.add(e.area)
	}
	w.out.Walls = total.value()
	for k := range w.near {
		area := 0.0
		for j := range w.near {
			if w.near[j].wall == w.near[k].wall {
				if j < k {
					area = 0
					break // counted with the first edge of its wall
				}
				area += w.near[j].area
			}
		}
		if area > least {
			w.out.WallFaces++
		}
	}
}

// wallArea is the area in the base of the wall above one edge.
func (w *Work) wallArea(e *nearEdge) float64 {
	t0, t1 := e.at.along(w.local(e.a)), e.at.along(w.local(e.b))
	if e.oneSided(w.x.near) {
		area, found := 0.0, false
		for i := range w.faces {
			_, loop := w.base.Face(w.faces[i].face)
			if w.faces[i].flush == flat || !w.isFlush(loop, e.at) {
				continue
			}
			found = true
			if e.in > w.x.near {
				w.poly.SetFace(w.base, w.faces[i].face)
				a := w.stripArea(e.at, t0, t1)
				w.faces[i].wall += a
				area += a
			}
		}
		if found {
			return area
		}
	}
	if e.cut >= 0 {
		return e.cut
	}
	w.body.CopyFrom(w.base)
	if w.body.Clip(e.normal(), e.at.d, section) != polyhedron.Cut {
		return 0
	}
	area := 0.0
	for i := range w.body.NumFaces() {
		if label, _ := w.body.Face(i); label == section {
			w.poly.SetFace(&w.body, i)
			area += w.stripArea(e.at, t0, t1)
		}
	}
	return area
}
