package relation

import (
	"context"
	"math"
	"slices"
	"sync/atomic"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/engine/series"
	"nearcell/voronoi"
)

// seriesOf is SERIES OF log: what each logger would have read at common instants.
var seriesOf = &Definition{
	Noun:    "SERIES",
	RowIs:   "logger and instant",
	Over:    OverRows,
	Meaning: "readings of loggers that share no stamp, at common instants; NULL across too long a gap",
	Clauses: []string{"BY", "EVERY", "METHOD", "STAMP", "LONGEST GAP"},
	Own:     true,
	Open:    openSeries,
	Guess:   guessSeries,
	layout:  layoutSeries,
}

func init() {
	seriesOf.Computed = []Column{
		measure("span", column.Interval, 0, 0, "time that the row stands for; HOURS(span) is a weight"),
	}
}

// layoutSeries gives the columns of the log and span. What is computed between
// readings is REAL, whatever the readings are.
func layoutSeries(b *Bound) []Column {
	computed := b.computed()
	columns := b.ownColumns(computed)
	for i := range columns {
		if slices.Contains(b.Clauses.By, i) {
			continue // conditions on it choose loggers
		}
		columns[i].Site = -1
		between := b.Log.Method == "LINEAR" || b.Log.Method == "MEAN"
		if columns[i].Type == column.Integer && between && !slices.Contains(b.Log.Carried, i) {
			columns[i].Type = column.Real
		}
	}
	return append(columns, computed...)
}

func guessSeries(b *Bound, rows float64, values func(int) float64) float64 {
	if !b.Log.Ranged || b.Log.Every <= 0 {
		return rows
	}
	loggers := 1.0
	for _, c := range b.Clauses.By {
		loggers *= max(1, values(c))
	}
	return min(loggers, rows) * float64(b.grid(0, 0).N())
}

// stampOf are the words of STAMP AT.
var stampOf = map[string]series.Stamp{"START": series.Start, "INSTANT": series.Instant, "END": series.End}

// grid is the instants of a series whose log has stamps from first to last.
func (b *Bound) grid(first, last int64) series.Grid {
	c := &b.Log
	at := stampOf[c.Stamp]
	if c.Ranged {
		return series.Ranged(c.From, c.To, c.Every, at)
	}
	return series.Over(first, last, c.Every, at, c.Method != "LINEAR" && c.Method != "HOLD")
}

type seriesRows struct {
	*loggers
	env  *Env
	r    Request
	grid series.Grid
	// what there is to say
	instants, unknown, merged, partly atomic.Int64
	held                              []atomic.Bool // by column: varies although it is carried
}

func openSeries(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	s := &seriesRows{loggers: newLoggers(b, env, input), env: env, r: r, held: make([]atomic.Bool, len(b.Input))}
	if s.n() == 0 {
		env.Notes.Add(note.Note, note.Sites, "there is no reading in %s, so %s has no rows", b.Name, b.Title())
		return s, nil
	}
	s.grid = b.grid(s.times())
	if float64(s.grid.To)-float64(s.grid.From) > float64(s.grid.Step)*math.MaxInt32/float64(s.n()) {
		return nil, problem.New("too-large", b.Place, "%s would have %.0f instants for each of %s", b.Title(),
			(float64(s.grid.To)-float64(s.grid.From))/float64(s.grid.Step), count(s.n(), "logger")).
			WithHint("EVERY takes a longer step, FROM … TO … a shorter time")
	}
	return s, nil
}

func (s *seriesRows) Cost() (voronoi.Cost, error) { return noGeometry() }

// slabRows is how many instants are computed at a time.
const slabRows = 1 << 16

func (s *seriesRows) Run(ctx context.Context, emit func(*column.Batch) error) error {
	if s.n() == 0 {
		return nil
	}
	err := inOrder(ctx, s.env.Threads, s.n(), s.logger, emit)
	s.tell()
	return err
}

