package voronoi

import (
	"math"

	"nearcell/voronoi/delaunay"
)

// What the sides of a box add to the cells that leave it (see triangles.go).
//
// The box cuts Voronoi edges short. Where one ends at a wall, three cells meet there,
// and of each pair of them a segment begins or ends: the line of the wall and the
// bisector of the pair, a part of the boundary of the face between the two and of the
// wall's part of both cells. Seen from a point in its plane, the area behind a segment
// from s to t on a line at distance D is D(t-s)/2, and its moment is as easily divided
// among the ends: so every end adds its part alone, and segments are never put together.
// Their other ends are on other Voronoi edges or on edges of the box. These are walked
// along, from cell to cell.
//
// Whether all fits is told by a number: every end adds that of its pair and wall, with a
// sign, to both cells. What is not 0 in the end has lost an end to rounding, as where a
// Voronoi edge meets an edge of the box; such a cell is cut plane by plane.

// normalOf is the outward normal of a side.
func normalOf(side int) (e Vec) {
	setComponent(&e, side>>1, float64(2*(side&1)-1))
	return e
}

// heightOver is the distance from a place to a side, positive inside the box.
func (g *dual) heightOver(at Vec, side int) float64 {
	at = add(at, g.origin)
	if axis := side >> 1; side&1 != 0 {
		return component(g.hi, axis) - component(at, axis)
	} else {
		return component(at, axis) - component(g.lo, axis)
	}
}

// clipped adds the part in the box of a Voronoi edge between two centres.
func (s *tallies) clipped(v *[4]int32, face int, c, d *centre) {
	p, q, r, sign := facing(v, face)
	if sign < 0 {
		c, d = d, c
	}
	at := s.cells[p].at
	x := add(c.o, sub(s.cells[c.from].at, at))
	y := add(d.o, sub(s.cells[d.from].at, at))
	s.cut(p, q, r, x, y, c.out, d.out, false)
}

// ray adds the part in the box of a Voronoi edge that runs from a centre through a face
// on the convex hull to infinity.
func (s *tallies) ray(v *[4]int32, face int, c *centre) {
	p, q, r, sign := facing(v, face)
	at := s.cells[p].at
	far, side := sub(s.cells[r].at, at), sub(s.cells[r].at, s.cells[q].at)
	n := normal(sub(s.cells[q].at, at), far, side, dot(far, far), dot(side, side))
	out := outcode(Vec{X: sign * n.X, Y: sign * n.Y, Z: sign * n.Z}, Vec{}, Vec{})
	if c.out&out != 0 {
		return
	}
	x := add(c.o, sub(s.cells[c.from].at, at))
	if sign > 0 {
		s.cut(p, q, r, x, x, c.out, out, true)
	} else {
		s.cut(p, q, r, x, x, out, c.out, true)
	}
}

// cut adds the part in the box of the Voronoi edge from x to y along the normal of the
// triangle p, q, r. The outcodes tell which sides these lie beyond. If endless, that of
// the two which lies beyond any is infinitely far away.
func (s *tallies) cut(p, q, r int32, x, y Vec, outX, outY uint8, endless bool) {
	i, j, k := &s.cells[p], &s.cells[q], &s.cells[r]
	u, v, w := sub(j.at, i.at), sub(k.at, i.at), sub(k.at, j.at)
	n := normal(u, v, w, dot(v, v), dot(w, w))
	most := 2 * dot(n, sub(y, x))
	if endless {
		most = math.Inf(1)
	}
	half := 0.5 / dot(n, n)
	tu, tv := -float64(float64(dot(v, v)*dot(u, w))*half), float64(float64(dot(u, u)*dot(v, w))*half)
	l := boxed{f: add(scaled(u, tu), scaled(v, tv)), n: n}
	l.lo, l.hi = s.g.localBox(p)
	from, in := l.crossing(outX, +1)
	to, out := l.crossing(outY, -1)
	// An end of no length that rounding makes stays where the centre is.
	astray := func() bool {
		length := dot(n, sub(y, x))
		return !(length > 0 && length <= most)
	}
	switch {
	case outX != 0 && outY != 0:
		if !(from < to) {
			return // it passes the box by
		}
		x, y = l.ahead(from, in), l.ahead(to, out)
	case outX != 0:
		if x = l.ahead(from, in); astray() {
			x = l.onSide(y, in)
		}
	default:
		if y = l.ahead(to, out); astray() {
			y = l.onSide(x, out)
		}
	}
	s.vertex(p, q, r, x, in, -1)
	s.vertex(p, q, r, y, out, +1)
	s.edge(i, j, k, sub(y, x), add(x, y))
}

