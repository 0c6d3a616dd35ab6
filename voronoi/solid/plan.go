package solid

import (
	"math"
	"slices"

	"nearcell/voronoi/predicate"
)

// edge is a piece of the plan's boundary, directed so that the inside is on its left.
type edge struct {
	a, b Vec2
	n    Vec2  // unit normal, pointing out
	wall int32 // edges in one line through a common corner belong to one wall
}

// piece is a trapezoid of the plan between two of its edges and two vertical lines;
// one of the lines may be shrunk to a point.
type piece struct {
	bottom, top int32 // edges
	x0, x1      float64
	lo, hi      Vec2
}

// plan is a floor plan whose boundary was cleaned: edges that cancel each other (a
// hole that runs along the outline) are gone, the others meet in common corners.
type plan struct {
	edges  []edge
	pieces []piece
	walls  int32 // numbers of walls used by edges
	lo, hi Vec2
	area   float64
	length float64 // of the whole boundary
	parts  int     // pieces whose interiors are apart
	holes  int     // loops that run around a hole
	nodes  int     // distinct corners
	convex bool
}

// newPlan makes the plan of an outline and its holes.
func newPlan(outer []Vec2, holes [][]Vec2) (*plan, error) {
	r, err := newRings(append([][]Vec2{outer}, holes...))
	if err != nil {
		return nil, err
	}
	s := newSweep(r)
	if err := s.run(); err != nil {
		return nil, err
	}
	p := &plan{edges: s.net()}
	if len(p.edges) == 0 || len(s.pieces) == 0 {
		return nil, fault(NothingLeft, 0)
	}
	loops := trace(p.edges)
	p.arrange(loops, r.snap)
	p.adopt(s.pieces)
	p.extent()
	if !(p.area > 0) {
		return nil, fault(NothingLeft, 0)
	}
	return p, nil
}

// arrange puts the edges in the order of the loops, which depends on the plan alone
// and not on where and in which direction the given rings began, and numbers the
// walls in this order.
func (p *plan) arrange(loops [][]int32, snap float64) {
	old := p.edges
	p.edges = make([]edge, 0, len(old))
	p.convex = len(loops) == 1
	for _, loop := range loops {
		var area sum
		o := old[loop[0]].a
		for i, k := range loop {
			e := old[k]
			next := old[loop[(i+1)%len(loop)]]
			area.add(cross2(sub2(e.a, o), sub2(e.b, o)))
			p.convex = p.convex && predicate.Orient2D(e.a, e.b, next.b) >= 0
			p.edges = append(p.edges, e)
		}
		if area.value() > 0 {
			p.parts++
		} else {
			p.holes++
		}
	}
	p.numberWalls(snap)
}

// numberWalls gives edges that go on in one direction through a common corner the
// same number: where a hole touches a side in a corner, the side stays one wall.
func (p *plan) numberWalls(snap float64) {
	parent := make([]int32, len(p.edges))
	for i := range parent {
		parent[i] = int32(i)
	}
	root := func(i int32) int32 {
		for parent[i] != i {
			parent[i] = parent[parent[i]]
			i = parent[i]
		}
		return i
	}
	from := map[Vec2][]int32{}
	for i, e := range p.edges {
		from[e.a] = append(from[e.a], int32(i))
	}
	for i, e := range p.edges {
		for _, j := range from[e.b] {
			u, v := sub2(e.b, e.a), sub2(p.edges[j].b, e.b)
			if dot2(u, v) > 0 && math.Abs(cross2(u, v)) <= 2*snap*max(norm2(u), norm2(v)) {
				a, b := root(int32(i)), root(j)
				parent[max(a, b)] = min(a, b)
			}
		}
	}
	number := map[int32]int32{}
	for i := range p.edges {
		k, ok := number[root(int32(i))]
		if !ok {
			k = p.walls
			number[root(int32(i))] = k
			p.walls++
		}
		p.edges[i].wall = k
		d := sub2(p.edges[i].b, p.edges[i].a)
		l := norm2(d)
		p.edges[i].n = Vec2{X: d.Y/l + 0, Y: -d.X/l + 0}
	}
}

