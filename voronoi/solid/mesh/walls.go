package mesh

import (
	"cmp"
	"math"
	"slices"

	"nearcell/voronoi/solid"
)

// findWalls joins triangles that lie in one plane and hang together into walls, so that
// it does not show how a plane face was cut into triangles. The largest triangle of a
// wall says where its plane stands.
func (m *Mesh) findWalls(list []use) {
	n := len(m.t)
	neighbours := make([][]int32, n)
	eachEdge(list, func(of []use) {
		for _, a := range of {
			for _, b := range of {
				if a.triangle != b.triangle {
					neighbours[a.triangle] = append(neighbours[a.triangle], b.triangle)
				}
			}
		}
	})
	order := make([]int32, n)
	for i := range order {
		order[i] = int32(i)
	}
	slices.SortStableFunc(order, func(a, b int32) int { return cmp.Compare(m.size[b], m.size[a]) })
	m.wall = make([]int32, n)
	for i := range m.wall {
		m.wall[i] = -1
	}
	flat := m.near
	if m.precision > 0 {
		flat += 4 * m.precision * max(largest(m.lo), largest(m.hi))
	}
	var stack []int32
	for _, seed := range order {
		if m.wall[seed] >= 0 || m.size[seed] == 0 {
			continue
		}
		a, _, _ := m.corners(seed)
		p := plane{m.n[seed], a}
		w := int32(len(m.plane))
		m.plane = append(m.plane, p)
		m.wall[seed] = w
		stack = append(stack[:0], seed)
		for len(stack) > 0 {
			i := stack[len(stack)-1]
			stack = stack[:len(stack)-1]
			for _, j := range neighbours[i] {
				if m.wall[j] < 0 && m.size[j] > 0 && m.isSeam(j) == m.isSeam(seed) && dot(m.n[j], p.n) > 0.9 && m.isIn(j, p, flat) {
					m.wall[j] = w
					stack = append(stack, j)
				}
			}
		}
	}
	m.straighten()
}

// isIn tells whether a triangle lies in a plane.
func (m *Mesh) isIn(i int32, p plane, tol float64) bool {
	a, b, c := m.corners(i)
	return math.Abs(dot(p.n, sub(a, p.at))) <= tol && math.Abs(dot(p.n, sub(b, p.at))) <= tol && math.Abs(dot(p.n, sub(c, p.at))) <= tol
}

// straighten makes normals that lean from an axis by rounding only exact.
func (m *Mesh) straighten() {
	for i := range m.plane {
		n := &m.plane[i].n
		for _, x := range [3]*float64{&n.X, &n.Y, &n.Z} {
			if math.Abs(*x) < 1e-15 {
				*x = 0
			}
		}
		if l := length(*n); l > 0 {
			*n = scale(1/l, *n)
		}
	}
}

// findCorners lists the corners in which walls of three directions meet.
func (m *Mesh) findCorners() {
	walls := make([][]int32, len(m.v))
	for i, t := range m.t {
		w := m.wall[i]
		if w < 0 {
			continue
		}
		for _, x := range t {
			if !slices.Contains(walls[x], w) {
				walls[x] = append(walls[x], w)
			}
		}
	}
	for x, list := range walls {
		if m.spans(list) {
			m.corner = append(m.corner, m.v[x])
		}
	}
	slices.SortFunc(m.corner, compare)
}

// spans tells whether the normals of walls span space.
func (m *Mesh) spans(list []int32) bool {
	var line Vec
	for i, w := range list {
		n := m.plane[w].n
		if line != (Vec{}) {
			if math.Abs(dot(line, n)) > 1e-6 {
				return true
			}
			continue
		}
		for _, u := range list[:i] {
			if c := cross(m.plane[u].n, n); length(c) > 1e-6 {
				line = scale(1/length(c), c)
			}
		}
	}
	return false
}

// Corners are the corners of the surface, by x, y, z.
func (m *Mesh) Corners() []Vec { return slices.Clone(m.corner) }

// WallsAt appends the planes of the walls that come within tol of p, each once, by
// number.
func (m *Mesh) WallsAt(p Vec, tol float64, buf []solid.Plane) []solid.Plane {
	base := len(buf)
	r := Vec{X: tol, Y: tol, Z: tol}
	m.tree.inBox(sub(p, r), add(p, r), func(i int32) bool {
		w := m.wall[i]
		if w < 0 || slices.ContainsFunc(buf[base:], func(q solid.Plane) bool { return q.Wall == w }) {
			return true
		}
		a, b, c := m.corners(i)
		if triangleDistance(sub(a, p), sub(b, p), sub(c, p)) <= tol {
			q := m.plane[w]
			buf = append(buf, solid.Plane{N: q.n, D: dot(q.n, q.at), Wall: w})
		}
		return true
	})
	slices.SortFunc(buf[base:], func(a, b solid.Plane) int { return int(a.Wall - b.Wall) })
	return buf
}
