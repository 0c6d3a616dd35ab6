package relation

import (
	"context"
	"math"
	"sync/atomic"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/series"
	"nearcell/voronoi"
)

// episodes is EPISODES OF log: when a reading was over a limit.
var episodes = &Definition{
	Noun:    "EPISODES",
	RowIs:   "excursion",
	Over:    OverRows,
	Meaning: "when a reading was over a limit, for how long and how far",
	Clauses: []string{"BY", "FOR", "ABOVE", "BELOW", "UNTIL", "BRIDGING", "LONGEST GAP"},
	Open:    openEpisodes,
	Guess:   func(_ *Bound, rows float64, _ func(int) float64) float64 { return rows / 100 },
	layout:  layoutEpisodes,
}

// The computed columns of EPISODES, in their order; those of BY stand before them.
const (
	episodeStart = iota
	episodeFinish
	episodeDuration
	episodeExtreme
	episodeExcess
	episodeTouchesGap
	episodeTouchesEnd
)

func init() {
	episodes.Computed = []Column{
		episodeStart:      measure("start", column.Timestamp, 0, 0, "when the limit was crossed, between two readings; the first reading where the log or a gap hides it"),
		episodeFinish:     measure("finish", column.Timestamp, 0, 0, "when it came back; the last reading where the end of the log or a gap hides it"),
		episodeDuration:   measure("duration", column.Interval, 0, 0, "from start to finish: at least that, where a gap or an end is touched"),
		episodeExtreme:    measure("extreme", column.Real, 0, 0, "highest reading of an excursion above, lowest of one below"),
		episodeExcess:     measure("excess", column.Real, 0, 0, "what is over the limit times how long, in hours: °C·h"),
		episodeTouchesGap: measure("touches_gap", column.Boolean, 0, 0, "it begins or ends at too long a gap, in which nobody knows how it went on"),
		episodeTouchesEnd: measure("touches_end", column.Boolean, 0, 0, "the log begins or ends within it"),
	}
}

func layoutEpisodes(b *Bound) []Column {
	columns := layoutBy(b, true)
	computed := columns[len(b.Clauses.By):]
	unit := b.Input[b.Clauses.For[0]].Unit
	computed[episodeExtreme].Unit = unit
	computed[episodeExcess].Unit = column.Mul(unit, column.Symbol("h"))
	return columns
}

type episodeRows struct {
	*loggers
	env             *Env
	r               Request
	merged, missing atomic.Int64
	gaps            atomic.Int64
	near, equal     atomic.Int64 // readings within 1e-9 of the limit, and those equal to it
}

func openEpisodes(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	e := &episodeRows{loggers: newLoggers(b, env, input), env: env, r: r}
	if e.n() == 0 {
		env.Notes.Add(note.Note, note.Sites, "there is no reading in %s, so %s has no rows", b.Name, b.Title())
	}
	return e, nil
}

func (e *episodeRows) Cost() (voronoi.Cost, error) { return noGeometry() }

func (e *episodeRows) Run(ctx context.Context, emit func(*column.Batch) error) error {
	err := inOrder(ctx, e.env.Threads, e.n(), e.logger, emit)
	name, notes := e.b.Input[e.b.Clauses.For[0]].Name, e.env.Notes
	if n := e.missing.Load(); n > 0 {
		notes.Add(note.Note, note.Rows, "%s of %s without a value of %s %s no reading: what lies around them is bridged, or a gap", count(int(n), "row"), e.b.Name, name, are(int(n)))
	}
	if n := e.merged.Load(); n > 0 {
		notes.Add(note.Warning, note.Sites, "%s of %s %s a stamp that its logger had already: the mean of a stamp's readings is taken (AUDIT counts them)",
			count(int(n), "row"), e.b.Name, verb(int(n), "has", "have"))
	}
	if n, equal := e.near.Load(), e.equal.Load(); n > 0 {
		notes.Add(note.Note, note.Rows, "%s of %s %s within 1e-9 of the limit %s, %d of them equal to it: an excursion is over the limit, not at it (ROUND makes computed readings decimal again)",
			count(int(n), "reading"), name, verb(int(n), "lies", "lie"), column.FormatReal(e.b.Log.Limit), equal)
	}
	if n := e.gaps.Load(); n > 0 {
		rule := ""
		if e.b.Log.LongestGap == 0 {
			rule = " (no LONGEST GAP: more than twice the usual step of the logger)"
		}
		notes.Add(note.Note, note.Rows, "%s in %s%s: of what happened in them nothing is known", count(int(n), "gap"), e.b.Title(), rule)
	}
	return err
}

