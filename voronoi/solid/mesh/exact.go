package mesh

import (
	"math"
	"math/big"

	"nearcell/voronoi/predicate"
)

// point is a place that is given, or the place where an edge and a plane that are given
// meet, exactly.
type point struct {
	f     Vec         // rounded; the place itself where exact is nil
	exact *[3]big.Rat // nil: f is exact
}

func given(v Vec) point { return point{f: v} }

func (p *point) rat() *[3]big.Rat {
	if p.exact != nil {
		return p.exact
	}
	r := new([3]big.Rat)
	r[0].SetFloat64(p.f.X)
	r[1].SetFloat64(p.f.Y)
	r[2].SetFloat64(p.f.Z)
	return r
}

// pointOf makes a point of exact coordinates; it is a given one where they are numbers
// of float64.
func pointOf(r *[3]big.Rat) point {
	x, okX := r[0].Float64()
	y, okY := r[1].Float64()
	z, okZ := r[2].Float64()
	p := point{f: Vec{X: x + 0, Y: y + 0, Z: z + 0}}
	if !okX || !okY || !okZ {
		p.exact = r
	}
	return p
}

// key tells points apart.
func (p *point) key() string {
	if p.exact == nil {
		var b [24]byte
		for i, x := range [3]float64{p.f.X, p.f.Y, p.f.Z} {
			u := math.Float64bits(x + 0)
			for k := range 8 {
				b[8*i+k] = byte(u >> (8 * k))
			}
		}
		return string(b[:])
	}
	return p.exact[0].RatString() + " " + p.exact[1].RatString() + " " + p.exact[2].RatString()
}

// rounding bounds, with room to spare, what the rounding of coordinates and of a
// determinant's terms makes of it, relative to the lengths of its columns and the size
// of the coordinates.
const rounding = 0x1p-46

// orient3 is the side of the plane of the triangle abc on which p lies: the sign of
// det(b-a, c-a, p-a).
func orient3(a, b, c Vec, p *point) int {
	if p.exact == nil {
		return predicate.Orient3D(a, b, c, p.f)
	}
	n := cross(sub(b, a), sub(c, a))
	w := sub(p.f, a)
	d := dot(n, w)
	reach := length(sub(b, a)) * length(sub(c, a))
	if math.Abs(d) > rounding*reach*(length(w)+largest(p.f)+largest(a)) {
		return signOf(d)
	}
	return height(a, b, c, p).Sign()
}

// height is det(b-a, c-a, p-a), exactly.
func height(a, b, c Vec, p *point) *big.Rat {
	ra, rb, rc, rp := given(a), given(b), given(c), p.rat()
	u, v, w := difference(rb.rat(), ra.rat()), difference(rc.rat(), ra.rat()), difference(rp, ra.rat())
	n := ratCross(u, v)
	return ratDot(n, w)
}

func difference(a, b *[3]big.Rat) *[3]big.Rat {
	d := new([3]big.Rat)
	for i := range d {
		d[i].Sub(&a[i], &b[i])
	}
	return d
}

func ratCross(a, b *[3]big.Rat) *[3]big.Rat {
	n := new([3]big.Rat)
	var t big.Rat
	for i := range n {
		j, k := (i+1)%3, (i+2)%3
		n[i].Mul(&a[j], &b[k])
		t.Mul(&a[k], &b[j])
		n[i].Sub(&n[i], &t)
	}
	return n
}

func ratDot(a, b *[3]big.Rat) *big.Rat {
	var s, t big.Rat
	for i := range a {
		t.Mul(&a[i], &b[i])
		s.Add(&s, &t)
	}
	return &s
}

// turn is the side of the line ab on which p lies, all seen along an axis.
func turn(a, b, p *point, axis int) int {
	u, v, q := along(a.f, axis), along(b.f, axis), along(p.f, axis)
	if a.exact == nil && b.exact == nil && p.exact == nil {
		return predicate.Orient2D(u, v, q)
	}
	d := float64((v.X-u.X)*(q.Y-u.Y)) - float64((v.Y-u.Y)*(q.X-u.X))
	long, wide := math.Hypot(v.X-u.X, v.Y-u.Y), math.Hypot(q.X-u.X, q.Y-u.Y)
	if math.Abs(d) > rounding*(long+wide)*(long+wide+largest(a.f)+largest(b.f)+largest(p.f)) {
		return signOf(d)
	}
	i, j := (axis+1)%3, (axis+2)%3
	e, w := difference(b.rat(), a.rat()), difference(p.rat(), a.rat())
	var s, t big.Rat
	s.Mul(&e[i], &w[j])
	t.Mul(&e[j], &w[i])
	return s.Cmp(&t)
}

// onSegment tells whether p lies strictly between a and b on the segment.
func onSegment(a, b, p *point) bool {
	for axis := range 3 {
		if turn(a, b, p, axis) != 0 {
			return false
		}
	}
	e, v := difference(b.rat(), a.rat()), difference(p.rat(), a.rat())
	d := ratDot(e, v)
	return d.Sign() > 0 && d.Cmp(ratDot(e, e)) < 0
}

// crossing is the point of the segment pq on the plane of the triangle abc, from which
// p and q lie on different sides.
func crossing(p, q *point, a, b, c Vec) point {
	hp, hq := height(a, b, c, p), height(a, b, c, q)
	var t, d big.Rat
	t.Quo(hp, d.Sub(hp, hq))
	rp, rq := p.rat(), q.rat()
	r := new([3]big.Rat)
	for i := range r {
		r[i].Sub(&rq[i], &rp[i])
		r[i].Mul(&r[i], &t)
		r[i].Add(&r[i], &rp[i])
	}
	return pointOf(r)
}

// meeting is the point of the segment pq on the line ab, all in one plane and seen along
// an axis; p and q lie on different sides of the line.
func meeting(p, q, a, b *point, axis int) point {
	i, j := (axis+1)%3, (axis+2)%3
	rp, rq, ra := p.rat(), q.rat(), a.rat()
	e := difference(b.rat(), ra)
	off := func(r *[3]big.Rat) *big.Rat {
		w := difference(r, ra)
		var s, t big.Rat
		s.Mul(&e[i], &w[j])
		t.Mul(&e[j], &w[i])
		return s.Sub(&s, &t)
	}
	hp, hq := off(rp), off(rq)
	var t, d big.Rat
	t.Quo(hp, d.Sub(hp, hq))
	r := new([3]big.Rat)
	for k := range r {
		r[k].Sub(&rq[k], &rp[k])
		r[k].Mul(&r[k], &t)
		r[k].Add(&r[k], &rp[k])
	}
	return pointOf(r)
}

// upright is an axis along which the triangle is seen with an area, the one along which
// it is largest where rounding tells; -1 for a triangle without area.
func upright(a, b, c Vec) int {
	n := cross(sub(b, a), sub(c, a))
	axis := 0
	if math.Abs(n.Y) > math.Abs(n.X) {
		axis = 1
	}
	if math.Abs(n.Z) > math.Abs(component(n, axis)) {
		axis = 2
	}
	for range 3 {
		if predicate.Orient2D(along(a, axis), along(b, axis), along(c, axis)) != 0 {
			return axis
		}
		axis = (axis + 1) % 3
	}
	return -1
}
