package mesh

import (
	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

var _ solid.Faceted = (*Mesh)(nil)

// WallsIn calls do for the part in the cell of each triangle that has the solid there.
func (m *Mesh) WallsIn(c *polyhedron.Cell, site Vec, scratch *solid.Work, do func(p *polyhedron.Polygon)) int {
	if c.Empty() {
		return 0
	}
	w := workOf(scratch)
	w.m, w.c, w.site, w.want = m, c, site, solid.WantWalls
	w.open()
	w.findTouches()
	w.measureWalls()
	for k := range w.touches {
		h := &w.touches[k]
		if h.area <= 1e-14*w.surface {
			continue
		}
		a, b, c := w.local(h.t)
		w.poly.Set(a, b, c)
		if w.clipped(h.flush) > 0 {
			do(&w.poly)
		}
	}
	return len(w.touches)
}

// SectorsAt appends the sectors of the triangles at p: one at a corner, two along an edge,
// four within.
func (m *Mesh) SectorsAt(p Vec, tol float64, buf []solid.Sector) []solid.Sector {
	r := Vec{X: tol, Y: tol, Z: tol}
	m.tree.inBox(sub(p, r), add(p, r), func(i int32) bool {
		if m.wall[i] < 0 {
			return true
		}
		a, b, c := m.corners(i)
		v := [3]Vec{sub(a, p), sub(b, p), sub(c, p)}
		if triangleDistance(v[0], v[1], v[2]) <= tol {
			buf = m.sectors(v, m.n[i], tol, buf)
		}
		return true
	})
	return buf
}

func (m *Mesh) sectors(v [3]Vec, n Vec, tol float64, buf []solid.Sector) []solid.Sector {
	unit := func(d Vec) Vec { return scale(1/length(d), d) }
	for k := range 3 {
		if length(v[k]) <= tol {
			return append(buf, solid.Sector{A: unit(sub(v[(k+1)%3], v[k])), B: unit(sub(v[(k+2)%3], v[k]))})
		}
	}
	for k := range 3 {
		if a, b := v[k], v[(k+1)%3]; segmentDistance(a, b) <= tol {
			e := unit(sub(b, a))
			in := cross(n, e)
			return append(buf, solid.Sector{A: e, B: in}, solid.Sector{A: in, B: scale(-1, e)})
		}
	}
	e := unit(sub(v[1], v[0]))
	f := cross(n, e)
	return append(buf, solid.Sector{A: e, B: f}, solid.Sector{A: f, B: scale(-1, e)},
		solid.Sector{A: scale(-1, e), B: scale(-1, f)}, solid.Sector{A: scale(-1, f), B: e})
}
