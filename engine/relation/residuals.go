package relation

import (
	"context"
	"math"
	"slices"
	"strconv"

	"nearcell/catalog/column"
	"nearcell/engine/diagram"
	"nearcell/engine/note"
	"nearcell/voronoi"
	"nearcell/voronoi/delaunay"
	"nearcell/voronoi/field"
)

// residuals is RESIDUALS OF c FOR a: one row for each site, with what the others let
// one expect in its place.
var residuals = &Definition{
	Noun:    "RESIDUALS",
	RowIs:   "site",
	Meaning: "how far each reading lies from what the other sites let one expect in its place",
	Example: `SELECT id, temp, estimate, residual FROM RESIDUALS OF hall FOR temp WHERE ABS(robust_z) > 3.5;`,
	Clauses: []string{"FOR", "METHOD", "WITHIN", "UNCLIPPED", "FOR EACH", "OMITTING", "STRETCHED"},
	Own:     true,
	Zoned:   true,
	Open:    openResiduals,
	layout: func(b *Bound) []Column {
		computed := b.computed()
		of := b.Input[b.Clauses.For[0]]
		for _, i := range []int{residualEstimate, residualResidual} {
			computed[i].Unit = of.Unit
			computed[i].From = 1 + b.Clauses.For[0]
		}
		return append(b.ownColumns(computed), computed...)
	},
}

// The computed columns of RESIDUALS behind the sites' own.
const (
	residualEstimate = iota
	residualResidual
	residualRobust
	residualOnHull
)

func init() {
	residuals.Computed = []Column{
		residualEstimate: measure("estimate", column.Real, 0, 0, "what the other sites let one expect in its place"),
		residualResidual: measure("residual", column.Real, 0, 0, "the reading less the estimate"),
		residualRobust:   measure("robust_z", column.Real, 0, 0, "residual less the median of all, over 1.4826 times the median of the distances from it; beyond 3.5 it stands out"),
		residualOnHull:   measure("on_hull", column.Boolean, 0, 0, "the site lies on the convex hull of the sites: the others do not surround it"),
	}
}

type residualRows struct {
	*sites
	own     int
	of      int // the attribute
	reached reached
	least   float64 // the smallest fault that could have been seen in any part; NaN: none told
	most    float64
	even    int // parts in which more than half of the residuals are equal
}

func openResiduals(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	s, err := newSites(b, env, input, r)
	if err != nil {
		return nil, err
	}
	return &residualRows{sites: s, own: len(b.Input), of: b.Clauses.For[0], least: math.Inf(1), most: math.Inf(-1)}, nil
}

func (r *residualRows) wants(i int) bool { return needed(r.r.Need, r.own+i) }

// estimates tells whether any estimate is needed.
func (r *residualRows) estimates() bool {
	return r.wants(residualEstimate) || r.wants(residualResidual) || r.wants(residualRobust)
}

func (r *residualRows) Cost() (voronoi.Cost, error) { return r.cost(voronoi.Volume) }

// Forecast is that of cells, whose neighbours' shares are cut out of them.
func (r *residualRows) Forecast(ctx context.Context) (*Forecast, error) {
	var want voronoi.Measures
	if r.estimates() {
		want = voronoi.Neighbours
	}
	f, err := r.forecast(ctx, want, false)
	if err != nil {
		return nil, err
	}
	f.Measures = nil
	if r.estimates() {
		f.Measures = []string{"leave-one-out " + r.b.Clauses.MethodText}
		f.Cost.Seconds += float64(f.Cost.Cells) * secondsPerNatural / float64(max(1, r.env.Threads))
	}
	return f, nil
}

func (r *residualRows) Run(ctx context.Context, emit func(*column.Batch) error) (err error) {
	defer func() {
		r.said.partial = err != nil
		r.tell()
	}()
	out := newBatches(r.b, r.r.Need, r.own, emit)
	rows := make([]int32, 0, BatchRows)
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
		found, ks, err := r.part(ctx, p)
		if err != nil {
			return err
		}
		out.now(p.Zone, noPart)
		for _, k := range ks {
			rows = append(rows, p.Rows[k])
			r.put(out, found, int(k))
			if out.room() == 0 {
				if err := flush(); err != nil {
					return err
				}
			}
		}
		r.partDone(i)
	}
	return flush()
}

// left are the residuals of the rows of a part; NaN is none.
type left struct {
	estimate, residual, robust []float64
	onHull                     []bool // by row
}

