package planar

import (
	"cmp"
	"errors"
	"slices"

	"gonum.org/v1/gonum/spatial/r2"
	"gonum.org/v1/gonum/spatial/r3"

	"nearcell/voronoi/predicate"
)

// Vec is a place in the plane.
type Vec = r2.Vec

// Mesh is a triangulation. Side k of triangle t runs from T[t][k] to the next corner;
// Next[t][k] is the triangle on its other side, -1 outside.
type Mesh struct {
	P    []Vec
	T    [][3]int32 // counter-clockwise
	Next [][3]int32
}

// ErrCrossing: a segment passes through a point or crosses another one.
var ErrCrossing = errors.New("planar: a segment passes through a point or crosses another")

// Delaunay is the Delaunay triangulation of points that all differ, no triangles if they
// lie on a line.
func Delaunay(points []Vec) *Mesh {
	m := &Mesh{P: points}
	s := &sweep{Mesh: m}
	s.run()
	m.legalise()
	return m
}

// sweep joins the points from left to right. The hull is a ring of points; side[p] is
// the triangle with the hull's side from p to the next point, and the side's number.
type sweep struct {
	*Mesh
	next, prev []int32
	side       [][2]int32
}

func (s *sweep) run() {
	order := make([]int32, len(s.P))
	for i := range order {
		order[i] = int32(i)
	}
	slices.SortFunc(order, func(a, b int32) int {
		return cmp.Or(cmp.Compare(s.P[a].X, s.P[b].X), cmp.Compare(s.P[a].Y, s.P[b].Y), cmp.Compare(a, b))
	})
	s.next, s.prev, s.side = make([]int32, len(s.P)), make([]int32, len(s.P)), make([][2]int32, len(s.P))
	// The first points may lie on a line: a fan from the first that does not.
	k := 2
	for k < len(order) && predicate.Orient2D(s.P[order[0]], s.P[order[1]], s.P[order[k]]) == 0 {
		k++
	}
	if k >= len(order) {
		return
	}
	line, apex := order[:k], order[k]
	left := predicate.Orient2D(s.P[line[0]], s.P[line[1]], s.P[apex]) > 0
	ring := slices.Clone(line)
	if !left {
		slices.Reverse(ring)
	}
	ring = append(ring, apex)
	before := int32(-1)
	for i := 0; i+2 < len(ring); i++ {
		t := s.add(ring[i], ring[i+1], apex)
		s.side[ring[i]] = [2]int32{t, 0}
		if before >= 0 {
			s.join(before, 1, t, 2)
		} else {
			s.side[apex] = [2]int32{t, 2}
		}
		before = t
	}
	s.side[ring[len(ring)-2]] = [2]int32{before, 1}
	for i, p := range ring {
		q := ring[(i+1)%len(ring)]
		s.next[p], s.prev[q] = q, p
	}
	last := apex
	for _, p := range order[k+1:] {
		s.insert(p, last)
		last = p
	}
}

// insert joins p to the sides of the hull that it sees; last, the point before it, is an
// end of one of them.
func (s *sweep) insert(p, last int32) {
	first := last
	for s.sees(p, s.prev[first]) {
		first = s.prev[first]
	}
	end := last
	before := int32(-1)
	for s.sees(p, end) {
		end = s.next[end]
	}
	for q := first; q != end; q = s.next[q] {
		t := s.add(q, p, s.next[q])
		old := s.side[q]
		s.join(t, 2, old[0], int(old[1]))
		if before >= 0 {
			s.join(before, 1, t, 0)
		} else {
			s.side[first] = [2]int32{t, 0}
		}
		before = t
	}
	s.side[p] = [2]int32{before, 1}
	s.next[first], s.prev[p], s.next[p], s.prev[end] = p, first, end, p
}

// sees tells whether p lies strictly beyond the hull's side from q.
func (s *sweep) sees(p, q int32) bool {
	return predicate.Orient2D(s.P[q], s.P[s.next[q]], s.P[p]) < 0
}

func (m *Mesh) add(a, b, c int32) int32 {
	m.T = append(m.T, [3]int32{a, b, c})
	m.Next = append(m.Next, [3]int32{-1, -1, -1})
	return int32(len(m.T) - 1)
}

func (m *Mesh) join(t int32, i int, u int32, j int) {
	m.Next[t][i] = u
	if u >= 0 {
		m.Next[u][j] = t
	}
}

// across is the number of the side of u that t lies on.
func (m *Mesh) across(u, t int32) int {
	for k, x := range m.Next[u] {
		if x == t {
			return k
		}
	}
	panic("planar: triangles that are no neighbours")
}

// flip turns the diagonal between t and its neighbour over side k.
func (m *Mesh) flip(t int32, k int) {
	u := m.Next[t][k]
	j := m.across(u, t)
	a, b, c := m.T[t][k], m.T[t][(k+1)%3], m.T[t][(k+2)%3]
	d := m.T[u][(j+2)%3]
	bc, ca := m.Next[t][(k+1)%3], m.Next[t][(k+2)%3]
	ad, db := m.Next[u][(j+1)%3], m.Next[u][(j+2)%3]
	var kBC, kCA, kAD, kDB int
	if bc >= 0 {
		kBC = m.across(bc, t)
	}
	if ca >= 0 {
		kCA = m.across(ca, t)
	}
	if ad >= 0 {
		kAD = m.across(ad, u)
	}
	if db >= 0 {
		kDB = m.across(db, u)
	}
	m.T[t], m.T[u] = [3]int32{a, d, c}, [3]int32{d, b, c}
	m.join(t, 0, ad, kAD)
	m.join(t, 1, u, 2)
	m.join(t, 2, ca, kCA)
	m.join(u, 0, db, kDB)
	m.join(u, 1, bc, kBC)
}

// legalise turns diagonals until every circle is empty.
func (m *Mesh) legalise() {
	type side struct{ t, k int32 }
	var stack []side
	for t := range m.T {
		for k := range 3 {
			stack = append(stack, side{int32(t), int32(k)})
		}
	}
	for len(stack) > 0 {
		s := stack[len(stack)-1]
		stack = stack[:len(stack)-1]
		u := m.Next[s.t][s.k]
		if u < 0 {
			continue
		}
		t := m.T[s.t]
		d := m.T[u][(m.across(u, s.t)+2)%3]
		if !inCircle(m.P[t[0]], m.P[t[1]], m.P[t[2]], m.P[d]) {
			continue
		}
		m.flip(s.t, int(s.k))
		for k := range int32(3) {
			stack = append(stack, side{s.t, k}, side{u, k})
		}
	}
}

// inCircle tells whether d lies strictly inside the circle through a, b, c, which turn
// counter-clockwise. A circle is where a sphere meets the plane: any sphere through the
// three points and one off the plane will do.
func inCircle(a, b, c, d Vec) bool {
	up := func(v Vec, z float64) r3.Vec { return r3.Vec{X: v.X, Y: v.Y, Z: z} }
	h := max(abs(b.X-a.X), abs(b.Y-a.Y), abs(c.X-a.X), abs(c.Y-a.Y))
	apex := up(a, h)
	// Seen from above, a, b, c turn counter-clockwise: with the apex above, positive.
	return predicate.InSphere(up(a, 0), up(b, 0), up(c, 0), apex, up(d, 0)) > 0
}

func abs(x float64) float64 { return max(x, -x) }
