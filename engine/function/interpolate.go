package function

import (
	"math"

	"nearcell/catalog/column"
)

const interpolateName = "INTERPOLATE"

func interpolateAggregates() []*Aggregate {
	return []*Aggregate{{Name: interpolateName, Signature: "INTERPOLATE(y ALONG x AT v [OUTSIDE NULL | HOLD | FAIL])",
		Meaning: "y at v on the straight lines between the rows in the order of x: a calibration, a clock, a way walked; " +
			"beyond the first and the last x it is NULL, the value at the end (HOLD) or an error (FAIL)",
		Example: "INTERPOLATE(temp ALONG z AT 1.5)", Along: true, Check: checkInterpolate, New: newInterpolate}}
}

// checkInterpolate takes y, x, v and the word behind OUTSIDE.
func checkInterpolate(args []Arg, _ *Arg) (Result, error) {
	if len(args) != 4 {
		return Result{}, wrong(-1, "arguments", "INTERPOLATE is written INTERPOLATE(y ALONG x AT v)")
	}
	y := args[0].Type
	switch y {
	case column.Integer, column.Null:
		y = column.Real
	case column.Real, column.Timestamp, column.Interval, column.Point:
	default:
		return Result{}, wrong(0, "types", "INTERPOLATE needs a number, a time or a point here, not %s", y)
	}
	x, err := commonType(interpolateName, args[1:3])
	if err != nil {
		return Result{}, err
	}
	switch x {
	case column.Integer, column.Null:
		x = column.Real
	case column.Real, column.Timestamp, column.Interval:
	default:
		return Result{}, wrong(1, "types", "INTERPOLATE goes along numbers or times, not %s", x)
	}
	if _, err := commonUnit(interpolateName, args[1:3]); err != nil {
		return Result{}, err
	}
	return Result{y, args[0].Unit, []column.Type{y, x, x, column.Text}}, nil
}

// interpolate keeps the points of every group until the end.
type interpolate struct {
	tally
	t        column.Type
	width    int
	outside  Outside
	constant *column.Value // v, where it is one
	groups   []int32
	x, y     []float64
	at       []float64 // v by group
	has      []atState
	contrary int
}

// atState says what is known of v in a group.
type atState uint8

const (
	atUnseen atState = iota
	atNull
	atValue
)

func newInterpolate(s Setup) Accumulator {
	a := &interpolate{t: s.Args[0], width: 1, constant: s.Consts[2]}
	if a.t == column.Point {
		a.width = 3
	}
	if o := s.Consts[3]; o != nil {
		a.outside, _ = OutsideNamed(o.S)
	}
	return a
}

// NumberAt is a value of a number or a time as float64, exact up to 2^53.
func NumberAt(v *column.Vector, i int) float64 {
	if v.Type == column.Real {
		return v.F[i]
	}
	return float64(v.I[i])
}

func (a *interpolate) Add(groups []int32, on []uint64, n int, args []column.Vector, _ *column.Vector) error {
	every, _, err := a.begin(groups, on, n, nil, nil)
	if err != nil {
		return err
	}
	for _, i := range every {
		if err := a.see(groups[i], &args[2], int(i)); err != nil {
			return err
		}
	}
	rows, _, err := a.begin(groups, on, n, args[:2], nil)
	if err != nil {
		return err
	}
	for _, i := range rows {
		x := NumberAt(&args[1], int(i))
		if !finite(x) {
			return &RowFault{Row: int(i), Code: "no-value", Message: "INTERPOLATE cannot go along Infinity"}
		}
		a.groups, a.x = append(a.groups, groups[i]), append(a.x, x)
		for c := range a.width {
			y := 0.0
			if a.t == column.Point {
				y = args[0].F[3*int(i)+c]
			} else {
				y = NumberAt(&args[0], int(i))
			}
			if !finite(y) {
				return &RowFault{Row: int(i), Code: "no-value", Message: "INTERPOLATE cannot take Infinity"}
			}
			a.y = append(a.y, y)
		}
	}
	return nil
}

// see takes note of v, of which a group has one value.
func (a *interpolate) see(g int32, v *column.Vector, i int) error {
	a.at, a.has = grow(a.at, g), grow(a.has, g)
	state, value := atNull, 0.0
	if !v.IsNull(i) {
		state, value = atValue, NumberAt(v, i)
	}
	if a.has[g] != atUnseen && (a.has[g] != state || a.at[g] != value) {
		return &RowFault{Row: i, Code: "no-value", Message: "INTERPOLATE has one AT for a group, and here are several",
			Hint: "GROUP BY what AT depends on, or put it in a query of its own: (SELECT INTERPOLATE(… AT outside.v) FROM …)"}
	}
	a.has[g], a.at[g] = state, value
	return nil
}

func (a *interpolate) Merge(other Accumulator, to []int32) error {
	o := other.(*interpolate)
	for g, state := range o.has {
		if state == atUnseen {
			continue
		}
		at := to[g]
		a.at, a.has = grow(a.at, at), grow(a.has, at)
		if a.has[at] != atUnseen && (a.has[at] != state || a.at[at] != o.at[g]) {
			return &GroupFault{Group: int(at), Code: "no-value", Message: "INTERPOLATE has one AT for a group, and here are several",
				Hint: "GROUP BY what AT depends on, or put it in a query of its own: (SELECT INTERPOLATE(… AT outside.v) FROM …)"}
		}
		a.has[at], a.at[at] = state, o.at[g]
	}
	for _, g := range o.groups {
		a.groups = append(a.groups, to[g])
	}
	a.x, a.y = append(a.x, o.x...), append(a.y, o.y...)
	return nil
}

