package field

import (
	"context"
	"math"
	"slices"
	"sync"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/predicate"
	"nearcell/voronoi/solid"
)

// ShareAbove is the share of a tetrahedron in which a linear function with these values
// at its corners is above t, in closed form (the tetrahedron method of band theory:
// Lehmann and Taut 1972; Blöchl, Jepsen and Andersen 1994). The form for the middle is
// one in which nothing cancels where two corners have almost the same value.
func ShareAbove(v [4]float64, t float64) float64 {
	slices.Sort(v[:])
	a, b, c, d := v[0], v[1], v[2], v[3]
	switch {
	case t < a:
		return 1
	case t >= d:
		return 0
	case t < b:
		x := t - a
		return 1 - float64(x/(b-a)*(x/(c-a))*(x/(d-a)))
	case t >= c:
		x := d - t
		return x / (d - a) * (x / (d - b)) * (x / (d - c))
	}
	u, e := t-b, b-a
	sum := float64(e*e) + float64(3*e*u) + float64(3*u*u) - float64(((c-a)+(d-b))*(u/(c-b))*(u/(d-b))*u)
	return 1 - sum/(c-a)/(d-a)
}

// Above is the space in which a field is above each of some thresholds.
type Above struct {
	Volume  []float64 // where it is estimated to be above, by threshold
	Lower   []float64 // where it is for certain
	Upper   []float64 // where it is at most
	Space   float64   // that the field was asked about: the solid, or the hull of the sites
	Reached float64   // the part of it that the method reaches
	Doubt   []float64 // standard error of Volume by sampling; 0: none
}

// LinearAbove is Above for a field that is linear in each Delaunay tetrahedron, for a
// field of the method Linear. Where the solid has parts outside the hull of the sites,
// nothing is known there: it is in Space, not in Reached, and in Upper. Without a solid
// the space is the hull. Of sites in one plane nothing is reached. within is the part of the
// solid that is asked about, a solid of its own; nil: the whole.
func (f *Field) LinearAbove(ctx context.Context, within solid.Solid, value func(site int32) float64, thresholds []float64, r Run) (*Above, error) {
	if f.facts.Dimension == 3 {
		if err := f.needHull(ctx); err != nil {
			return nil, err
		}
	}
	n := 0
	if f.t != nil {
		n = f.t.NumTets()
	}
	s := &tetSums{Field: f, extent: f.extentOf(within), value: value, thresholds: thresholds}
	s.setUnit()
	total := make([]fixed, 1+len(thresholds))
	var guard sync.Mutex
	var works sync.Pool
	err := each(ctx, (n+chunkSize-1)/chunkSize, r, func(w *Work, i int) error {
		sums, _ := works.Get().([]fixed)
		if sums == nil {
			sums = make([]fixed, len(total))
		}
		clear(sums)
		for k := i * chunkSize; k < min(n, (i+1)*chunkSize); k++ {
			if err := s.tet(k, w, sums); err != nil {
				return err
			}
		}
		guard.Lock()
		for j := range total {
			total[j].merge(sums[j])
		}
		guard.Unlock()
		works.Put(sums) //nolint:staticcheck // a slice of a few words
		return nil
	})
	if err != nil {
		return nil, err
	}
	return s.result(total), nil
}

// extent is the space that is asked about.
type extent struct {
	body   solid.Solid // nil: the hull of the sites
	convex bool
}

func (f *Field) extentOf(within solid.Solid) extent {
	if within == nil {
		return extent{f.body, f.convex}
	}
	return extent{within, within.Planes() != nil}
}

// tetSums adds up tetrahedra.
type tetSums struct {
	*Field
	extent
	value      func(int32) float64
	thresholds []float64
	unit       float64 // a power of two above all sums
	all        bool    // all tetrahedra lie in the solid, or there is none
}

// setUnit finds a power of two that no sum can reach, and whether any tetrahedron can
// leave the solid.
func (s *tetSums) setUnit() {
	e := sub(s.facts.Hi, s.facts.Lo)
	s.unit = math.Exp2(math.Ceil(math.Log2(max(math.SmallestNonzeroFloat64, e.X)*max(math.SmallestNonzeroFloat64, e.Y)*max(math.SmallestNonzeroFloat64, e.Z))) + 1)
	if !(s.unit > 0) || math.IsInf(s.unit, 0) {
		s.unit = 1
	}
	s.all = s.extent.body == nil
	if s.extent.body != nil && s.extent.convex {
		s.all = true
		for _, i := range s.everyone() {
			s.all = s.all && s.extent.body.Side(s.d.Place(i), 0) != solid.Outside
		}
	}
}

func (s *tetSums) result(total []fixed) *Above {
	n := len(s.thresholds)
	a := &Above{Volume: make([]float64, n), Lower: make([]float64, n), Upper: make([]float64, n), Doubt: make([]float64, n)}
	a.Reached = total[0].value() * s.unit
	a.Space = a.Reached
	if s.extent.body != nil {
		a.Space = s.extent.body.Volume()
		a.Reached = min(a.Reached, a.Space)
		if a.Space-a.Reached < 1e-12*a.Space {
			a.Reached = a.Space
		}
	}
	for i := range n {
		a.Volume[i] = min(total[1+i].value()*s.unit, a.Reached)
		a.Lower[i] = a.Volume[i]
		a.Upper[i] = a.Volume[i] + (a.Space - a.Reached)
	}
	return a
}

