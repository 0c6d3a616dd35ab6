package solid

import (
	"gonum.org/v1/gonum/spatial/r2"
	"gonum.org/v1/gonum/spatial/r3"

	"nearcell/voronoi/polyhedron"
)

// Vec is a point or a vector in space.
type Vec = r3.Vec

// Vec2 is a corner of a floor plan.
type Vec2 = r2.Vec

// Side tells where a point lies.
type Side int8

const (
	Outside Side = iota // beyond the surface
	On                  // on the surface, or within the tolerance of it
	Inside              // strictly within
)

func (s Side) String() string {
	switch s {
	case Inside:
		return "inside"
	case On:
		return "on"
	}
	return "outside"
}

// Plane is the half-space N·x <= D behind a wall of a convex solid. N has length 1
// and points out of the solid. D is rounded; Solid.ClipConvex does better.
type Plane struct {
	N    Vec
	D    float64
	Wall int32 // the wall's number, 0 … Facts.Walls-1
}

// Facts describe a solid in numbers.
type Facts struct {
	Kind    string // "box", "prism", …
	Walls   int    // plane walls, floor and ceiling included
	Corners int    // corners of the surface
	Holes   int    // holes in the floor plan that do not reach its outline
	Pieces  int    // pieces whose interiors are apart
	Voids   int    // hollows that no way leads out of
	Convex  bool
}

// Solid is a bounded region of space with a volume. Solids are immutable and can be
// used by any number of goroutines at once.
type Solid interface {
	// Bounds is the smallest box with the axes' directions that holds the solid.
	Bounds() (lo, hi Vec)
	// Volume is the volume of the solid.
	Volume() float64
	// Area is the area of its whole surface, floor and ceiling included.
	Area() float64
	// Key identifies the solid by its content: equal solids have equal keys.
	Key() [16]byte
	// Pieces is the number of pieces whose interiors are apart.
	Pieces() int
	// Facts are for descriptions.
	Facts() Facts

	// Side tells where p lies. Points within tol of the surface, and always those
	// exactly on it, are On. With tol 0 the answer is exact.
	Side(p Vec, tol float64) Side
	// Distance is the distance from p to the surface, inside or outside.
	Distance(p Vec) float64

	// Planes are the walls of a convex solid, nil for any other.
	Planes() []Plane
	// ClipConvex cuts c, a cell in coordinates local to its site, by the walls of a
	// convex solid: wall w makes faces with the label polyhedron.Wall(w). Where the
	// walls stand is computed from differences to the site, so that places far from
	// the origin lose nothing. It panics for a solid that is not convex.
	ClipConvex(c *polyhedron.Cell, site Vec) polyhedron.Result

	// Measure computes what is wanted of the part of c inside the solid. c is local
	// to site and already cut by the solid's Bounds; it is not changed. Everything
	// that is not wanted is left zero. w is scratch of one goroutine.
	Measure(c *polyhedron.Cell, site Vec, want Want, w *Work, out *Measures) error
}

// Want says which measures are asked for.
type Want uint8

const (
	WantVolume   Want = 1 << iota // Measures.Volume
	WantCentroid                  // Measures.First (and Volume)
	WantContacts                  // Measures.Contacts
	WantWalls                     // Measures.Walls and WallFaces
	WantFarthest                  // Measures.Farthest
	WantShape                     // Measures.Clipped, Reentrant and Shape (and Volume, Walls, WallFaces)
)

// Measures are what Solid.Measure finds out about one cell. Lengths are in the unit
// of the coordinates.
type Measures struct {
	Volume    float64
	First     Vec       // first moment about the site: the centroid is site + First/Volume
	Walls     float64   // area of the solid's surface in the cell
	WallFaces int       // walls with area in the cell
	Contacts  []float64 // per face of c: the area inside the solid where the label is >= 0, else 0
	Farthest  float64   // from the site to the farthest point
	// Empty tells that nothing of the cell lies in the solid, or no more than a layer on
	// a wall as thin as rounding, of which only Volume and First are reported. It is set
	// whatever is wanted.
	Empty   bool
	Clipped bool // a wall of the solid bounds the cell
	// Reentrant tells that the part of the cell in the solid is not convex, or that an
	// end of a wall divides one of its faces into contact and wall, so that it has no
	// simple counts of faces, edges and vertices.
	Reentrant bool
	// Shape is the part of the cell in the solid where it is convex, nil where it is
	// not. It is there to count faces, edges and vertices: walls with too little area
	// to count do not cut it, so that a tip can stand out a little. Faces that walls cut
	// carry the labels of ClipConvex; a face that lies in a wall keeps its own. It belongs to the Work, or is the measured cell itself,
	// and lives until the next use of either.
	Shape *polyhedron.Cell
}
