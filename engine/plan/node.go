package plan

import (
	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/voronoi"
)

// Node is a step of a plan. Schema lists the columns that it gives; the
// expressions of a node refer by index to the columns of its input (for a Join:
// the left columns, then the right ones).
type Node interface {
	Schema() column.Schema
	Inputs() []Node
}

// One is a single row without columns: the input of a SELECT without FROM.
type One struct{}

// Values is a list of constant rows.
type Values struct {
	Fields column.Schema
	Rows   [][]expr.Expr // evaluated against One
}

// Scan reads columns of a stored table or campaign. Use lists the columns that
// are needed, as indices into Table.Schema; Fields are those columns.
type Scan struct {
	Name   string
	Kind   string // "campaign" or "table"
	Table  *column.Table
	Use    []int
	Fields column.Schema
}

// Relation is a geometric relation over the sites that Input gives. Its Schema
// is relation.Bound.Columns(); Need says which of them are asked for (the others
// come out as NULL and must not be read), Wanted, where not nil, is a condition
// over the columns of Input that says which rows are shown. It never says which
// sites partition. Beside are further inputs that clauses name (EXPECTING).
type Relation struct {
	Bound  *relation.Bound
	Input  Node
	Beside []Node // the rows of Bound.Beside
	Need   []bool
	Wanted expr.Expr
	Most   int64            // first rows of CELLS that a LIMIT takes, 0: all
	Also   voronoi.Measures // asked for by other uses of the same cells
	Place  problem.Place
}

// Filter keeps the rows for which Cond is TRUE. Clause is "WHERE", "HAVING", "ON".
type Filter struct {
	Input  Node
	Cond   expr.Expr
	Clause string
}

// Project computes expressions.
type Project struct {
	Input  Node
	Exprs  []expr.Expr
	Fields column.Schema
}

// Aggregate groups by Keys (none: one group, also of no rows) and computes
// Calls. Its columns are the keys, then the calls.
type Aggregate struct {
	Input  Node
	Keys   []expr.Expr
	Calls  []Call
	Fields column.Schema
}

// Call is one aggregate of an Aggregate.
type Call struct {
	Fn       *function.Aggregate
	Args     []expr.Expr // COUNT(*) has none
	Distinct bool
	Filter   expr.Expr // nil: all rows
	Weight   expr.Expr // nil: each row counts once
	OrderBy  []SortKey // FIRST(x ORDER BY t)
	Place    problem.Place
	Text     string // as a heading and in notes: AVG(temp) WEIGHTED BY volume
}

// JoinKind is the kind of a join.
type JoinKind uint8

// The joins there are; a cross join is an inner one without any condition. Semi
// gives the left rows that have a match, once each, and Anti those that have none:
// their columns are the left ones alone. RIGHT and FULL joins are made of these.
const (
	Inner JoinKind = iota
	Left
	Semi
	Anti
)

// Join matches rows: where there are key pairs by hash, else by a nested loop.
// LeftKeys refer to the columns of Left, RightKeys to those of Right, Rest to
// both. NULL keys match nothing. Near bounds the pairs of a nested loop.
//
// Guarded keys can fail: as soon as one of them does, the rows that it was computed
// with are paired one by one by the condition Whole (nil: all pairs match), as if there
// were no keys, and fail or not as they do there.
type Join struct {
	Kind                JoinKind
	Left, Right         Node
	LeftKeys, RightKeys []expr.Expr
	Rest                expr.Expr
	Near                *Near // of a nested loop, nil: every pair is looked at
	Guarded             bool
	Whole               expr.Expr
}

// SortKey is one key of ORDER BY. NULLs sort last unless said.
type SortKey struct {
	Expr       expr.Expr
	Descending bool
	NullsFirst bool
}

// Sort orders the rows; rows with equal keys keep their order. Top > 0: only so
// many first rows are wanted.
type Sort struct {
	Input Node
	Keys  []SortKey
	Top   int64
}

// Limit passes Count rows after the first Offset ones. Count < 0: no limit.
type Limit struct {
	Input         Node
	Count, Offset int64
}

// Distinct keeps the first of equal rows; NULLs count as equal.
type Distinct struct {
	Input Node
}

// Union puts the rows of one input after those of another (UNION ALL); the
// columns have equal types.
type Union struct {
	Parts  []Node
	Fields column.Schema
}

// MatchedKind is the kind of a Matched.
type MatchedKind uint8

// The set operations beside UNION.
const (
	Intersect MatchedKind = iota
	Except
)

// Matched is INTERSECT or EXCEPT: of the left rows those that stand, or do not
// stand, on the right side, too; NULLs count as equal, the columns have equal
// types. Without All equal rows are one; with it a row that stands m times left and
// n times right comes min(m, n) or max(m - n, 0) times. The rows come in the order
// of the left side; where some of equal ones are left out, it is the last ones of
// an Intersect and the first ones of an Except.
type Matched struct {
	Kind        MatchedKind
	All         bool
	Left, Right Node
}

// Number is its input with one more column behind: the number of each row, from 0.
type Number struct {
	Input Node
	Field column.Field
}

// Common is a part of a plan that is computed once, however often it is used.
type Common struct {
	Name string // of WITH, else what it is for
	Plan Node
}

// Shared is one use of a common part: a leaf whose rows are those of its plan.
type Shared struct {
	Common *Common
	Fields column.Schema
}

// Lookup is the rows of a common part for which Keys (over its columns) equal
// Values (which read no column), found by hash; in the order of the part. Where a
// value cannot be computed it is all rows.
type Lookup struct {
	Common *Common
	Fields column.Schema
	Keys   []expr.Expr
	Values []expr.Expr
}
