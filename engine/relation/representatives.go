package relation

import (
	"context"
	"math"
	"slices"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/lang"
	"nearcell/voronoi"
)

// representatives is REPRESENTATIVES OF c: which few sites stand for all.
//
// The instants of FOR EACH are cut in two at their middle. On the first half a set is
// grown site by site, each time by the one that leaves the smallest error, and then
// improved by exchanging one member for another as long as that helps. On the second
// half, which had no say in the choice, the set is judged. Halves, not every other
// instant: readings a quarter of an hour apart are nearly the same, and a set judged
// on those would be judged on what it was chosen by.
//
// All is the mean of all sites at an instant, each weighted by the volume of its cell
// where a solid closes them, else alike; of zones together it is the mean of them all,
// each weighted by the space of its zone. The few are weighted alike, as they will be
// read. The error is the root of its mean square over the instants,
//
//	MEAN     of (mean of the few) - (mean of all)
//	HIGHEST  of (highest of the few) - (highest of all)
//	COURSE   as MEAN, after the mean difference of the first half has been taken off:
//	         a fixed correction that whoever reads the few would add.
var representatives = &Definition{
	Noun:    "REPRESENTATIVES",
	RowIs:   "chosen site",
	Meaning: "which few sites stand for all: chosen on the first half of the time, judged on the second",
	Zoned:   true,
	Clauses: []string{"WITHIN", "UNCLIPPED", "FOR EACH", "OMITTING", "FOR", "NUMBER", "KEEP", "BY"},
	Open:    openRepresentatives,
	layout: func(b *Bound) []Column {
		columns := b.computed()
		columns[representativeID].Type = b.Input[b.ID].Type
		columns[representativeError].Unit = b.Input[b.Clauses.For[0]].Unit
		return columns
	},
}

// The computed columns of REPRESENTATIVES, in their order.
const (
	representativeRank = iota
	representativeID
	representativeError
)

func init() {
	representatives.Computed = []Column{
		representativeRank:  measure("rank", column.Integer, 0, 0, "1 is the best alone, 2 the best beside it …; those of KEEP come first"),
		representativeID:    measure("id", column.Text, 0, 0, "identifier of the site"),
		representativeError: measure("error", column.Real, 0, 0, "root mean square error of the sites up to this rank against all, on the half of the time that had no say in the choice"),
	}
}

// fewestReadings is the share of the instants of the first half at which a site must
// have a reading to be chosen.
const fewestReadings = 0.95

type representativeRows struct {
	*sites
	id     []int32     // a row of each site, in the order of identifiers
	zone   []int32     // of each site; -1: it hung in several
	value  [][]float64 // by instant, then site; NaN: none
	all    []float64   // what the few are to be, by instant; NaN: nothing is known
	halves int         // number of instants of the first half
}

func openRepresentatives(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	s, err := newSites(b, env, input, r)
	if err != nil {
		return nil, err
	}
	return &representativeRows{sites: s}, nil
}

func (c *representativeRows) Cost() (voronoi.Cost, error) {
	if !c.b.Closed() {
		return noGeometry()
	}
	return c.cost(voronoi.Volume)
}

// Run chooses and judges.
func (c *representativeRows) Run(ctx context.Context, emit func(*column.Batch) error) error {
	if err := c.gather(ctx); err != nil || len(c.value) == 0 {
		return err
	}
	keep, err := c.kept()
	if err != nil {
		return err
	}
	candidates := c.candidates(keep)
	chosen, err := c.choose(ctx, keep, candidates)
	if err != nil {
		return err
	}
	return c.put(chosen, emit)
}

// gather fills the table of readings by instant and site, and what all are.
func (c *representativeRows) gather(ctx context.Context) error {
	var rows []int32
	for _, p := range c.parts {
		rows = append(rows, p.Rows...)
	}
	c.id = c.order.distinct(rows)
	c.zone = make([]int32, len(c.id))
	for k := range c.zone {
		c.zone[k] = unseenZone
	}
	for lo := 0; lo < len(c.parts); { // one instant: a part, or one for each zone
		hi := lo + 1
		for hi < len(c.parts) && c.parts[hi].Group == c.parts[lo].Group {
			hi++
		}
		if err := c.instant(ctx, lo, hi); err != nil {
			return err
		}
		lo = hi
	}
	c.halves = (len(c.value) + 1) / 2
	c.tell()
	return nil
}

// unseenZone is that of a site before its first row.
const unseenZone = -2

