package delaunay

import (
	"errors"
	"fmt"
	"math"
	"slices"
)

// Arrays are a tetrahedralisation as flat arrays, to be stored or handed on. They do
// not depend on the order of insertion or the number of threads.
type Arrays struct {
	Sites     []float64 // x, y, z of every site
	Dimension int
	// Corners holds four sites a tetrahedron, Ghost for the vertex at infinity: the
	// real ones first, both parts in ascending order of their sorted corners. Within
	// a tetrahedron corners ascend (a ghost's Ghost comes first), but for the last
	// two, which change places where that makes it positive.
	Corners []int32
	// Neighbours holds 4*t+k for the tetrahedron t over the face opposite each
	// corner, and t's corner k opposite that face.
	Neighbours []uint32
	Real       int     // number of real tetrahedra
	Repeats    []int32 // pairs: a site and the lower one in the same place
	Removed    []int32 // sites that were removed, ascending
}

// Arrays returns t as flat arrays. The slices are new, but for Sites, which is shared.
func (t *T) Arrays() *Arrays {
	a := &Arrays{Sites: t.sites, Dimension: t.dimension, Real: t.real}
	for s, p := range t.place {
		if p == 0 {
			a.Removed = append(a.Removed, int32(s))
		}
	}
	for _, s := range t.repeats {
		a.Repeats = append(a.Repeats, s, int32(t.Representative(int(s))))
	}
	list, number := t.canonicalOrder()
	a.Corners = make([]int32, 4*len(list))
	a.Neighbours = make([]uint32, 4*len(list))
	for i, old := range list {
		c := t.Tet(int(old))
		slots := canonicalSlots(c)
		for k, slot := range slots {
			a.Corners[4*i+k] = c[slot]
			r := t.tets[old].n[slot]
			other := canonicalSlots(t.Tet(int(r >> 2)))
			at := slices.Index(other[:], uint8(r&3))
			a.Neighbours[4*i+k] = number[r>>2]<<2 | uint32(at)
		}
	}
	return a
}

// Renumber gives the tetrahedra the numbers and corners the order that they have in
// Arrays, which depend on the sites alone. It takes as much memory again for a while.
func (t *T) Renumber() {
	t.own()
	list, number := t.canonicalOrder()
	tets := make([]tet, len(list))
	for i, old := range list {
		from, to := &t.tets[old], &tets[i]
		slots := canonicalSlots(t.Tet(int(old)))
		*to = *from
		for k, slot := range slots {
			r := from.n[slot]
			other := canonicalSlots(t.Tet(int(r >> 2)))
			to.v[k] = from.v[slot]
			to.n[k] = number[r>>2]<<2 | uint32(slices.Index(other[:], uint8(r&3)))
		}
	}
	t.tets = tets
	for p := range t.pts {
		if q := &t.pts[p]; q.tet != noTet {
			q.tet = number[q.tet]
		}
	}
	// The incident tetrahedron of a vertex must not depend on the history either.
	for i := len(tets) - 1; i >= 0; i-- {
		for _, v := range tets[i].v {
			t.pts[v].tet = uint32(i)
		}
	}
}

// canonicalSlots returns the order of corners described at Arrays.
func canonicalSlots(c [4]int32) (slots [4]uint8) {
	slots = [4]uint8{0, 1, 2, 3}
	odd := false
	for i := 1; i < 4; i++ {
		for j := i; j > 0 && c[slots[j]] < c[slots[j-1]]; j-- {
			slots[j], slots[j-1] = slots[j-1], slots[j]
			odd = !odd
		}
	}
	if odd {
		slots[2], slots[3] = slots[3], slots[2]
	}
	return slots
}

// canonicalOrder lists the tetrahedra in the order described at Arrays, and the
// place of each in it.
func (t *T) canonicalOrder() (list, number []uint32) {
	list = make([]uint32, len(t.tets))
	// Count by lowest site, then sort the few with the same.
	sortPart := func(lo, hi int) {
		lowest := func(i int) int32 {
			c := t.Tet(i)
			return min(c[0], c[1], c[2], c[3]) + 1
		}
		start := make([]uint32, len(t.place)+2)
		for i := lo; i < hi; i++ {
			start[lowest(i)+1]++
		}
		for s := 1; s < len(start); s++ {
			start[s] += start[s-1]
		}
		at := slices.Clone(start)
		for i := lo; i < hi; i++ {
			s := lowest(i)
			list[lo+int(at[s])] = uint32(i)
			at[s]++
		}
		for s := 0; s+1 < len(start); s++ {
			if part := list[lo+int(start[s]) : lo+int(start[s+1])]; len(part) > 1 {
				slices.SortFunc(part, func(a, b uint32) int {
					return compareCorners(t.Tet(int(a)), t.Tet(int(b)))
				})
			}
		}
	}
	sortPart(0, t.real)
	sortPart(t.real, len(t.tets))
	number = make([]uint32, len(list))
	for i, old := range list {
		number[old] = uint32(i)
	}
	return list, number
}

