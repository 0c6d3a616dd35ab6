package voronoi

import (
	"context"
	"math"
	"sync"

	"nearcell/voronoi/delaunay"
)

// All cells in one pass over the triangles of the tetrahedralisation.
//
// A Voronoi edge is dual to a triangle p, q, r and runs along its normal, through the
// circumcentre f of the triangle. Seen from p it is an edge of the faces towards q and
// r: with the middle m of p and q it spans a triangle that is a part of the face, and
// with p a tetrahedron that is a part of the cell. The parts of a face, with the signs
// that they have about m, add up to the face, those of a cell to the cell, whether f and
// m lie in the face or not (Okabe, Boots, Sugihara & Chiu 2000; signed duals: Hirani
// 2003). So every triangle adds to its three cells, and no cell is ever put together.
//
// With u = q-p, v = r-p, n = u×v the part of the edge from x to y enters by λ = n·(y-x)
// alone. Let α, β, γ be the barycentric coordinates of f for q, r, p; those parts have
// the volumes λβ/12 (face p, q, for p and q each), λα/12 (p, r) and λγ/12 (q, r), the
// areas three times that over half the distance of their sites, and their centres of
// gravity at (m + x + y)/4 from the cell's site.
//
// Sums are kept in bins, so that neither the order of the triangles nor the number of
// goroutines changes a bit. Where cells end at a box its walls add their part: see
// trianglewalls.go.

// tally is what has been added up for one cell: two cache lines.
type tally struct {
	at            Vec   // of the site, as in dual
	size          int32 // 2^size is above the reach of the cell
	triangles     int32 // how many have been added
	volume12      bins  // 12 times the volume
	area2         bins  // twice the surface
	x48, y48, z48 bins  // 48 times the first moment about the site
	near2, far2   float64
}

// wallTally is what has been added up for the part of one cell's surface on walls.
type wallTally struct {
	area2 bins
	check uint64 // 0 when all that begins on a wall ends there
}

// tallies are those of all cells, by point.
type tallies struct {
	g     *dual
	cells []tally
	walls []wallTally // nil without a box

	area    bool // areas are added up
	moments bool // first moments are

	touched uint64 // of no meaning: see touch
}

// sizeOf is an e for which 2^e is above the square root of x2.
func sizeOf(x2 float64) int32 {
	_, e := math.Frexp(x2)
	return int32((e + 2) >> 1)
}

// largestSize bounds the sizes: the fourth power of a length is still a number.
const largestSize = 200

// size is the binary place of a length that no vertex of the cell of p, cut by the box,
// is farther away than.
func (g *dual) size(p int32) int32 {
	far2 := math.Float64frombits(g.at[p].reach)
	if g.enclosure != nil {
		lo, hi := g.localBox(p)
		far := Vec{X: max(-lo.X, hi.X), Y: max(-lo.Y, hi.Y), Z: max(-lo.Z, hi.Z)}
		far2 = min(far2, dot(far, far))
	}
	if !(far2 < math.MaxFloat64) {
		return largestSize + 1
	}
	return max(-largestSize-1, min(sizeOf(far2), largestSize+1))
}

func (g *dual) newTallies(want Measures, threads int) *tallies {
	s := &tallies{g: g, cells: make([]tally, len(g.at)), area: want&(Area|WallArea|Clipped) != 0, moments: want&Centroid != 0}
	delaunay.AdviseHugePages(s.cells)
	if g.enclosure != nil {
		s.walls = make([]wallTally, len(g.at))
		delaunay.AdviseHugePages(s.walls)
	}
	parallel(threads, len(s.cells), func(lo, hi int) {
		for p := max(1, lo); p < hi; p++ {
			t := &s.cells[p]
			t.at, t.size, t.near2 = g.at[p].Vec, g.size(int32(p)), math.Inf(1)
		}
	})
	return s
}

