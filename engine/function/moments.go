package function

import (
	"fmt"
	"math"

	"nearcell/catalog/column"
)

func momentAggregates() []*Aggregate {
	return []*Aggregate{
		variance("VAR_POP", "the variance: the mean of the squared deviations from the mean", 2, newVariance(false, false)),
		variance("VAR_SAMP", "the variance as estimated from a sample: divided by n-1, with weights by Σw - Σw²/Σw; NULL of one row", 2, newVariance(true, false)),
		variance("STDDEV_POP", "the square root of VAR_POP", 1, newVariance(false, true)),
		variance("STDDEV_SAMP", "the square root of VAR_SAMP", 1, newVariance(true, true)),
		{Name: "CORR", Signature: "CORR(y, x)", Meaning: "the correlation of two columns (Pearson); NULL where one of them does not vary",
			Example: "CORR(temp, z) WEIGHTED BY volume", Weighted: true, Check: checkCorr,
			New: func(s Setup) Accumulator { return &correlations{tally: tally{weighted: s.Weighted}} }, Slide: slideCorr},
		{Name: "MKT", Signature: "MKT(temp [, kJ/mol])",
			Meaning: "the mean kinetic temperature, °C in and out (Haynes 1971); activation energy 83.144 kJ/mol if not given, R = 8.3144 J/(mol K)",
			Example: "MKT(temp) WEIGHTED BY volume", Weighted: true, Check: checkMKT, New: newMKT, Slide: slideMKT},
		levelAggregate(), directionAggregate(),
	}
}

func variance(name, meaning string, power int, make func(Setup) Accumulator) *Aggregate {
	return &Aggregate{Name: name, Signature: name + "([DISTINCT] x)", Meaning: meaning, Example: name + "(temp) WEIGHTED BY volume",
		Weighted: true, New: make, Slide: slideVariance(make),
		Check: func(args []Arg, weight *Arg) (Result, error) {
			if err := firstError(wantCount(name, args, 1, 1), checkWeight(weight)); err != nil {
				return Result{}, err
			}
			return Result{column.Real, args[0].Unit.Pow(power), repeatType(column.Real, 1)}, wantNumber(name, args, 0)
		}}
}

// moment is Σw, Σw(x-c) and Σw(x-c)² of one group, about one of its values c,
// in double-double: exact enough for values that differ little from a large
// one, and the same to the last bit of the result in whatever order they come.
type moment struct {
	c         float64
	n         int64
	w, m1, m2 dd
}

func (m *moment) add(x, w float64) {
	if m.n == 0 {
		m.c = x
	}
	m.n++
	d := twoSum(x, -m.c)
	m.w = m.w.plus(w)
	wd := d.times(w)
	m.m1 = m.m1.add(wd)
	m.m2 = m.m2.add(wd.mul(d))
}

// merge adds the moments of o after moving them to the own centre.
func (m *moment) merge(o *moment) {
	if m.n == 0 {
		*m = *o
		return
	}
	if o.n == 0 {
		return
	}
	d := twoSum(o.c, -m.c)
	wd := o.w.mul(d)
	m.n += o.n
	m.w = m.w.add(o.w)
	m.m1 = m.m1.add(o.m1).add(wd)
	m.m2 = m.m2.add(o.m2).add(d.mul(o.m1).times(2)).add(wd.mul(d))
}

// squares is the sum of the squared deviations from the mean.
func (m *moment) squares() dd {
	s := m.m2.add(m.m1.mul(m.m1).over(m.w).negative())
	if s.hi < 0 {
		return dd{}
	}
	return s
}

type variances struct {
	tally
	sample, root bool
	moments      []moment
}

func newVariance(sample, root bool) func(Setup) Accumulator {
	return func(s Setup) Accumulator {
		return &variances{tally: tally{weighted: s.Weighted}, sample: sample, root: root}
	}
}

func (a *variances) name() string {
	name := "VAR"
	if a.root {
		name = "STDDEV"
	}
	if a.sample {
		return name + "_SAMP"
	}
	return name + "_POP"
}

func (a *variances) Add(groups []int32, on []uint64, n int, args []column.Vector, weight *column.Vector) error {
	rows, weights, err := a.begin(groups, on, n, args, weight)
	if err != nil {
		return err
	}
	for _, i := range rows {
		x, w := args[0].F[i], 1.0
		if x-x != 0 {
			return infiniteValue(int(i), a.name(), x)
		}
		if weights != nil {
			w = weights[i]
		}
		a.moments = grow(a.moments, groups[i])
		a.moments[groups[i]].add(x, w)
	}
	return nil
}

func infiniteValue(row int, name string, x float64) error {
	return &RowFault{Row: row, Code: "no-value", Message: fmt.Sprintf("%s of a column with %s in it has no value", name, column.FormatReal(x))}
}

func (a *variances) Merge(other Accumulator, to []int32) error {
	o := other.(*variances)
	a.mergeFacts(&o.tally, to)
	for g := range o.moments {
		a.moments = grow(a.moments, to[g])
		a.moments[to[g]].merge(&o.moments[g])
	}
	return nil
}