// vertex adds what an end of a Voronoi edge, x seen from p, means for its three cells
// besides the edge. side is the wall that it lies on, -1 none; turn is +1 where the edge
// leaves along the normal of p, q, r.
func (s *tallies) vertex(p, q, r int32, x Vec, side int, turn float64) {
	i, j, k := &s.cells[p], &s.cells[q], &s.cells[r]
	y, z := sub(x, sub(j.at, i.at)), sub(x, sub(k.at, i.at))
	if side >= 0 {
		s.wallEnd(p, q, x, side, turn)
		s.wallEnd(q, r, y, side, turn)
		s.wallEnd(r, p, z, side, turn)
		return
	}
	i.reaches(x)
	j.reaches(y)
	k.reaches(z)
}

// reaches notes a vertex of the cell, seen from its site.
func (t *tally) reaches(x Vec) { t.far2 = max(t.far2, dot(x, x)) }

// boxed is a line f + tn and the box, seen from one place.
type boxed struct{ f, n, lo, hi Vec }

// limit is where the box ends on a side.
func (l *boxed) limit(side int) float64 {
	if side&1 != 0 {
		return component(l.hi, side>>1)
	}
	return component(l.lo, side>>1)
}

// crossing is where the line comes in over the sides that out names (way +1), or leaves
// over them (-1): the last or the first of their planes. side is -1 if there is none.
func (l *boxed) crossing(out uint8, way float64) (t float64, side int) {
	t, side = -way*math.Inf(1), -1
	for k := range 6 {
		if out>>k&1 == 0 {
			continue
		}
		at := (l.limit(k) - component(l.f, k>>1)) / component(l.n, k>>1)
		if side < 0 || !(way*at <= way*t) {
			t, side = at, k
		}
	}
	return t, side
}

// ahead is the place t on the line, which lies on a side of the box.
func (l *boxed) ahead(t float64, side int) Vec { return l.onSide(add(l.f, scaled(l.n, t)), side) }

// onSide moves a place onto a side of the box.
func (l *boxed) onSide(x Vec, side int) Vec {
	setComponent(&x, side>>1, l.limit(side))
	return x
}

// wallEnd adds what an end of the segment between the cells of p and q on a wall means.
// x is seen from p. turn is +1 where the segment's other end follows, counter-clockwise
// around the face seen from q, else -1.
func (s *tallies) wallEnd(p, q int32, x Vec, side int, turn float64) {
	i, j, onI, onJ := &s.cells[p], &s.cells[q], &s.walls[p], &s.walls[q]
	n, e := sub(j.at, i.at), normalOf(side)
	d := cross(n, e) // along the segment, which follows the face about n
	nn, dd, ne := dot(n, n), dot(d, d), dot(n, e)
	along := float64(turn*dot(x, d)) / dd
	hi, hj := s.g.heightOver(i.at, side), s.g.heightOver(j.at, side)

	// The face, about the middle of i and j.
	h := hi - ne/2
	volume := -float64(float64(h*along) * nn)
	i.volume12.add(volume, i.volumeSplitter())
	j.volume12.add(volume, j.volumeSplitter())
	// The walls, about the feet of i and j.
	wi, wj := nn/2-float64(ne*hi), nn/2+float64(ne*hj)
	wallI, wallJ := -float64(wi*along), -float64(wj*along)
	onI.add(i, wallI, hi)
	onJ.add(j, wallJ, hj)
	area := volume / math.Sqrt(nn)
	i.area2.add(area, i.areaSplitter())
	j.area2.add(area, j.areaSplitter())
	if s.moments {
		td := scaled(d, float64(turn*along))
		m, c := scaled(n, 1.5), scaled(sub(scaled(e, nn), scaled(n, ne)), 2*h/dd)
		i.addMoment(volume, add(add(m, c), td))
		j.addMoment(volume, add(sub(c, m), td))
		flat := scaled(sub(n, scaled(e, ne)), 2/dd)
		i.addMoment(float64(2*hi*wallI), add(add(scaled(e, 3*hi), scaled(flat, wi)), td))
		j.addMoment(float64(2*hj*wallJ), add(sub(scaled(e, 3*hj), scaled(flat, wj)), td))
	}
	i.reaches(x)
	j.reaches(sub(x, n))
	i.near2, j.near2 = min(i.near2, nn), min(j.near2, nn)
	check := endNumber(p, q, side)
	if (turn > 0) != (p < q) {
		check = -check
	}
	onI.check += check
	onJ.check += check
}

func scaled(a Vec, t float64) Vec {
	return Vec{X: float64(t * a.X), Y: float64(t * a.Y), Z: float64(t * a.Z)}
}

// add adds to the area of the wall's part, doubled, at a height over the cell's site.
func (w *wallTally) add(t *tally, area2, height float64) {
	w.area2.add(area2, t.areaSplitter())
	t.area2.add(area2, t.areaSplitter())
	t.volume12.add(float64(2*height*area2), t.volumeSplitter())
}

