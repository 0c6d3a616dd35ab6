package field

import (
	"context"
	"math"
	"slices"

	"gonum.org/v1/gonum/spatial/r2"

	"nearcell/voronoi/delaunay"
	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/predicate"
)

// On the surface of the hull of the sites, and where the sites lie in one plane, the
// cell of a place runs to infinity.
//
// Where all sites lie in one plane, the coordinates are those of the cells in the plane.
// On a face of the hull they are the limit from within. As a place nears the face from
// inside, at a height e, its cell reaches to a depth of the order of 1/e beyond it, where
// all that counts are the sites of the face. Seen from the place, with a site of the face
// at a, the cell ends at 2 y·a + s = |a|², where y goes along the face and s is 2e times
// the depth: a pyramid over the place's cell in the plane, the same for all small e. The
// cells of the sites stand upright in it. So Sibson's weights are what these take of the
// pyramid, and Laplace's are the upright projections of its faces over the distances.
// (The latter are Sibson's in the plane. Each of them is smoother by one order than its
// own kind in the plane.) On an edge of the hull both are the two sites' around.

// side tells where a place lies against a convex polygon.
type side int8

const (
	outer side = iota
	border
	inner
)

// onRim weighs the sites at a place whose cell is unbounded.
func (f *Field) onRim(ctx context.Context, p Vec, self int32, w *Work) (Place, []Weight, error) {
	local := f.d.Local(p)
	switch f.facts.Dimension {
	case 0:
		return OutsideHull, nil, nil // another place than the one of the sites
	case 1:
		return f.along(except(f.everyone(), self), local, w)
	case 2:
		return f.within(except(f.everyone(), self), local, false, w)
	}
	if err := f.needHull(ctx); err != nil {
		return Between, nil, err
	}
	if self >= 0 {
		return f.rimWithout(self, local, w)
	}
	at := f.t.Locate(local)
	if at.Tet < 0 || f.t.IsGhost(at.Tet) {
		return OutsideHull, nil, nil
	}
	for k := range 4 {
		if at.On>>k&1 == 0 {
			continue
		}
		if n, _ := f.t.Neighbor(at.Tet, k); f.t.IsGhost(n) {
			return f.within(f.faceOf(n), local, true, w)
		}
	}
	// On an edge or a corner of the hull that only other tetrahedra have a face at, or
	// inside, so near to the surface that the cell's reach has no digits.
	for _, c := range f.t.Tet(at.Tet) {
		for _, n := range f.t.Star(int(c), nil) {
			if f.t.IsGhost(int(n)) && f.inFacet(int(n), local) {
				return f.within(f.faceOf(int(n)), local, true, w)
			}
		}
	}
	return Between, barycentric(f.t, f.t.Tet(at.Tet), at.On, local, f.site, w), nil
}

// facet is the corners of the hull's facet under a ghost.
func (f *Field) facet(ghost int) (c [3]int32) {
	n := 0
	for _, s := range f.t.Tet(ghost) {
		if s != delaunay.Ghost {
			c[n] = s
			n++
		}
	}
	return c
}

// inFacet tells whether p lies on the facet under a ghost.
func (f *Field) inFacet(ghost int, p Vec) bool {
	c := f.facet(ghost)
	a, b, d := f.t.Site(int(c[0])), f.t.Site(int(c[1])), f.t.Site(int(c[2]))
	if predicate.Orient3D(a, b, d, p) != 0 {
		return false
	}
	flat := flatten(a, b, d)
	q, x, y, z := flat(p), flat(a), flat(b), flat(d)
	s, t, u := predicate.Orient2D(x, y, q), predicate.Orient2D(y, z, q), predicate.Orient2D(z, x, q)
	return s >= 0 && t >= 0 && u >= 0 || s <= 0 && t <= 0 && u <= 0
}

// faceOf lists the sites, as the diagram numbers them, of the face of the hull that the
// facet under a ghost is a part of: all facets in its plane.
func (f *Field) faceOf(ghost int) []int32 {
	c := f.facet(ghost)
	a, b, d := f.t.Site(int(c[0])), f.t.Site(int(c[1])), f.t.Site(int(c[2]))
	seen := map[int]bool{ghost: true}
	list := []int{ghost}
	var sites []int32
	for head := 0; head < len(list); head++ {
		for k, s := range f.t.Tet(list[head]) {
			if s == delaunay.Ghost {
				continue
			}
			sites = append(sites, f.site(s))
			n, _ := f.t.Neighbor(list[head], k)
			if seen[n] || !f.t.IsGhost(n) {
				continue
			}
			e := f.facet(n)
			if f.flatWith(a, b, d, e) {
				seen[n] = true
				list = append(list, n)
			}
		}
	}
	slices.Sort(sites)
	return slices.Compact(sites)
}

func (f *Field) flatWith(a, b, d Vec, corners [3]int32) bool {
	for _, s := range corners {
		if predicate.Orient3D(a, b, d, f.t.Site(int(s))) != 0 {
			return false
		}
	}
	return true
}

