package field

import (
	"context"
	"errors"
	"math"
	"slices"

	"nearcell/voronoi/delaunay"
	"nearcell/voronoi/predicate"
	"nearcell/voronoi/solid"
)

// zone is what a place would change in the tetrahedralisation: the tetrahedra whose
// spheres hold it (Bowyer 1981, Watson 1981). All natural neighbours of the place are
// their corners, and what its cell takes from each of them is a convex polyhedron between
// two kinds of vertices: the centres of these tetrahedra, inside the cell, and the centres
// of those that the place makes with the facets around them, on its surface. So the parts
// need no cuts by planes. Each is added up as cones from one of its own vertices, so that
// all terms are positive, as those of cut parts are: nothing cancels where a part is small
// (unlike in Watson's sum of signed simplices).
//
// Places are seen from the place itself, in the coordinates of the tetrahedralisation.
// Everything is taken in the order of the sites, never in that in which tetrahedra are
// stored, so that the bits do not depend on how they were built.
type zone struct {
	tets   []zoneTet
	facets []zoneFacet
	sites  []int32 // corners, ascending
	at     []Vec   // of sites
	apex   []Vec   // of each part: its least vertex on the surface of the cell
	volume []float64
	face   []float64 // of the cell towards each site: its area
	edges  []zoneEdge
	order  []uint64
	points []int32 // corners as they are found; then the ranks of these
	place  []Vec   // of these
	number table   // of tetrahedra: their index in tets
	vertex table   // of points: their index in points
	reach  float64
	touch  []uint64 // see link: of each rank, a bit for each rank
	words  int
}

// zoneTet is a tetrahedron whose sphere holds the place.
type zoneTet struct {
	id     int32
	corner [4]int32 // indices in zone.points, then ranks: indices in zone.sites
	behind [4]int32 // over the face opposite each corner: an index in tets, or ^ one in facets
	centre Vec
	done   uint8 // edges that are added up
}

// zoneFacet is a face of the zone, and the vertex of the cell that it gives.
type zoneFacet struct {
	corner [3]int32
	centre Vec
}

// zoneEdge is the face between two parts.
type zoneEdge struct {
	a, b   int32 // ranks, a < b
	normal Vec   // its area times two, from a to b
	first  Vec   // one of its corners
	// Where the edge lies on the surface of the zone, the face ends on the cell's.
	open     bool
	from, to Vec
}

// What of the zone is known.
type zoneState int8

const (
	zoneNone  zoneState = iota // nothing: the cell is unbounded, or too much so to tell
	zoneEdges                  // which cells touch, but not what is taken
	zoneWhole                  // the parts, all of them in the solid
)

// The reach of a cell, in distances of its farthest neighbour, up to which its corners
// are good; and how well two ways to its volume must agree.
const (
	goodReach = 32
	goodSum   = 1e-9
)

// Prepare tells how many places will be asked about, and builds the tetrahedralisation
// where it pays: with it estimates by Sibson and Laplace take a tenth of the time. Where
// it would take more than the diagram's memory they do without. The last bits of weights
// may differ between the two ways. It must not run while the field is asked.
func (f *Field) Prepare(ctx context.Context, places int) error {
	if f.ready || f.o.Method > Laplace || f.facts.Dimension != 3 || f.facts.Distinct < 5 {
		return nil
	}
	if f.facts.Distinct > alwaysBuilt && f.facts.Distinct > places*sitesAPlace {
		return nil
	}
	err := f.needHull(ctx)
	var memory *delaunay.MemoryError
	if errors.As(err, &memory) {
		return nil
	}
	f.ready = err == nil
	return err
}

// The tetrahedralisation takes about 1.5 µs a site; without it a place takes some 90 µs
// more.
const (
	alwaysBuilt = 5000
	sitesAPlace = 40
)

// find collects the zone of p, next to the site nearest to it, and says what is known
// of it.
func (z *zone) find(t *delaunay.T, p Vec, near int32) zoneState {
	z.tets, z.facets, z.points, z.place = z.tets[:0], z.facets[:0], z.points[:0], z.place[:0]
	z.sites = z.sites[:0]
	first := t.LocateFrom(p, near)
	if first.Tet < 0 || t.IsGhost(first.Tet) {
		return zoneNone
	}
	z.number.clear()
	z.vertex.clear()
	q := zoneTet{id: int32(first.Tet)}
	for k, v := range t.TetPoints(first.Tet) {
		q.corner[k] = z.corner(t, v)
	}
	z.number.put(q.id, 0)
	z.tets = append(z.tets, q)
	for i := 0; i < len(z.tets); i++ {
		for k := range 4 {
			if !z.look(t, p, i, k) {
				return zoneNone
			}
		}
	}
	z.rank(p)
	if !z.centres() {
		return zoneEdges
	}
	return zoneWhole
}

