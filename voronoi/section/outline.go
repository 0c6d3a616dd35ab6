package section

import (
	"cmp"
	"math"
	"slices"
)

// outline puts pieces that do not overlap together: rings counter-clockwise about what
// they enclose, each followed by the holes in it, clockwise. Corners within tol are one.
func outline(pieces [][]Vec2, tol float64) [][][]Vec2 {
	if len(pieces) == 1 {
		if ring := straighten(pieces[0], tol); ring != nil {
			return [][][]Vec2{{begin(ring)}}
		}
		return nil
	}
	w := weld(pieces, tol)
	return nest(w.trace(w.edges(pieces)), tol)
}

// welded are the distinct corners of pieces, by u.
type welded struct {
	at  []Vec2
	of  [][]int32 // by piece and corner
	tol float64
}

func weld(pieces [][]Vec2, tol float64) *welded {
	type corner struct {
		at           Vec2
		piece, index int
	}
	var all []corner
	w := &welded{tol: tol, of: make([][]int32, len(pieces))}
	for i, p := range pieces {
		w.of[i] = make([]int32, len(p))
		for k, at := range p {
			all = append(all, corner{at, i, k})
		}
	}
	slices.SortFunc(all, func(a, b corner) int {
		return cmp.Or(cmp.Compare(a.at.X, b.at.X), cmp.Compare(a.at.Y, b.at.Y), cmp.Compare(a.piece, b.piece), cmp.Compare(a.index, b.index))
	})
	for _, c := range all {
		found := int32(-1)
		for k := len(w.at) - 1; k >= 0 && w.at[k].X >= c.at.X-tol; k-- {
			if math.Abs(w.at[k].Y-c.at.Y) <= tol {
				found = int32(k)
				break
			}
		}
		if found < 0 {
			found = int32(len(w.at))
			w.at = append(w.at, c.at)
		}
		w.of[c.piece][c.index] = found
	}
	return w
}

// edges are the directed sides of the pieces, cut where other corners lie on them, without
// those that run both ways.
func (w *welded) edges(pieces [][]Vec2) [][2]int32 {
	count := map[[2]int32]int{}
	for i, p := range pieces {
		for k := range p {
			a, b := w.of[i][k], w.of[i][(k+1)%len(p)]
			if a == b {
				continue
			}
			from := a
			for _, c := range append(w.on(a, b), b) {
				count[[2]int32{from, c}]++
				from = c
			}
		}
	}
	var left [][2]int32
	for e, n := range count {
		if n > count[[2]int32{e[1], e[0]}] {
			left = append(left, e)
		}
	}
	slices.SortFunc(left, func(a, b [2]int32) int { return cmp.Or(cmp.Compare(a[0], b[0]), cmp.Compare(a[1], b[1])) })
	return left
}

// on lists the corners between two others on the straight line, from the first on.
func (w *welded) on(a, b int32) []int32 {
	p, q := w.at[a], w.at[b]
	d := sub2(q, p)
	l := length2(d)
	lo, hi := min(p.X, q.X)-w.tol, max(p.X, q.X)+w.tol
	from, _ := slices.BinarySearchFunc(w.at, lo, func(v Vec2, x float64) int { return cmp.Compare(v.X, x) })
	type mark struct {
		t float64
		c int32
	}
	var found []mark
	for c := from; c < len(w.at) && w.at[c].X <= hi; c++ {
		if int32(c) == a || int32(c) == b {
			continue
		}
		e := sub2(w.at[c], p)
		t := (float64(e.X*d.X) + float64(e.Y*d.Y)) / l
		if t > 0 && t < l && math.Abs(cross2(d, e)) <= w.tol*l {
			found = append(found, mark{t, int32(c)})
		}
	}
	slices.SortFunc(found, func(a, b mark) int { return cmp.Or(cmp.Compare(a.t, b.t), cmp.Compare(a.c, b.c)) })
	list := make([]int32, len(found))
	for i, m := range found {
		list[i] = m.c
	}
	return list
}

