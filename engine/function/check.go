package function

import (
	"fmt"
	"strconv"
	"strings"

	"nearcell/catalog/column"
)

// wrong is an ArgumentError about argument i.
func wrong(i int, code, format string, args ...any) *ArgumentError {
	return &ArgumentError{Arg: i, Code: code, Message: fmt.Sprintf(format, args...)}
}

func (e *ArgumentError) hint(format string, args ...any) *ArgumentError {
	e.Hint = fmt.Sprintf(format, args...)
	return e
}

// wantCount checks the number of arguments; most < 0 sets no limit.
func wantCount(name string, args []Arg, least, most int) error {
	n := len(args)
	switch {
	case n >= least && (most < 0 || n <= most):
		return nil
	case least == most:
		return wrong(-1, "arguments", "%s takes %s, not %d", name, plural(least, "argument"), n)
	case most < 0:
		return wrong(-1, "arguments", "%s takes at least %s, not %d", name, plural(least, "argument"), n)
	}
	return wrong(-1, "arguments", "%s takes %d to %d arguments, not %d", name, least, most, n)
}

func plural(n int, what string) string {
	switch n {
	case 0:
		return "no " + what + "s"
	case 1:
		return "1 " + what
	}
	return strconv.Itoa(n) + " " + what + "s"
}

// wantNumber checks that argument i is a number or NULL.
func wantNumber(name string, args []Arg, i int) error {
	if t := args[i].Type; !t.Numeric() && t != column.Null {
		e := wrong(i, "types", "%s needs a number here, not %s", name, t)
		e.WantNumber = true
		return e
	}
	return nil
}

// wantType checks that argument i is of the type or NULL.
func wantType(name string, args []Arg, i int, t column.Type) error {
	if u := args[i].Type; u != t && u != column.Null {
		return wrong(i, "types", "%s needs %s here, not %s", name, t, u)
	}
	return nil
}

// firstError is the first of the errors that is one.
func firstError(errs ...error) error {
	for _, e := range errs {
		if e != nil {
			return e
		}
	}
	return nil
}

// numberType is INTEGER if all arguments are, else REAL.
func numberType(args []Arg) column.Type {
	t := column.Null
	for _, a := range args {
		switch {
		case a.Type == column.Real:
			return column.Real
		case a.Type == column.Integer:
			t = column.Integer
		}
	}
	if t == column.Null {
		return column.Real
	}
	return t
}

// repeatType is n times the type.
func repeatType(t column.Type, n int) []column.Type {
	out := make([]column.Type, n)
	for i := range out {
		out[i] = t
	}
	return out
}

// commonType is the type that all arguments can be brought to.
func commonType(name string, args []Arg) (column.Type, error) {
	t := column.Null
	for i, a := range args {
		switch {
		case a.Type == t || a.Type == column.Null:
		case t == column.Null:
			t = a.Type
		case t.Numeric() && a.Type.Numeric():
			t = column.Real
		default:
			return t, wrong(i, "types", "%s needs arguments of one type, not %s and %s", name, t, a.Type)
		}
	}
	return t, nil
}

// commonUnit is the unit of arguments that are put side by side: known units
// must be equal, a constant without one takes that of the others, and anything
// else without one leaves the result without.
func commonUnit(name string, args []Arg) (*column.Unit, error) {
	var known *column.Unit
	open := false
	for i, a := range args {
		switch {
		case a.Unit != nil && known == nil:
			known = a.Unit
		case a.Unit != nil:
			if !column.SameUnit(known, a.Unit) {
				return nil, wrong(i, "units", "%s is given %s and %s: they do not go together", name, known, a.Unit).
					hint("CAST(… AS REAL) drops the unit")
			}
		case a.Type.Numeric() && a.Const == nil:
			open = true
		}
	}
	if open {
		return nil, nil
	}
	return known, nil
}

// halfUnit is the unit whose square is u, nil where there is none.
func halfUnit(u *column.Unit) *column.Unit {
	if u == nil {
		return nil
	}
	var half *column.Unit
	for f := range strings.SplitSeq(u.ASCII(), "*") {
		symbol, power, ok := strings.Cut(f, "^")
		n, err := strconv.Atoi(power)
		if !ok || err != nil || n%2 != 0 {
			return nil
		}
		half = column.Mul(half, column.Symbol(symbol).Pow(n/2))
	}
	return half
}

// constReal is the value of a constant number, in REAL.
func constReal(v *column.Value) (float64, bool) {
	switch {
	case v == nil || v.Null:
		return 0, false
	case v.Type == column.Integer:
		return float64(v.I), true
	case v.Type == column.Real:
		return v.F, true
	}
	return 0, false
}
