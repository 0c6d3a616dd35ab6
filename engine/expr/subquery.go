package expr

import (
	"nearcell/catalog/column"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// Outer reads a value of the row outside for which a query inside an expression
// is computed: number Index of the Outer list of the Subquery around it. Whoever
// runs the query puts constants in the place of Outer.
type Outer struct {
	base
	Index int
	Field column.Field
}

// NewOuter is value index of the row outside.
func NewOuter(index int, f column.Field, at problem.Place) Expr {
	return &Outer{base{f.Type, f.Unit, at}, index, f}
}

// Children is empty.
func (e *Outer) Children() []Expr { return nil }

// With is e itself.
func (e *Outer) With([]Expr) Expr { return e }

// CanFail is false.
func (e *Outer) CanFail() bool { return false }

// Eval is an error: there is no row outside until somebody gives one.
func (e *Outer) Eval(*Work, *column.Batch, []uint64) (column.Vector, error) {
	return column.Vector{}, problem.New("failed", e.at, "'%s' belongs to a row outside, and there is none", e.Field.Name)
}

// HasOuter reports whether e reads the row outside. Queries inside e read it
// through their own Outer lists.
func HasOuter(e Expr) bool {
	found := false
	Walk(e, func(e Expr) {
		_, is := e.(*Outer)
		found = found || is
	})
	return found
}

// SubqueryKind says what is asked of a query inside an expression.
type SubqueryKind uint8

// A scalar query is its one value, NULL where it gives no row. IN asks whether a
// value is among its rows, EXISTS whether it has any.
const (
	ScalarQuery SubqueryKind = iota
	InQuery
	ExistsQuery
)

// Query is the query of a Subquery. What it is and how it is computed is not
// this package's business.
type Query interface {
	// Field is its first column.
	Field() column.Field
	// CanFail reports whether computing it may raise an error.
	CanFail() bool
	// OneRow reports whether it never gives more than one row.
	OneRow() bool
	// Same reports whether another query is written alike and reads the same
	// tables.
	Same(Query) bool
	// String is the query in parentheses, for plans.
	String() string
}

// Subquery is (query), X [NOT] IN (query) or EXISTS (query). Outer are the
// values of the row at hand on which the query depends; without any, it is
// computed once.
type Subquery struct {
	base
	Kind  SubqueryKind
	Not   bool // NOT IN
	X     Expr // of IN, else nil
	Outer []Expr
	Query Query
}

// Asker computes queries inside expressions. x is the operand of IN, nil for the
// other kinds; outer are the values of e.Outer. Rows that are off are not to be
// computed.
type Asker interface {
	Ask(w *Work, e *Subquery, x *column.Vector, outer []column.Vector, on []uint64, n int) (column.Vector, error)
}

// NewScalarQuery is (query), the value of its only column.
func NewScalarQuery(q Query, outer []Expr, place problem.Place) Expr {
	f := q.Field()
	return &Subquery{base: base{f.Type, f.Unit, place}, Kind: ScalarQuery, Outer: outer, Query: q}
}

// NewExistsQuery is EXISTS (query).
func NewExistsQuery(q Query, outer []Expr, place problem.Place) Expr {
	return &Subquery{base: base{column.Boolean, nil, place}, Kind: ExistsQuery, Outer: outer, Query: q}
}

// NewInQuery is x [NOT] IN (query): TRUE where x equals a row, FALSE where it
// equals none, NULL where it equals none but x or a row is NULL; FALSE of a query
// without rows, whatever x is.
func NewInQuery(x Expr, q Query, outer []Expr, not bool, place problem.Place) (Expr, error) {
	_, _, err := comparable(lang.Equals, x, NewColumn(0, q.Field(), place), place)
	if err != nil {
		return nil, err
	}
	return &Subquery{base: base{column.Boolean, nil, place}, Kind: InQuery, Not: not, X: x, Outer: outer, Query: q}, nil
}

// Children are the operand of IN, then the values that the query depends on.
func (e *Subquery) Children() []Expr {
	if e.X == nil {
		return e.Outer
	}
	return append([]Expr{e.X}, e.Outer...)
}

// With asks the same for others.
func (e *Subquery) With(c []Expr) Expr {
	n := *e
	if e.X != nil {
		n.X, c = c[0], c[1:]
	}
	n.Outer = c
	return &n
}

// Of is the same question asked of another query.
func (e *Subquery) Of(q Query) *Subquery {
	n := *e
	n.Query = q
	return &n
}

// CanFail is that of the query and of what it depends on; a scalar query fails
// where it gives a second row.
func (e *Subquery) CanFail() bool {
	return e.Query.CanFail() || e.Kind == ScalarQuery && !e.Query.OneRow() || anyFails(e.Children())
}

// Eval computes what the query depends on and asks for the answers.
func (e *Subquery) Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error) {
	if w.Asker == nil {
		return column.Vector{}, problem.New("query-here", e.at, "a query cannot be computed here").
			WithHint("write its value")
	}
	var x *column.Vector
	if e.X != nil {
		v, err := e.X.Eval(w, b, on)
		if err != nil {
			return v, err
		}
		x = &v
	}
	outer := make([]column.Vector, len(e.Outer))
	for i, o := range e.Outer {
		var err error
		if outer[i], err = o.Eval(w, b, on); err != nil {
			return column.Vector{}, err
		}
	}
	v, err := w.Asker.Ask(w, e, x, outer, on, b.N)
	v.Unit = e.unit
	return v, err
}

// HasQuery reports whether a query stands in e.
func HasQuery(e Expr) bool {
	found := false
	Walk(e, func(e Expr) {
		_, is := e.(*Subquery)
		found = found || is
	})
	return found
}
