package relation

import (
	"cmp"
	"context"
	"math"
	"slices"

	"nearcell/catalog/column"
	"nearcell/engine/diagram"
	"nearcell/engine/note"
	"nearcell/voronoi"
	"nearcell/voronoi/coverage"
	"nearcell/voronoi/solid"
)

// redundancy is REDUNDANCY OF c FOR a: one row for each site, the one that is least missed
// first.
var redundancy = &Definition{
	Noun:    "REDUNDANCY",
	RowIs:   "site, least missed first",
	Meaning: "which site can go: how the mean by volume changes, and how large the largest gap is without it",
	Example: `SELECT rank, id, mean_change, radius_after FROM REDUNDANCY OF hall FOR temp ORDER BY rank LIMIT 5;`,
	Clauses: []string{"FOR", "WITHIN", "UNCLIPPED", "FOR EACH", "OMITTING", "MEASURED IN", "STRETCHED"},
	Own:     true,
	Zoned:   true,
	Regions: true,
	Open:    openRedundancy,
	layout: func(b *Bound) []Column {
		computed := b.computed()
		computed[redundancyChange].Unit = b.Input[b.Clauses.For[0]].Unit
		computed[redundancyChange].From = 1 + b.Clauses.For[0]
		return append(b.ownColumns(computed), computed...)
	},
}

// The computed columns of REDUNDANCY behind the sites' own.
const (
	redundancyRank = iota
	redundancyChange
	redundancyRadius
)

func init() {
	redundancy.Computed = []Column{
		redundancyRank:   measure("rank", column.Integer, 0, 0, "1 for the site whose going changes the mean least, upwards or downwards; equal ones by radius_after"),
		redundancyChange: measure("mean_change", column.Real, 0, 0, "the mean by volume without the site, its space given to its neighbours, less the mean with it"),
		redundancyRadius: measure("radius_after", column.Real, 1, 0, "covering radius without it: the largest distance of any place to the nearest site left"),
	}
}

type redundancyRows struct {
	*sites
	own    int
	of     int
	silent int
	lone   bool
}

func openRedundancy(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	if !b.measuredIn() {
		if err := b.needsSolid("REDUNDANCY"); err != nil {
			return nil, err
		}
	}
	s, err := newSites(b, env, input, r)
	if err != nil {
		return nil, err
	}
	return &redundancyRows{sites: s, own: len(b.Input), of: b.Clauses.For[0]}, nil
}

func (r *redundancyRows) Cost() (voronoi.Cost, error) {
	all := *r.sites
	all.r.Wanted = nil
	return all.cost(voronoi.Farthest)
}

// Forecast has one row for each site.
func (r *redundancyRows) Forecast(ctx context.Context) (*Forecast, error) {
	all := *r.sites
	all.r.Wanted = nil
	f, err := all.forecast(ctx, voronoi.Farthest|voronoi.Volume, false)
	if err != nil {
		return nil, err
	}
	f.Measures = []string{"redundancy"}
	f.RowsExact = f.RowsExact && r.r.Wanted == nil
	return f, nil
}

func (r *redundancyRows) Run(ctx context.Context, emit func(*column.Batch) error) (err error) {
	defer func() {
		r.said.partial = err != nil
		r.tell()
	}()
	out := newBatches(r.b, r.r.Need, r.own, emit)
	var rows []int32
	flush := func() error {
		err := out.flush(func(i int) (column.Vector, bool) {
			if i >= r.own || !needed(r.r.Need, i) {
				return column.Vector{}, false
			}
			return column.Gather(&r.input.Cols[i], rows), true
		})
		rows = rows[:0]
		return err
	}
	for i, p := range r.parts {
		if !r.wanted(p) {
			continue
		}
		err := r.b.eachRegion(p, func(region int32, within solid.Solid) error {
			out.now(p.Zone, region)
			missed, err := r.part(ctx, p, region, within)
			if err != nil {
				return err
			}
			for rank, m := range missed {
				row := p.Rows[m.k]
				if r.r.Wanted != nil && !column.Bit(r.r.Wanted, int(row)) {
					continue
				}
				rows = append(rows, row)
				columns := out.columns[r.own:]
				if columns[redundancyRank].Type != column.Null {
					columns[redundancyRank].I[out.n] = int64(rank + 1)
				}
				number(&columns[redundancyRadius], out.n, m.radius)
				if math.IsNaN(m.change) {
					if columns[redundancyChange].Type != column.Null {
						columns[redundancyChange].SetNull(out.n)
					}
				} else {
					number(&columns[redundancyChange], out.n, m.change)
				}
				out.n++
				if out.room() == 0 {
					if err := flush(); err != nil {
						return err
					}
				}
			}
			return nil
		})
		if err != nil {
			return err
		}
		r.partDone(i)
	}
	return flush()
}

// missed is what changes without a row.
type missed struct {
	k              int32
	change, radius float64 // NaN: not told
}

