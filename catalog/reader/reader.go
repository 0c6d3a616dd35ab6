package reader

import (
	"context"
	"crypto/sha256"
	"encoding/hex"

	"nearcell/catalog/column"
	"nearcell/catalog/reader/timeform"
)

// Reader reads one file format.
type Reader interface {
	// Read is ReadFiles of one file.
	Read(ctx context.Context, src *Source, o Options) (*Result, error)

	// ReadFiles makes one table of the sources, their rows one after the other. They
	// must have the same columns, in any order; types are decided over all of them.
	// Files at fault give a *Faults; other errors are an *OptionError or a
	// *ColumnError, or come from ctx or from Options.Refused.
	ReadFiles(ctx context.Context, sources []*Source, o Options) (*Result, error)
}

// Stored is what is known of a file that was unpacked to be read.
type Stored struct {
	SHA256 string
	Bytes  int64
	Form   string // "gzip", "zstd"
}

// Size is how many bytes the file has on the disk.
func (s *Source) Size() int64 {
	if s.Stored != nil {
		return s.Stored.Bytes
	}
	return int64(len(s.Data))
}

// SHA256 is the checksum of the bytes in hexadecimal.
// Of a packed file they are those on the disk.
func (s *Source) SHA256() string {
	if s.Stored != nil {
		return s.Stored.SHA256
	}
	sum := sha256.Sum256(s.Data)
	return hex.EncodeToString(sum[:])
}

// Options say how a file is to be read. The zero Options suit a comma-separated
// file with its heading in the first line.
type Options struct {
	Delimiter   rune         // 0: found among , ; tab | (without the comma where that is the decimal mark)
	DecimalMark rune         // 0: '.'
	Missing     []string     // texts that mean NULL, besides the empty field
	Heading     int          // line of the heading, from 1; 0: the first line that is not blank
	Units       []ColumnUnit // units of columns; they win over those in the heading
	TextColumns []string     // identifiers: INTEGER where every value is one and written plainly, else TEXT
	Censored    []string     // columns of measured values of which some are bounds, <0.1 or >5: TEXT
	Times       []TimeColumn // columns of times that are not written as ISO 8601 has them
	Preamble    []PreambleField
	Encoding    Encoding // "": UTF-8

	// Refused, if not nil, takes every line at fault: its number (of its first
	// line where a quoted field spans several), its bytes as in the file without
	// the line break at its end, and its first fault. Such lines are left out.
	// An error from it stops the import. Faults of the file as a whole (no
	// heading, …) are not handed over.
	Refused func(line int, raw []byte, f Fault) error

	Sheet   string // of a workbook, its name or its number from 1; "": the first that is not hidden
	Threads int    // 0: all cores
	Memory  int64  // bytes that the table may take, 0: no limit; beyond it a *MemoryError

	MaxFaults int                     // how many faults are listed; 0: 10. The others are counted.
	Progress  func(done, total int64) // bytes, may be nil
}

// ColumnUnit gives a column its unit.
type ColumnUnit struct {
	Column string
	Unit   *column.Unit
}

// TimeColumn says how the times of a column are written, and by which clock.
type TimeColumn struct {
	Column string
	Form   *timeform.Form
	Zone   *timeform.Zone // nil: UTC, and not said
}

// PreambleField makes a column of what stands behind a text in the lines before
// the heading, the same in every row of a file.
type PreambleField struct {
	Column, After string
}

// Result is what became of files.
type Result struct {
	Table *column.Table
	Facts Facts       // of all of them
	Files []FileFacts // of each, in their order
}

// FileFacts are what is known of one file among several.
type FileFacts struct {
	Name    string
	SHA256  string // hexadecimal
	Bytes   int64
	Rows    int
	Refused int

	Heading     string // the bytes of its record
	HeadingLine int
	Delimiter   rune
	UnitsLine   int  // the line under the heading that gives units; 0: none
	CRLF        bool // the heading ends with CR LF

	Undivided                                         bool // one column, and most of its values look like several
	NumericHeading, TrailingDelimiter, TrailingFields bool // as in Facts
}

