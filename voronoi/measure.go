package voronoi

import "context"

// Measure computes the wanted measures of the cells of the given sites; nil
// means all sites.
func (d *Diagram) Measure(ctx context.Context, want Measures, sites []int32) (*Cells, error) {
	panic("not written")
}

// Cost estimates what Measure takes for n cells.
func (d *Diagram) Cost(want Measures, n int) Cost { return Cost{OneByOne: true, Cells: n} }