// logger finds the excursions of one logger.
func (e *episodeRows) logger(ctx context.Context, i int, put func(*column.Batch) error) error {
	if err := ctx.Err(); err != nil || !e.wanted(i, e.r) {
		return err
	}
	const perRow = 3 * 8 // stamp, value, step
	done, err := e.env.hold(perRow * int64(len(e.of(i))))
	if err != nil {
		return err
	}
	defer done()
	course, err := e.course(i)
	if err != nil {
		return err
	}
	c := &e.b.Log
	gap := c.LongestGap
	if gap == 0 {
		gap = usualGaps * series.UsualStep(course.T)
	}
	for k := 1; k < len(course.T); k++ {
		if course.T[k]-course.T[k-1] > gap {
			e.gaps.Add(1)
		}
	}
	limit := series.Limit{Above: c.Limit, Until: c.Limit, Hysteresis: c.HasUntil}
	if c.HasUntil {
		limit.Until = c.Until
	}
	if c.Below {
		limit.Above, limit.Until = -limit.Above, -limit.Until
	}
	found := course.Episodes(limit, gap, c.Bridging)
	if len(found) == 0 {
		return nil
	}
	return put(e.table(found, e.of(i)[0]))
}

// course is the readings of one logger, mirrored for BELOW.
func (e *episodeRows) course(i int) (series.Course, error) {
	of := e.b.Clauses.For[0]
	v, t := &e.input.Cols[of], e.input.Cols[e.b.Clauses.On[0]].I
	rows := e.byTime(i)
	stamps, values := make([]int64, 0, len(rows)), make([]float64, 0, len(rows))
	for _, r := range rows {
		if v.IsNull(int(r)) {
			continue
		}
		x := reading(v, r)
		if math.IsInf(x, 0) {
			return series.Course{}, e.infinite(of, r)
		}
		if d := math.Abs(x - e.b.Log.Limit); d <= tieWithin {
			e.near.Add(1)
			if d == 0 {
				e.equal.Add(1)
			}
		}
		if e.b.Log.Below {
			x = -x
		}
		stamps, values = append(stamps, t[r]), append(values, x)
	}
	e.missing.Add(int64(len(rows) - len(stamps)))
	c, merged := series.Merge(stamps, values)
	e.merged.Add(int64(merged))
	return c, nil
}

// table writes the excursions of one logger, of which head is a row.
func (e *episodeRows) table(found []series.Episode, head int32) *column.Batch {
	n, by := len(found), len(e.b.Clauses.By)
	out := &column.Batch{N: n, Cols: make([]column.Vector, len(e.b.Columns))}
	for i, col := range e.b.Columns {
		if !needed(e.r.Need, i) {
			out.Cols[i] = column.Vector{Type: column.Null, N: n}
			continue
		}
		w := column.NewBuilder(col.Type, col.Unit)
		for k := range found {
			if i < by {
				w.AppendRow(&e.input.Cols[e.b.Clauses.By[i]], int(head))
			} else {
				e.put(w, i-by, &found[k])
			}
		}
		out.Cols[i] = w.Finish()
	}
	return out
}

func (e *episodeRows) put(w *column.Builder, what int, x *series.Episode) {
	switch what {
	case episodeStart:
		w.AppendInt(x.Start)
	case episodeFinish:
		w.AppendInt(x.Finish)
	case episodeDuration:
		w.AppendInt(x.Finish - x.Start)
	case episodeExtreme:
		extreme := x.Extreme
		if e.b.Log.Below {
			extreme = 0 - extreme // never -0
		}
		w.AppendFloat(extreme)
	case episodeExcess:
		w.AppendFloat(x.Excess)
	case episodeTouchesGap:
		w.AppendBool(x.TouchesGap)
	case episodeTouchesEnd:
		w.AppendBool(x.TouchesEnd)
	}
}