func (r *residualRows) part(ctx context.Context, p *Part) (*left, []int32, error) {
	if !r.wanted(p) {
		return nil, nil, nil
	}
	h, err := r.open(ctx, p)
	if err != nil {
		return nil, nil, err
	}
	ks, _ := r.shown(p, h.Facts())
	found := &left{estimate: nans(len(p.Rows)), residual: nans(len(p.Rows)), robust: nans(len(p.Rows))}
	if len(ks) == 0 || !r.estimates() && !r.wants(residualOnHull) {
		return found, ks, nil
	}
	if err := r.notInfinite(p, r.of); err != nil {
		return nil, nil, err
	}
	read := r.readingsOf(p, r.of)
	if read.n > 0 {
		r.reached.missed(r.sites, r.of, read.rows)
	}
	from, err := r.speakers(p, h, len(p.Rows)).of(ctx, func(site int32) bool { return read.count[site] > 0 })
	if err != nil {
		return nil, nil, err
	}
	if from.field == nil {
		r.env.Notes.Add(note.Note, note.Sites, "no site of %s%s has a value of %s: nothing can be expected of it", r.b.Name,
			inPart(r.b, r.input, p.Rows[0]), r.b.Input[r.of].Name)
		return found, ks, nil
	}
	if r.estimates() {
		of := ks
		if r.wants(residualRobust) { // which rests on all, whatever is shown
			of = r.inside(p, h)
		}
		if err := r.estimate(ctx, p, from, read, of, found); err != nil {
			return nil, nil, err
		}
		if r.wants(residualRobust) {
			r.judge(found)
		}
	}
	if r.wants(residualOnHull) {
		if err := r.markHull(ctx, p, from, found); err != nil {
			return nil, nil, err
		}
	}
	return found, ks, nil
}

func nans(n int) []float64 {
	x := make([]float64, n)
	for i := range x {
		x[i] = math.NaN()
	}
	return x
}

// inside lists the rows of a part that take part.
func (r *residualRows) inside(p *Part, h *diagram.Handle) []int32 {
	all := *r.sites
	all.r.Wanted = nil
	ks, _ := all.shown(p, h.Facts())
	return ks
}

// estimate finds what the others let one expect in the place of each row. Where several
// rows share a place, the others of them say it. A row without a reading is estimated
// as any other point.
func (r *residualRows) estimate(ctx context.Context, p *Part, from *speaking, read *readings, ks []int32, to *left) error {
	v := &r.input.Cols[r.of]
	value := func(s int32) float64 { return read.value[from.site(s)] }
	f := from.field
	works := make(chan *field.Work, 64)
	return r.wrap(p, field.EachOf(ctx, len(ks), field.Run{Threads: r.env.Threads, Progress: r.progress()}, func(i int) error {
		var w *field.Work
		select {
		case w = <-works:
		default:
			w = &field.Work{}
		}
		defer func() {
			select {
			case works <- w:
			default:
			}
		}()
		k := ks[i]
		site, row := p.Site[k], int(p.Rows[k])
		if v.IsNull(row) {
			at, weights, err := f.At(ctx, p.Sites[site], w)
			if err == nil && r.reached.has(at) {
				to.estimate[k] = field.Estimate(weights, value)
			}
			return err
		}
		own := numberAt(v, row)
		if n := float64(read.count[site]); n > 1 {
			r.reached.has(field.AtSite)
			// From the differences, which do not lose small ones.
			others := 0.0
			for j, s := range p.Site {
				if s == site && j != int(k) && !v.IsNull(int(p.Rows[j])) {
					others += numberAt(v, int(p.Rows[j])) - own
				}
			}
			to.estimate[k] = own + others/(n-1)
			to.residual[k] = -others / (n - 1)
			return nil
		}
		number := from.number(site)
		at, weights, err := f.Without(ctx, number, w)
		if err == nil && r.reached.has(at) {
			to.estimate[k] = field.Estimate(weights, value)
			to.residual[k] = own - to.estimate[k]
		}
		return err
	}))
}

func (r *residualRows) wrap(p *Part, err error) error {
	if err == nil {
		return nil
	}
	return r.refused(err, p)
}

// A robust z beyond outlying stands out (Iglewicz and Hoaglin 1993); normalMAD is the
// median of the distances from the median in a normal distribution, normalMean their
// mean.
const (
	outlying   = 3.5
	normalMAD  = 0.6744897501960817
	normalMean = 0.7978845608028654
)