// adopt takes over the sweep's pieces, whose edges are named by their ends.
func (p *plan) adopt(pieces []sweptPiece) {
	index := map[segment]int32{}
	for i, e := range p.edges {
		index[segmentOf(e.a, e.b)] = int32(i)
	}
	for _, s := range pieces {
		bottom, top := index[s.bottom], index[s.top]
		q := piece{bottom: bottom, top: top, x0: s.x0, x1: s.x1}
		q.lo = Vec2{X: s.x0, Y: min(p.edges[bottom].at(s.x0), p.edges[bottom].at(s.x1))}
		q.hi = Vec2{X: s.x1, Y: max(p.edges[top].at(s.x0), p.edges[top].at(s.x1))}
		p.pieces = append(p.pieces, q)
	}
	slices.SortFunc(p.pieces, func(a, b piece) int {
		if c := compare2(a.lo, b.lo); c != 0 {
			return c
		}
		return int(a.bottom) - int(b.bottom)
	})
}

// at is the height of the edge at x, which lies between its ends.
func (e *edge) at(x float64) float64 {
	switch {
	case x == e.a.X:
		return e.a.Y
	case x == e.b.X:
		return e.b.Y
	}
	t := (x - e.a.X) / (e.b.X - e.a.X)
	return e.a.Y + float64(t*(e.b.Y-e.a.Y))
}

func (p *plan) extent() {
	p.lo, p.hi = p.edges[0].a, p.edges[0].a
	for _, e := range p.edges {
		p.lo = Vec2{X: min(p.lo.X, e.a.X), Y: min(p.lo.Y, e.a.Y)}
		p.hi = Vec2{X: max(p.hi.X, e.a.X), Y: max(p.hi.Y, e.a.Y)}
	}
	nodes := map[Vec2]bool{}
	var area, length sum
	for _, e := range p.edges {
		nodes[e.a] = true
		area.add(cross2(sub2(e.a, p.lo), sub2(e.b, p.lo)) / 2)
		length.add(distance2(e.a, e.b))
	}
	p.area, p.length, p.nodes = area.value(), length.value(), len(nodes)
}

// side tells exactly where q lies: the number of times the boundary winds around it,
// counted by the edges that pass it on one side (half-open in y).
func (p *plan) side(q Vec2) Side {
	if !(q.X >= p.lo.X && q.X <= p.hi.X && q.Y >= p.lo.Y && q.Y <= p.hi.Y) {
		return Outside // a NaN is nowhere
	}
	winding := 0
	for i := range p.edges {
		a, b := p.edges[i].a, p.edges[i].b
		if q.Y < min(a.Y, b.Y) || q.Y > max(a.Y, b.Y) || q.X > max(a.X, b.X) {
			continue // not at this height, or wholly to the left
		}
		if q.X < min(a.X, b.X) {
			if a.Y <= q.Y && q.Y < b.Y {
				winding++
			} else if b.Y <= q.Y && q.Y < a.Y {
				winding--
			}
			continue
		}
		turn := predicate.Orient2D(a, b, q)
		if turn == 0 {
			return On
		}
		if a.Y <= q.Y && q.Y < b.Y && turn > 0 {
			winding++
		} else if b.Y <= q.Y && q.Y < a.Y && turn < 0 {
			winding--
		}
	}
	if winding > 0 {
		return Inside
	}
	return Outside
}

// distance is the distance from q to the nearest edge.
func (p *plan) distance(q Vec2) float64 {
	best := math.Inf(1)
	for i := range p.edges {
		best = min(best, p.edges[i].distance(q))
	}
	return best
}

// distance is the distance from q to the edge.
func (e *edge) distance(q Vec2) float64 {
	d, v := sub2(e.b, e.a), sub2(q, e.a)
	t := dot2(v, d) / dot2(d, d)
	switch {
	case t <= 0:
		return norm2(v)
	case t >= 1:
		return distance2(q, e.b)
	}
	return math.Abs(dot2(v, e.n))
}