// Splitters for the terms of the sums, from what a triangle with corners within reach can
// add. Sizes are within largestSize where a tally is used.
func (t *tally) volumeSplitter() float64 { return splitter(3*t.size + 4) }
func (t *tally) areaSplitter() float64   { return splitter(2*t.size + 2) }
func (t *tally) momentSplitter() float64 { return splitter(4*t.size + 5) }

// mostTallies is how many goroutines add up, each for itself, since every one has
// tallies of its own.
const mostTallies = 4

// tally adds up what is wanted of all cells. tell, if not nil, is told how many of the
// tetrahedra are done, from one goroutine at a time.
func (g *dual) tally(ctx context.Context, want Measures, threads int, tell func(done, of int)) (*tallies, error) {
	var own [mostTallies]*tallies
	n := max(1, min(threads, mostTallies, g.t.NumTets()>>13))
	for i := range n {
		own[i] = g.newTallies(want, threads)
	}
	var guard sync.Mutex // of done and calls of tell
	done := 0
	idle := make(chan *tallies, n)
	for _, one := range own[:n] {
		idle <- one
	}
	parallel(n, g.t.NumTets(), func(lo, hi int) {
		if ctx.Err() == nil {
			mine := <-idle
			mine.block(uint32(lo), uint32(hi))
			idle <- mine
			if tell != nil {
				guard.Lock()
				done += hi - lo
				tell(done, g.t.NumTets())
				guard.Unlock()
			}
		}
	})
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	s := own[0]
	if g.enclosure != nil {
		s.boxEdges()
	}
	parallel(threads, len(s.cells), func(lo, hi int) {
		for _, z := range own[1:n] {
			s.merge(z, lo, hi)
		}
	})
	return s, nil
}

// merge adds what z has for points lo to hi-1.
func (s *tallies) merge(z *tallies, lo, hi int) {
	for p := lo; p < hi; p++ {
		t, u := &s.cells[p], &z.cells[p]
		t.volume12.merge(u.volume12)
		t.area2.merge(u.area2)
		t.x48.merge(u.x48)
		t.y48.merge(u.y48)
		t.z48.merge(u.z48)
		t.near2, t.far2 = min(t.near2, u.near2), max(t.far2, u.far2)
		t.triangles += u.triangles
		if s.walls != nil {
			s.walls[p].area2.merge(z.walls[p].area2)
			s.walls[p].check += z.walls[p].check
		}
	}
}

// ahead is how many tetrahedra are touched before they are worked on: the memory
// answers their questions all at once.
const ahead = 32

// block adds the triangles of tetrahedra lo to hi-1, each with the lower of its two.
func (s *tallies) block(lo, hi uint32) {
	g := s.g
	tets := uint32(len(g.centres))
	for ; lo < hi; lo += ahead {
		end := min(hi, lo+ahead)
		s.touch(lo, end)
		for t := lo; t < end; t++ {
			v, links := g.t.Record(t)
			inner := &g.centres[t]
			if inner.out&spoilt != 0 {
				continue // its cells are made in another way
			}
			for k := range links {
				u := links[k] >> 2
				switch {
				case u >= tets:
					if g.enclosure != nil {
						s.ray(v, k, inner)
					}
				case u > t:
					outer := &g.centres[u]
					switch out := inner.out | outer.out; {
					case out == 0:
						s.whole(v, k, inner, outer)
					case inner.out&outer.out == 0 && out&spoilt == 0:
						s.clipped(v, k, inner, outer)
					}
				}
			}
		}
	}
}

// touch reads what block needs for tetrahedra lo to hi-1.
func (s *tallies) touch(lo, hi uint32) {
	g := s.g
	sum := s.touched
	for t := lo; t < hi; t++ {
		v, links := g.t.Record(t)
		for k := range v {
			c := &s.cells[v[k]]
			sum += uint64(c.size) + math.Float64bits(c.far2)
			if u := links[k] >> 2; u > t && int(u) < len(g.centres) {
				sum += uint64(g.centres[u].from)
			}
		}
	}
	s.touched = sum
}

