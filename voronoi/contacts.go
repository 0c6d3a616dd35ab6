package voronoi

import (
	"context"
	"nearcell/voronoi/polyhedron"
)

// Contacts calls yield for each of the given sites in their order (nil: all
// sites).
func (d *Diagram) Contacts(ctx context.Context, sites []int32, yield func(site int32, contacts []Contact) error) error {
	panic("not written")
}

// Insert makes c the cell that p would get among the sites.
func (d *Diagram) Insert(p Vec, c *polyhedron.Cell) error { panic("not written") }