// tell says what the rows rest on.
func (s *seriesRows) tell() {
	c, notes := &s.b.Log, s.env.Notes
	if n := s.unknown.Load(); n > 0 {
		why := "no reading within their span"
		switch {
		case c.Method != "MAX" && c.Method != "MIN" && c.LongestGap == 0:
			why = "no reading near enough (no LONGEST GAP: nothing is filled in across more than twice the usual step of a logger)"
		case c.Method != "MAX" && c.Method != "MIN":
			why = "no reading near enough"
		}
		notes.Add(note.Note, note.Rows, "%d of %d rows of %s are NULL: %s", n, s.instants.Load(), s.b.Title(), why)
	}
	if n := s.merged.Load(); n > 0 {
		notes.Add(note.Warning, note.Sites, "%s of %s %s a stamp that its logger had already: the mean of a stamp's readings is taken, "+
			"and where one has to be chosen the largest (AUDIT counts them)",
			count(int(n), "row"), s.b.Name, verb(int(n), "has", "have"))
	}
	if n := s.partly.Load(); n > 0 {
		notes.Add(note.Note, note.Rows, "%s of %s %s on a part of the span only (at least half of it lies between readings)",
			count(int(n), "mean"), s.b.Title(), verb(int(n), "rests", "rest"))
	}
	for i := range s.held {
		if s.held[i].Load() {
			notes.Add(note.Note, note.Rows, "%s of %s comes from what was joined to the log and changes within a logger: its last value is held (joined to the rows of SERIES it is that of each instant)", s.b.Input[i].Name, s.b.Name)
		}
	}
}

// logger computes the rows of one logger.
func (s *seriesRows) logger(ctx context.Context, i int, put func(*column.Batch) error) error {
	if !s.wanted(i, s.r) {
		return nil
	}
	done, err := s.env.hold(s.bytes(len(s.of(i))))
	if err != nil {
		return err
	}
	defer done()
	w, err := s.newCourses(i)
	if err != nil {
		return err
	}
	n := s.grid.N()
	for lo := 0; lo < n; lo += slabRows {
		if err := ctx.Err(); err != nil {
			return err
		}
		slab, err := w.slab(lo, min(lo+slabRows, n))
		if err != nil {
			return err
		}
		if err := put(slab); err != nil {
			return err
		}
	}
	return nil
}

// courses is one logger's readings, column by column as they are needed.
type courses struct {
	*seriesRows
	rows     []int32 // of the input, by time
	stamps   []int64
	repeated int   // of them, stood before
	gap      int64 // longest that is filled
	columns  []courseColumn
}

// courseColumn is one column of the input for one logger: a constant, a course, or
// readings that are chosen.
type courseColumn struct {
	constant bool
	course   series.Course // LINEAR, MEAN of numbers
	rows     []int32       // else: the rows that have a value, by time
	stamps   []int64
	values   []float64 // MAX, MIN: negated for MIN
}

func (s *seriesRows) newCourses(i int) (*courses, error) {
	w := &courses{seriesRows: s, rows: s.byTime(i), columns: make([]courseColumn, len(s.b.Input))}
	t := s.input.Cols[s.b.Clauses.On[0]].I
	w.stamps = make([]int64, len(w.rows))
	for k, r := range w.rows {
		w.stamps[k] = t[r]
	}
	w.repeated = repeats(w.stamps)
	s.merged.Add(int64(w.repeated))
	if w.gap = s.b.Log.LongestGap; w.gap == 0 {
		w.gap = usualGaps * series.UsualStep(w.stamps)
	}
	for c := range s.b.Input {
		if !needed(s.r.Need, c) || c == s.b.Clauses.On[0] || slices.Contains(s.b.Clauses.By, c) {
			continue
		}
		if err := w.prepare(c); err != nil {
			return nil, err
		}
	}
	return w, nil
}

// repeats counts the stamps that are that before them.
func repeats(stamps []int64) int {
	n := 0
	for i := 1; i < len(stamps); i++ {
		if stamps[i] == stamps[i-1] {
			n++
		}
	}
	return n
}

// merge makes a course of readings; where no stamp stands twice their stamps are shared.
func (w *courses) merge(stamps []int64, values []float64) series.Course {
	if w.repeated == 0 {
		return series.Course{T: stamps, V: values}
	}
	c, _ := series.Merge(slices.Clone(stamps), values)
	return c
}

// bytes is what the readings of n rows of a logger take while it is worked on, and the
// slabs of it that wait for their turn.
func (s *seriesRows) bytes(n int) int64 {
	const stamp, value, row = 8, 8, 4
	perRow, perSlot := int64(stamp), int64(0)
	if s.b.Log.LongestGap == 0 {
		perRow += stamp // the steps between them
	}
	for c := range s.b.Input {
		if !needed(s.r.Need, c) {
			continue
		}
		perRow += value + row
		perSlot += value
	}
	slots := min(int64(s.grid.N()), slabRows*(ahead+1))
	return int64(n)*perRow + slots*(perSlot+value)
}

