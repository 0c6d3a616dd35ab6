package lang

// Reading is one clause of CREATE CAMPAIGN or CREATE TABLE after its source; each
// kind stands at most once, in any order. *WithinClause and *StretchedClause are
// readings too.
type Reading interface {
	Node
	reading()
}

// IDReading is ID name.
type IDReading struct {
	At
	Name Name
}

// PositionReading is POSITION (x, y, z) [GEOGRAPHIC [ORIGIN (latitude, longitude)] | IN
// FRAME name].
type PositionReading struct {
	At
	X, Y, Z    Expr
	Geographic bool
	Latitude   Expr // of ORIGIN; nil without it
	Longitude  Expr
	Frame      Name
}

// UnitsReading is UNITS (name 'unit', …).
type UnitsReading struct {
	At
	Units []*ColumnUnit
}

// ColumnUnit is one column's unit.
type ColumnUnit struct {
	At
	Column Name
	Unit   *Text
}

// CoordinatesReading is COORDINATES IN unit, the unit as a word or as a text;
// exactly one of Word and Text is set.
type CoordinatesReading struct {
	At
	Word Name
	Text *Text
}

// DuplicatesPolicy says what becomes of sites at one place.
type DuplicatesPolicy string

const (
	DuplicatesSplit DuplicatesPolicy = "SPLIT"
	DuplicatesMean  DuplicatesPolicy = "MEAN"
	DuplicatesFirst DuplicatesPolicy = "FIRST"
	DuplicatesFail  DuplicatesPolicy = "FAIL"
)

// DuplicatesReading is DUPLICATES SPLIT, MEAN, FIRST or FAIL.
type DuplicatesReading struct {
	At
	Policy DuplicatesPolicy
}

// ToleranceReading is TOLERANCE v.
type ToleranceReading struct {
	At
	Value Expr
}

// DelimiterReading is DELIMITER ';'.
type DelimiterReading struct {
	At
	Text *Text
}

// DecimalMarkReading is DECIMAL MARK ','.
type DecimalMarkReading struct {
	At
	Text *Text
}

// MissingReading is MISSING 'n/a', or MISSING ('n/a', '-').
type MissingReading struct {
	At
	Marks []*Text
}

// RefusedReading is REFUSED TO 'file'.
type RefusedReading struct {
	At
	File *Text
}

// HeadingReading is HEADING AT LINE v.
type HeadingReading struct {
	At
	Line Expr
}

// SheetReading is SHEET 'name'.
type SheetReading struct {
	At
	Text *Text
}

// EncodingReading is ENCODING 'name'.
type EncodingReading struct {
	At
	Text *Text
}

// TimeReading is TIME (name 'form' [ZONE 'zone'], …).
type TimeReading struct {
	At
	Columns []*TimeColumn
}

// TimeColumn is one column of a TimeReading; Zone is nil when not given.
type TimeColumn struct {
	At
	Column Name
	Form   *Text
	Zone   *Text
}

// PreambleReading is PREAMBLE (name AFTER 'text', …).
type PreambleReading struct {
	At
	Fields []*PreambleField
}

// PreambleField is one field of a PreambleReading.
type PreambleField struct {
	At
	Column Name
	After  *Text
}

// CensoredReading is CENSORED (name, …).
type CensoredReading struct {
	At
	Columns []Name
}

// UnpivotReading is UNPIVOT (value FOR label IN (a, b, c)).
type UnpivotReading struct {
	At
	Value, Label Name
	Columns      []Name
}

func (*WithinClause) reading()       {}
func (*StretchedClause) reading()    {}
func (*IDReading) reading()          {}
func (*PositionReading) reading()    {}
func (*UnitsReading) reading()       {}
func (*CoordinatesReading) reading() {}
func (*DuplicatesReading) reading()  {}
func (*ToleranceReading) reading()   {}
func (*DelimiterReading) reading()   {}
func (*DecimalMarkReading) reading() {}
func (*MissingReading) reading()     {}
func (*RefusedReading) reading()     {}
func (*HeadingReading) reading()     {}
func (*SheetReading) reading()       {}
func (*EncodingReading) reading()    {}
func (*TimeReading) reading()        {}
func (*PreambleReading) reading()    {}
func (*CensoredReading) reading()    {}
func (*UnpivotReading) reading()     {}
