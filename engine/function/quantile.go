package function

import (
	"cmp"
	"math"
	"math/bits"
	"slices"
	"strconv"

	"nearcell/catalog/column"
)

func checkQuantile(args []Arg, weight *Arg) (Result, error) {
	if err := firstError(wantCount("QUANTILE", args, 2, 2), checkWeight(weight)); err != nil {
		return Result{}, err
	}
	if p, ok := constReal(args[1].Const); !ok || !(p >= 0 && p <= 1) {
		return Result{}, wrong(1, "arguments", "QUANTILE needs a constant from 0 to 1 as its second argument").
			hint("0.95 is the value up to which 95 %% lie")
	}
	return quantileOf("QUANTILE", args)
}

func checkMedian(args []Arg, weight *Arg) (Result, error) {
	if err := firstError(wantCount("MEDIAN", args, 1, 1), checkWeight(weight)); err != nil {
		return Result{}, err
	}
	return quantileOf("MEDIAN", args)
}

func quantileOf(name string, args []Arg) (Result, error) {
	t := args[0].Type
	if t != column.Interval && t != column.Timestamp {
		if err := wantNumber(name, args, 0); err != nil {
			return Result{}, err
		}
		t = numberType(args[:1])
	}
	types := []column.Type{t}
	if len(args) == 2 {
		types = append(types, column.Real)
	}
	return Result{t, args[0].Unit, types}, nil
}

// quantiles keep every value, as a key of the same order, with its group and
// weight, and sort in the end.
type quantiles struct {
	tally
	t       column.Type
	p       float64
	groups  []int32
	keys    []int64
	weights []float64
}

func newQuantile(s Setup) Accumulator {
	p, _ := constReal(s.Consts[1])
	return &quantiles{tally: tally{weighted: s.Weighted}, t: s.Args[0], p: p}
}

func newMedian(s Setup) Accumulator {
	return &quantiles{tally: tally{weighted: s.Weighted}, t: s.Args[0], p: 0.5}
}

func (a *quantiles) Add(groups []int32, on []uint64, n int, args []column.Vector, weight *column.Vector) error {
	rows, weights, err := a.begin(groups, on, n, args[:1], weight)
	if err != nil {
		return err
	}
	for _, i := range rows {
		a.groups = append(a.groups, groups[i])
		a.keys = append(a.keys, keyOf(&args[0], int(i)))
		if weights != nil {
			a.weights = append(a.weights, weights[i])
		}
	}
	return nil
}

// Bytes is what the values take.
func (a *quantiles) Bytes() int64 {
	return int64(4*cap(a.groups) + 8*cap(a.keys) + 8*cap(a.weights))
}

func (a *quantiles) Merge(other Accumulator, to []int32) error {
	o := other.(*quantiles)
	a.mergeFacts(&o.tally, to)
	for _, g := range o.groups {
		a.groups = append(a.groups, to[g])
	}
	a.keys = append(a.keys, o.keys...)
	a.weights = append(a.weights, o.weights...)
	return nil
}

func (a *quantiles) Result(groups int) (column.Vector, error) {
	v := column.New(a.t, nil, groups)
	start := make([]int, groups+1)
	for i, g := range a.groups {
		if err := a.stopped(i); err != nil {
			return v, err
		}
		start[g+1]++
	}
	for g := range groups {
		start[g+1] += start[g]
	}
	if a.weighted {
		return v, a.weightedQuantiles(&v, start)
	}
	return v, a.plainQuantiles(&v, start)
}

func (a *quantiles) plainQuantiles(v *column.Vector, start []int) error {
	sorted := make([]int64, len(a.keys))
	next := slices.Clone(start)
	for i, g := range a.groups {
		if err := a.stopped(i); err != nil {
			return err
		}
		sorted[next[g]] = a.keys[i]
		next[g]++
	}
	seen := 0
	for g := range v.N {
		part := sorted[start[g]:start[g+1]]
		if len(part) == 0 {
			v.SetNull(g)
			continue
		}
		if seen += len(part); seen >= stopRows && a.stop != nil {
			if err := a.stop(); err != nil {
				return err
			}
			seen = 0
		}
		setKey(v, g, selected(part, rankOf(a.p, len(part))-1))
	}
	return nil
}

// rankOf is the smallest rank r >= 1 with r >= p·n, where p counts as the
// decimal number that it is written as: 0.05 of 20 rows is the first one,
// although the float64 0.05 is a little more than 1/20.
func rankOf(p float64, n int) int {
	if p <= 0 {
		return 1
	}
	if p >= 1 {
		return n
	}
	digits, exponent := shortest(p) // 0.d1d2… · 10^exponent
	places := len(digits) - exponent
	if places > 19 {
		return max(1, int(math.Ceil(p*float64(n))))
	}
	m, _ := strconv.ParseUint(string(digits), 10, 64)
	scale := uint64(1)
	for range places {
		scale *= 10
	}
	hi, lo := bits.Mul64(m, uint64(n))
	q, rest := bits.Div64(hi, lo, scale) // p < 1: hi < scale
	if rest > 0 {
		q++
	}
	return max(1, int(q))
}

// weightSlack is how close, as a part of the total weight, a sum of weights
// must come to p of the total to count as having reached it. Weights that are
// measured volumes are right to about 1e-12 of the whole; without the slack
// the median of four equal cells would depend on their last bits.
const weightSlack = 1e-12

type weightedKey struct {
	key int64
	w   float64
}

func (a *quantiles) weightedQuantiles(v *column.Vector, start []int) error {
	stop := a.stop
	if stop == nil {
		stop = func() error { return nil }
	}
	sorted := make([]weightedKey, len(a.keys))
	next := slices.Clone(start)
	for i, g := range a.groups {
		if err := a.stopped(i); err != nil {
			return err
		}
		sorted[next[g]] = weightedKey{a.keys[i], a.weights[i]}
		next[g]++
	}
	for g := range v.N {
		part := sorted[start[g]:start[g+1]]
		if len(part) == 0 {
			v.SetNull(g)
			continue
		}
		if err := a.stopped(g); err != nil {
			return err
		}
		err := SortUntil(stop, part, func(x, y weightedKey) int {
			return cmp.Or(cmp.Compare(x.key, y.key), cmp.Compare(x.w, y.w))
		})
		if err != nil {
			return err
		}
		setKey(v, g, weightedQuantile(part, a.p))
	}
	return nil
}

// weightedQuantile is the smallest key up to which lies p of the weight, of
// sorted keys with weights above 0.
func weightedQuantile(sorted []weightedKey, p float64) int64 {
	last := sorted[len(sorted)-1].key
	if p >= 1 {
		return last
	}
	var total dd
	for _, x := range sorted {
		total = total.plus(x.w)
	}
	target := total.times(p).add(total.times(-weightSlack))
	var sum dd
	for _, x := range sorted {
		sum = sum.plus(x.w)
		if reached := sum.add(target.negative()); reached.hi >= 0 {
			return x.key
		}
	}
	return last
}
