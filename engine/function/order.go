package function

import (
	"math"

	"nearcell/catalog/column"
)

func orderAggregates() []*Aggregate {
	return []*Aggregate{
		{Name: "MIN", Signature: "MIN(x)", Meaning: "the smallest value", Example: "MIN(temp)",
			Check: checkExtreme("MIN"), New: func(s Setup) Accumulator { return &extreme{sign: -1, t: s.Args[0]} }, Slide: slideExtreme(-1)},
		{Name: "MAX", Signature: "MAX(x)", Meaning: "the largest value", Example: "MAX(temp)",
			Check: checkExtreme("MAX"), New: func(s Setup) Accumulator { return &extreme{sign: 1, t: s.Args[0]} }, Slide: slideExtreme(1)},
		{Name: "FIRST", Signature: "FIRST(x ORDER BY t)", Meaning: "the value of x in the first row by t that has both",
			Example: "FIRST(temp ORDER BY z)", Ordered: true, Check: checkEnd("FIRST"), New: newEnd(false), Slide: slideEnd(false)},
		{Name: "LAST", Signature: "LAST(x ORDER BY t)", Meaning: "the value of x in the last row by t that has both",
			Example: "LAST(temp ORDER BY z)", Ordered: true, Check: checkEnd("LAST"), New: newEnd(true), Slide: slideEnd(true)},
		{Name: "QUANTILE", Signature: "QUANTILE(x, p)",
			Meaning: "the smallest value up to which lies the fraction p of the rows, or of their weight (inverse of the distribution function; no interpolation)",
			Example: "QUANTILE(temp, 0.95) WEIGHTED BY volume", Weighted: true, Check: checkQuantile, New: newQuantile, Slide: slideQuantile},
		{Name: "MEDIAN", Signature: "MEDIAN(x)", Meaning: "QUANTILE(x, 0.5): of an even number of rows the lower of the two in the middle",
			Example: "MEDIAN(temp) WEIGHTED BY volume", Weighted: true, Check: checkMedian, New: newMedian, Slide: slideQuantile},
	}
}

// orderKey maps a float64 to an int64 so that the order stays; -0 counts as 0.
func orderKey(f float64) int64 {
	b := int64(math.Float64bits(f + 0))
	return b ^ int64(uint64(b>>63)>>1)
}

// fromOrderKey is the inverse of orderKey.
func fromOrderKey(k int64) float64 {
	return math.Float64frombits(uint64(k ^ int64(uint64(k>>63)>>1)))
}

// keyOf is value i of a vector that is no text as an int64 of the same order.
func keyOf(v *column.Vector, i int) int64 {
	switch v.Type {
	case column.Real:
		return orderKey(v.F[i])
	case column.Boolean:
		if column.Bit(v.Bits, i) {
			return 1
		}
		return 0
	}
	return v.I[i]
}

// setKey is the inverse of keyOf.
func setKey(v *column.Vector, i int, k int64) {
	switch v.Type {
	case column.Real:
		v.F[i] = fromOrderKey(k)
	case column.Boolean:
		if k != 0 {
			column.SetBit(v.Bits, i)
		}
	default:
		v.I[i] = k
	}
}

func checkExtreme(name string) func([]Arg, *Arg) (Result, error) {
	return func(args []Arg, _ *Arg) (Result, error) {
		if err := wantCount(name, args, 1, 1); err != nil {
			return Result{}, err
		}
		t := args[0].Type
		switch t {
		case column.Point:
			return Result{}, wrong(0, "types", "points have no order, so that %s has none to give", name)
		case column.Null:
			t = column.Real
		}
		return Result{t, args[0].Unit, repeatType(t, 1)}, nil
	}
}

// extreme keeps the smallest (sign -1) or largest (sign 1) value of each group.
type extreme struct {
	tally
	sign  int
	t     column.Type
	has   []bool
	keys  []int64
	texts []string
}

func (a *extreme) room(g int32) {
	if int(g) >= len(a.has) {
		a.has = grow(a.has, g)
		a.keys = grow(a.keys, g)
		a.texts = grow(a.texts, g)
	}
}

func (a *extreme) Add(groups []int32, on []uint64, n int, args []column.Vector, _ *column.Vector) error {
	rows, _, err := a.begin(groups, on, n, args, nil)
	if err != nil {
		return err
	}
	for _, i := range rows {
		g := groups[i]
		a.room(g)
		if a.t == column.Text {
			a.offerText(g, args[0].Dict.Texts[args[0].C[i]])
		} else {
			a.offer(g, keyOf(&args[0], int(i)))
		}
	}
	return nil
}

