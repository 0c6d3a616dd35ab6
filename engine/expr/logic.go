package expr

import (
	"nearcell/catalog/column"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// Logic is Left AND Right or Left OR Right. The right side is computed only
// for the rows that the left side leaves undecided.
type Logic struct {
	base
	Op          lang.Op // And or Or
	Left, Right Expr
}

// NewAnd is l AND r.
func NewAnd(l, r Expr, place problem.Place) (Expr, error) { return newLogic(lang.And, l, r, place) }

// NewOr is l OR r.
func NewOr(l, r Expr, place problem.Place) (Expr, error) { return newLogic(lang.Or, l, r, place) }

func newLogic(op lang.Op, l, r Expr, place problem.Place) (Expr, error) {
	l, err := wantCondition(string(op), l, place)
	if err != nil {
		return nil, err
	}
	r, err = wantCondition(string(op), r, place)
	if err != nil {
		return nil, err
	}
	return &Logic{base{column.Boolean, nil, place}, op, l, r}, nil
}

// Children are the two sides.
func (e *Logic) Children() []Expr { return []Expr{e.Left, e.Right} }

// With is the connection of other sides.
func (e *Logic) With(c []Expr) Expr { n := *e; n.Left, n.Right = c[0], c[1]; return &n }

// CanFail is that of the sides.
func (e *Logic) CanFail() bool { return e.Left.CanFail() || e.Right.CanFail() }

// Eval connects by Kleene's three-valued logic.
func (e *Logic) Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error) {
	l, err := e.Left.Eval(w, b, on)
	if err != nil {
		return l, err
	}
	yes, no := w.truth(&l)
	decided := no // FALSE AND x is FALSE
	if e.Op == lang.Or {
		decided = yes // TRUE OR x is TRUE
	}
	open := w.minus(w.rows(on, b.N), decided)
	if none(open) {
		return w.boolean(yes, no, b.N), nil
	}
	r, err := e.Right.Eval(w, b, open)
	if err != nil {
		return r, err
	}
	rightYes, rightNo := w.truth(&r)
	k := column.Words(b.N)
	outYes, outNo := w.Words(k), w.Words(k)
	for i := range k {
		if e.Op == lang.And {
			outYes[i] = yes[i] & rightYes[i] & open[i]
			outNo[i] = no[i] | rightNo[i]&open[i]
		} else {
			outYes[i] = yes[i] | rightYes[i]&open[i]
			outNo[i] = no[i] & rightNo[i] & open[i]
		}
	}
	return w.boolean(outYes, outNo, b.N), nil
}

// minus is the bitmap of what is in a and not in b.
func (w *Work) minus(a, b []uint64) []uint64 {
	out := w.Words(len(a))
	b = b[:len(a)]
	for i, x := range a {
		out[i] = x &^ b[i]
	}
	return out
}

// Not is NOT X.
type Not struct {
	base
	X Expr
}

// NewNot is NOT x.
func NewNot(x Expr, place problem.Place) (Expr, error) {
	x, err := wantCondition("NOT", x, place)
	if err != nil {
		return nil, err
	}
	return &Not{base{column.Boolean, nil, place}, x}, nil
}

// Children is the operand.
func (e *Not) Children() []Expr { return []Expr{e.X} }

// With is NOT children[0].
func (e *Not) With(c []Expr) Expr { n := *e; n.X = c[0]; return &n }

// CanFail is that of the operand.
func (e *Not) CanFail() bool { return e.X.CanFail() }

// Eval negates; NULL stays NULL.
func (e *Not) Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error) {
	x, err := e.X.Eval(w, b, on)
	if err != nil {
		return x, err
	}
	yes, no := w.truth(&x)
	return column.Vector{Type: column.Boolean, N: b.N, Bits: no, Valid: w.boolean(yes, no, b.N).Valid}, nil
}

// Is is X IS [NOT] NULL, TRUE, FALSE or UNKNOWN: never NULL itself.
type Is struct {
	base
	X    Expr
	What lang.IsWhat
	Not  bool
}

