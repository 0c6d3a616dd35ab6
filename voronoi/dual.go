package voronoi

import (
	"context"
	"math"
	"sync"
	"sync/atomic"

	"nearcell/voronoi/delaunay"
)

// dual is a tetrahedralisation with what its cells are made of: the circumcentres,
// each computed once. Its vertices are the tetrahedralisation's points, whose numbers
// depend on the coordinates alone.
type dual struct {
	t       *delaunay.T
	at      []spot   // by point; at[0] is none
	cell    []int32  // by point: the number that others know it by
	point   []int32  // by that number
	centres []centre // by real tetrahedron

	flags []uint32 // by point: what befalls its cell; atomic

	listing   sync.Once // of incidence
	incidence incidence

	*enclosure                 // nil: cells end nowhere
	corners    map[int32][]Vec // by point: corners of the box in its cell, in true coordinates
	awkward    map[int32]bool  // points whose cells are cut from the box plane by plane
}

// spot is the place of a point.
type spot struct {
	Vec
	reach uint64 // squared distance to the farthest vertex of its cell, as bits; atomic
}

// enclosure is a box at which cells end.
type enclosure struct {
	lo, hi Vec // in the coordinates of dual.at with origin added
	origin Vec
	labels [6]int32
}

// Bits of dual.flags. The lowest six say that a vertex lies beyond a side of the box.
const (
	flagOut    = 1<<6 - 1
	flagSpoilt = spoilt
	flagHull   = 1 << 8
)

// newDual computes the circumcentres. places are the sites that t was made of, by
// number; points of t are numbered as it numbers them. box may be nil.
func newDual(ctx context.Context, t *delaunay.T, place func(i int32) Vec, n, threads int, box *enclosure) (*dual, error) {
	points := t.NumPoints() + 1
	g := &dual{
		t: t, at: make([]spot, points), cell: make([]int32, points), point: make([]int32, n), enclosure: box,
		centres: make([]centre, t.NumTets()), flags: make([]uint32, points),
	}
	delaunay.AdviseHugePages(g.at)
	delaunay.AdviseHugePages(g.centres)
	parallel(threads, points, func(lo, hi int) {
		for p := max(1, lo); p < hi; p++ {
			if s := t.PointSite(int32(p)); s >= 0 {
				g.cell[p] = int32(s)
				g.point[s] = int32(p)
				g.at[p].Vec = place(int32(s))
			}
		}
	})
	parallel(threads, t.NumTets(), func(lo, hi int) {
		if ctx.Err() == nil {
			g.computeCentres(lo, hi)
		}
	})
	for i := range t.NumGhosts() {
		v, _ := t.Record(uint32(t.NumTets() + i))
		for _, p := range v {
			g.flags[p] |= flagHull
			g.at[p].reach = math.Float64bits(math.Inf(1))
		}
	}
	if box != nil {
		g.findCorners()
	}
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

// touch reads what computeCentres needs for tetrahedra lo to hi-1, so that the memory
// answers all at once. The result means nothing.
func (g *dual) touch(lo, hi int) (sum uint64) {
	for i := lo; i < hi; i++ {
		v, _ := g.t.Record(uint32(i))
		for _, p := range v {
			sum += atomic.LoadUint64(&g.at[p].reach)
		}
	}
	return sum
}

func (g *dual) computeCentres(lo, hi int) (touched uint64) {
	for i := lo; i < hi; i++ {
		if (i-lo)%ahead == 0 {
			touched += g.touch(i, min(hi, i+ahead))
		}
		v, _ := g.t.Record(uint32(i))
		a, b, c, d := v[0], v[1], v[2], v[3]
		// In the order of their numbers, so that the bits are those of the set.
		a, b = min(a, b), max(a, b)
		c, d = min(c, d), max(c, d)
		a, c = min(a, c), max(a, c)
		b, d = min(b, d), max(b, d)
		b, c = min(b, c), max(b, c)
		o := circumcentre(g.at[a].Vec, g.at[b].Vec, g.at[c].Vec, g.at[d].Vec)
		far2, out := dot(o, o), uint8(0)
		switch {
		case !finite(o):
			far2, out = math.Inf(1), spoilt
		case g.enclosure != nil:
			out = g.sidesBeyond(a, o, far2, min(b, c, d))
		}
		g.centres[i] = centre{o: o, from: a, out: out}
		bits := math.Float64bits(far2)
		for _, p := range [4]int32{a, b, c, d} {
			raise(&g.at[p].reach, bits)
			if out != 0 && atomic.LoadUint32(&g.flags[p])&uint32(out) != uint32(out) {
				atomic.OrUint32(&g.flags[p], uint32(out))
			}
		}
	}
	return touched
}

// raise makes x the larger of itself and bits. What it comes to does not depend on the
// order of the calls, nor on who makes them.
func raise(x *uint64, bits uint64) {
	for {
		old := atomic.LoadUint64(x)
		if old >= bits || atomic.CompareAndSwapUint64(x, old, bits) {
			return
		}
	}
}

// surelyBeyond is the share of its distance by which a far circumcentre has to lie
// beyond a side of the box for that to be certain whatever was rounded.
const surelyBeyond = 0x1p-36

// sidesBeyond is the outcode of the centre o, seen from point a. A centre so far away
// that its digits cannot be relied on is spoilt, unless it lies outside for certain.
func (g *dual) sidesBeyond(a int32, o Vec, far2 float64, other int32) uint8 {
	lo, hi := g.localBox(a)
	out := outcode(o, lo, hi)
	if out == 0 {
		return 0 // the cell's own measures tell whether it is to be relied on
	}
	edge := sub(g.at[other].Vec, g.at[a].Vec)
	if far2 <= farShare2*dot(edge, edge) {
		return out
	}
	doubt := surelyBeyond * math.Sqrt(far2)
	m := Vec{X: doubt, Y: doubt, Z: doubt}
	if outcode(o, sub(lo, m), add(hi, m)) == 0 {
		out |= spoilt
	}
	return out
}

// findCorners finds the cells in which the corners of the box lie.
func (g *dual) findCorners() {
	g.corners, g.awkward = map[int32][]Vec{}, map[int32]bool{}
	for k := range 8 {
		x := g.boxCorner(k)
		near := g.nearestPoints(x)
		g.corners[near[0]] = append(g.corners[near[0]], x)
		if len(near) > 1 { // a face passes through the corner, or nearly so
			for _, p := range near {
				g.awkward[p] = true
			}
		}
	}
}

// boxCorner is the corner with the upper side on every axis whose bit in k is set.
func (e *enclosure) boxCorner(k int) Vec {
	x := e.lo
	if k&1 != 0 {
		x.X = e.hi.X
	}
	if k&2 != 0 {
		x.Y = e.hi.Y
	}
	if k&4 != 0 {
		x.Z = e.hi.Z
	}
	return x
}

// localBox is the box seen from a point.
func (g *dual) localBox(p int32) (lo, hi Vec) {
	at := add(g.at[p].Vec, g.origin)
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
	d2 := func(p int32) float64 { r := sub(g.at[p].Vec, local); return dot(r, r) }
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