// between reports whether values of a column are computed between readings.
func (w *courses) between(c int) bool {
	t := w.b.Input[c].Type
	return (w.b.Log.Method == "LINEAR" || w.b.Log.Method == "MEAN") && t != column.Text && t != column.Boolean && t != column.Null &&
		!slices.Contains(w.b.Log.Carried, c)
}

// prepare takes the readings of a column out of the log.
func (w *courses) prepare(c int) error {
	v, x := &w.input.Cols[c], &w.columns[c]
	if slices.Contains(w.b.Log.Carried, c) {
		if w.same(v) {
			x.constant = true
			return nil
		}
		w.held[c].Store(true)
	}
	x.rows, x.stamps = w.rows, w.stamps
	if v.Valid != nil || v.Type == column.Null {
		x.rows, x.stamps = nil, nil
		for k, r := range w.rows {
			if !v.IsNull(int(r)) {
				x.rows, x.stamps = append(x.rows, r), append(x.stamps, w.stamps[k])
			}
		}
	}
	switch {
	case v.Type == column.Point: // by coordinate, when it is asked for
	case w.between(c):
		values, err := w.values(c, x.rows)
		if err != nil {
			return err
		}
		x.course = w.merge(x.stamps, values)
	case (w.b.Log.Method == "MAX" || w.b.Log.Method == "MIN") && !slices.Contains(w.b.Log.Carried, c) && (v.Type == column.Real || v.Type.Counted()):
		sign := 1.0
		if w.b.Log.Method == "MIN" {
			sign = -1
		}
		x.values = make([]float64, len(x.rows))
		for k, r := range x.rows {
			x.values[k] = sign * reading(v, r)
		}
	default:
		w.choose(v, x)
	}
	return nil
}

// choose keeps one reading of each stamp, the largest: which of them stands last must
// not matter.
func (w *courses) choose(v *column.Vector, x *courseColumn) {
	repeated := false
	for k := 1; k < len(x.stamps); k++ {
		repeated = repeated || x.stamps[k] == x.stamps[k-1]
	}
	if !repeated {
		return
	}
	rows, stamps := []int32(nil), []int64(nil)
	for k, r := range x.rows {
		last := len(rows) - 1
		switch {
		case last < 0 || stamps[last] != x.stamps[k]:
			rows, stamps = append(rows, r), append(stamps, x.stamps[k])
		case less(v, rows[last], r):
			rows[last] = r
		}
	}
	x.rows, x.stamps = rows, stamps
}

// less orders two values of a column, neither of them NULL.
func less(v *column.Vector, a, b int32) bool {
	switch v.Type {
	case column.Real:
		return v.F[a] < v.F[b]
	case column.Text:
		return v.Text(int(a)) < v.Text(int(b))
	case column.Boolean:
		return !column.Bit(v.Bits, int(a)) && column.Bit(v.Bits, int(b))
	case column.Point:
		return slices.Compare(v.F[3*a:3*a+3], v.F[3*b:3*b+3]) < 0
	}
	return v.I[a] < v.I[b]
}

// same reports whether a column has one value in all rows of the logger, or none.
func (w *courses) same(v *column.Vector) bool {
	keys := [1]column.Value{v.Value(int(w.rows[0]))}
	for _, r := range w.rows[1:] {
		if v.Value(int(r)) != keys[0] {
			return false
		}
	}
	return true
}

// values are readings as numbers.
func (w *courses) values(c int, rows []int32) ([]float64, error) {
	v := &w.input.Cols[c]
	values := make([]float64, len(rows))
	for k, r := range rows {
		values[k] = reading(v, r)
		if math.IsInf(values[k], 0) {
			return nil, w.infinite(c, r)
		}
	}
	return values, nil
}