// rimWithout weighs the others at the place of a site whose cell is unbounded. Within a
// face of the hull or on an edge of it the others reach around the site; at a corner
// it lies outside their hull.
func (f *Field) rimWithout(self int32, p Vec, w *Work) (Place, []Weight, error) {
	var planes []int // a ghost of each plane
	for _, n := range f.t.Star(int(f.own[self]), nil) {
		if !f.t.IsGhost(int(n)) {
			continue
		}
		c := f.facet(int(n))
		known := slices.ContainsFunc(planes, func(m int) bool {
			e := f.facet(m)
			return f.flatWith(f.t.Site(int(e[0])), f.t.Site(int(e[1])), f.t.Site(int(e[2])), c)
		})
		if !known {
			planes = append(planes, int(n))
		}
	}
	switch len(planes) {
	case 1:
		return f.within(except(f.faceOf(planes[0]), self), p, true, w)
	case 2: // sites of both faces lie on their common edge
		var both []int32
		second := f.faceOf(planes[1])
		for _, s := range except(f.faceOf(planes[0]), self) {
			if slices.Contains(second, s) {
				both = append(both, s)
			}
		}
		return f.along(both, p, w)
	}
	return OutsideHull, nil, nil
}

func except(sites []int32, self int32) []int32 {
	return slices.DeleteFunc(sites, func(s int32) bool { return s == self })
}

// along weighs the two sites on one line with p that it lies between, by the distance
// to the other.
func (f *Field) along(sites []int32, p Vec, w *Work) (Place, []Weight, error) {
	a, b, ok := f.onLine(sites, p)
	if !ok {
		return OutsideHull, nil, nil
	}
	x, y := length(sub(f.local(a), p)), length(sub(f.local(b), p))
	w.weights = append(w.weights, Weight{a, y}, Weight{b, x})
	return Between, w.finish(), nil
}

// onLine finds, among sites on one line, the two nearest to p on its both sides; ok is
// false where p is not on the line, or beyond its ends. At a site both are this site.
func (f *Field) onLine(sites []int32, p Vec) (before, after int32, ok bool) {
	if len(sites) < 2 {
		return -1, -1, false
	}
	a, b := f.local(sites[0]), f.local(sites[1])
	if !collinear(a, b, p) {
		return -1, -1, false
	}
	key := func(v Vec) float64 { return v.X }
	if d := sub(b, a); math.Abs(d.Y) >= max(math.Abs(d.X), math.Abs(d.Z)) {
		key = func(v Vec) float64 { return v.Y }
	} else if math.Abs(d.Z) > max(math.Abs(d.X), math.Abs(d.Y)) {
		key = func(v Vec) float64 { return v.Z }
	}
	lo, hi := math.Inf(-1), math.Inf(1)
	before, after = -1, -1
	for _, s := range sites {
		x := key(f.local(s))
		if x <= key(p) && x > lo {
			lo, before = x, s
		}
		if x >= key(p) && x < hi {
			hi, after = x, s
		}
	}
	return before, after, before >= 0 && after >= 0
}

// collinear is exact: three points are on a line if they are in all three projections
// along the axes.
func collinear(a, b, c Vec) bool {
	return predicate.Orient2D(r2.Vec{X: a.X, Y: a.Y}, r2.Vec{X: b.X, Y: b.Y}, r2.Vec{X: c.X, Y: c.Y}) == 0 &&
		predicate.Orient2D(r2.Vec{X: a.Y, Y: a.Z}, r2.Vec{X: b.Y, Y: b.Z}, r2.Vec{X: c.Y, Y: c.Z}) == 0 &&
		predicate.Orient2D(r2.Vec{X: a.Z, Y: a.X}, r2.Vec{X: b.Z, Y: b.X}, r2.Vec{X: c.Z, Y: c.X}) == 0
}

// flatten drops the axis along which the plane of three points is seen widest, which
// keeps all exact questions in it answerable.
func flatten(a, b, c Vec) func(Vec) r2.Vec {
	n := cross(sub(b, a), sub(c, a))
	x, y, z := math.Abs(n.X), math.Abs(n.Y), math.Abs(n.Z)
	switch {
	case z >= x && z >= y:
		return func(v Vec) r2.Vec { return r2.Vec{X: v.X, Y: v.Y} }
	case x >= y:
		return func(v Vec) r2.Vec { return r2.Vec{X: v.Y, Y: v.Z} }
	}
	return func(v Vec) r2.Vec { return r2.Vec{X: v.Z, Y: v.X} }
}

// span finds three of the sites that are not on one line.
func (f *Field) span(sites []int32) (a, b, c Vec, ok bool) {
	if len(sites) < 3 {
		return
	}
	a, b = f.local(sites[0]), f.local(sites[1])
	for _, s := range sites[2:] {
		if c = f.local(s); !collinear(a, b, c) {
			return a, b, c, true
		}
	}
	return
}

