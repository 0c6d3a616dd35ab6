package function

import (
	"slices"
	"strings"

	"nearcell/catalog/column"
)

// Sliders makes a Slider for each goroutine over the same prepared rows.
type Sliders struct {
	Picks bool // the values are those of rows: Slid.Pick
	New   func(out *Slid) Slider
}

// over is the Sliders of one kind of state. counts says which rows count.
func over[S any](on []uint64, add func(s *S, row int32) error, merge func(a, b *S), give func(s *S, row int32, out *Slid) error) Sliders {
	add = counting(on, add)
	return Sliders{New: func(out *Slid) Slider {
		return &sliding[S]{add: add, merge: merge, give: func(s *S, row int32) error {
			return atRow(give(s, row, out), row)
		}}
	}}
}

func counting[S any](on []uint64, add func(s *S, row int32) error) func(s *S, row int32) error {
	if on == nil {
		return add
	}
	return func(s *S, row int32) error {
		if !column.Bit(on, int(row)) {
			return nil
		}
		return add(s, row)
	}
}

func slideCount(_ Setup, r Rows) (Sliders, error) {
	on, _, err := r.counting(r.Args)
	return over(on, func(n *int64, _ int32) error {
		*n++
		return nil
	}, func(a, b *int64) { *a += *b }, func(n *int64, row int32, out *Slid) error {
		out.I[row] = *n
		return nil
	}), err
}

// weightedSum is a sum with the weight of its rows.
type weightedSum struct {
	realSum
	w dd
}

func slideSum(mean bool) func(Setup, Rows) (Sliders, error) {
	return func(s Setup, r Rows) (Sliders, error) {
		acc := newSum(mean)(s)
		on, weights, err := r.counting(r.Args)
		if err != nil {
			return Sliders{}, err
		}
		if ints, ok := acc.(*intSums); ok {
			return ints.slide(r, on), nil
		}
		return acc.(*realSums).slide(r, on, weights), nil
	}
}

func (a *intSums) slide(r Rows, on []uint64) Sliders {
	x := &r.Args[0]
	return over(on, func(s *intSum, row int32) error {
		s.n++
		s.s = s.s.plus(widen(x.I[row]))
		return nil
	}, func(s, t *intSum) {
		s.n += t.n
		s.s = s.s.plus(t.s)
	}, func(s *intSum, row int32, out *Slid) error {
		var err error
		switch {
		case s.n == 0:
			out.Null[row] = true
		case out.F != nil:
			out.F[row] = s.mean()
		case a.mean:
			out.I[row] = roundToInt(s.s.real().over(ofInt(s.n)))
		default:
			out.I[row], err = s.total(a.arg, 0)
		}
		return err
	})
}

func (a *realSums) slide(r Rows, on []uint64, weights []float64) Sliders {
	x := &r.Args[0]
	give := func(s *realSum, w dd, row int32, out *Slid) error {
		if s.n == 0 {
			out.Null[row] = true
			return nil
		}
		f, err := a.valueOf(s, w, 0)
		if err == nil && out.F != nil {
			out.F[row] = f.value() + 0
		} else if err == nil {
			out.I[row] = roundToInt(f)
		}
		return err
	}
	if weights == nil {
		return over(on, func(s *realSum, row int32) error {
			f := x.F[row]
			if f-f != 0 {
				s.infinite(f)
				return nil
			}
			s.n++
			s.s = s.s.plus(f)
			return nil
		}, (*realSum).merge, func(s *realSum, row int32, out *Slid) error { return give(s, dd{}, row, out) })
	}
	return over(on, func(s *weightedSum, row int32) error {
		w := weights[row]
		s.w = s.w.plus(w)
		if x.Type.Counted() {
			s.n++
			s.s = s.s.add(ofInt(x.I[row]).times(w))
		} else {
			s.addWeighted(x.F[row], w)
		}
		return nil
	}, func(s, t *weightedSum) {
		s.merge(&t.realSum)
		s.w = s.w.add(t.w)
	}, func(s *weightedSum, row int32, out *Slid) error { return give(&s.realSum, s.w, row, out) })
}

// holding is the state of SHARE.
type holding struct {
	shareCount
	w, total dd
}

