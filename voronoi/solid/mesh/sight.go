package mesh

import "nearcell/voronoi/solid"

var _ solid.Sighted = (*Mesh)(nil)

// Sees tells whether the segment from p to q crosses no wall farther than skip from p.
func (m *Mesh) Sees(p, q Vec, skip float64) bool {
	d := sub(q, p)
	far := length(d)
	sees := true
	m.tree.along(p, q, 0, func(i int32) {
		if !sees || m.wall[i] < 0 {
			return
		}
		a, b, c := m.corners(i)
		u, v, w := sub(a, p), sub(b, p), sub(c, p)
		hp, hq := -dot(m.n[i], u), dot(m.n[i], sub(q, a))
		if (hp < 0) == (hq < 0) {
			return
		}
		// The line passes through the triangle if it turns the same way around all sides.
		x, y, z := dot(d, cross(u, v)), dot(d, cross(v, w)), dot(d, cross(w, u))
		if (x < 0) != (y < 0) || (y < 0) != (z < 0) {
			return
		}
		if abs(hp)/abs(hp-hq)*far > skip {
			sees = false
		}
	})
	return sees
}
