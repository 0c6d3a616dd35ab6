package expr

import (
	"nearcell/catalog/column"
	"nearcell/engine/function"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// NewColumn reads column index of the batch.
func NewColumn(index int, f column.Field, at problem.Place) Expr { return nil }

// NewConst is a constant; its unit is v.Unit.
func NewConst(v column.Value, at problem.Place) Expr { return nil }

// NewNeg is -x.
func NewNeg(x Expr, at problem.Place) (Expr, error) { return nil, nil }

// NewPlus is +x.
func NewPlus(x Expr, at problem.Place) (Expr, error) { return nil, nil }

// NewArith is l op r for lang.Plus, Minus, Times, Divide, Modulo, Power.
func NewArith(op lang.Op, l, r Expr, at problem.Place) (Expr, error) { return nil, nil }

// NewConcat is l || r.
func NewConcat(l, r Expr, at problem.Place) (Expr, error) { return nil, nil }

// NewCompare is l op r for lang.Equals … GreaterOrEqual.
func NewCompare(op lang.Op, l, r Expr, at problem.Place) (Expr, error) { return nil, nil }

// NewAnd, NewOr and NewNot are the three-valued connectives.
func NewAnd(l, r Expr, at problem.Place) (Expr, error) { return nil, nil }
func NewOr(l, r Expr, at problem.Place) (Expr, error)  { return nil, nil }
func NewNot(x Expr, at problem.Place) (Expr, error)    { return nil, nil }

// NewBetween is x [NOT] BETWEEN low AND high.
func NewBetween(x, low, high Expr, not bool, at problem.Place) (Expr, error) { return nil, nil }

// NewIn is x [NOT] IN (list).
func NewIn(x Expr, list []Expr, not bool, at problem.Place) (Expr, error) { return nil, nil }

// NewLike is x [NOT] LIKE pattern [ESCAPE escape]; escape may be nil.
func NewLike(x, pattern, escape Expr, not bool, at problem.Place) (Expr, error) { return nil, nil }

// NewIs is x IS [NOT] NULL, TRUE, FALSE or UNKNOWN.
func NewIs(x Expr, what lang.IsWhat, not bool, at problem.Place) (Expr, error) { return nil, nil }

// NewIsDistinct is l IS [NOT] DISTINCT FROM r.
func NewIsDistinct(l, r Expr, not bool, at problem.Place) (Expr, error) { return nil, nil }

// When is one arm of a CASE.
type When struct{ Cond, Result Expr }

// NewCase is CASE [operand] WHEN … THEN … [ELSE …] END; operand and otherwise
// may be nil. With an operand the arms' Cond are compared with it.
func NewCase(operand Expr, whens []When, otherwise Expr, at problem.Place) (Expr, error) {
	return nil, nil
}

// NewCast is CAST(x AS to).
func NewCast(x Expr, to column.Type, at problem.Place) (Expr, error) { return nil, nil }

// NewCall is fn(args). EXTRACT(HOUR FROM t) has the field as a constant text
// for its first argument.
func NewCall(fn *function.Scalar, args []Expr, at problem.Place) (Expr, error) { return nil, nil }

// NewPoint is POINT(x, y, z).
func NewPoint(x, y, z Expr, at problem.Place) (Expr, error) { return nil, nil }

// NewOverlaps is (start, end) OVERLAPS (start, end); an end may be an interval.
func NewOverlaps(ls, le, rs, re Expr, at problem.Place) (Expr, error) { return nil, nil }
