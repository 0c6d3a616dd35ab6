package relation

import (
	"slices"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/voronoi"
)

// LogClauses are the bound clauses of the relations over a log of readings. Times
// and lengths of time are in microseconds.
type LogClauses struct {
	Every      int64 // 0: not given
	Ranged     bool
	From, To   int64
	Method     string // LINEAR, HOLD, MEAN, MAX, MIN
	Stamp      string // START, INSTANT, END
	LongestGap int64  // 0: not given
	Bridging   int64
	Below      bool
	Limit      float64
	Until      float64
	HasUntil   bool
	// Carried are the columns of the input that come from a campaign or a register and not,
	// as the stamps do, from a log: they are known of a logger whatever it measured.
	Carried []int
	// Readings are the columns that an AUDIT looks at.
	Readings []int
}

// usualGaps is how many of a logger's usual steps the longest gap is where LONGEST GAP
// does not say.
const usualGaps = 2

// loggers are the rows of a log by logger, in the order of the BY columns, then as they
// stand in the input.
type loggers struct {
	b     *Bound
	input *column.Table
	keys  [][]uint64 // of the BY columns, while they are sorted
	rows  []int32
	first []int // of each logger, in rows; one more at the end
}

// newLoggers sorts the rows into loggers. Those without a logger or a stamp are left
// out with a note.
func newLoggers(b *Bound, env *Env, input *column.Table) *loggers {
	l := &loggers{b: b, input: input, rows: stamped(b, env, input)}
	for _, c := range b.Clauses.By {
		l.keys = append(l.keys, sortKeys(&input.Cols[c])...)
	}
	spare := make([]int32, len(l.rows))
	for i := len(l.keys) - 1; i >= 0 && len(l.rows) > 0; i-- {
		l.rows = radix(l.rows, spare, l.keys[i])
	}
	for i, r := range l.rows {
		if i == 0 || !l.same(l.rows[i-1], r) {
			l.first = append(l.first, i)
		}
	}
	l.first = append(l.first, len(l.rows))
	l.keys = nil
	return l
}

func (l *loggers) same(a, b int32) bool {
	for _, k := range l.keys {
		if k[a] != k[b] {
			return false
		}
	}
	return true
}

// n is the number of loggers.
func (l *loggers) n() int { return len(l.first) - 1 }

// of is the rows of a logger.
func (l *loggers) of(i int) []int32 { return l.rows[l.first[i]:l.first[i+1]] }

// name is a logger for messages.
func (l *loggers) name(i int) string { return loggerName(l.b, l.input, l.of(i)[0]) }

func loggerName(b *Bound, input *column.Table, row int32) string {
	name := ""
	for k, c := range b.Clauses.By {
		if k > 0 {
			name += ", "
		}
		name += idText(&input.Cols[c], int(row))
	}
	return name
}

// wanted reports whether any row of a logger is asked for.
func (l *loggers) wanted(i int, r Request) bool {
	if r.Wanted == nil {
		return true
	}
	return slices.ContainsFunc(l.of(i), func(row int32) bool { return column.Bit(r.Wanted, int(row)) })
}

// stamped are the rows with a logger and a stamp.
func stamped(b *Bound, env *Env, input *column.Table) []int32 {
	rows := make([]int32, 0, input.N)
	needed := slices.Concat(b.Clauses.By, b.Clauses.On)
	missing := make([]int, len(needed))
	nulls := false
	for _, c := range needed {
		nulls = nulls || input.Cols[c].Valid != nil || input.Cols[c].Type == column.Null
	}
next:
	for row := range int32(input.N) {
		if nulls {
			for i, c := range needed {
				if input.Cols[c].IsNull(int(row)) {
					missing[i]++
					continue next
				}
			}
		}
		rows = append(rows, row)
	}
	for i, n := range missing {
		if n > 0 {
			env.Notes.Add(note.Warning, note.Sites, "%s of %s without a value of %s %s left out", count(n, "row"), b.Name,
				b.Input[needed[i]].Name, are(n))
		}
	}
	return rows
}

// byTime is the rows of a logger in the order of their stamps; rows of one stamp as
// they stand.
func (l *loggers) byTime(i int) []int32 {
	rows, t := l.of(i), l.input.Cols[l.b.Clauses.On[0]].I
	for k := 1; k < len(rows); k++ {
		if t[rows[k]] < t[rows[k-1]] {
			rows = slices.Clone(rows)
			slices.SortStableFunc(rows, func(a, b int32) int {
				switch {
				case t[a] < t[b]:
					return -1
				case t[a] > t[b]:
					return 1
				}
				return 0
			})
			break
		}
	}
	return rows
}

// times is the first and the last stamp of all rows.
func (l *loggers) times() (first, last int64) {
	t := l.input.Cols[l.b.Clauses.On[0]].I
	for i, r := range l.rows {
		if i == 0 {
			first, last = t[r], t[r]
		}
		first, last = min(first, t[r]), max(last, t[r])
	}
	return first, last
}

// reading is a reading as float64, for columns of numbers and times.
func reading(v *column.Vector, row int32) float64 {
	if v.Type == column.Real {
		return v.F[row]
	}
	return float64(v.I[row])
}

// infinite refuses a reading with which nothing can be computed.
func (l *loggers) infinite(c int, row int32) error {
	return problem.New("no-value", l.b.Place, "%s of %s is %s at %s, with which nothing can be computed", l.b.Input[c].Name,
		loggerName(l.b, l.input, row), l.input.Cols[c].Value(int(row)), l.input.Cols[l.b.Clauses.On[0]].Value(int(row))).
		WithHint("leave such rows out with OF (SELECT … WHERE …)")
}

// noGeometry is the cost of relations over a log.
func noGeometry() (voronoi.Cost, error) { return voronoi.Cost{OneByOne: true}, nil }
