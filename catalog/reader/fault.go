package reader

import (
	"fmt"
	"strings"

	"nearcell/catalog/column"
)

// FaultKind is what is wrong.
type FaultKind uint8

const (
	NoFault         FaultKind = iota
	FieldCount                // Got fields where the heading has Expected
	BareQuote                 // a quotation mark inside a field, or something after a closing one
	UnclosedQuote             // a quoted field that the file's end interrupts
	NotANumber                // Want is Integer or Real
	NotATimestamp             // no ISO 8601 time stamp, or no such date
	NotABoolean               // neither true nor false
	NotFinite                 // NaN or an infinity where numbers stand
	OutOfRange                // a number that float64 cannot hold
	NotUTF8                   // bytes that are no UTF-8
	UTF16                     // the whole file is UTF-16
	EmptyFile                 // nothing but blank lines
	NoHeading                 // the line that should hold the heading is blank or beyond the end
	HeadingRepeated           // Text stands twice in the heading; Got is the field that has it first
	HeadingEmpty              // a column without a name
	NulByte                   // a byte 0, as loggers leave that lost power while writing
)

var kindNames = [...]string{"no fault", "wrong number of fields", "stray quotation mark", "quotation mark not closed",
	"not a number", "not a time stamp", "not a truth value", "not a finite number", "number out of range",
	"not UTF-8", "UTF-16", "empty file", "no heading", "heading repeated", "heading empty", "NUL byte"}

// String names the kind for tests and logs.
func (k FaultKind) String() string {
	if int(k) < len(kindNames) {
		return kindNames[k]
	}
	return "?"
}

// Fault is one thing wrong with a file, and its place.
type Fault struct {
	Line      int // from 1; 0: the file as a whole
	Column    int // from 1, in characters of that line; 0: the line as a whole
	Field     int // from 1; 0: none in particular
	FieldName string
	Kind      FaultKind
	Text      string      // the field as it stands
	Want      column.Type // the type of the column, for faults of values
	Got       int
	Expected  int
	Source    string // the line of the file that Line counts
}

// Faults is the error that a file at fault gives.
type Faults struct {
	File string
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
		fmt.Fprintf(&b, "%s:%d:%d: %s", f.File, x.Line, x.Column, x.Kind)
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
)

func (e *OptionError) Error() string {
	return fmt.Sprintf("reader: the option %s cannot be %q", e.Option, e.Rune)
}
