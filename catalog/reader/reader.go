package reader

import (
	"context"
	"crypto/sha256"
	"encoding/hex"
	"os"
	"time"

	"nearcell/catalog/column"
)

// Reader reads one file format.
type Reader interface {
	// Read makes a table of the source. A file that is at fault gives a
	// *Faults; any other error comes from ctx or from Options.Refused.
	Read(ctx context.Context, src *Source, o Options) (*Result, error)
}

// Source is a file in memory.
type Source struct {
	Name    string // as the user wrote it; faults carry it
	Data    []byte
	ModTime time.Time // zero where there is none
}

// Open reads a file. name is what faults will call it, path where it is.
func Open(name, path string) (*Source, error) {
	info, err := os.Stat(path)
	if err != nil {
		return nil, err
	}
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, err
	}
	return &Source{Name: name, Data: data, ModTime: info.ModTime()}, nil
}

// SHA256 is the checksum of the bytes in hexadecimal.
func (s *Source) SHA256() string {
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

	// Refused, if not nil, takes every line at fault: its number (of its first
	// line where a quoted field spans several), its bytes as in the file without
	// the line break at its end, and its first fault. Such lines are left out.
	// An error from it stops the import. Faults of the file as a whole (no
	// heading, …) are not handed over.
	Refused func(line int, raw []byte, f Fault) error

	MaxFaults int                     // how many faults are listed; 0: 10. The others are counted.
	Progress  func(done, total int64) // bytes, may be nil
}

// ColumnUnit gives a column its unit.
type ColumnUnit struct {
	Column string
	Unit   *column.Unit
}

// Result is what became of a file.
type Result struct {
	Table *column.Table
	Facts Facts
}

// Facts are what a user may have to be told about the reading of a file.
type Facts struct {
	Rows    int   // of the table
	Bytes   int64 // of the file
	Lines   int   // of the file, as an editor counts them
	Blank   int   // blank lines, skipped
	Refused int   // records handed to Options.Refused

	Delimiter rune   // the one used, found or given
	BOM       bool   // the file begins with a byte order mark
	CRLF      bool   // its lines end with CR LF
	SHA256    string // of the file, hexadecimal

	Missing           []int           // NULLs of each column, in the order of the table
	AllMissing        []string        // columns without any value; REAL, or TEXT if among Options.TextColumns
	NaiveTimes        []string        // TIMESTAMP columns with values that name no zone, taken as UTC
	StayedText        []StayedText    // TEXT columns that look like something else
	NumericHeading    bool            // every heading is a number: perhaps the file has none
	TrailingDelimiter bool            // the heading ends with a delimiter; that empty column was dropped
	UnknownUnits      []string        // columns of Options.Units that the file has not
	UnknownText       []string        // columns of Options.TextColumns that the file has not
	UnitConflicts     []UnitsConflict // the heading says one unit, Options.Units another
}

// StayedText tells why a column that looks like numbers is TEXT.
type StayedText struct {
	Column     string
	Reason     TextReason
	NotNumeric int    // MixedValues: how many present values are no numbers
	FirstLine  int    // where the first value that decided it stands
	FirstText  string // and what it is
}

// TextReason is why a column stayed TEXT.
type TextReason uint8

const (
	MixedValues  TextReason = iota // more than half, but not nearly all, are numbers
	LeadingZeros                   // codes such as 007, which a number would not keep
	TooLong                        // whole numbers beyond 64 bits, whose digits a REAL would not keep
	OtherMark                      // more than half would be numbers with the other decimal mark
)

// UnitsConflict is a column whose heading and whose option disagree.
type UnitsConflict struct {
	Column        string
	Heading, Said *column.Unit
}
