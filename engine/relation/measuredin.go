package relation

import (
	"context"
	"slices"

	"nearcell/catalog/column"
	"nearcell/engine/diagram"
	"nearcell/voronoi"
	"nearcell/voronoi/solid"
)

// MEASURED IN: all sites divide the space of a Part, and what is measured counts inside
// regions of it, one row for each that a cell reaches into. The word part is the user's
// for these regions; a Part of this package is rows that share a diagram.

// measuredIn tells whether rows count in regions.
func (b *Bound) measuredIn() bool { return len(b.Clauses.Measured) > 0 }

// bodies are what the regions share with the space of a part; nil where that is nothing.
func (b *Bound) bodies(p *Part) []solid.Solid {
	if b.Clauses.Shared != nil {
		return b.Clauses.Shared[max(0, p.Zone)]
	}
	list := make([]solid.Solid, len(b.Clauses.Measured))
	for i, r := range b.Clauses.Measured {
		list[i] = r.Solid
	}
	return list
}

// eachRegion calls do for the regions that a part reaches into, each a solid of its own;
// without MEASURED IN once, with noPart and nil.
func (b *Bound) eachRegion(p *Part, do func(region int32, within solid.Solid) error) error {
	if !b.measuredIn() {
		return do(noPart, nil)
	}
	for i, body := range b.bodies(p) {
		if body == nil {
			continue
		}
		if err := do(int32(i), body); err != nil {
			return err
		}
	}
	return nil
}

// dividedParts are the regions by their convex pieces, for relations of which binding has
// seen to it that all have them.
func (b *Bound) dividedParts() []solid.Divided {
	list := make([]solid.Divided, len(b.Clauses.Measured))
	for i, r := range b.Clauses.Measured {
		list[i] = r.Solid.(solid.Divided)
	}
	return list
}

// partInRegions emits the rows of a part of CELLS: by site, then by region.
func (c *cellRows) partInRegions(ctx context.Context, p *Part, rows *[]int32, out *batches, flush func() error) error {
	if !c.wanted(p) {
		return nil
	}
	h, err := c.open(ctx, p)
	if err != nil {
		return err
	}
	ks, list := c.shown(p, h.Facts())
	if len(ks) == 0 {
		return nil
	}
	measured, err := h.MeasureIn(ctx, c.want, list, c.b.bodies(p), c.progress())
	if err != nil {
		return c.refused(err, p)
	}
	if err := c.lookBeyond(ctx, h, p); err != nil {
		return err
	}
	c.said.rows += len(ks)
	for _, k := range ks {
		for i := range measured[p.Site[k]] {
			m := &measured[p.Site[k]][i]
			out.now(p.Zone, m.Part)
			*rows = append(*rows, p.Rows[k])
			c.fillRegion(out, p, int(k), m)
			if out.room() == 0 {
				if err := flush(); err != nil {
					return err
				}
			}
		}
	}
	return nil
}

// fillRegion writes the computed columns of one row.
func (c *cellRows) fillRegion(out *batches, p *Part, k int, m *voronoi.PartMeasures) {
	share := p.share(k)
	for i := range c.b.Def.Computed {
		v := &out.columns[c.own+i]
		if v.Type == column.Null {
			continue
		}
		switch i {
		case cellVolume:
			v.F[out.n] = m.Volume * share
		case cellArea:
			v.F[out.n] = m.Area * share
		case cellWallArea:
			v.F[out.n] = m.WallArea * share
		case cellFaces:
			v.I[out.n] = int64(m.Faces)
		case cellNeighbours:
			v.I[out.n] = int64(m.Neighbours)
		case cellBounded:
			column.SetBit(v.Bits, out.n)
		case cellClipped:
			if m.Clipped {
				column.SetBit(v.Bits, out.n)
			}
		case cellX, cellY, cellZ:
			v.F[out.n] = component(m.Centroid, i-cellX)
		case cellFarthest:
			v.F[out.n] = m.Farthest
		case cellNearestFace:
			v.F[out.n] = m.NearestFace
		default: // edges, vertices, and what a part does not measure
			v.SetNull(out.n)
		}
	}
	out.n++
}

// withoutValue are the computed columns of CELLS that a region has no value of.
func (c *cellRows) withoutValue() []string {
	var names []string
	for _, i := range []int{cellEdges, cellVertices, cellHidden} {
		if needed(c.r.Need, c.own+i) {
			names = append(names, c.b.Columns[c.own+i].Name)
		}
	}
	return names
}

// contactsIn gives the contacts of a part's cells: whole, or as far as they lie in
// regions.
func (c *contactRows) contactsIn(p *Part, h *diagram.Handle) contactsFunc {
	if !c.b.measuredIn() {
		return h.Contacts
	}
	return func(ctx context.Context, sites []int32, progress func(done, total int), yield func(site int32, contacts []voronoi.Contact) error) error {
		return h.ContactsIn(ctx, sites, c.b.bodies(p), progress, yield)
	}
}

// gapsIn are the gaps of a part by region, -1 for the whole.
func (g *gapRows) gapsIn(ctx context.Context, h *diagram.Handle, p *Part, put func(region int32, found []gap) error) error {
	if !g.b.measuredIn() {
		found, err := h.Gaps(ctx, p.Sites, g.env.Threads, g.progress())
		if err != nil {
			return err
		}
		return put(noPart, found)
	}
	for i, body := range g.b.bodies(p) {
		if body == nil {
			continue
		}
		found, err := h.GapsIn(ctx, p.Sites, body, g.env.Threads, g.progress())
		if err != nil {
			return err
		}
		if err := put(int32(i), found); err != nil {
			return err
		}
	}
	return nil
}

// takes tells whether a relation has a clause.
func (d *Definition) takes(clause string) bool { return slices.Contains(d.Clauses, clause) }