// slab is the rows of slots lo..hi-1.
func (w *courses) slab(lo, hi int) (*column.Batch, error) {
	n := hi - lo
	out := &column.Batch{N: n, Cols: make([]column.Vector, len(w.b.Columns))}
	known := make([]uint64, column.Words(n)) // any reading
	readings := false
	for i := range w.b.Columns {
		v := &out.Cols[i]
		*v = column.Vector{Type: column.Null, N: n}
		if !needed(w.r.Need, i) {
			continue
		}
		switch {
		case i == len(w.b.Input):
			*v = column.New(column.Interval, nil, n)
			for k := range v.I {
				v.I[k] = w.grid.Span(lo + k)
			}
		case i == w.b.Clauses.On[0]:
			*v = column.New(column.Timestamp, nil, n)
			for k := range v.I {
				v.I[k] = w.grid.Stamp(lo + k)
			}
		case slices.Contains(w.b.Clauses.By, i) || w.columns[i].constant:
			*v = column.Gather(&w.input.Cols[i], slices.Repeat([]int32{w.rows[0]}, n))
		default:
			if err := w.read(i, lo, hi, v); err != nil {
				return nil, err
			}
			readings = true
			if v.Valid == nil {
				column.FillOn(known, n)
			}
			for k, x := range v.Valid {
				known[k] |= x
			}
		}
		v.Unit = w.b.Columns[i].Unit
	}
	w.instants.Add(int64(n))
	if readings {
		w.unknown.Add(int64(n - column.Count(known)))
	}
	return out, nil
}

// read computes column i, which is column i of the log, for slots lo..hi-1.
func (w *courses) read(i, lo, hi int, v *column.Vector) error {
	in, x := &w.input.Cols[i], &w.columns[i]
	n := hi - lo
	if in.Type == column.Null {
		return nil
	}
	if w.between(i) {
		return w.readBetween(i, lo, hi, v)
	}
	after := int64(0) // only HOLD knows anything behind the last reading
	if w.b.Log.Method == "HOLD" {
		if after = w.b.Log.LongestGap; after == 0 {
			after = w.b.Log.Every
		}
	}
	rows := make([]int32, n)
	switch {
	case x.values != nil:
		series.Extreme(x.stamps, x.values, w.grid, lo, hi, rows)
	case w.b.Log.Method == "HOLD" || w.b.Log.Method == "LINEAR":
		series.Hold(x.stamps, w.grid, lo, hi, w.gap, after, rows)
	default:
		series.LastIn(x.stamps, w.grid, lo, hi, w.gap, after, rows)
	}
	for k, r := range rows {
		if r != series.None {
			rows[k] = x.rows[r]
		}
	}
	*v = column.Gather(in, rows)
	return nil
}

// readBetween computes between readings; points by coordinate.
func (w *courses) readBetween(i, lo, hi int, v *column.Vector) error {
	in, n := &w.input.Cols[i], hi-lo
	known := make([]uint64, column.Words(n))
	if in.Type != column.Point {
		out := make([]float64, n)
		w.compute(w.columns[i].course, lo, hi, out, known)
		*v = column.New(w.b.Columns[i].Type, nil, n)
		for k, f := range out {
			if v.Type == column.Real {
				v.F[k] = f
			} else {
				v.I[k] = int64(math.Round(f))
			}
		}
	} else {
		*v = column.New(column.Point, nil, n)
		x := &w.columns[i]
		for axis := range 3 {
			values := make([]float64, len(x.rows))
			for k, r := range x.rows {
				values[k] = in.F[3*int(r)+axis]
				if math.IsInf(values[k], 0) {
					return w.infinite(i, r)
				}
			}
			course := w.merge(x.stamps, values)
			out := make([]float64, n)
			clear(known)
			w.compute(course, lo, hi, out, known)
			for k, f := range out {
				v.F[3*k+axis] = f
			}
		}
	}
	if column.Count(known) < n {
		v.Valid = known
	}
	return nil
}

func (w *courses) compute(c series.Course, lo, hi int, out []float64, known []uint64) {
	if w.b.Log.Method == "MEAN" {
		w.partly.Add(int64(c.Mean(w.grid, lo, hi, w.gap, out, known)))
		return
	}
	c.Linear(w.grid, lo, hi, w.gap, out, known)
}

// Smooths reports whether a column of the relation hides the extremes of the readings
// that it was made of.
func (b *Bound) Smooths(i int) bool {
	return b.Def == seriesOf && i < len(b.Columns)-1 && (b.Log.Method == "LINEAR" || b.Log.Method == "MEAN") &&
		b.Columns[i].Type == column.Real
}
