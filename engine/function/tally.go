package function

import (
	"math"
	"math/bits"

	"nearcell/catalog/column"
	"nearcell/voronoi/delaunay"
)

// tally is what accumulators share: which rows count, and their weights.
type tally struct {
	arena    Arena
	weighted bool
	facts    []weightState
	identity []int32
	some     []int32      // scratch of selected
	heavy    []int32      // scratch of begin
	stop     func() error // asked in Result whether to go on; nil: nobody asks
}

// weightState is WeightFacts in the making.
type weightState struct {
	sum, squares, null dd
	largest            float64
	rows               int64
}

// largeGroups is how many groups' states stand on large pages: finding small ones takes
// longer than the copy.
const largeGroups = 1 << 16

// grow makes room for group g.
func grow[T any](s []T, g int32) []T {
	if int(g) < len(s) {
		return s
	}
	n := int(g) + 1
	if n > cap(s) {
		fresh := make([]T, n, max(n, 2*cap(s)))
		if n > largeGroups {
			delaunay.AdviseHugePages(fresh[:cap(fresh)])
		}
		copy(fresh, s)
		return fresh
	}
	return s[:n]
}

// begin checks the weights of all rows that are on, takes note of those whose
// value is NULL, and gives the rows that count: on, with a value in each of the
// vectors and, where there are weights, a weight above 0.
func (t *tally) begin(groups []int32, on []uint64, n int, vectors []column.Vector, weight *column.Vector) (rows []int32, weights []float64, err error) {
	t.arena.Reset()
	views := make([]*column.Vector, len(vectors))
	for i := range vectors {
		views[i] = &vectors[i]
	}
	active := ActiveRows(&t.arena, on, n, views...)
	if weight == nil {
		return t.selected(active, n), nil, nil
	}
	if weights, err = t.checkWeights(on, n, weight); err != nil {
		return nil, nil, err
	}
	rows = t.selected(active, n)
	heavy := t.heavy[:0]
	for _, i := range rows {
		w, g := weights[i], groups[i]
		if w == 0 {
			continue
		}
		heavy = append(heavy, i)
		t.facts = grow(t.facts, g)
		f := &t.facts[g]
		f.sum = f.sum.plus(w)
		f.squares = f.squares.accumulate(twoProduct(w, w))
		f.largest = max(f.largest, w)
		f.rows++
	}
	if active != nil {
		t.weighNulls(groups, on, active, n, weights)
	}
	t.heavy = heavy
	return heavy, weights, nil
}

// weighNulls adds up the weights of the rows that are on and have no value.
func (t *tally) weighNulls(groups []int32, on, active []uint64, n int, weights []float64) {
	for k, have := range active {
		missing := ^have
		if on != nil {
			missing &= on[k]
		}
		for ; missing != 0; missing &= missing - 1 {
			i := k<<6 + bits.TrailingZeros64(missing)
			if i >= n {
				return
			}
			t.facts = grow(t.facts, groups[i])
			f := &t.facts[groups[i]]
			f.null = f.null.plus(weights[i])
		}
	}
}

// selected lists the rows of a bitmap (nil: all n).
func (t *tally) selected(active []uint64, n int) []int32 {
	for len(t.identity) < n {
		t.identity = append(t.identity, int32(len(t.identity)))
	}
	if active == nil {
		return t.identity[:n:n]
	}
	rows := t.some[:0]
	for k, w := range active {
		if w == ^uint64(0) && k<<6+64 <= n {
			rows = append(rows, t.identity[k<<6:k<<6+64]...)
			continue
		}
		for ; w != 0; w &= w - 1 {
			if i := k<<6 + bits.TrailingZeros64(w); i < n {
				rows = append(rows, int32(i))
			}
		}
	}
	t.some = rows
	return rows
}

// OpenCell is the hint of a weight that is infinite. Who knows the campaign can name a
// solid around it.
const OpenCell = "a cell that nothing closes off is unbounded: put the campaign WITHIN a solid, or leave such cells out with WHERE bounded"

// checkWeights refuses weights that are no share of anything.
func (t *tally) checkWeights(on []uint64, n int, weight *column.Vector) ([]float64, error) {
	w := weight.F
	if weight.Type == column.Integer {
		w = t.arena.Floats(n)
		for i, k := range weight.I[:n] {
			w[i] = float64(k)
		}
	}
	suspicious := weight.Valid != nil || weight.Type == column.Null
	if !suspicious {
		for _, x := range w[:n] {
			suspicious = suspicious || !(x >= 0 && x <= math.MaxFloat64)
		}
	}
	row := -1
	if suspicious {
		row = FirstRow(on, n, func(i int) bool { return weight.IsNull(i) || !(w[i] >= 0 && w[i] <= math.MaxFloat64) })
	}
	if row < 0 {
		return w, nil
	}
	f := &RowFault{Row: row, Code: "weight"}
	switch {
	case weight.IsNull(row):
		f.Message, f.Hint = "the weight is NULL", "leave the row out with WHERE, or give it a weight with COALESCE"
	case w[row] < 0:
		f.Message, f.Hint = "the weight "+column.FormatReal(w[row])+" is negative", "a weight is a share of space or time: 0 or more"
	case w[row] != w[row]:
		f.Message = "the weight is no number"
	default:
		f.Message = "the weight is infinite"
		f.Hint = OpenCell
	}
	return nil, f
}

// mergeFacts adds the weights of another tally.
func (t *tally) mergeFacts(o *tally, to []int32) {
	for g := range o.facts {
		t.facts = grow(t.facts, to[g])
		a, b := &t.facts[to[g]], &o.facts[g]
		a.sum, a.squares, a.null = a.sum.add(b.sum), a.squares.add(b.squares), a.null.add(b.null)
		a.largest = max(a.largest, b.largest)
		a.rows += b.rows
	}
}

// fact is the state of a group, zero where it had no row.
func (t *tally) fact(g int) weightState {
	if g < len(t.facts) {
		return t.facts[g]
	}
	return weightState{}
}

// Weights tells of each group what the notes under a weighted answer say.
func (t *tally) Weights(groups int) []WeightFacts {
	if !t.weighted {
		return nil
	}
	out := make([]WeightFacts, groups)
	for g := range out {
		f := t.fact(g)
		out[g] = WeightFacts{Rows: int(f.rows), Sum: f.sum.value(), SumSquares: f.squares.value(),
			Largest: f.largest, NullWeight: f.null.value()}
	}
	return out
}
