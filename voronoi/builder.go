package voronoi

import (
	"math"

	"nearcell/voronoi/index"
	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// firstNeighbours is how many of the nearest sites cut a cell before its
// vertices are looked at one by one.
const firstNeighbours = 12

const (
	// farBox is the ratio of the artificial box around a cell to the extent of the
	// sites.
	farBox = 0x1p20
	// farReach is how many times the extent a cell may reach in float64; its last
	// bits would be lost beyond.
	farReach = 0x1p5
)

// builder makes cells one by one. It is the scratch of one goroutine.
type builder struct {
	d    *Diagram
	cell polyhedron.Cell
	used *index.Used
	near []index.Neighbour

	// The cell in work: itself, its place and the square of its reach.
	now    *polyhedron.Cell
	at     Vec
	reach2 float64
	leaves index.Leaves

	// offered counts the sites held against cells, the measure of work that Cost
	// goes by.
	offered int
	walker  *walker // of the tetrahedralisation; nil: none is used
	idle    *walker // what walker was the last time that it was used
	tallies *tallies

	// known: near holds all neighbours of the cell in work, and onHull tells whether
	// its site lies on the convex hull. No search is needed.
	known, onHull bool

	useful func(*index.Box, float64) bool // canMatter, bound once

	support  []int32 // scratch of bounded
	work     solid.Work
	measures solid.Measures
	list     []share         // scratch of shares
	inside   []float64       // scratch of shares
	slab     polyhedron.Cell // scratch of clippedMiddle
	slabOut  solid.Measures

	full    polyhedron.Cell // the whole cell, where it is measured in parts
	region  solid.Solid     // the part without convex pieces that it is measured in
	planes  []solid.Plane   // scratch of eachPiece
	touched []int32         // scratch of measureIn
	inParts []share         // scratch of sharesIn
	parts   *within         // contacts are measured in these; nil: whole
}

// builder takes a builder from the diagram's pool; free gives it back.
func (d *Diagram) builder() *builder {
	if b, ok := d.pool.Get().(*builder); ok {
		b.use(nil, nil)
		b.parts = nil
		return b
	}
	b := &builder{d: d, used: index.NewUsed(d.tree.Len())}
	b.useful = b.canMatter
	return b
}

func (d *Diagram) free(b *builder) { d.pool.Put(b) }

// use says which way cells are made: with the tetrahedralisation and the sums over its
// triangles, which may be nil, or nil without it.
func (b *builder) use(g *dual, y *tallies) {
	b.tallies = y
	switch {
	case g == nil:
		b.walker = nil
	case b.walker == nil || b.walker.g != g:
		if b.idle == nil || b.idle.g != g {
			b.idle = newWalker(g)
		}
		b.walker = b.idle
	}
}

// build makes c the cell of the place p (shifted by the origin; at is the same
// place in the user's coordinates) among all sites but self. The finished cell is in
// true units, whatever the distances. In a convex solid the
// cell is cut by the solid, in any other by its bounding box. Labels are cell
// numbers. bounded is false if the cell reaches to infinity; c is then closed by
// Open faces.
func (b *builder) build(c *polyhedron.Cell, p, at Vec, self int32) (bounded bool) {
	d := b.d
	b.gather(p, self)
	if d.solid == nil {
		bounded = b.buildOpen(c, p, self)
		if d.stretched {
			c.Divide(d.stretch)
		}
		return bounded
	}
	lo, hi := d.localBox(at)
	c.SetBox(lo, hi, d.labels)
	b.cut(c, p, self)
	if d.stretched {
		c.Divide(d.stretch)
	}
	if d.convex && !d.isBox && !c.Empty() {
		d.solid.ClipConvex(c, at)
	}
	return true
}

// cut cuts c by the bisectors of p with the sites: first with the nearest ones,
// then with all that can still matter. A site can matter only if it is nearer to
// some vertex v than p is: if it lies in one of the balls of radius |v-p| about the
// vertices (the empty circumballs of a Voronoi cell). These balls only shrink as
// the cell is cut, so that one walk through the tree, which passes over every box
// outside all balls, leaves the final cell, certified at every vertex.
//
// near holds the nearest sites: see gather.
func (b *builder) cut(c *polyhedron.Cell, p Vec, self int32) {
	tree := b.d.tree
	if !b.known {
		b.used.Reset()
		if self >= 0 {
			b.used.Add(self)
		}
	}
	b.now, b.at, b.reach2 = c, p, reach2(c)
	for _, q := range b.near {
		if q.Dist2 > float64(4*b.reach2) {
			return // all others are farther still: the cell is final
		}
		if !b.known {
			b.used.Add(q.Point)
		}
		b.bisect(q.Point)
	}
	if b.known || len(b.near) < firstNeighbours {
		return // there are no others
	}
	b.leaves.Start(tree, p)
	for {
		from, to, ok := b.leaves.Next(b.useful)
		if !ok {
			return
		}
		for q := from; q < to; q++ {
			if !b.used.Has(q) {
				b.bisect(q)
			}
		}
	}
}

// gather finds the sites nearest to p, itself left out.
func (b *builder) gather(p Vec, self int32) {
	if b.known {
		return
	}
	b.used.Reset()
	if self >= 0 {
		b.used.Add(self)
	}
	b.near = b.d.tree.KNearest(p, firstNeighbours, b.used, b.near[:0])
}

// flowerFrom is the number of sites from which a box is held against the balls one
// by one. Below it, cutting by its sites is as cheap.
const flowerFrom = 16

// canMatter tells whether a box can hold a site that cuts the present cell.
func (b *builder) canMatter(box *index.Box, dist2 float64) bool {
	if dist2 > float64(4*b.reach2)*(1+0x1p-49) {
		return false // every ball lies within twice the reach of p
	}
	if box.Points < flowerFrom {
		return true
	}
	for _, v := range b.now.Vertices() {
		if box.Meets(b.at, v) {
			return true
		}
	}
	return false
}

// bisect keeps the part of the present cell nearer to its site than to site q.
// Local coordinates keep the plane free of cancellation.
func (b *builder) bisect(q int32) {
	b.offered++
	at := b.d.tree.Point(q)
	n := sub(at, b.at)
	if dot(n, n) > float64(4*b.reach2)*(1+0x1p-49) {
		return
	}
	if b.now.Bisect(n, lostBySub(at, b.at, n), q) != polyhedron.Unchanged {
		b.reach2 = reach2(b.now)
	}
}

// reach2 is the squared distance from the site to the farthest vertex.
func reach2(c *polyhedron.Cell) float64 {
	far := 0.0
	for _, v := range c.Vertices() {
		far = max(far, dot(v, v))
	}
	return far
}

// buildOpen is build without a solid: the cell begins in an artificial box, and if
// nothing of the box is left in the end, it was never there.
//
// Most cells close in a box that is a few times as large as the neighbourhood. The
// others try one far larger than the set of sites. If sides of that box are left,
// exact predicates decide whether the cell is unbounded; if it is not, it only
// reaches far. What reaches far is made in two words a coordinate, and in larger
// boxes where it takes them. A cell that is not closed even so reaches farther than
// 2^90 times the extent of the sites; it counts as unbounded.
func (b *builder) buildOpen(c *polyhedron.Cell, p Vec, self int32) (bounded bool) {
	size := b.d.sizeFrom(p)
	if n := min(len(b.near), firstNeighbours); (n == firstNeighbours || b.known) && b.inBox(c, p, self, 4*math.Sqrt(b.near[n-1].Dist2)) {
		return true
	}
	closed := b.inFarBox(c, p, self, size*farBox, false)
	if reach := math.Sqrt(b.reach2); closed && reach <= size*farReach && b.inBox(c, p, self, 2*reach) {
		return true // once more, without the rounding of the far box
	}
	if !closed && (b.known && b.onHull || !b.known && !b.bounded(c, p, self)) {
		return false
	}
	for _, grown := range [...]float64{farBox, 0x1p60, 0x1p90} {
		if b.inFarBox(c, p, self, size*grown, true) {
			return true
		}
	}
	b.inFarBox(c, p, self, size*farBox, false)
	return false
}

// inBox cuts c from an artificial box of ordinary size and tells whether nothing of
// the box is left.
func (b *builder) inBox(c *polyhedron.Cell, p Vec, self int32, size float64) bool {
	o := polyhedron.Open
	c.SetBox(Vec{X: -size, Y: -size, Z: -size}, Vec{X: size, Y: size, Z: size}, [6]int32{o, o, o, o, o, o})
	b.cut(c, p, self)
	return !c.IsOpen()
}

// inFarBox cuts c from a far box and tells whether nothing of the box is left.
func (b *builder) inFarBox(c *polyhedron.Cell, p Vec, self int32, size float64, fine bool) bool {
	c.SetFarBox(size, polyhedron.Open, fine)
	b.cut(c, p, self)
	return !c.IsOpen()
}

// sizeFrom is the size of the set of sites as seen from p: no site is farther
// along any axis. It is positive.
func (d *Diagram) sizeFrom(p Vec) float64 {
	size := 0.0
	if d.tree.Len() > 0 {
		lo, hi := d.tree.Bounds()
		size = max(hi.X-lo.X, hi.Y-lo.Y, hi.Z-lo.Z,
			math.Abs(p.X-lo.X), math.Abs(p.Y-lo.Y), math.Abs(p.Z-lo.Z),
			math.Abs(p.X-hi.X), math.Abs(p.Y-hi.Y), math.Abs(p.Z-hi.Z))
	}
	if size == 0 {
		return 1
	}
	return size
}
