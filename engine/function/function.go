package function

import (
	"nearcell/catalog/column"
)

// Arg is what a function's checker sees of an argument.
type Arg struct {
	Type column.Type
	Unit *column.Unit
	// Const is the value of a constant argument (QUANTILE's p), else nil. A
	// constant without a unit takes the unit of the arguments beside it.
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
// of n values each, of the types that Check asked for, and computes the rows of
// on (nil: all), in none of which an argument is NULL. out comes with its
// slices (codes 0, the dictionary one empty text); the kernel fills the values,
// sets the dictionary and, if it has NULLs to give, Valid. It returns a
// *RowFault for a row without a value.
//
// Lazy functions have no Eval: package expr has a node for each of them, since
// they must not compute all their arguments (COALESCE).
type Scalar struct {
	Name      string   // upper case
	Aliases   []string // other spellings: CEIL for CEILING
	Signature string   // "ROUND(x [, digits])"
	Meaning   string
	Example   string // an expression that is TRUE
	CanFail   bool
	Lazy      bool
	Check     func(args []Arg) (Result, error)
	Eval      func(a *Arena, args []column.Vector, on []uint64, n int, out *column.Vector) error
}

// Aggregate is a function of many rows.
type Aggregate struct {
	Name      string
	Signature string
	Meaning   string
	Example   string // a select item over columns temp, volume, …
	Star      bool   // the argument may be * (COUNT)
	Weighted  bool   // WEIGHTED BY may follow
	Along     bool   // written y ALONG x AT v (INTERPOLATE): the arguments are y, x, v and the word behind OUTSIDE
	Ordered   bool   // ORDER BY inside the parentheses must stand (FIRST, LAST)
	// Check is given the arguments (of COUNT(*) none) and the weight, nil where
	// none is given.
	Check func(args []Arg, weight *Arg) (Result, error)
	// New starts an accumulator.
	New func(s Setup) Accumulator
	// Slide prepares the aggregate over frames of these rows. What it gives makes one
	// Slider for each goroutine. Picks: the values are those of rows (Slid.Pick).
	Slide func(s Setup, r Rows) (Sliders, error)
}

// Setup is what an accumulator is made for.
type Setup struct {
	Args     []column.Type   // the checked types (Result.Args); COUNT(*): none
	Consts   []*column.Value // the constant arguments, nil where not constant
	Weighted bool
	// Keys are the ORDER BY inside the parentheses; their vectors follow the
	// arguments in Add.
	Keys []Key
}

// Key is the direction of one ordering vector.
type Key struct {
	Type       column.Type
	Descending bool
}

// Accumulator holds the state of one aggregate for many groups.
//
// Add takes a batch: groups[i] is the group of row i, on the rows that count
// (nil: all), weight nil where each row counts once. Groups beyond those seen
// so far are added. Merge takes the groups of another accumulator of the same
// kind, whose group g is group to[g] here; merging in chunk order gives the
// same bits for any number of workers. Result gives one value a group, also
// for groups that had no row. Add returns a *RowFault, Result a *GroupFault.
type Accumulator interface {
	Add(groups []int32, on []uint64, n int, args []column.Vector, weight *column.Vector) error
	Merge(other Accumulator, to []int32) error
	Result(groups int) (column.Vector, error)
	// Weights tells of each group what the notes under a weighted answer say.
	// It is nil where there is no weight.
	Weights(groups int) []WeightFacts
}

// Sized is an Accumulator that keeps more than a few words a group; Bytes is how much.
type Sized interface{ Bytes() int64 }

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
	Hint    string // a way out, may be empty
}

func (f *RowFault) Error() string { return f.Message }

// GroupFault is an error of the value of one group: a sum beyond its type.
type GroupFault struct {
	Group   int
	Code    string // "no-value", "overflow"
	Message string
	Hint    string
}

func (f *GroupFault) Error() string { return f.Message }

// ArgumentError is what Check returns for arguments of a wrong type or unit.
// Arg is the index of the argument that is wrong, -1 for the call as a whole,
// WeightArg for the weight.
type ArgumentError struct {
	Arg        int
	Code       string // "types", "units", "arguments"
	Message    string
	Hint       string
	WantNumber bool // a number was wanted where there is none
}

// WeightArg stands for the weight in an ArgumentError.
const WeightArg = -2

func (e *ArgumentError) Error() string { return e.Message }
