package reader

import (
	"fmt"
	"strings"

	"nearcell/catalog/column"
)

// FaultKind is what is wrong.
type FaultKind uint8

const (
	NoFault          FaultKind = iota
	FieldCount                 // Got fields where the heading has Expected
	BareQuote                  // a quotation mark inside a field, or something after a closing one
	UnclosedQuote              // a quoted field that the file's end interrupts
	NotANumber                 // Want is Integer or Real
	NotATimestamp              // no ISO 8601 time stamp, or no such date
	NotABoolean                // neither true nor false
	NotFinite                  // NaN or an infinity where numbers stand
	OutOfRange                 // a number that float64 cannot hold
	NotUTF8                    // bytes that are no UTF-8
	UTF16                      // the whole file is UTF-16
	EmptyFile                  // nothing but blank lines
	NoHeading                  // the line that should hold the heading is blank or beyond the end
	HeadingRepeated            // Text stands twice in the heading; Got is the field that has it first
	HeadingEmpty               // a column without a name
	NulByte                    // a byte 0, as loggers leave that lost power while writing
	NotThisTime                // Text does not have the pattern Detail
	NoSuchTime                 // Text has the pattern Detail and there is no such date or time of day
	SkippedTime                // the clock change of the zone Detail skips this local time
	RepeatedTime               // it repeats it, and the order of the rows does not tell which one it is
	NoPreamble                 // Text does not stand in the lines before the heading
	PreambleRepeated           // Text stands there twice
	ColumnTaken                // Text names a column of the file and one of Options.Preamble
	ColumnMissing              // the column Text of the file Detail is not in this one
	ColumnAdded                // the column Text is not in the file Detail
	UnitsDiffer                // the column FieldName has the unit Text here and Detail in the first file
	NotInEncoding              // bytes that the encoding Detail does not have

	NotTheFormat  // the bytes are no file of the format Detail
	CutShort      // the file ends within Text: Got of Expected bytes, where these are known
	Damaged       // Text, a part of the file, cannot be read; Detail is the technical reason
	TooLarge      // Text would take more than Expected
	NotSupported  // Text is a part of the format Detail that is not read
	NothingToRead // no column of the file can be read; Detail is the type of the first
	BeyondInteger // Text is a whole number beyond 64 bits
	NoSheet       // there is no sheet Text; Detail lists those there are
	NoRows        // the sheet Text has no cell with a value
	NotJSON       // Text stands where Want should: Detail
	KeyRepeated   // the key Text stands twice in one object
	NotObject     // the record is no object
	OtherKind     // Text is of another kind than most values of the column, of the kind Detail
	NestedList    // a list within the object, key FieldName
	TypesDiffer   // the column FieldName has the type Text here and Detail in the files before
)

var kindNames = [...]string{"no fault", "wrong number of fields", "stray quotation mark", "quotation mark not closed",
	"not a number", "not a time stamp", "not a truth value", "not a finite number", "number out of range",
	"not UTF-8", "UTF-16", "empty file", "no heading", "heading repeated", "heading empty", "NUL byte",
	"not of the pattern", "no such time", "skipped time", "repeated time", "not in the preamble", "repeated in the preamble",
	"column taken", "column missing", "column added", "units differ", "not of the encoding",
	"not of the format", "cut short", "damaged", "too large", "not supported", "nothing to read", "beyond 64 bits", "no sheet", "no rows",
	"not JSON", "key repeated", "no object", "of another kind", "a list", "types differ"}

// String names the kind for tests and logs.
func (k FaultKind) String() string {
	if int(k) < len(kindNames) {
		return kindNames[k]
	}
	return "?"
}

// Fault is one thing wrong with a file, and its place.
type Fault struct {
	File      string // its name
	Line      int    // from 1; 0: the file as a whole
	Column    int    // from 1, in characters of that line; 0: the line as a whole
	Field     int    // from 1; 0: none in particular
	FieldName string
	Kind      FaultKind
	Text      string      // the field as it stands
	Want      column.Type // the type of the column, for faults of values
	Got       int
	Expected  int
	Source    string // the line of the file that Line counts
	Detail    string // as the kind says

	Cell   string // of a sheet: Data!B7
	Record int64  // of a binary file, from 1; 0: the file as a whole
}

// Faults is the error that files at fault give.
type Faults struct {
	File string  // the first
	List []Fault // in the order of the file
	More int     // how many faults are not listed
}

// Error is a plain technical text; users are told in other words.
func (f *Faults) Error() string {
	var b strings.Builder
	for i, x := range f.List {
		if i > 0 {
			b.WriteByte('\n')
		}
		name := x.File
		if name == "" {
			name = f.File
		}
		fmt.Fprintf(&b, "%s:%d:%d: %s", name, x.Line, x.Column, x.Kind)
		if x.Kind == FieldCount {
			fmt.Fprintf(&b, " (%d, expected %d)", x.Got, x.Expected)
		}
		if x.Text != "" {
			fmt.Fprintf(&b, " %q", x.Text)
		}
		if x.FieldName != "" {
			fmt.Fprintf(&b, " in %s", x.FieldName)
		}
	}
	if f.More > 0 {
		fmt.Fprintf(&b, "\nand %d more", f.More)
	}
	return b.String()
}

// OptionError says that an option has a value that it cannot have.
type OptionError struct {
	Option OptionName
	Rune   rune // for the marks
}

// OptionName names an option of Options.
type OptionName string

const (
	OptionDelimiter   OptionName = "Delimiter"
	OptionDecimalMark OptionName = "DecimalMark"
	OptionHeading     OptionName = "Heading"
	OptionEncoding    OptionName = "Encoding"
)

func (e *OptionError) Error() string {
	return fmt.Sprintf("reader: the option %s cannot be %q", e.Option, e.Rune)
}

// MemoryError says that a table takes more than Options.Memory.
type MemoryError struct {
	Need, Limit int64 // Need: at least
	Rows        int
}

func (e *MemoryError) Error() string {
	return fmt.Sprintf("reader: %d rows take at least %d bytes, more than %d", e.Rows, e.Need, e.Limit)
}

// ColumnError says that an option names a column that the file has not.
type ColumnError struct {
	Column string
	Have   []string
}

func (e *ColumnError) Error() string { return fmt.Sprintf("reader: there is no column %q", e.Column) }
