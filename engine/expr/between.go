package expr

import (
	"nearcell/catalog/column"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// Between is X [NOT] BETWEEN Low AND High. It means X >= Low AND X <= High and
// computes X once.
type Between struct {
	base
	X, Low, High Expr
	Not          bool
	lowX, highX  Expr // X as it is compared with either end
}

// NewBetween is x [NOT] BETWEEN low AND high.
func NewBetween(x, low, high Expr, not bool, place problem.Place) (Expr, error) {
	if _, err := commonUnit("compared with", []Expr{x, low, high}, place); err != nil {
		return nil, err
	}
	lowX, low, err := comparable(lang.GreaterOrEqual, x, low, place)
	if err != nil {
		return nil, err
	}
	highX, high, err := comparable(lang.LessOrEqual, x, high, place)
	if err != nil {
		return nil, err
	}
	return &Between{base{column.Boolean, nil, place}, x, low, high, not, lowX, highX}, nil
}

// Children are the operand and the two ends.
func (e *Between) Children() []Expr { return []Expr{e.X, e.Low, e.High} }

// With asks the same of others.
func (e *Between) With(c []Expr) Expr {
	n := *e
	n.X, n.Low, n.High = c[0], c[1], c[2]
	n.lowX, n.highX = c[0], c[0]
	if c[0].Type() != e.lowX.Type() {
		n.lowX = coerce(c[0], e.lowX.Type())
	}
	if c[0].Type() != e.highX.Type() {
		n.highX = coerce(c[0], e.highX.Type())
	}
	return &n
}

// CanFail is that of the three.
func (e *Between) CanFail() bool { return anyFails(e.Children()) }

// Eval compares with the low end, and with the high one where that is open.
func (e *Between) Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error) {
	x, err := w.operand(e.X, b, on)
	if err != nil {
		return x.v, err
	}
	above, err := w.compareWith(caller{e, 0}, lang.GreaterOrEqual, &x, e.lowX, e.Low, b, on)
	if err != nil {
		return above, err
	}
	yes, no := w.truth(&above)
	open := w.minus(w.rows(on, b.N), no)
	below, err := w.compareWith(caller{e, 1}, lang.LessOrEqual, &x, e.highX, e.High, b, open)
	if err != nil {
		return below, err
	}
	yes2, no2 := w.truth(&below)
	k := column.Words(b.N)
	outYes, outNo := w.Words(k), w.Words(k)
	for i := range k {
		outYes[i] = yes[i] & yes2[i]
		outNo[i] = no[i] | no2[i]&open[i]
	}
	if e.Not {
		outYes, outNo = outNo, outYes
	}
	return w.boolean(outYes, outNo, b.N), nil
}

// compareWith compares x, which has been computed, with another expression. as
// is x in the type of the comparison: x itself but for a bare NULL or a constant.
func (w *Work) compareWith(by caller, op lang.Op, x *operand, as, other Expr, b *column.Batch, on []uint64) (column.Vector, error) {
	o, err := w.operand(other, b, on)
	if err != nil {
		return o.v, err
	}
	left := *x
	if x.v.Type != as.Type() {
		if left, err = w.operand(as, b, on); err != nil {
			return left.v, err
		}
	}
	return w.compare(by, op, &left, &o, b.N), nil
}
