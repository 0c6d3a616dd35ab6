package solid

import (
	"math"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/predicate"
)

// Measure computes what is wanted of the part of c inside the solid.
//
// Most cells touch no wall and are inside or outside as a whole; most others meet
// only walls that stand in convex position to one another and are cut by these. The
// rest is cut by the convex pieces of the plan, whose common sides are one and the
// same plane to the last bit, so that nothing is lost or doubled between them. Faces
// of the cell that lie in walls are judged by what is on their two sides (contacts.go).
func (x *extrusion) Measure(c *polyhedron.Cell, site Vec, want Want, w *Work, out *Measures) error {
	if !w.begin(x, c, site, want, out) {
		out.Empty = true
		return nil
	}
	w.findNear()
	if w.want&(WantContacts|WantWalls) != 0 {
		w.listFaces()
	}
	if w.lo.Z >= x.z1-site.Z-x.near || w.hi.Z <= x.z0-site.Z+x.near {
		w.outer = true // lies on the floor or the ceiling from outside
	}
	switch {
	case len(w.near) == 0:
		w.whole()
	case !w.convex():
		w.byPieces()
	}
	if !out.Empty {
		w.finish(c)
	}
	return nil
}

// whole measures a cell that no wall touches.
func (w *Work) whole() {
	if w.sideOfBase() == Outside {
		w.out.Empty = true
		return
	}
	w.addBody(w.base)
	if w.outer {
		w.out.Empty = true
		return
	}
	w.addFarthest(w.base)
	if w.want&WantShape != 0 {
		w.out.Shape = w.base
	}
}

// sideOfBase tells where a point inside the base lies in the plan.
func (w *Work) sideOfBase() Side { return w.x.plan.side(w.middle(w.base)) }

// middle is the mean of a cell's vertices in the plan's coordinates.
func (w *Work) middle(c *polyhedron.Cell) Vec2 {
	var m Vec2
	vs := c.Vertices()
	for _, v := range vs {
		m.X += v.X
		m.Y += v.Y
	}
	return Vec2{X: w.site.X + m.X/float64(len(vs)), Y: w.site.Y + m.Y/float64(len(vs))}
}

// convex measures a cell in which the solid is cut out by walls in convex position.
// It returns false, with nothing done, where that is not certain.
//
// If every near edge lies to the left of all others and the cut cell K has its wall
// faces on the edges themselves, K is all there is: no wall runs through the inside of
// K, so K is inside the solid next to its walls and hence as a whole; and another part
// of the solid in the cell would have a wall with that part to its left, which, being
// left of all lines, would lie on the surface of K with K to its left.
func (w *Work) convex() bool {
	if w.outer || len(w.near) > 64 || !w.inConvexPosition() {
		return false
	}
	w.shape.CopyFrom(w.base)
	for i := range w.near {
		e := &w.near[i]
		if w.shape.Clip(e.normal(), e.at.d, polyhedron.Wall(e.wall)) == polyhedron.Empty {
			return false
		}
	}
	if !w.wallsOnEdges() {
		return false
	}
	w.addBody(&w.shape)
	w.addFarthest(&w.shape)
	if w.want&WantWalls != 0 {
		w.cutWalls()
	}
	if w.want&WantShape != 0 {
		w.out.Shape = &w.shape
	}
	return true
}

func (w *Work) inConvexPosition() bool {
	if w.x.plan.convex {
		return true
	}
	for i := range w.near {
		e := w.near[i].edge
		for j := range w.near {
			f := w.near[j].edge
			if i != j && (predicate.Orient2D(e.a, e.b, f.a) < 0 || predicate.Orient2D(e.a, e.b, f.b) < 0) {
				return false
			}
		}
	}
	return true
}

// wallsOnEdges tells whether the faces that the near edges cut lie on the edges, not
// beyond their ends.
func (w *Work) wallsOnEdges() bool {
	for i := range w.shape.NumFaces() {
		n, d := w.shape.FacePlane(i)
		e := w.edgeOf(n, d)
		if e == nil {
			continue
		}
		t0, t1 := e.at.along(w.local(e.a))-w.x.near, e.at.along(w.local(e.b))+w.x.near
		_, loop := w.shape.Face(i)
		for _, j := range loop {
			if t := e.at.along(w.shape.Vertex(int(j))); t < t0 || t > t1 {
				return false
			}
		}
	}
	return true
}

// cutWalls notes the areas of the faces that the near edges cut.
func (w *Work) cutWalls() {
	for i := range w.near {
		w.near[i].cut = 0
	}
	for i := range w.shape.NumFaces() {
		if e := w.edgeOf(w.shape.FacePlane(i)); e != nil {
			e.cut += norm3(w.shape.FaceArea(i))
		}
	}
}

// edgeOf is the near edge with this plane, or nil.
func (w *Work) edgeOf(n Vec, d float64) *nearEdge {
	for i := range w.near {
		if e := &w.near[i]; e.at.d == d && e.normal() == n {
			return e
		}
	}
	return nil
}