// Facts are what a user may have to be told about the reading of files. Counts
// are sums over them; what is true of a file is true here if it is of any.
type Facts struct {
	Rows    int   // of the table
	Bytes   int64 // of the files
	Lines   int   // of the files, as an editor counts them
	Blank   int   // blank lines, skipped
	Refused int   // records handed to Options.Refused

	Delimiter rune   // the one used, found or given; of the first file
	BOM       bool   // a file begins with a byte order mark
	CRLF      bool   // the heading ends with CR LF
	SHA256    string // of the first file, hexadecimal

	Missing           []int           // NULLs of each column, in the order of the table
	AllMissing        []string        // columns without any value; REAL, or TEXT if among Options.TextColumns
	NaiveTimes        []string        // TIMESTAMP columns with values that name no zone, taken as UTC
	StayedText        []StayedText    // TEXT columns that look like something else
	NumericHeading    bool            // every heading is a number: perhaps the file has none
	TrailingDelimiter bool            // the heading ends with a delimiter; that empty column was dropped
	TrailingFields    bool            // every record ends with empty fields that the heading has not; they were dropped
	UnitsRow          []UnitOfRow     // what a line of units under the heading says, of the first file with one
	Repeated          []RepeatedHour  // local times that a clock change repeats, decided by the order of the rows
	UnknownUnits      []string        // columns of Options.Units that the file has not
	UnknownText       []string        // columns of Options.TextColumns that the file has not
	UnitConflicts     []UnitsConflict // the heading says one unit, Options.Units another

	Columns []ColumnNote // of formats that have more to tell of their columns
	Format  string       // "LAS 1.4, point format 6"; "" where the name of the file tells
	Sheet   string       // the one that was read
	Sheets  []string     // the others that are not hidden, where Options.Sheet names none
	Hidden  int          // how many are hidden
	Unread  int          // PLY: faces passed over; LAS: points that the file has behind those it counts
}

// ColumnNote is what became of a column, or of some of its values.
type ColumnNote struct {
	Column string
	Kind   NoteKind
	Count  int    // of values
	Detail string // as the kind says
}

// NoteKind says what a ColumnNote tells.
type NoteKind uint8

const (
	NotRead       NoteKind = iota + 1 // the column is left out; Detail is its type
	Inexact                           // decimals that a REAL holds rounded; Detail is the first
	NaNMissing                        // NaN was read as NULL
	TimesRounded                      // time stamps were rounded to microseconds; Detail is the unit
	KeyMissing                        // objects without this key: NULL
	ErrorCells                        // cells with an error, such as #N/A, read as NULL; Detail is the first place and the error
	FormulaCells                      // formulas without a value, read as NULL; Detail is the first place
	MergedCells                       // cells covered by a merged one: NULL; Detail is the first range
	NoDataMissing                     // values that the file itself declares to be none: NULL
)

// StayedText tells why a column that looks like numbers is TEXT.
type StayedText struct {
	Column     string
	Reason     TextReason
	NotNumeric int    // MixedValues: how many present values are no numbers
	FirstLine  int    // where the first value that decided it stands
	FirstText  string // and what it is
	File       string // and in which file

	Pattern, Other string // LooksLikeTime: a pattern that fits, and one that fits too and reads other dates
}

// UnitOfRow is what a line of units says of a column.
type UnitOfRow struct {
	Column, Text string
	Unit         *column.Unit // nil: not taken as a unit, since the column holds no numbers
}

// RepeatedHour tells of the rows whose local time a clock change repeats.
type RepeatedHour struct {
	Column, File string
	Rows         int
	FirstLine    int
	By           string // the column that tells sequences of rows apart; "": the file is one
}

// TextReason is why a column stayed TEXT.
type TextReason uint8

const (
	MixedValues   TextReason = iota // more than half, but not nearly all, are numbers
	LeadingZeros                    // codes such as 007, which a number would not keep
	TooLong                         // whole numbers beyond 64 bits, whose digits a REAL would not keep
	OtherMark                       // more than half would be numbers with the other decimal mark
	LooksLikeTime                   // more than half are times by one pattern
	Thousands                       // more than half would be numbers without the marks between thousands
)

// UnitsConflict is a column whose heading and whose option disagree.
type UnitsConflict struct {
	Column        string
	Heading, Said *column.Unit
}
