package delaunay

import (
	"iter"
	"math"

	"gonum.org/v1/gonum/spatial/r3"

	"nearcell/voronoi/predicate"
)

// Ghost is the site number of the vertex at infinity.
const Ghost = -1

// Dimension is that of the sites' affine hull: 3 in general, 2 for sites in one
// plane, 1 on one line, 0 in one place and -1 without sites. Below 3 there are no
// tetrahedra.
func (t *T) Dimension() int { return t.dimension }

// NumSites is the number of sites that were given or inserted, removed ones included.
func (t *T) NumSites() int { return len(t.place) }

// NumVertices is the number of distinct places of sites.
func (t *T) NumVertices() int { return len(t.place) - len(t.repeats) - t.removed }

// NumTets is the number of real tetrahedra; their numbers are 0 to NumTets()-1.
func (t *T) NumTets() int { return t.real }

// NumGhosts is the number of ghosts, one a facet of the convex hull; their numbers
// follow those of the real tetrahedra.
func (t *T) NumGhosts() int { return len(t.tets) - t.real }

// Site returns the coordinates of a site.
func (t *T) Site(s int) r3.Vec { return r3.Vec{X: t.sites[3*s], Y: t.sites[3*s+1], Z: t.sites[3*s+2]} }

// Representative returns the lowest of the sites in the same place as s, which is the
// one that tetrahedra name, or -1 when s was removed.
func (t *T) Representative(s int) int {
	p := t.place[s]
	if p == 0 {
		return -1
	}
	return int(t.order[p-1])
}

// Repeats lists the sites that coincide with one of a lower number, ascending.
func (t *T) Repeats() []int32 { return append([]int32(nil), t.repeats...) }

// siteOf turns a point into its site, the ghost into Ghost.
func (t *T) siteOf(p int32) int32 {
	if p == 0 {
		return Ghost
	}
	return int32(t.order[p-1])
}

// Tet returns the sites at the corners of a tetrahedron. A real one is positive:
// det(b-a, c-a, d-a) > 0. A ghost has Ghost as a corner; a place strictly outside its
// facet, put there, would make it positive.
func (t *T) Tet(i int) [4]int32 {
	v := &t.tets[i].v
	return [4]int32{t.siteOf(v[0]), t.siteOf(v[1]), t.siteOf(v[2]), t.siteOf(v[3])}
}

// IsGhost reports whether i is a ghost.
func (t *T) IsGhost(i int) bool { return i >= t.real }

// Neighbor returns the tetrahedron over the face opposite corner k, and which of its
// corners lies opposite that face.
func (t *T) Neighbor(i, k int) (tet, corner int) {
	r := t.tets[i].n[k]
	return int(r >> 2), int(r & 3)
}

// Points are the vertices in the order of insertion, from 1; 0 is the ghost. Near
// points have near numbers, so that a pass over all tetrahedra stays in the cache.

// NumPoints is the highest point number; some may be no vertex, see PointSite.
func (t *T) NumPoints() int { return len(t.pts) - 1 }

// TetPoints is Tet with points for sites.
func (t *T) TetPoints(i int) [4]int32 { return t.tets[i].v }

// PointSite returns the site of a point, or -1 for the ghost and for a point that is
// no vertex (a repeated or removed site).
func (t *T) PointSite(p int32) int {
	if p == 0 || t.pts[p].tet == noTet {
		return -1
	}
	return int(t.order[p-1])
}

// SitePoint returns the point of a site, 0 when the site was removed.
func (t *T) SitePoint(s int) int32 { return t.place[s] }

// Hull goes over the facets of the convex hull: the ghost and its three sites,
// counter-clockwise seen from outside.
func (t *T) Hull() iter.Seq2[int, [3]int32] {
	return func(yield func(int, [3]int32) bool) {
		for i := t.real; i < len(t.tets); i++ {
			v := &t.tets[i].v
			f := &faceOf[ghostIn(v)]
			// With x outside, (x, face) is positive: seen from x it turns clockwise.
			if !yield(i, [3]int32{t.siteOf(v[f[0]]), t.siteOf(v[f[2]]), t.siteOf(v[f[1]])}) {
				return
			}
		}
	}
}

