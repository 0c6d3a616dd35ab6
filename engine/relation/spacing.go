package relation

import (
	"context"
	"math"
	"strconv"

	"nearcell/catalog/column"
	"nearcell/engine/diagram"
	"nearcell/engine/note"
	"nearcell/voronoi"
	"nearcell/voronoi/coverage"
	"nearcell/voronoi/solid"
)

// spacing is SPACING OF c: one row for each partition, with how evenly the sites lie.
var spacing = &Definition{
	Noun:    "SPACING",
	RowIs:   "campaign",
	Meaning: "how densely and how evenly the sites lie in their space; with DISTANCES also how much of it lies farther from every site (beyond_1, beyond_2 …)",
	Example: `SELECT covering_radius, mesh_ratio, beyond_1 FROM SPACING OF hall DISTANCES (5);`,
	Clauses: []string{"DISTANCES", "ACROSS", "WITHIN", "UNCLIPPED", "FOR EACH", "OMITTING", "MEASURED IN", "STRETCHED"},
	Zoned:   true,
	Regions: true,
	Open:    openSpacing,
	layout: func(b *Bound) []Column {
		computed := b.computed()
		for i, d := range b.Clauses.Distances {
			meaning := "share of the space farther than " + column.FormatReal(d) + " from every site"
			if b.Clauses.Across > 0 {
				meaning = "share of the space outside the ellipsoids about the sites that reach " + column.FormatReal(d) + " across and " +
					strconv.FormatFloat(d*(b.Clauses.Up/b.Clauses.Across), 'g', 6, 64) + " up"
			}
			computed = append(computed, Column{Field: column.Field{Name: "beyond_" + strconv.Itoa(i+1), Type: column.Real, Meaning: meaning}, Site: -1})
		}
		return append(b.eachColumns(computed), computed...)
	},
}

// The computed columns of SPACING behind those of FOR EACH; beyond_1 … follow.
const (
	spacingRadius = iota
	spacingSeparation
	spacingRatio
	spacingSquare
	spacingEffective
	spacingLargest
	spacingBeyond
)

func init() {
	spacing.Computed = []Column{
		spacingRadius:     measure("covering_radius", column.Real, 1, voronoi.Farthest, "largest distance of any place of the space to the nearest site; STRETCHED: the true one to the site nearest by stretched distances, here and below"),
		spacingSeparation: measure("separation", column.Real, 1, voronoi.NearestFace, "half the least distance between two sites; NULL for one site"),
		spacingRatio:      measure("mesh_ratio", column.Real, 0, voronoi.Farthest|voronoi.NearestFace, "covering_radius over separation: near 1 is even, large is crowded here and empty there"),
		spacingSquare:     measure("mean_square_distance", column.Real, 2, 0, "mean over the space of the squared distance to the nearest site"),
		spacingEffective:  measure("n_eff", column.Real, 0, voronoi.Volume, "number of sites with equal cells that would weigh as evenly: 1 over the sum of the squared shares"),
		spacingLargest:    measure("largest_share", column.Real, 0, voronoi.Volume, "share of the space that the largest cell has"),
	}
}

// eachColumns are those of FOR EACH, which come first where a row is no site.
func (b *Bound) eachColumns(computed []Column) []Column {
	own := b.ownColumns(computed)
	columns := make([]Column, 0, len(b.Clauses.Each)+len(computed))
	for _, i := range b.Clauses.Each {
		columns = append(columns, own[i])
	}
	return columns
}

type spacingRows struct {
	*sites
	each    int
	endless bool
	single  bool
	volume  float64
	beyond  []float64
}

func openSpacing(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	s, err := newSites(b, env, input, r)
	if err != nil {
		return nil, err
	}
	return &spacingRows{sites: s, each: len(b.Clauses.Each)}, nil
}

func (s *spacingRows) Cost() (voronoi.Cost, error) {
	return s.cost(voronoi.Farthest | voronoi.NearestFace | voronoi.Volume)
}

// Forecast has one row for each partition.
func (s *spacingRows) Forecast(ctx context.Context) (*Forecast, error) {
	f, err := s.forecast(ctx, voronoi.Farthest|voronoi.NearestFace|voronoi.Volume, false)
	if err != nil {
		return nil, err
	}
	f.Measures, f.Rows = []string{"spacing"}, f.Parts
	return f, nil
}

func (s *spacingRows) wants(i int) bool { return needed(s.r.Need, s.each+i) }