// touchCells reads the tallies of rows lo to hi-1. The result means nothing.
func (s *tallies) touchCells(lo, hi int) (sum uint64) {
	for _, p := range s.g.point[lo:hi] {
		t := &s.cells[p]
		sum += uint64(t.size) + math.Float64bits(t.far2) + s.walls[p].check + uint64(s.g.flags[p])
	}
	return sum
}

// facing returns the corners of face k in order, and +1 if the normal of the triangle in
// that order looks out of the tetrahedron, else -1.
func facing(v *[4]int32, k int) (p, q, r int32, sign float64) {
	rest := &restOf[k&3]
	a, b, c := v[rest[0]&3], v[rest[1]&3], v[rest[2]&3]
	p, r = min(a, b, c), max(a, b, c)
	// In the order a, b, c it looks out; so it does after a rotation.
	return p, a ^ b ^ c ^ p ^ r, r, float64(2*(below(a, b)+below(b, c)+below(c, a)) - 3)
}

// below is 1 if x < y, for numbers that are not negative.
func below(x, y int32) int32 { return int32(uint32(x-y) >> 31) }

// whole adds a Voronoi edge between two centres that the box does not cut.
func (s *tallies) whole(v *[4]int32, face int, c, d *centre) {
	p, q, r, sign := facing(v, face)
	i, j, k := &s.cells[p], &s.cells[q], &s.cells[r]
	from := add(c.o, sub(s.cells[c.from].at, i.at))
	to := add(d.o, sub(s.cells[d.from].at, i.at))
	far2 := max(dot(from, from), dot(to, to))
	i.far2 = max(i.far2, far2)
	j.far2 = max(j.far2, far2)
	k.far2 = max(k.far2, far2)
	e := sub(to, from)
	s.edge(i, j, k, Vec{X: sign * e.X, Y: sign * e.Y, Z: sign * e.Z}, add(from, to))
}

// nearShare2 is the square of the share of another edge below which the normal of a
// triangle is made with its shortest edge.
const nearShare2 = 1. / 64

// normal is u×v, where w is v-u and vv and ww are squared lengths. Where w is short it is
// u×w: then v-u, what the product of u and v lives by, would be rounding, but w, taken
// between two sites that almost coincide, is exact.
func normal(u, v, w Vec, vv, ww float64) Vec {
	if ww < nearShare2*vv {
		return cross(u, w)
	}
	return cross(u, v)
}

// edge adds a part of the Voronoi edge dual to the triangle of i, j and k. e is that
// part, along the normal of the triangle, sum twice its middle seen from i.
func (s *tallies) edge(i, j, k *tally, e, sum Vec) {
	u, v, w := sub(j.at, i.at), sub(k.at, i.at), sub(k.at, j.at)
	uu, vv, ww := dot(u, u), dot(v, v), dot(w, w)
	n := normal(u, v, w, vv, ww)
	half := 0.5 / dot(n, n)
	lambda := dot(n, e)
	// Twelve times the volumes behind the faces i-j, i-k and j-k.
	ij := float64(float64(float64(uu*dot(v, w))*half) * lambda)
	ik := -float64(float64(float64(vv*dot(u, w))*half) * lambda)
	jk := float64(float64(float64(ww*dot(u, v))*half) * lambda)
	i.volume12.add(ij+ik, i.volumeSplitter())
	j.volume12.add(ij+jk, j.volumeSplitter())
	k.volume12.add(ik+jk, k.volumeSplitter())
	i.near2 = min(i.near2, uu, vv)
	j.near2 = min(j.near2, uu, ww)
	k.near2 = min(k.near2, vv, ww)
	i.triangles++
	j.triangles++
	k.triangles++
	if s.area {
		p, q, r := ij/math.Sqrt(uu), ik/math.Sqrt(vv), jk/math.Sqrt(ww)
		i.area2.add(p+q, i.areaSplitter())
		j.area2.add(p+r, j.areaSplitter())
		k.area2.add(q+r, k.areaSplitter())
	}
	if s.moments {
		s.edgeMoments(i, j, k, u, v, w, ij, ik, jk, sum)
	}
}

