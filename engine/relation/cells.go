package relation

import (
	"context"
	"math"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/diagram"
	"nearcell/engine/note"
	"nearcell/voronoi"
)

// cells is CELLS OF c: one row for each site, with the measures of its cell.
var cells = &Definition{
	Noun:    "CELLS",
	RowIs:   "site",
	Meaning: "the space nearer to a site than to any other",
	Clauses: []string{"WITHIN", "UNCLIPPED", "FOR EACH", "OMITTING", "MEASURED IN", "STRETCHED", "DISTANCES", "ACROSS", "UNCERTAINTY"},
	Own:     true,
	Zoned:   true,
	Open:    openCells,
	layout: func(b *Bound) []Column {
		computed := b.computed()
		return append(append(b.ownColumns(computed), computed...), b.shapeColumn()...)
	},
}

// The computed columns of CELLS, in their order.
const (
	cellVolume = iota
	cellArea
	cellFaces
	cellEdges
	cellVertices
	cellNeighbours
	cellBounded
	cellClipped
	cellWallArea
	cellX
	cellY
	cellZ
	cellFarthest
	cellNearestFace
	cellHidden
)

func init() {
	cells.Computed = []Column{
		cellVolume:      measure("volume", column.Real, 3, voronoi.Volume, "volume of the cell"),
		cellArea:        measure("area", column.Real, 2, voronoi.Area, "surface of the cell, contacts and walls"),
		cellFaces:       measure("faces", column.Integer, 0, voronoi.Faces, "faces of the cell, contacts and walls"),
		cellEdges:       measure("edges", column.Integer, 0, voronoi.Faces, "edges of the cell; NULL where a re-entrant part of the solid cuts it"),
		cellVertices:    measure("vertices", column.Integer, 0, voronoi.Faces, "corners of the cell; NULL where a re-entrant part of the solid cuts it"),
		cellNeighbours:  measure("neighbours", column.Integer, 0, voronoi.Neighbours, "cells that share a face with it"),
		cellBounded:     measure("bounded", column.Boolean, 0, voronoi.Bounded, "the cell does not run to infinity"),
		cellClipped:     measure("clipped", column.Boolean, 0, voronoi.Clipped, "a wall of the solid bounds the cell"),
		cellWallArea:    measure("wall_area", column.Real, 2, voronoi.WallArea, "part of the cell's surface on walls of the solid"),
		cellX:           measure("cx", column.Real, 1, voronoi.Centroid, "centroid of the cell, x"),
		cellY:           measure("cy", column.Real, 1, voronoi.Centroid, "centroid of the cell, y"),
		cellZ:           measure("cz", column.Real, 1, voronoi.Centroid, "centroid of the cell, z"),
		cellFarthest:    measure("farthest", column.Real, 1, voronoi.Farthest, "distance from the site to the farthest point of its cell"),
		cellNearestFace: measure("nearest_face", column.Real, 1, voronoi.NearestFace, "half the distance to the nearest site elsewhere"),
		cellHidden:      measure("hidden", column.Real, 0, 0, "share of the cell that its site cannot see for the walls of the solid, by sampling"),
	}
	cells.Computed[cellHidden].Costly = true
	for _, i := range []int{cellVolume, cellArea, cellWallArea} {
		cells.Computed[i].Extensive = true
	}
}

func measure(name string, t column.Type, power int, m voronoi.Measures, meaning string) Column {
	return Column{Field: column.Field{Name: name, Type: t, Meaning: meaning}, Site: -1, Measures: m, Power: power}
}

type cellRows struct {
	*sites
	want voronoi.Measures
	own  int // number of own columns, which come first

	hidden []float64 // by site of the part at hand, if asked for
	spread float64   // largest standard error of it

	pieces [][]voronoi.Piece // by site of the part at hand, if asked for
	far    far               // what lies beyond DISTANCES
}

func openCells(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	s, err := newSites(b, env, input, r)
	if err != nil {
		return nil, err
	}
	c := &cellRows{sites: s, own: len(b.Input), want: b.Measures(r.Need)}
	if !b.Closed() && !b.measuredIn() && c.want&(voronoi.Volume|voronoi.Area|voronoi.Centroid|voronoi.Farthest) != 0 {
		c.want |= voronoi.Bounded // for the note
	}
	return c, nil
}

