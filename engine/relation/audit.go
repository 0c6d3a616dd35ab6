package relation

import (
	"context"
	"math"
	"slices"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/engine/series"
	"nearcell/voronoi"
)

// audit is AUDIT OF log: how complete the readings of each logger are.
var audit = &Definition{
	Noun:    "AUDIT",
	RowIs:   "logger",
	Over:    OverRows,
	Meaning: "how complete and sound the readings of each logger are; with EXPECTING, of silent ones too",
	Clauses: []string{"BY", "EVERY", "EXPECTING"},
	Open:    openAudit,
	Guess: func(b *Bound, rows float64, values func(int) float64) float64 {
		loggers := 1.0
		for _, c := range b.Clauses.By {
			loggers *= max(1, values(c))
		}
		return min(rows, loggers)
	},
	layout: layoutAudit,
}

// The computed columns of AUDIT, in their order; those of BY stand before them.
const (
	auditFirst = iota
	auditLast
	auditExpected
	auditGot
	auditCompleteness
	auditStep
	auditGaps
	auditLongest
	auditRepeated
	auditBackward
	auditFrozen
	auditMissing
)

func init() {
	audit.Computed = []Column{
		auditFirst:        measure("first", column.Timestamp, 0, 0, "first stamp"),
		auditLast:         measure("last", column.Timestamp, 0, 0, "last stamp"),
		auditExpected:     measure("expected", column.Integer, 0, 0, "readings to be expected: by EVERY, else by the usual step; in FROM … TO, else from first to last"),
		auditGot:          measure("got", column.Integer, 0, 0, "rows that are there, repeated ones too"),
		auditCompleteness: measure("completeness", column.Real, 0, 0, "share of the expected that came; readings closer than half a step count once"),
		auditStep:         measure("step", column.Interval, 0, 0, "usual step from stamp to stamp: the median"),
		auditGaps:         measure("gaps", column.Integer, 0, 0, "steps of more than one and a half of the expected ones, with FROM … TO those at its ends too"),
		auditLongest:      measure("longest_gap", column.Interval, 0, 0, "the longest of the gaps"),
		auditRepeated:     measure("repeated", column.Integer, 0, 0, "rows with a stamp that the logger had already"),
		auditBackward:     measure("backward", column.Integer, 0, 0, "rows with an earlier stamp than the row before, in the order of the log"),
		auditFrozen:       measure("frozen", column.Integer, 0, 0, "runs of twelve or more equal readings that last an hour or longer, over all columns of numbers"),
		auditMissing:      measure("missing", column.Real, 0, 0, "share of NULL among the values beside logger and stamp"),
	}
}

// layoutBy is the BY columns, then the computed ones. shown: conditions on the BY
// columns say which rows of the log matter.
func layoutBy(b *Bound, shown bool) []Column {
	computed := b.computed()
	own := b.ownColumns(computed)
	columns := make([]Column, 0, len(b.Clauses.By)+len(computed))
	for _, c := range b.Clauses.By {
		col := own[c]
		if !shown {
			col.Site = -1
		}
		columns = append(columns, col)
	}
	return append(columns, computed...)
}

// A logger of EXPECTING has no row of the log that a condition could be asked of.
func layoutAudit(b *Bound) []Column { return layoutBy(b, len(b.Beside) == 0) }

type auditRows struct {
	*loggers
	env      *Env
	r        Request
	expected *column.Table // loggers that are expected and have no row: their BY columns
	rowsOf   []auditLine
}

// auditLine is a row of the answer: a logger of the log, or one of expected.
type auditLine struct{ logger, missing int }

func openAudit(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	a := &auditRows{loggers: newLoggers(b, env, input), env: env, r: r}
	if len(r.Beside) > 0 {
		if err := a.expect(r.Beside[0]); err != nil {
			return nil, err
		}
		return a, nil
	}
	for i := range a.n() {
		if a.wanted(i, r) {
			a.rowsOf = append(a.rowsOf, auditLine{i, -1})
		}
	}
	if a.n() == 0 {
		env.Notes.Add(note.Note, note.Sites, "there is no reading in %s, so %s has no rows (EXPECTING names loggers that should have some)", b.Name, b.Title())
	}
	return a, nil
}