// tet adds tetrahedron k. Its corners are taken in the order of their sites, so that
// the bits do not depend on how it is stored.
func (s *tetSums) tet(k int, w *Work, sums []fixed) error {
	c := s.t.Tet(k)
	for i := range c {
		c[i] = s.site(c[i])
	}
	slices.Sort(c[:])
	var at [4]Vec
	var z [4]float64
	for i, site := range c {
		at[i], z[i] = s.d.Place(site), s.value(site)
	}
	u, v, x := sub(at[1], at[0]), sub(at[2], at[0]), sub(at[3], at[0])
	volume := math.Abs(dot(u, cross(v, x))) / 6
	if s.all || s.inside(at) {
		sums[0].add(volume / s.unit)
		for i, t := range s.thresholds {
			sums[1+i].add(float64(volume*ShareAbove(z, t)) / s.unit)
		}
		return nil
	}
	return s.cutTet(at, z, volume, w, sums)
}

// inside tells for certain that a tetrahedron lies in the solid: a ball around it does.
func (s *tetSums) inside(at [4]Vec) bool {
	m := scale(0.25, add(add(at[0], at[1]), add(at[2], at[3])))
	far := 0.0
	for _, p := range at {
		far = max(far, length(sub(p, m)))
	}
	return s.extent.body.Distance(m) > float64(far*(1+1e-9)) && s.extent.body.Side(m, 0) == solid.Inside
}

// cutTet adds the part of a tetrahedron in the solid.
func (s *tetSums) cutTet(at [4]Vec, z [4]float64, volume float64, w *Work, sums []fixed) error {
	if !shape(at, &w.cell) {
		return nil // flat to within rounding
	}
	in, err := s.extent.volumeOf(&w.cell, at[0], w)
	if err != nil {
		return err
	}
	in = min(in, volume)
	sums[0].add(in / s.unit)
	lo, hi := min(z[0], z[1], z[2], z[3]), max(z[0], z[1], z[2], z[3])
	// The gradient, times six volumes.
	u, v, x := sub(at[1], at[0]), sub(at[2], at[0]), sub(at[3], at[0])
	det := dot(u, cross(v, x))
	g := add(scale((z[1]-z[0])/det, cross(v, x)), add(scale((z[2]-z[0])/det, cross(x, u)), scale((z[3]-z[0])/det, cross(u, v))))
	for i, t := range s.thresholds {
		switch {
		case t >= hi:
		case t < lo:
			sums[1+i].add(in / s.unit)
		default:
			w.piece.CopyFrom(&w.cell)
			// f > t is -g·y < z0 - t.
			if w.piece.Clip(scale(-1, g), z[0]-t, polyhedron.Wall(0)) == polyhedron.Empty {
				continue
			}
			above, err := s.extent.volumeOf(&w.piece, at[0], w)
			if err != nil {
				return err
			}
			sums[1+i].add(min(above, in) / s.unit)
		}
	}
	return nil
}

// shape makes c the tetrahedron, seen from its first corner; false where it has no
// volume to within rounding.
func shape(at [4]Vec, c *polyhedron.Cell) bool {
	if predicate.Orient3D(at[0], at[1], at[2], at[3]) < 0 {
		at[2], at[3] = at[3], at[2]
	}
	var lo, hi Vec
	var y [4]Vec
	for i := range at {
		y[i] = sub(at[i], at[0])
		lo = Vec{X: min(lo.X, y[i].X), Y: min(lo.Y, y[i].Y), Z: min(lo.Z, y[i].Z)}
		hi = Vec{X: max(hi.X, y[i].X), Y: max(hi.Y, y[i].Y), Z: max(hi.Z, y[i].Z)}
	}
	var labels [6]int32
	c.SetBox(lo, hi, labels)
	for k := range 4 {
		a, b, d := y[(k+1)&3], y[(k+2)&3], y[(k+3)&3]
		n := cross(sub(b, a), sub(d, a))
		if dot(n, sub(y[k], a)) > 0 {
			n = scale(-1, n)
		}
		if c.Clip(n, dot(n, a), 0) == polyhedron.Empty {
			return false
		}
	}
	return true
}

// volumeOf is the volume of a cell local to p in the space; the cell is cut.
func (f *extent) volumeOf(c *polyhedron.Cell, p Vec, w *Work) (float64, error) {
	if f.convex {
		lo, hi := f.body.Bounds()
		if !clipBox(c, sub(lo, p), sub(hi, p)) {
			return 0, nil
		}
		if f.body.ClipConvex(c, p) == polyhedron.Empty {
			return 0, nil
		}
		return max(0, c.Volume()), nil
	}
	lo, hi := f.body.Bounds()
	if !clipBox(c, sub(lo, p), sub(hi, p)) {
		return 0, nil
	}
	if err := f.body.Measure(c, p, solid.WantVolume, &w.solid, &w.measures); err != nil {
		return 0, err
	}
	return max(0, w.measures.Volume), nil
}

// clipBox cuts c by a box and tells whether anything is left.
func clipBox(c *polyhedron.Cell, lo, hi Vec) bool {
	return c.Clip(Vec{X: -1}, -lo.X, 0) != polyhedron.Empty && c.Clip(Vec{X: 1}, hi.X, 0) != polyhedron.Empty &&
		c.Clip(Vec{Y: -1}, -lo.Y, 0) != polyhedron.Empty && c.Clip(Vec{Y: 1}, hi.Y, 0) != polyhedron.Empty &&
		c.Clip(Vec{Z: -1}, -lo.Z, 0) != polyhedron.Empty && c.Clip(Vec{Z: 1}, hi.Z, 0) != polyhedron.Empty
}
