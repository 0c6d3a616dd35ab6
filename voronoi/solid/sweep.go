package solid

import (
	"slices"

	"nearcell/voronoi/predicate"
)

// segment is an edge without direction, the smaller end first.
type segment struct{ l, r Vec2 }

func segmentOf(a, b Vec2) segment {
	if less2(b, a) {
		a, b = b, a
	}
	return segment{a, b}
}

// strand is an edge of a ring as the sweep sees it.
type strand struct {
	segment
	up   int // what crossing it upwards adds to the ring's winding number
	ring int
	side int
}

type sweptPiece struct {
	bottom, top segment
	x0, x1      float64
}

// sweep walks over the plan from left to right, strip by strip between corners, and
// up through the edges of each strip. It checks that every ring winds once around
// what it encloses and every hole lies in the outline and in no other hole, and
// collects the trapezoids of the inside. Edges are ordered by exact predicates.
type sweep struct {
	strands []strand
	xs      []float64
	rings   int
	pieces  []sweptPiece
	open    []sweptPiece // pieces that reach the present strip
	winding []int        // by ring, in the present strip
}

func newSweep(r *rings) *sweep {
	s := &sweep{rings: len(r.rings), winding: make([]int, len(r.rings))}
	for k, ring := range r.rings {
		for i, n := range ring {
			m := ring[(i+1)%len(ring)].p
			up := r.turn[k]
			if less2(m, n.p) {
				up = -up
			}
			s.strands = append(s.strands, strand{segmentOf(n.p, m), up, k, n.side})
			s.xs = append(s.xs, n.p.X)
		}
	}
	slices.Sort(s.xs)
	s.xs = slices.Compact(s.xs)
	slices.SortStableFunc(s.strands, func(a, b strand) int { return compare2(a.l, b.l) })
	return s
}

// below orders two edges that cross the same strip and do not cross each other.
func below(a, b segment) int {
	if a == b {
		return 0
	}
	// The later left end against the other edge; where it lies on it, the earlier
	// right end decides.
	order := 0
	if a.l.X >= b.l.X {
		order = predicate.Orient2D(b.l, b.r, a.l)
	} else {
		order = -predicate.Orient2D(a.l, a.r, b.l)
	}
	if order == 0 && a.r.X <= b.r.X {
		order = predicate.Orient2D(b.l, b.r, a.r)
	} else if order == 0 {
		order = -predicate.Orient2D(a.l, a.r, b.r)
	}
	return order
}

func (s *sweep) run() error {
	first := 0
	var active []strand
	for i := 0; i+1 < len(s.xs); i++ {
		x0, x1 := s.xs[i], s.xs[i+1]
		active = slices.DeleteFunc(active, func(t strand) bool { return t.r.X <= x0 })
		for first < len(s.strands) && s.strands[first].l.X <= x0 {
			if s.strands[first].r.X > x0 {
				active = append(active, s.strands[first])
			}
			first++
		}
		slices.SortStableFunc(active, func(a, b strand) int { return below(a.segment, b.segment) })
		if err := s.strip(active, x0, x1); err != nil {
			return err
		}
	}
	s.pieces = append(s.pieces, s.open...)
	return nil
}

// strip goes up through the edges of one strip.
func (s *sweep) strip(active []strand, x0, x1 float64) error {
	clear(s.winding)
	var fresh []sweptPiece
	inside := false
	var bottom segment
	for i := 0; i < len(active); {
		here := active[i].segment
		first := i
		for ; i < len(active) && active[i].segment == here; i++ {
			s.winding[active[i].ring] += active[i].up
		}
		was := inside
		var err *Error
		if inside, err = s.judge(active[first:i]); err != nil {
			err.At = mid2(here.l, here.r)
			return err
		}
		if was == inside {
			continue
		}
		if inside {
			bottom = here
			continue
		}
		p := sweptPiece{bottom, here, x0, x1}
		for _, o := range s.open {
			if o.bottom == bottom && o.top == here && o.x1 == x0 {
				p.x0 = o.x0
			}
		}
		fresh = append(fresh, p)
	}
	for _, o := range s.open {
		if !slices.ContainsFunc(fresh, func(p sweptPiece) bool { return p.bottom == o.bottom && p.top == o.top && p.x0 == o.x0 }) {
			s.pieces = append(s.pieces, o)
		}
	}
	s.open = fresh
	return nil
}

// judge says whether the part of the strip above the edges just crossed is inside
// the plan, or what is wrong with it.
func (s *sweep) judge(crossed []strand) (inside bool, err *Error) {
	for _, t := range crossed {
		if w := s.winding[t.ring]; w != 0 && w != 1 {
			e := fault(Overlap, t.ring)
			e.Side, e.OtherRing, e.OtherSide = t.side, t.ring, t.side
			return false, e
		}
	}
	hole := -1
	for k := 1; k < s.rings; k++ {
		if s.winding[k] == 0 {
			continue
		}
		if s.winding[0] == 0 {
			return false, fault(HoleOutside, k)
		}
		if hole >= 0 {
			e := fault(HolesOverlap, hole)
			e.OtherRing = k
			return false, e
		}
		hole = k
	}
	return s.winding[0] == 1 && hole < 0, nil
}

// net returns the boundary of the plan: the edges that are left when those of the
// outline (with the inside on their left) and those of the holes (with the inside on
// their right) are added up.
func (s *sweep) net() []edge {
	count := map[segment]int{}
	for _, t := range s.strands {
		if t.ring == 0 {
			count[t.segment] += t.up
		} else {
			count[t.segment] -= t.up
		}
	}
	var out []edge
	for _, t := range s.strands { // in order, where the map has none
		switch count[t.segment] {
		case 1:
			out = append(out, edge{a: t.l, b: t.r})
		case -1:
			out = append(out, edge{a: t.r, b: t.l})
		}
		delete(count, t.segment)
	}
	slices.SortFunc(out, func(a, b edge) int {
		if c := compare2(a.a, b.a); c != 0 {
			return c
		}
		return compare2(a.b, b.b)
	})
	return out
}

// trace joins the edges, which are sorted, to loops. Where a loop comes to a corner
// that others share, it goes on along the boundary of the same bit of the inside, so
// that a loop never joins two pieces that only touch in a corner.
func trace(edges []edge) [][]int32 {
	from := map[Vec2][]int32{}
	for i, e := range edges {
		from[e.a] = append(from[e.a], int32(i))
	}
	used := make([]bool, len(edges))
	var loops [][]int32
	for i := range edges {
		if used[i] {
			continue
		}
		var loop []int32
		for k := int32(i); !used[k]; {
			used[k] = true
			loop = append(loop, k)
			e := edges[k]
			next := int32(-1)
			for _, c := range from[e.b] {
				if next < 0 || firstClockwise(e.b, e.a, edges[c].b, edges[next].b) {
					next = c
				}
			}
			k = next
		}
		loops = append(loops, loop)
	}
	return loops
}

// firstClockwise tells whether the direction from v to p comes before that from v to
// q when one turns clockwise from the direction from v to r.
func firstClockwise(v, r, p, q Vec2) bool {
	half := func(x Vec2) int {
		switch predicate.Orient2D(v, r, x) {
		case -1:
			return 0
		case 1:
			return 2
		}
		return 1 // straight on: two edges never leave in one direction
	}
	if hp, hq := half(p), half(q); hp != hq {
		return hp < hq
	}
	return predicate.Orient2D(v, p, q) < 0
}