func slideShare(_ Setup, r Rows) (Sliders, error) {
	on, weights, err := r.counting(r.Args)
	bits := r.Args[0].Bits
	return over(on, func(s *holding, row int32) error {
		yes := column.Bit(bits, int(row))
		s.all++
		if yes {
			s.holds++
		}
		if weights != nil {
			s.total = s.total.plus(weights[row])
			if yes {
				s.w = s.w.plus(weights[row])
			}
		}
		return nil
	}, func(s, t *holding) {
		s.all, s.holds = s.all+t.all, s.holds+t.holds
		s.w, s.total = s.w.add(t.w), s.total.add(t.total)
	}, func(s *holding, row int32, out *Slid) error {
		switch {
		case s.all == 0:
			out.Null[row] = true
		case weights != nil:
			out.F[row] = min(1, s.w.over(s.total).value())
		default:
			out.F[row] = float64(s.holds) / float64(s.all)
		}
		return nil
	}), err
}

// spread is the state of the variances.
type spread struct {
	moment
	squares dd // of the weights
}

func slideVariance(make func(Setup) Accumulator) func(Setup, Rows) (Sliders, error) {
	return func(s Setup, r Rows) (Sliders, error) {
		a := make(s).(*variances)
		on, weights, err := r.counting(r.Args)
		x := r.Args[0].F
		return over(on, func(s *spread, row int32) error {
			f, w := x[row], 1.0
			if f-f != 0 {
				return infiniteValue(int(row), a.name(), f)
			}
			if weights != nil {
				w = weights[row]
				s.squares = s.squares.accumulate(twoProduct(w, w))
			}
			s.add(f, w)
			return nil
		}, func(s, t *spread) {
			s.merge(&t.moment)
			s.squares = s.squares.add(t.squares)
		}, func(s *spread, row int32, out *Slid) error {
			f, ok, err := a.valueOf(&s.moment, s.squares, 0)
			out.F[row], out.Null[row] = f, !ok
			return err
		}), err
	}
}

func slideCorr(_ Setup, r Rows) (Sliders, error) {
	on, weights, err := r.counting(r.Args)
	y, x := r.Args[0].F, r.Args[1].F
	return over(on, func(j *joint, row int32) error {
		w := weightOf(weights, row)
		for _, f := range [2]float64{y[row], x[row]} {
			if f-f != 0 {
				return infiniteValue(int(row), "CORR", f)
			}
		}
		j.add(y[row], x[row], w)
		return nil
	}, (*joint).merge, func(j *joint, row int32, out *Slid) error {
		f, ok, err := j.correlation(0)
		out.F[row], out.Null[row] = f, !ok
		return err
	}), err
}

// rates is the state of MKT.
type rates struct {
	kineticSum
	w dd
}

func slideMKT(s Setup, r Rows) (Sliders, error) {
	a := newMKT(s).(*kinetic)
	on, weights, err := r.counting(r.Args[:1])
	x := r.Args[0].F
	return over(on, func(s *rates, row int32) error {
		w := weightOf(weights, row)
		s.w = s.w.plus(w)
		return a.addTo(&s.kineticSum, x[row], w, row)
	}, func(s, t *rates) {
		if t.n > 0 {
			s.add(t.s, t.exponent, t.n)
			s.w = s.w.add(t.w)
		}
	}, func(s *rates, row int32, out *Slid) error {
		if s.n == 0 {
			out.Null[row] = true
			return nil
		}
		f, err := a.valueOf(&s.kineticSum, s.w, 0)
		out.F[row] = f
		return err
	}), err
}

// levelled is the state of LEVEL_AVG, turning that of DIRECTION_AVG.
type levelled struct {
	levelSum
	w dd
}

type turning struct {
	directionSum
	w dd
}

func slideLevel(_ Setup, r Rows) (Sliders, error) {
	on, weights, err := r.counting(r.Args)
	x := r.Args[0].F
	return over(on, func(s *levelled, row int32) error {
		w := weightOf(weights, row)
		s.w = s.w.plus(w)
		return s.addLevel(x[row], w, row)
	}, func(s, t *levelled) {
		s.merge(&t.levelSum)
		s.w = s.w.add(t.w)
	}, func(s *levelled, row int32, out *Slid) error {
		if out.Null[row] = s.n == 0; s.n > 0 {
			out.F[row] = s.level(s.w)
		}
		return nil
	}), err
}

