package relation

import (
	"context"
	"math"
	"strconv"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/voronoi"
	"nearcell/voronoi/field"
	"nearcell/voronoi/solid"
)

// exceedance is EXCEEDANCE OF c FOR a ABOVE v: one row for each partition and threshold,
// with the space in which the reading is above it.
var exceedance = &Definition{
	Noun:    "EXCEEDANCE",
	RowIs:   "campaign and threshold",
	Meaning: "how much space is above, or below, a limit",
	Example: `SELECT threshold, share, lower, upper
FROM EXCEEDANCE OF hall FOR temp ABOVE 8 THRESHOLDS (7, 9) METHOD NEAREST;`,
	Clauses: []string{"FOR", "ABOVE", "BELOW", "THRESHOLDS", "METHOD", "WITHIN", "UNCLIPPED", "FOR EACH", "OMITTING", "MEASURED IN", "STRETCHED"},
	Zoned:   true,
	Regions: true,
	Open:    openExceedance,
	layout: func(b *Bound) []Column {
		computed := b.computed()
		computed[exceedThreshold].Unit = b.Input[b.Clauses.For[0]].Unit
		own := b.ownColumns(computed)
		columns := make([]Column, 0, len(b.Clauses.Each)+len(computed))
		for _, i := range b.Clauses.Each {
			columns = append(columns, own[i])
		}
		return append(columns, computed...)
	},
}

// The computed columns of EXCEEDANCE behind those of FOR EACH.
const (
	exceedThreshold = iota
	exceedVolume
	exceedShare
	exceedUnreached
	exceedLower
	exceedUpper
)

func init() {
	exceedance.Computed = []Column{
		exceedThreshold: measure("threshold", column.Real, 0, 0, "the limit"),
		exceedVolume:    measure("volume", column.Real, 3, voronoi.Volume, "space in which the reading is above the limit (BELOW: below it); with SIBSON as sampled"),
		exceedShare:     measure("share", column.Real, 0, voronoi.Volume, "volume over the space that the method reaches"),
		exceedUnreached: measure("unreached", column.Real, 3, voronoi.Volume, "space that the method does not reach: with LINEAR, and with SIBSON without a solid, what lies outside the hull of the sites"),
		exceedLower:     measure("lower", column.Real, 3, voronoi.Volume, "the volume is at least this"),
		exceedUpper:     measure("upper", column.Real, 3, voronoi.Volume, "the volume is at most this"),
	}
}

type exceedRows struct {
	*sites
	of      int
	each    int
	reached reached

	near      map[float64]int // thresholds with readings on them, and how many
	doubt     float64         // largest sampling error, as a share
	undecided float64         // largest distance of the bounds, as a share
	left      [2]float64      // least and greatest share that was not reached
	endless   bool            // some volume is infinite
	flat      bool
}

func openExceedance(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	s, err := newSites(b, env, input, r)
	if err != nil {
		return nil, err
	}
	return &exceedRows{sites: s, of: b.Clauses.For[0], each: len(b.Clauses.Each), near: map[float64]int{}, left: [2]float64{math.Inf(1), 0}}, nil
}

func (e *exceedRows) Cost() (voronoi.Cost, error) { return e.cost(voronoi.Volume) }

// Forecast is that of the cells, and for SIBSON of the samples.
func (e *exceedRows) Forecast(ctx context.Context) (*Forecast, error) {
	f, err := e.forecast(ctx, voronoi.Volume, false)
	if err != nil {
		return nil, err
	}
	f.Measures = []string{"exceedance by " + e.b.Clauses.MethodText}
	f.Rows = f.Parts * float64(len(e.b.Clauses.Limits))
	if e.b.Clauses.Method.Method == field.Sibson {
		f.Cost.Seconds += f.Rows * secondsPerSampled / float64(max(1, e.env.Threads))
	}
	return f, nil
}

// secondsPerSampled is about what the bounds and samples of one threshold take.
const secondsPerSampled = 0.5

