package solid

import (
	"cmp"
	"math"
	"slices"

	"nearcell/voronoi/predicate"
)

// node is a corner of a ring and the start of an edge: the edge runs to the next
// node of the ring.
type node struct {
	p    Vec2
	side int // the given side that the edge is a part of
}

// rings is a floor plan on its way from what was given to an arrangement of edges
// that meet in common nodes only.
type rings struct {
	given [][]Vec2
	rings [][]node
	turn  []int   // +1 where the ring was given counter-clockwise, -1 where clockwise
	snap  float64 // nodes and edges closer than this are one
}

// largest is the limit of coordinates: beyond it the moments of cells overflow.
const largest = 1e50

// smallest is the limit of volumes: below it products of lengths lose digits.
const smallest = 1e-280

// snapFactor times the largest coordinate is the distance below which two corners
// are one and a corner lies on a side. It is four units in the last place: a plan
// whose corners were rotated or shifted by a program meets its own sides no better.
const snapFactor = 0x1p-50

// newRings cleans the given rings and makes them meet in common nodes.
func newRings(given [][]Vec2) (*rings, error) {
	r := &rings{given: given}
	size := 0.0
	for k, ring := range given {
		for i, p := range ring {
			if !(math.Abs(p.X) <= largest && math.Abs(p.Y) <= largest) {
				e := fault(NotFinite, k)
				e.Corner = i
				return nil, e
			}
			size = max(size, math.Abs(p.X), math.Abs(p.Y))
		}
	}
	r.snap = snapFactor * size
	for k, ring := range given {
		nodes := make([]node, len(ring))
		for i, p := range ring {
			nodes[i] = node{Vec2{X: p.X + 0, Y: p.Y + 0}, i} // + 0 turns -0 into 0
		}
		nodes = r.withoutRepeats(nodes)
		if len(nodes) < 3 {
			e := fault(FewCorners, k)
			e.Count = len(nodes)
			return nil, e
		}
		nodes, err := r.withoutStraight(nodes, k)
		if err != nil {
			return nil, err
		}
		r.rings = append(r.rings, nodes)
	}
	r.weld()
	for k := range r.rings {
		r.rings[k] = r.withoutRepeats(r.rings[k])
		if err := r.orient(k); err != nil {
			return nil, err
		}
	}
	r.split()
	return r, r.checkCrossings()
}

// withoutRepeats drops corners that repeat the one before, also across the end.
func (r *rings) withoutRepeats(ring []node) []node {
	out := ring[:0:0]
	for _, n := range ring {
		if len(out) > 0 && distance2(out[len(out)-1].p, n.p) <= r.snap {
			out[len(out)-1].side = n.side
			continue
		}
		out = append(out, n)
	}
	for len(out) > 1 && distance2(out[0].p, out[len(out)-1].p) <= r.snap {
		out = out[:len(out)-1]
	}
	return out
}

// withoutStraight drops corners on the straight line between their neighbours and
// finds spikes.
func (r *rings) withoutStraight(ring []node, k int) ([]node, error) {
	if r.collinear(ring) {
		return nil, fault(NoArea, k)
	}
	for {
		out := ring[:0:0]
		last, first := -2, false // the corner dropped last; whether corner 0 was
		for i, n := range ring {
			prev, next := ring[(i+len(ring)-1)%len(ring)], ring[(i+1)%len(ring)]
			u, v := sub2(n.p, prev.p), sub2(next.p, n.p)
			flat := predicate.Orient2D(prev.p, n.p, next.p) == 0 ||
				math.Abs(cross2(u, v)) <= r.snap*min(norm2(u), norm2(v))
			if flat && dot2(u, v) < 0 {
				e := fault(Spike, k)
				e.Corner, e.At = n.side, n.p
				return nil, e
			}
			// Neighbours are not dropped in one round: each corner is judged by
			// corners that stay.
			if flat && last != i-1 && !(first && i == len(ring)-1) {
				last, first = i, first || i == 0
				continue
			}
			out = append(out, n)
		}
		if len(out) < 3 {
			return nil, fault(NoArea, k)
		}
		if last == -2 {
			return out, nil
		}
		ring = out
	}
}

// collinear tells whether the ring lies on one line.
func (r *rings) collinear(ring []node) bool {
	o := ring[0].p
	far := o
	for _, n := range ring {
		if distance2(n.p, o) > distance2(far, o) {
			far = n.p
		}
	}
	d := sub2(far, o)
	for _, n := range ring {
		if predicate.Orient2D(o, far, n.p) != 0 && math.Abs(cross2(d, sub2(n.p, o))) > r.snap*norm2(d) {
			return false
		}
	}
	return true
}

// weld gives corners closer than snap, of whatever rings, the same coordinates.
func (r *rings) weld() {
	var all []*node
	for _, ring := range r.rings {
		for i := range ring {
			all = append(all, &ring[i])
		}
	}
	slices.SortFunc(all, func(a, b *node) int { return compare2(a.p, b.p) })
	for i, n := range all {
		for j := i - 1; j >= 0 && n.p.X-all[j].p.X <= 2*r.snap; j-- {
			if distance2(n.p, all[j].p) <= r.snap {
				n.p = all[j].p
				break
			}
		}
	}
}

