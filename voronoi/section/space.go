package section

import (
	"cmp"
	"slices"

	"nearcell/voronoi/solid"
)

// Surfaced is a solid that gives its surface as triangles, counter-clockwise from outside.
type Surfaced interface {
	solid.Solid
	Surface() ([]Vec, [][3]int32)
}

// segment is where a triangle meets the plane: the solid is on its left.
type segment struct{ a, b Vec2 }

// span is the segment's u at the height v, the ends' own at their heights.
func (s *segment) at(v float64) float64 {
	switch v {
	case s.a.Y:
		return s.a.X
	case s.b.Y:
		return s.b.X
	}
	lo, hi := s.a, s.b
	if lo.Y > hi.Y {
		lo, hi = hi, lo
	}
	return lo.X + float64((hi.X-lo.X)*((v-lo.Y)/(hi.Y-lo.Y)))
}

// trapezoid is a piece of the solid in the plane: between two heights, right of one
// segment and left of another.
type trapezoid struct {
	v0, v1      float64
	left, right segment
	lo, hi      float64 // bounds along u
}

// space is the solid in the plane: as it is from above, where that is nothing as it is
// from below, and all of the latter.
type space struct{ above, only, below []trapezoid }

// outlines of the surface in the plane. Corners within tol of it are in it; they count as
// below the plane where it is seen from above.
func segments(f *frame, body Surfaced, tol float64, above bool) (list []segment, touches bool) {
	corners, triangles := body.Surface()
	height := make([]float64, len(corners))
	flat := make([]Vec2, len(corners))
	for i, p := range corners {
		d := sub(p, f.foot)
		height[i], flat[i] = dot(f.n, d), f.flat(d)
		if height[i] >= -tol && height[i] <= tol {
			height[i], touches = 0, true
		}
	}
	up := func(i int32) bool { return height[i] > 0 || !above && height[i] == 0 }
	for _, t := range triangles {
		var from, to Vec2
		n := 0
		for k := range 3 {
			a, b := t[k], t[(k+1)%3]
			if up(a) == up(b) {
				continue
			}
			// The same to the last bit for the triangle on the other side.
			lo, hi := min(a, b), max(a, b)
			p := between(flat[lo], flat[hi], height[lo]/(height[lo]-height[hi]))
			switch {
			case height[a] == 0:
				p = flat[a]
			case height[b] == 0:
				p = flat[b]
			}
			if up(a) {
				from = p
			} else {
				to = p
			}
			n++
		}
		if n == 2 && from != to {
			list = append(list, segment{from, to})
		}
	}
	return list, touches
}

// newSpace cuts a solid by the plane.
func newSpace(f *frame, body Surfaced, tol float64) *space {
	from, touches := segments(f, body, tol, true)
	if !touches {
		above := bands([2][]segment{from, nil})
		return &space{above: above[0], below: above[0]}
	}
	under, _ := segments(f, body, tol, false)
	both := bands([2][]segment{from, under})
	return &space{above: both[0], only: both[1], below: bands([2][]segment{under, nil})[0]}
}

// side is a segment in the sweep.
type side struct {
	segment
	low, high float64
	set       int // 0: seen from above, 1: from below
	turn      int // +1: what is right of it is inside
	middle    float64
}

