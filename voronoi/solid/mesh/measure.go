package mesh

import (
	"math"
	"slices"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// work is the scratch of one goroutine.
type work struct {
	m    *Mesh
	c    *polyhedron.Cell
	site Vec
	want solid.Want
	out  *solid.Measures

	lo, hi  Vec // bounds of the cell
	middle  Vec // a place within it
	surface float64
	faces   []face
	touches []touch
	columns []column
	rooms   []wallRoom
	body    polyhedron.Cell
	shape   polyhedron.Cell
	poly    polyhedron.Polygon
	trial   polyhedron.Polygon
	present bool // walls pass through the cell or bound the solid in it
}

// face is a face of the cell; n has length 1.
type face struct {
	n      Vec
	d      float64
	label  int32
	near   bool    // the surface comes near it
	beyond float64 // area of walls in its plane that have the solid beyond the face
	within float64 // and that have it on the cell's side
	seam   float64 // of seams in its plane, with the region on the cell's side
}

// touch is a triangle that meets the cell.
type touch struct {
	t     int32
	flush int32   // the face in whose plane it lies, or -1
	area  float64 // of it in the cell, as a wall of the cell
}

// wallRoom is the area of a wall in the cell.
type wallRoom struct {
	wall int32
	area float64
	cuts bool // it passes through the inside of the cell
}

const (
	relaxed = 2 // times near: how far about the cell triangles touch it
	shift   = 4 // times near: from a wall to clear of it
	crumb   = 1e-11
	section = math.MinInt32 + 2
)

func workOf(w *solid.Work) *work {
	own, ok := w.Own.(*work)
	if !ok {
		own = &work{}
		w.Own = own
	}
	return own
}

// Measure computes what is wanted of the part of c inside the solid.
func (m *Mesh) Measure(c *polyhedron.Cell, site Vec, want solid.Want, scratch *solid.Work, out *solid.Measures) error {
	w := workOf(scratch)
	w.m, w.c, w.site, w.out = m, c, site, out
	if want&solid.WantShape != 0 {
		want |= solid.WantWalls | solid.WantVolume
	}
	if want&solid.WantCentroid != 0 {
		want |= solid.WantVolume
	}
	w.want = want
	contacts := out.Contacts[:0]
	*out = solid.Measures{Contacts: contacts}
	if c.Empty() {
		out.Empty = true
		return nil
	}
	if want&solid.WantContacts != 0 {
		for range c.NumFaces() {
			out.Contacts = append(out.Contacts, 0)
		}
	}
	w.open()
	w.findTouches()
	if len(w.touches) == 0 {
		w.whole()
		return nil
	}
	w.measureWalls()
	if !w.present && m.side(add(w.site, w.middle)) == solid.Outside {
		out.Empty = true
		return nil
	}
	if want&(solid.WantVolume|solid.WantContacts) != 0 {
		w.findColumns()
	}
	if want&solid.WantVolume != 0 {
		w.addColumns()
	}
	if want&solid.WantContacts != 0 {
		w.measureContacts()
	}
	if want&solid.WantFarthest != 0 {
		w.findFarthest()
	}
	if want&solid.WantWalls != 0 {
		w.sumWalls()
	}
	if want&solid.WantShape != 0 {
		w.judgeShape()
	}
	return nil
}

// open lists the faces of the cell.
func (w *work) open() {
	c := w.c
	w.lo, w.hi = c.Bounds()
	w.middle = Vec{}
	vs := c.Vertices()
	for _, v := range vs {
		w.middle = add(w.middle, v)
	}
	w.middle = scale(1/float64(len(vs)), w.middle)
	w.surface = c.Surface()
	w.faces, w.touches, w.columns, w.rooms, w.present = w.faces[:0], w.touches[:0], w.columns[:0], w.rooms[:0], false
	for i := range c.NumFaces() {
		n, d := c.FacePlane(i)
		label, _ := c.Face(i)
		l := length(n)
		w.faces = append(w.faces, face{n: scale(1/l, n), d: d / l, label: label})
	}
}

// local is triangle i seen from the site.
func (w *work) local(i int32) (a, b, c Vec) {
	a, b, c = w.m.corners(i)
	return sub(a, w.site), sub(b, w.site), sub(c, w.site)
}

// findTouches lists the triangles that meet the cell or come near it, and marks the
// faces that they come near.
func (w *work) findTouches() {
	m := w.m
	r := Vec{X: relaxed * m.near, Y: relaxed * m.near, Z: relaxed * m.near}
	lo, hi := sub(add(w.lo, w.site), r), add(add(w.hi, w.site), r)
	m.tree.inBox(lo, hi, func(i int32) bool {
		if m.wall[i] < 0 {
			return true
		}
		a, b, c := m.corners(i)
		if min(a.X, b.X, c.X) > hi.X || max(a.X, b.X, c.X) < lo.X || min(a.Y, b.Y, c.Y) > hi.Y || max(a.Y, b.Y, c.Y) < lo.Y ||
			min(a.Z, b.Z, c.Z) > hi.Z || max(a.Z, b.Z, c.Z) < lo.Z {
			return true
		}
		w.poly.Set(sub(a, w.site), sub(b, w.site), sub(c, w.site))
		for k := range w.faces {
			if w.poly.Clip(w.faces[k].n, w.faces[k].d+relaxed*m.near) == polyhedron.Empty {
				return true
			}
		}
		w.touches = append(w.touches, touch{t: i, flush: w.mark(i)})
		return true
	})
	slices.SortFunc(w.touches, func(a, b touch) int { return int(a.t - b.t) })
}

// mark marks the faces that w.poly, what the cell has of triangle i, comes near. It
// returns the face in whose plane it lies, or -1.
func (w *work) mark(i int32) int32 {
	near := w.m.near
	flush, best := int32(-1), 0.9
	for k := range w.faces {
		f := &w.faces[k]
		lo, hi := inf, -inf
		for j := range w.poly.Len() {
			s := dot(f.n, w.poly.Corner(j)) - f.d
			lo, hi = min(lo, s), max(hi, s)
		}
		if hi < -(2*shift+relaxed)*near {
			continue
		}
		f.near = true
		if lo < -near || hi > near {
			continue
		}
		if turned := math.Abs(dot(f.n, w.m.n[i])); turned > best {
			flush, best = int32(k), turned
		}
	}
	return flush
}

// whole measures a cell that the surface does not come near.
func (w *work) whole() {
	out, c := w.out, w.c
	if w.m.side(add(w.site, w.middle)) == solid.Outside {
		out.Empty = true
		return
	}
	switch {
	case w.want&solid.WantCentroid != 0:
		out.Volume, out.First = c.VolumeAndFirst()
	case w.want&solid.WantVolume != 0:
		out.Volume = c.Volume()
	}
	if w.want&solid.WantContacts != 0 {
		for i := range w.faces {
			if w.faces[i].label >= 0 {
				out.Contacts[i] = length(c.FaceArea(i))
			}
		}
	}
	if w.want&solid.WantFarthest != 0 {
		out.Farthest = c.Farthest()
	}
	if w.want&solid.WantShape != 0 {
		out.Shape = c
	}
}

// clipped is the area of w.poly in the cell, the face skip left aside.
func (w *work) clipped(skip int32) float64 {
	for k := range w.faces {
		if int32(k) != skip && w.poly.Clip(w.faces[k].n, w.faces[k].d) == polyhedron.Empty {
			return 0
		}
	}
	return length(w.poly.Area())
}

// measureWalls finds the area of every touching triangle in the cell. A triangle in the
// plane of a face of the cell is a wall of it if the solid, on the inner side of the
// triangle, is on the side of the cell; that is found out by moving it inwards.
func (w *work) measureWalls() {
	m := w.m
	tiny := 1e-14 * w.surface
	for k := range w.touches {
		h := &w.touches[k]
		a, b, c := w.local(h.t)
		w.poly.Set(a, b, c)
		way, n := 1.0, m.n[h.t]
		if m.folded != nil && m.folded[h.t] {
			way, n = -1, scale(-1, n)
		}
		if h.flush < 0 {
			h.area = way * w.clipped(-1)
			w.present = w.present || h.area > tiny
			continue
		}
		// Moved inwards by two steps, so that what the steps themselves change cancels.
		var moved [2]float64
		for step := range moved {
			w.poly.Set(a, b, c)
			w.poly.Move(scale(-float64(step+1)*shift*m.near, n))
			moved[step] = w.clipped(-1)
		}
		if moved[0] > 0 {
			h.area = way * max(0, 2*moved[0]-moved[1])
			w.present = w.present || h.area > tiny
		}
		w.poly.Set(a, b, c)
		f := &w.faces[h.flush]
		switch in := way * w.clipped(h.flush); {
		case dot(f.n, n) < 0:
			f.beyond += in
		case m.isSeam(h.t):
			f.seam += in
		default:
			f.within += in
		}
	}
}

// sumWalls adds the walls up.
func (w *work) sumWalls() {
	var total sum
	for k := range w.touches {
		h := &w.touches[k]
		if w.m.isSeam(h.t) {
			continue
		}
		total.add(h.area)
		wall := w.m.wall[h.t]
		i := slices.IndexFunc(w.rooms, func(r wallRoom) bool { return r.wall == wall })
		if i < 0 {
			i = len(w.rooms)
			w.rooms = append(w.rooms, wallRoom{wall: wall})
		}
		w.rooms[i].area += h.area
		w.rooms[i].cuts = w.rooms[i].cuts || h.flush < 0 && h.area > 0
	}
	w.out.Walls = total.value()
	least := w.leastArea()
	for _, r := range w.rooms {
		if r.area > least {
			w.out.WallFaces++
		}
	}
}

// leastArea is the area below which a wall in the cell does not count.
func (w *work) leastArea() float64 {
	return max(crumb*w.surface, 2*w.m.near*math.Sqrt(w.surface))
}

// findFarthest finds the farthest corner of the part of the cell in the solid: a corner
// of a wall in the cell, or a vertex of the cell in the solid.
func (w *work) findFarthest() {
	far := 0.0
	tiny := 1e-14 * w.surface
	for k := range w.touches {
		h := &w.touches[k]
		if h.area <= tiny {
			continue
		}
		a, b, c := w.local(h.t)
		w.poly.Set(a, b, c)
		if w.clipped(h.flush) == 0 {
			continue
		}
		for i := range w.poly.Len() {
			far = max(far, length(w.poly.Corner(i)))
		}
	}
	for _, v := range w.c.Vertices() {
		if l := length(v); l > far && w.isIn(v) {
			far = l
		}
	}
	w.out.Farthest = far
}

// inwards is how far, as a share of the way to the cell's middle, a vertex is moved to
// find out whether the solid reaches it.
const inwards = 1e-9

func (w *work) isIn(v Vec) bool {
	return w.m.side(add(w.site, add(v, scale(inwards, sub(w.middle, v))))) == solid.Inside
}

// judgeShape finds out whether the part of the cell in the solid is convex: then it is
// the cell cut by the walls that pass through it.
func (w *work) judgeShape() {
	out := w.out
	out.Clipped = out.WallFaces > 0
	if out.WallFaces == 0 {
		out.Shape = w.c
		return
	}
	out.Reentrant = true
	least := w.leastArea()
	if len(w.rooms) > mostWalls || w.mixed(least) {
		return
	}
	w.shape.CopyFrom(w.c)
	for _, r := range w.rooms {
		if !r.cuts || r.area <= least {
			continue
		}
		n, d := w.planeOf(r.wall)
		if w.shape.Clip(n, d, polyhedron.Wall(r.wall)) == polyhedron.Empty {
			return
		}
	}
	tol := max(1e-11*w.c.Volume(), w.m.near*w.surface)
	if math.Abs(w.shape.Volume()-out.Volume) > tol {
		return
	}
	out.Reentrant, out.Shape = false, &w.shape
}

// mostWalls is the number of walls above which no shape is looked for.
const mostWalls = 64

// planeOf is the plane of a wall, seen from the site.
func (w *work) planeOf(wall int32) (n Vec, d float64) {
	p := &w.m.plane[wall]
	return p.n, dot(p.n, sub(p.at, w.site))
}

// mixed tells that a face is a contact in one part and a wall in another.
func (w *work) mixed(least float64) bool {
	if w.want&solid.WantContacts == 0 {
		return false
	}
	for i := range w.faces {
		if f := &w.faces[i]; f.label >= 0 && f.within > least && w.out.Contacts[i] > least {
			return true
		}
	}
	return false
}
