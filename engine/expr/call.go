package expr

import (
	"errors"

	"nearcell/catalog/column"
	"nearcell/engine/function"
	"nearcell/engine/problem"
)

// Call is a scalar function of arguments that have the types it works on.
type Call struct {
	base
	Fn   *function.Scalar
	Args []Expr
}

// NewCall is fn(args). EXTRACT(HOUR FROM t) has the field as a constant text
// for its first argument. A NULL argument makes the result NULL, but for
// COALESCE and NULLIF.
func NewCall(fn *function.Scalar, args []Expr, place problem.Place) (Expr, error) {
	seen := make([]function.Arg, len(args))
	for i, a := range args {
		seen[i] = ArgOf(a)
	}
	result, err := fn.Check(seen)
	if err != nil {
		return nil, CheckProblem(err, args, nil, place)
	}
	if fn.Lazy {
		if fn.Name == "COALESCE" {
			return newCoalesce(args, place)
		}
		return newNullIf(args[0], args[1], place)
	}
	e := &Call{base{result.Type, result.Unit, place}, fn, make([]Expr, len(args))}
	for i, a := range args {
		e.Args[i] = coerce(a, result.Args[i])
	}
	return e, nil
}

// ArgOf is what a function's checker sees of an argument.
func ArgOf(e Expr) function.Arg {
	a := function.Arg{Type: e.Type(), Unit: e.Unit()}
	if v, ok := Const(e); ok {
		a.Const = &v
	}
	return a
}

// CheckProblem makes a problem of what a function's checker said, at the place
// of the argument that is wrong. weight is nil where there is none.
func CheckProblem(err error, args []Expr, weight Expr, place problem.Place) error {
	var a *function.ArgumentError
	if !errors.As(err, &a) {
		return problem.At(err, place)
	}
	switch {
	case a.Arg >= 0 && a.Arg < len(args):
		place = at(args[a.Arg], place)
	case a.Arg == function.WeightArg && weight != nil:
		place = at(weight, place)
	}
	p := problem.New(a.Code, place, "%s", a.Message)
	p.Hint = a.Hint
	if p.Hint == "" && a.Code == CodeTypes && a.Arg >= 0 && a.Arg < len(args) && a.WantNumber {
		return hintNumber(p, args[a.Arg])
	}
	return p
}

// Children are the arguments.
func (e *Call) Children() []Expr { return e.Args }

// With calls with others.
func (e *Call) With(c []Expr) Expr { n := *e; n.Args = c; return &n }

// CanFail is that of the function and its arguments.
func (e *Call) CanFail() bool { return e.Fn.CanFail || anyFails(e.Args) }

// Eval computes the arguments, and the function where none of them is NULL.
func (e *Call) Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error) {
	args := make([]column.Vector, len(e.Args))
	views := make([]*column.Vector, len(e.Args))
	for i, a := range e.Args {
		v, err := a.Eval(w, b, on)
		if err != nil {
			return v, err
		}
		if v.Type == column.Null {
			return w.nulls(e.typ, e.unit, b.N), nil
		}
		args[i], views[i] = v, &args[i]
	}
	valid := function.ActiveRows(&w.Arena, nil, b.N, views...)
	active := function.ActiveRows(&w.Arena, on, b.N, views...)
	out := w.fresh(e.typ, e.unit, b.N)
	if e.typ == column.Text {
		out.Dict = emptyDict
	}
	if err := e.Fn.Eval(&w.Arena, args, active, b.N, &out); err != nil {
		var f *function.RowFault
		if errors.As(err, &f) {
			return out, fromFault(f, e.at)
		}
		return out, problem.At(err, e.at)
	}
	if out.Valid = w.both(out.Valid, valid, b.N); out.Valid != nil && e.typ == column.Boolean {
		for i := range out.Bits {
			out.Bits[i] &= out.Valid[i]
		}
	}
	return out, nil
}

// MakePoint is POINT(X, Y, Z).
type MakePoint struct {
	base
	X, Y, Z Expr
}

// NewPoint is POINT(x, y, z).
func NewPoint(x, y, z Expr, place problem.Place) (Expr, error) {
	parts := []Expr{x, y, z}
	for i, e := range parts {
		if !e.Type().Numeric() && e.Type() != column.Null {
			return nil, wantNumber("POINT", e, place)
		}
		parts[i] = coerce(e, column.Real)
	}
	unit, err := commonUnit("coordinates beside", parts, place)
	if err != nil {
		return nil, err
	}
	return &MakePoint{base{column.Point, unit, place}, parts[0], parts[1], parts[2]}, nil
}

// Children are the coordinates.
func (e *MakePoint) Children() []Expr { return []Expr{e.X, e.Y, e.Z} }

// With is a point of other coordinates.
func (e *MakePoint) With(c []Expr) Expr { n := *e; n.X, n.Y, n.Z = c[0], c[1], c[2]; return &n }

// CanFail is that of the coordinates.
func (e *MakePoint) CanFail() bool { return anyFails(e.Children()) }

// Eval puts the coordinates together; a NULL one makes the point NULL.
func (e *MakePoint) Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error) {
	out := w.fresh(column.Point, e.unit, b.N)
	for k, c := range e.Children() {
		v, err := c.Eval(w, b, on)
		if err != nil {
			return v, err
		}
		out.Valid = w.both(out.Valid, v.Valid, b.N)
		for i, f := range v.F[:b.N] {
			out.F[3*i+k] = f
		}
	}
	return out, nil
}