func (a *interpolate) Result(groups int) (column.Vector, error) {
	start := make([]int, groups+1)
	for _, g := range a.groups {
		start[g+1]++
	}
	for g := range groups {
		start[g+1] += start[g]
	}
	x, y, next := make([]float64, len(a.x)), make([]float64, len(a.y)), append([]int(nil), start...)
	for k, g := range a.groups {
		i := next[g]
		next[g]++
		x[i] = a.x[k]
		copy(y[i*a.width:(i+1)*a.width], a.y[k*a.width:])
	}
	out := column.New(a.t, nil, groups)
	point := make([]float64, a.width)
	a.contrary = 0
	for g := range groups {
		v, known, null := a.value(g)
		if null {
			out.SetNull(g)
			continue
		}
		k, contrary := NewKnots(x[start[g]:start[g+1]], y[start[g]*a.width:start[g+1]*a.width], a.width)
		a.contrary += contrary
		_, ok := k.At(v, a.outside, 0, point)
		switch {
		case known && ok:
			SetNumbers(&out, g, point)
		case a.outside == OutsideFail:
			return out, &GroupFault{Group: g, Code: "no-value", Message: beyond(&k, v, known, a.at0())}
		default:
			out.SetNull(g)
		}
	}
	return out, nil
}

// value is v in a group: that of its rows, else the constant. null: it is known to be.
func (a *interpolate) value(g int) (v float64, known, null bool) {
	if g < len(a.has) && a.has[g] != atUnseen {
		return a.at[g], true, a.has[g] == atNull
	}
	if c := a.constant; c != nil {
		if c.Null {
			return 0, true, true
		}
		if c.Type == column.Real {
			return c.F, true, false
		}
		return float64(c.I), true, false
	}
	return 0, false, false
}

// at0 is the type of v, for messages.
func (a *interpolate) at0() column.Type {
	if a.constant != nil {
		return a.constant.Type
	}
	return column.Real
}

// beyond says that the rows do not reach to v.
func beyond(k *Knots, v float64, known bool, t column.Type) string {
	switch {
	case len(k.X) == 0 && known:
		return "INTERPOLATE … OUTSIDE FAIL has no row to take a value at " + numberText(v, t) + " from"
	case len(k.X) == 0:
		return "INTERPOLATE … OUTSIDE FAIL has no row to take a value from"
	}
	return "INTERPOLATE … OUTSIDE FAIL: " + numberText(v, t) + " is outside the rows, which reach from " + numberText(k.X[0], t) +
		" to " + numberText(k.X[len(k.X)-1], t)
}

// numberText writes a number that stands for a value of a type.
func numberText(f float64, t column.Type) string {
	if t == column.Timestamp || t == column.Interval {
		return column.Value{Type: t, I: int64(f)}.String()
	}
	return column.FormatReal(f)
}

// SetNumbers sets value i of a vector of numbers, times or points.
func SetNumbers(v *column.Vector, i int, point []float64) {
	switch {
	case v.Type == column.Point:
		copy(v.F[3*i:3*i+3], point)
	case v.Type == column.Real:
		v.F[i] = point[0]
	default:
		v.I[i] = int64(math.Round(point[0]))
	}
}

// Contrary is the number of rows that stand at an x with another value of y, of which
// the mean was taken. It is known after Result.
func (a *interpolate) Contrary() int { return a.contrary }

// Contrarian is an Accumulator that may have met rows that contradict each other.
type Contrarian interface{ Contrary() int }

// Reached is what becomes of INTERPOLATE … OUTSIDE FAIL where it is planned as a
// sorted merge: its first argument, an error where the second is TRUE; the third is
// where the value was asked for. It cannot be called by name.
var Reached = &Scalar{Name: interpolateName, Signature: "INTERPOLATE(…)", Meaning: "the value, if the rows reach there", Example: "TRUE",
	CanFail: true, Check: checkReached, Eval: evalReached}

func checkReached(args []Arg) (Result, error) {
	return Result{args[0].Type, args[0].Unit, []column.Type{args[0].Type, column.Boolean, args[2].Type}}, nil
}

func evalReached(_ *Arena, args []column.Vector, on []uint64, n int, out *column.Vector) error {
	if row := FirstRow(on, n, func(i int) bool { return column.Bit(args[1].Bits, i) }); row >= 0 {
		return &RowFault{Row: row, Code: "no-value",
			Message: "INTERPOLATE … OUTSIDE FAIL: " + args[2].Value(row).String() + " is outside the rows that it has",
			Hint:    "OUTSIDE HOLD takes the value at the end, OUTSIDE NULL none"}
	}
	switch {
	case out.Type.Counted():
		copy(out.I, args[0].I[:n])
	default:
		copy(out.F, args[0].F)
	}
	return nil
}