// corner is the index of a point among the corners of the zone.
func (z *zone) corner(t *delaunay.T, point int32) int32 {
	i, ok := z.vertex.get(point)
	if !ok {
		i = int32(len(z.points))
		z.vertex.put(point, i)
		s, at := t.PointPlace(point)
		z.points, z.sites, z.place = append(z.points, point), append(z.sites, s), append(z.place, at)
	}
	return i
}

// look finds what lies over face k of tetrahedron i; false where it is a ghost whose
// sphere, a half-space, holds p or touches it.
func (z *zone) look(t *delaunay.T, p Vec, i, k int) bool {
	n, opposite := t.Neighbor(int(z.tets[i].id), k)
	if j, ok := z.number.get(int32(n)); ok {
		z.tets[i].behind[k] = j
		return true
	}
	c := z.tets[i].corner
	var q [4]Vec
	for m, v := range c {
		q[m] = z.place[v]
	}
	if t.IsGhost(n) {
		q[k] = p
		if predicate.Orient3D(q[0], q[1], q[2], q[3]) <= 0 {
			return false
		}
	} else {
		points := t.TetPoints(n)
		if j, ok := z.vertex.get(points[opposite]); ok {
			q[k] = z.place[j]
		} else {
			_, q[k] = t.PointPlace(points[opposite])
		}
		// Seen from the other side of the face the corners turn the other way.
		x, y := (k+1)&3, (k+2)&3
		q[x], q[y] = q[y], q[x]
		if predicate.InSpherePerturbed(q[0], q[1], q[2], q[3], p) > 0 {
			z.tets[i].behind[k] = z.add(t, n, points, c)
			return true
		}
	}
	z.tets[i].behind[k] = ^int32(len(z.facets))
	z.facets = append(z.facets, zoneFacet{corner: [3]int32{c[(k+1)&3], c[(k+2)&3], c[(k+3)&3]}})
	return true
}

// add adds a tetrahedron, which has all but one of its corners in common with known.
func (z *zone) add(t *delaunay.T, id int, points, known [4]int32) int32 {
	i := int32(len(z.tets))
	q := zoneTet{id: int32(id)}
next:
	for k, v := range points {
		for _, c := range known {
			if z.points[c] == v {
				q.corner[k] = c
				continue next
			}
		}
		q.corner[k] = z.corner(t, v)
	}
	z.tets = append(z.tets, q)
	z.number.put(q.id, i)
	return i
}

// rank puts the sites of the zone in ascending order, and makes corners their ranks.
func (z *zone) rank(p Vec) {
	n := len(z.sites)
	z.order = z.order[:0]
	for i, s := range z.sites {
		z.order = append(z.order, uint64(s)<<32|uint64(i))
	}
	slices.Sort(z.order)
	z.at = slices.Grow(z.at[:0], n)[:n]
	for i, o := range z.order {
		k := uint32(o)
		z.sites[i], z.at[i] = int32(o>>32), sub(z.place[k], p)
		z.points[k] = int32(i) // from here on: the rank
	}
	for i := range z.facets {
		c := &z.facets[i].corner
		c[0], c[1], c[2] = z.points[c[0]], z.points[c[1]], z.points[c[2]]
		slices.Sort(c[:])
	}
	for i := range z.tets {
		c := &z.tets[i].corner
		c[0], c[1], c[2], c[3] = z.points[c[0]], z.points[c[1]], z.points[c[2]], z.points[c[3]]
	}
}

// centres finds all vertices; false where they cannot be told well.
func (z *zone) centres() bool {
	far, reach := 0.0, 0.0
	for _, a := range z.at {
		far = max(far, dot(a, a))
	}
	for i := range z.facets {
		q := &z.facets[i]
		q.centre = centreOf(z.at[q.corner[0]], z.at[q.corner[1]], z.at[q.corner[2]])
		d := dot(q.centre, q.centre)
		if !(d <= goodReach*goodReach*far) {
			return false
		}
		reach = max(reach, d)
	}
	z.reach = math.Sqrt(reach)
	for i := range z.tets {
		q := &z.tets[i]
		c := q.corner
		slices.Sort(c[:])
		a := z.at[c[0]]
		q.centre = add(a, centreOf(sub(z.at[c[1]], a), sub(z.at[c[2]], a), sub(z.at[c[3]], a)))
		// It lies in the cell, so that it is no farther than the corners of this.
		if !(dot(q.centre, q.centre) <= float64(reach*1.0001)) {
			return false
		}
	}
	return true
}

