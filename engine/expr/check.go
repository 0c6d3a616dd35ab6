package expr

import (
	"nearcell/catalog/column"
	"nearcell/engine/function"
	"nearcell/engine/problem"
)

// Codes of the problems of this package.
const (
	CodeTypes     = "types"     // an operator or function was given a type that it does not take
	CodeUnits     = "units"     // values of different units were put together
	CodeArguments = "arguments" // wrong number of arguments, or a constant out of range
	CodeNoValue   = "no-value"  // a row's arithmetic has no value
	CodeOverflow  = "overflow"  // a row's value is beyond its type
	CodeCast      = "cast"      // a row's text does not read as the type
)

// at is the place of e, or that of the whole where e has none.
func at(e Expr, whole problem.Place) problem.Place {
	if p := e.Place(); p.Source != nil {
		return p
	}
	return whole
}

// withType writes an expression with its type: "temp (TEXT)".
func withType(e Expr) string {
	return e.String() + " (" + e.Type().String() + ")"
}

// wantNumber is the problem of something that is no number.
func wantNumber(what string, e Expr, whole problem.Place) *problem.Problem {
	p := problem.New(CodeTypes, at(e, whole), "%s needs a number, not %s", what, withType(e))
	return hintNumber(p, e)
}

// hintNumber adds the way from e to a number.
func hintNumber(p *problem.Problem, e Expr) *problem.Problem {
	switch e.Type() {
	case column.Text:
		if l, ok := e.(*Literal); ok {
			if _, ok := parseNumber(l.Value.S); ok {
				return p.WithHint("a number is written without quotes")
			}
			return p
		}
		return p.WithHint("CAST(%s AS REAL) reads a text as a number", e)
	case column.Boolean:
		return p.WithHint("CASE WHEN %s THEN 1 ELSE 0 END makes a number of a condition", e)
	case column.Interval:
		return p.WithHint("HOURS(%s) makes a number of an interval", e)
	case column.Point:
		return p.WithHint("DISTANCE(%s, POINT(0, 0, 0)) makes a number of a point", e)
	case column.Timestamp:
		return p.WithHint("the difference of two time stamps is an interval, and HOURS makes a number of that")
	}
	return p
}

// wantType is the problem of something that is not of the one type wanted.
func wantType(what string, t column.Type, e Expr, whole problem.Place) *problem.Problem {
	p := problem.New(CodeTypes, at(e, whole), "%s needs %s %s, not %s", what, article(t), t, withType(e))
	switch t {
	case column.Boolean:
		return p.WithHint("write a condition, such as %s = …", e)
	case column.Text:
		return p.WithHint("CAST(%s AS TEXT) makes a text of it", e)
	case column.Timestamp:
		if l, ok := e.(*Literal); ok && l.typ == column.Text {
			return p.WithHint("write TIMESTAMP %s", e)
		}
		if e.Type() == column.Text {
			return p.WithHint("CAST(%s AS TIMESTAMP) reads a text as a time stamp", e)
		}
	}
	return p
}

func article(t column.Type) string {
	if t == column.Integer || t == column.Interval {
		return "an"
	}
	return "a"
}

// wantCondition checks that e is BOOLEAN and gives a bare NULL that type.
func wantCondition(what string, e Expr, whole problem.Place) (Expr, error) {
	switch e.Type() {
	case column.Boolean, column.Null:
		return coerce(e, column.Boolean), nil
	}
	return nil, wantType(what, column.Boolean, e, whole)
}

// commonType is the type that values put side by side share: numbers become
// REAL if one of them is, NULL takes any type. ok is false where there is none.
func commonType(list []Expr) (t column.Type, ok bool) {
	for _, e := range list {
		switch u := e.Type(); {
		case u == t || u == column.Null:
		case t == column.Null:
			t = u
		case t.Numeric() && u.Numeric():
			t = column.Real
		default:
			return 0, false
		}
	}
	return t, true
}

// alike brings the expressions to their common type and finds their common
// unit. verb says what is done with them: "compared with".
func alike(verb string, list []Expr, whole problem.Place) ([]Expr, *column.Unit, error) {
	t, ok := commonType(list)
	if !ok {
		return nil, nil, unlike(verb, list, whole)
	}
	unit, err := commonUnit(verb, list, whole)
	if err != nil {
		return nil, nil, err
	}
	out := make([]Expr, len(list))
	for i, e := range list {
		out[i] = coerce(e, t)
	}
	return out, unit, nil
}

// unlike is the problem of the first two expressions without a common type.
func unlike(verb string, list []Expr, whole problem.Place) error {
	for i, b := range list {
		for _, a := range list[:i] {
			if _, ok := commonType([]Expr{a, b}); ok {
				continue
			}
			p := problem.New(CodeTypes, at(b, whole), "%s cannot be %s %s", withType(a), verb, withType(b))
			return hintTogether(p, a, b)
		}
	}
	return problem.New(CodeTypes, whole, "the types do not go together")
}

// hintTogether adds the way in which two values of different types come together.
func hintTogether(p *problem.Problem, a, b Expr) *problem.Problem {
	if a.Type() == column.Text {
		a, b = b, a
	}
	if b.Type() != column.Text {
		return p
	}
	_, written := b.(*Literal)
	switch t := a.Type(); {
	case t == column.Timestamp && written:
		return p.WithHint("write TIMESTAMP %s", b)
	case t == column.Interval && written:
		return p.WithHint("write INTERVAL '15' MINUTE or the like")
	case t.Numeric() && written:
		if _, ok := parseNumber(b.(*Literal).Value.S); ok {
			return p.WithHint("a number is written without quotes")
		}
		return p.WithHint("CAST(%s AS TEXT) makes a text of the number", a)
	case t.Numeric():
		return p.WithHint("CAST(%s AS REAL) reads a text as a number", b)
	case t == column.Timestamp || t == column.Interval || t == column.Boolean:
		return p.WithHint("CAST(%s AS %s) reads a text as such", b, t)
	}
	return p
}

// commonUnit is the unit of numbers that are added, compared or put side by
// side. Known units must be equal. A constant without a unit takes that of the
// others; anything else without one leaves the result without one.
func commonUnit(verb string, list []Expr, whole problem.Place) (*column.Unit, error) {
	var known Expr
	open := false
	for _, e := range list {
		switch {
		case e.Unit() != nil && known == nil:
			known = e
		case e.Unit() != nil:
			if !column.SameUnit(known.Unit(), e.Unit()) {
				return nil, problem.New(CodeUnits, at(e, whole), "%s is in %s and %s in %s: they cannot be %s each other",
					known, known.Unit(), e, e.Unit(), verb).WithHint("CAST(%s AS REAL) drops the unit", e)
			}
		case e.Type().Numeric() && !constant(e):
			open = true
		}
	}
	if known == nil || open {
		return nil, nil
	}
	return known.Unit(), nil
}

// rowError is the error of one row of the expression at a place.
func rowError(row int, code string, place problem.Place, format string, args ...any) error {
	return &RowError{Row: row, Err: problem.New(code, place, format, args...)}
}

// fromFault gives a kernel's fault a place.
func fromFault(f *function.RowFault, place problem.Place) error {
	p := problem.New(f.Code, place, "%s", f.Message)
	p.Hint = f.Hint
	return &RowError{Row: f.Row, Err: p}
}

// number writes a number for a message.
func number(v *column.Vector, i int) string { return v.Value(i).String() }