func (s *spacingRows) Run(ctx context.Context, emit func(*column.Batch) error) (err error) {
	defer func() { s.tell() }()
	out := newBatches(s.b, s.r.Need, s.each, emit)
	var first []int32
	flush := func() error {
		err := out.flush(func(i int) (column.Vector, bool) {
			if i >= s.each || !needed(s.r.Need, i) {
				return column.Vector{}, false
			}
			return column.Gather(&s.input.Cols[s.b.Clauses.Each[i]], first), true
		})
		first = first[:0]
		return err
	}
	for i, p := range s.parts {
		if !s.wanted(p) {
			continue
		}
		err := s.b.eachRegion(p, func(region int32, within solid.Solid) error {
			out.now(p.Zone, region)
			if err := s.part(ctx, p, region, within, out); err != nil {
				return err
			}
			first = append(first, p.Rows[0])
			out.n++
			if out.room() == 0 {
				return flush()
			}
			return nil
		})
		if err != nil {
			return err
		}
		s.partDone(i)
	}
	return flush()
}

// part writes the row of one partition, or of one region of it.
func (s *spacingRows) part(ctx context.Context, p *Part, region int32, within solid.Solid, out *batches) error {
	h, err := s.open(ctx, p)
	if err != nil {
		return err
	}
	m, err := h.Measure(ctx, voronoi.Farthest|voronoi.NearestFace|voronoi.Volume, 0, nil, s.progress())
	if err != nil {
		return s.refused(err, p)
	}
	volumes, farthest := m.Volume, m.Farthest
	if within != nil {
		if volumes, farthest, err = s.inRegion(ctx, h, p, region); err != nil {
			return s.refused(err, p)
		}
	}
	columns := out.columns[s.each:]
	put := func(i int, x float64) { // NaN is NULL
		if math.IsNaN(x) {
			if columns[i].Type != column.Null {
				columns[i].SetNull(out.n)
			}
			return
		}
		number(&columns[i], out.n, x)
	}
	radius, separation := 0.0, math.Inf(1)
	var volume, squares voronoi.Sum
	largest := 0.0
	for k, site := range p.Site {
		if !m.Inside[site] {
			continue
		}
		radius, separation = max(radius, farthest[site]), min(separation, m.NearestFace[site])
		v := volumes[site] * p.share(k)
		volume.Add(v)
		squares.Add(float64(v * v))
		largest = max(largest, v)
	}
	if math.IsInf(separation, 1) {
		separation, s.single = math.NaN(), true
	}
	put(spacingRadius, radius)
	put(spacingSeparation, separation)
	put(spacingRatio, radius/separation)
	if p.Solid == nil && within == nil {
		s.endless = true
		for i := spacingSquare; i < spacingBeyond+len(s.b.Clauses.Distances); i++ {
			put(i, math.NaN())
		}
		return nil
	}
	total := volume.Value()
	put(spacingEffective, total*total/squares.Value())
	put(spacingLargest, largest/total)
	return s.spread(ctx, p, within, put)
}

// inRegion are the volumes of the cells in a region and how far they reach in it.
func (s *sites) inRegion(ctx context.Context, h *diagram.Handle, p *Part, region int32) (volumes, farthest []float64, err error) {
	in, err := h.MeasureIn(ctx, voronoi.Volume|voronoi.Farthest, nil, s.b.bodies(p), s.progress())
	if err != nil {
		return nil, nil, err
	}
	volumes, farthest = make([]float64, len(in)), make([]float64, len(in))
	for site, list := range in {
		for i := range list {
			if list[i].Part == region {
				volumes[site], farthest[site] = list[i].Volume, list[i].Farthest
			}
		}
	}
	return volumes, farthest, nil
}

// spread writes what has to be integrated over the space.
func (s *spacingRows) spread(ctx context.Context, p *Part, within solid.Solid, put func(i int, x float64)) error {
	any := s.wants(spacingSquare)
	for i := range s.b.Clauses.Distances {
		any = any || s.wants(spacingBeyond+i)
	}
	if !any {
		return nil
	}
	h, err := s.open(ctx, p)
	if err != nil {
		return err
	}
	c := &s.b.Clauses
	found, err := h.Spacing(ctx, c.Distances, c.Across, c.Up, coverage.Options{Threads: s.env.Threads, Progress: s.progress(), Within: within})
	if err != nil {
		return s.solidKnown(err, p)
	}
	put(spacingSquare, found.MeanSquare)
	for i, x := range found.Beyond {
		put(spacingBeyond+i, x/found.Volume)
	}
	return nil
}

func (s *spacingRows) tell() {
	s.sites.tell()
	if s.endless {
		s.env.Notes.Add(note.Note, note.Cells, "without a solid the space around %s has no end: what rests on volumes is NULL, and the covering radius Infinity; WITHIN a solid gives it one", s.b.Name)
	}
	if s.single {
		s.env.Notes.Add(note.Note, note.Sites, "a partition of %s has one place only: it has no separation", s.b.Name)
	}
}
