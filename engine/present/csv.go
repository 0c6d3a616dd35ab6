package present

import (
	"encoding/csv"
	"io"
	"math"
	"strconv"

	"nearcell/catalog/column"
)

// csvWriter follows RFC 4180 with LF line ends: one heading row, NULL as an
// empty field, Infinity as a word, numbers that read back to the same bits.
type csvWriter struct {
	out    *csv.Writer
	o      Options
	fields []string
	rows   int64
}

func newCSV(w io.Writer, o Options) *csvWriter {
	return &csvWriter{out: csv.NewWriter(w), o: o}
}

func (c *csvWriter) Begin(s column.Schema) error {
	c.fields = make([]string, len(s))
	for i, f := range s {
		c.fields[i] = f.Name
		if unit := f.Unit.ASCII(); c.o.Units && unit != "" {
			c.fields[i] += " [" + unit + "]"
		}
	}
	return c.write()
}

// write puts the fields out. A row of one empty field would be an empty line,
// which readers skip: encoding/csv writes "" for it.
func (c *csvWriter) write() error { return c.out.Write(c.fields) }

func (c *csvWriter) Batch(b *column.Batch) error {
	return eachRow(b, func(row int) error {
		c.rows++
		for i := range b.Cols {
			c.fields[i] = Exact(&b.Cols[i], row)
			if c.o.Formulas && b.Cols[i].Type == column.Text {
				c.fields[i] = quoteFormula(c.fields[i])
			}
		}
		return c.write()
	})
}

func (c *csvWriter) End() (rows, unwritten int64, err error) {
	c.out.Flush()
	return c.rows, 0, c.out.Error()
}

// Exact writes one value so that it reads back to the same bits; NULL is the
// empty text.
func Exact(v *column.Vector, row int) string {
	if v.IsNull(row) {
		return ""
	}
	switch v.Type {
	case column.Integer:
		return strconv.FormatInt(v.I[row], 10)
	case column.Real:
		return exactReal(v.F[row])
	case column.Boolean:
		return booleanWord(v, row)
	case column.Timestamp:
		return column.FormatTimestamp(v.I[row])
	case column.Interval:
		return column.FormatInterval(v.I[row])
	case column.Point:
		p := v.F[3*row : 3*row+3]
		return exactReal(p[0]) + " " + exactReal(p[1]) + " " + exactReal(p[2])
	}
	return v.Text(row)
}

func exactReal(f float64) string {
	switch {
	case math.IsInf(f, 1):
		return "Infinity"
	case math.IsInf(f, -1):
		return "-Infinity"
	}
	return strconv.FormatFloat(f, 'g', -1, 64)
}

// quoteFormula puts an apostrophe before a text that a spreadsheet would run.
func quoteFormula(s string) string {
	if s != "" {
		switch s[0] {
		case '=', '+', '-', '@', '\t', '\r':
			return "'" + s
		}
	}
	return s
}
