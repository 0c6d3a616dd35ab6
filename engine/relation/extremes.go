package relation

import (
	"cmp"
	"context"
	"math"
	"math/rand/v2"
	"slices"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/voronoi"
)

// extremes is EXTREMES OF (query): the highest and the lowest rows, with those that
// cannot be told from them.
var extremes = &Definition{
	Noun:    "EXTREMES",
	RowIs:   "ranked row, from the highest down and then from the lowest up",
	Over:    OverRows,
	Meaning: "the highest and the lowest rows, ties listed, and how likely each is the first",
	Clauses: []string{"FOR", "NUMBER", "UNCERTAINTY"},
	Own:     true,
	Open:    openExtremes,
	Guess: func(b *Bound, rows float64, _ func(int) float64) float64 {
		return 2 * min(rows, float64(b.Choice.Number))
	},
	layout: func(b *Bound) []Column {
		computed := b.computed()
		return append(b.ownColumns(computed), computed...)
	},
}

// The computed columns of EXTREMES, in their order.
const (
	extremeSide = iota
	extremeRank
	extremeTied
	extremeHighest
	extremeLowest
)

func init() {
	extremes.Computed = []Column{
		extremeSide:    measure("side", column.Text, 0, 0, "highest or lowest: the end that the rank counts from"),
		extremeRank:    measure("rank", column.Integer, 0, 0, "1, 2 … from that end; equal values have one rank, and all of the last rank are listed"),
		extremeTied:    measure("tied", column.Boolean, 0, 0, "another row has the same value, to 1e-9"),
		extremeHighest: measure("p_highest", column.Real, 0, 0, "with UNCERTAINTY: the probability that the row's true value is the highest of all"),
		extremeLowest:  measure("p_lowest", column.Real, 0, 0, "with UNCERTAINTY: the probability that it is the lowest of all"),
	}
}

const (
	drawsOfExtremes = 100_000
	seedOfExtremes  = 20310407
	// valuesDrawn limits the work where very many rows may be the highest.
	valuesDrawn = 200_000_000
	fewestDraws = 1000
	// surely is how many standard uncertainties nothing exceeds: 1e-9 of a normal
	// error lies beyond six.
	surely = 6
	// tieWithin is what values of readings may differ by and be meant to be equal.
	tieWithin = 1e-9
)

type extremeRows struct {
	b       *Bound
	env     *Env
	input   *column.Table
	r       Request
	rows    []int32 // with a value, from the highest
	value   []float64
	u       []float64 // by row of the input; nil: no uncertainty
	highest []float64 // by row of the input
	lowest  []float64
}

func openExtremes(b *Bound, env *Env, input *column.Table, r Request) (Rows, error) {
	e := &extremeRows{b: b, env: env, input: input, r: r, value: make([]float64, input.N)}
	v := &input.Cols[b.Clauses.For[0]]
	missing := 0
	for row := range int32(input.N) {
		if v.IsNull(int(row)) {
			missing++
			continue
		}
		e.value[row] = reading(v, row)
		e.rows = append(e.rows, row)
	}
	name := b.Input[b.Clauses.For[0]].Name
	if missing > 0 {
		env.Notes.Add(note.Note, note.Rows, "%s of %s without a value of %s %s in no rank", count(missing, "row"), b.Name, name, are(missing))
	}
	if len(e.rows) == 0 {
		env.Notes.Add(note.Note, note.Sites, "there is no value of %s in %s, so %s has no rows", name, b.Name, b.Title())
	}
	if err := e.uncertainties(); err != nil {
		return nil, err
	}
	e.sort()
	return e, nil
}

func (e *extremeRows) Cost() (voronoi.Cost, error) { return noGeometry() }

