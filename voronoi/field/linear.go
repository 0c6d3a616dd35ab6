package field

import (
	"context"
	"slices"

	"nearcell/voronoi/delaunay"
	"nearcell/voronoi/predicate"
)

// hull is the tetrahedralisation of the sites that take part, built when it is needed.
type hull struct {
	t    *delaunay.T
	site func(int32) int32 // of t's sites: the diagram's
	own  []int32           // of the diagram's sites: t's, -1 for none
}

// needHull builds the tetrahedralisation, once.
func (f *Field) needHull(ctx context.Context) error {
	f.rim.Do(func() {
		f.t, f.site, f.rimErr = f.d.Tetrahedra(ctx)
		if f.rimErr != nil {
			return
		}
		f.own = make([]int32, f.d.Len())
		for i := range f.own {
			f.own[i] = -1
		}
		for i := range int32(f.t.NumSites()) {
			f.own[f.site(i)] = i
		}
	})
	return f.rimErr
}

// linear weighs the corners of the Delaunay tetrahedron that p lies in by its
// barycentric coordinates. near is the site nearest to p.
func (f *Field) linear(p Vec, near int32, w *Work) (Place, []Weight, error) {
	if f.facts.Dimension < 3 {
		return Flat, nil, nil
	}
	local := f.d.Local(p)
	at := f.t.LocateFrom(local, f.own[near])
	if at.Tet < 0 || f.t.IsGhost(at.Tet) {
		return OutsideHull, nil, nil
	}
	corners := f.t.Tet(at.Tet)
	return Between, barycentric(f.t, corners, at.On, local, f.site, w), nil
}

// barycentric are the coordinates of p among the corners of a tetrahedron, those left
// out in whose opposite faces p lies (bits of on). The corners are taken in the order
// of their sites, and on a face, an edge or a corner only those that span it, so that
// the bits do not depend on which of several tetrahedra was found.
func barycentric(t *delaunay.T, corners [4]int32, on uint8, p Vec, site func(int32) int32, w *Work) []Weight {
	w.flat = w.flat[:0]
	for k, c := range corners {
		if on>>k&1 == 0 {
			w.flat = append(w.flat, c)
		}
	}
	slices.SortFunc(w.flat, func(a, b int32) int { return int(site(a) - site(b)) })
	var a [4]Vec
	for k, c := range w.flat {
		a[k] = sub(t.Site(int(c)), p)
	}
	give := func(k int, x float64) {
		w.weights = append(w.weights, Weight{site(w.flat[k]), max(0, x)})
	}
	switch len(w.flat) {
	case 1:
		give(0, 1)
	case 2: // each by the distance to the other
		give(0, length(a[1]))
		give(1, length(a[0]))
	case 3:
		n := cross(sub(a[1], a[0]), sub(a[2], a[0]))
		give(0, dot(n, cross(a[1], a[2])))
		give(1, dot(n, cross(a[2], a[0])))
		give(2, dot(n, cross(a[0], a[1])))
	default:
		s := 1.0
		if predicate.Orient3D(t.Site(int(w.flat[0])), t.Site(int(w.flat[1])), t.Site(int(w.flat[2])), t.Site(int(w.flat[3]))) < 0 {
			s = -1
		}
		give(0, s*dot(a[1], cross(a[2], a[3])))
		give(1, -s*dot(a[0], cross(a[2], a[3])))
		give(2, s*dot(a[0], cross(a[1], a[3])))
		give(3, -s*dot(a[0], cross(a[1], a[2])))
	}
	return w.finish()
}

// linearWithout is linear at the place of a site among the others. The tetrahedra that
// fill the hole that a site leaves are those of its neighbours alone, so that only these
// are made anew.
func (f *Field) linearWithout(ctx context.Context, p Vec, site int32, w *Work) (Place, []Weight, error) {
	if f.facts.Dimension < 3 {
		return Flat, nil, nil
	}
	w.ring = f.t.Neighbours(int(f.own[site]), w.ring[:0])
	sites := make([]Vec, 0, len(w.ring))
	numbers := make([]int32, 0, len(w.ring))
	for _, s := range w.ring {
		if s != delaunay.Ghost {
			numbers = append(numbers, f.site(s))
		}
	}
	slices.Sort(numbers)
	for _, s := range numbers {
		sites = append(sites, f.local(s))
	}
	small, err := delaunay.Build(ctx, sites, delaunay.Options{Threads: 1})
	if err != nil {
		return Between, nil, err
	}
	if small.Dimension() < 3 {
		return OutsideHull, nil, nil
	}
	local := f.d.Local(p)
	at := small.Locate(local)
	if at.Tet < 0 || small.IsGhost(at.Tet) {
		return OutsideHull, nil, nil
	}
	return Between, barycentric(small, small.Tet(at.Tet), at.On, local, func(i int32) int32 { return numbers[i] }, w), nil
}

// InHull tells whether p lies in the convex hull of the sites that take part, its
// surface included; exactly.
func (f *Field) InHull(ctx context.Context, p Vec) (bool, error) {
	p = positive(p)
	local := f.d.Local(p)
	if f.facts.Dimension == 3 {
		if err := f.needHull(ctx); err != nil {
			return false, err
		}
		near, _ := f.d.Nearest(p)
		at := f.t.LocateFrom(local, f.own[near])
		return at.Tet >= 0 && !f.t.IsGhost(at.Tet), nil
	}
	all := f.everyone()
	switch f.facts.Dimension {
	case -1:
		return false, nil
	case 0:
		return f.local(all[0]) == local, nil
	case 1:
		_, _, ok := f.onLine(all, local)
		return ok, nil
	}
	return f.inPlane(all, local) != outer, nil
}

// everyone is one site of each place that takes part.
func (f *Field) everyone() []int32 {
	var all []int32
	skip := map[int32]bool{}
	for _, g := range f.facts.Groups {
		for _, m := range g.Members {
			if m != g.Representative {
				skip[m] = true
			}
		}
	}
	for s := range int32(f.d.Len()) {
		if f.d.TakesPart(s) && !skip[s] {
			all = append(all, s)
		}
	}
	return all
}

// local is the place of a site in the coordinates of the tetrahedralisation.
func (f *Field) local(site int32) Vec { return f.d.Spot(site) }