func slideDirection(_ Setup, r Rows) (Sliders, error) {
	on, weights, err := r.counting(r.Args)
	x := r.Args[0].F
	return over(on, func(s *turning, row int32) error {
		w := weightOf(weights, row)
		s.w = s.w.plus(w)
		return s.addAngle(x[row], w, row)
	}, func(s, t *turning) {
		s.add(&t.directionSum)
		s.w = s.w.add(t.w)
	}, func(s *turning, row int32, out *Slid) error {
		f, ok := 0.0, false
		if s.n > 0 {
			f, ok = s.direction(s.w)
		}
		out.F[row], out.Null[row] = f, !ok
		return nil
	}), err
}

func weightOf(weights []float64, row int32) float64 {
	if weights == nil {
		return 1
	}
	return weights[row]
}

// best is the state of aggregates that give the value of a row: that row plus 1.
type best struct{ row int32 }

// pickBest is the Sliders of the row that is before all others.
func pickBest(on []uint64, before func(a, b int32) bool) Sliders {
	offer := func(s *best, row int32) {
		if s.row == 0 || before(row, s.row-1) {
			s.row = row + 1
		}
	}
	p := over(on, func(s *best, row int32) error {
		offer(s, row)
		return nil
	}, func(s, t *best) {
		if t.row > 0 {
			offer(s, t.row-1)
		}
	}, func(s *best, row int32, out *Slid) error {
		out.Pick[row] = s.row - 1
		return nil
	})
	p.Picks = true
	return p
}

func slideExtreme(sign int) func(Setup, Rows) (Sliders, error) {
	return func(_ Setup, r Rows) (Sliders, error) {
		on, _, err := r.counting(r.Args)
		keys := orderKeys(&r.Args[0], r.N)
		if sign < 0 {
			return pickBest(on, func(a, b int32) bool { return keys[a] < keys[b] || keys[a] == keys[b] && a < b }), err
		}
		return pickBest(on, func(a, b int32) bool { return keys[a] > keys[b] || keys[a] == keys[b] && a < b }), err
	}
}

// slideEnd is FIRST and LAST over frames: of rows with equal keys the earlier one of
// the input is the first and the later one the last.
func slideEnd(last bool) func(Setup, Rows) (Sliders, error) {
	return func(s Setup, r Rows) (Sliders, error) {
		on, _, err := r.counting(r.Args)
		keys := make([][]int64, len(s.Keys))
		for i := range keys {
			keys[i] = orderKeys(&r.Args[i+1], r.N)
		}
		return pickBest(on, func(a, b int32) bool {
			for i, k := range keys {
				if k[a] != k[b] {
					return (k[a] < k[b]) != s.Keys[i].Descending != last
				}
			}
			return a < b != last
		}), err
	}
}

// orderKeys is a column as numbers of the same order.
func orderKeys(v *column.Vector, n int) []int64 {
	keys := make([]int64, n)
	switch {
	case v.Type == column.Null:
	case v.Type == column.Text:
		ranks := textRanks(v)
		for i := range keys {
			if !v.IsNull(i) {
				keys[i] = ranks[v.C[i]]
			}
		}
	default:
		for i := range keys {
			if !v.IsNull(i) {
				keys[i] = keyOf(v, i)
			}
		}
	}
	return keys
}

// textRanks is the place of each text in use among all of them.
func textRanks(v *column.Vector) []int64 {
	texts := v.Dict.Texts
	used := make([]bool, len(texts))
	var codes []uint32
	for i, c := range v.C[:v.N] {
		if !used[c] && !v.IsNull(i) {
			used[c] = true
			codes = append(codes, c)
		}
	}
	slices.SortFunc(codes, func(a, b uint32) int { return strings.Compare(texts[a], texts[b]) })
	ranks := make([]int64, len(texts))
	for i, c := range codes {
		ranks[c] = int64(i)
		if i > 0 && texts[c] == texts[codes[i-1]] {
			ranks[c] = ranks[codes[i-1]]
		}
	}
	return ranks
}
