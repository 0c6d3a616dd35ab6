package expr

import (
	"nearcell/catalog/column"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// Compare is Left Op Right. Both sides have one type, but that an INTEGER may
// face a REAL: they are compared exactly, without loss beyond 2^53.
type Compare struct {
	base
	Op          lang.Op // Equals … GreaterOrEqual
	Left, Right Expr
}

// NewCompare is l op r for lang.Equals … GreaterOrEqual.
func NewCompare(op lang.Op, l, r Expr, place problem.Place) (Expr, error) {
	l, r, err := comparable(op, l, r, place)
	if err != nil {
		return nil, err
	}
	return &Compare{base{column.Boolean, nil, place}, op, l, r}, nil
}

// comparable checks that two values can be compared and brings them together.
func comparable(op lang.Op, l, r Expr, place problem.Place) (Expr, Expr, error) {
	pair := []Expr{l, r}
	t, ok := commonType(pair)
	if !ok {
		return nil, nil, unlike("compared with", pair, place)
	}
	if t == column.Point && op != lang.Equals && op != lang.NotEquals {
		return nil, nil, problem.New(CodeTypes, place, "points have no order: %s knows only = and <> of %s", string(op), withType(l)).
			WithHint("compare a coordinate, or a DISTANCE")
	}
	if _, err := commonUnit("compared with", pair, place); err != nil {
		return nil, nil, err
	}
	if l.Type() == column.Null {
		l = coerce(l, r.Type())
	}
	if r.Type() == column.Null {
		r = coerce(r, l.Type())
	}
	l = sameNumbers(l, r)
	return l, sameNumbers(r, l), nil
}

// sameNumbers gives a constant the numeric type of what it is compared with,
// where that loses nothing.
func sameNumbers(e, other Expr) Expr {
	l, ok := e.(*Literal)
	if !ok || l.Value.Null || l.typ == other.Type() || !l.typ.Numeric() {
		return e
	}
	switch v := l.Value; {
	case v.Type == column.Integer && compareIntReal(v.I, float64(v.I)) == 0:
		return coerce(e, column.Real)
	case v.Type == column.Real && v.F >= -1<<63 && v.F < 1<<63 && v.F == float64(int64(v.F)):
		return NewConst(column.Value{Type: column.Integer, I: int64(v.F), Unit: l.unit}, l.at)
	}
	return e
}

// Children are the two sides.
func (e *Compare) Children() []Expr { return []Expr{e.Left, e.Right} }

// With is the comparison of other sides.
func (e *Compare) With(c []Expr) Expr { n := *e; n.Left, n.Right = c[0], c[1]; return &n }

// CanFail is that of the sides: a comparison always has a value or is NULL.
func (e *Compare) CanFail() bool { return e.Left.CanFail() || e.Right.CanFail() }

// Eval compares.
func (e *Compare) Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error) {
	l, err := w.operand(e.Left, b, on)
	if err != nil {
		return l.v, err
	}
	r, err := w.operand(e.Right, b, on)
	if err != nil {
		return r.v, err
	}
	return w.compare(caller{e, 0}, e.Op, &l, &r, b.N), nil
}

// operand is one side of a comparison: a vector, or one value for all rows.
type operand struct {
	v   column.Vector
	one *column.Value
}

// caller is on whose behalf a table over a dictionary is kept.
type caller struct {
	e    Expr
	slot int
}

func (w *Work) operand(e Expr, b *column.Batch, on []uint64) (operand, error) {
	if l, ok := e.(*Literal); ok {
		return operand{v: column.Vector{Type: l.typ, N: b.N}, one: &l.Value}, nil
	}
	v, err := e.Eval(w, b, on)
	return operand{v: v}, err
}

func (o *operand) null() bool { return o.v.Type == column.Null || o.one != nil && o.one.Null }

func (o *operand) valid() []uint64 {
	if o.one != nil {
		return nil
	}
	return o.v.Valid
}

// compare is the BOOLEAN vector of l op r.
func (w *Work) compare(by caller, op lang.Op, l, r *operand, n int) column.Vector {
	if l.null() || r.null() {
		return w.nulls(column.Boolean, nil, n)
	}
	var bits []uint64
	negate := false
	switch op {
	case lang.Less:
		bits = w.less(by, l, r, n)
	case lang.Greater:
		bits = w.less(by, r, l, n)
	case lang.LessOrEqual:
		bits, negate = w.less(by, r, l, n), true
	case lang.GreaterOrEqual:
		bits, negate = w.less(by, l, r, n), true
	default:
		bits, negate = w.equal(by, l, r, n), op == lang.NotEquals
	}
	if negate {
		for i := range bits {
			bits[i] = ^bits[i]
		}
	}
	if tail := uint(n) & 63; tail != 0 {
		bits[len(bits)-1] &= 1<<tail - 1
	}
	valid := w.both(l.valid(), r.valid(), n)
	if valid != nil {
		for i := range bits {
			bits[i] &= valid[i]
		}
	}
	return column.Vector{Type: column.Boolean, N: n, Bits: bits, Valid: valid}
}

// less is the bitmap of l < r. What it says of NULL rows is anything.
func (w *Work) less(by caller, l, r *operand, n int) []uint64 {
	out := w.Words(column.Words(n))
	switch t := l.v.Type; {
	case t != r.v.Type:
		mixedBits(l, r, out, n, true)
	case t.Counted():
		lessBits(ints(l, n), ints(r, n), constInt(l), constInt(r), out)
	case t == column.Real:
		lessBits(reals(l, n), reals(r, n), constReal(l), constReal(r), out)
	case t == column.Text:
		w.textBits(by, l, r, out, n, true)
	case t == column.Boolean:
		for i := range out {
			out[i] = ^word(l, i) & word(r, i)
		}
	}
	return out
}

// equal is the bitmap of l = r. What it says of NULL rows is anything.
func (w *Work) equal(by caller, l, r *operand, n int) []uint64 {
	out := w.Words(column.Words(n))
	if l.one != nil {
		l, r = r, l
	}
	switch t := l.v.Type; {
	case t != r.v.Type:
		mixedBits(l, r, out, n, false)
	case t.Counted():
		equalBits(ints(l, n), ints(r, n), constInt(l), constInt(r), out)
	case t == column.Real:
		equalBits(reals(l, n), reals(r, n), constReal(l), constReal(r), out)
	case t == column.Text:
		w.textBits(by, l, r, out, n, false)
	case t == column.Boolean:
		for i := range out {
			out[i] = ^(word(l, i) ^ word(r, i))
		}
	case t == column.Point:
		pointBits(l, r, out, n)
	}
	return out
}

func ints(o *operand, n int) []int64 {
	if o.one != nil {
		return nil
	}
	return o.v.I[:n]
}

func reals(o *operand, n int) []float64 {
	if o.one != nil {
		return nil
	}
	return o.v.F[:n]
}

func constInt(o *operand) int64 {
	if o.one != nil {
		return o.one.I
	}
	return 0
}

func constReal(o *operand) float64 {
	if o.one != nil {
		return o.one.F
	}
	return 0
}

// word is word i of a BOOLEAN operand.
func word(o *operand, i int) uint64 {
	switch {
	case o.one == nil:
		return o.v.Bits[i]
	case o.one.I != 0:
		return ^uint64(0)
	}
	return 0
}
