package expr

import (
	"math"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// Neg is -x of a number or an interval.
type Neg struct {
	base
	X Expr
}

// NewNeg is -x. The negative of a constant is a constant.
func NewNeg(x Expr, place problem.Place) (Expr, error) {
	switch x.Type() {
	case column.Integer, column.Real, column.Interval:
	case column.Null:
		x = coerce(x, column.Real)
	default:
		return nil, wantNumber("-", x, place)
	}
	return Fold(&Neg{base{x.Type(), x.Unit(), place}, x}), nil
}

// NewPlus is +x: x itself, if it is a number or an interval.
func NewPlus(x Expr, place problem.Place) (Expr, error) {
	switch x.Type() {
	case column.Integer, column.Real, column.Interval, column.Null:
		return x, nil
	}
	return nil, wantNumber("+", x, place)
}

// Children is the operand.
func (e *Neg) Children() []Expr { return []Expr{e.X} }

// With is -children[0].
func (e *Neg) With(children []Expr) Expr { c := *e; c.X = children[0]; return &c }

// CanFail is true of integers: the smallest has no negative.
func (e *Neg) CanFail() bool { return e.typ != column.Real || e.X.CanFail() }

// Eval negates.
func (e *Neg) Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error) {
	x, err := e.X.Eval(w, b, on)
	if err != nil {
		return column.Vector{}, err
	}
	out := w.fresh(e.typ, e.unit, b.N)
	out.Valid = x.Valid
	if e.typ == column.Real {
		for i, f := range x.F {
			out.F[i] = 0 - f // no negative zero
		}
		return out, nil
	}
	suspicious := false
	for i, k := range x.I {
		out.I[i] = -k
		suspicious = suspicious || k == math.MinInt64
	}
	if suspicious {
		if row := firstActive(on, &x, func(i int) bool { return x.I[i] == math.MinInt64 }); row >= 0 {
			return out, rowError(row, CodeOverflow, e.at, "-(%s) is beyond the 64 bits of an %s", number(&x, row), e.typ)
		}
	}
	return out, nil
}

// Arith is Left Op Right. Both sides have the type that the kernel works on.
type Arith struct {
	base
	Op          lang.Op
	Left, Right Expr
	kernel      arithKernel
}

// NewArith is l op r for lang.Plus, Minus, Times, Divide, Modulo, Power.
//
// INTEGER with INTEGER gives INTEGER for + - * %, anything with REAL gives
// REAL, and / and ^ always do. Time stamps and intervals are added and
// subtracted, intervals multiplied and divided by numbers.
func NewArith(op lang.Op, l, r Expr, place problem.Place) (Expr, error) {
	l, r = typeNulls(op, l, r)
	if !l.Type().Numeric() || !r.Type().Numeric() {
		return newTemporal(op, l, r, place)
	}
	t := column.Real
	if l.Type() == column.Integer && r.Type() == column.Integer && op != lang.Divide && op != lang.Power {
		t = column.Integer
	}
	unit, err := arithUnit(op, l, r, place)
	if err != nil {
		return nil, err
	}
	k, ok := numberKernel(op, t)
	if !ok {
		return nil, problem.New(CodeTypes, place, "%s is no operator of numbers", string(op))
	}
	return &Arith{base{t, unit, place}, op, coerce(l, t), coerce(r, t), k}, nil
}

// typeNulls gives a bare NULL the type that goes with the other side, REAL where
// both are bare.
func typeNulls(op lang.Op, l, r Expr) (Expr, Expr) {
	if l.Type() == column.Null {
		t := besideNull(op, r)
		if t == column.Timestamp && op == lang.Plus {
			t = column.Interval
		}
		l = coerce(l, t)
	}
	if r.Type() == column.Null {
		t := besideNull(op, l)
		if t == column.Timestamp {
			t = column.Interval
		}
		r = coerce(r, t)
	}
	return l, r
}

func besideNull(op lang.Op, other Expr) column.Type {
	switch t := other.Type(); {
	case t == column.Integer || t == column.Timestamp:
		return t
	case t == column.Interval && (op == lang.Plus || op == lang.Minus || op == lang.Modulo):
		return t
	}
	return column.Real
}

// arithUnit is the unit of l op r: + - % keep it, * and / multiply it, ^ by a
// constant integer raises it and any other power drops it.
func arithUnit(op lang.Op, l, r Expr, place problem.Place) (*column.Unit, error) {
	switch op {
	case lang.Plus, lang.Minus, lang.Modulo:
		verb := map[lang.Op]string{lang.Plus: "added to", lang.Minus: "subtracted from", lang.Modulo: "divided by"}[op]
		return commonUnit(verb, []Expr{l, r}, place)
	case lang.Times:
		return column.Mul(l.Unit(), r.Unit()), nil
	case lang.Divide:
		return column.Div(l.Unit(), r.Unit()), nil
	}
	if v, ok := Const(r); ok && !v.Null {
		x := v.F
		if v.Type == column.Integer {
			x = float64(v.I)
		}
		if x == math.Trunc(x) && math.Abs(x) <= 99 {
			return l.Unit().Pow(int(x)), nil
		}
	}
	return nil, nil
}

// temporal is one line of the arithmetic of time.
type temporal struct {
	op           lang.Op
	left, right  column.Type
	result       column.Type
	kernel       arithKernel
	swap         bool // the kernel takes the operands the other way round
	rightAsReals bool
}