// byPieces measures a cell by the convex pieces of the plan.
func (w *Work) byPieces() {
	w.out.Empty, w.cut = true, true
	from := w.base
	if w.outer {
		// The cell lies flat on a wall from outside. What rounding leaves of the
		// solid in it has a volume of rounding's size, but would reach as far as
		// the face does: it must not count as a place of the cell.
		from = w.trimmed()
	}
	for i := range w.x.plan.pieces {
		q := &w.x.plan.pieces[i]
		if !w.reaches(q) || !w.cutByPiece(w.base, q) {
			continue
		}
		w.addBody(&w.body)
		if from == w.base {
			w.out.Empty = false
			w.addFarthest(&w.body)
		} else if from != nil && w.cutByPiece(from, q) {
			w.out.Empty = false
			w.addFarthest(&w.body)
		}
	}
}

// trimmed is the base without the layer next to walls that it touches from outside;
// nil where nothing else is left.
func (w *Work) trimmed() *polyhedron.Cell {
	w.trim.CopyFrom(w.base)
	for i := range w.near {
		e := &w.near[i]
		if e.in > w.x.near {
			continue
		}
		if w.trim.Clip(Vec{X: -e.n.X, Y: -e.n.Y}, -(e.at.d+2*w.x.near), seam) == polyhedron.Empty {
			return nil
		}
	}
	lo, hi := w.x.z0-w.site.Z, w.x.z1-w.site.Z
	if w.lo.Z >= hi-w.x.near || w.hi.Z <= lo+w.x.near {
		return nil
	}
	return &w.trim
}

// reaches tells whether the piece's box meets the base's.
func (w *Work) reaches(q *piece) bool {
	near := w.x.near
	return q.x0-w.site.X <= w.hi.X+near && q.x1-w.site.X >= w.lo.X-near &&
		q.lo.Y-w.site.Y <= w.hi.Y+near && q.hi.Y-w.site.Y >= w.lo.Y-near
}

// cutByPiece makes w.body the part of c in the piece and reports whether there is any.
func (w *Work) cutByPiece(c *polyhedron.Cell, q *piece) bool {
	bottom, top := &w.x.plan.edges[q.bottom], &w.x.plan.edges[q.top]
	w.body.CopyFrom(c)
	if w.body.Clip(Vec{X: -1}, w.site.X-q.x0, seam) == polyhedron.Empty ||
		w.body.Clip(Vec{X: 1}, q.x1-w.site.X, seam) == polyhedron.Empty ||
		w.body.Clip(bottom.normal(), bottom.offset(w.site), seam) == polyhedron.Empty ||
		w.body.Clip(top.normal(), top.offset(w.site), seam) == polyhedron.Empty {
		return false
	}
	if isSteep(bottom) || isSteep(top) {
		return w.body.Clip(Vec{Y: -1}, w.site.Y-q.lo.Y, seam) != polyhedron.Empty &&
			w.body.Clip(Vec{Y: 1}, q.hi.Y-w.site.Y, seam) != polyhedron.Empty
	}
	return true
}

// addBody adds the volume, the first moment and the areas of the base's faces of a
// convex body inside the solid.
func (w *Work) addBody(c *polyhedron.Cell) {
	if w.want&WantCentroid != 0 {
		v, first := c.VolumeAndFirst()
		w.out.Volume += v
		w.out.First = add3(w.out.First, first)
	} else if w.want&WantVolume != 0 {
		w.out.Volume += c.Volume()
	}
	if w.want&(WantContacts|WantWalls) == 0 {
		return
	}
	for i := range c.NumFaces() {
		n, d := c.FacePlane(i)
		label, _ := c.Face(i)
		if k := w.faceOf(n, d, label); k >= 0 {
			w.faces[k].area += norm3(c.FaceArea(i))
		}
	}
}

func (w *Work) addFarthest(c *polyhedron.Cell) {
	if w.want&WantFarthest != 0 {
		w.out.Farthest = max(w.out.Farthest, c.Farthest())
	}
}

// finish turns the faces' areas into contacts and walls and judges the shape.
func (w *Work) finish(c *polyhedron.Cell) {
	if w.want&WantContacts != 0 {
		w.contacts(c)
	}
	if w.want&WantWalls != 0 {
		w.size = w.base.Surface()
		w.walls()
	}
	if w.want&WantShape != 0 {
		w.out.Clipped = w.out.WallFaces > 0
		if w.mixed() {
			w.out.Reentrant, w.out.Shape = true, nil
		} else if w.out.Shape == nil || w.hasSliver() {
			w.judgeShape()
		}
	}
}

// hasSliver tells that a wall cut the shape that is too small to count in it, or that
// lies in one of its faces and cut a part of it off by rounding.
func (w *Work) hasSliver() bool {
	for i := range w.near {
		if e := &w.near[i]; e.cut > 0 && (e.cut <= w.least() || e.oneSided(w.x.near)) {
			return true
		}
	}
	return false
}

// judgeShape finds out whether what the pieces of the plan add up to is convex: then
// it is the base cut by the walls that pass through it.
func (w *Work) judgeShape() {
	w.out.Reentrant, w.out.Shape = true, nil
	w.shape.CopyFrom(w.base)
	for i := range w.near {
		e := &w.near[i]
		if e.area <= w.least() || e.oneSided(w.x.near) {
			continue
		}
		if w.shape.Clip(e.normal(), e.at.d, polyhedron.Wall(e.wall)) == polyhedron.Empty {
			return
		}
	}
	tol := max(1e-11*w.base.Volume(), w.x.near*w.size)
	if math.Abs(w.shape.Volume()-w.out.Volume) > tol || w.x.plan.side(w.middle(&w.shape)) == Outside {
		return
	}
	w.out.Reentrant, w.out.Shape = false, &w.shape
}
