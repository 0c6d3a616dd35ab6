package present

import (
	"fmt"
	"io"

	"nearcell/catalog/column"
)

// Format is how a result is written.
type Format string

// The formats that are there.
const (
	AsTable     Format = "table"
	AsCSV       Format = "csv"
	AsJSON      Format = "json"
	AsJSONLines Format = "jsonl"
	AsParquet   Format = "parquet" // for files only
	AsXLSX      Format = "xlsx"    // for files only
	// AsHTML is a report of all results, which package report makes: New has no
	// writer for it.
	AsHTML Format = "html"
)

// Formats lists the formats of the standard output, for usage messages.
var Formats = []Format{AsTable, AsCSV, AsJSON, AsJSONLines, AsHTML}

// Writer takes one result: Begin once, Batch for each run of rows (only active
// rows count), End once.
type Writer interface {
	Begin(column.Schema) error
	Batch(*column.Batch) error
	// End writes what is left and tells how many rows there were and how many
	// of them were not written.
	End() (rows, unwritten int64, err error)
}

// RepeatedColumnError says that the format tells columns apart by their names, and
// two of them have the same.
type RepeatedColumnError struct{ Name string }

func (e *RepeatedColumnError) Error() string { return "two columns are called " + e.Name }

// Options are the choices of all writers.
type Options struct {
	Digits   int  // significant digits of a table, 0: 6
	Units    bool // CSV, XLSX: units in the heading, volume [m^3]
	Formulas bool // CSV: texts that a spreadsheet would run as formulas are quoted
	Width    int  // table: characters of a line, 0: no limit
	Rows     int  // table: rows that are printed at most, 0: MaxTableRows
}

// Fitted is a writer that leaves columns out where they do not fit.
type Fitted interface {
	// LeftOut are the names of the columns that End has left out.
	LeftOut() []string
}

// New is a writer of the format.
func New(f Format, w io.Writer, o Options) (Writer, error) {
	switch f {
	case AsTable:
		if o.Digits == 0 {
			o.Digits = DefaultDigits
		}
		return &tableWriter{w: w, o: o}, nil
	case AsCSV:
		return newCSV(w, o), nil
	case AsJSON:
		return &jsonWriter{w: w, array: true}, nil
	case AsJSONLines:
		return &jsonWriter{w: w}, nil
	case AsParquet:
		return &parquetWriter{w: w}, nil
	case AsXLSX:
		return newXLSX(w, o), nil
	}
	return nil, fmt.Errorf("no writer for the format %q", f)
}

// eachRow calls f for the active rows of a batch.
func eachRow(b *column.Batch, f func(row int) error) error {
	for i := 0; i < b.N; i++ {
		if b.On != nil && !column.Bit(b.On, i) {
			continue
		}
		if err := f(i); err != nil {
			return err
		}
	}
	return nil
}
