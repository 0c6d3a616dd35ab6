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
// in a wall is a null set for them: whether it counts would be rounding's choice. It
// is a contact only where the solid is on both of its sides (the two-sided rule).
func (w *Work) contacts(c *polyhedron.Cell) {
	for i := range w.faces {
		f := &w.faces[i]
		if f.label < 0 || f.flush == flat {
			continue
		}
		area := f.area
		if f.flush >= 0 {
			area = w.twoSided(f.face, &w.near[f.flush])
		}
		w.out.Contacts[w.indexIn(c, f)] += area
	}
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

// twoSided is the area of the base's face i, which lies in the plane of a wall, where
// the solid is on both sides of it. Along the plan's line the sides change only where
// an edge ends at the line or crosses it; between two such stops, one place on either
// side tells.
func (w *Work) twoSided(i int, e *nearEdge) float64 {
	_, loop := w.base.Face(i)
	t0, t1 := math.Inf(1), math.Inf(-1)
	for _, j := range loop {
		v := w.base.Vertex(int(j))
		t := float64(e.n.X*v.Y) - float64(e.n.Y*v.X)
		t0, t1 = min(t0, t), max(t1, t)
	}
	w.findStops(e, t0, t1)
	const step = 3 // times near: clear of the face and of the wall
	var total sum
	for k := 1; k < len(w.stops); k++ {
		from, to := w.stops[k-1], w.stops[k]
		if to-from <= 2*w.x.near {
			continue
		}
		t := from + (to-from)/2
		m := Vec2{X: w.site.X + float64(e.d*e.n.X) - float64(t*e.n.Y), Y: w.site.Y + float64(e.d*e.n.Y) + float64(t*e.n.X)}
		off := scale2(step*w.x.near, e.n)
		if w.x.plan.side(add2(m, off)) != Inside || w.x.plan.side(sub2(m, off)) != Inside {
			continue
		}
		w.poly.SetFace(w.base, i)
		total.add(w.stripArea(e.edge, from, to))
	}
	return total.value()
}

// findStops lists t0, t1 and the places between them where near edges end at the
// line of e or cross it.
func (w *Work) findStops(e *nearEdge, t0, t1 float64) {
	w.stops = append(w.stops[:0], t0, t1)
	stop := func(t float64) {
		if t > t0 && t < t1 {
			w.stops = append(w.stops, t)
		}
	}
	site := Vec2{X: w.site.X, Y: w.site.Y}
	for k := range w.near {
		f := w.near[k].edge
		a, b := sub2(f.a, site), sub2(f.b, site)
		sa, sb := dot2(e.n, a)-e.d, dot2(e.n, b)-e.d
		ta, tb := w.along(e.edge, f.a), w.along(e.edge, f.b)
		onA, onB := math.Abs(sa) <= 4*w.x.near, math.Abs(sb) <= 4*w.x.near
		if onA {
			stop(ta)
		}
		if onB {
			stop(tb)
		}
		if !onA && !onB && (sa < 0) != (sb < 0) {
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
	t0, t1 := w.along(e.edge, e.a), w.along(e.edge, e.b)
	if e.oneSided(w.x.near) {
		area, found := 0.0, false
		for i := range w.faces {
			_, loop := w.base.Face(w.faces[i].face)
			if w.faces[i].flush == flat || !w.isFlush(loop, e) {
				continue
			}
			found = true
			if e.in > w.x.near {
				w.poly.SetFace(w.base, w.faces[i].face)
				area += w.stripArea(e.edge, t0, t1)
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
	if w.body.Clip(e.normal(), e.d, section) != polyhedron.Cut {
		return 0
	}
	area := 0.0
	for i := range w.body.NumFaces() {
		if label, _ := w.body.Face(i); label == section {
			w.poly.SetFace(&w.body, i)
			area += w.stripArea(e.edge, t0, t1)
		}
	}
	return area
}
