package expr

import (
	"nearcell/catalog/column"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// Overlaps is (start, end) OVERLAPS (start, end) of two periods.
type Overlaps struct {
	base
	Ends [4]Expr // left start, left end, right start, right end
	test Expr    // the definition in ISO/IEC 9075-2, <overlaps predicate>
}

// NewOverlaps is (start, end) OVERLAPS (start, end); an end may be an interval.
// As in the standard a period that is given backwards is turned round, a
// period without length is an instant, and two periods that only touch do not
// overlap.
func NewOverlaps(ls, le, rs, re Expr, place problem.Place) (Expr, error) {
	e := &Overlaps{base: base{column.Boolean, nil, place}, Ends: [4]Expr{ls, le, rs, re}}
	for i, x := range e.Ends {
		t := x.Type()
		if t != column.Timestamp && t != column.Null && (t != column.Interval || i%2 == 0) {
			return nil, wantType("OVERLAPS", column.Timestamp, x, place)
		}
		if t == column.Null {
			e.Ends[i] = coerce(x, column.Timestamp)
		}
	}
	var err error
	e.test, err = e.define()
	return e, err
}

// define writes the standard's definition:
//
//	(S1 > S2 AND NOT (S1 >= T2 AND T1 >= T2)) OR
//	(S2 > S1 AND NOT (S2 >= T1 AND T2 >= T1)) OR
//	(S1 = S2 AND (T1 <> T2 OR T1 = T2))
//
// where S and T are the start and the end of a period, put in order.
func (e *Overlaps) define() (Expr, error) {
	d := definer{place: e.at}
	s1, t1 := d.period(e.Ends[0], e.Ends[1])
	s2, t2 := d.period(e.Ends[2], e.Ends[3])
	first := d.and(d.compare(lang.Greater, s1, s2), d.not(d.and(d.compare(lang.GreaterOrEqual, s1, t2), d.compare(lang.GreaterOrEqual, t1, t2))))
	second := d.and(d.compare(lang.Greater, s2, s1), d.not(d.and(d.compare(lang.GreaterOrEqual, s2, t1), d.compare(lang.GreaterOrEqual, t2, t1))))
	third := d.and(d.compare(lang.Equals, s1, s2), d.or(d.compare(lang.NotEquals, t1, t2), d.compare(lang.Equals, t1, t2)))
	return d.or(d.or(first, second), third), d.err
}

// definer builds an expression and keeps the first error.
type definer struct {
	place problem.Place
	err   error
}

func (d *definer) keep(e Expr, err error) Expr {
	if err != nil && d.err == nil {
		d.err = err
	}
	if e == nil {
		e = NewConst(column.NullOf(column.Boolean), d.place)
	}
	return e
}

func (d *definer) compare(op lang.Op, l, r Expr) Expr { return d.keep(NewCompare(op, l, r, d.place)) }
func (d *definer) and(l, r Expr) Expr                 { return d.keep(NewAnd(l, r, d.place)) }
func (d *definer) or(l, r Expr) Expr                  { return d.keep(NewOr(l, r, d.place)) }
func (d *definer) not(x Expr) Expr                    { return d.keep(NewNot(x, d.place)) }

// period is a start and an end in order: where the end is before the start, or
// the start is NULL, they change places.
func (d *definer) period(start, end Expr) (s, t Expr) {
	if end.Type() == column.Interval {
		end = d.keep(NewArith(lang.Plus, start, end, d.place))
	}
	isNull := d.keep(NewIs(start, lang.IsNull, false, d.place))
	backwards := d.or(isNull, d.compare(lang.Less, end, start))
	s = d.keep(NewCase(nil, []When{{backwards, end}}, start, d.place))
	t = d.keep(NewCase(nil, []When{{backwards, start}}, end, d.place))
	return s, t
}

// Children are the four ends.
func (e *Overlaps) Children() []Expr { return e.Ends[:] }

// With asks the same of other periods.
func (e *Overlaps) With(c []Expr) Expr {
	n := *e
	copy(n.Ends[:], c)
	n.test, _ = n.define() // of the same types as before: no error
	return &n
}

// CanFail is that of the definition: an end may be a sum.
func (e *Overlaps) CanFail() bool { return e.test.CanFail() }

// Eval computes the definition.
func (e *Overlaps) Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error) {
	return e.test.Eval(w, b, on)
}
