package relation

import (
	"context"
	"errors"
	"slices"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/voronoi"
	"nearcell/voronoi/coverage"
)

// gaps is GAPS OF c: one row for each place that is farther from every site than
// the places around it.
var gaps = &Definition{
	Noun:    "GAPS",
	RowIs:   "place locally farthest from every site",
	Meaning: "where nobody measured: each farther from every site than all around it",
	Clauses: []string{"WITHIN", "UNCLIPPED", "FOR EACH", "OMITTING", "MEASURED IN", "STRETCHED"},
	Zoned:   true,
	Places:  true,
	Open:    openGaps,
	layout:  layoutGaps,
}

// The computed columns of GAPS, in their order; those of FOR EACH stand before
// them.
const (
	gapX = iota
	gapY
	gapZ
	gapRadius
	gapA
	gapPlace
)

func init() {
	gaps.Computed = []Column{
		gapX:      measure("x", column.Real, 1, 0, "where nobody measured, x"),
		gapY:      measure("y", column.Real, 1, 0, "where nobody measured, y"),
		gapZ:      measure("z", column.Real, 1, 0, "where nobody measured, z"),
		gapRadius: measure("radius", column.Real, 1, 0, "distance from there to the nearest site; STRETCHED: the true one to the truly nearest"),
		gapA:      measure("a", column.Text, 0, 0, "identifier of the nearest site; of several as near, the first"),
		gapPlace:  measure("place", column.Text, 0, 0, "'inside', or on a 'wall', 'edge' or 'corner' of the solid; MEASURED IN: of the part"),
	}
}

// layoutGaps gives the columns. That of a is no site's own in the sense of Column.Site:
// which gaps have a certain nearest site is known only when all cells are.
func layoutGaps(b *Bound) []Column {
	computed := b.computed()
	id := b.Input[b.ID]
	computed[gapA].Type, computed[gapA].Unit = id.Type, id.Unit
	own := b.ownColumns(computed)
	columns := make([]Column, 0, len(b.Clauses.Each)+len(computed))
	for _, i := range b.Clauses.Each {
		columns = append(columns, own[i])
	}
	return append(columns, computed...)
}

type gap = coverage.Gap

// placeNames are the texts of the column place, by coverage.Place.
var placeNames = &column.Dict{Texts: []string{
	coverage.Inside.String(), coverage.Wall.String(), coverage.Edge.String(), coverage.Corner.String(),
}}

type gapRows struct {
	*sites
	each int // number of columns of FOR EACH, which come first
}

func openGaps(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	s, err := newSites(b, env, input, r)
	if err != nil {
		return nil, err
	}
	return &gapRows{sites: s, each: len(b.Clauses.Each)}, nil
}

// secondsPerGap is what the vertices around a site and the walls that its cell meets take
// to be looked at, on one core of a small machine.
const secondsPerGap = 40e-6

// Cost is that of the tetrahedralisation and of looking at every place where it is
// farthest from the sites, in the space and on the walls.
func (g *gapRows) Cost() (voronoi.Cost, error) {
	c, err := g.costOfTetrahedra()
	c.Seconds += secondsPerGap * float64(c.Cells)
	return c, err
}

// gapBatch is the batch at hand: the row of the input that a stands for, and the
// place, of each of its rows.
type gapBatch struct {
	*batches
	rows   []int32
	places []uint32
}

func (g *gapRows) Run(ctx context.Context, emit func(*column.Batch) error) (err error) {
	defer func() { // where emit has had enough rows, too
		g.said.partial = err != nil
		g.tell()
	}()
	out := &gapBatch{batches: newBatches(g.b, g.r.Need, g.each, emit)}
	for i, p := range g.parts {
		out.now(p.Zone, noPart)
		if err := g.part(ctx, p, out); err != nil {
			return err
		}
		g.partDone(i)
	}
	return g.flush(out)
}

// tell writes the notes.
func (g *gapRows) tell() {
	g.sites.tell()
	if !g.b.Closed() && !g.b.measuredIn() && len(g.parts) > 0 {
		g.env.Notes.Add(note.Note, note.Cells, "without a solid, only places among the sites of %s can be told: beyond the outermost "+
			"the distance grows without end; WITHIN a solid gives those at its walls too", g.b.Name)
	}
}

// part emits the gaps of one part, the largest first.
func (g *gapRows) part(ctx context.Context, p *Part, out *gapBatch) error {
	if !g.wanted(p) {
		return nil
	}
	h, err := g.open(ctx, p)
	if err != nil {
		return err
	}
	first := firstRows(p)
	err = g.gapsIn(ctx, h, p, func(region int32, found []gap) error {
		out.now(p.Zone, region)
		for i := range found {
			g.put(&found[i], p.Rows[first[found[i].Site]], out)
			if out.room() == 0 {
				if err := g.flush(out); err != nil {
					return err
				}
			}
		}
		return nil
	})
	var undivided *coverage.UndividedError
	if errors.As(err, &undivided) {
		return problem.New("failed", g.b.Place, "GAPS cannot be told in %s: it has no convex parts to look through", g.b.Clauses.SolidName).
			WithHint("a BOX or a PRISM has")
	}
	if err != nil {
		return g.refused(err, p)
	}
	return nil
}

// firstRows is the first row (as an index into p.Rows) of each site.
func firstRows(p *Part) []int32 {
	first := make([]int32, len(p.Sites))
	for k, s := range slices.Backward(p.Site) {
		first[s] = int32(k)
	}
	return first
}

// put writes one row.
func (g *gapRows) put(gap *coverage.Gap, row int32, out *gapBatch) {
	out.rows = append(out.rows, row)
	out.places = append(out.places, uint32(gap.Place))
	columns := out.columns[g.each:]
	for c, value := range [...]float64{gapX: gap.At.X, gapY: gap.At.Y, gapZ: gap.At.Z, gapRadius: gap.Radius} {
		if v := &columns[c]; v.Type != column.Null {
			v.F[out.n] = value
		}
	}
	out.n++
}

func (g *gapRows) flush(out *gapBatch) error {
	err := out.flush(func(i int) (column.Vector, bool) {
		switch {
		case !needed(g.r.Need, i):
			return column.Vector{}, false
		case i < g.each:
			return column.Gather(&g.input.Cols[g.b.Clauses.Each[i]], out.rows), true
		case i == g.each+gapA:
			return column.Gather(&g.input.Cols[g.b.ID], out.rows), true
		case i == g.each+gapPlace:
			return column.Vector{Type: column.Text, N: len(out.places), C: slices.Clone(out.places), Dict: placeNames}, true
		}
		return column.Vector{}, false
	})
	out.rows, out.places = out.rows[:0], out.places[:0]
	return err
}
