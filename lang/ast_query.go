package lang

// Body is what a query's rows come from before ORDER BY and LIMIT: a *Select, a
// *Values, a *SetOp, or a *Query in parentheses that has its own WITH, ORDER BY or
// LIMIT. (A parenthesised query without any of these is stored as its body.)
type Body interface {
	Node
	body()
}

func (*Select) body() {}
func (*Values) body() {}
func (*SetOp) body()  {}
func (*Query) body()  {}

// Query is a whole query. ORDER BY and LIMIT belong to the whole set expression.
// Limit and Offset are nil when not given; an Offset needs a Limit.
type Query struct {
	At
	With    []*CTE
	Body    Body
	OrderBy []*Key
	Limit   Expr
	Offset  Expr
}

// CTE is one named query of WITH: name [(columns)] AS (query).
type CTE struct {
	At
	Name    Name
	Columns []Name
	Query   *Query
}

// Key is one key of an ORDER BY. Nulls is NullsDefault unless said.
type Key struct {
	At
	Expr       Expr
	Descending bool
	Nulls      NullsOrder
}

// NullsOrder says where NULLs were asked to sort.
type NullsOrder string

const (
	NullsDefault NullsOrder = ""
	NullsFirst   NullsOrder = "FIRST"
	NullsLast    NullsOrder = "LAST"
)

// SetKind is the operator of a SetOp.
type SetKind string

const (
	Union     SetKind = "UNION"
	Except    SetKind = "EXCEPT"
	Intersect SetKind = "INTERSECT"
)

// SetOp joins the rows of two bodies. All is false for the plain and the DISTINCT form.
type SetOp struct {
	At
	Kind        SetKind
	All         bool
	Left, Right Body
}

// Values is VALUES (…), (…).
type Values struct {
	At
	Rows []*Row
}

// Select is one SELECT. SELECT ALL is the same as plain SELECT. From holds the
// sources that commas separate; Where and Having are nil when not given.
type Select struct {
	At
	Distinct bool
	Items    []*Item
	From     []Source
	Where    Expr
	GroupBy  []Expr
	Having   Expr
}

// Item is one item of the SELECT list: * (Star), name.* (Star with a Qualifier), or
// an expression with or without an alias.
type Item struct {
	At
	Star      bool
	Qualifier Name
	Expr      Expr
	Alias     Name
}

// Source is what stands after FROM: *NameSource, *QuerySource, *RelationSource or *JoinSource.
type Source interface {
	Node
	source()
	// Aliasing gives the source's alias and column names, if any were given.
	Aliasing() *Aliased
}

// Aliased is the alias of a source with, where given, new names for its columns.
type Aliased struct {
	Alias   Name
	Columns []Name
}

// Aliasing makes the alias reachable without a type switch.
func (a *Aliased) Aliasing() *Aliased { return a }

// NameSource is a campaign, a table, a view or a WITH name.
type NameSource struct {
	At
	Name Name
	Aliased
}

// QuerySource is a query in parentheses.
type QuerySource struct {
	At
	Query *Query
	Aliased
}

// RelationSource is a geometric relation as a source.
type RelationSource struct {
	At
	Relation *Relation
	Aliased
}

// JoinKind is the kind of a join.
type JoinKind string

const (
	InnerJoin JoinKind = "INNER"
	LeftJoin  JoinKind = "LEFT"
	RightJoin JoinKind = "RIGHT"
	FullJoin  JoinKind = "FULL"
	CrossJoin JoinKind = "CROSS"
)

// JoinSource joins two sources ON a condition or USING columns; a cross join has
// neither. The alias is that of a join in parentheses.
type JoinSource struct {
	At
	Kind        JoinKind
	Left, Right Source
	On          Expr
	Using       []Name
	Aliased
}

func (*NameSource) source()     {}
func (*QuerySource) source()    {}
func (*RelationSource) source() {}
func (*JoinSource) source()     {}

// Relation is NOUN OF operand {clause}, or TRANSECT BETWEEN point AND point {clause},
// in which case Operand is nil and Between and And are set. Whether the noun and the
// clauses exist is not the parser's business.
type Relation struct {
	At
	Noun         Name
	Operand      Operand
	Between, And *Point
	Clauses      []Clause
}
