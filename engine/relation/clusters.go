package relation

import (
	"context"
	"math"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/spatial"
	"nearcell/voronoi"
)

// clusters is CLUSTERS OF c FOR a: one row for each site, with how it and those that it
// touches stand together.
var clusters = &Definition{
	Noun:    "CLUSTERS",
	RowIs:   "site",
	Meaning: "where high readings stand together, where low ones, and where one stands against its neighbours",
	Example: "SELECT id, temp, getis_g, p_value FROM CLUSTERS OF hall FOR temp ORDER BY getis_g DESC LIMIT 5;",
	Clauses: []string{"FOR", "WEIGHTS", "WITHIN", "UNCLIPPED", "FOR EACH", "OMITTING", "STRETCHED"},
	Own:     true,
	Zoned:   true,
	Open:    openClusters,
	layout: func(b *Bound) []Column {
		computed := b.computed()
		computed[clusterMoran].Unit = weightUnit(b)
		return append(b.ownColumns(computed), computed...)
	},
}

// weightUnit is the unit of the weights, which that of the local Moran is, too.
func weightUnit(b *Bound) *column.Unit {
	switch b.Clauses.Weights {
	case byArea:
		return b.Clauses.Unit.Pow(2)
	case byContact:
		return nil
	}
	return b.Clauses.Unit
}

// The computed columns of CLUSTERS behind the sites' own.
const (
	clusterG = iota
	clusterMoran
	clusterP
)

func init() {
	clusters.Computed = []Column{
		clusterG:     measure("getis_g", column.Real, 0, 0, "G* as a z-score: high where the site and its neighbours read high together, negative where low"),
		clusterMoran: measure("local_moran", column.Real, 1, 0, "the site's part of Moran's I: above 0 where its neighbours deviate as it does, below where they are its opposite; adds up to the sum of all weights times moran_i"),
		clusterP:     measure("p_value", column.Real, 0, 0, "share of random arrangements of the other readings, this one among them, in which its neighbours are as far from what is expected"),
	}
}

type clusterRows struct {
	likeness
	own    int
	chance []float64 // p of all places
}

func openClusters(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	s, err := newSites(b, env, input, r)
	if err != nil {
		return nil, err
	}
	return &clusterRows{likeness: likeness{sites: s, of: b.Clauses.For[0]}, own: len(b.Input)}, nil
}

func (x *clusterRows) wants(i int) bool { return needed(x.r.Need, x.own+i) }

func (x *clusterRows) Cost() (voronoi.Cost, error) { return x.cost(voronoi.Neighbours) }

// secondsPerDealt is about what the permutations of one site take on one core of a small
// machine.
const secondsPerDealt = 150e-6

func (x *clusterRows) Forecast(ctx context.Context) (*Forecast, error) {
	rows, err := x.forecast(ctx, voronoi.Neighbours, false)
	if err != nil {
		return nil, err
	}
	f, err := x.likely(ctx, func(*Forecast) float64 { return rows.Rows })
	if err == nil && x.wants(clusterP) {
		f.Measures = append(f.Measures, "permutations")
		f.Cost.Seconds += f.Rows * secondsPerDealt / float64(max(1, x.env.Threads))
	}
	return f, err
}

func (x *clusterRows) Run(ctx context.Context, emit func(*column.Batch) error) (err error) {
	defer func() {
		x.said.partial = err != nil
		x.tell()
	}()
	out := newBatches(x.b, x.r.Need, x.own, emit)
	rows := make([]int32, 0, BatchRows)
	flush := func() error {
		err := out.flush(func(i int) (column.Vector, bool) {
			if i >= x.own || !needed(x.r.Need, i) {
				return column.Vector{}, false
			}
			return column.Gather(&x.input.Cols[i], rows), true
		})
		rows = rows[:0]
		return err
	}
	for i, p := range x.parts {
		found, ks, err := x.part(ctx, p)
		if err != nil {
			return err
		}
		out.now(p.Zone, noPart)
		for _, k := range ks {
			rows = append(rows, p.Rows[k])
			l := found[k]
			for c, v := range [...]float64{clusterG: l.G, clusterMoran: l.I, clusterP: l.P} {
				orNull(&out.columns[x.own+c], out.n, v)
			}
			out.n++
			if out.room() == 0 {
				if err := flush(); err != nil {
					return err
				}
			}
		}
		x.partDone(i)
	}
	return flush()
}

// part finds the statistics by row of a part, and the rows that are shown.
func (x *clusterRows) part(ctx context.Context, p *Part) ([]spatial.Local, []int32, error) {
	if !x.wanted(p) {
		return nil, nil, nil
	}
	h, err := x.open(ctx, p)
	if err != nil {
		return nil, nil, err
	}
	ks, _ := x.shown(p, h.Facts())
	found := make([]spatial.Local, len(p.Rows))
	for k := range found {
		found[k] = spatial.Local{G: math.NaN(), I: math.NaN(), P: math.NaN()}
	}
	if len(ks) == 0 || !x.wants(clusterG) && !x.wants(clusterMoran) && !x.wants(clusterP) {
		return found, ks, nil
	}
	g, err := x.linked(ctx, p)
	if g == nil || err != nil {
		return found, ks, err
	}
	list, err := spatial.Clusters(ctx, g.Graph, g.values, x.permuted(x.wants(clusterP)))
	if err != nil {
		return nil, nil, err
	}
	v := &x.input.Cols[x.of]
	for k, site := range p.Site {
		if place := g.place[site]; place >= 0 && !v.IsNull(int(p.Rows[k])) {
			found[k] = list[place]
		}
	}
	any := false
	for _, l := range list {
		any = any || !math.IsNaN(l.I)
		x.chance = append(x.chance, l.P)
	}
	if any {
		x.defined++
	}
	return found, ks, nil
}

// discovered is the share of false discoveries that the note goes by.
const discovered = 0.05

func (x *clusterRows) tell() {
	x.likeness.tell()
	if x.defined == 0 {
		return
	}
	add := func(format string, args ...any) { x.env.Notes.Add(note.Note, note.Weights, format, args...) }
	if x.wants(clusterG) {
		add("getis_g is G* of Ord and Getis (1995) as a z-score: the site itself counts with the largest weight of its contacts; any field that varies smoothly has high and low regions")
	}
	if !x.wants(clusterP) || x.defined <= x.few {
		return
	}
	x.tellChance("of the others' readings over the neighbours of each site")
	tested := 0
	for _, p := range x.chance {
		if !math.IsNaN(p) {
			tested++
		}
	}
	if tested > 0 {
		add("of %d p_values about %.3g would be below %g by chance alone; %d stand at a share of false discoveries of %g %% (Benjamini and Hochberg 1995)", tested,
			discovered*float64(tested), discovered, spatial.Discoveries(x.chance, discovered), 100*discovered)
	}
}