// NewIs is x IS [NOT] NULL, TRUE, FALSE or UNKNOWN.
func NewIs(x Expr, what lang.IsWhat, not bool, place problem.Place) (Expr, error) {
	if what != lang.IsNull {
		var err error
		if x, err = wantCondition("IS "+string(what), x, place); err != nil {
			return nil, err
		}
	}
	return &Is{base{column.Boolean, nil, place}, x, what, not}, nil
}

// Children is the operand.
func (e *Is) Children() []Expr { return []Expr{e.X} }

// With asks the same of another operand.
func (e *Is) With(c []Expr) Expr { n := *e; n.X = c[0]; return &n }

// CanFail is that of the operand.
func (e *Is) CanFail() bool { return e.X.CanFail() }

// Eval asks.
func (e *Is) Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error) {
	x, err := e.X.Eval(w, b, on)
	if err != nil {
		return x, err
	}
	out := w.Words(column.Words(b.N))
	column.FillOn(out, b.N)
	keep := func(mask []uint64) {
		for i := range out {
			out[i] &= mask[i]
		}
	}
	not := e.Not
	switch {
	case e.What == lang.IsNull || e.What == lang.IsUnknown:
		not = !not // what remains below are the rows that have a value
		if x.Type == column.Null {
			clear(out)
		} else if x.Valid != nil {
			keep(x.Valid)
		}
	default:
		yes, no := w.truth(&x)
		if e.What == lang.IsTrue {
			keep(yes)
		} else {
			keep(no)
		}
	}
	if not {
		all := w.rows(nil, b.N)
		out = w.minus(all, out)
	}
	return column.Vector{Type: column.Boolean, N: b.N, Bits: out}, nil
}

// Distinct is Left IS [NOT] DISTINCT FROM Right: a comparison for which NULLs
// are equal; never NULL itself.
type Distinct struct {
	base
	Left, Right Expr
	Not         bool
}

// NewIsDistinct is l IS [NOT] DISTINCT FROM r.
func NewIsDistinct(l, r Expr, not bool, place problem.Place) (Expr, error) {
	l, r, err := comparable(lang.Equals, l, r, place)
	if err != nil {
		return nil, err
	}
	return &Distinct{base{column.Boolean, nil, place}, l, r, not}, nil
}

// Children are the two sides.
func (e *Distinct) Children() []Expr { return []Expr{e.Left, e.Right} }

// With compares other sides.
func (e *Distinct) With(c []Expr) Expr { n := *e; n.Left, n.Right = c[0], c[1]; return &n }

// CanFail is that of the sides.
func (e *Distinct) CanFail() bool { return e.Left.CanFail() || e.Right.CanFail() }

// Eval compares.
func (e *Distinct) Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error) {
	l, err := w.operand(e.Left, b, on)
	if err != nil {
		return l.v, err
	}
	r, err := w.operand(e.Right, b, on)
	if err != nil {
		return r.v, err
	}
	same := w.compare(caller{e, 0}, lang.Equals, &l, &r, b.N)
	out := w.Words(column.Words(b.N))
	copy(out, same.Bits)
	hasL, hasR := w.present(&l), w.present(&r)
	for i := range out {
		out[i] |= ^(hasL[i] | hasR[i]) // two NULLs
		if !e.Not {
			out[i] = ^out[i]
		}
	}
	if tail := uint(b.N) & 63; tail != 0 {
		out[len(out)-1] &= 1<<tail - 1
	}
	return column.Vector{Type: column.Boolean, N: b.N, Bits: out}, nil
}

// present is the bitmap of the rows for which the operand has a value.
func (w *Work) present(o *operand) []uint64 {
	switch {
	case o.null():
		return w.blank(o.v.N)
	case o.valid() != nil:
		return o.v.Valid[:column.Words(o.v.N)]
	}
	return w.rows(nil, o.v.N)
}