func (a *extreme) offer(g int32, k int64) {
	if !a.has[g] || a.sign < 0 && k < a.keys[g] || a.sign > 0 && k > a.keys[g] {
		a.has[g], a.keys[g] = true, k
	}
}

func (a *extreme) offerText(g int32, s string) {
	if !a.has[g] || a.sign < 0 && s < a.texts[g] || a.sign > 0 && s > a.texts[g] {
		a.has[g], a.texts[g] = true, s
	}
}

func (a *extreme) Merge(other Accumulator, to []int32) error {
	o := other.(*extreme)
	for g, has := range o.has {
		if !has {
			continue
		}
		a.room(to[g])
		if a.t == column.Text {
			a.offerText(to[g], o.texts[g])
		} else {
			a.offer(to[g], o.keys[g])
		}
	}
	return nil
}

func (a *extreme) Result(groups int) (column.Vector, error) {
	if a.t == column.Text {
		b := column.NewBuilder(column.Text, nil)
		for g := range groups {
			if g < len(a.has) && a.has[g] {
				b.AppendText(a.texts[g])
			} else {
				b.AppendNull()
			}
		}
		return b.Finish(), nil
	}
	v := column.New(a.t, nil, groups)
	for g := range groups {
		if g < len(a.has) && a.has[g] {
			setKey(&v, g, a.keys[g])
		} else {
			v.SetNull(g)
		}
	}
	return v, nil
}

func checkEnd(name string) func([]Arg, *Arg) (Result, error) {
	return func(args []Arg, _ *Arg) (Result, error) {
		if err := wantCount(name, args, 1, 1); err != nil {
			return Result{}, err
		}
		t := args[0].Type
		if t == column.Null {
			t = column.Real
		}
		return Result{t, args[0].Unit, repeatType(t, 1)}, nil
	}
}

// end keeps the value of the first or last row of each group by its keys. Of
// rows with equal keys the earlier one is the first and the later one the last.
// A row without a value, or without one of its keys, has no place in the order
// and is left out.
type end struct {
	tally
	last   bool
	t      column.Type
	keys   []Key
	values []column.Value
	has    []bool
	best   []place // len(keys) for each group
}

// place is a key of a row: a text, or anything else in order.
type place struct {
	k int64
	s string
}

func newEnd(last bool) func(Setup) Accumulator {
	return func(s Setup) Accumulator { return &end{last: last, t: s.Args[0], keys: s.Keys} }
}

func (a *end) room(g int32) {
	if int(g) >= len(a.has) {
		a.has = grow(a.has, g)
		a.values = grow(a.values, g)
		a.best = grow(a.best, int32(len(a.keys))*(g+1)-1)
	}
}

func (a *end) Add(groups []int32, on []uint64, n int, args []column.Vector, _ *column.Vector) error {
	rows, _, err := a.begin(groups, on, n, args, nil)
	if err != nil {
		return err
	}
	row := make([]place, len(a.keys))
	for _, i := range rows {
		for k := range row {
			row[k] = placeOf(&args[k+1], int(i))
		}
		g := groups[i]
		a.room(g)
		if a.wins(g, row) {
			a.take(g, row, args[0].Value(int(i)))
		}
	}
	return nil
}

func placeOf(v *column.Vector, i int) place {
	if v.Type == column.Text {
		return place{s: v.Dict.Texts[v.C[i]]}
	}
	return place{k: keyOf(v, i)}
}

// wins reports whether a row that comes after all that were seen takes the
// place of the best one.
func (a *end) wins(g int32, row []place) bool {
	if !a.has[g] {
		return true
	}
	best := a.best[int(g)*len(a.keys):]
	for k, p := range row {
		b := best[k]
		if p == b {
			continue
		}
		less := p.k < b.k || p.k == b.k && p.s < b.s
		return less != a.keys[k].Descending != a.last
	}
	return a.last
}

func (a *end) take(g int32, row []place, v column.Value) {
	a.has[g], a.values[g] = true, v
	copy(a.best[int(g)*len(a.keys):], row)
}

func (a *end) Merge(other Accumulator, to []int32) error {
	o := other.(*end)
	for g, has := range o.has {
		if !has {
			continue
		}
		a.room(to[g])
		row := o.best[g*len(o.keys) : (g+1)*len(o.keys)]
		if a.wins(to[g], row) {
			a.take(to[g], row, o.values[g])
		}
	}
	return nil
}

func (a *end) Result(groups int) (column.Vector, error) {
	b := column.NewBuilder(a.t, nil)
	for g := range groups {
		if g < len(a.has) && a.has[g] {
			b.Append(a.values[g])
		} else {
			b.AppendNull()
		}
	}
	return b.Finish(), nil
}
