package voronoi

import (
	"context"
	"math"
	"slices"

	"nearcell/voronoi/delaunay"
	"nearcell/voronoi/index"
	"nearcell/voronoi/polyhedron"
)

// CellsInBox measures all cells of a tetrahedralisation, cut by a box that holds its
// sites. It is Diagram.Measure for callers that have the tetrahedralisation and need
// no search. Entry s of the arrays belongs to site s; for sites in the place of
// another all are zero, and Inside is false. All measures but Faces can be had.
func CellsInBox(ctx context.Context, t *delaunay.T, lo, hi Vec, want Measures, threads int) (*Cells, error) {
	n, o := t.NumSites(), polyhedron.Wall
	box := &enclosure{lo: lo, hi: hi, labels: [6]int32{o(0), o(1), o(2), o(3), o(4), o(5)}}
	g, err := newDual(ctx, t, func(s int32) Vec { return t.Site(int(s)) }, n, threads, box)
	if err != nil {
		return nil, err
	}
	want &^= Faces
	if want&^tallied != 0 {
		g.list()
	}
	y, err := g.tally(ctx, want, threads, nil)
	if err != nil {
		return nil, err
	}
	sites := make([]int32, n)
	for i := range sites {
		sites[i] = int32(i)
	}
	out := newCells(want, sites)
	parallel(threads, n, func(from, to int) {
		var w *walker
		for row := from; row < to && ctx.Err() == nil; row++ {
			if (row-from)%ahead == 0 {
				y.touchCells(row, min(to, row+ahead))
			}
			p := g.point[row]
			if p == 0 {
				continue // in the place of another
			}
			out.Inside[row], out.Multiplicity[row] = true, 1
			rest := want
			if y.good(p) {
				y.fill(p, add(g.at[p].Vec, g.origin), want, out, int32(row))
				rest &^= tallied
			}
			if rest == 0 {
				continue
			}
			if w == nil {
				w = newWalker(g)
			}
			w.measureInBox(p, rest, out)
		}
	})
	return out, ctx.Err()
}

func (w *walker) measureInBox(p int32, want Measures, out *Cells) {
	row := w.g.cell[p]
	w.star(p)
	if want&Bounded != 0 {
		out.Bounded[row] = true
	}
	if want&NearestFace != 0 {
		out.NearestFace[row] = math.Sqrt(w.near2) / 2
	}
	k := wants{moments: want&Centroid != 0}
	at := add(w.own, w.g.origin)
	switch {
	case w.any == 0 && w.clippable():
		w.whole(k)
	case w.clippable() && w.inBox(k):
	default:
		w.cutPlanes()
		measureConvex(&w.cell, at, want, out, row)
		return
	}
	w.sums.fill(at, want, out, row)
}

// cutPlanes makes w.cell what the box and the neighbours leave.
func (w *walker) cutPlanes() {
	g, c := w.g, &w.cell
	lo, hi := g.localBox(w.p)
	c.SetBox(lo, hi, g.labels)
	w.near = w.near[:0]
	for i := range w.faces {
		n := w.faces[i].n
		w.near = append(w.near, index.Neighbour{Point: w.faces[i].q, Dist2: dot(n, n)})
	}
	slices.SortFunc(w.near, func(a, b index.Neighbour) int {
		switch {
		case a.Dist2 < b.Dist2:
			return -1
		case a.Dist2 > b.Dist2:
			return 1
		}
		return int(a.Point - b.Point)
	})
	far := reach2(c)
	for _, q := range w.near {
		if q.Dist2 > float64(4*far) {
			break
		}
		n := sub(g.at[q.Point].Vec, w.own)
		if c.Bisect(n, lostBySub(g.at[q.Point].Vec, w.own, n), q.Point) == polyhedron.Cut {
			far = reach2(c)
		}
	}
}