// VertexTet returns a real tetrahedron at a site, or -1 when there is none (the
// dimension is below 3, or the site was removed).
func (t *T) VertexTet(s int) int {
	p := t.place[s]
	if p == 0 || t.pts[p].tet == noTet {
		return -1
	}
	i := t.pts[p].tet
	if int(i) >= t.real {
		q := &t.tets[i]
		i = q.n[ghostIn(&q.v)] >> 2
	}
	return int(i)
}

// Star appends to buf the tetrahedra at a site, ghosts included.
func (t *T) Star(s int, buf []int32) []int32 {
	p := t.place[s]
	if p == 0 {
		return buf
	}
	return t.star(p, buf)
}

func (t *T) star(p int32, buf []int32) []int32 {
	if t.pts[p].tet == noTet {
		return buf
	}
	begin := len(buf)
	buf = append(buf, int32(t.pts[p].tet))
	var seen map[int32]bool
	for head := begin; head < len(buf); head++ {
		q := &t.tets[buf[head]]
		for k, r := range q.n {
			next := int32(r >> 2)
			if q.v[k] == p || has(buf[begin:], seen, next) {
				continue
			}
			buf = append(buf, next)
			if seen != nil {
				seen[next] = true
			} else if len(buf)-begin > 128 {
				seen = make(map[int32]bool)
				for _, i := range buf[begin:] {
					seen[i] = true
				}
			}
		}
	}
	return buf
}

func has(list []int32, seen map[int32]bool, x int32) bool {
	if seen != nil {
		return seen[x]
	}
	for _, y := range list {
		if y == x {
			return true
		}
	}
	return false
}

// Neighbours appends to buf the sites joined to s by an edge, Ghost among them when s
// lies on the convex hull. Edges of cospherical sites may have a contact of area 0.
func (t *T) Neighbours(s int, buf []int32) []int32 {
	p := t.place[s]
	if p == 0 {
		return buf
	}
	begin := len(buf)
	for _, q := range t.linkPoints(p, nil) {
		buf = append(buf, t.siteOf(q))
	}
	sortInts(buf[begin:])
	return buf
}

// linkPoints appends the points that share a tetrahedron with p, each once.
func (t *T) linkPoints(p int32, buf []int32) []int32 {
	begin := len(buf)
	for _, i := range t.star(p, nil) {
		for _, q := range t.tets[i].v {
			if q != p {
				buf = append(buf, q)
			}
		}
	}
	sortInts(buf[begin:])
	n := begin
	for i := begin; i < len(buf); i++ {
		if i == begin || buf[i] != buf[i-1] {
			buf[n] = buf[i]
			n++
		}
	}
	return buf[:n]
}

// Circumsphere returns centre and squared radius of a real tetrahedron's sphere,
// rounded; for a flat tetrahedron they may be far off or not finite.
func (t *T) Circumsphere(i int) (centre r3.Vec, radius2 float64) {
	s := t.Tet(i)
	a := t.Site(int(s[0]))
	u, v, w := r3.Sub(t.Site(int(s[1])), a), r3.Sub(t.Site(int(s[2])), a), r3.Sub(t.Site(int(s[3])), a)
	n := r3.Add(r3.Add(r3.Scale(r3.Norm2(u), r3.Cross(v, w)), r3.Scale(r3.Norm2(v), r3.Cross(w, u))),
		r3.Scale(r3.Norm2(w), r3.Cross(u, v)))
	o := r3.Scale(0.5/r3.Dot(u, r3.Cross(v, w)), n)
	return r3.Add(a, o), r3.Norm2(o)
}

// Location says where a place lies.
type Location struct {
	// Tet holds the place, on its border perhaps; a ghost when the place is
	// strictly outside the convex hull, beyond that ghost's facet. -1: the
	// dimension is below 3, or the place is not finite.
	Tet int
	// On has bit k set when the place lies in the plane of the face opposite
	// corner k: one bit on a face, two on an edge, three on a corner. It is 0 for a
	// ghost.
	On uint8
}

func finite(p r3.Vec) bool {
	return (p.X-p.X)+(p.Y-p.Y)+(p.Z-p.Z) == 0 // NaN for NaN and infinities
}

// Locate finds the tetrahedron of a place, exactly. Which one is found for a place
// that several share depends on their numbering.
func (t *T) Locate(p r3.Vec) Location {
	if t.dimension < 3 || !finite(p) {
		return Location{Tet: -1}
	}
	return t.walk(p, t.startNear(p))
}