// centreOf is the centre of the sphere through u, v, w and the origin.
func centreOf(u, v, w Vec) Vec {
	vw := cross(v, w)
	h := 0.5 / dot(u, vw)
	n := add(add(scale(dot(u, u), vw), scale(dot(v, v), cross(w, u))), scale(dot(w, w), cross(u, v)))
	return scale(h, n)
}

// inSolid tells whether the cell lies in the solid, p and at being the place in the two
// kinds of coordinates.
func (z *zone) inSolid(f *Field, at Vec) bool {
	if f.body == nil {
		return true
	}
	k := f.d.Stretch()
	if planes := f.planes; planes != nil {
		for i := range z.facets {
			c := z.facets[i].centre
			v := Vec{X: at.X + c.X/k.X, Y: at.Y + c.Y/k.Y, Z: at.Z + c.Z/k.Z}
			for _, q := range planes {
				if !(dot(q.N, v) <= q.D) {
					return false
				}
			}
		}
		return true
	}
	far := z.reach / min(k.X, k.Y, k.Z)
	return f.body.Distance(at) > far*(1+1e-9) && f.body.Side(at, 0) == solid.Inside
}

// What the keys in zone.order hold.
const (
	mostSites = 1 << 20
	mostEdges = 1 << 24
)

// The edges of a tetrahedron and its other two corners: first to second runs to the left
// around the edge, in a positive one.
var edgesOf = [6][4]int8{{0, 1, 2, 3}, {0, 2, 3, 1}, {0, 3, 1, 2}, {1, 2, 0, 3}, {1, 3, 2, 0}, {2, 3, 0, 1}}

// edgeBit is the place of the edge between two corners in edgesOf.
var edgeBit = [4][4]uint8{{0, 0, 1, 2}, {0, 0, 3, 4}, {1, 3, 0, 5}, {2, 4, 5, 0}}

// parts finds what the cell takes from each site, and its faces; false where the two ways
// to its volume do not agree, as they may where sites are far too uneven.
func (z *zone) parts() bool {
	n := len(z.sites)
	if n >= mostSites || 6*len(z.tets) >= mostEdges {
		return false
	}
	z.apex = slices.Grow(z.apex[:0], n)[:n]
	z.volume = slices.Grow(z.volume[:0], n)[:n]
	z.face = slices.Grow(z.face[:0], n)[:n]
	for i := range n {
		z.apex[i], z.volume[i], z.face[i] = Vec{X: math.Inf(1)}, 0, 0
	}
	for i := range z.facets {
		q := &z.facets[i]
		for _, s := range q.corner {
			if predicate.Less(q.centre, z.apex[s]) {
				z.apex[s] = q.centre
			}
		}
	}
	z.edges, z.order = z.edges[:0], z.order[:0]
	for i := range z.tets {
		for k := range edgesOf {
			if z.tets[i].done>>k&1 == 0 {
				z.around(int32(i), k)
			}
		}
	}
	slices.Sort(z.order)
	for _, o := range z.order {
		e := &z.edges[o&(mostEdges-1)]
		z.volume[e.a] += max(0, dot(e.normal, sub(e.first, z.apex[e.a])))
		z.volume[e.b] += max(0, dot(e.normal, sub(z.apex[e.b], e.first)))
		if e.open {
			z.face[e.a] += z.spread(e.a, e)
			z.face[e.b] += z.spread(e.b, e)
		}
	}
	// Volumes are times six, faces times two.
	whole, cones := 0.0, 0.0
	for i := range n {
		whole += z.volume[i]
		cones += float64(z.face[i]*length(z.at[i])) / 2
	}
	return whole > 0 && math.Abs(whole-cones) <= goodSum*whole
}

// spread is twice the triangle between the apex of a part and the edge of the cell at
// which another one begins.
func (z *zone) spread(i int32, e *zoneEdge) float64 {
	return length(cross(sub(e.from, z.apex[i]), sub(e.to, z.apex[i])))
}

