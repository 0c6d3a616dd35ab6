package mesh

import (
	"math/big"

	"nearcell/voronoi/predicate"
)

// How two triangles of one surface meet.
const (
	apart    = iota // not, or in edges and corners only
	crossed         // their interiors cross
	overlaid        // they lie in one plane, look the same way and share an area
	faced           // they lie in one plane, look at each other and share an area
	hinged          // an edge of the second runs through the interior of the first
)

// meeting of the triangles i and j of s. For hinged, edge is the edge of j and above the
// side of i on which the rest of j lies.
func (s *surface) meeting(i, j int32) (how, edge, above int) {
	a, b, c := s.corners(i)
	u, v, w := s.corners(j)
	signs := func(t [3]int32, a, b, c Vec, other [3]int32) (out [3]int, low, high bool) {
		for k, x := range t {
			if x != other[0] && x != other[1] && x != other[2] {
				out[k] = predicate.Orient3D(a, b, c, s.v[x])
			}
			low, high = low || out[k] < 0, high || out[k] > 0
		}
		return out, low, high
	}
	sj, low, high := signs(s.t[j], a, b, c, s.t[i])
	if !low && !high {
		return s.coplanar(i, j), 0, 0
	}
	if low != high {
		zeros := 0
		for k, x := range sj {
			if x != 0 {
				edge = k
			} else {
				zeros++
			}
		}
		if zeros < 2 {
			return apart, 0, 0
		}
		edge = (edge + 1) % 3
		if !s.through(i, s.t[j][edge], s.t[j][(edge+1)%3]) {
			return apart, 0, 0
		}
		if high {
			return hinged, edge, 1
		}
		return hinged, edge, -1
	}
	si, low, high := signs(s.t[i], u, v, w, s.t[j])
	if !low || !high {
		return apart, 0, 0
	}
	p, q := s.section(i, j, si), s.section(j, i, sj)
	if overlap(p, q) {
		return crossed, 0, 0
	}
	return apart, 0, 0
}

// coplanar triangles: whether they share an area.
func (s *surface) coplanar(i, j int32) int {
	a, b, c := s.corners(i)
	axis := upright(a, b, c)
	u, v, w := s.corners(j)
	if axis < 0 || upright(u, v, w) < 0 {
		return apart
	}
	p := [3]vec2{along(a, axis), along(b, axis), along(c, axis)}
	q := [3]vec2{along(u, axis), along(v, axis), along(w, axis)}
	tp, tq := predicate.Orient2D(p[0], p[1], p[2]), predicate.Orient2D(q[0], q[1], q[2])
	if tq == 0 || separated(p, tp, q) || separated(q, tq, p) {
		return apart
	}
	if tp == tq {
		return overlaid
	}
	return faced
}

// separated tells whether a side of p, which turns this way, has all of q beyond it.
func separated(p [3]vec2, way int, q [3]vec2) bool {
	for k := range 3 {
		a, b := p[k], p[(k+1)%3]
		if predicate.Orient2D(a, b, q[0])*way <= 0 && predicate.Orient2D(a, b, q[1])*way <= 0 && predicate.Orient2D(a, b, q[2])*way <= 0 {
			return true
		}
	}
	return false
}

// through tells whether the segment from corner x to corner y, in the plane of triangle
// i, runs through its interior.
func (s *surface) through(i, x, y int32) bool {
	a, b, c := s.corners(i)
	axis := upright(a, b, c)
	if axis < 0 {
		return false
	}
	p := [3]vec2{along(a, axis), along(b, axis), along(c, axis)}
	u, v := along(s.v[x], axis), along(s.v[y], axis)
	way := predicate.Orient2D(p[0], p[1], p[2])
	left, right := false, false
	for k := range 3 {
		if predicate.Orient2D(p[k], p[(k+1)%3], u)*way <= 0 && predicate.Orient2D(p[k], p[(k+1)%3], v)*way <= 0 {
			return false
		}
		t := predicate.Orient2D(u, v, p[k])
		left, right = left || t > 0, right || t < 0
	}
	return left && right
}

// section is where triangle i meets the plane of triangle j: two points.
func (s *surface) section(i, j int32, sides [3]int) [2]point {
	a, b, c := s.corners(j)
	var out [2]point
	n := 0
	for k := range 3 {
		p, q := given(s.v[s.t[i][k]]), given(s.v[s.t[i][(k+1)%3]])
		x, y := sides[k], sides[(k+1)%3]
		if x == 0 && n < 2 {
			out[n] = p
			n++
		}
		if x*y < 0 && n < 2 {
			out[n] = crossing(&p, &q, a, b, c)
			n++
		}
	}
	return out
}

// overlap tells whether two segments of one line share more than a point.
func overlap(p, q [2]point) bool {
	for axis := range 3 {
		a, b, c, e := &p[0].rat()[axis], &p[1].rat()[axis], &q[0].rat()[axis], &q[1].rat()[axis]
		if a.Cmp(b) == 0 {
			continue
		}
		lo, hi := ordered(a, b)
		from, to := ordered(c, e)
		if from.Cmp(lo) < 0 {
			from = lo
		}
		if to.Cmp(hi) > 0 {
			to = hi
		}
		return from.Cmp(to) < 0
	}
	return false
}

func ordered(a, b *big.Rat) (lo, hi *big.Rat) {
	if a.Cmp(b) <= 0 {
		return a, b
	}
	return b, a
}
