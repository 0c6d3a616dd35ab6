package function

import (
	"math"
	"math/bits"

	"nearcell/catalog/column"
)

func sumAggregates() []*Aggregate {
	return []*Aggregate{
		{Name: "SUM", Signature: "SUM([DISTINCT] x)", Meaning: "the sum, with WEIGHTED BY that of x times the weight; NULL of no rows",
			Example: "SUM(volume)", Weighted: true, Check: checkSum, New: newSum(false), Slide: slideSum(false)},
		{Name: "AVG", Signature: "AVG([DISTINCT] x)", Meaning: "the mean, with WEIGHTED BY the weighted mean; also of intervals and time stamps",
			Example: "AVG(temp) WEIGHTED BY volume", Weighted: true, Check: checkAvg, New: newSum(true), Slide: slideSum(true)},
	}
}

func checkSum(args []Arg, weight *Arg) (Result, error) {
	if err := firstError(wantCount("SUM", args, 1, 1), checkWeight(weight)); err != nil {
		return Result{}, err
	}
	switch t := args[0].Type; {
	case t == column.Interval && weight == nil:
		return Result{t, nil, []column.Type{t}}, nil
	case t == column.Interval:
		return Result{}, wrong(0, "types", "a weighted SUM needs numbers, not INTERVAL").hint("HOURS(…) makes a number of an interval")
	case t == column.Boolean:
		return Result{}, wrong(0, "types", "SUM needs a number here, not BOOLEAN").hint("COUNT(*) FILTER (WHERE …) counts the rows for which a condition holds")
	}
	if err := wantNumber("SUM", args, 0); err != nil {
		return Result{}, err
	}
	if weight == nil {
		t := numberType(args)
		return Result{t, args[0].Unit, []column.Type{t}}, nil
	}
	return Result{column.Real, column.Mul(args[0].Unit, weight.Unit), []column.Type{column.Real}}, nil
}

func checkAvg(args []Arg, weight *Arg) (Result, error) {
	if err := firstError(wantCount("AVG", args, 1, 1), checkWeight(weight)); err != nil {
		return Result{}, err
	}
	if err := plainMean(args[0].Unit); err != nil {
		return Result{}, err
	}
	switch t := args[0].Type; {
	case t == column.Interval || t == column.Timestamp:
		return Result{t, nil, []column.Type{t}}, nil
	case t == column.Boolean:
		return Result{}, wrong(0, "types", "AVG needs a number here, not BOOLEAN").hint("SHARE(condition) is the fraction for which a condition holds")
	}
	t := numberType(args)
	if weight != nil {
		t = column.Real
	}
	return Result{column.Real, args[0].Unit, []column.Type{t}}, wantNumber("AVG", args, 0)
}

func newSum(mean bool) func(Setup) Accumulator {
	return func(s Setup) Accumulator {
		t := tally{weighted: s.Weighted}
		switch {
		case s.Args[0] == column.Real:
			return &realSums{tally: t, mean: mean}
		case s.Weighted:
			return &realSums{tally: t, mean: mean, result: s.Args[0]}
		}
		return &intSums{tally: t, mean: mean, arg: s.Args[0]}
	}
}

// realSum is the sum of one group. Infinities are counted, not added: their
// sum with finite numbers is sure, and that of both signs has no value.
type realSum struct {
	s          dd
	n          int64
	plus       int32 // infinities
	minus      int32
	overflowed bool
}

// realSums are the sums or means of REALs, or the weighted means of INTERVALs
// or TIMESTAMPs (result).
type realSums struct {
	tally
	mean   bool
	result column.Type
	sums   []realSum
}

func (a *realSums) Add(groups []int32, on []uint64, n int, args []column.Vector, weight *column.Vector) error {
	rows, weights, err := a.begin(groups, on, n, args, weight)
	if err != nil {
		return err
	}
	switch {
	case args[0].Type == column.Null:
	case args[0].Type.Counted():
		for _, i := range rows {
			a.sums = grow(a.sums, groups[i])
			s := &a.sums[groups[i]]
			s.n++
			s.s = s.s.add(ofInt(args[0].I[i]).times(weights[i]))
		}
	case weights == nil:
		a.addPlain(groups, rows, args[0].F)
	default:
		for _, i := range rows {
			a.sums = grow(a.sums, groups[i])
			a.sums[groups[i]].addWeighted(args[0].F[i], weights[i])
		}
	}
	return nil
}

func (a *realSums) addPlain(groups, rows []int32, x []float64) {
	sums := a.sums
	for _, i := range rows {
		g := groups[i]
		if int(g) >= len(sums) {
			sums = grow(sums, g)
		}
		s, f := &sums[g], x[i]
		if f-f != 0 {
			s.infinite(f)
			continue
		}
		s.n++
		s.s = s.s.plus(f)
	}
	a.sums = sums
}

func (s *realSum) infinite(f float64) {
	s.n++
	if f > 0 {
		s.plus++
	} else {
		s.minus++
	}
}

func (s *realSum) addWeighted(x, w float64) {
	if x-x != 0 {
		s.infinite(x)
		return
	}
	s.n++
	p := twoProduct(x, w)
	if p.hi-p.hi != 0 {
		s.overflowed = true
		return
	}
	s.s = s.s.accumulate(p)
}

func (a *realSums) Merge(other Accumulator, to []int32) error {
	o := other.(*realSums)
	a.mergeFacts(&o.tally, to)
	for g := range o.sums {
		a.sums = grow(a.sums, to[g])
		a.sums[to[g]].merge(&o.sums[g])
	}
	return nil
}

func (s *realSum) merge(t *realSum) {
	s.n, s.plus, s.minus, s.overflowed = s.n+t.n, s.plus+t.plus, s.minus+t.minus, s.overflowed || t.overflowed
	s.s = s.s.add(t.s)
}

