package delaunay

import (
	"iter"
	"math"
	"slices"

	"gonum.org/v1/gonum/spatial/r2"

	"nearcell/voronoi/predicate"
)

// startSimplex makes the first tetrahedron and its four ghosts of the first points
// that span space. It returns the dimension of the points' affine hull (-1 for none)
// and, when that is 3, the corners.
func (w *worker) startSimplex() (dimension int, corners [4]int32) {
	m := w.m
	dimension, corners = m.spanning(func(yield func(int32) bool) {
		for p := 1; p < len(m.pts) && yield(int32(p)); p++ {
		}
	})
	if dimension == 3 {
		w.simplex(corners)
	}
	return dimension, corners
}

// span returns the dimension of the affine hull of the listed points.
func (m *mesh) span(list []int32) int {
	d, _ := m.spanning(slices.Values(list))
	return d
}

// spanning returns the dimension of the affine hull of points and, when it is
// 3, the first that span it, as a positive tetrahedron.
func (m *mesh) spanning(points iter.Seq[int32]) (dimension int, corners [4]int32) {
	n := 0
	for p := range points {
		switch n {
		case 0:
		case 1:
			if m.same(corners[0], p) {
				continue
			}
		case 2:
			if m.collinear(corners[0], corners[1], p) {
				continue
			}
		case 3:
			side := m.orient(corners[0], corners[1], corners[2], p)
			if side == 0 {
				continue
			}
			if side < 0 {
				corners[1], corners[2] = corners[2], corners[1]
			}
		}
		corners[n] = p
		if n++; n == 4 {
			break
		}
	}
	return n - 1, corners
}

func (w *worker) simplex(v [4]int32) {
	m := w.m
	w.reserve(5)
	var id [5]uint32
	for i := range id {
		id[i] = w.fresh()
	}
	w.hint, w.ghost = id[0], id[1]
	real := &m.tets[id[0]]
	real.v, real.lo, real.hi = v, loIll, float32(math.Inf(1))
	for k := range 4 {
		// Ghost k lies over face k: two corners change places, and so do the
		// faces opposite them.
		g := &m.tets[id[k+1]]
		g.v, g.lo, g.hi = v, loGhost, float32(math.Inf(1))
		g.v[k] = 0
		i, j := (k+1)&3, (k+2)&3
		g.v[i], g.v[j] = v[j], v[i]
		real.n[k] = id[k+1]<<2 + uint32(k)
		g.n[k] = id[0]<<2 + uint32(k)
		m.pts[v[k]].tet = id[0]
	}
	// Ghosts k and l share the face without corners k and l of the simplex.
	for k := range 4 {
		g := &m.tets[id[k+1]]
		for slot := range 4 {
			if slot == k {
				continue
			}
			corner := g.v[slot]
			for l := range 4 {
				if v[l] == corner { // over slot lies ghost l
					other := &m.tets[id[l+1]]
					for s := range 4 {
						if s != l && other.v[s] == v[k] {
							g.n[slot] = id[l+1]<<2 + uint32(s)
						}
					}
				}
			}
		}
	}
}

// collinear reports whether three points lie on one line.
func (m *mesh) collinear(a, b, c int32) bool {
	p, q, r := m.vec(a), m.vec(b), m.vec(c)
	return predicate.Orient2D(r2.Vec{X: p.X, Y: p.Y}, r2.Vec{X: q.X, Y: q.Y}, r2.Vec{X: r.X, Y: r.Y}) == 0 &&
		predicate.Orient2D(r2.Vec{X: p.Y, Y: p.Z}, r2.Vec{X: q.Y, Y: q.Z}, r2.Vec{X: r.Y, Y: r.Z}) == 0 &&
		predicate.Orient2D(r2.Vec{X: p.Z, Y: p.X}, r2.Vec{X: q.Z, Y: q.X}, r2.Vec{X: r.Z, Y: r.X}) == 0
}