// around adds the face between the parts of two sites: it goes around their edge from
// tetrahedron to tetrahedron, to the left seen from the higher rank.
func (z *zone) around(i int32, k int) {
	q := &z.tets[i]
	e := edgesOf[k]
	if q.corner[e[0]] > q.corner[e[1]] {
		e[0], e[1], e[2], e[3] = e[1], e[0], e[3], e[2]
	}
	a, b := q.corner[e[0]], q.corner[e[1]]
	// Back to where the face begins: on the surface of the zone or, where it goes all
	// around, at the tetrahedron with the least corner to its right.
	start, right, left := i, e[2], e[3]
	at, r, l := i, e[2], e[3]
	for {
		n := z.tets[at].behind[l]
		if n < 0 {
			start, right, left = at, r, l
			break
		}
		at, r, l = n, z.cornerOf(n, z.tets[at].corner[r], a, b, true), z.cornerOf(n, z.tets[at].corner[r], a, b, false)
		if at == i {
			break
		}
		if z.tets[at].corner[r] < z.tets[start].corner[right] {
			start, right, left = at, r, l
		}
	}
	z.edges = append(z.edges, zoneEdge{a: a, b: b})
	g := &z.edges[len(z.edges)-1]
	z.order = append(z.order, uint64(a)<<44|uint64(b)<<24|uint64(len(z.edges)-1))
	var last Vec
	if n := z.tets[start].behind[left]; n < 0 {
		g.open = true
		g.first = z.facets[^n].centre
		g.from = g.first
		last = sub(z.tets[start].centre, g.first)
	} else {
		g.first = z.tets[start].centre
	}
	at, r, l = start, right, left
	for {
		t := &z.tets[at]
		x, y := cornerIn(t, a), cornerIn(t, b)
		t.done |= 1 << edgeBit[x][y]
		n := t.behind[r]
		if n < 0 {
			g.to = z.facets[^n].centre
			g.normal = add(g.normal, cross(last, sub(g.to, g.first)))
			return
		}
		if n == start {
			return
		}
		c := t.corner[l]
		at = n
		r, l = z.cornerOf(n, c, a, b, false), z.cornerOf(n, c, a, b, true)
		next := sub(z.tets[at].centre, g.first)
		g.normal = add(g.normal, cross(last, next))
		last = next
	}
}

func cornerIn(t *zoneTet, s int32) int8 {
	for k := range int8(4) {
		if t.corner[k] == s {
			return k
		}
	}
	return -1
}

// cornerOf is the place of corner c in a tetrahedron, or that of the one that is neither
// a nor b nor c.
func (z *zone) cornerOf(n, c, a, b int32, other bool) int8 {
	t := &z.tets[n]
	for k := range int8(4) {
		s := t.corner[k]
		if other && s != a && s != b && s != c || !other && s == c {
			return k
		}
	}
	return -1
}

// weigh gives the weights from the parts, or from the faces, of the zone.
func (z *zone) weigh(m Method, site func(int32) int32, w *Work) {
	for i, s := range z.sites {
		x := z.volume[i]
		if m == Laplace {
			x = z.face[i] / length(z.at[i])
		}
		w.weights = append(w.weights, Weight{site(s), x})
	}
}

// link notes which sites are joined by an edge in the zone. Others have no face in
// common inside the cell of the place, and need not cut each other's parts.
func (z *zone) link() {
	n := len(z.sites)
	z.words = (n + 63) / 64
	z.touch = slices.Grow(z.touch[:0], n*z.words)[:n*z.words]
	clear(z.touch)
	for i := range z.tets {
		c := &z.tets[i].corner
		for _, e := range edgesOf {
			a, b := int(c[e[0]]), int(c[e[1]])
			z.touch[a*z.words+b/64] |= 1 << (b % 64)
			z.touch[b*z.words+a/64] |= 1 << (a % 64)
		}
	}
}

// rankOf is the rank of a site, -1 for none.
func (z *zone) rankOf(site int32) int32 {
	if i, ok := slices.BinarySearch(z.sites, site); ok {
		return int32(i)
	}
	return -1
}

// linked tells whether the parts of two ranks may have a common face.
func (z *zone) linked(a, b int32) bool {
	return a < 0 || b < 0 || z.touch[int(a)*z.words+int(b)/64]>>(b%64)&1 != 0
}

// table finds small numbers by large ones.
type table struct {
	keys   []int32 // key + 1; 0: free
	values []int32
	used   []int32 // slots
}

func (h *table) clear() {
	for _, i := range h.used {
		h.keys[i] = 0
	}
	h.used = h.used[:0]
}

func (h *table) slot(key int32) int32 {
	mask := uint32(len(h.keys) - 1)
	for i := uint32(key) * 0x9e3779b1 >> 7 & mask; ; i = (i + 1) & mask {
		if h.keys[i] == key+1 || h.keys[i] == 0 {
			return int32(i)
		}
	}
}

func (h *table) get(key int32) (int32, bool) {
	if len(h.keys) == 0 {
		return 0, false
	}
	i := h.slot(key)
	return h.values[i], h.keys[i] != 0
}

func (h *table) put(key, value int32) {
	if 2*len(h.used) >= len(h.keys) {
		h.grow()
	}
	i := h.slot(key)
	if h.keys[i] == 0 {
		h.keys[i] = key + 1
		h.used = append(h.used, i)
	}
	h.values[i] = value
}

func (h *table) grow() {
	before := *h
	n := max(256, 2*len(h.keys))
	*h = table{keys: make([]int32, n), values: make([]int32, n)}
	for _, i := range before.used {
		h.put(before.keys[i]-1, before.values[i])
	}
}
