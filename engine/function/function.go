// Package function is the one registry of scalar and aggregate functions:
// signature, unit rule, meaning, kernel. The binder, HELP, LIST FUNCTIONS and
// completion read it.
package function

import (
	"nearcell/catalog/column"
)

// Arg is what a function's checker sees of an argument.
type Arg struct {
	Type column.Type
	Unit *column.Unit
	// Const is the value of a constant argument (QUANTILE's p), else nil.
	Const *column.Value
}

// Result is what a checker answers: the type and unit of the result and the
// types to which the arguments are to be cast before the call (only
// INTEGER -> REAL and NULL -> anything happen by themselves).
type Result struct {
	Type column.Type
	Unit *column.Unit
	Args []column.Type
}

// Scalar is a function of the values of one row. Eval is called with vectors
// of n values each and computes the rows of on (nil: all); it returns a
// *RowFault for a row without a value.
type Scalar struct {
	Name      string // upper case
	Signature string // "ROUND(x [, digits])"
	Meaning   string
	Example   string
	// NullSafe functions see NULL arguments (COALESCE); for all others a NULL
	// argument makes the result NULL before Eval is called.
	NullSafe bool
	CanFail  bool
	Check    func(args []Arg) (Result, error)
	Eval     func(a *Arena, args []column.Vector, on []uint64, n int, out *column.Vector) error
}

// Aggregate is a function of many rows.
type Aggregate struct {
	Name      string
	Signature string
	Meaning   string
	Example   string
	Weighted  bool // WEIGHTED BY may follow
	Ordered   bool // ORDER BY inside the parentheses may stand (FIRST, LAST)
	Check     func(args []Arg) (Result, error)
	// New starts an accumulator for arguments of the checked types. consts are
	// the constant arguments (nil where not constant).
	New func(args []column.Type, consts []*column.Value, weighted bool) Accumulator
}

// Accumulator holds the state of one aggregate for many groups.
//
// Add takes a batch: groups[i] is the group of row i, on the rows that count,
// weight nil where each row counts once. Groups beyond those seen so far are
// added. Merge takes the groups of another accumulator of the same kind, whose
// group g is group to[g] here; merging in chunk order gives the same bits for
// any number of workers. Result gives one value a group.
type Accumulator interface {
	Add(groups []int32, on []uint64, n int, args []column.Vector, weight *column.Vector) error
	Merge(other Accumulator, to []int32) error
	Result(groups int) (column.Vector, error)
	// Weights tells of each group what the notes under a weighted answer say.
	// It is nil for aggregates without weight.
	Weights(groups int) []WeightFacts
}

// WeightFacts is what stands behind one weighted value.
type WeightFacts struct {
	Rows       int     // rows with a value and a weight above 0
	Sum        float64 // of the weights of rows with a value
	SumSquares float64
	Largest    float64
	NullWeight float64 // weight of the rows whose value was NULL
}

// RowFault is an error raised by row Row of a batch.
type RowFault struct {
	Row     int
	Code    string // "no-value", "overflow", "weight"
	Message string // "the logarithm of -1 has no value"
}

func (f *RowFault) Error() string { return f.Message }

// Arena hands out scratch slices that live until Reset.
type Arena struct {
	words [][]uint64
	used  int
}
