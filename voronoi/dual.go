package voronoi

import (
	"context"
	"sync"
	"sync/atomic"

	"nearcell/voronoi/delaunay"
)

// dual is a tetrahedralisation with what its cells are made of: the circumcentres,
// each computed once. Cells of it are measured by walkers. Its vertices are the
// tetrahedralisation's points, whose numbers depend on the coordinates alone.
type dual struct {
	t         *delaunay.T
	at        []Vec    // by point; at[0] is none
	cell      []int32  // by point: the number that others know it by
	point     []int32  // by that number
	centres   []centre // by real tetrahedron
	incidence incidence

	boxed   bool // cells end at the box
	lo, hi  Vec  // of it, in the coordinates of at with origin added
	origin  Vec
	labels  [6]int32
	corners map[int32][]Vec // by point: corners of the box in its cell, in true coordinates
	awkward map[int32]bool  // points whose cells are cut from the box plane by plane
}

// newDual computes the circumcentres. places are the sites that t was made of, by
// number; points of t are numbered as it numbers them.
func newDual(ctx context.Context, t *delaunay.T, place func(i int32) Vec, n, threads int) (*dual, error) {
	g := &dual{t: t, at: make([]Vec, t.NumPoints()+1), cell: make([]int32, t.NumPoints()+1), point: make([]int32, n)}
	parallel(threads, t.NumPoints()+1, func(lo, hi int) {
		for p := max(1, lo); p < hi; p++ {
			if s := t.PointSite(int32(p)); s >= 0 {
				g.cell[p] = int32(s)
				g.point[s] = int32(p)
				g.at[p] = place(int32(s))
			}
		}
	})
	g.centres = make([]centre, t.NumTets())
	var listed sync.WaitGroup
	if threads > 1 {
		listed.Go(g.listIncidence)
	} else {
		g.listIncidence()
	}
	parallel(max(1, threads-1), t.NumTets(), func(lo, hi int) {
		if ctx.Err() == nil {
			g.computeCentres(lo, hi)
		}
	})
	listed.Wait()
	return g, ctx.Err()
}

// parallel shares 0 … n-1 out in blocks.
func parallel(threads, n int, do func(lo, hi int)) {
	const block = 1 << 13
	if threads <= 1 || n <= block {
		for lo := 0; lo < n; lo += block {
			do(lo, min(n, lo+block))
		}
		return
	}
	var next atomic.Int64
	var all sync.WaitGroup
	for range threads {
		all.Go(func() {
			for {
				lo := int(next.Add(1)-1) * block
				if lo >= n {
					return
				}
				do(lo, min(n, lo+block))
			}
		})
	}
	all.Wait()
}

func (g *dual) computeCentres(lo, hi int) {
	for i := lo; i < hi; i++ {
		v, _ := g.t.Record(uint32(i))
		a, b, c, d := v[0], v[1], v[2], v[3]
		// In the order of their numbers, so that the bits are those of the set.
		if b < a {
			a, b = b, a
		}
		if d < c {
			c, d = d, c
		}
		if c < a {
			a, c = c, a
		}
		if d < b {
			b, d = d, b
		}
		if c < b {
			b, c = c, b
		}
		o := circumcentre(g.at[a], g.at[b], g.at[c], g.at[d])
		g.centres[i] = centre{o: o, from: a}
		if !finite(o) {
			g.centres[i].out = spoilt
		}
	}
}

// enclose says that cells end at a box, and marks the circumcentres outside it.
func (g *dual) enclose(lo, hi, origin Vec, labels [6]int32, threads int) {
	g.boxed, g.lo, g.hi, g.origin, g.labels = true, lo, hi, origin, labels
	parallel(threads, len(g.centres), func(from, to int) {
		for i := from; i < to; i++ {
			c := &g.centres[i]
			l, h := g.localBox(c.from)
			c.out |= outcode(c.o, l, h)
		}
	})
	g.corners, g.awkward = map[int32][]Vec{}, map[int32]bool{}
	for k := range 8 {
		x := lo
		if k&1 != 0 {
			x.X = hi.X
		}
		if k&2 != 0 {
			x.Y = hi.Y
		}
		if k&4 != 0 {
			x.Z = hi.Z
		}
		near := g.nearestPoints(x)
		g.corners[near[0]] = append(g.corners[near[0]], x)
		if len(near) > 1 { // a face passes through the corner, or nearly so
			for _, p := range near {
				g.awkward[p] = true
			}
		}
	}
}

// localBox is the box seen from a point.
func (g *dual) localBox(p int32) (lo, hi Vec) {
	at := add(g.at[p], g.origin)
	return sub(g.lo, at), sub(g.hi, at)
}

// outcode has bit w set when a place lies beyond side w: -x, +x, -y, +y, -z, +z.
func outcode(p, lo, hi Vec) (out uint8) {
	if p.X < lo.X {
		out |= 1
	}
	if p.X > hi.X {
		out |= 2
	}
	if p.Y < lo.Y {
		out |= 4
	}
	if p.Y > hi.Y {
		out |= 8
	}
	if p.Z < lo.Z {
		out |= 16
	}
	if p.Z > hi.Z {
		out |= 32
	}
	return out
}

// almostAsNear is the ratio of squared distances up to which two sites count as
// equally near to a corner of the box.
const almostAsNear = 1 + 1e-8

// nearestPoints lists the points nearest to a place, the nearest first: those that are
// as near as it, or almost. It goes from neighbour to neighbour.
func (g *dual) nearestPoints(x Vec) []int32 {
	local := sub(x, g.origin)
	best := g.point[g.t.NearestSite(local)]
	d2 := func(p int32) float64 { r := sub(g.at[p], local); return dot(r, r) }
	limit := d2(best) * almostAsNear
	list := []int32{best}
	seen := map[int32]bool{best: true}
	var around []int32
	for head := 0; head < len(list); head++ {
		around = g.t.Neighbours(int(g.cell[list[head]]), around[:0])
		for _, s := range around {
			if s == delaunay.Ghost || seen[g.point[s]] {
				continue
			}
			seen[g.point[s]] = true
			if d2(g.point[s]) <= limit {
				list = append(list, g.point[s])
			}
		}
	}
	return list
}
