package plantest

import (
	"math/rand/v2"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/lang"
)

// must is for expressions that are right by construction.
func must(e expr.Expr, err error) expr.Expr {
	if err != nil {
		panic(err)
	}
	return e
}

// Column reads column i of a schema.
func Column(schema column.Schema, i int) expr.Expr {
	return expr.NewColumn(i, schema[i], Nowhere)
}

// ofType lists the columns of a type.
func ofType(schema column.Schema, t column.Type) []int {
	var list []int
	for i, f := range schema {
		if f.Type == t {
			list = append(list, i)
		}
	}
	return list
}

// Scalar is a random expression of a type over a schema; it may fail (x / 0).
func Scalar(rng *rand.Rand, schema column.Schema, t column.Type, depth int) expr.Expr {
	if t == column.Boolean && depth > 0 && rng.IntN(3) > 0 {
		return Condition(rng, schema, depth)
	}
	if t == column.Real && depth > 0 && rng.IntN(3) == 0 {
		ops := []lang.Op{lang.Plus, lang.Minus, lang.Times, lang.Divide}
		from := []column.Type{column.Real, column.Integer}
		l := Scalar(rng, schema, column.Real, depth-1)
		r := Scalar(rng, schema, from[rng.IntN(2)], depth-1)
		return must(expr.NewArith(ops[rng.IntN(len(ops))], l, r, Nowhere))
	}
	if cols := ofType(schema, t); len(cols) > 0 && rng.IntN(5) > 0 {
		return Column(schema, cols[rng.IntN(len(cols))])
	}
	return expr.NewConst(Value(rng, t), Nowhere)
}

// Condition is a random condition over a schema.
func Condition(rng *rand.Rand, schema column.Schema, depth int) expr.Expr {
	if depth > 0 {
		l := func() expr.Expr { return Condition(rng, schema, depth-1) }
		switch rng.IntN(6) {
		case 0, 1:
			return must(expr.NewAnd(l(), l(), Nowhere))
		case 2:
			return must(expr.NewOr(l(), l(), Nowhere))
		case 3:
			return must(expr.NewNot(l(), Nowhere))
		}
	}
	types := []column.Type{column.Integer, column.Real, column.Text, column.Timestamp, column.Boolean}
	t := types[rng.IntN(len(types))]
	if rng.IntN(8) == 0 {
		return must(expr.NewIs(Scalar(rng, schema, t, 0), lang.IsNull, rng.IntN(2) == 0, Nowhere))
	}
	ops := []lang.Op{lang.Equals, lang.Equals, lang.NotEquals, lang.Less, lang.LessOrEqual, lang.Greater, lang.GreaterOrEqual}
	op := ops[rng.IntN(len(ops))]
	u := t
	if t == column.Integer && rng.IntN(3) == 0 {
		u = column.Real
	}
	return must(expr.NewCompare(op, Scalar(rng, schema, t, depth), Scalar(rng, schema, u, depth), Nowhere))
}

// Equality is a random equality between a column of the left and one of the
// right part of a joined schema, whichever stands first.
func Equality(rng *rand.Rand, left, right column.Schema) expr.Expr {
	both := append(append(column.Schema(nil), left...), right...)
	for {
		i, j := rng.IntN(len(left)), rng.IntN(len(right))
		a, b := left[i].Type, right[j].Type
		if a != b && !(a.Numeric() && b.Numeric()) || a == column.Null {
			if rng.IntN(50) == 0 {
				return expr.NewConst(column.Bool(true), Nowhere)
			}
			continue
		}
		l, r := Column(both, i), Column(both, len(left)+j)
		if a.Numeric() && rng.IntN(4) == 0 { // keys that can fail, and some that do
			by := expr.NewConst(column.Float(2), Nowhere)
			if rng.IntN(2) == 0 {
				l, by = by, l
			}
			l = must(expr.NewArith(lang.Divide, l, by, Nowhere))
		}
		if rng.IntN(2) == 0 {
			l, r = r, l
		}
		return must(expr.NewCompare(lang.Equals, l, r, Nowhere))
	}
}