// instant takes the readings of parts lo to hi-1, which are those of one instant.
func (c *representativeRows) instant(ctx context.Context, lo, hi int) error {
	v := &c.input.Cols[c.b.Clauses.For[0]]
	at := make([]float64, len(c.id))
	for k := range at {
		at[k] = math.NaN()
	}
	var sum, weight float64
	highest := math.Inf(-1)
	for i, p := range c.parts[lo:hi] {
		weights, err := c.weights(ctx, p)
		if err != nil {
			return err
		}
		site := 0
		for k, row := range p.Rows {
			for !c.order.sameID(c.id[site], row) {
				site++ // both in the order of identifiers
			}
			if weights != nil && weights[k] == 0 {
				continue
			}
			if c.zone[site] == unseenZone {
				c.zone[site] = p.Zone
			} else if c.zone[site] != p.Zone {
				c.zone[site] = -1
			}
			if v.IsNull(int(row)) {
				continue
			}
			x := reading(v, row)
			if math.IsInf(x, 0) {
				return problem.New("no-value", c.b.Place, "%s of %s is %s%s, with which nothing can be computed", c.b.Input[c.b.Clauses.For[0]].Name,
					idText(c.order.id, int(row)), column.FormatReal(x), inPart(c.b, c.input, row))
			}
			at[site] = x
			w := 1.0
			if weights != nil {
				w = weights[k]
			}
			sum, weight, highest = sum+float64(w*x), weight+w, max(highest, x)
		}
		c.partDone(lo + i)
	}
	all := math.NaN()
	switch {
	case weight == 0:
	case c.b.Choice.Aim == "HIGHEST":
		all = highest
	default:
		all = sum / weight
	}
	c.value, c.all = append(c.value, at), append(c.all, all)
	return nil
}

// weights are the volumes of the rows' cells, nil where nothing closes them; 0 for
// sites outside.
func (c *representativeRows) weights(ctx context.Context, p *Part) ([]float64, error) {
	if !c.b.Closed() {
		return nil, nil
	}
	h, err := c.open(ctx, p)
	if err != nil {
		return nil, err
	}
	m, err := h.Measure(ctx, voronoi.Volume, 0, nil, nil)
	if err != nil {
		return nil, c.refused(err, p)
	}
	weights := make([]float64, len(p.Rows))
	outside := h.Facts().Outside
	for k, site := range p.Site {
		if !slices.Contains(outside, site) {
			weights[k] = m.Volume[site] * p.share(k)
		}
	}
	return weights, nil
}

// kept are the sites that KEEP names.
func (c *representativeRows) kept() ([]int, error) {
	var keep []int
next:
	for i, name := range c.b.Choice.Keep {
		for k, row := range c.id {
			if plainID(c.order.id, int(row)) == name {
				keep = append(keep, k)
				continue next
			}
		}
		p := problem.New("no-site", c.b.Choice.KeepPlaces[i], "there is no site '%s' in %s to keep", name, c.b.Name)
		if near := lang.Nearest(name, identifiers(c.order.id)); near != "" {
			p.WithHint("did you mean '%s'?", near)
		}
		return nil, p
	}
	return keep, nil
}

// candidates are the sites that may be chosen: those with readings nearly always. One
// that fell silent early would seem to err little.
func (c *representativeRows) candidates(keep []int) []int {
	var list []int
	var silent []int32
	for k, row := range c.id {
		n := 0
		for _, at := range c.value[:c.halves] {
			if !math.IsNaN(at[k]) {
				n++
			}
		}
		switch {
		case slices.Contains(keep, k):
		case float64(n) < fewestReadings*float64(c.halves):
			silent = append(silent, row)
		default:
			list = append(list, k)
		}
	}
	if len(silent) > 0 {
		c.env.Notes.Add(note.Note, note.Sites, "%s of %s cannot be chosen, since more than 5 %% of %s readings are missing where the choice is made: %s",
			count(len(silent), "site"), c.b.Name, its(len(silent)), someOf(c.order.names(silent)))
	}
	return list
}

func its(n int) string {
	if n == 1 {
		return "its"
	}
	return "their"
}

// few is a set of sites with what it says at each instant.
type few struct {
	c     *representativeRows
	sites []int
}

// at is what the set says at an instant, NaN where none of it has a reading.
func (f *few) at(i int) float64 {
	sum, n, highest := 0.0, 0, math.Inf(-1)
	for _, k := range f.sites {
		if x := f.c.value[i][k]; !math.IsNaN(x) {
			sum, n, highest = sum+x, n+1, max(highest, x)
		}
	}
	switch {
	case n == 0:
		return math.NaN()
	case f.c.b.Choice.Aim == "HIGHEST":
		return highest
	}
	return sum / float64(n)
}

// offset is the mean difference from all on the first half, which COURSE takes off.
func (f *few) offset() float64 {
	if f.c.b.Choice.Aim != "COURSE" {
		return 0
	}
	sum, n := 0.0, 0
	for i := range f.c.halves {
		if d := f.at(i) - f.c.all[i]; !math.IsNaN(d) {
			sum, n = sum+d, n+1
		}
	}
	return sum / float64(max(n, 1))
}

// error is the root mean square error over the instants from lo to hi, NaN where
// nothing can be compared; missed counts the instants at which the set is silent.
func (f *few) error(lo, hi int) (rms float64, missed int) {
	offset := f.offset()
	sum, n := 0.0, 0
	for i := lo; i < hi; i++ {
		if math.IsNaN(f.c.all[i]) {
			continue
		}
		d := f.at(i) - f.c.all[i]
		if math.IsNaN(d) {
			missed++
			continue
		}
		d -= offset
		sum, n = sum+float64(d*d), n+1
	}
	if n == 0 {
		return math.NaN(), missed
	}
	return math.Sqrt(sum / float64(n)), missed
}