// edgeMoments adds the first moments of the parts that edge adds.
func (s *tallies) edgeMoments(i, j, k *tally, u, v, w Vec, ij, ik, jk float64, sum Vec) {
	f, g, h := ij/2, ik/2, jk/2
	t := ij + ik
	i.x48.add(float64(t*sum.X)+(float64(f*u.X)+float64(g*v.X)), i.momentSplitter())
	i.y48.add(float64(t*sum.Y)+(float64(f*u.Y)+float64(g*v.Y)), i.momentSplitter())
	i.z48.add(float64(t*sum.Z)+(float64(f*u.Z)+float64(g*v.Z)), i.momentSplitter())
	t = ij + jk
	j.x48.add(float64(t*(sum.X-2*u.X))+(float64(h*w.X)-float64(f*u.X)), j.momentSplitter())
	j.y48.add(float64(t*(sum.Y-2*u.Y))+(float64(h*w.Y)-float64(f*u.Y)), j.momentSplitter())
	j.z48.add(float64(t*(sum.Z-2*u.Z))+(float64(h*w.Z)-float64(f*u.Z)), j.momentSplitter())
	t = ik + jk
	k.x48.add(float64(t*(sum.X-2*v.X))-(float64(g*v.X)+float64(h*w.X)), k.momentSplitter())
	k.y48.add(float64(t*(sum.Y-2*v.Y))-(float64(g*v.Y)+float64(h*w.Y)), k.momentSplitter())
	k.z48.add(float64(t*(sum.Z-2*v.Z))-(float64(g*v.Z)+float64(h*w.Z)), k.momentSplitter())
}

// good tells whether what was added up for the cell of p can be relied on.
func (s *tallies) good(p int32) bool {
	g := s.g
	t := &s.cells[p]
	if g.flags[p]&flagSpoilt != 0 || t.triangles == 0 || t.triangles > mostTerms/8 || max(t.size, -t.size) > largestSize {
		return false
	}
	if !(t.far2 <= farShare2*t.near2) || !(t.volume12.value() > 0) {
		return false
	}
	if g.enclosure == nil {
		return g.flags[p]&flagHull == 0
	}
	lo, hi := g.localBox(p)
	return s.walls[p].check == 0 && !g.awkward[p] &&
		lo.X <= 0 && lo.Y <= 0 && lo.Z <= 0 && hi.X >= 0 && hi.Y >= 0 && hi.Z >= 0
}

// fill writes the measures of the cell of p, whose place is at.
func (s *tallies) fill(p int32, at Vec, want Measures, out *Cells, row int32) {
	t := &s.cells[p]
	volume12 := t.volume12.value()
	if want&Volume != 0 {
		out.Volume[row] = volume12 / 12
	}
	if want&Centroid != 0 {
		four := 4 * volume12
		out.Centroid[row] = add(at, Vec{X: t.x48.value() / four, Y: t.y48.value() / four, Z: t.z48.value() / four})
		out.HasCentroid[row] = true
	}
	if want&Farthest != 0 {
		out.Farthest[row] = math.Sqrt(t.far2)
	}
	if want&NearestFace != 0 {
		out.NearestFace[row] = math.Sqrt(t.near2) / 2
	}
	if want&Bounded != 0 {
		out.Bounded[row] = true
	}
	if !s.area {
		return
	}
	area, walls := t.area2.value()/2, 0.0
	if s.walls != nil {
		if walls = s.walls[p].area2.value() / 2; !(walls > crumbShare*area) {
			walls = 0
		}
	}
	if want&Area != 0 {
		out.Area[row] = area
	}
	if want&WallArea != 0 {
		out.WallArea[row] = walls
	}
	if want&Clipped != 0 {
		out.Clipped[row] = walls > 0
	}
}