func (a *variances) Result(groups int) (column.Vector, error) {
	v := column.New(column.Real, nil, groups)
	for g := range groups {
		if g >= len(a.moments) {
			v.SetNull(g)
			continue
		}
		f, ok, err := a.valueOf(&a.moments[g], a.fact(g).squares, g)
		if err != nil {
			return v, err
		}
		if v.F[g] = f; !ok {
			v.SetNull(g)
		}
	}
	return v, nil
}

// valueOf is the value of one state, with the sum of the squares of its weights.
func (a *variances) valueOf(m *moment, squares dd, g int) (f float64, ok bool, err error) {
	if m.n == 0 || a.sample && m.n == 1 {
		return 0, false, nil
	}
	by := m.w
	switch {
	case a.sample && a.weighted:
		by = by.add(squares.over(m.w).negative())
	case a.sample:
		by = by.plus(-1)
	}
	if by.hi <= 0 {
		return 0, false, nil // one weight is everything, to 32 digits
	}
	f = m.squares().over(by).value()
	if f-f != 0 {
		return 0, false, &GroupFault{Group: g, Code: "overflow", Message: a.name() + " has no finite value: the numbers are too large"}
	}
	if a.root {
		f = math.Sqrt(f)
	}
	return f, true, nil
}

func checkCorr(args []Arg, weight *Arg) (Result, error) {
	if err := firstError(wantCount("CORR", args, 2, 2), checkWeight(weight)); err != nil {
		return Result{}, err
	}
	return Result{column.Real, nil, repeatType(column.Real, 2)}, firstError(wantNumber("CORR", args, 0), wantNumber("CORR", args, 1))
}

// joint is the moments of two columns, each about one of its values.
type joint struct {
	y, x moment
	xy   dd // Σw(y-cy)(x-cx)
}

func (j *joint) merge(o *joint) {
	if o.x.n == 0 {
		return
	}
	if j.x.n == 0 {
		*j = *o
		return
	}
	dy, dx := twoSum(o.y.c, -j.y.c), twoSum(o.x.c, -j.x.c)
	j.xy = j.xy.add(o.xy).add(dx.mul(o.y.m1)).add(dy.mul(o.x.m1)).add(o.x.w.mul(dx).mul(dy))
	j.y.merge(&o.y)
	j.x.merge(&o.x)
}

type correlations struct {
	tally
	joints []joint
}

func (a *correlations) Add(groups []int32, on []uint64, n int, args []column.Vector, weight *column.Vector) error {
	rows, weights, err := a.begin(groups, on, n, args, weight)
	if err != nil {
		return err
	}
	for _, i := range rows {
		y, x, w := args[0].F[i], args[1].F[i], 1.0
		if y-y != 0 {
			return infiniteValue(int(i), "CORR", y)
		}
		if x-x != 0 {
			return infiniteValue(int(i), "CORR", x)
		}
		if weights != nil {
			w = weights[i]
		}
		a.joints = grow(a.joints, groups[i])
		a.joints[groups[i]].add(y, x, w)
	}
	return nil
}

func (j *joint) add(y, x, w float64) {
	j.y.add(y, w)
	j.x.add(x, w)
	j.xy = j.xy.add(twoSum(y, -j.y.c).mul(twoSum(x, -j.x.c)).times(w))
}

func (a *correlations) Merge(other Accumulator, to []int32) error {
	o := other.(*correlations)
	a.mergeFacts(&o.tally, to)
	for g := range o.joints {
		a.joints = grow(a.joints, to[g])
		a.joints[to[g]].merge(&o.joints[g])
	}
	return nil
}

func (a *correlations) Result(groups int) (column.Vector, error) {
	v := column.New(column.Real, nil, groups)
	for g := range groups {
		if g >= len(a.joints) {
			v.SetNull(g)
			continue
		}
		r, ok, err := a.joints[g].correlation(g)
		if err != nil {
			return v, err
		}
		if v.F[g] = r; !ok {
			v.SetNull(g)
		}
	}
	return v, nil
}

// correlation is the value of one state.
func (j *joint) correlation(g int) (r float64, ok bool, err error) {
	if j.x.n == 0 {
		return 0, false, nil
	}
	yy, xx := j.y.squares(), j.x.squares()
	if yy.hi == 0 || xx.hi == 0 {
		return 0, false, nil
	}
	xy := j.xy.add(j.y.m1.mul(j.x.m1).over(j.x.w).negative()).value()
	r = xy / rootOfProduct(yy, xx)
	if r != r || !yy.finite() || !xx.finite() {
		return 0, false, &GroupFault{Group: g, Code: "overflow", Message: "CORR has no finite value: the numbers are too large"}
	}
	return max(-1, min(1, r)) + 0, true, nil
}

// rootOfProduct is the root of a·b. For points on a line the product is a
// square, of which the root is exact.
func rootOfProduct(a, b dd) float64 {
	p := a.mul(b).value()
	if p > 1e-290 && p < 1e290 {
		return math.Sqrt(p)
	}
	return float64(math.Sqrt(a.value()) * math.Sqrt(b.value()))
}