func compareCorners(a, b [4]int32) int {
	slices.Sort(a[:])
	slices.Sort(b[:])
	return slices.Compare(a[:], b[:])
}

// FromArrays makes a tetrahedralisation of arrays, which may come from anywhere: it
// returns an error unless they pass every check of Validate.
func FromArrays(a *Arrays) (*T, error) {
	n := len(a.Sites) / 3
	switch {
	case len(a.Sites)%3 != 0:
		return nil, ErrShape
	case n > mostSites:
		return nil, ErrTooMany
	case len(a.Corners)%4 != 0 || len(a.Neighbours) != len(a.Corners) || a.Real < 0 || a.Real > len(a.Corners)/4,
		a.Dimension < -1 || a.Dimension > 3, len(a.Repeats)%2 != 0:
		return nil, errors.New("delaunay: arrays whose lengths do not fit")
	}
	f, bad := newFrame(a.Sites, 1)
	if bad >= 0 {
		return nil, &CoordinateError{bad}
	}
	t := &T{mesh: mesh{frame: f, sites: a.Sites}, dimension: a.Dimension, real: a.Real}
	t.setLimits()
	if err := t.placeSites(a, n); err != nil {
		return nil, err
	}
	if err := t.takeTets(a); err != nil {
		return nil, err
	}
	if err := t.Validate(); err != nil {
		return nil, err
	}
	return t, t.validatePlaces()
}

// placeSites makes a point of every site.
func (t *T) placeSites(a *Arrays, n int) error {
	t.order = make([]uint32, n)
	t.place = make([]int32, n)
	t.pts = make([]point, n+1)
	for s := range n {
		t.order[s], t.place[s] = uint32(s), int32(s+1)
		x, y, z := t.frame.internal(t.sites, s)
		t.pts[s+1] = point{x: x, y: y, z: z, tet: noTet}
	}
	last := int32(-1)
	for i := 0; i < len(a.Repeats); i += 2 {
		s, r := a.Repeats[i], a.Repeats[i+1]
		if s <= last || int(s) >= n || r < 0 || r >= s {
			return fmt.Errorf("delaunay: repeat %d of %d", s, r)
		}
		last = s
		t.place[s] = r + 1
		t.repeats = append(t.repeats, s)
	}
	for _, s := range a.Removed {
		if s < 0 || int(s) >= n || t.place[s] != s+1 {
			return fmt.Errorf("delaunay: removed site %d", s)
		}
		t.place[s] = 0
		t.removed++
	}
	for _, s := range t.repeats {
		if r := t.place[s]; t.place[r-1] != r {
			return fmt.Errorf("delaunay: site %d repeats %d, which is no vertex", s, r-1)
		}
	}
	return nil
}

func (t *T) takeTets(a *Arrays) error {
	count := len(a.Corners) / 4
	t.tets = make([]tet, count)
	t.used, t.ghosts = int64(count), count-a.Real
	for i := range t.tets {
		q := &t.tets[i]
		for k := range 4 {
			c, r := a.Corners[4*i+k], a.Neighbours[4*i+k]
			if c < Ghost || int(c) >= len(t.place) || int(r>>2) >= count ||
				(c >= 0 && t.place[c] != c+1) || (c < 0) != (i >= a.Real && k == 0) {
				return fmt.Errorf("delaunay: corner or neighbour of tetrahedron %d out of range", i)
			}
			q.v[k], q.n[k] = c+1, r
			t.pts[c+1].tet = uint32(i)
		}
		if i >= a.Real {
			q.lo, q.hi = loGhost, float32(math.Inf(1))
		} else {
			t.setSphere(q)
		}
	}
	return nil
}

// validatePlaces checks that different vertices are in different places, and the
// dimension.
func (t *T) validatePlaces() error {
	var list []int32
	for s, p := range t.place {
		if p == int32(s)+1 {
			list = append(list, p)
		}
	}
	sortPoints(&t.mesh, list)
	for i := 1; i < len(list); i++ {
		if t.same(list[i-1], list[i]) {
			return fmt.Errorf("delaunay: vertices %d and %d coincide", list[i-1]-1, list[i]-1)
		}
	}
	if t.dimension == 3 {
		if t.real == 0 {
			return errors.New("delaunay: no tetrahedron in dimension 3")
		}
		return nil
	}
	if d := t.span(list); d != t.dimension {
		return fmt.Errorf("delaunay: sites of dimension %d, not %d", d, t.dimension)
	}
	return nil
}
