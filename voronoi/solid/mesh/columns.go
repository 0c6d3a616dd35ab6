package mesh

import (
	"math"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/predicate"
	"nearcell/voronoi/solid"
)

// column is the space below a triangle: three upright planes through its sides and its
// own. Over the triangles of a closed surface, the columns of those that look up less
// those of the ones that look down are the solid.
type column struct {
	sign float64
	n    [4]Vec
	d    [4]float64
}

// findColumns lists the columns that reach the cell.
func (w *work) findColumns() {
	m := w.m
	lo, hi := add(w.lo, w.site), add(w.hi, w.site)
	w.columns = w.columns[:0]
	reach := shift * m.near * 2
	lo, hi = sub(lo, Vec{X: reach, Y: reach, Z: reach}), Vec{X: hi.X + reach, Y: hi.Y + reach, Z: inf}
	m.tree.inBox(lo, hi, func(i int32) bool {
		a, b, c := m.corners(i)
		if min(a.X, b.X, c.X) > hi.X || max(a.X, b.X, c.X) < lo.X || min(a.Y, b.Y, c.Y) > hi.Y || max(a.Y, b.Y, c.Y) < lo.Y ||
			max(a.Z, b.Z, c.Z) < lo.Z {
			return true
		}
		if turn := predicate.Orient2D(xy(a), xy(b), xy(c)); turn != 0 {
			w.columns = append(w.columns, w.columnOf(i, float64(turn)))
		}
		return true
	})
}

// columnOf is the column of triangle i, which turns this way seen from above. The plane
// through a side is computed from the end that is first by x and y and turned round for
// the triangle on the other side, so that both have the same one to the last bit.
func (w *work) columnOf(i int32, turn float64) column {
	c := column{sign: turn}
	t := w.m.t[i]
	var v [3]Vec
	for k := range 3 {
		v[k] = w.m.v[t[k]]
	}
	for k := range 3 {
		a, b := v[k], v[(k+1)%3]
		out := turn
		if b.X < a.X || b.X == a.X && b.Y < a.Y {
			a, b, out = b, a, -turn
		}
		x, y := b.X-a.X, b.Y-a.Y
		l := math.Hypot(x, y)
		n := Vec{X: y / l, Y: -x / l}
		d := float64(n.X*(a.X-w.site.X)) + float64(n.Y*(a.Y-w.site.Y))
		c.n[k], c.d[k] = scale(out, n), out*d
	}
	n := w.m.n[i]
	if n == (Vec{}) {
		n = Vec{Z: turn}
	}
	n = scale(turn, n)
	p := sub(v[0], w.site)
	for _, q := range v[1:] {
		if q := sub(q, w.site); dot(q, q) < dot(p, p) {
			p = q
		}
	}
	c.n[3], c.d[3] = n, dot(n, p)
	return c
}

// addColumns adds up volume and first moment of the cell in the columns.
func (w *work) addColumns() {
	var volume, x, y, z sum
	wholeVolume, wholeFirst := 0.0, Vec{}
	known := false
	for k := range w.columns {
		col := &w.columns[k]
		cuts, ok := reaches(w.c.Vertices(), col)
		if !ok {
			continue
		}
		v, first := 0.0, Vec{}
		if cuts == 0 {
			if !known {
				wholeVolume, wholeFirst = w.c.VolumeAndFirst()
				known = true
			}
			v, first = wholeVolume, wholeFirst
		} else if !w.cut(col, cuts) {
			continue
		} else if w.want&solid.WantCentroid != 0 {
			v, first = w.body.VolumeAndFirst()
		} else {
			v = w.body.Volume()
		}
		volume.add(col.sign * v)
		x.add(col.sign * first.X)
		y.add(col.sign * first.Y)
		z.add(col.sign * first.Z)
	}
	w.out.Volume = volume.value()
	if w.want&solid.WantCentroid != 0 {
		w.out.First = Vec{X: x.value(), Y: y.value(), Z: z.value()}
	}
}