// orient finds out which way round the ring was given.
func (r *rings) orient(k int) error {
	ring := r.rings[k]
	var area, length float64
	o := ring[0].p
	for i, n := range ring {
		next := ring[(i+1)%len(ring)].p
		area += cross2(sub2(n.p, o), sub2(next, o)) / 2
		length += distance2(n.p, next)
	}
	if !(math.Abs(area) > 4*r.snap*length) || len(ring) < 3 {
		return fault(NoArea, k)
	}
	turn := 1
	if area < 0 {
		turn = -1
	}
	r.turn = append(r.turn, turn)
	return nil
}

// split makes every corner that lies on a side a node of it. The side bends by at
// most snap; a bent side can come to touch another corner, hence the rounds.
func (r *rings) split() {
	for range 8 {
		var corners []Vec2
		for _, ring := range r.rings {
			for _, n := range ring {
				corners = append(corners, n.p)
			}
		}
		slices.SortFunc(corners, compare2)
		corners = slices.Compact(corners)
		done := true
		for k, ring := range r.rings {
			out := ring[:0:0]
			for i, n := range ring {
				out = append(out, n)
				for _, p := range r.between(n.p, ring[(i+1)%len(ring)].p, corners) {
					out = append(out, node{p, n.side})
					done = false
				}
			}
			r.rings[k] = out
		}
		if done {
			return
		}
	}
}

// between returns the corners on the side from a to b, its ends left out, in order.
func (r *rings) between(a, b Vec2, corners []Vec2) []Vec2 {
	var on []Vec2
	d := sub2(b, a)
	length := norm2(d)
	lo := Vec2{X: math.Min(a.X, b.X) - r.snap, Y: math.Min(a.Y, b.Y) - r.snap}
	hi := Vec2{X: math.Max(a.X, b.X) + r.snap, Y: math.Max(a.Y, b.Y) + r.snap}
	first, _ := slices.BinarySearchFunc(corners, lo.X, func(p Vec2, x float64) int { return cmp.Compare(p.X, x) })
	for _, p := range corners[first:] {
		if p.X > hi.X {
			break
		}
		if p.Y < lo.Y || p.Y > hi.Y || p == a || p == b {
			continue
		}
		v := sub2(p, a)
		if t := dot2(v, d); t > 0 && t < length*length && math.Abs(cross2(d, v)) <= r.snap*length {
			on = append(on, p)
		}
	}
	slices.SortFunc(on, func(p, q Vec2) int { return cmp.Compare(dot2(sub2(p, a), d), dot2(sub2(q, a), d)) })
	return on
}

// span is an edge of a ring with its box, for the search for crossings.
type span struct {
	a, b       Vec2
	ring, side int
	lo, hi     Vec2
}

func (r *rings) spans() []span {
	var all []span
	for k, ring := range r.rings {
		for i, n := range ring {
			m := ring[(i+1)%len(ring)].p
			all = append(all, span{n.p, m, k, n.side,
				Vec2{X: math.Min(n.p.X, m.X), Y: math.Min(n.p.Y, m.Y)},
				Vec2{X: math.Max(n.p.X, m.X), Y: math.Max(n.p.Y, m.Y)}})
		}
	}
	slices.SortStableFunc(all, func(p, q span) int { return cmp.Compare(p.lo.X, q.lo.X) })
	return all
}

// checkCrossings reports edges that cross anywhere but in a common node, and edges
// of one ring that coincide.
func (r *rings) checkCrossings() error {
	all := r.spans()
	for i := range all {
		s := &all[i]
		for j := i + 1; j < len(all) && all[j].lo.X <= s.hi.X; j++ {
			t := &all[j]
			if t.lo.Y > s.hi.Y || t.hi.Y < s.lo.Y {
				continue
			}
			if e := meet(s, t); e != nil {
				e.Side, e.OtherSide = r.sideAt(e.Ring, e.Side, e.At), r.sideAt(e.OtherRing, e.OtherSide, e.At)
				return e
			}
		}
	}
	return nil
}

// sideAt is the given side on which at lies, if an edge that began as this side does:
// where straight corners were dropped the edge is made of several.
func (r *rings) sideAt(k, side int, at Vec2) int {
	ring := r.given[k]
	for range ring {
		a, b := ring[side], ring[(side+1)%len(ring)]
		if d := sub2(b, a); dot2(d, d) > 0 && dot2(sub2(at, a), d) <= dot2(d, d) {
			break
		}
		side = (side + 1) % len(ring)
	}
	return side
}

func meet(s, t *span) *Error {
	if t.ring < s.ring || (t.ring == s.ring && t.side < s.side) {
		s, t = t, s
	}
	same := (s.a == t.a && s.b == t.b) || (s.a == t.b && s.b == t.a)
	if same && s.ring == t.ring {
		e := fault(Overlap, s.ring)
		e.Side, e.OtherRing, e.OtherSide, e.At = s.side, t.ring, t.side, mid2(s.a, s.b)
		return e
	}
	if same || s.a == t.a || s.a == t.b || s.b == t.a || s.b == t.b {
		return nil
	}
	if predicate.Orient2D(s.a, s.b, t.a)*predicate.Orient2D(s.a, s.b, t.b) >= 0 ||
		predicate.Orient2D(t.a, t.b, s.a)*predicate.Orient2D(t.a, t.b, s.b) >= 0 {
		return nil
	}
	d, f := sub2(s.b, s.a), sub2(t.b, t.a)
	at := mid2(s.a, s.b)
	if c := cross2(d, f); c != 0 {
		at = add2(s.a, scale2(cross2(sub2(t.a, s.a), f)/c, d))
	}
	e := fault(Crossing, s.ring)
	e.Side, e.OtherRing, e.OtherSide, e.At = s.side, t.ring, t.side, at
	return e
}