func (a *realSums) name() string {
	if a.mean {
		return "AVG"
	}
	return "SUM"
}

func (a *realSums) Result(groups int) (column.Vector, error) {
	t := column.Real
	if a.result != column.Null {
		t = a.result
	}
	v := column.New(t, nil, groups)
	for g := range groups {
		if err := a.stopped(g); err != nil {
			return v, err
		}
		if g >= len(a.sums) || a.sums[g].n == 0 {
			v.SetNull(g)
			continue
		}
		f, err := a.sumOf(g)
		if err != nil {
			return v, err
		}
		if t == column.Real {
			v.F[g] = f.value() + 0
			continue
		}
		v.I[g] = roundToInt(f)
	}
	return v, nil
}

// sumOf is the sum or the mean of a group that has rows.
func (a *realSums) sumOf(g int) (dd, error) {
	weight := dd{}
	if a.weighted {
		weight = a.fact(g).sum
	}
	return a.valueOf(&a.sums[g], weight, g)
}

// valueOf is the sum or the mean of a state that has rows, with their weight.
func (a *realSums) valueOf(s *realSum, weight dd, g int) (dd, error) {
	switch {
	case s.plus > 0 && s.minus > 0:
		return dd{}, &GroupFault{Group: g, Code: "no-value", Message: "the " + a.name() + " of Infinity and -Infinity has no value"}
	case s.plus > 0:
		return dd{hi: math.Inf(1)}, nil
	case s.minus > 0:
		return dd{hi: math.Inf(-1)}, nil
	}
	f := s.s
	if a.mean {
		by := dd{hi: float64(s.n)}
		if a.weighted {
			by = weight
		}
		f = f.over(by)
	}
	if s.overflowed || !f.finite() {
		return dd{}, &GroupFault{Group: g, Code: "overflow", Message: "the " + a.name() + " has no finite value: the numbers are too large"}
	}
	return f, nil
}

// roundToInt is the nearest integer to a mean of integers, halves away from 0.
func roundToInt(f dd) int64 {
	whole := math.Floor(f.hi)
	rest := (f.hi - whole) + f.lo // below 2^53: exact to the last bit that counts
	more := math.Floor(rest)
	if part := rest - more; part > 0.5 || part == 0.5 && f.hi > 0 {
		more++
	}
	if whole >= 1<<63 { // a mean of int64 is no int64 only by its rounding
		return math.MaxInt64 + min(0, int64(more)+1)
	}
	return int64(whole) + int64(more)
}

// wide is a 128-bit integer, in two's complement: no sum of int64 that fits
// into memory leaves it.
type wide struct {
	hi int64
	lo uint64
}

func (a wide) plus(b wide) wide {
	lo, carry := bits.Add64(a.lo, b.lo, 0)
	return wide{a.hi + b.hi + int64(carry), lo}
}

func widen(i int64) wide { return wide{i >> 63, uint64(i)} }

// narrow is the number as an int64, if it fits.
func (a wide) narrow() (int64, bool) { return int64(a.lo), a.hi == int64(a.lo)>>63 }

func (a wide) real() dd {
	if i, ok := a.narrow(); ok {
		return ofInt(i)
	}
	upper := ofInt(a.hi).times(1 << 32).times(1 << 32)
	return upper.plus(float64(a.lo >> 32 << 32)).plus(float64(a.lo & (1<<32 - 1)))
}

type intSum struct {
	s wide
	n int64
}

// intSums are the sums or means of INTEGERs, INTERVALs and TIMESTAMPs, exact.
type intSums struct {
	tally
	mean bool
	arg  column.Type
	sums []intSum
}

func (a *intSums) Add(groups []int32, on []uint64, n int, args []column.Vector, _ *column.Vector) error {
	rows, _, err := a.begin(groups, on, n, args, nil)
	for _, i := range rows {
		g := groups[i]
		a.sums = grow(a.sums, g)
		s := &a.sums[g]
		s.n++
		s.s = s.s.plus(widen(args[0].I[i]))
	}
	return err
}

func (a *intSums) Merge(other Accumulator, to []int32) error {
	for g, t := range other.(*intSums).sums {
		a.sums = grow(a.sums, to[g])
		s := &a.sums[to[g]]
		s.n += t.n
		s.s = s.s.plus(t.s)
	}
	return nil
}

func (a *intSums) Result(groups int) (column.Vector, error) {
	t := a.arg
	if a.mean && t == column.Integer {
		t = column.Real
	}
	v := column.New(t, nil, groups)
	for g := range groups {
		if err := a.stopped(g); err != nil {
			return v, err
		}
		if g >= len(a.sums) || a.sums[g].n == 0 {
			v.SetNull(g)
			continue
		}
		s := &a.sums[g]
		switch {
		case t == column.Real:
			v.F[g] = s.mean()
		case a.mean:
			v.I[g] = roundToInt(s.s.real().over(ofInt(s.n)))
		default:
			var err error
			if v.I[g], err = s.total(t, g); err != nil {
				return v, err
			}
		}
	}
	return v, nil
}

func (s *intSum) mean() float64 { return s.s.real().over(ofInt(s.n)).value() + 0 }

// total is the sum as an INTEGER or an INTERVAL, if it fits.
func (s *intSum) total(t column.Type, g int) (int64, error) {
	i, ok := s.s.narrow()
	if !ok {
		return 0, &GroupFault{Group: g, Code: "overflow", Message: "the SUM is beyond the 64 bits of an " + t.String(),
			Hint: "SUM(CAST(… AS REAL)) adds REALs"}
	}
	return i, nil
}