// reaches tells whether a column has something of the vertices' hull on the inner side
// of each of its planes, and which of them cut it, as bits.
func reaches(vs []Vec, col *column) (cuts uint8, ok bool) {
	for k := range col.n {
		below, above := false, false
		for _, v := range vs {
			s := dot(col.n[k], v) - col.d[k]
			below, above = below || s < 0, above || s > 0
		}
		if !below {
			return 0, false
		}
		if above {
			cuts |= 1 << k
		}
	}
	return cuts, true
}

// cut makes w.body the part of the cell in the column.
func (w *work) cut(col *column, cuts uint8) bool {
	w.body.CopyFrom(w.c)
	for k := range col.n {
		if cuts&(1<<k) != 0 && w.body.Clip(col.n[k], col.d[k], section) == polyhedron.Empty {
			return false
		}
	}
	return true
}

// measureContacts finds the areas of the faces inside the solid.
//
// A face that the surface does not come near is inside or outside as a whole. Others are
// cut by the columns twice, moved a little to either side, since a face that lies in a
// wall, or in the upright plane between two columns, is a null set for them. What walls
// in the plane of the face have the solid on one side only is no contact.
func (w *work) measureContacts() {
	for i := range w.faces {
		f := &w.faces[i]
		if f.label < 0 {
			continue
		}
		area := length(w.c.FaceArea(i))
		if !(area > 0) {
			continue
		}
		if !f.near {
			if w.m.side(add(w.site, w.faceMiddle(i))) != solid.Outside {
				w.out.Contacts[i] = area
			}
			continue
		}
		move := shift * w.m.near
		inner := w.faceNextTo(i, -move) - f.within
		outer := w.faceNextTo(i, move) - f.beyond + f.seam
		in := (inner + outer) / 2
		if math.Abs(inner-outer) > 1e-6*area {
			in = min(inner, outer)
		}
		if in < 1e-9*area && (f.within > 0 || f.beyond > 0) {
			in = 0
		}
		w.out.Contacts[i] = min(max(in, 0), area)
	}
}

func (w *work) faceMiddle(i int) Vec {
	_, loop := w.c.Face(i)
	var m Vec
	for _, j := range loop {
		m = add(m, w.c.Vertex(int(j)))
	}
	return scale(1/float64(len(loop)), m)
}

// faceNextTo is the area of face i inside the solid on one side of it: moved by two steps,
// so that strips along walls, as wide as the step, cancel. A face that meets the solid in
// a re-entrant edge alone has nothing in it.
func (w *work) faceNextTo(i int, move float64) float64 {
	return max(0, 2*w.faceIn(i, move)-w.faceIn(i, 2*move))
}

// faceIn is the area of face i, moved along its normal, inside the solid.
func (w *work) faceIn(i int, move float64) float64 {
	var area sum
	w.trial.SetFace(w.c, i)
	w.trial.Move(scale(move, w.faces[i].n))
	whole := -1.0
	for k := range w.columns {
		col := &w.columns[k]
		inside := true
		for j := range col.n {
			below, above := false, false
			for x := range w.trial.Len() {
				s := dot(col.n[j], w.trial.Corner(x)) - col.d[j]
				below, above = below || s < 0, above || s > 0
			}
			if !below {
				inside = false
				break
			}
			if above && inside {
				w.poly.CopyFrom(&w.trial)
				inside = false
				for ; j < len(col.n); j++ {
					if w.poly.Clip(col.n[j], col.d[j]) == polyhedron.Empty {
						break
					}
				}
				if !w.poly.Empty() {
					area.add(col.sign * length(w.poly.Area()))
				}
				break
			}
		}
		if inside {
			if whole < 0 {
				whole = length(w.trial.Area())
			}
			area.add(col.sign * whole)
		}
	}
	return area.value()
}