var temporals = []temporal{
	{op: lang.Plus, left: column.Timestamp, right: column.Interval, result: column.Timestamp, kernel: addInt},
	{op: lang.Plus, left: column.Interval, right: column.Timestamp, result: column.Timestamp, kernel: addInt},
	{op: lang.Minus, left: column.Timestamp, right: column.Interval, result: column.Timestamp, kernel: subInt},
	{op: lang.Minus, left: column.Timestamp, right: column.Timestamp, result: column.Interval, kernel: subInt},
	{op: lang.Plus, left: column.Interval, right: column.Interval, result: column.Interval, kernel: addInt},
	{op: lang.Minus, left: column.Interval, right: column.Interval, result: column.Interval, kernel: subInt},
	{op: lang.Times, left: column.Interval, right: column.Integer, result: column.Interval, kernel: mulInt},
	{op: lang.Times, left: column.Integer, right: column.Interval, result: column.Interval, kernel: mulInt},
	{op: lang.Times, left: column.Interval, right: column.Real, result: column.Interval, kernel: mulInterval},
	{op: lang.Times, left: column.Real, right: column.Interval, result: column.Interval, kernel: mulInterval, swap: true},
	{op: lang.Divide, left: column.Interval, right: column.Real, result: column.Interval, kernel: divInterval},
	{op: lang.Divide, left: column.Interval, right: column.Integer, result: column.Interval, kernel: divInterval, rightAsReals: true},
	{op: lang.Modulo, left: column.Interval, right: column.Interval, result: column.Interval, kernel: modInt},
}

func newTemporal(op lang.Op, l, r Expr, place problem.Place) (Expr, error) {
	for _, t := range temporals {
		if t.op != op || t.left != l.Type() || t.right != r.Type() {
			continue
		}
		if t.rightAsReals {
			r = coerce(r, column.Real)
		}
		kernel := t.kernel
		if t.swap {
			kernel = mulIntervalSwapped
		}
		return &Arith{base{t.result, nil, place}, op, l, r, kernel}, nil
	}
	return nil, arithTypes(op, l, r, place)
}

// arithTypes is the problem of operands that do not go with the operator.
func arithTypes(op lang.Op, l, r Expr, place problem.Place) error {
	for _, e := range []Expr{l, r} {
		switch e.Type() {
		case column.Text:
			p := problem.New(CodeTypes, at(e, place), "%s needs numbers, not %s", string(op), withType(e))
			if op == lang.Plus && l.Type() == column.Text && r.Type() == column.Text {
				return p.WithHint("texts are joined by ||: %s || %s", l, r)
			}
			return hintNumber(p, e)
		case column.Boolean, column.Point:
			return wantNumber(string(op), e, place)
		}
	}
	p := problem.New(CodeTypes, place, "%s does not go with %s and %s", string(op), withType(l), withType(r))
	timestamps := l.Type() == column.Timestamp || r.Type() == column.Timestamp
	switch {
	case op == lang.Divide && l.Type() == column.Interval && r.Type() == column.Interval:
		return p.WithHint("HOURS(%s) / HOURS(%s) is their ratio", l, r)
	case timestamps && (l.Type().Numeric() || r.Type().Numeric()):
		return p.WithHint("write how long: INTERVAL '1' HOUR")
	case l.Type() == column.Interval || r.Type() == column.Interval:
		return p.WithHint("HOURS makes a number of an interval")
	}
	return p
}

// Children are the two sides.
func (e *Arith) Children() []Expr { return []Expr{e.Left, e.Right} }

// With is the operation on other sides.
func (e *Arith) With(c []Expr) Expr { n := *e; n.Left, n.Right = c[0], c[1]; return &n }

// CanFail is true: sums may overflow, quotients have no value.
func (e *Arith) CanFail() bool { return true }

// Eval computes all rows at full speed and looks at single rows only where the
// batch has a result that may be an error.
func (e *Arith) Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error) {
	l, err := e.Left.Eval(w, b, on)
	if err != nil {
		return l, err
	}
	r, err := e.Right.Eval(w, b, on)
	if err != nil {
		return r, err
	}
	out := w.fresh(e.typ, e.unit, b.N)
	out.Valid = w.both(l.Valid, r.Valid, b.N)
	if suspicious := e.kernel.run(&l, &r, &out); suspicious {
		if row := firstActive(on, &out, func(i int) bool { return e.kernel.fault(&l, &r, &out, i) != "" }); row >= 0 {
			code := e.kernel.fault(&l, &r, &out, row)
			return out, e.rowFault(code, &l, &r, row)
		}
	}
	return out, nil
}

func (e *Arith) rowFault(code string, l, r *column.Vector, row int) error {
	left, right := number(l, row), number(r, row)
	if e.Op == lang.Power && strings.HasPrefix(left, "-") {
		left = "(" + left + ")" // without them it is the negative of a power
	}
	if code == CodeNoValue {
		return rowError(row, code, e.at, "%s %s %s has no value", left, string(e.Op), right)
	}
	switch e.typ {
	case column.Integer:
		return &RowError{row, problem.New(code, e.at, "%s %s %s is beyond the 64 bits of an INTEGER", left, string(e.Op), right).
			WithHint("CAST(… AS REAL) of one side computes with REAL")}
	case column.Timestamp:
		return rowError(row, code, e.at, "%s %s %s is beyond the years 1 to 9999", left, string(e.Op), right)
	case column.Interval:
		return rowError(row, code, e.at, "%s %s %s is beyond the range of an INTERVAL", left, string(e.Op), right)
	}
	return rowError(row, code, e.at, "%s %s %s has no finite value", left, string(e.Op), right)
}