// inPlane tells where p lies against the hull of sites in one plane.
func (f *Field) inPlane(sites []int32, p Vec) side {
	a, b, c, ok := f.span(sites)
	if !ok {
		if _, _, on := f.onLine(sites, p); on {
			return border
		}
		return outer
	}
	if predicate.Orient3D(a, b, c, p) != 0 {
		return outer
	}
	flat := flatten(a, b, c)
	q := flat(p)
	ring := f.ringOf(sites, flat)
	where := inner
	for i := range ring {
		switch s := predicate.Orient2D(flat(f.local(ring[i])), flat(f.local(ring[(i+1)%len(ring)])), q); {
		case s < 0:
			return outer
		case s == 0:
			where = border
		}
	}
	return where
}

// ringOf is the convex hull of sites in one plane, counter-clockwise (Andrew 1979).
func (f *Field) ringOf(sites []int32, flat func(Vec) r2.Vec) []int32 {
	list := slices.Clone(sites)
	slices.SortFunc(list, func(s, t int32) int {
		a, b := flat(f.local(s)), flat(f.local(t))
		switch {
		case a.X < b.X || a.X == b.X && a.Y < b.Y:
			return -1
		case a == b:
			return 0
		}
		return 1
	})
	half := func(order []int32) []int32 {
		var h []int32
		for _, s := range order {
			for len(h) >= 2 && predicate.Orient2D(flat(f.local(h[len(h)-2])), flat(f.local(h[len(h)-1])), flat(f.local(s))) <= 0 {
				h = h[:len(h)-1]
			}
			h = append(h, s)
		}
		return h[:len(h)-1]
	}
	lower := half(list)
	slices.Reverse(list)
	return append(lower, half(list)...)
}

// within weighs sites in one plane at a place in it: by their cells in the plane or,
// where the plane is a face of the hull, as from within.
func (f *Field) within(sites []int32, p Vec, ofHull bool, w *Work) (Place, []Weight, error) {
	switch f.inPlane(sites, p) {
	case outer:
		return OutsideHull, nil, nil
	case border:
		return f.along(f.edgeWith(sites, p), p, w)
	}
	unit, ok := f.raise(sites, p, ofHull, w)
	if !ok {
		return OutsideHull, nil, nil
	}
	w.around = w.around[:0]
	for i := range w.cell.NumFaces() {
		label, _ := w.cell.Face(i)
		if label < 0 || !w.cell.Counts(i) {
			continue
		}
		a := w.cell.FaceArea(i)
		upright := sub(a, scale(dot(a, unit), unit))
		w.around = append(w.around, neighbour{label, sub(f.local(label), p), length(upright), -1})
	}
	// The cell is in the coordinates in which distances are plain.
	w.tied = false
	w.metric = plain
	return f.weigh(p, true, w)
}

// edgeWith lists those of the sites that lie on one line with p on the border of their
// hull.
func (f *Field) edgeWith(sites []int32, p Vec) []int32 {
	a, b, c, ok := f.span(sites)
	if !ok {
		return sites
	}
	flat := flatten(a, b, c)
	q := flat(p)
	ring := f.ringOf(sites, flat)
	for i := range ring {
		u, v := flat(f.local(ring[i])), flat(f.local(ring[(i+1)%len(ring)]))
		if predicate.Orient2D(u, v, q) != 0 {
			continue
		}
		var on []int32
		for _, s := range sites {
			if predicate.Orient2D(u, v, flat(f.local(s))) == 0 {
				on = append(on, s)
			}
		}
		return on
	}
	return nil
}

// raise makes w.cell what stands over the cell of p among sites in one plane with it: a
// prism, whose volumes are in the ratio of areas in the plane, or the pyramid of a place
// on a face of the hull. It is false where the cell does not close. unit stands upright on
// the plane.
func (f *Field) raise(sites []int32, p Vec, pyramid bool, w *Work) (unit Vec, ok bool) {
	a, b, c, _ := f.span(sites)
	n := cross(sub(b, a), sub(c, a))
	unit = scale(1/length(n), n)
	near, far := math.Inf(1), 0.0
	for _, s := range sites {
		d := length(sub(f.local(s), p))
		near, far = min(near, d), max(far, d)
	}
	lean := Vec{}
	if pyramid { // s is counted so that the pyramid is about as high as it is wide
		lean = scale(near/2, unit)
	}
	o := polyhedron.Open
	for _, size := range []float64{4 * far, 0x1p20 * far} {
		w.cell.SetFarBox(size, polyhedron.Open, false)
		if size == 4*far {
			w.cell.SetBox(Vec{X: -size, Y: -size, Z: -size}, Vec{X: size, Y: size, Z: size}, [6]int32{o, o, o, o, o, o})
		}
		w.cell.Clip(scale(-1, unit), 0, polyhedron.Wall(1))
		if !pyramid {
			w.cell.Clip(unit, near, polyhedron.Wall(0))
		}
		for _, s := range sites {
			q := sub(f.local(s), p)
			w.cell.Clip(add(q, lean), dot(q, q)/2, s)
		}
		if !w.cell.IsOpen() {
			return unit, true
		}
	}
	return unit, false
}
