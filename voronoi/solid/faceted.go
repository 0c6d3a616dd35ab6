package solid

import "nearcell/voronoi/polyhedron"

// Faceted is a solid that knows its surface face by face and no convex parts, for users
// that need places and not only measures.
type Faceted interface {
	Solid
	// WallsIn calls do for a convex polygon for each facet of the surface in the cell,
	// local to the site, as far as the solid is on the cell's side of it. The polygon is
	// valid during the call. It returns the number of facets that meet the cell.
	WallsIn(c *polyhedron.Cell, site Vec, w *Work, do func(p *polyhedron.Polygon)) int
	// SectorsAt appends what the facets within tol of p look like from there: sectors of
	// directions.
	SectorsAt(p Vec, tol float64, buf []Sector) []Sector
	// WallsAt and Corners are as in Divided.
	WallsAt(p Vec, tol float64, buf []Plane) []Plane
	Corners() []Vec
}

// Sector is the directions between A and B, which have length 1 and are less than half a
// turn apart.
type Sector struct{ A, B Vec }
