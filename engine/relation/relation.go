package relation

import (
	"context"
	"slices"

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
	From     int // 1 + the column of the input on which its values rest where Site does not say; 0: none
	Measures voronoi.Measures
	Costly   bool // left out of SELECT *, named there
	// Power is the column's dimension in lengths (3: a volume), from which its
	// unit is made when a query is bound.
	Power int
	// Extensive columns add up over the rows of a partition to the whole.
	Extensive bool
	// Role is set for the columns that Layout puts behind all others.
	Role Role
}

// Role tells the columns that say where a row counts from those of the relation.
type Role uint8

const (
	NoRole   Role = iota
	ZoneRole      // zone: the zone that the row's sites lie in
	PartRole      // part: the part of the solid that the row's measures count in
)

// Region is a solid under the name that rows carry for it.
type Region struct {
	Name  string
	Solid solid.Solid
}

// Over says what a relation is made of.
type Over uint8

// OverSites is the rule: rows with id, x, y, z, of which diagrams are made.
// OverRows is any rows: a log of readings, rows to rank. Then the ID, X, Y, Z of
// a Bound are -1, and nothing of the geometry is asked. OverNothing is a relation
// without an input: its clauses, and perhaps a solid, say all.
const (
	OverSites Over = iota
	OverRows
	OverNothing
)

// Definition is a registry line: a relation of the language.
type Definition struct {
	Noun     string // "CELLS"
	RowIs    string // "site"
	Over     Over
	Meaning  string
	Example  string   // a query over a campaign hall, a solid air, a table log; "": that of a clause
	Clauses  []string // "WITHIN", "UNCLIPPED", "FOR EACH", "OMITTING", …
	Later    []string // clauses of the language that it will take and does not take yet
	Own      bool     // its rows carry the sites' own columns
	Zoned    bool     // it takes zones: every diagram it asks for is that of a Part (see zones.go)
	Pairs    bool     // a row is a pair of cells, told apart by the columns a and b, and their volumes add up to the space
	Regions  bool     // it asks for what a region of MEASURED IN shares with the space as a solid of its own
	Places   bool     // it looks for places in the solid: regions of a solid without convex pieces are arranged
	Computed []Column // the columns beside the sites' own; TEXT stands for the identifier's type
	NotYet   []string // columns of the language that are not there yet
	Open     func(b *Bound, env *Env, input *column.Table, r Request) (Rows, error)

	// Guess tells how many rows a relation over rows is thought to give of so many
	// of the input, whose columns have so many different values; nil: as many.
	Guess func(b *Bound, rows float64, values func(column int) float64) float64

	layout func(b *Bound) []Column
}

// Clauses are the bound clauses of one relation in a query.
type Clauses struct {
	Solid     solid.Solid // nil: unclipped, or there are zones
	SolidName string      // as the user wrote it, for notes
	Stretch   voronoi.Vec // factors of the distances; zero: plain
	Measured  []Region    // measures count in each of these, none: in the whole
	// Shared is what each of Measured shares with the solid, or with each of the zones: a
	// part that is solid.Divided itself, the mesh.Region of any other, nil for nothing.
	// It is nil where all are Divided.
	Shared [][]solid.Solid
	// Inside is how much of all of Measured together lies in the solid, or in each of the zones.
	Inside     []float64
	Zones      []Region // each is divided among its own sites alone; none: one space for all
	Each       []int    // columns of the input named by FOR EACH
	Omitting   []string
	Because    string
	OmitPlaces []problem.Place // one for each of Omitting
	Tolerance  float64
	Duplicates string       // SPLIT, MEAN, FIRST, FAIL; "" is SPLIT
	Means      []MeanKind   // with MEAN: of each column of the input; nil: plain means
	Unit       *column.Unit // of length, nil: not known

	By  []int // columns of the input named by BY
	On  []int // the one named by ON, or none
	For []int // those named by FOR

	Uncertain []Uncertain // of readings, by UNCERTAINTY

	Weights string // of cells that touch: AREA, CONTACT or CONDUCTANCE

	Estimating
	Covering
}

// Uncertain is the standard uncertainty of the instruments behind a column of the input:
// that of each of them by itself, and that which all of them share. Columns give each
// instrument one of its own; several parts of one kind add up as squares.
type Uncertain struct {
	Column           int
	Each, Common     float64
	EachBy, CommonBy []UncertainBy
}

// UncertainBy is a column of standard uncertainties, site by site.
type UncertainBy struct {
	Column int // of the input, -1: nobody reads it any more
	Name   string
	Place  problem.Place
}

// pruned is u over an input of which column c is now to[c].
func (u Uncertain) pruned(to []int) Uncertain {
	u.Column = to[u.Column]
	for _, list := range [...]*[]UncertainBy{&u.EachBy, &u.CommonBy} {
		*list = slices.Clone(*list)
		for i := range *list {
			if by := &(*list)[i]; by.Column >= 0 {
				by.Column = to[by.Column]
			}
		}
	}
	return u
}

