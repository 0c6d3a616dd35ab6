package solid

import "nearcell/voronoi/polyhedron"

// Work is the scratch that Solid.Measure needs: one for each goroutine. The zero
// value is ready. Once warm it allocates nothing.
type Work struct {
	cell polyhedron.Cell
}