func (e *exceedRows) Run(ctx context.Context, emit func(*column.Batch) error) error {
	defer e.tell()
	out := newBatches(e.b, e.r.Need, e.each, emit)
	var first []int32
	flush := func() error {
		err := out.flush(func(i int) (column.Vector, bool) {
			if i >= e.each || !needed(e.r.Need, i) {
				return column.Vector{}, false
			}
			return column.Gather(&e.input.Cols[e.b.Clauses.Each[i]], first), true
		})
		first = first[:0]
		return err
	}
	for i, p := range e.parts {
		if !e.wanted(p) {
			continue
		}
		err := e.b.eachRegion(p, func(region int32, within solid.Solid) error {
			above, err := e.part(ctx, p, region, within)
			if err != nil {
				return err
			}
			out.now(p.Zone, region)
			for k, t := range e.b.Clauses.Limits {
				first = append(first, p.Rows[0])
				e.put(out, above, k, t)
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
		e.partDone(i)
	}
	return flush()
}

// part finds the space of one part, or of one region of it; nil where no site has a reading.
func (e *exceedRows) part(ctx context.Context, p *Part, region int32, within solid.Solid) (*field.Above, error) {
	h, err := e.open(ctx, p)
	if err != nil {
		return nil, err
	}
	if err := e.notInfinite(p, e.of); err != nil {
		return nil, err
	}
	read := e.readingsOf(p, e.of)
	if read.n > 0 {
		e.reached.missed(e.sites, e.of, read.rows)
	}
	e.countNear(p)
	from, err := e.speakers(p, h, 1<<13).of(ctx, func(site int32) bool { return read.count[site] > 0 })
	if err != nil {
		return nil, err
	}
	if from.field == nil {
		e.env.Notes.Add(note.Note, note.Sites, "no site of %s%s has a value of %s: nothing is known of its space", e.b.Name,
			inPart(e.b, e.input, p.Rows[0]), e.b.Input[e.of].Name)
		return nil, nil
	}
	// BELOW t is ABOVE -t of the negative.
	sign := 1.0
	if e.b.Clauses.Below {
		sign = -1
	}
	limits := make([]float64, len(e.b.Clauses.Limits))
	for i, t := range e.b.Clauses.Limits {
		limits[i] = sign * t
	}
	value := func(s int32) float64 { return sign * read.value[from.site(s)] }
	run := field.Run{Threads: e.env.Threads, Progress: e.progress()}
	var above *field.Above
	switch e.b.Clauses.Method.Method {
	case field.Linear:
		above, err = from.field.LinearAbove(ctx, within, value, limits, run)
		e.flat = e.flat || from.handle.Facts().Dimension < 3
	case field.Sibson:
		above, err = from.field.SibsonAbove(ctx, within, value, limits, run)
		e.flat = e.flat || !e.b.Closed() && from.handle.Facts().Dimension < 3
	default:
		above, err = e.nearest(ctx, p, region, within, from, read, limits, sign)
	}
	if err != nil {
		return nil, e.refused(err, p)
	}
	return above, nil
}

// nearest adds up the cells whose reading is above: exact. Rows that share a place share
// its cell.
func (e *exceedRows) nearest(ctx context.Context, p *Part, region int32, within solid.Solid, from *speaking, read *readings, limits []float64, sign float64) (*field.Above, error) {
	var volumes []float64
	if within != nil {
		var err error
		if volumes, _, err = e.inRegion(ctx, from.handle, p, region); err != nil {
			return nil, err
		}
	} else {
		cells, err := from.handle.Measure(ctx, voronoi.Volume, 0, nil, e.progress())
		if err != nil {
			return nil, err
		}
		volumes = cells.Volume
	}
	v := &e.input.Cols[e.of]
	sums := make([]voronoi.Sum, len(limits))
	var space voronoi.Sum
	for k, row := range p.Rows {
		site := p.Site[k]
		if v.IsNull(int(row)) {
			continue
		}
		volume := volumes[from.number(site)] / float64(read.count[site])
		space.Add(volume)
		for i, t := range limits {
			if sign*numberAt(v, int(row)) > t {
				sums[i].Add(volume)
			}
		}
	}
	a := &field.Above{Volume: make([]float64, len(limits)), Doubt: make([]float64, len(limits)), Space: space.Value()}
	if within != nil {
		a.Space = within.Volume()
	} else if p.Solid != nil {
		a.Space = p.Solid.Volume()
	}
	a.Reached = a.Space
	for i := range sums {
		a.Volume[i] = min(sums[i].Value(), a.Space)
	}
	a.Lower, a.Upper = a.Volume, a.Volume
	return a, nil
}

// onLimit is how near to a threshold, in parts of it, a reading is told of: which side it
// counts on hangs on its last digits.
const onLimit = 1e-9

func (e *exceedRows) countNear(p *Part) {
	v := &e.input.Cols[e.of]
	for _, t := range e.b.Clauses.Limits {
		n := 0
		for _, row := range p.Rows {
			if !v.IsNull(int(row)) && math.Abs(numberAt(v, int(row))-t) <= onLimit*max(1, math.Abs(t)) {
				n++
			}
		}
		e.near[t] += n
	}
}

func (e *exceedRows) put(out *batches, a *field.Above, k int, t float64) {
	columns := out.columns[e.each:]
	number(&columns[exceedThreshold], out.n, t)
	null := func(i int) {
		if columns[i].Type != column.Null {
			columns[i].SetNull(out.n)
		}
	}
	if a == nil {
		for i := exceedVolume; i <= exceedUpper; i++ {
			null(i)
		}
		out.n++
		return
	}
	number(&columns[exceedVolume], out.n, a.Volume[k])
	number(&columns[exceedLower], out.n, a.Lower[k])
	number(&columns[exceedUpper], out.n, a.Upper[k])
	number(&columns[exceedUnreached], out.n, a.Space-a.Reached)
	switch {
	case math.IsInf(a.Space, 0):
		e.endless = true
		null(exceedShare)
		if columns[exceedUnreached].Type != column.Null {
			columns[exceedUnreached].F[out.n] = 0 // Infinity less Infinity is no number
		}
	case a.Reached > 0:
		number(&columns[exceedShare], out.n, a.Volume[k]/a.Reached)
		e.doubt = max(e.doubt, a.Doubt[k]/a.Reached)
		e.undecided = max(e.undecided, (a.Upper[k]-a.Lower[k])/a.Space)
	default:
		null(exceedShare)
	}
	if a.Space > 0 && !math.IsInf(a.Space, 0) {
		left := (a.Space - a.Reached) / a.Space
		e.left[0], e.left[1] = min(e.left[0], left), max(e.left[1], left)
	}
	out.n++
}

func (e *exceedRows) tell() {
	e.sites.tell()
	e.reached.tellMissed(e.sites)
	add := func(rank int, format string, args ...any) { e.env.Notes.Add(note.Note, rank, format, args...) }
	name := e.b.Input[e.of].Name
	word := "above"
	if e.b.Clauses.Below {
		word = "below"
	}
	for _, t := range e.b.Clauses.Limits {
		if n := e.near[t]; n > 0 {
			add(note.Rows, "%s of %s %s within %g of the limit %s: one that equals it is not %s it, and the others hang on their last digits",
				count(n, "reading"), name, verb(n, "lies", "lie"), onLimit, column.FormatReal(t), word)
		}
	}
	if e.endless {
		add(note.Cells, "without a solid the space has no end: the share is NULL; WITHIN a solid gives it one")
	}
	if e.flat {
		add(note.Cells, "the sites of %s with a reading lie in one plane: METHOD LINEAR has no tetrahedra there and reaches nothing", e.b.Name)
	}
	switch e.b.Clauses.Method.Method {
	case field.Linear:
		if !e.b.Closed() && !e.b.measuredIn() {
			add(note.Cells, "METHOD LINEAR without a solid: the space is the convex hull of the sites of %s", e.b.Name)
		} else if e.left[1] > 0 && !math.IsInf(e.left[0], 0) {
			of := percent(e.left[1])
			if e.left[0] < e.left[1] {
				of = percent(e.left[0]) + " to " + of
			}
			e.tellUnreached(of, word)
		}
	case field.Sibson:
		if !e.b.Closed() {
			if !e.b.measuredIn() {
				add(note.Cells, "METHOD SIBSON without a solid: the space is the convex hull of the sites of %s", e.b.Name)
			} else if e.left[1] > 0 {
				e.tellUnreached(percent(e.left[1]), word)
			}
		}
		if e.undecided > 0 {
			add(note.Cells, "METHOD SIBSON has no closed form: volume is sampled, with a standard error of up to %s of the space. lower and upper are certain, with up to %s of the space between them: "+
				"they count a place as soon as all, or any, of the sites that its estimate rests on read %s the limit", percent(e.doubt), percent(e.undecided), word)
		}
	}
}

// tellUnreached says how much of the space lies outside the hull of the sites.
func (e *exceedRows) tellUnreached(share, word string) {
	_, space := e.b.Space()
	e.env.Notes.Add(note.Note, note.Cells, "METHOD %s ends at the hull of the sites of %s: %s of %s is outside it and unreached; share is that of the rest, upper counts all of it as %s",
		strings.ToUpper(e.b.Clauses.Method.Method.String()), e.b.Name, share, space, word)
}

// percent writes a share for notes.
func percent(x float64) string {
	text := strconv.FormatFloat(100*x, 'g', 3, 64)
	if strings.Contains(text, "e") {
		text = strconv.FormatFloat(100*x, 'f', 6, 64)
	}
	return text + " %"
}