// addMoment adds the first moment, 48-fold, of a part of 12-fold volume.
func (t *tally) addMoment(volume12 float64, at Vec) {
	m := t.momentSplitter()
	t.x48.add(float64(volume12*at.X), m)
	t.y48.add(float64(volume12*at.Y), m)
	t.z48.add(float64(volume12*at.Z), m)
}

// endNumber is a number for the segment between two cells on a wall.
func endNumber(p, q int32, side int) uint64 {
	p, q = min(p, q), max(p, q)
	h := uint64(p)<<32 | uint64(q)
	h = (h ^ h>>31 ^ uint64(side+1)*0x9e3779b97f4a7c15) * 0xbf58476d1ce4e5b9
	return h ^ h>>29 | 1
}

// boxEdges adds the ends on the edges of the box: it walks along each, from cell to
// cell.
func (s *tallies) boxEdges() {
	var owner [8]int32
	for p, corners := range s.g.corners {
		for _, x := range corners {
			for k := range owner {
				if x == s.g.boxCorner(k) {
					owner[k] = p
				}
			}
		}
	}
	for axis := range 3 {
		for k := range 8 {
			if k>>axis&1 != 0 {
				continue
			}
			b, c := (axis+1)%3, (axis+2)%3
			l := boxLine{axis: axis, sides: [2]int{2*b + k>>b&1, 2*c + k>>c&1}, from: s.g.boxCorner(k), to: s.g.boxCorner(k | 1<<axis)}
			s.walk(&l, owner[k], owner[k|1<<axis])
		}
	}
}

// boxLine is an edge of the box, between two sides.
type boxLine struct {
	axis     int
	sides    [2]int
	from, to Vec // in true coordinates; from is the lower
}

// walk adds the ends on an edge of the box, from the cell of p to that of last. All
// places are seen from the site of the cell at hand, so that world coordinates cost no
// digits.
func (s *tallies) walk(l *boxLine, p, last int32) {
	g := s.g
	x := sub(l.from, add(g.at[p].Vec, g.origin))
	s.boxEnd(p, l, x, -1)
	for range len(g.at) {
		next, first := s.nextAlong(l, p, x)
		end := sub(l.to, add(g.at[p].Vec, g.origin))
		if next == 0 || first >= component(end, l.axis) {
			break
		}
		setComponent(&x, l.axis, max(first, component(x, l.axis)))
		s.boxEnd(p, l, x, +1)
		n := sub(g.at[next].Vec, g.at[p].Vec)
		for k, side := range l.sides {
			// The segment on this side ends here if it runs towards the other side.
			turn := 1.0
			if dot(cross(normalOf(side), normalOf(l.sides[1-k])), n) > 0 {
				turn = -1
			}
			s.wallEnd(p, next, x, side, turn)
		}
		at := component(x, l.axis) - component(n, l.axis)
		p, x = next, sub(l.from, add(g.at[next].Vec, g.origin))
		setComponent(&x, l.axis, at)
		s.boxEnd(p, l, x, -1)
	}
	s.boxEnd(p, l, sub(l.to, add(g.at[p].Vec, g.origin)), +1)
	if p != last {
		s.walls[p].check++
		s.walls[last].check++
	}
}

// nextAlong is the cell that follows that of p on an edge of the box, and where, seen
// from p; x is a place on it. 0: there is none.
func (s *tallies) nextAlong(l *boxLine, p int32, x Vec) (next int32, first float64) {
	g := s.g
	setComponent(&x, l.axis, 0)
	first = math.Inf(1)
	for _, other := range g.t.Neighbours(int(g.cell[p]), nil) {
		if other == delaunay.Ghost {
			continue
		}
		q := g.point[other]
		n := sub(g.at[q].Vec, g.at[p].Vec)
		if along := component(n, l.axis); along > 0 {
			if t := (dot(n, n)/2 - dot(n, x)) / along; t < first || t == first && q < next {
				next, first = q, t
			}
		}
	}
	return next, first
}

// boxEnd adds an end, at x seen from p, of what the cell of p has of an edge of the box;
// upper is +1 or -1.
func (s *tallies) boxEnd(p int32, l *boxLine, x Vec, upper float64) {
	t, w := &s.cells[p], &s.walls[p]
	t.reaches(x)
	along := component(x, l.axis)
	for k, side := range l.sides {
		other := l.sides[1-k]
		h, beside := s.g.heightOver(t.at, side), s.g.heightOver(t.at, other)
		area2 := float64(upper * beside * along)
		w.add(t, area2, h)
		if s.moments {
			m := add(scaled(normalOf(side), 3*h), scaled(normalOf(other), 2*beside))
			setComponent(&m, l.axis, along)
			t.addMoment(float64(2*h*area2), m)
		}
	}
}