// uncertainties reads each row's own standard uncertainty.
func (e *extremeRows) uncertainties() error {
	c := &e.b.Choice
	if !c.Uncertain {
		return nil
	}
	e.u = make([]float64, e.input.N)
	for _, row := range e.rows {
		e.u[row] = c.Each
		for _, at := range c.Spread {
			v := &e.input.Cols[at]
			x := math.NaN()
			if !v.IsNull(int(row)) {
				x = reading(v, row)
			}
			if !(x >= 0) || math.IsInf(x, 0) {
				return problem.New("no-value", e.b.Place, "the uncertainty %s in row %d of %s is %s: a standard uncertainty is a number of 0 or more",
					e.b.Input[at].Name, row+1, e.b.Name, v.Value(int(row))).WithHint("COALESCE(%s, …) gives it a value", e.b.Input[at].Name)
			}
			e.u[row] = x
		}
		if math.IsInf(e.value[row], 0) {
			return problem.New("no-value", e.b.Place, "%s in row %d of %s is infinite, and no uncertainty reaches there", e.b.Input[e.b.Clauses.For[0]].Name, row+1, e.b.Name)
		}
	}
	return nil
}

// sort orders the rows from the highest value; equal ones by their uncertainty and
// then by what they are, so that the order of the input does not matter.
func (e *extremeRows) sort() {
	var keys [][]uint64
	for i := range e.input.Cols {
		if e.input.Cols[i].Type != column.Null {
			keys = append(keys, sortKeys(&e.input.Cols[i])...)
		}
	}
	slices.SortStableFunc(e.rows, func(a, b int32) int {
		if c := cmp.Compare(e.value[b], e.value[a]); c != 0 {
			return c
		}
		if e.u != nil && e.u[a] != e.u[b] {
			return cmp.Compare(e.u[b], e.u[a])
		}
		for _, k := range keys {
			if k[a] != k[b] {
				return cmp.Compare(k[a], k[b])
			}
		}
		return 0
	})
}

// ranked is a row of the answer.
type ranked struct {
	row  int32
	rank int
	tied bool
	low  bool
}

// ranks are the rows whose rank from an end is at most the NUMBER.
func (e *extremeRows) ranks(rows []int32, low bool) []ranked {
	var list []ranked
	for lo := 0; lo < len(rows) && lo < e.b.Choice.Number; {
		hi := lo + 1
		for hi < len(rows) && sameValue(e.value[rows[hi]], e.value[rows[lo]]) {
			hi++
		}
		for _, row := range rows[lo:hi] {
			list = append(list, ranked{row, lo + 1, hi-lo > 1, low})
		}
		lo = hi
	}
	return list
}

// sameValue tells values apart that differ by more than rounding.
func sameValue(a, b float64) bool { return a == b || math.Abs(a-b) <= tieWithin }

// Run ranks the rows.
func (e *extremeRows) Run(ctx context.Context, emit func(*column.Batch) error) error {
	upward := slices.Clone(e.rows)
	slices.Reverse(upward)
	list := append(e.ranks(e.rows, false), e.ranks(e.ascending(upward), true)...)
	own := len(e.b.Input)
	if e.u != nil && (needed(e.r.Need, own+extremeHighest) || needed(e.r.Need, own+extremeLowest)) {
		if err := e.draw(ctx); err != nil {
			return err
		}
	}
	for len(list) > 0 {
		n := min(len(list), BatchRows)
		if err := emit(e.batch(list[:n])); err != nil {
			return err
		}
		list = list[n:]
	}
	return nil
}

// ascending puts rows of equal values back into the order that they have from the
// other end.
func (e *extremeRows) ascending(rows []int32) []int32 {
	for lo := 0; lo < len(rows); {
		hi := lo + 1
		for hi < len(rows) && e.value[rows[hi]] == e.value[rows[lo]] {
			hi++
		}
		slices.Reverse(rows[lo:hi])
		lo = hi
	}
	return rows
}

