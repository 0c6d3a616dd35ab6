package voronoi

import (
	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// Vec is a point or a vector in space.
type Vec = polyhedron.Vec

// Options say how a diagram is made. The zero value is good.
type Options struct {
	// Solid closes the partition; nil: cells may be unbounded.
	Solid solid.Solid
	// Tolerance is how far outside the solid a site may lie and still take part.
	Tolerance float64
	// Stretch multiplies distances along x, y and z before they are compared; the zero
	// value leaves them as they are. All measures are in true units.
	Stretch Vec
	// Threads is how many goroutines compute cells; 0: as many as there are
	// processors. The results are the same for any number.
	Threads int
	// Memory is the most bytes that the tetrahedralisation of all sites may take; 0:
	// no limit. Where it is too little, cells are made one by one.
	Memory int64
	// Progress is told now and then how many cells are done, from one goroutine at
	// a time. It may be nil.
	Progress func(done, total int)
}

// Measures is a set of measures of cells.
type Measures uint32

const (
	Volume      Measures = 1 << iota // Cells.Volume
	Area                             // Cells.Area: contacts and walls
	Faces                            // Cells.Faces, Edges, Vertices and Shaped
	Neighbours                       // Cells.Neighbours
	Bounded                          // Cells.Bounded
	Clipped                          // Cells.Clipped
	WallArea                         // Cells.WallArea
	Centroid                         // Cells.Centroid and HasCentroid
	Farthest                         // Cells.Farthest
	NearestFace                      // Cells.NearestFace

	// All are all measures.
	All = Volume | Area | Faces | Neighbours | Bounded | Clipped | WallArea | Centroid | Farthest | NearestFace
)

// Cells are the measures of cells, as arrays: entry i of each belongs to
// Sites[i]. Arrays that were not asked for are nil. Lengths are in the unit of the
// coordinates, areas and volumes in its square and cube.
//
// A site outside the solid has no cell: Inside is false and every measure 0. A
// site that coincides with others has the measures of their one common cell, and
// Multiplicity says how many share it.
type Cells struct {
	Sites        []int32
	Inside       []bool
	Multiplicity []int32 // 0 for a site outside

	Volume   []float64 // +Inf: unbounded
	Area     []float64 // of the whole surface; +Inf: unbounded
	WallArea []float64 // of the part of the surface on walls of the solid

	Faces      []int32 // contacts and walls
	Edges      []int32 // those that run to infinity included
	Vertices   []int32 // finite ones
	Shaped     []bool  // Edges and Vertices are defined (a re-entrant part of the solid may cut the cell)
	Neighbours []int32 // cells that share a face

	Bounded []bool
	Clipped []bool // a wall of the solid bounds the cell

	Centroid    []Vec  // in the coordinates of the sites; zero without one
	HasCentroid []bool // false: unbounded, or nothing of the cell lies in the solid

	Farthest    []float64 // from the site to the farthest point of its cell; +Inf: unbounded
	NearestFace []float64 // half the distance to the nearest site elsewhere; +Inf: there is none
}

// Contact is a face that two cells share.
type Contact struct {
	Other    int32   // the site on the other side, the representative of its group
	Area     float64 // +Inf: unbounded
	Distance float64 // between the two sites
	Middle   Vec     // centroid of the face; halfway between the sites if it is unbounded
	Part     int32   // of ContactsIn; 0 otherwise
}

// Group is a set of sites with equal coordinates.
type Group struct {
	Representative int32   // the first of them
	Members        []int32 // all of them, ascending
}

// Facts are what can be said of a diagram before any cell is computed.
type Facts struct {
	Sites    int // given
	Inside   int // taking part, duplicates included
	Distinct int // cells

	Outside         []int32   // sites left out: beyond the tolerance outside the solid
	OutsideDistance []float64 // of each of them, to the surface
	OnWall          []int32   // sites on the surface of the solid or within the tolerance of it
	Groups          []Group   // of two or more sites with equal coordinates, by representative

	// Dimension of the sites that take part, decided exactly: 0 equal, 1 on a
	// line, 2 in a plane, 3 otherwise; -1 if there are none.
	Dimension int
	// Extent of them along their principal axes, longest first.
	Extent [3]float64
	// Flat: the sites form a sheet thinner than half their spacing. Volumes of its
	// cells say more about the solid than about the sites.
	Flat bool

	Lo, Hi Vec // bounding box of the sites that take part
	// Origin is the exact shift of the coordinates that the computations use.
	Origin Vec
	// Volume of the solid; +Inf without one.
	Volume float64
}

// Cost is an estimate of what a request takes.
type Cost struct {
	Seconds  float64
	Bytes    int64
	Cells    int  // cells that have to be built
	OneByOne bool // each from the index alone
	// Slow: cells take many times longer than those of an ordinary set of sites, as
	// they do where sites lie on a curved surface.
	Slow bool
}
