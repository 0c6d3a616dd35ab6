package coverage

import (
	"math"

	"nearcell/voronoi/index"
	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// seeker looks for gaps in one cell after the other. It is the scratch of one
// goroutine.
type seeker struct {
	*search
	cell  polyhedron.Cell
	body  polyhedron.Cell // the cell in a part of the solid
	lower []bool          // by vertex of a body: an edge leads farther away
	ball  ball
	near  []nearSite
	least float64 // distance of the nearest of them
	parts []nearPart
	buf   []solid.Plane
	cone  cone
	found []Gap

	// For solids that are known by their surface.
	work    solid.Work
	sectors []solid.Sector
	at0     Vec     // the place in question
	reach0  float64 // its distance from its site
}

// ball lists the sites about a place. It is the scratch of one goroutine.
type ball struct {
	tree   *index.Tree
	leaves index.Leaves
	reach2 float64
	meets  func(*index.Box, float64) bool // bound once
	in     []int32                        // numbers in the tree, from -1 downwards in more
	more   []Vec                          // sites that were added
}

// point is a site that list has found.
func (b *ball) point(i int32) Vec {
	if i < 0 {
		return b.more[-1-i]
	}
	return b.tree.Point(i)
}

// list makes b.in the sites within reach of a place, and a few beyond.
func (b *ball) list(at Vec, reach float64) {
	if b.meets == nil {
		b.meets = func(_ *index.Box, dist2 float64) bool { return dist2 <= b.reach2 }
	}
	b.in, b.reach2 = b.in[:0], float64(reach*reach)*(1+0x1p-49)
	for i, p := range b.more {
		if d := sub(p, at); dot(d, d) <= b.reach2 {
			b.in = append(b.in, -1-int32(i))
		}
	}
	points := b.tree.Points()
	for b.leaves.Start(b.tree, at); ; {
		from, to, ok := b.leaves.Next(b.meets)
		if !ok {
			return
		}
		for i := from; i < to; i++ {
			if d := sub(points[i], at); dot(d, d) <= b.reach2 {
				b.in = append(b.in, i)
			}
		}
	}
}

// nearSite is a site that is nearest to a place, or about as near.
type nearSite struct {
	away Vec     // from the site to the place
	far  float64 // length of away
}

// nearPart is a part of the solid in reach of a place.
type nearPart struct {
	planes []solid.Plane // local to the cell's site
	beyond float64       // how far the place lies outside the part
}

// cellOf looks at the corners of the pieces of cell i: a gap is one of them.
func (k *seeker) cellOf(i int32) error {
	return k.cellAt(k.sites[k.of[i]])
}

// cellAt does that for the cell of any place, among the sites and those that were added.
func (k *seeker) cellAt(p Vec) error {
	if err := k.d.Insert(p, &k.cell); err != nil {
		return err
	}
	for i, q := range k.ball.more {
		if q != p && !k.cell.Empty() {
			k.cell.Bisect(sub(q, p), Vec{}, int32(len(k.sites)+i))
		}
	}
	if k.cell.Empty() {
		return nil
	}
	if k.faceted != nil {
		if k.partial && !k.cutAround(p) {
			return nil
		}
		k.facetCell(p)
		return nil
	}
	if k.solid == nil || k.convex {
		k.look(&k.cell, p)
		return nil
	}
	lo, hi := k.cell.Bounds()
	for part := range k.solid.NumParts() {
		if a, b := k.solid.PartBounds(part); !meet(sub(a, p), sub(b, p), lo, hi, k.grain) {
			continue
		}
		k.body.CopyFrom(&k.cell)
		result := polyhedron.Unchanged
		k.buf = k.solid.PartPlanes(part, p, k.buf[:0])
		for _, w := range k.buf {
			if result = k.body.Clip(w.N, w.D, polyhedron.Wall(max(w.Wall, 0))); result == polyhedron.Empty {
				break
			}
		}
		if result != polyhedron.Empty {
			k.look(&k.body, p)
		}
	}
	return nil
}

// meet tells whether two boxes come within tol of each other.
func meet(alo, ahi, blo, bhi Vec, tol float64) bool {
	return alo.X <= bhi.X+tol && blo.X <= ahi.X+tol && alo.Y <= bhi.Y+tol && blo.Y <= ahi.Y+tol &&
		alo.Z <= bhi.Z+tol && blo.Z <= ahi.Z+tol
}

// An edge tells against the corner it leaves only if it is long and clearly leads
// away from the site: corners are rounded, and nothing may be lost here.
const (
	longEdge = 1e-4 // of the corner's distance
	clearly  = 1e-3 // cosine towards the direction away from the site
)

// look tries the corners of a body from which no edge leads farther away.
func (k *seeker) look(c *polyhedron.Cell, p Vec) {
	k.lower = append(k.lower[:0], make([]bool, c.NumVertices())...)
	for f := range c.NumFaces() {
		label, loop := c.Face(f)
		for i, a := range loop {
			if label == polyhedron.Open {
				k.lower[a] = true
				continue
			}
			v := c.Vertex(int(a))
			e := sub(c.Vertex(int(loop[(i+1)%len(loop)])), v)
			r, l := length(v), length(e)
			if l > longEdge*r && dot(v, e) > clearly*r*l {
				k.lower[a] = true
			}
		}
	}
	before := len(k.found)
	for i, lower := range k.lower {
		if !lower && !k.isKnown(add(p, c.Vertex(i)), k.found[before:]) {
			k.try(c.Vertex(i), p)
		}
	}
}

// isKnown tells of a place that is one of these but for rounding.
func (k *seeker) isKnown(at Vec, found []Gap) bool {
	for i := range found {
		if g := &found[i]; length(sub(g.At, at)) <= float64(1e-13*g.Radius)+k.grain {
			return true
		}
	}
	return false
}

// scales are the differences of distance, relative to it, below which sites count as
// equally near to a place. The first is that of rounding. Sites that stand on a sphere
// but for the rounding of their coordinates make a cluster of places instead of one,
// of which none alone may seem surrounded; a coarser scale sees them as one.
var scales = [...]float64{1e-14, 1e-12, 1e-10, 1e-8}

const coarsest = 1e-8

// slackAt is how steeply, as a cosine, the distance must fall off in every direction
// where sites count as equally near within the scale. From a place where it falls off
// by the cosine m it falls by the share m²/2 before it rises again: this must be more
// than the scale, or the place could not be told from its surroundings.
func slackAt(scale float64) float64 { return 2 * math.Sqrt(scale) }

// try adds the place at v from the site p if it is a gap.
func (k *seeker) try(v, p Vec) {
	r := length(v)
	if r <= k.grain || !k.gather(v, p, r) || k.solid != nil && !k.reach(v, p, r) {
		return
	}
	k.at0, k.reach0 = add(p, v), r
	for _, s := range scales {
		if k.isPeak(r, s) {
			k.found = append(k.found, k.gap(add(p, v), r))
			return
		}
	}
}

// gather lists the sites about as near to the place as the nearest. It returns false
// if the cell's own site is not among them.
func (k *seeker) gather(v, p Vec, r float64) bool {
	k.near, k.least = k.near[:0], math.Inf(1)
	k.ball.list(add(p, v), float64(r*(1+2*coarsest))+k.grain)
	for _, i := range k.ball.in {
		// The difference of two sites loses nothing that they had.
		away := sub(v, sub(k.ball.point(i), p))
		far := length(away)
		k.near = append(k.near, nearSite{away, far})
		k.least = min(k.least, far)
	}
	return len(k.near) > 0 && k.least >= r*(1-coarsest)
}

// reach lists the parts of the solid that the place lies in or about.
func (k *seeker) reach(v, p Vec, r float64) bool {
	tol := float64(coarsest*r) + k.grain
	k.parts, k.buf = k.parts[:0], k.buf[:0]
	for i := range k.solid.NumParts() {
		if lo, hi := k.solid.PartBounds(i); !meet(sub(lo, p), sub(hi, p), v, v, tol) {
			continue
		}
		from := len(k.buf)
		k.buf = k.solid.PartPlanes(i, p, k.buf)
		part := nearPart{planes: k.buf[from:]}
		for _, w := range part.planes {
			part.beyond = max(part.beyond, dot(w.N, v)-w.D)
		}
		if part.beyond > tol {
			k.buf = k.buf[:from]
			continue
		}
		// A later append may move buf; what these planes were cut from stays.
		k.parts = append(k.parts, part)
		k.at(&k.parts[len(k.parts)-1], v)
	}
	return len(k.parts) > 0
}

// at turns the D of a part's planes into the place's distance behind them.
func (k *seeker) at(part *nearPart, v Vec) {
	for i := range part.planes {
		part.planes[i].D -= dot(part.planes[i].N, v)
	}
}

// isPeak tells whether the distance to the nearest site falls off in all directions
// that lead into the solid, taking sites and walls within the scale as equally near.
// The directions into the solid are those into one of its convex parts at the place.
func (k *seeker) isPeak(r, scale float64) bool {
	k.cone.c = k.cone.c[:0]
	for _, n := range k.near {
		if n.far <= k.least*(1+scale) {
			k.cone.c = append(k.cone.c, towards(n))
		}
	}
	if k.faceted != nil {
		return k.facetPeak(float64(scale*r)+k.grain, slackAt(scale))
	}
	if k.solid == nil {
		return k.cone.isClosed(slackAt(scale))
	}
	sites, tol, in := len(k.cone.c), float64(scale*r)+k.grain, false
	for _, part := range k.parts {
		if part.beyond > tol {
			continue
		}
		in = true
		k.cone.c = k.cone.c[:sites]
		for _, w := range part.planes {
			if w.D <= tol {
				k.cone.c = append(k.cone.c, w.N)
			}
		}
		if !k.cone.isClosed(slackAt(scale)) {
			return false
		}
	}
	return in
}

// towards is the unit vector from the place to the site: moving along it, or in any
// direction at an acute angle to it, brings the site nearer.
func towards(n nearSite) Vec { return scale(-1/n.far, n.away) }

// gap describes a place that is one, found at about this distance from its site.
func (k *seeker) gap(at Vec, r float64) Gap {
	g := Gap{At: at}
	if k.solid != nil || k.faceted != nil {
		g.At, g.Place = k.settle(at, 2*float64(coarsest*r)+2*k.grain)
	}
	g.At = add(g.At, Vec{}) // -0 + 0 is 0
	// The place may have moved a little, and rounding with it.
	k.ball.list(g.At, float64(r*(1+8*coarsest))+8*k.grain)
	g.Radius = math.Inf(1)
	for _, i := range k.ball.in {
		g.Radius = min(g.Radius, length(sub(k.ball.point(i), g.At)))
	}
	g.Site = math.MaxInt32
	for _, i := range k.ball.in {
		if length(sub(k.ball.point(i), g.At)) <= float64(g.Radius*(1+equal))+k.grain {
			g.Site = min(g.Site, k.number(i))
		}
	}
	return g
}

// number is a site that the ball has found; added ones come behind all others.
func (k *seeker) number(i int32) int32 {
	if i < 0 {
		return int32(len(k.sites)) - 1 - i
	}
	return k.of[i]
}

// equal is the difference of distance, relative to it, within which sites are equally
// near to a gap in the eyes of a user.
const equal = 1e-9

// settle puts a place that lies on walls but for rounding exactly there, as far as
// numbers allow, and says what part of the surface it is on.
func (k *seeker) settle(at Vec, tol float64) (Vec, Place) {
	for _, c := range k.corners {
		if length(sub(c, at)) <= tol {
			at = c
			break
		}
	}
	if k.faceted != nil {
		k.buf = k.faceted.WallsAt(at, tol, k.buf[:0])
	} else {
		k.buf = k.solid.WallsAt(at, tol, k.buf[:0])
	}
	for _, w := range k.buf {
		for _, axis := range [3]struct{ n, x *float64 }{{&w.N.X, &at.X}, {&w.N.Y, &at.Y}, {&w.N.Z, &at.Z}} {
			if math.Abs(*axis.n) == 1 {
				*axis.x = *axis.n * w.D
			}
		}
	}
	return at, placeOf(k.buf)
}

// placeOf tells a wall, an edge and a corner apart by the span of the normals.
func placeOf(walls []solid.Plane) Place {
	if len(walls) == 0 {
		return Inside
	}
	var line Vec // along the edge of two walls
	place := Wall
	for i, w := range walls {
		for _, u := range walls[:i] {
			if place == Wall {
				if n := cross(u.N, w.N); length(n) > 1e-6 {
					line, place = scale(1/length(n), n), Edge
				}
			}
		}
		if place == Edge && math.Abs(dot(line, w.N)) > 1e-6 {
			return Corner
		}
	}
	return place
}
