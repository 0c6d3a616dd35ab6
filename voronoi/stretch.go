package voronoi

import (
	"fmt"
	"math"
)

// Stretched distances: the distance between two places is that of the places with x, y
// and z multiplied by the factors of Options.Stretch. Sites are stretched, cells are
// cut out in the stretched space, where they are cells like any others, and the finished
// polyhedron is divided by the factors again. All that is measured is measured on that,
// in true units: volumes, areas, centroids, distances. The solid is never stretched; it
// cuts the cell in true space.

// StretchError is a factor that is not a number greater than 0, or so large or small
// that the sites cannot be told apart in the stretched space.
type StretchError struct {
	Factor Vec
	// A and B are two sites that the stretch makes one, -1 where a factor is at fault.
	A, B int
}

func (e *StretchError) Error() string {
	if e.A >= 0 {
		return fmt.Sprintf("voronoi: sites %d and %d are one place when stretched by (%g, %g, %g)", e.A, e.B, e.Factor.X, e.Factor.Y, e.Factor.Z)
	}
	return fmt.Sprintf("voronoi: distances stretched by (%g, %g, %g)", e.Factor.X, e.Factor.Y, e.Factor.Z)
}

// IsStretch tells whether factors stretch anything: they are neither all zero nor all 1.
func IsStretch(s Vec) bool { return s != (Vec{}) && s != (Vec{X: 1, Y: 1, Z: 1}) }

// factors are beyond all use below and above these.
const (
	leastFactor = 1e-30
	mostFactor  = 1e30
)

func checkStretch(s Vec) error {
	if s == (Vec{}) {
		return nil
	}
	for _, f := range [3]float64{s.X, s.Y, s.Z} {
		if !(f >= leastFactor && f <= mostFactor) {
			return &StretchError{Factor: s, A: -1, B: -1}
		}
	}
	return nil
}

// Stretch is the three factors of the distances, (1, 1, 1) where they are plain.
func (d *Diagram) Stretch() Vec {
	if !d.stretched {
		return Vec{X: 1, Y: 1, Z: 1}
	}
	return d.stretch
}

// stretch multiplies the coordinates of a place.
func stretch(p, s Vec) Vec {
	return Vec{X: float64(p.X * s.X), Y: float64(p.Y * s.Y), Z: float64(p.Z * s.Z)}
}

// local is a place of the user in the coordinates that cells are made in.
func (d *Diagram) local(p Vec) Vec {
	p = sub(p, d.origin)
	if d.stretched {
		p = stretch(p, d.stretch)
	}
	return p
}

// place is where the site of a cell stands, in the user's coordinates.
func (d *Diagram) place(cell int32) Vec {
	if d.stretched {
		return d.places[cell]
	}
	return add(d.tree.Point(cell), d.origin)
}

// spot is the same, shifted by the origin.
func (d *Diagram) spot(cell int32) Vec {
	if d.stretched {
		return sub(d.places[cell], d.origin)
	}
	return d.tree.Point(cell)
}

// localBox is a box about a place in the coordinates local to it that cells are cut in.
func (d *Diagram) localBox(at Vec) (lo, hi Vec) {
	lo, hi = sub(d.lo, at), sub(d.hi, at)
	if d.stretched {
		lo, hi = stretch(lo, d.stretch), stretch(hi, d.stretch)
	}
	return lo, hi
}

// stretchAll stretches the places of the cells, which are shifted by the origin, and
// looks for two that have become one.
func (d *Diagram) stretchAll(places []Vec, representative []int32) error {
	size := 16
	for size < 2*len(places) {
		size *= 2
	}
	table := make([]int32, size) // open addressing; cell + 1
	for i, p := range places {
		p = positive(stretch(p, d.stretch))
		if !(math.Abs(p.X) <= 1e150 && math.Abs(p.Y) <= 1e150 && math.Abs(p.Z) <= 1e150) {
			return &StretchError{Factor: d.stretch, A: -1, B: -1}
		}
		places[i] = p
		slot := hash(p) & uint64(size-1)
		for table[slot] != 0 {
			if other := table[slot] - 1; places[other] == p {
				return &StretchError{Factor: d.stretch, A: int(representative[other]), B: int(representative[i])}
			}
			slot = (slot + 1) & uint64(size-1)
		}
		table[slot] = int32(i) + 1
	}
	return nil
}

// nearestFace is half the true distance from a site to the one that is truly nearest:
// in stretched space another may be nearer.
func (d *Diagram) nearestFace(cell int32, b *builder) float64 {
	p := d.places[cell]
	b.used.Reset()
	b.used.Add(d.plainOf[cell])
	_, d2, _ := d.plain.NearestWithin(sub(p, d.origin), math.Inf(1), b.used)
	return math.Sqrt(d2) / 2
}