// expect puts the loggers of EXPECTING between those of the log. Its columns stand in
// the order of BY (the binder has seen to it).
func (a *auditRows) expect(t *column.Table) error {
	by := a.b.Clauses.By
	// both lists in one table, so that one order holds for both
	both := &column.Table{N: a.n() + t.N}
	heads := make([]int32, a.n())
	for i := range heads {
		heads[i] = a.of(i)[0]
	}
	var keys [][]uint64
	for k, c := range by {
		mine := column.Gather(&a.input.Cols[c], heads)
		v := column.Concat(&mine, &t.Cols[k])
		both.Cols = append(both.Cols, v)
		keys = append(keys, sortKeys(&v)...)
	}
	rows := make([]int32, 0, both.N)
	nulls := 0
next:
	for r := range int32(both.N) {
		for k := range both.Cols {
			if both.Cols[k].IsNull(int(r)) {
				nulls++
				continue next
			}
		}
		rows = append(rows, r)
	}
	if nulls > 0 {
		a.env.Notes.Add(note.Warning, note.Sites, "%s of EXPECTING without a value %s left out", count(nulls, "row"), are(nulls))
	}
	spare := make([]int32, len(rows))
	for i := len(keys) - 1; i >= 0 && len(rows) > 0; i-- {
		rows = radix(rows, spare, keys[i])
	}
	same := func(a, b int32) bool {
		return !slices.ContainsFunc(keys, func(k []uint64) bool { return k[a] != k[b] })
	}
	a.sort(both, rows, same)
	return nil
}

// sort goes through the sorted loggers of both lists; those of the log stand first
// among equals.
func (a *auditRows) sort(both *column.Table, rows []int32, same func(a, b int32) bool) {
	var silent, strange []string
	var missing []int32
	name := func(r int32) string {
		var s []string
		for k := range both.Cols {
			s = append(s, idText(&both.Cols[k], int(r)))
		}
		return strings.Join(s, ", ")
	}
	for lo := 0; lo < len(rows); {
		hi := lo + 1
		for hi < len(rows) && same(rows[lo], rows[hi]) {
			hi++
		}
		switch r := rows[lo]; {
		case int(r) >= a.n():
			a.rowsOf = append(a.rowsOf, auditLine{-1, len(missing)})
			missing = append(missing, r)
			silent = append(silent, name(r))
		case hi == lo+1:
			strange = append(strange, name(r))
			fallthrough
		default:
			a.rowsOf = append(a.rowsOf, auditLine{int(r), -1})
		}
		lo = hi
	}
	a.expected = column.GatherTable(both, missing)
	if n := len(silent); n > 0 {
		a.env.Notes.Add(note.Note, note.Sites, "%s expected and %s no reading in %s: %s", count(n, "logger")+" "+are(n), verb(n, "has", "have"), a.b.Name, someOf(silent))
	}
	if n := len(strange); n > 0 {
		a.env.Notes.Add(note.Note, note.Sites, "%s of %s %s not among those expected: %s", count(n, "logger"), a.b.Name, are(n), someOf(strange))
	}
}

func (a *auditRows) Cost() (voronoi.Cost, error) { return noGeometry() }

// audited is a row of the answer before it is written.
type audited struct {
	series.Audit
	frozen, nulls, values int
}

func (a *auditRows) Run(ctx context.Context, emit func(*column.Batch) error) error {
	found := make([]audited, len(a.rowsOf))
	outside := make([]int, len(a.rowsOf))
	err := inOrder(ctx, a.env.Threads, len(a.rowsOf), func(ctx context.Context, i int, _ func(*column.Batch) error) error {
		if err := ctx.Err(); err != nil {
			return err
		}
		if l := a.rowsOf[i]; l.logger >= 0 {
			const perRow = 4 * 8 // stamps, steps, and a course of readings
			done, err := a.env.hold(perRow * int64(len(a.of(l.logger))))
			if err != nil {
				return err
			}
			defer done()
			found[i], outside[i] = a.look(l.logger)
		} else {
			found[i].Audit = series.AuditOf(nil, a.asked())
		}
		return nil
	}, emit)
	if err != nil {
		return err
	}
	sum := 0
	for _, n := range outside {
		sum += n
	}
	if sum > 0 {
		a.env.Notes.Add(note.Note, note.Sites, "%s of %s %s outside FROM … TO and %s not looked at", count(sum, "row"), a.b.Name,
			verb(sum, "stands", "stand"), are(sum))
	}
	out := a.table(found)
	return emitBatches(out, emit)
}

func (a *auditRows) asked() series.Asked {
	c := &a.b.Log
	return series.Asked{Every: c.Every, Ranged: c.Ranged, From: c.From, To: c.To}
}

