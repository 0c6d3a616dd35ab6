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
	if sure, yes := s.sectionsOverlap(i, j, si, sj); sure {
		if yes {
			return crossed, 0, 0
		}
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

// sectionsOverlap tells in rounded numbers whether the sections of two triangles share
// more than a point, if these can tell. A corner that both have is the same number in
// both.
func (s *surface) sectionsOverlap(i, j int32, si, sj [3]int) (sure, yes bool) {
	p, ep, okP := s.roughSection(i, j, si)
	q, eq, okQ := s.roughSection(j, i, sj)
	if !okP || !okQ {
		return false, false
	}
	d := sub(p[1], p[0])
	axis := 0
	for k := range 3 {
		if abs(component(d, k)) > abs(component(d, axis)) {
			axis = k
		}
	}
	a, b, c, e := component(p[0], axis), component(p[1], axis), component(q[0], axis), component(q[1], axis)
	margin := 4 * (ep + eq)
	if abs(b-a) <= margin || abs(e-c) <= margin {
		return false, false
	}
	shared := min(max(a, b), max(c, e)) - max(min(a, b), min(c, e))
	switch {
	case shared > margin:
		return true, true
	case shared < -margin:
		return true, false
	case shared == 0:
		for _, x := range s.t[i] {
			for _, y := range s.t[j] {
				if v := component(s.v[x], axis); x == y && (v == a || v == b) && (v == c || v == e) {
					return true, false
				}
			}
		}
	}
	return false, false
}

// roughSection is section in rounded numbers, and a bound of what rounding did to them.
func (s *surface) roughSection(i, j int32, sides [3]int) (out [2]Vec, bound float64, ok bool) {
	a, b, c := s.corners(j)
	n := cross(sub(b, a), sub(c, a))
	reach := length(sub(b, a)) * length(sub(c, a))
	k := 0
	for x := range 3 {
		p, q := s.v[s.t[i][x]], s.v[s.t[i][(x+1)%3]]
		if sides[x] == 0 && k < 2 {
			out[k] = p
			k++
		}
		if sides[x]*sides[(x+1)%3] < 0 && k < 2 {
			hp, hq := dot(n, sub(p, a)), dot(n, sub(q, a))
			size := length(sub(p, a)) + length(sub(q, a))
			slip := rounding * reach * (size + largest(a) + largest(p)) / abs(hp-hq)
			if !(slip < 1e-3) || signOf(hp) != sides[x] || signOf(hq) == sides[x] {
				return out, 0, false
			}
			d := sub(q, p)
			out[k] = add(p, scale(hp/(hp-hq), d))
			bound = max(bound, slip*length(d)+0x1p-50*(largest(p)+largest(q)))
			k++
		}
	}
	return out, bound, k == 2
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
