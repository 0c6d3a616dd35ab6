package solid

import "math"

// Sighted is a solid that can tell whether one place in it sees another.
type Sighted interface {
	Solid
	// Sees tells whether the segment from p to q crosses no wall farther than skip from
	// p. Walls that it only touches may or may not count: such segments are rare.
	Sees(p, q Vec, skip float64) bool
}

// Sees looks along the plan: heights do not matter between floor and ceiling.
func (x *extrusion) Sees(p, q Vec, skip float64) bool {
	if x.plan.convex {
		return true
	}
	a, b := Vec2{X: p.X, Y: p.Y}, Vec2{X: q.X, Y: q.Y}
	d := sub2(b, a)
	far := norm3(sub3(q, p))
	for i := range x.plan.edges {
		e := &x.plan.edges[i]
		if max(e.a.X, e.b.X) < min(a.X, b.X) || min(e.a.X, e.b.X) > max(a.X, b.X) ||
			max(e.a.Y, e.b.Y) < min(a.Y, b.Y) || min(e.a.Y, e.b.Y) > max(a.Y, b.Y) {
			continue
		}
		from, to := cross2(d, sub2(e.a, a)), cross2(d, sub2(e.b, a))
		if (from < 0) == (to < 0) {
			continue
		}
		ha, hb := dot2(e.n, sub2(a, e.a)), dot2(e.n, sub2(b, e.a))
		if (ha < 0) == (hb < 0) {
			continue
		}
		if math.Abs(ha)/math.Abs(ha-hb)*far > skip {
			return false
		}
	}
	return true
}

var (
	_ Sighted = (*Box)(nil)
	_ Sighted = (*Prism)(nil)
)
