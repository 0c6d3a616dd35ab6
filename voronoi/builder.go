package voronoi

import (
	"math"

	"nearcell/voronoi/index"
	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// firstNeighbours is how many of the nearest sites cut a cell before its
// vertices are looked at one by one.
const firstNeighbours = 16

// farStep is the ratio of the artificial box around an unbounded diagram to the
// extent of the sites, and the ratio by which it grows.
const (
	farStep  = 0x1p20
	farTries = 5
)

// builder makes cells one by one. It is the scratch of one goroutine.
type builder struct {
	d    *Diagram
	cell polyhedron.Cell
	used *index.Used
	near []index.Neighbour

	support  []int32 // scratch of bounded
	work     solid.Work
	measures solid.Measures
	list     []share         // scratch of shares
	inside   []float64       // scratch of shares
	slab     polyhedron.Cell // scratch of clippedMiddle
	slabOut  solid.Measures
}

// builder takes a builder from the diagram's pool; free gives it back.
func (d *Diagram) builder() *builder {
	if b, ok := d.pool.Get().(*builder); ok {
		return b
	}
	return &builder{d: d, used: index.NewUsed(d.tree.Len())}
}

func (d *Diagram) free(b *builder) { d.pool.Put(b) }

// build makes c the cell of the place p (shifted by the origin; at is the same
// place in the user's coordinates) among all sites but self. In a convex solid the
// cell is cut by the solid, in any other by its bounding box. Labels are cell
// numbers. bounded is false if the cell reaches to infinity; c is then closed by
// Open faces.
func (b *builder) build(c *polyhedron.Cell, p, at Vec, self int32) (bounded bool, err error) {
	d := b.d
	if d.solid == nil {
		return b.buildOpen(c, p, self)
	}
	c.SetBox(sub(d.lo, at), sub(d.hi, at), wallLabels)
	b.cut(c, p, self)
	if d.convex && !d.isBox && !c.Empty() {
		d.solid.ClipConvex(c, at)
	}
	return true, nil
}

// cut cuts c by the bisectors of p with the sites: first with the nearest ones,
// in growing distance until no farther site can matter; then for every vertex the
// site nearest to it, of those not yet used, is looked up, until no site is nearer
// to any vertex than p is (the empty circumball of a Voronoi vertex).
//
// "Not yet used" matters: at an ill-conditioned vertex a used site can look the
// nearest by rounding and hide an unused one.
func (b *builder) cut(c *polyhedron.Cell, p Vec, self int32) {
	tree := b.d.tree
	b.used.Reset()
	if self >= 0 {
		b.used.Add(self)
	}
	b.near = tree.KNearest(p, firstNeighbours, b.used, b.near[:0])
	far2 := reach2(c)
	for _, q := range b.near {
		if q.Dist2 > float64(4*far2) {
			return // all others are farther still: the cell is final
		}
		b.used.Add(q.Point)
		if b.bisect(c, p, q.Point) == polyhedron.Cut {
			far2 = reach2(c)
		}
		if c.Empty() {
			return
		}
	}
	if len(b.near) < firstNeighbours {
		return // there are no others
	}
	b.certify(c, p, b.near[len(b.near)-1].Dist2)
}

// certify cuts until every vertex is final. Every site within the root of known2
// of p has been used.
func (b *builder) certify(c *polyhedron.Cell, p Vec, known2 float64) {
	for i := c.Unsettled(0); i >= 0; i = c.Unsettled(i) {
		v := c.Vertex(i)
		if float64(4*dot(v, v)) < known2 {
			c.Settle(i) // its ball lies in the ball that is known
			continue
		}
		q, found := b.d.tree.Closer(p, v, b.used)
		if !found {
			c.Settle(i)
			continue
		}
		b.used.Add(q)
		if b.bisect(c, p, q) == polyhedron.Empty {
			return
		}
		i = 0 // vertices have new numbers
	}
}

// bisect keeps the part of c nearer to p than to site q. Local coordinates keep
// the plane free of cancellation.
func (b *builder) bisect(c *polyhedron.Cell, p Vec, q int32) polyhedron.Result {
	n := sub(b.d.tree.Point(q), p)
	return c.Clip(n, dot(n, n)/2, q)
}

// reach2 is the squared distance from the site to the farthest vertex.
func reach2(c *polyhedron.Cell) float64 {
	far := 0.0
	for _, v := range c.Vertices() {
		far = max(far, dot(v, v))
	}
	return far
}

// buildOpen is build without a solid. The cell begins in a box far larger than
// the set of sites. If sides of the box are left, exact predicates decide whether
// the cell is unbounded; if it is not, it only reaches far, and the box grows.
func (b *builder) buildOpen(c *polyhedron.Cell, p Vec, self int32) (bounded bool, err error) {
	size := b.d.sizeFrom(p)
	known := false
	for range farTries {
		size *= farStep
		c.SetFarBox(Vec{X: -size, Y: -size, Z: -size}, Vec{X: size, Y: size, Z: size}, openLabels)
		b.cut(c, p, self)
		if c.Empty() {
			break
		}
		if !c.IsOpen() {
			return true, nil
		}
		if !known && !b.bounded(c, p, self) {
			return false, nil
		}
		known = true
	}
	site := -1
	if self >= 0 {
		site = int(b.d.site[self])
	}
	return false, &UnresolvedError{site}
}

// openLabels are the labels of the artificial box.
var openLabels = [6]int32{
	polyhedron.Open, polyhedron.Open, polyhedron.Open,
	polyhedron.Open, polyhedron.Open, polyhedron.Open,
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