func (c *cellRows) Cost() (voronoi.Cost, error) { return c.cost(c.want) }

func (c *cellRows) Run(ctx context.Context, emit func(*column.Batch) error) (err error) {
	defer func() { // where emit has had enough rows, too
		c.said.partial = err != nil
		c.tell()
		c.tellHidden()
		c.far.tell(c.sites, err)
	}()
	out := newBatches(c.b, c.r.Need, c.own, emit)
	rows := make([]int32, 0, BatchRows)
	flush := func() error {
		err := out.flush(func(i int) (column.Vector, bool) {
			if i >= c.own || !needed(c.r.Need, i) {
				return column.Vector{}, false
			}
			return column.Gather(&c.input.Cols[i], rows), true
		})
		rows = rows[:0]
		return err
	}
	if names := c.withoutValue(); c.b.measuredIn() && len(names) > 0 {
		c.env.Notes.Add(note.Note, note.Cells, "with MEASURED IN, %s of %s %s NULL: a part of a cell has none", enumerated(names),
			c.b.Title(), are(len(names)))
	}
	given := int64(0)
	for i, p := range c.parts {
		if c.r.Most > 0 && given >= c.r.Most {
			break
		}
		if c.b.measuredIn() {
			if err := c.partInRegions(ctx, p, &rows, out, flush); err != nil {
				return err
			}
			c.partDone(i)
			continue
		}
		out.now(p.Zone, noPart)
		measured, ks, err := c.measured(ctx, p)
		if err != nil {
			return err
		}
		if most := c.r.Most - given; c.r.Most > 0 && int64(len(ks)) > most {
			ks = ks[:most]
		}
		given += int64(len(ks))
		for len(ks) > 0 {
			n := min(len(ks), out.room())
			for _, k := range ks[:n] {
				rows = append(rows, p.Rows[k])
			}
			c.fill(out, p, measured, ks[:n])
			ks = ks[n:]
			if out.room() == 0 {
				if err := flush(); err != nil {
					return err
				}
			}
		}
		c.partDone(i)
	}
	return flush()
}

// enumerated names things one after the other: a, b and c.
func enumerated(names []string) string {
	last := len(names) - 1
	if last < 1 {
		return strings.Join(names, "")
	}
	return strings.Join(names[:last], ", ") + " and " + names[last]
}

// measured computes the cells of a part that are shown.
func (c *cellRows) measured(ctx context.Context, p *Part) (*voronoi.Cells, []int32, error) {
	if !c.wanted(p) {
		return nil, nil, nil
	}
	h, err := c.open(ctx, p)
	if err != nil {
		return nil, nil, err
	}
	if err := c.lookBeyond(ctx, h, p); err != nil {
		return nil, nil, err
	}
	f := h.Facts()
	ks, list := c.shown(p, f)
	if needed(c.r.Need, c.own+cellHidden) {
		if err := c.lookAround(ctx, h, list); err != nil {
			return nil, nil, c.refused(err, p)
		}
	}
	if c.shaped() {
		if err := c.shape(ctx, h, list); err != nil {
			return nil, nil, c.refused(err, p)
		}
	}
	if len(ks) == 0 || c.want == 0 {
		return &voronoi.Cells{}, ks, nil
	}
	m, err := h.Measure(ctx, c.want, c.r.Also, list, c.progress())
	if err != nil {
		return nil, nil, c.refused(err, p)
	}
	c.count(p, m, ks)
	return m, ks, nil
}

// lookAround estimates what the sites do not see of their cells.
func (c *cellRows) lookAround(ctx context.Context, h *diagram.Handle, list []int32) error {
	sight, err := h.Hidden(ctx, list, c.progress())
	if err != nil {
		return err
	}
	c.hidden = make([]float64, h.Len())
	for i, share := range sight.Hidden {
		site := i
		if list != nil {
			site = int(list[i])
		}
		c.hidden[site] = share
		c.spread = max(c.spread, sight.Error[i])
	}
	return nil
}