// judge sets the robust z of the residuals: how many standard deviations each lies from
// the median, these taken from the median of the distances, which a few wild readings do
// not move. Where more than half of the residuals are equal that is zero; then the mean
// of the distances stands in for it, and where all are equal nothing stands out.
func (r *residualRows) judge(of *left) {
	var all []float64
	for _, x := range of.residual {
		if !math.IsNaN(x) {
			all = append(all, x)
		}
	}
	if len(all) == 0 {
		return
	}
	middle := median(all)
	for i, x := range all {
		all[i] = math.Abs(x - middle)
	}
	spread := median(all) / normalMAD
	if spread == 0 {
		r.even++
		var sum voronoi.Sum
		for _, x := range all {
			sum.Add(x)
		}
		spread = sum.Value() / float64(len(all)) / normalMean
	}
	for k, x := range of.residual {
		switch {
		case math.IsNaN(x):
		case spread == 0:
			of.robust[k] = 0
		default:
			of.robust[k] = (x - middle) / spread
		}
	}
	fault := outlying * spread
	r.least, r.most = min(r.least, fault), max(r.most, fault)
}

// median sorts x; of an even number of values it is the mean of the two in the middle.
func median(x []float64) float64 {
	slices.Sort(x)
	n := len(x)
	if n%2 == 1 {
		return x[n/2]
	}
	return x[n/2-1] + (x[n/2]-x[n/2-1])/2
}

// markHull finds the sites on the convex hull of those with a reading.
func (r *residualRows) markHull(ctx context.Context, p *Part, from *speaking, to *left) error {
	t, site, err := from.handle.Tetrahedra(ctx, r.progress())
	if err != nil {
		return r.tooLarge(err, p)
	}
	on := make([]bool, len(p.Sites))
	if t.Dimension() < 3 {
		for i := range int32(t.NumSites()) {
			on[from.site(site(i))] = true
		}
	} else {
		for _, facet := range t.Hull() {
			for _, s := range facet {
				if s != delaunay.Ghost {
					on[from.site(site(s))] = true
				}
			}
		}
	}
	to.onHull = make([]bool, len(p.Rows))
	for k, s := range p.Site {
		to.onHull[k] = on[s]
	}
	return nil
}

// put writes the computed columns of a row.
func (r *residualRows) put(out *batches, found *left, k int) {
	write := func(i int, x []float64) {
		v := &out.columns[r.own+i]
		switch {
		case v.Type == column.Null:
		case math.IsNaN(x[k]):
			v.SetNull(out.n)
		default:
			v.F[out.n] = x[k]
		}
	}
	write(residualEstimate, found.estimate)
	write(residualResidual, found.residual)
	write(residualRobust, found.robust)
	if v := &out.columns[r.own+residualOnHull]; v.Type != column.Null {
		if found.onHull == nil {
			v.SetNull(out.n)
		} else if found.onHull[k] {
			column.SetBit(v.Bits, out.n)
		}
	}
	out.n++
}

func (r *residualRows) tell() {
	r.sites.tell()
	r.reached.tell(r.sites, "site")
	r.reached.tellMissed(r.sites)
	if r.most < 0 {
		return
	}
	name := r.b.Input[r.of].Name
	amount := func(x float64) string {
		text := strconv.FormatFloat(x, 'g', 3, 64)
		if u := r.b.Input[r.of].Unit; u != nil {
			text += " " + u.String()
		}
		return text
	}
	add := func(format string, args ...any) { r.env.Notes.Add(note.Note, note.Cells, format, args...) }
	switch {
	case r.most == 0:
		add("all residuals of %s are equal: robust_z is 0", name)
	case r.least < r.most:
		add("a fault of one reading of %s below about %s to %s, by partition, would hardly have been seen (|robust_z| > %g)", name, amount(r.least), amount(r.most), outlying)
	default:
		add("a fault of one reading of %s below about %s would hardly have been seen (|robust_z| > %g)", name, amount(r.most), outlying)
	}
	if r.even > 0 && r.most > 0 {
		where := ""
		if len(r.parts) > 1 {
			where = " in " + count(r.even, "partition")
		}
		add("more than half of the residuals of %s are equal%s: there robust_z goes by the mean of the distances from the median, not by their median", name, where)
	}
}
