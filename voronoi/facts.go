package voronoi

import (
	"cmp"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/spatial/r2"

	"nearcell/voronoi/predicate"
)

func sortGroups(groups []Group) {
	slices.SortFunc(groups, func(a, b Group) int { return cmp.Compare(a.Representative, b.Representative) })
}

// exactOrigin is a shift of the coordinates that loses nothing: an axis is shifted
// only if x - x0 is exact for every place, and only if that brings the places
// nearer to zero. It depends on the set of places alone.
func exactOrigin(places []Vec) Vec {
	if len(places) == 0 {
		return Vec{}
	}
	var o Vec
	o.X = exactShift(places, func(p Vec) float64 { return p.X })
	o.Y = exactShift(places, func(p Vec) float64 { return p.Y })
	o.Z = exactShift(places, func(p Vec) float64 { return p.Z })
	return o
}

func exactShift(places []Vec, coordinate func(Vec) float64) float64 {
	lo, hi := math.Inf(1), math.Inf(-1)
	for _, p := range places {
		lo, hi = min(lo, coordinate(p)), max(hi, coordinate(p))
	}
	middle := lo + (hi-lo)/2
	if math.Abs(middle) <= 2*(hi-lo) {
		return 0
	}
	// A few leading bits of the middle, as many as it takes to come within an
	// eighth of the extent (all of them if the extent is zero).
	x0 := middle
	if hi > lo {
		step := math.Exp2(math.Floor(math.Log2((hi - lo) / 8)))
		x0 = math.Round(middle/step) * step
	}
	for _, p := range places {
		x := Vec{X: coordinate(p)}
		if lostBySub(x, Vec{X: x0}, sub(x, Vec{X: x0})) != (Vec{}) {
			return 0
		}
	}
	return x0
}

// survey fills the facts about the shape of the set of sites, given as distinct places
// shifted by the origin.
func (d *Diagram) survey(p []Vec) {
	d.facts.Dimension = dimension(p)
	d.facts.Extent = extent(p)
	// A sheet is thinner than the distance between its sites.
	e := d.facts.Extent
	spacing := math.Sqrt(e[0] * e[1] / float64(max(1, len(p))))
	d.facts.Flat = len(p) >= 100 && e[2] < spacing/2
}

// dimension is the dimension of the smallest line, plane or space that holds the
// points, decided exactly; -1 for no point. No two points are equal.
func dimension(p []Vec) int {
	if len(p) < 3 {
		return len(p) - 1
	}
	a, b := p[0], p[1]
	c := slices.IndexFunc(p, func(q Vec) bool { return !collinear(a, b, q) })
	if c < 0 {
		return 1
	}
	for _, q := range p {
		if predicate.Orient3D(a, b, p[c], q) != 0 {
			return 3
		}
	}
	return 2
}

// collinear is exact: three points are on a line if they are in all three
// projections along the axes.
func collinear(a, b, c Vec) bool {
	flat := func(u, v func(Vec) float64) bool {
		on := func(p Vec) r2.Vec { return r2.Vec{X: u(p), Y: v(p)} }
		return predicate.Orient2D(on(a), on(b), on(c)) == 0
	}
	x := func(p Vec) float64 { return p.X }
	y := func(p Vec) float64 { return p.Y }
	z := func(p Vec) float64 { return p.Z }
	return flat(x, y) && flat(y, z) && flat(z, x)
}

// extent is the size of the set along its principal axes, longest first.
func extent(p []Vec) [3]float64 {
	var e [3]float64
	if len(p) < 2 {
		return e
	}
	var mean [3]Sum
	for _, q := range p {
		mean[0].Add(q.X)
		mean[1].Add(q.Y)
		mean[2].Add(q.Z)
	}
	n := float64(len(p))
	m := Vec{X: mean[0].Value() / n, Y: mean[1].Value() / n, Z: mean[2].Value() / n}
	scale := 0.0
	for _, q := range p {
		r := sub(q, m)
		scale = max(scale, math.Abs(r.X), math.Abs(r.Y), math.Abs(r.Z))
	}
	if scale == 0 {
		return e
	}
	var c [6]float64
	for _, q := range p {
		r := sub(q, m)
		x, y, z := r.X/scale, r.Y/scale, r.Z/scale
		c[0] += float64(x * x)
		c[1] += float64(x * y)
		c[2] += float64(x * z)
		c[3] += float64(y * y)
		c[4] += float64(y * z)
		c[5] += float64(z * z)
	}
	var eigen mat.EigenSym
	if !eigen.Factorize(mat.NewSymDense(3, []float64{c[0], c[1], c[2], c[1], c[3], c[4], c[2], c[4], c[5]}), true) {
		return e
	}
	var axes mat.Dense
	eigen.VectorsTo(&axes)
	for k := range 3 {
		u := Vec{X: axes.At(0, k), Y: axes.At(1, k), Z: axes.At(2, k)}
		lo, hi := math.Inf(1), math.Inf(-1)
		for _, q := range p {
			s := dot(u, sub(q, m))
			lo, hi = min(lo, s), max(hi, s)
		}
		e[k] = hi - lo
	}
	slices.SortFunc(e[:], func(a, b float64) int { return cmp.Compare(b, a) })
	return e
}