func (e *extremeRows) batch(list []ranked) *column.Batch {
	if e.r.Wanted != nil {
		list = slices.DeleteFunc(slices.Clone(list), func(x ranked) bool { return !column.Bit(e.r.Wanted, int(x.row)) })
	}
	rows := make([]int32, len(list))
	for i, x := range list {
		rows[i] = x.row
	}
	own := len(e.b.Input)
	out := &column.Batch{N: len(list), Cols: make([]column.Vector, len(e.b.Columns))}
	for i, col := range e.b.Columns {
		switch {
		case !needed(e.r.Need, i):
			out.Cols[i] = column.Vector{Type: column.Null, N: len(list)}
		case i < own:
			out.Cols[i] = column.Gather(&e.input.Cols[i], rows)
		default:
			w := column.NewBuilder(col.Type, col.Unit)
			for _, x := range list {
				e.put(w, i-own, x)
			}
			out.Cols[i] = w.Finish()
		}
	}
	return out
}

func (e *extremeRows) put(w *column.Builder, what int, x ranked) {
	switch what {
	case extremeSide:
		side := "highest"
		if x.low {
			side = "lowest"
		}
		w.AppendText(side)
	case extremeRank:
		w.AppendInt(int64(x.rank))
	case extremeTied:
		w.AppendBool(x.tied)
	case extremeHighest:
		e.probability(w, e.highest, x.row)
	case extremeLowest:
		e.probability(w, e.lowest, x.row)
	}
}

func (e *extremeRows) probability(w *column.Builder, p []float64, row int32) {
	if p == nil {
		w.AppendNull()
		return
	}
	w.AppendFloat(p[row])
}

// draw finds how likely each row is to be the highest and the lowest: errors are
// drawn, normal with the row's own standard uncertainty, many times over. Rows of
// one value and one uncertainty have one probability, whichever of them won more
// often, so that the order of the input does not matter.
func (e *extremeRows) draw(ctx context.Context) error {
	draws := drawsOfExtremes
	var err error
	if e.highest, draws, err = e.first(ctx, 1, draws); err != nil {
		return err
	}
	if e.lowest, draws, err = e.first(ctx, -1, draws); err != nil {
		return err
	}
	text := "p_highest and p_lowest of %s count %d draws of normal errors with the standard uncertainty of each row (seed %d): they are right to about %.2g"
	e.env.Notes.Add(note.Note, note.Weights, text, e.b.Title(), draws, seedOfExtremes, 1/math.Sqrt(float64(draws)))
	if e.b.Choice.Common {
		e.env.Notes.Add(note.Note, note.Weights, "an uncertainty that all rows of %s share (COMMON) moves them together and no rank", e.b.Title())
	}
	return nil
}

// first gives the probability of each row to be the first from one end: sign is 1
// from above and -1 from below.
func (e *extremeRows) first(ctx context.Context, sign float64, draws int) ([]float64, int, error) {
	p := make([]float64, e.input.N)
	bar := math.Inf(-1) // what some row reaches for sure
	for _, row := range e.rows {
		bar = max(bar, sign*e.value[row]-float64(surely*e.u[row]))
	}
	var may []int32
	for _, row := range e.rows {
		if sign*e.value[row]+float64(surely*e.u[row]) >= bar {
			may = append(may, row)
		}
	}
	if len(may) == 0 {
		return p, draws, nil
	}
	draws = max(fewestDraws, min(draws, valuesDrawn/len(may)))
	class := make([]int32, len(may)) // rows alike stand beside each other
	size := []float64{}
	for i, row := range may {
		if i > 0 && e.value[may[i-1]] == e.value[row] && e.u[may[i-1]] == e.u[row] {
			class[i] = class[i-1]
			size[class[i]]++
			continue
		}
		class[i] = int32(len(size))
		size = append(size, 1)
	}
	wins := make([]int, len(size))
	random := rand.New(rand.NewPCG(seedOfExtremes, math.Float64bits(sign)))
	for d := range draws {
		if d&1023 == 0 && ctx.Err() != nil {
			return nil, 0, ctx.Err()
		}
		best, winner := math.Inf(-1), int32(0)
		for i, row := range may {
			if x := sign*e.value[row] + float64(e.u[row]*random.NormFloat64()); x > best {
				best, winner = x, class[i]
			}
		}
		wins[winner]++
	}
	for i, row := range may {
		p[row] = float64(wins[class[i]]) / float64(draws) / size[class[i]]
	}
	return p, draws, nil
}