// part finds what changes without each row of a part, in the whole or in a region, least first.
func (r *redundancyRows) part(ctx context.Context, p *Part, region int32, within solid.Solid) ([]missed, error) {
	h, err := r.open(ctx, p)
	if err != nil {
		return nil, err
	}
	if err := r.notInfinite(p, r.of); err != nil {
		return nil, err
	}
	o := coverage.Options{Threads: r.env.Threads, Progress: r.progress(), Within: within}
	all, err := h.Redundancy(ctx, o)
	if err != nil {
		return nil, r.solidKnown(err, p)
	}
	read := r.readingsOf(p, r.of)
	r.silent = max(r.silent, read.rows)
	var list []int32 // sites with a reading: the space of the others is theirs
	for site := range int32(len(p.Sites)) {
		if read.count[site] > 0 {
			list = append(list, site)
		}
	}
	change := make([]float64, len(p.Sites))
	for i := range change {
		change[i] = math.NaN()
	}
	share := make([]float64, len(p.Sites))
	if len(list) > 0 {
		if err := r.changes(ctx, p, all, list, read, change, share, o); err != nil {
			return nil, err
		}
	}
	radius := make([]float64, len(p.Sites))
	whole := 0.0
	for _, l := range all {
		radius[l.Site] = l.Radius
	}
	rowsAt := make([]int32, len(p.Sites))
	for _, site := range p.Site {
		rowsAt[site]++
	}
	for _, n := range rowsAt {
		if n > 1 && whole == 0 {
			far, err := r.farthest(ctx, h, p, region, within)
			if err != nil {
				return nil, r.refused(err, p)
			}
			for _, l := range all {
				whole = max(whole, far[l.Site])
			}
		}
	}
	ks := (&residualRows{sites: r.sites}).inside(p, h)
	found := make([]missed, 0, len(ks))
	v := &r.input.Cols[r.of]
	for _, k := range ks {
		site, row := p.Site[k], int(p.Rows[k])
		m := missed{k, change[site], radius[site]}
		if rowsAt[site] > 1 {
			m.radius = whole // the others stay in its place
		}
		r.lone = r.lone || math.IsInf(m.radius, 1)
		switch n := float64(read.count[site]); {
		case v.IsNull(row):
			m.change = 0
			if len(list) == 0 {
				m.change = math.NaN()
			}
		case n > 1: // its share goes to the others in its place
			others := (read.value[site]*n - numberAt(v, row)) / (n - 1)
			m.change = share[site] * (others - read.value[site])
		}
		found = append(found, m)
	}
	slices.SortStableFunc(found, func(a, b missed) int {
		return cmp.Or(cmp.Compare(amount(a.change), amount(b.change)), cmp.Compare(a.radius, b.radius))
	})
	return found, nil
}

// farthest are the distances from the sites to the farthest points of their cells, or of what
// of these lies in a region.
func (r *redundancyRows) farthest(ctx context.Context, h *diagram.Handle, p *Part, region int32, within solid.Solid) ([]float64, error) {
	if within != nil {
		_, far, err := r.inRegion(ctx, h, p, region)
		return far, err
	}
	m, err := h.Measure(ctx, voronoi.Farthest, 0, nil, nil)
	if err != nil {
		return nil, err
	}
	return m.Farthest, nil
}

// amount is how much a mean changes; what is not told is missed most.
func amount(x float64) float64 {
	if math.IsNaN(x) {
		return math.Inf(1)
	}
	return math.Abs(x)
}

// changes finds how the mean over the sites with a reading changes without each of them.
func (r *redundancyRows) changes(ctx context.Context, p *Part, all []coverage.Loss, list []int32, read *readings, change, share []float64, o coverage.Options) error {
	losses, number := all, func(i int32) int32 { return i }
	if len(list) < len(p.Sites) {
		places := make([]voronoi.Vec, len(list))
		for i, site := range list {
			places[i] = p.Sites[site]
		}
		h, err := r.env.Diagrams.Get(ctx, places, r.options(p))
		if err != nil {
			return r.refused(err, p)
		}
		if h.Facts().Inside == 0 {
			return nil // those with a reading all lie outside
		}
		if losses, err = h.Redundancy(ctx, o); err != nil {
			return r.solidKnown(err, p)
		}
		number = func(i int32) int32 { return list[i] }
	}
	var space float64
	if o.Within != nil {
		space = o.Within.Volume()
	} else {
		space = p.Solid.Volume()
	}
	for _, l := range losses {
		site := number(l.Site)
		share[site] = l.Volume / space
		if len(l.Takers) == 0 {
			if len(losses) > 1 {
				change[site] = 0 // its cell does not reach into the region
			}
			continue // or nobody is left
		}
		var sum voronoi.Sum
		for _, t := range l.Takers {
			sum.Add(float64(t.Volume * (read.value[number(t.Site)] - read.value[site])))
		}
		change[site] = sum.Value() / space
	}
	return nil
}

func (r *redundancyRows) tell() {
	r.sites.tell()
	if r.silent > 0 {
		r.env.Notes.Add(note.Note, note.Sites, "%s is missing at %s of %s: the mean rests on the others alone and does not change without them",
			r.b.Input[r.of].Name, count(r.silent, "site"), r.b.Name)
	}
	if r.lone {
		r.env.Notes.Add(note.Note, note.Sites, "a partition of %s has one place only: without it there is no mean, and the radius is Infinity", r.b.Name)
	}
	if len(r.parts) > 0 {
		r.env.Notes.Add(note.Note, note.Rows, "each row is for that site going alone: of neighbours, each can be spared and not both")
	}
}
