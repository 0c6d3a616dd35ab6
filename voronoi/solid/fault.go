package solid

import "fmt"

// Fault is what is wrong with the description of a solid.
type Fault int8

const (
	// NotFinite: a coordinate is NaN or infinite, or beyond 1e50 in size.
	NotFinite Fault = iota + 1
	// NoExtent: two corners of a box, or floor and ceiling, share a coordinate, or
	// lie so close that nothing is left between them. Axis tells which.
	NoExtent
	// FewCorners: fewer than three distinct corners are left of a ring.
	FewCorners
	// NoArea: a ring encloses no area.
	NoArea
	// Spike: the outline runs out to Corner and back on itself.
	Spike
	// Crossing: Side of Ring and OtherSide of OtherRing cross at At.
	Crossing
	// Overlap: Side and OtherSide of one ring run along each other, or the ring
	// winds around a part of the plane more than once or the wrong way round.
	Overlap
	// HoleOutside: the hole Ring lies, in whole or in part, outside the outline.
	HoleOutside
	// HolesOverlap: the holes Ring and OtherRing cover a part of the plane twice.
	HolesOverlap
	// NothingLeft: the holes take all of the outline away.
	NothingLeft
)

var faultWords = map[Fault]string{
	NotFinite: "coordinate not finite", NoExtent: "no extent", FewCorners: "fewer than three distinct corners",
	NoArea: "no area", Spike: "spike", Crossing: "sides cross", Overlap: "ring overlaps itself",
	HoleOutside: "hole outside the outline", HolesOverlap: "holes overlap", NothingLeft: "nothing left",
}

func (f Fault) String() string { return faultWords[f] }

// Error says what is wrong with the description of a solid, and where, in numbers.
// Ring 0 is the outline, ring h the h-th hole; -1 where rings do not matter. Corners
// count from 0 as they were given; side k runs from corner k to the next corner.
type Error struct {
	Fault     Fault
	Ring      int
	Corner    int // -1 where it does not matter
	Side      int // -1 where it does not matter
	OtherRing int
	OtherSide int
	Axis      int  // 0, 1, 2 for x, y, z; -1 where it does not matter
	At        Vec2 // a place in the plan, where there is one
	Count     int  // FewCorners: how many distinct corners there are
}

func (e *Error) Error() string {
	switch e.Fault {
	case NotFinite, Spike:
		return fmt.Sprintf("solid: ring %d, corner %d: %v", e.Ring, e.Corner, e.Fault)
	case NoExtent:
		return fmt.Sprintf("solid: axis %d: %v", e.Axis, e.Fault)
	case FewCorners:
		return fmt.Sprintf("solid: ring %d: %v (%d)", e.Ring, e.Fault, e.Count)
	case Crossing:
		return fmt.Sprintf("solid: %v: ring %d side %d, ring %d side %d, at (%g, %g)",
			e.Fault, e.Ring, e.Side, e.OtherRing, e.OtherSide, e.At.X, e.At.Y)
	case Overlap:
		return fmt.Sprintf("solid: ring %d: %v: side %d, side %d, near (%g, %g)",
			e.Ring, e.Fault, e.Side, e.OtherSide, e.At.X, e.At.Y)
	case HolesOverlap:
		return fmt.Sprintf("solid: %v: ring %d, ring %d, near (%g, %g)", e.Fault, e.Ring, e.OtherRing, e.At.X, e.At.Y)
	case HoleOutside:
		return fmt.Sprintf("solid: ring %d: %v, near (%g, %g)", e.Ring, e.Fault, e.At.X, e.At.Y)
	}
	return fmt.Sprintf("solid: ring %d: %v", e.Ring, e.Fault)
}

func fault(f Fault, ring int) *Error {
	return &Error{Fault: f, Ring: ring, Corner: -1, Side: -1, OtherRing: -1, OtherSide: -1, Axis: -1}
}
