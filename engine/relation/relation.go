// Package relation has one file for each geometric relation: its columns, its
// clauses, its cost and its rows; and the one idea behind FOR EACH, zones and
// duplicates: rows of the input that share one diagram.
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

// Column is a column of a relation: one of the sites' own (Site is its index
// in the input) or one that the relation computes (Site is -1 and Measures says
// what the geometry must compute for it).
type Column struct {
	column.Field
	Site     int
	Measures voronoi.Measures
	Costly   bool // left out of SELECT *, named there
}

// Definition is a registry line: a relation of the language.
type Definition struct {
	Noun     string // "CELLS"
	RowIs    string // "site"
	Meaning  string
	Clauses  []string // "WITHIN", "UNCLIPPED", "FOR EACH", "OMITTING", …
	Computed []Column // the columns beside the sites' own
	Open     func(b *Bound, env *Env, input *column.Table, r Request) (Rows, error)
}

// Clauses are the bound clauses of one relation in a query.
type Clauses struct {
	Solid      solid.Solid // nil: unclipped
	SolidName  string      // as the user wrote it, for notes
	Each       []int       // columns of the input named by FOR EACH
	Omitting   []string
	Because    string
	Tolerance  float64
	Duplicates string // SPLIT, MEAN, FIRST, FAIL
	Unit       string // of length
}

// Bound is a relation in a query after binding: what its rows look like.
type Bound struct {
	Def     *Definition
	Name    string // what OF names, for notes: "hall"
	Input   column.Schema
	ID      int // column of the input that identifies a site
	X, Y, Z int
	Clauses Clauses
	Columns []Column
	Place   problem.Place
}

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
	Cost() voronoi.Cost
	// Run emits the rows in their fixed order, in batches of at most
	// BatchRows; columns that are not needed are vectors of NULL.
	Run(ctx context.Context, emit func(*column.Batch) error) error
}

// BatchRows is the number of rows of a full batch, a multiple of 64.
const BatchRows = 2048
