package relation

import (
	"context"
	"math"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/spatial"
	"nearcell/voronoi"
)

// autocorrelation is AUTOCORRELATION OF c FOR a: one row for each partition, with how much
// more alike readings are where cells touch.
var autocorrelation = &Definition{
	Noun:    "AUTOCORRELATION",
	RowIs:   "campaign",
	Meaning: "whether readings are more alike, or less, where cells touch",
	Example: "SELECT moran_i, z_score, p_value, geary_c FROM AUTOCORRELATION OF hall FOR temp;",
	Clauses: []string{"FOR", "WEIGHTS", "WITHIN", "UNCLIPPED", "FOR EACH", "OMITTING", "STRETCHED"},
	Zoned:   true,
	Open:    openAutocorrelation,
	layout: func(b *Bound) []Column {
		computed := b.computed()
		own := b.ownColumns(computed)
		columns := make([]Column, 0, len(b.Clauses.Each)+len(computed))
		for _, i := range b.Clauses.Each {
			columns = append(columns, own[i])
		}
		return append(columns, computed...)
	},
}

// The computed columns of AUTOCORRELATION behind those of FOR EACH.
const (
	autoMoran = iota
	autoExpected
	autoVariance
	autoScore
	autoP
	autoGeary
)

func init() {
	autocorrelation.Computed = []Column{
		autoMoran:    measure("moran_i", column.Real, 0, 0, "Moran's I: above its expectation, neighbours are alike; below, unlike"),
		autoExpected: measure("expected", column.Real, 0, 0, "what I is on average where the readings are dealt to the sites at random: -1/(n-1)"),
		autoVariance: measure("variance", column.Real, 0, 0, "how far I then scatters about it, squared (randomisation)"),
		autoScore:    measure("z_score", column.Real, 0, 0, "I less its expectation, over the root of the variance"),
		autoP:        measure("p_value", column.Real, 0, 0, "share of random arrangements, this one among them, whose I is as far from its expectation"),
		autoGeary:    measure("geary_c", column.Real, 0, 0, "Geary's c: 1 by chance, below 1 where neighbours are alike; it looks at small distances more than I does"),
	}
}

type autoRows struct {
	likeness
	each int
}

func openAutocorrelation(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	s, err := newSites(b, env, input, r)
	if err != nil {
		return nil, err
	}
	return &autoRows{likeness{sites: s, of: b.Clauses.For[0]}, len(b.Clauses.Each)}, nil
}

func (x *autoRows) Cost() (voronoi.Cost, error) { return x.cost(voronoi.Neighbours) }

func (x *autoRows) Forecast(ctx context.Context) (*Forecast, error) {
	return x.likely(ctx, func(f *Forecast) float64 { return f.Parts }, "permutations")
}

func (x *autoRows) Run(ctx context.Context, emit func(*column.Batch) error) error {
	defer x.tell()
	out := newBatches(x.b, x.r.Need, x.each, emit)
	var first []int32
	flush := func() error {
		err := out.flush(func(i int) (column.Vector, bool) {
			if i >= x.each || !needed(x.r.Need, i) {
				return column.Vector{}, false
			}
			return column.Gather(&x.input.Cols[x.b.Clauses.Each[i]], first), true
		})
		first = first[:0]
		return err
	}
	for i, p := range x.parts {
		if !x.wanted(p) {
			continue
		}
		found, err := x.part(ctx, p)
		if err != nil {
			return err
		}
		out.now(p.Zone, noPart)
		first = append(first, p.Rows[0])
		for k, v := range [...]float64{autoMoran: found.I, autoExpected: found.Expected, autoVariance: found.Variance, autoScore: found.Z, autoP: found.P, autoGeary: found.C} {
			orNull(&out.columns[x.each+k], out.n, v)
		}
		out.n++
		if out.room() == 0 {
			if err := flush(); err != nil {
				return err
			}
		}
		x.partDone(i)
	}
	return flush()
}

func (x *autoRows) part(ctx context.Context, p *Part) (spatial.Global, error) {
	nan := math.NaN()
	none := spatial.Global{I: nan, Expected: nan, Variance: nan, Z: nan, P: nan, C: nan}
	if _, err := x.open(ctx, p); err != nil { // for what its facts say
		return none, err
	}
	g, err := x.linked(ctx, p)
	if g == nil || err != nil {
		return none, err
	}
	found, err := spatial.Autocorrelation(ctx, g.Graph, g.values, x.permuted(needed(x.r.Need, x.each+autoP)))
	if !math.IsNaN(found.I) {
		x.defined++
		if found.I > found.Expected {
			x.smooth++
		}
		if found.Variance == 0 {
			x.complete++
		}
	}
	return found, err
}

func (x *autoRows) tell() {
	x.likeness.tell()
	if x.smooth > 0 {
		x.env.Notes.Add(note.Note, note.Weights, "any field that varies smoothly clusters: a large moran_i says that %s is smooth at this spacing, not that anything is wrong",
			x.b.Input[x.of].Name)
	}
	if x.defined > x.few && needed(x.r.Need, x.each+autoP) {
		x.tellChance("of the readings over all sites")
	}
}
