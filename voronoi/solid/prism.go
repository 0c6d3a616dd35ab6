package solid

import "slices"

// Prism is a floor plan raised from one height to another. The plan need not be
// convex, can have holes and can be in several pieces.
type Prism struct {
	extrusion
	outer []Vec2 // as given
	holes [][]Vec2
}

// NewPrism makes a prism with this outline between the heights z0 and z1, whichever
// is the lower. Rings may run either way round and may repeat their first corner at
// the end.
//
// A hole takes its area away. It may touch the outline or another hole in corners
// and along sides: a hole in a corner of the outline cuts the corner off, and where
// its sides run along the outline there is no wall. Corners within four units in the
// last place of the plan's largest coordinate of one another or of a side are taken
// to lie on it.
//
// Corners that repeat the one before or lie on the straight line between their
// neighbours are dropped. The error is an *[Error].
func NewPrism(outer []Vec2, holes [][]Vec2, z0, z1 float64) (*Prism, error) {
	p, err := newPlan(outer, holes)
	if err != nil {
		return nil, err
	}
	x, err := newExtrusion("prism", p, z0, z1)
	if err != nil {
		return nil, err
	}
	kept := &Prism{extrusion: *x, outer: slices.Clone(outer)}
	for _, h := range holes {
		kept.holes = append(kept.holes, slices.Clone(h))
	}
	return kept, nil
}

// Box is a cuboid with the axes' directions.
type Box struct{ extrusion }

// NewBox makes the box with these two opposite corners, in whichever order: the
// smaller coordinate of each axis is the lower one. A box without extent along an
// axis is refused. The error is an *[Error].
func NewBox(a, b Vec) (*Box, error) {
	lo := Vec{X: min(a.X, b.X), Y: min(a.Y, b.Y), Z: min(a.Z, b.Z)}
	hi := Vec{X: max(a.X, b.X), Y: max(a.Y, b.Y), Z: max(a.Z, b.Z)}
	size := 0.0
	for i, c := range [][2]float64{{lo.X, hi.X}, {lo.Y, hi.Y}, {lo.Z, hi.Z}} {
		if !(c[0] >= -largest && c[1] <= largest) {
			e := fault(NotFinite, -1)
			e.Axis = i
			return nil, e
		}
		size = max(size, -c[0], c[1])
	}
	extent := []float64{hi.X - lo.X, hi.Y - lo.Y, hi.Z - lo.Z}
	for i, d := range extent {
		if none := !(d > 32*snapFactor*size); none || (i == 2 && !(extent[0]*extent[1]*d >= smallest)) {
			e := fault(NoExtent, -1)
			e.Axis = i
			return nil, e
		}
	}
	p, err := newPlan([]Vec2{{X: lo.X, Y: lo.Y}, {X: hi.X, Y: lo.Y}, {X: hi.X, Y: hi.Y}, {X: lo.X, Y: hi.Y}}, nil)
	if err != nil {
		return nil, err
	}
	x, err := newExtrusion("box", p, lo.Z, hi.Z)
	if err != nil {
		return nil, err
	}
	return &Box{*x}, nil
}

var (
	_ Solid = (*Box)(nil)
	_ Solid = (*Prism)(nil)
)
