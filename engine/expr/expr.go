package expr

import (
	"nearcell/catalog/column"
	"nearcell/engine/problem"
)

// Expr is a bound expression: its columns are indices into the batch.
//
// Eval computes the rows whose bit is set in on (nil: all b.N rows; bits beyond
// them are 0) and returns a vector of b.N values. Rows that are off hold anything but never raise an
// error: CASE WHEN d <> 0 THEN x / d END divides only where d is not 0. The
// vector is a read-only view that is valid until w.Reset; it may share memory
// with the batch. An error of a row is a *RowError.
//
// Expressions are immutable and may be used by several goroutines, each with
// a Work of its own.
type Expr interface {
	Type() column.Type
	Unit() *column.Unit
	Place() problem.Place
	Eval(w *Work, b *column.Batch, on []uint64) (column.Vector, error)
	// Children are the expressions directly below, for rules and printing.
	Children() []Expr
	// With is a copy with other children, in the order of Children and of the
	// same types.
	With(children []Expr) Expr
	// CanFail reports whether a row may raise an error: such a condition is
	// not moved to where other rows would meet it.
	CanFail() bool
	// String writes the expression for plans and headings.
	String() string
}

// RowError is an error that one row of a batch raised. Err is a
// *problem.Problem that has the place of the failing part and does not name
// the row: whoever runs the plan knows how rows are called.
type RowError struct {
	Row int // in the batch
	Err error
}

func (e *RowError) Error() string { return e.Err.Error() }

// Unwrap is the error without the row.
func (e *RowError) Unwrap() error { return e.Err }
