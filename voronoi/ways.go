package voronoi

import (
	"context"
	"errors"

	"nearcell/voronoi/delaunay"
)

// Whole tells which way Measure goes for the cells of the given sites (nil: all): with
// the tetrahedralisation of all sites, or else one by one. The last bits of measures may
// differ between the two, so whoever keeps measures keeps those of each way apart, and
// gives what a request of this size would have computed.
func (d *Diagram) Whole(want Measures, sites []int32) (bool, error) {
	n := d.tree.Len()
	if sites != nil {
		r, err := d.request(sites)
		if err != nil {
			return false, err
		}
		n = len(r.cells)
	}
	return d.needsCell(want) && d.worthWhole(n), nil
}

// MeasureWay is Measure the given way, however many sites are asked for. went is the way
// that it went: one by one where the tetrahedralisation takes more than Options.Memory.
func (d *Diagram) MeasureWay(ctx context.Context, whole bool, want Measures, sites []int32) (cells *Cells, went bool, err error) {
	r, err := d.request(sites)
	if err != nil {
		return nil, false, err
	}
	var g *dual
	if whole {
		g, err = d.dual(ctx)
		var memory *delaunay.MemoryError
		if err != nil && !errors.As(err, &memory) {
			return nil, false, err
		}
	}
	out := d.blank(want, r)
	if err := d.fill(ctx, g, r, want, out); err != nil {
		return nil, false, err
	}
	return out, g != nil, nil
}

// Presence is what Cells.Inside and Cells.Multiplicity are of every site.
func (d *Diagram) Presence() (inside []bool, multiplicity []int32) {
	inside, multiplicity = make([]bool, len(d.cell)), make([]int32, len(d.cell))
	delaunay.AdviseHugePages(multiplicity)
	for s, c := range d.cell {
		if c >= 0 {
			inside[s], multiplicity[s] = true, d.count[c]
		}
	}
	return inside, multiplicity
}
