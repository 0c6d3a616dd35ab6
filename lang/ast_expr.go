package lang

// Expr is an expression.
type Expr interface {
	Node
	expr()
}

// Op is an operator of a Binary or a Unary expression.
type Op string

const (
	Or             Op = "OR"
	And            Op = "AND"
	Not            Op = "NOT"
	Equals         Op = "="
	NotEquals      Op = "<>" // != is read as this
	Less           Op = "<"
	LessOrEqual    Op = "<="
	Greater        Op = ">"
	GreaterOrEqual Op = ">="
	Plus           Op = "+"
	Minus          Op = "-"
	Concat         Op = "||"
	Times          Op = "*"
	Divide         Op = "/"
	Modulo         Op = "%"
	Power          Op = "^"
)

// Binary is left op right.
type Binary struct {
	At
	Op          Op
	OpSpan      Span // the operator itself, for messages that point at it
	Left, Right Expr
}

// Unary is NOT x, -x or +x.
type Unary struct {
	At
	Op      Op
	Operand Expr
}

// Between is x [NOT] BETWEEN low AND high.
type Between struct {
	At
	Not                bool
	Operand, Low, High Expr
}

// In is x [NOT] IN (list), or x [NOT] IN (query); exactly one of List and Query is set.
type In struct {
	At
	Not     bool
	Operand Expr
	List    []Expr
	Query   *Query
}

// Quantified is x > ALL (query), or x > ANY (query): the comparison holds for all rows of
// the query, or for any. Op is a comparison.
type Quantified struct {
	At
	Op      Op
	OpSpan  Span
	All     bool
	Operand Expr
	Query   *Query
}

// Like is x [NOT] LIKE pattern [ESCAPE mark]; Escape is nil when not given.
type Like struct {
	At
	Not                      bool
	Operand, Pattern, Escape Expr
}

// IsWhat is what an Is expression asks for.
type IsWhat string

const (
	IsNull         IsWhat = "NULL"
	IsTrue         IsWhat = "TRUE"
	IsFalse        IsWhat = "FALSE"
	IsUnknown      IsWhat = "UNKNOWN"
	IsDistinctFrom IsWhat = "DISTINCT FROM"
)

// Is is x IS [NOT] NULL, TRUE, FALSE, UNKNOWN or DISTINCT FROM y; From is set in the last form only.
type Is struct {
	At
	Not     bool
	Operand Expr
	What    IsWhat
	From    Expr
}

// AtTimeZone is t AT TIME ZONE zone.
type AtTimeZone struct {
	At
	Operand, Zone Expr
}

// Number is an unsigned number as written. IsInteger tells that it has neither a
// point nor an exponent; whether it fits 64 bits is left to the reader.
type Number struct {
	At
	Text      string
	IsInteger bool
}

// Boolean is TRUE or FALSE.
type Boolean struct {
	At
	Value bool
}

// Null is NULL.
type Null struct{ At }

// Timestamp is TIMESTAMP 'text'.
type Timestamp struct {
	At
	Text *Text
}

// Interval is INTERVAL 'text' unit.
type Interval struct {
	At
	Text *Text
	Unit Name
}

// Param is :name; Name is the text after the colon.
type Param struct {
	At
	Name string
}

// Column is name or qualifier.name; Qualifier is the zero Name when not given.
type Column struct {
	At
	Qualifier Name
	Name      Name
}

// Cast is CAST(x AS type).
type Cast struct {
	At
	Operand Expr
	Type    Name
}

// Case is CASE [operand] WHEN … THEN … [ELSE …] END; Operand and Else are nil when not given.
type Case struct {
	At
	Operand Expr
	Whens   []*When
	Else    Expr
}

// When is one arm of a Case.
type When struct {
	At
	Condition, Result Expr
}

// Exists is EXISTS (query).
type Exists struct {
	At
	Query *Query
}

// Subquery is a query in parentheses used as a value.
type Subquery struct {
	At
	Query *Query
}

// Row is (a, b, …): a row of VALUES, or a side of OVERLAPS.
type Row struct {
	At
	Values []Expr
}

// Overlaps is (a, b) OVERLAPS (c, d).
type Overlaps struct {
	At
	Left, Right *Row
}

// Separator stands between two arguments of a call.
type Separator string

const (
	Comma    Separator = ","
	FromWord Separator = "FROM"
	ForWord  Separator = "FOR"
)

// Call is a function or an aggregate with all that may follow it.
//
//	name(*)   name([DISTINCT] a, b ORDER BY k)   name(a FROM b FOR c)
//	name(y ALONG x AT v OUTSIDE NULL | word)
//	call FILTER (WHERE …) WEIGHTED BY w OVER (…)
//
// Separators is nil when all arguments are separated by commas, else it has one entry
// fewer than Args. Along and AtValue are both given or both nil; Outside is the zero
// Name when not given (its text is NULL for OUTSIDE NULL). Filter, Weight and Over are
// nil when not given.
type Call struct {
	At
	Name       Name
	Star       bool
	Distinct   bool
	Args       []Expr
	Separators []Separator
	OrderBy    []*Key
	Along      Expr
	AtValue    Expr
	Outside    Name
	Filter     Expr
	Weight     Expr
	Over       *Window
}

// Window is what stands in OVER (…).
type Window struct {
	At
	PartitionBy []Expr
	OrderBy     []*Key
	Frame       *Frame
}

// Frame is ROWS or RANGE with one bound (End is nil) or BETWEEN two.
type Frame struct {
	At
	Range      bool
	Start, End *Bound
}

// BoundKind is the kind of a window bound.
type BoundKind string

const (
	UnboundedPreceding BoundKind = "UNBOUNDED PRECEDING"
	UnboundedFollowing BoundKind = "UNBOUNDED FOLLOWING"
	CurrentRow         BoundKind = "CURRENT ROW"
	Preceding          BoundKind = "PRECEDING"
	Following          BoundKind = "FOLLOWING"
)

// Bound is one bound of a Frame; Offset is set for Preceding and Following only.
type Bound struct {
	At
	Kind   BoundKind
	Offset Expr
}

func (*Binary) expr()     {}
func (*Unary) expr()      {}
func (*Between) expr()    {}
func (*In) expr()         {}
func (*Quantified) expr() {}
func (*Like) expr()       {}
func (*Is) expr()         {}
func (*AtTimeZone) expr() {}
func (*Number) expr()     {}
func (*Text) expr()       {}
func (*Boolean) expr()    {}
func (*Null) expr()       {}
func (*Timestamp) expr()  {}
func (*Interval) expr()   {}
func (*Param) expr()      {}
func (*Column) expr()     {}
func (*Cast) expr()       {}
func (*Case) expr()       {}
func (*Exists) expr()     {}
func (*Subquery) expr()   {}
func (*Overlaps) expr()   {}
func (*Call) expr()       {}