// Bound is a relation in a query after binding: what its rows look like.
type Bound struct {
	Def     *Definition
	Name    string // what OF names, for notes: "hall", "(query)"
	Input   column.Schema
	ID      int // column of the input that identifies a site, -1 with OverRows
	X, Y, Z int
	Beside  []Beside // what clauses such as EXPECTING name
	Other   *Bound   // the sites of AGAINST, whose rows are those of Beside[0]
	Clauses Clauses
	Log     LogClauses // of relations over a log
	Choice  ChoiceClauses
	Columns []Column
	Place   problem.Place
	System  *column.System // what places of GRID count from: its solid's; nil elsewhere
	// EachPlace is the place of the FOR EACH clause.
	EachPlace problem.Place
	// Shapes takes the cells' polyhedra; nil: they are not wanted.
	Shapes *Shapes
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

// Closed tells whether solids end the cells: one, or zones.
func (b *Bound) Closed() bool { return b.Clauses.Solid != nil || len(b.Clauses.Zones) > 0 }

// Layout fills b.Columns from b.Def, b.Input, b.ID, b.X, b.Y, b.Z and b.Clauses:
// the relation's own, and behind them those that say where a row counts.
func (b *Bound) Layout() { b.Columns = append(b.Def.layout(b), b.roles()...) }

// Beside is a further input of a relation, which a clause such as EXPECTING names.
type Beside struct {
	Name   string // as OF's, for notes
	Input  column.Schema
	Clause string // that it belongs to
}

// Reads are the columns of the input on which the rows rest, whatever is asked of
// them.
func (b *Bound) Reads() []int {
	reads := slices.Concat(b.Clauses.Each, b.Clauses.By, b.Clauses.On, b.Clauses.For, b.Log.Readings, b.Choice.Spread)
	if b.Def.Over == OverSites {
		reads = append(reads, b.ID, b.X, b.Y, b.Z)
	}
	return reads
}

// Pruned is b over an input that has only some of its columns left: column c is
// now to[c], -1 where it is gone, which no column of Reads may be.
func (b *Bound) Pruned(to []int) *Bound {
	c := *b
	if b.Def.Over == OverSites {
		c.ID, c.X, c.Y, c.Z = to[b.ID], to[b.X], to[b.Y], to[b.Z]
	}
	for _, list := range [...]*[]int{&c.Clauses.Each, &c.Clauses.By, &c.Clauses.On, &c.Clauses.For, &c.Choice.Spread} {
		*list = slices.Clone(*list)
		for i, at := range *list {
			(*list)[i] = to[at]
		}
	}
	c.Clauses.Uncertain = nil
	for _, u := range b.Clauses.Uncertain {
		if to[u.Column] >= 0 {
			c.Clauses.Uncertain = append(c.Clauses.Uncertain, u.pruned(to))
		}
	}
	c.Log.Carried = nil
	for _, at := range b.Log.Carried {
		if to[at] >= 0 {
			c.Log.Carried = append(c.Log.Carried, to[at])
		}
	}
	c.Log.Readings = slices.Clone(b.Log.Readings)
	for i, at := range c.Log.Readings {
		c.Log.Readings[i] = to[at]
	}
	c.Input = nil
	for i, t := range to {
		if t >= 0 {
			c.Input = append(c.Input, b.Input[i])
		}
	}
	c.Columns = slices.Clone(b.Columns)
	for i := range c.Columns {
		col := &c.Columns[i]
		if col.Site >= 0 {
			col.Site = to[col.Site]
		}
		if col.From > 0 {
			col.From = to[col.From-1] + 1
		}
	}
	return &c
}

// Request says what is asked for: which columns of Bound.Columns (Need), and
// which rows of the input are shown (Wanted, nil: all). It never says which
// sites partition.
type Request struct {
	Need   []bool
	Wanted []uint64
	Beside []*column.Table // the rows of Bound.Beside
	// Most is how many first rows of CELLS are wanted, 0: all. Sites that come after
	// them partition as ever.
	Most int64
	// Also are measures that other uses of the same cells in the query ask for: they are
	// computed with what is wanted here, as a cell is built once for all of them.
	Also voronoi.Measures
}

// Env is what a relation may use of the running program.
type Env struct {
	Diagrams *diagram.Store
	Notes    *note.Notes
	Threads  int
	Memory   int64 // most bytes that a tetrahedralisation may take; 0: no limit
	Progress func(done, total int)
	// Keep counts bytes that rows hold on to while they run against the limit of the
	// statement, negative ones that they give up; nil: nobody counts.
	Keep func(bytes int64) error
}

// hold counts bytes until the function that it gives is called.
func (e *Env) hold(bytes int64) (done func(), err error) {
	if e.Keep == nil {
		return func() {}, nil
	}
	if err := e.Keep(bytes); err != nil {
		return nil, err
	}
	return func() { _ = e.Keep(-bytes) }, nil
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