// least says how much smaller an error has to be to count as smaller: rounding
// decides nothing.
const least = 1e-12

// choose grows the set and improves it.
func (c *representativeRows) choose(ctx context.Context, keep, candidates []int) ([]int, error) {
	number := c.b.Choice.Number
	if have := len(keep) + len(candidates); have < number {
		c.env.Notes.Add(note.Note, note.Sites, "%s has only %s to choose from, and NUMBER asks for %d", c.b.Title(), count(have, "site"), number)
		number = have
	}
	chosen, err := c.grow(ctx, keep, candidates, number)
	if err != nil {
		return nil, err
	}
	for improved := true; improved; {
		improved = false
		best, _ := (&few{c, chosen}).error(0, c.halves)
		for at := len(keep); at < len(chosen); at++ {
			for _, k := range candidates {
				if slices.Contains(chosen, k) {
					continue
				}
				if ctx.Err() != nil {
					return nil, ctx.Err()
				}
				other := slices.Clone(chosen)
				other[at] = k
				if e, _ := (&few{c, other}).error(0, c.halves); e < best-float64(least*max(1, best)) {
					chosen, best, improved = other, e, true
				}
			}
		}
	}
	return c.grow(ctx, keep, chosen[len(keep):], number)
}

// grow adds to a set one site after the other, each time the one that leaves the
// smallest error; of equal ones the first by identifier.
func (c *representativeRows) grow(ctx context.Context, keep, candidates []int, number int) ([]int, error) {
	candidates = slices.Sorted(slices.Values(candidates))
	chosen := slices.Clone(keep)
	for len(chosen) < number {
		best, pick := math.Inf(1), -1
		for _, k := range candidates {
			if slices.Contains(chosen, k) {
				continue
			}
			if ctx.Err() != nil {
				return nil, ctx.Err()
			}
			e, _ := (&few{c, append(slices.Clone(chosen), k)}).error(0, c.halves)
			if pick < 0 || e < best-float64(least*max(1, best)) {
				best, pick = e, k
			}
		}
		if pick < 0 {
			break
		}
		chosen = append(chosen, pick)
	}
	return chosen, nil
}

// put emits the chosen with their errors and says what they rest on.
func (c *representativeRows) put(chosen []int, emit func(*column.Batch) error) error {
	w := make([]*column.Builder, len(c.b.Columns))
	for i, col := range c.b.Columns {
		w[i] = column.NewBuilder(col.Type, col.Unit)
	}
	for i, k := range chosen {
		e, _ := (&few{c, chosen[:i+1]}).error(c.halves, len(c.value))
		w[representativeRank].AppendInt(int64(i + 1))
		w[representativeID].AppendRow(c.order.id, int(c.id[k]))
		if math.IsNaN(e) {
			w[representativeError].AppendNull()
		} else {
			w[representativeError].AppendFloat(e)
		}
		if z := representativeError + 1; z < len(w) { // the column zone
			if at := c.zone[k]; at >= 0 {
				w[z].Append(column.String(c.b.Clauses.Zones[at].Name))
			} else {
				w[z].AppendNull()
			}
		}
	}
	c.say(chosen)
	whole := make([]column.Vector, len(w))
	for i := range w {
		whole[i] = w[i].Finish()
	}
	for lo := 0; lo < len(chosen); lo += BatchRows {
		out := &column.Batch{N: min(len(chosen)-lo, BatchRows), Cols: make([]column.Vector, len(w))}
		for i := range w {
			out.Cols[i] = whole[i].Slice(lo, lo+out.N)
			if !needed(c.r.Need, i) {
				out.Cols[i] = column.Vector{Type: column.Null, N: out.N}
			}
		}
		if err := emit(out); err != nil {
			return err
		}
	}
	return nil
}

func (c *representativeRows) say(chosen []int) {
	f := &few{c, chosen}
	on, _ := f.error(0, c.halves)
	_, missed := f.error(c.halves, len(c.value))
	judged := len(c.value) - c.halves
	notes := c.env.Notes
	how := "all weigh alike, since no solid closes the cells"
	if c.b.Closed() {
		how = "the mean of all is weighted by the volumes of their cells"
	}
	if c.b.Choice.Aim == "HIGHEST" {
		how = "the highest of the few against the highest of all"
	}
	name := c.b.Input[c.b.Clauses.Each[0]].Name
	unit := c.b.Input[c.b.Clauses.For[0]].Unit.String()
	if unit != "" {
		unit = " " + unit
	}
	notes.Add(note.Note, note.Output, "chosen on the first %d values of %s, where the error of the %d is %.3g%s, and judged on the other %d; %s",
		c.halves, name, len(chosen), on, unit, judged, how)
	if judged == 0 {
		notes.Add(note.Warning, note.Output, "there is one value of %s alone, so nothing was left to judge the choice by", name)
	}
	if missed > 0 {
		notes.Add(note.Warning, note.Output, "at %d of the %d values of %s that judge the choice none of the chosen has a reading", missed, judged, name)
	}
}