// look audits one logger, and tells how many of its rows are outside the range.
func (a *auditRows) look(i int) (x audited, outside int) {
	c := &a.b.Log
	t := a.input.Cols[a.b.Clauses.On[0]].I
	rows := a.of(i)
	if c.Ranged {
		rows = slices.DeleteFunc(slices.Clone(rows), func(r int32) bool { return t[r] < c.From || t[r] >= c.To })
		outside = len(a.of(i)) - len(rows)
	}
	stamps := make([]int64, len(rows))
	for k, r := range rows {
		stamps[k] = t[r]
	}
	x.Audit = series.AuditOf(stamps, a.asked())
	if !needed(a.r.Need, len(a.b.Clauses.By)+auditFrozen) && !needed(a.r.Need, len(a.b.Clauses.By)+auditMissing) {
		return x, outside
	}
	if x.Backward > 0 {
		rows = slices.Clone(rows)
		slices.SortStableFunc(rows, func(a, b int32) int { return int(min(1, max(-1, t[a]-t[b]))) })
	}
	for _, c := range c.Readings {
		v := &a.input.Cols[c]
		for _, r := range rows {
			if v.IsNull(int(r)) {
				x.nulls++
			}
		}
		x.values += len(rows)
		if v.Type.Numeric() && !slices.Contains(a.b.Log.Carried, c) {
			x.frozen += frozen(v, t, rows)
		}
	}
	return x, outside
}

// frozen counts the frozen runs of a column of numbers; NULLs are no readings.
func frozen(v *column.Vector, t []int64, rows []int32) int {
	c := series.Course{T: make([]int64, 0, len(rows)), V: make([]float64, 0, len(rows))}
	for _, r := range rows {
		if !v.IsNull(int(r)) {
			c.T, c.V = append(c.T, t[r]), append(c.V, reading(v, r))
		}
	}
	return c.Frozen()
}

// table writes the rows.
func (a *auditRows) table(found []audited) *column.Batch {
	n, by := len(found), len(a.b.Clauses.By)
	out := &column.Batch{N: n, Cols: make([]column.Vector, len(a.b.Columns))}
	for i := range a.b.Columns {
		if !needed(a.r.Need, i) {
			out.Cols[i] = column.Vector{Type: column.Null, N: n}
			continue
		}
		col := a.b.Columns[i]
		w := column.NewBuilder(col.Type, col.Unit)
		for k := range found {
			if i < by {
				a.putLogger(w, i, a.rowsOf[k])
			} else {
				putAudit(w, i-by, &found[k])
			}
		}
		out.Cols[i] = w.Finish()
	}
	return out
}

func (a *auditRows) putLogger(w *column.Builder, k int, l auditLine) {
	if l.logger < 0 {
		w.Append(a.expected.Cols[k].Value(l.missing))
		return
	}
	w.AppendRow(&a.input.Cols[a.b.Clauses.By[k]], int(a.of(l.logger)[0]))
}

func putAudit(w *column.Builder, what int, x *audited) {
	count := func(n int, known bool) {
		if known {
			w.AppendInt(int64(n))
		} else {
			w.AppendNull()
		}
	}
	switch what {
	case auditFirst:
		count(int(x.First), x.Got > 0)
	case auditLast:
		count(int(x.Last), x.Got > 0)
	case auditExpected:
		count(x.Expected, x.Expected >= 0)
	case auditGot:
		count(x.Got, true)
	case auditCompleteness:
		w.AppendFloat(float64(x.Came) / math.Max(1, float64(x.Expected)))
	case auditStep:
		count(int(x.Step), x.Step > 0)
	case auditGaps:
		count(x.Gaps, true)
	case auditLongest:
		count(int(x.Longest), x.Gaps > 0)
	case auditRepeated:
		count(x.Repeated, true)
	case auditBackward:
		count(x.Backward, true)
	case auditFrozen:
		count(x.frozen, true)
	case auditMissing:
		if x.values == 0 {
			w.AppendNull()
		} else {
			w.AppendFloat(float64(x.nulls) / float64(x.values))
		}
	}
}

// noLogger is the error of a log whose BY columns cannot tell loggers apart.
func noLogger(b *Bound, c int) error {
	return problem.New("types", b.Place, "'%s' of %s is %s, which tells no loggers apart", b.Input[c].Name, b.Name, b.Input[c].Type)
}