// tellHidden says how well the hidden shares are known.
func (c *cellRows) tellHidden() {
	if c.spread > 0 {
		c.env.Notes.Add(note.Note, note.Cells, "hidden is estimated from places drawn in each cell of %s; its standard error is at most %.2g", c.b.Name, c.spread)
	}
}

// count takes note of cells that are not as one expects.
func (c *cellRows) count(p *Part, m *voronoi.Cells, ks []int32) {
	c.said.rows += len(ks)
	shape := needed(c.r.Need, c.own+cellEdges) || needed(c.r.Need, c.own+cellVertices)
	for _, k := range ks {
		site := p.Site[k]
		if !c.b.Closed() && c.want&voronoi.Bounded != 0 && c.want != voronoi.Bounded && !m.Bounded[site] {
			c.said.unbounded++
		}
		if shape && !m.Shaped[site] {
			c.said.unshaped++
		}
		if m.Volume != nil && c.want&voronoi.Volume != 0 && m.Volume[site] == 0 {
			c.said.empty++
		}
	}
}

// fill writes the computed columns of the rows ks of a part behind what the
// batch holds.
func (c *cellRows) fill(out *batches, p *Part, m *voronoi.Cells, ks []int32) {
	for i := range c.b.Def.Computed {
		v := &out.columns[c.own+i]
		if v.Type == column.Null {
			continue
		}
		switch i {
		case cellVolume:
			shared(v, out.n, p, ks, m.Volume)
		case cellArea:
			shared(v, out.n, p, ks, m.Area)
		case cellWallArea:
			shared(v, out.n, p, ks, m.WallArea)
		case cellFaces:
			whole(v, out.n, p, ks, m.Faces, nil)
		case cellEdges:
			whole(v, out.n, p, ks, m.Edges, m.Shaped)
		case cellVertices:
			whole(v, out.n, p, ks, m.Vertices, m.Shaped)
		case cellNeighbours:
			whole(v, out.n, p, ks, m.Neighbours, nil)
		case cellBounded:
			flags(v, out.n, p, ks, m.Bounded)
		case cellClipped:
			flags(v, out.n, p, ks, m.Clipped)
		case cellX, cellY, cellZ:
			centroid(v, out.n, p, ks, m, i-cellX)
		case cellFarthest:
			lengths(v, out.n, p, ks, m.Farthest)
		case cellNearestFace:
			lengths(v, out.n, p, ks, m.NearestFace)
		case cellHidden:
			lengths(v, out.n, p, ks, c.hidden)
		}
	}
	if c.shaped() {
		c.fillShapes(&out.columns[c.own+len(c.b.Def.Computed)], out.n, p, ks)
	}
	out.n += len(ks)
}

// shared writes measures of which each row of a site has its share.
func shared(v *column.Vector, at int, p *Part, ks []int32, values []float64) {
	for j, k := range ks {
		v.F[at+j] = values[p.Site[k]] * p.share(int(k))
	}
}

func lengths(v *column.Vector, at int, p *Part, ks []int32, values []float64) {
	for j, k := range ks {
		v.F[at+j] = values[p.Site[k]]
	}
}

// whole writes counts; where defined is false they are NULL.
func whole(v *column.Vector, at int, p *Part, ks []int32, values []int32, defined []bool) {
	for j, k := range ks {
		site := p.Site[k]
		if defined != nil && !defined[site] {
			v.SetNull(at + j)
			continue
		}
		v.I[at+j] = int64(values[site])
	}
}

func flags(v *column.Vector, at int, p *Part, ks []int32, values []bool) {
	for j, k := range ks {
		if values[p.Site[k]] {
			column.SetBit(v.Bits, at+j)
		}
	}
}

func centroid(v *column.Vector, at int, p *Part, ks []int32, m *voronoi.Cells, axis int) {
	for j, k := range ks {
		site := p.Site[k]
		if !m.HasCentroid[site] {
			v.SetNull(at + j)
			continue
		}
		v.F[at+j] = component(m.Centroid[site], axis)
	}
}

func component(p voronoi.Vec, axis int) float64 {
	switch axis {
	case 0:
		return p.X
	case 1:
		return p.Y
	case 2:
		return p.Z
	}
	return math.NaN()
}