// trace joins edges to rings. Where several leave a corner, the one that keeps to the
// same inside is taken: the first in turning clockwise from the way back.
func (w *welded) trace(edges [][2]int32) [][]Vec2 {
	leaving := map[int32][]int{}
	for i, e := range edges {
		leaving[e[0]] = append(leaving[e[0]], i)
	}
	used := make([]bool, len(edges))
	var rings [][]Vec2
	for i := range edges {
		if used[i] {
			continue
		}
		var ring []Vec2
		for at := i; at >= 0 && !used[at]; {
			used[at] = true
			e := edges[at]
			ring = append(ring, w.at[e[0]])
			back := sub2(w.at[e[0]], w.at[e[1]])
			best, least := -1, math.Inf(1)
			for _, k := range leaving[e[1]] {
				if used[k] {
					continue
				}
				d := sub2(w.at[edges[k][1]], w.at[e[1]])
				turn := math.Atan2(cross2(d, back), float64(d.X*back.X)+float64(d.Y*back.Y)) // clockwise from back to d
				if turn <= 1e-12 {
					turn += 2 * math.Pi
				}
				if turn < least {
					best, least = k, turn
				}
			}
			at = best
		}
		if ring = straighten(ring, w.tol); ring != nil {
			rings = append(rings, begin(ring))
		}
	}
	return rings
}

// straighten leaves out corners on straight sides; nil if no area is left.
func straighten(ring []Vec2, tol float64) []Vec2 {
	out := slices.Clone(ring)
	for again := true; again && len(out) >= 3; {
		again = false
		for i := 0; i < len(out) && len(out) >= 3; i++ {
			a, b, c := out[(i+len(out)-1)%len(out)], out[i], out[(i+1)%len(out)]
			d := sub2(c, a)
			if length2(sub2(b, a)) <= tol || math.Abs(cross2(d, sub2(b, a))) <= tol*length2(d) {
				out = slices.Delete(out, i, i+1)
				i--
				again = true
			}
		}
	}
	if len(out) < 3 {
		return nil
	}
	return out
}

// begin turns a ring so that it begins at its smallest corner.
func begin(ring []Vec2) []Vec2 {
	first := 0
	for i, p := range ring {
		if q := ring[first]; p.X < q.X || p.X == q.X && p.Y < q.Y {
			first = i
		}
	}
	return slices.Concat(ring[first:], ring[:first])
}

// nest gives each hole to the smallest ring about it.
func nest(rings [][]Vec2, tol float64) [][][]Vec2 {
	var out [][][]Vec2
	var holes [][]Vec2
	for _, r := range rings {
		if area(r) > 0 {
			out = append(out, [][]Vec2{r})
		} else {
			holes = append(holes, r)
		}
	}
	order := func(a, b []Vec2) int { return cmp.Or(cmp.Compare(a[0].X, b[0].X), cmp.Compare(a[0].Y, b[0].Y)) }
	slices.SortStableFunc(out, func(a, b [][]Vec2) int { return order(a[0], b[0]) })
	slices.SortStableFunc(holes, order)
	for _, h := range holes {
		best, least := -1, math.Inf(1)
		for i := range out {
			if a := area(out[i][0]); a < least && a > -area(h) && surrounds(out[i][0], h, tol) {
				best, least = i, a
			}
		}
		if best >= 0 {
			out[best] = append(out[best], h)
		}
	}
	return out
}

// surrounds tells whether a ring lies in another, which it may touch in corners.
func surrounds(ring, hole []Vec2, tol float64) bool {
	for i, p := range hole {
		q := hole[(i+1)%len(hole)]
		m := between(p, q, 0.5)
		if on(ring, m, tol) {
			continue
		}
		return holds(ring, m)
	}
	return holds(ring, hole[0])
}

// on tells whether a place lies on a ring.
func on(ring []Vec2, p Vec2, tol float64) bool {
	for i, a := range ring {
		b := ring[(i+1)%len(ring)]
		d, e := sub2(b, a), sub2(p, a)
		l := length2(d)
		t := (float64(d.X*e.X) + float64(d.Y*e.Y)) / l
		if t >= -tol && t <= l+tol && math.Abs(cross2(d, e)) <= tol*l {
			return true
		}
	}
	return false
}

// holds tells whether a place lies in a ring, by the crossings to its right.
func holds(ring []Vec2, p Vec2) bool {
	in := false
	for i, a := range ring {
		b := ring[(i+1)%len(ring)]
		if (a.Y > p.Y) == (b.Y > p.Y) {
			continue
		}
		if p.X < a.X+(b.X-a.X)*((p.Y-a.Y)/(b.Y-a.Y)) {
			in = !in
		}
	}
	return in
}
