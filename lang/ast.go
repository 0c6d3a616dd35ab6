package lang

// Span is a half-open range of byte offsets in the text that was parsed. The zero
// Span means that a node was made by a program, not read from a text.
type Span struct{ Start, End int }

// Len gives the number of bytes covered.
func (s Span) Len() int { return s.End - s.Start }

// Contains tells whether the other range lies wholly inside this one.
func (s Span) Contains(other Span) bool { return s.Start <= other.Start && other.End <= s.End }

// At is embedded in every node and says where in the text the node stands.
type At struct{ Pos Span }

// Span gives the node's place. Parentheses around an expression, a solid, a source
// or a query belong to what holds them, not to the node itself.
func (a At) Span() Span { return a.Pos }

// Node is anything in the syntax tree. Nodes are pointers to the structs below.
type Node interface {
	Span() Span
	node()
}

func (At) node() {}

// Script is a whole text: its statements in order, empty ones left out.
type Script struct {
	At
	Statements []Statement
}

// Statement is one command up to its semicolon.
type Statement interface {
	Node
	statement()
}

// Name is a word that names something: a campaign, a column, an alias, a unit, a
// method. Bare names keep their spelling as written but compare without regard to
// case; quoted names keep case and blanks and compare exactly. The zero Name means
// "none given"; the parser never makes a name with an empty text.
type Name struct {
	At
	Text   string
	Quoted bool
}

// Text is a text in single quotes, with doubled quotes already made single.
type Text struct {
	At
	Value string
}

// Operand is what a relation is made OF, or what a clause compares with:
// a *Name, a *Query or a *Relation (the latter two in parentheses).
type Operand interface {
	Node
	operand()
}

func (*Name) operand()     {}
func (*Query) operand()    {}
func (*Relation) operand() {}
