package voronoi

import (
	"context"

	"nearcell/voronoi/polyhedron"
)

// EachCell calls do with the cell of each of the given sites (nil: all), in coordinates
// local to the place at of its site, as Insert makes it: labels are sites, walls, or
// polyhedron.Open where the cell has no end. Sites in one place share one cell, which
// comes once, with their representative; sites outside the solid have none.
//
// do is called by many goroutines at once, in no certain order. It must not keep or
// change the cell.
//
// It fails with what do fails with, with ctx's error, and with *NoSuchSiteError.
func (d *Diagram) EachCell(ctx context.Context, sites []int32, do func(site int32, at Vec, c *polyhedron.Cell) error) error {
	r, err := d.request(sites)
	if err != nil {
		return err
	}
	g, err := d.choose(ctx, Faces, len(r.cells))
	if err != nil {
		return err
	}
	if g != nil {
		g.list()
	}
	return d.forEach(ctx, len(r.cells), 0, len(r.cells), func(b *builder, k int) error {
		b.use(g, nil)
		cell := r.cells[k]
		b.buildWhole(cell)
		b.full.Relabel(d.site)
		return do(d.site[cell], d.place(cell), &b.full)
	})
}

// Representative is the first of the sites that stand where this one does; -1 for a
// site that takes no part.
func (d *Diagram) Representative(site int32) int32 {
	if d.cell[site] < 0 {
		return -1
	}
	return d.site[d.cell[site]]
}
