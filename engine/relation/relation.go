package relation

import (
	"context"

	"nearcell/catalog/column"
	"nearcell/engine/diagram"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/voronoi"
	"nearcell/voronoi/solid"
)

// Column is a column of a relation. Where Site >= 0 its value in a row is that
// of column Site of the input in the row's site (for CONTACTS: of the cell a),
// so that a condition over such columns alone says which sites are shown.
// Computed columns have Site -1; Measures says what the geometry must compute
// for them (0: nothing beyond the partition itself).
type Column struct {
	column.Field
	Site     int
	Measures voronoi.Measures
	Costly   bool // left out of SELECT *, named there
	// Power is the column's dimension in lengths (3: a volume), from which its
	// unit is made when a query is bound.
	Power int
	// Extensive columns add up over the rows of a partition to the whole.
	Extensive bool
}

// Definition is a registry line: a relation of the language.
type Definition struct {
	Noun     string // "CELLS"
	RowIs    string // "site"
	Meaning  string
	Clauses  []string // "WITHIN", "UNCLIPPED", "FOR EACH", "OMITTING", …
	Later    []string // clauses of the language that it will take and does not take yet
	Own      bool     // its rows carry the sites' own columns
	Computed []Column // the columns beside the sites' own; TEXT stands for the identifier's type
	NotYet   []string // columns of the language that are not there yet
	Open     func(b *Bound, env *Env, input *column.Table, r Request) (Rows, error)

	layout func(b *Bound) []Column
}

// Clauses are the bound clauses of one relation in a query.
type Clauses struct {
	Solid      solid.Solid // nil: unclipped
	SolidName  string      // as the user wrote it, for notes
	Each       []int       // columns of the input named by FOR EACH
	Omitting   []string
	Because    string
	OmitPlaces []problem.Place // one for each of Omitting
	Tolerance  float64
	Duplicates string       // SPLIT, MEAN, FIRST, FAIL; "" is SPLIT
	Unit       *column.Unit // of length, nil: not known
}

// Bound is a relation in a query after binding: what its rows look like.
type Bound struct {
	Def     *Definition
	Name    string // what OF names, for notes: "hall", "(query)"
	Input   column.Schema
	ID      int // column of the input that identifies a site
	X, Y, Z int
	Clauses Clauses
	Columns []Column
	Place   problem.Place
	// EachPlace is the place of the FOR EACH clause.
	EachPlace problem.Place
}

// Schema is the fields of the bound columns.
func (b *Bound) Schema() column.Schema {
	s := make(column.Schema, len(b.Columns))
	for i, c := range b.Columns {
		s[i] = c.Field
	}
	return s
}

// Title names the relation for messages: "CELLS OF hall".
func (b *Bound) Title() string { return b.Def.Noun + " OF " + b.Name }

// Layout fills b.Columns from b.Def, b.Input, b.ID, b.X, b.Y, b.Z and b.Clauses.
func (b *Bound) Layout() { b.Columns = b.Def.layout(b) }

// Request says what is asked for: which columns of Bound.Columns (Need), and
// which rows of the input are shown (Wanted, nil: all). It never says which
// sites partition.
type Request struct {
	Need   []bool
	Wanted []uint64
}

// Env is what a relation may use of the running program.
type Env struct {
	Diagrams *diagram.Store
	Notes    *note.Notes
	Threads  int
	Progress func(done, total int)
}

// Rows are the rows of one relation.
type Rows interface {
	// Cost estimates the geometry that Run will do; it builds no diagram that
	// Run does not need.
	Cost() (voronoi.Cost, error)
	// Run emits the rows in their fixed order, in batches of at most
	// BatchRows; columns that are not needed are vectors of NULL. A batch is
	// valid until emit returns; batches may share dictionaries with the input.
	Run(ctx context.Context, emit func(*column.Batch) error) error
}

// BatchRows is the number of rows of a full batch, a multiple of 64.
const BatchRows = 2048