// bands cuts what the first segments enclose into trapezoids, and what the second ones
// enclose and the first do not: a sweep from band to band between the ends of segments.
func bands(sets [2][]segment) (out [2][]trapezoid) {
	var sides []side
	var levels []float64
	for set, list := range sets {
		for _, s := range list {
			levels = append(levels, s.a.Y, s.b.Y)
			if s.a.Y == s.b.Y {
				continue
			}
			turn := 1
			if s.a.Y < s.b.Y { // upwards: the solid is left of it
				turn = -1
			}
			sides = append(sides, side{segment: s, low: min(s.a.Y, s.b.Y), high: max(s.a.Y, s.b.Y), set: set, turn: turn})
		}
	}
	slices.Sort(levels)
	levels = slices.Compact(levels)
	slices.SortFunc(sides, func(a, b side) int {
		return cmp.Or(cmp.Compare(a.low, b.low), cmp.Compare(a.a.X, b.a.X), cmp.Compare(a.b.X, b.b.X), cmp.Compare(a.high, b.high), cmp.Compare(a.set, b.set), cmp.Compare(a.turn, b.turn))
	})
	var active []side
	var open [2]map[[2]segment]int // trapezoids that end at the band below
	next := 0
	for i := 1; i < len(levels); i++ {
		v0, v1 := levels[i-1], levels[i]
		for ; next < len(sides) && sides[next].low <= v0; next++ {
			active = append(active, sides[next])
		}
		active = slices.DeleteFunc(active, func(s side) bool { return s.high <= v0 })
		middle := v0 + (v1-v0)/2
		for k := range active {
			active[k].middle = active[k].at(middle)
		}
		slices.SortStableFunc(active, func(a, b side) int { return cmp.Compare(a.middle, b.middle) })
		var now [2]map[[2]segment]int
		for set := range 2 {
			now[set] = map[[2]segment]int{}
		}
		winding := [2]int{}
		for k := range active {
			s := &active[k]
			winding[s.set] += s.turn
			if k+1 == len(active) || !(active[k+1].middle > s.middle) {
				continue
			}
			set := 0
			switch {
			case winding[0] > 0:
			case winding[1] > 0:
				set = 1
			default:
				continue
			}
			key := [2]segment{s.segment, active[k+1].segment}
			at, goesOn := open[set][key]
			if goesOn {
				out[set][at].v1 = v1
			} else {
				at = len(out[set])
				out[set] = append(out[set], trapezoid{v0: v0, v1: v1, left: key[0], right: key[1]})
			}
			now[set][key] = at
		}
		open = now
	}
	for set := range out {
		for k := range out[set] {
			t := &out[set][k]
			t.lo = min(t.left.at(t.v0), t.left.at(t.v1))
			t.hi = max(t.right.at(t.v0), t.right.at(t.v1))
		}
	}
	return out
}

// corners are those of the trapezoid, counter-clockwise.
func (t *trapezoid) corners() []Vec2 {
	list := []Vec2{{X: t.left.at(t.v0), Y: t.v0}, {X: t.right.at(t.v0), Y: t.v0}, {X: t.right.at(t.v1), Y: t.v1}, {X: t.left.at(t.v1), Y: t.v1}}
	return slices.CompactFunc(list, func(a, b Vec2) bool { return a == b })
}

// clip is what of a convex polygon lies in the trapezoid, in the buffer out.
func (t *trapezoid) clip(p []Vec2, scratch *[2][]Vec2) []Vec2 {
	lo, hi := p[0], p[0]
	for _, q := range p[1:] {
		lo, hi = Vec2{X: min(lo.X, q.X), Y: min(lo.Y, q.Y)}, Vec2{X: max(hi.X, q.X), Y: max(hi.Y, q.Y)}
	}
	if !(lo.X < t.hi && t.lo < hi.X && lo.Y < t.v1 && t.v0 < hi.Y) {
		return nil
	}
	steps := [4]func(q Vec2) float64{
		func(q Vec2) float64 { return q.Y - t.v0 },
		func(q Vec2) float64 { return t.v1 - q.Y },
		t.left.rightOf,
		func(q Vec2) float64 { return -t.right.rightOf(q) },
	}
	for i, keep := range steps {
		p = halve(p, keep, &scratch[i&1])
		if len(p) < 3 {
			return nil
		}
	}
	return p
}

// rightOf tells how far a place lies to the right, towards larger u, of the line through the segment;
// to scale. It is the same for the trapezoids on both sides of the segment.
func (s *segment) rightOf(q Vec2) float64 {
	lo, hi := s.a, s.b
	if lo.Y > hi.Y {
		lo, hi = hi, lo
	}
	return -cross2(sub2(hi, lo), sub2(q, lo))
}

// halve keeps the part of a convex polygon where keep is not negative (Sutherland & Hodgman 1974).
func halve(p []Vec2, keep func(Vec2) float64, buf *[]Vec2) []Vec2 {
	out := (*buf)[:0]
	for i, a := range p {
		b := p[(i+1)%len(p)]
		x, y := keep(a), keep(b)
		if x >= 0 {
			out = append(out, a)
		}
		switch {
		case x > 0 && y < 0:
			out = append(out, between(a, b, x/(x-y)))
		case x < 0 && y > 0:
			out = append(out, between(b, a, y/(y-x)))
		}
	}
	*buf = out
	return out
}

// area of a polygon, from its first corner.
func area(p []Vec2) float64 {
	sum := 0.0
	for i := 2; i < len(p); i++ {
		sum += cross2(sub2(p[i-1], p[0]), sub2(p[i], p[0]))
	}
	return sum / 2
}
