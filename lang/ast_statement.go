package lang

// QueryStatement is a query on its own: prints a table.
type QueryStatement struct {
	At
	Query *Query
}

// ObjectKind is a kind of thing that the catalog keeps.
type ObjectKind string

const (
	Campaign ObjectKind = "CAMPAIGN"
	Table    ObjectKind = "TABLE"
	SolidOb  ObjectKind = "SOLID"
	View     ObjectKind = "VIEW"
	FrameOb  ObjectKind = "FRAME"
	Diagrams ObjectKind = "DIAGRAMS" // of DROP only
)

// CreateData is CREATE CAMPAIGN and CREATE TABLE. Exactly one of File (FROM 'x.csv'),
// Files (FROM FILES 'x/*.csv') and Query (AS (query)) is set.
type CreateData struct {
	At
	Kind     ObjectKind // Campaign or Table
	Replace  bool
	Name     Name
	File     *Text
	Files    *Text
	Query    *Query
	Readings []Reading
}

// CreateSolid is CREATE SOLID name AS solid [IN FRAME name].
type CreateSolid struct {
	At
	Replace bool
	Name    Name
	Solid   Solid
	Frame   Name
}

// CreateView is CREATE VIEW name AS (query).
type CreateView struct {
	At
	Replace bool
	Name    Name
	Query   *Query
}

// CreateFrame is CREATE FRAME name MATCHING 'file'.
type CreateFrame struct {
	At
	Replace bool
	Name    Name
	File    *Text
}

// Drop is DROP kind name, or DROP DIAGRAMS without a name.
type Drop struct {
	At
	Kind ObjectKind
	Name Name
}

// Let is LET name = value.
type Let struct {
	At
	Name  Name
	Value Expr
}

// Save is SAVE query TO 'file' with its options.
type Save struct {
	At
	Query          *Query
	To             *Text
	Overwrite      bool
	WithUnits      bool
	WithProvenance bool
	QuoteFormulas  bool
}

// Explain is EXPLAIN [MEASURED] query.
type Explain struct {
	At
	Measured bool
	Query    *Query
}

// Require is REQUIRE 'label' condition, or REQUIRE 'label' NONE (query);
// exactly one of Condition and None is set.
type Require struct {
	At
	Label     *Text
	Condition Expr
	None      *Query
}

// List is LIST word.
type List struct {
	At
	What Name
}

// Describe is DESCRIBE FILE 'x' (File), DESCRIBE noun OF operand (Name and Operand),
// or DESCRIBE word (Name).
type Describe struct {
	At
	File    *Text
	Name    Name
	Operand Operand
}

// Run is RUN 'file'.
type Run struct {
	At
	File *Text
}

// Set is SET word value; exactly one of Value (a text counts as a value) and Word is set.
type Set struct {
	At
	Name  Name
	Value Expr
	Word  Name
}

// Help is HELP with any words; dashes between them, as in the codes of errors, say
// no more than blanks.
type Help struct {
	At
	Topic []Name
}

// Quit is QUIT.
type Quit struct{ At }

// Draw is DRAW (a file or the page) or, with Show, SHOW (the terminal). Shaded and Along are
// zero, Limits, Showing and Seen empty, Weight and To nil when not given.
type Draw struct {
	At
	Show      bool
	Relation  *Relation
	Shaded    Name
	Limits    []Expr
	Along     Name
	Showing   []Name
	Weight    Expr
	Seen      []Expr // x, y, z of SEEN FROM
	To        *Text
	Overwrite bool // of To
}

// Remark is TITLE 'text', or TEXT 'text' when Title is false: words for the report.
type Remark struct {
	At
	Title bool
	Text  *Text
}

func (*QueryStatement) statement() {}
func (*CreateData) statement()     {}
func (*CreateSolid) statement()    {}
func (*CreateView) statement()     {}
func (*CreateFrame) statement()    {}
func (*Drop) statement()           {}
func (*Let) statement()            {}
func (*Save) statement()           {}
func (*Explain) statement()        {}
func (*Require) statement()        {}
func (*List) statement()           {}
func (*Describe) statement()       {}
func (*Run) statement()            {}
func (*Set) statement()            {}
func (*Help) statement()           {}
func (*Quit) statement()           {}
func (*Draw) statement()           {}
func (*Remark) statement()         {}