// LocateFrom is Locate for a place whose nearest site, or one near to it, is known: the
// way from there is short.
func (t *T) LocateFrom(p r3.Vec, site int32) Location {
	if t.dimension < 3 || !finite(p) {
		return Location{Tet: -1}
	}
	if i := t.VertexTet(int(site)); i >= 0 {
		return t.walk(p, uint32(i))
	}
	return t.walk(p, t.startNear(p))
}

func (t *T) walk(p r3.Vec, cur uint32) Location {
	came := uint32(noTet)
	for {
		if int(cur) >= t.real {
			return Location{Tet: int(cur)}
		}
		q := &t.tets[cur]
		var corner [4]r3.Vec
		for k, v := range q.v {
			corner[k] = t.Site(int(t.order[v-1]))
		}
		on := uint8(0)
		next := uint32(noTet)
		for k := range 4 {
			if q.n[k] == came {
				continue // p was found to be on this side
			}
			c := corner
			c[k] = p
			o := predicate.Orient3D(c[0], c[1], c[2], c[3])
			if o < 0 {
				next = q.n[k]
				came = cur<<2 | uint32(k)
				break
			}
			if o == 0 {
				on |= 1 << k
			}
		}
		if next == noTet {
			return Location{Tet: int(cur), On: on}
		}
		cur = next >> 2
	}
}

// startNear returns a real tetrahedron at the nearest of a few points: about the
// fourth root of their number, spread over the order of insertion.
func (t *T) startNear(p r3.Vec) uint32 {
	n := len(t.pts) - 1
	samples := 2 + int(math.Sqrt(math.Sqrt(float64(n))))
	best, least := uint32(0), math.Inf(1)
	for i := range samples {
		q := 1 + n*i/samples
		if t.pts[q].tet == noTet {
			continue
		}
		if d := r3.Norm2(r3.Sub(t.Site(int(t.order[q-1])), p)); d < least {
			best, least = t.pts[q].tet, d
		}
	}
	if int(best) >= t.real {
		q := &t.tets[best]
		best = q.n[ghostIn(&q.v)] >> 2
	}
	return best
}

// NearestSite returns the site nearest to p, the lowest of those equally near, or -1
// when there is none or p is not finite. Distances are compared exactly.
func (t *T) NearestSite(p r3.Vec) int {
	if !finite(p) {
		return -1
	}
	if t.dimension < 3 {
		return t.nearestOfAll(p)
	}
	// Among the vertices of a Delaunay tetrahedralisation one that is not the
	// nearest has a neighbour that is nearer.
	at := t.Locate(p)
	var best int32
	for _, v := range t.tets[at.Tet].v {
		if v != 0 && (best == 0 || t.compare(p, v, best) < 0) {
			best = v
		}
	}
	var link []int32
	for from := int32(0); from != best; {
		from = best
		link = t.linkPoints(from, link[:0])
		for _, v := range link {
			if v != 0 && t.compare(p, v, best) < 0 {
				best = v
			}
		}
	}
	return t.lowestAsNear(p, best)
}

// lowestAsNear returns the lowest site among the points as near as best; these are
// connected by edges, since the sphere through them around p is empty.
func (t *T) lowestAsNear(p r3.Vec, best int32) int {
	lowest := int(t.order[best-1])
	equal := []int32{best}
	for head := 0; head < len(equal); head++ {
		for _, v := range t.linkPoints(equal[head], nil) {
			if v != 0 && !has(equal, nil, v) && t.compare(p, v, best) == 0 {
				equal = append(equal, v)
				lowest = min(lowest, int(t.order[v-1]))
			}
		}
	}
	return lowest
}

func (t *T) nearestOfAll(p r3.Vec) int {
	best := int32(0)
	for s, q := range t.place {
		if q != 0 && int(t.order[q-1]) == s && (best == 0 || t.compare(p, q, best) < 0) {
			best = q
		}
	}
	if best == 0 {
		return -1
	}
	return int(t.order[best-1])
}

// compare tells which of two points is nearer to x: -1 for p, 1 for q, 0 for neither.
func (t *T) compare(x r3.Vec, p, q int32) int {
	a, b := t.Site(int(t.order[p-1])), t.Site(int(t.order[q-1]))
	d, e := r3.Norm2(r3.Sub(a, x)), r3.Norm2(r3.Sub(b, x))
	if sum := d + e; sum > 1e-280 && sum < 1e280 && math.Abs(d-e) > 1e-14*sum {
		return signOf(d - e)
	}
	return predicate.SideOfBisector(a, b, x)
}
