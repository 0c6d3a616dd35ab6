package mesh

import "fmt"

// Fault is what is wrong with triangles.
type Fault int8

const (
	// NotFinite: corner Corner has a coordinate that is NaN, infinite or beyond 1e50.
	NotFinite Fault = iota + 1
	// NoCorner: triangle Triangles[0] names the corner Corner, which there is not.
	NoCorner
	// Empty: there is no triangle, or none that has three different corners.
	Empty
	// Leak: Count edges are not closed.
	Leak
	// Overlap: Count pairs of triangles cross or cover one another.
	Overlap
	// Nested: a component lies in another and both have the solid inside.
	Nested
	// NoVolume: a component encloses nothing.
	NoVolume
	// NothingLeft: solids taken from one another leave nothing.
	NothingLeft
	// NotClosed: what is left of combined solids is not closed. It must not happen.
	NotClosed
	// NoPlan: the Count places of a survey lie on one line.
	NoPlan
	// TwoHeights: point Corner of a survey has the place of an earlier one and another height.
	TwoHeights
)

var faultWords = map[Fault]string{
	NotFinite: "coordinate not finite", NoCorner: "no such corner", Empty: "no triangles", Leak: "not closed",
	Overlap: "overlaps itself", Nested: "one piece inside another", NoVolume: "no volume", NothingLeft: "nothing left",
	NotClosed: "combination not closed", NoPlan: "places on one line", TwoHeights: "two heights at one place",
}

func (f Fault) String() string { return faultWords[f] }

// Error says why triangles bound no solid, in numbers.
type Error struct {
	Fault     Fault
	Corner    int      // NotFinite, NoCorner
	Triangles [2]int32 // NoCorner, Overlap: triangles as given, from 0
	At        Vec      // Overlap, Nested, NoVolume: a place; Leak: the first junction

	Count     int      // Leak, Overlap
	Edges     [][2]Vec // Leak: the first of them
	Length    float64  // Leak: of all of them
	Turned    int      // Leak: edges that two triangles use in one direction: one of the two is turned over
	Crowded   int      // Leak: edges of more than two triangles
	Junctions int      // Leak: ends of open edges that lie in the middle of another
}

func (e *Error) Error() string {
	switch e.Fault {
	case NotFinite:
		return fmt.Sprintf("mesh: corner %d: %v", e.Corner, e.Fault)
	case NoCorner:
		return fmt.Sprintf("mesh: triangle %d: %v: %d", e.Triangles[0], e.Fault, e.Corner)
	case Leak:
		return fmt.Sprintf("mesh: %v: %d open edges of length %g", e.Fault, e.Count, e.Length)
	case Overlap:
		return fmt.Sprintf("mesh: %v: triangles %d and %d near %v, %d pairs", e.Fault, e.Triangles[0], e.Triangles[1], e.At, e.Count)
	case Nested, NoVolume:
		return fmt.Sprintf("mesh: %v near %v", e.Fault, e.At)
	}
	return fmt.Sprintf("mesh: %v", e.Fault)
}
