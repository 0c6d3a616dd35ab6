package field

import (
	"context"
	"errors"
	"math"
	"slices"
	"sync"

	"nearcell/voronoi"
	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// Vec is a point or a vector in space.
type Vec = polyhedron.Vec

// Method says how the weights of the sites around a place are found.
type Method int8

const (
	Sibson   Method = iota // shares of the volume that the cell of the place takes from each
	Laplace                // areas of the faces of that cell, over the distances
	Linear                 // barycentric coordinates in the Delaunay tetrahedron
	Nearest                // the nearest site alone
	Distance               // inverse powers of the distance
)

func (m Method) String() string {
	switch m {
	case Sibson:
		return "Sibson"
	case Laplace:
		return "Laplace"
	case Linear:
		return "linear"
	case Nearest:
		return "nearest"
	}
	return "inverse distance"
}

// UsualNear is how many sites Distance takes unless Options say otherwise.
const UsualNear = 12

// Options say how weights are found. The zero value is Sibson's.
type Options struct {
	Method Method
	Power  float64 // of the distance, for Distance
	Near   int     // how many of the nearest sites Distance takes; 0: UsualNear
}

// Weight is the share of a site (the representative of its group) in an estimate.
type Weight struct {
	Site   int32
	Weight float64
}

// Place tells what kind of place was asked about. Only at Between and AtSite are there
// weights.
type Place int8

const (
	Between      Place = iota // there is an estimate
	AtSite                    // in the place of a site, which has all the weight
	OutsideHull               // outside the convex hull of the sites, where the method ends
	OutsideSolid              // outside the solid by more than the tolerance
	Alone                     // there is no other site
	Flat                      // the sites lie in one plane, and the method needs space
)

// ErrPower: the power of the distance must be a positive number.
var ErrPower = errors.New("field: the power is not a positive number")

// Field gives weights of the sites of a diagram at places. It is immutable and can be
// used by any number of goroutines at once, each with its own Work.
type Field struct {
	d      *voronoi.Diagram
	o      Options
	body   solid.Solid
	convex bool // the solid is convex, or there is none
	planes []solid.Plane
	ready  bool // the tetrahedralisation may be used by natural
	tol    float64
	facts  voronoi.Facts
	metric Vec // squares of the factors by which distances are stretched

	rim sync.Once
	hull
	rimErr error
}

// New makes a field over a diagram. tolerance is that of the diagram: places no
// farther outside the solid have estimates. For Linear the tetrahedralisation is built.
// It fails with ErrPower, or as Diagram.Tetrahedra does.
func New(ctx context.Context, d *voronoi.Diagram, tolerance float64, o Options) (*Field, error) {
	if o.Method == Distance && !(o.Power > 0 && !math.IsInf(o.Power, 0)) {
		return nil, ErrPower
	}
	if o.Near <= 0 {
		o.Near = UsualNear
	}
	f := &Field{d: d, o: o, body: d.Solid(), convex: true, tol: tolerance, facts: d.Facts()}
	k := d.Stretch()
	f.metric = Vec{X: float64(k.X * k.X), Y: float64(k.Y * k.Y), Z: float64(k.Z * k.Z)}
	if f.body != nil {
		f.planes = f.body.Planes()
		f.convex = f.planes != nil
	}
	if o.Method == Linear && f.facts.Dimension == 3 {
		if err := f.needHull(ctx); err != nil {
			return nil, err
		}
	}
	return f, nil
}

// Work is the scratch of one goroutine. The zero value is ready.
type Work struct {
	cell, piece polyhedron.Cell
	zone        zone
	tied        bool // zone tells which neighbours touch
	metric      Vec  // that of the cell at hand
	measures    solid.Measures
	solid       solid.Work
	near        []voronoi.Near
	around      []neighbour
	order       []int32
	weights     []Weight
	flat        []int32
	ring        []int32
	spots       []Vec
	list        []float64
}

// At gives the weights of the sites at p, ascending by site; they add up to 1 and none
// is negative. They belong to w and live until its next use.
func (f *Field) At(ctx context.Context, p Vec, w *Work) (Place, []Weight, error) {
	w.weights = w.weights[:0]
	if f.facts.Inside == 0 {
		return Alone, nil, nil
	}
	if f.body != nil && f.body.Side(p, f.tol) == solid.Outside {
		return OutsideSolid, nil, nil
	}
	s, d := f.d.Nearest(p)
	if f.o.Method == Nearest || d == 0 && f.d.Place(s) == positive(p) {
		w.weights = append(w.weights, Weight{s, 1})
		if f.o.Method == Nearest && d > 0 {
			return Between, w.weights, nil
		}
		return AtSite, w.weights, nil
	}
	switch f.o.Method {
	case Linear:
		return f.linear(p, s, w)
	case Distance:
		return f.distance(p, -1, w)
	}
	if place, ok := f.byZone(p, s, w); ok {
		return place, w.finish(), nil
	}
	return f.natural(ctx, p, -1, w)
}

// Without gives the weights that the other sites have at the place of a site when it
// is taken away: leave-one-out. For Sibson and Laplace nothing is built anew: the cell
// of the site goes to its neighbours, each part to the nearest of them, and that is
// all that changes. The group of the site goes as a whole.
func (f *Field) Without(ctx context.Context, site int32, w *Work) (Place, []Weight, error) {
	w.weights = w.weights[:0]
	switch {
	case !f.d.TakesPart(site):
		return OutsideSolid, nil, nil
	case f.facts.Distinct < 2:
		return Alone, nil, nil
	}
	p := f.d.Place(site)
	switch f.o.Method {
	case Nearest:
		w.near = f.d.Nearby(p, 1, site, w.near[:0])
		w.weights = append(w.weights, Weight{w.near[0].Site, 1})
		return Between, w.weights, nil
	case Distance:
		return f.distance(p, site, w)
	case Linear:
		return f.linearWithout(ctx, p, site, w)
	}
	w.tied = false
	if place, ok, err := f.withoutByZone(ctx, p, site, w); ok || err != nil {
		return place, w.finish(), err
	}
	return f.natural(ctx, p, site, w)
}

// distance weighs the nearest sites by an inverse power of their distance (Shepard
// 1968).
func (f *Field) distance(p Vec, skip int32, w *Work) (Place, []Weight, error) {
	w.near = f.d.Nearby(p, f.o.Near, skip, w.near[:0])
	least := w.near[0].Dist2
	for _, q := range w.near {
		// Seen from the nearest, so that no power overflows.
		w.weights = append(w.weights, Weight{q.Site, math.Pow(least/q.Dist2, f.o.Power/2)})
	}
	return Between, w.finish(), nil
}

// finish orders the weights by site and makes them add up to 1. Sites with a weight
// of zero go.
func (w *Work) finish() []Weight {
	w.weights = slices.DeleteFunc(w.weights, func(x Weight) bool { return !(x.Weight > 0) })
	slices.SortFunc(w.weights, func(a, b Weight) int { return int(a.Site - b.Site) })
	var total voronoi.Sum
	for _, x := range w.weights {
		total.Add(x.Weight)
	}
	sum := total.Value()
	for i := range w.weights {
		w.weights[i].Weight /= sum
	}
	return w.weights
}

// Estimate is the mean of the values of the sites by their weights. It is formed
// about the value of the heaviest site, so that equal values give just this value, and
// it never leaves their range.
func Estimate(weights []Weight, value func(site int32) float64) float64 {
	if len(weights) == 0 {
		return math.NaN()
	}
	first := 0
	for i, x := range weights {
		if x.Weight > weights[first].Weight {
			first = i
		}
	}
	base := value(weights[first].Site)
	lo, hi := base, base
	var sum voronoi.Sum
	for _, x := range weights {
		v := value(x.Site)
		lo, hi = min(lo, v), max(hi, v)
		sum.Add(float64(x.Weight * (v - base)))
	}
	return min(hi, max(lo, base+sum.Value()))
}
