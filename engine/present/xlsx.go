package present

import (
	"errors"
	"fmt"
	"io"
	"math"
	"time"

	"github.com/xuri/excelize/v2"

	"nearcell/catalog/column"
)

// What a sheet of Office Open XML (ISO/IEC 29500) holds, as spreadsheets read it.
const (
	sheetRows    = 1_048_576
	sheetColumns = 16_384
	sheetText    = 32_767 // characters of a cell
	exactWhole   = 1 << 53
)

// ErrSheetFull says that a result is larger than a sheet can be.
var ErrSheetFull = errors.New("larger than a sheet of a spreadsheet can be")

// firstSheetDay is where the day numbers of sheets are the same in all programs:
// before it some count a 29 February 1900 that never was.
var firstSheetDay = time.Date(1900, time.March, 1, 0, 0, 0, 0, time.UTC)

// xlsxWriter writes one sheet: a heading, which stays in sight, and the rows.
// Numbers are numbers, with all their digits; a TIMESTAMP is a date of the sheet
// (to the millisecond, which is all that the format's readers keep) and an
// INTERVAL a duration; NULL is an empty cell. What a sheet cannot hold as a
// number is written as a text: infinities, whole numbers beyond 2^53, dates before
// March 1900, negative durations. Texts are texts, never formulas.
type xlsxWriter struct {
	w     io.Writer
	o     Options
	file  *excelize.File
	out   *excelize.StreamWriter
	cells []any
	rows  int64

	date, duration int // styles
}

func newXLSX(w io.Writer, o Options) *xlsxWriter { return &xlsxWriter{w: w, o: o} }

func (x *xlsxWriter) Begin(s column.Schema) (err error) {
	if len(s) > sheetColumns {
		return fmt.Errorf("%d columns: %w", len(s), ErrSheetFull)
	}
	x.file = excelize.NewFile()
	const sheet = "rows"
	if err := x.file.SetSheetName("Sheet1", sheet); err != nil {
		return err
	}
	if x.out, err = x.file.NewStreamWriter(sheet); err != nil {
		return err
	}
	dateForm, durationForm := "yyyy-mm-dd hh:mm:ss", "[h]:mm:ss"
	if x.date, err = x.file.NewStyle(&excelize.Style{CustomNumFmt: &dateForm}); err != nil {
		return err
	}
	if x.duration, err = x.file.NewStyle(&excelize.Style{CustomNumFmt: &durationForm}); err != nil {
		return err
	}
	bold, err := x.file.NewStyle(&excelize.Style{Font: &excelize.Font{Bold: true}})
	if err != nil {
		return err
	}
	if err := x.out.SetPanes(&excelize.Panes{Freeze: true, YSplit: 1, TopLeftCell: "A2", ActivePane: "bottomLeft"}); err != nil {
		return err
	}
	for i, f := range s {
		if f.Type == column.Timestamp {
			if err := x.out.SetColWidth(i+1, i+1, 20); err != nil {
				return err
			}
		}
		name := f.Name
		if unit := f.Unit.ASCII(); x.o.Units && unit != "" {
			name += " [" + unit + "]"
		}
		x.cells = append(x.cells, excelize.Cell{StyleID: bold, Value: name})
	}
	return x.out.SetRow("A1", x.cells)
}

func (x *xlsxWriter) Batch(b *column.Batch) error {
	return eachRow(b, func(row int) error {
		x.rows++
		if x.rows+1 > sheetRows {
			return fmt.Errorf("more than %d rows: %w", sheetRows-1, ErrSheetFull)
		}
		for i := range b.Cols {
			value, err := x.cell(&b.Cols[i], row)
			if err != nil {
				return err
			}
			x.cells[i] = value
		}
		return x.out.SetRow(fmt.Sprintf("A%d", x.rows+1), x.cells)
	})
}

func (x *xlsxWriter) cell(v *column.Vector, row int) (any, error) {
	if v.IsNull(row) {
		return nil, nil
	}
	switch v.Type {
	case column.Boolean:
		return column.Bit(v.Bits, row), nil
	case column.Integer:
		if n := v.I[row]; n >= -exactWhole && n <= exactWhole {
			return n, nil
		}
	case column.Real:
		if f := v.F[row]; !math.IsInf(f, 0) {
			return f, nil
		}
	case column.Timestamp:
		if at := time.UnixMicro(v.I[row]).UTC(); !at.Before(firstSheetDay) {
			return excelize.Cell{StyleID: x.date, Value: sheetDay(at)}, nil
		}
	case column.Interval:
		if us := v.I[row]; us >= 0 {
			return excelize.Cell{StyleID: x.duration, Value: float64(us) / 86_400e6}, nil
		}
	}
	text := Exact(v, row)
	if v.Type == column.Text {
		text = v.Text(row)
	}
	if n := len([]rune(text)); n > sheetText {
		return nil, fmt.Errorf("a text of %d characters: %w", n, ErrSheetFull)
	}
	return text, nil
}

// sheetDay is the number of an instant: days since 30 December 1899.
func sheetDay(at time.Time) float64 {
	start := time.Date(1899, time.December, 30, 0, 0, 0, 0, time.UTC)
	us := at.UnixMicro() - start.UnixMicro()
	const day = 86_400_000_000
	return float64(us/day) + float64(us%day)/day
}

func (x *xlsxWriter) End() (rows, unwritten int64, err error) {
	if err := x.out.Flush(); err != nil {
		return 0, 0, err
	}
	if err := x.file.Write(x.w); err != nil {
		return 0, 0, err
	}
	return x.rows, 0, x.file.Close()
}
