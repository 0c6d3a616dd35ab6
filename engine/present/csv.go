package present

import (
	"bufio"
	"io"
	"strings"

	"nearcell/catalog/column"
)

// csvWriter follows RFC 4180 with LF line ends: one heading row, NULL as an
// empty field, the empty text as "", Infinity as a word, numbers that read back
// to the same bits. The standard library's writer would write the empty text
// and NULL alike.
type csvWriter struct {
	out    *bufio.Writer
	o      Options
	fields int
	rows   int64
}

func newCSV(w io.Writer, o Options) *csvWriter {
	return &csvWriter{out: bufio.NewWriterSize(w, 1<<16), o: o}
}

func (c *csvWriter) Begin(s column.Schema) error {
	c.fields = len(s)
	for i, f := range s {
		name := f.Name
		if unit := f.Unit.ASCII(); c.o.Units && unit != "" {
			name += " [" + unit + "]"
		}
		c.separate(i)
		c.text(name)
	}
	return c.out.WriteByte('\n')
}

func (c *csvWriter) separate(field int) {
	if field > 0 {
		c.out.WriteByte(',')
	}
}

// text writes a text, quoted where a reader would else take it for something
// other: for nothing, for two fields, for a shorter text.
func (c *csvWriter) text(s string) {
	if s != "" && !strings.ContainsAny(s, ",\"\r\n") && strings.TrimSpace(s) != "" {
		c.out.WriteString(s)
		return
	}
	c.out.WriteByte('"')
	c.out.WriteString(strings.ReplaceAll(s, `"`, `""`))
	c.out.WriteByte('"')
}

func (c *csvWriter) Batch(b *column.Batch) error {
	return eachRow(b, func(row int) error {
		c.rows++
		for i := range b.Cols {
			c.separate(i)
			c.value(&b.Cols[i], row)
		}
		return c.out.WriteByte('\n') // carries the first error of the writes above
	})
}

func (c *csvWriter) value(v *column.Vector, row int) {
	switch {
	case v.IsNull(row):
		if c.fields == 1 {
			c.out.WriteString(`""`) // an empty line would be skipped by readers
		}
	case v.Type == column.Text:
		s := v.Text(row)
		if c.o.Formulas {
			s = quoteFormula(s)
		}
		c.text(s)
	default:
		c.out.WriteString(Exact(v, row))
	}
}

func (c *csvWriter) End() (rows, unwritten int64, err error) {
	return c.rows, 0, c.out.Flush()
}

// Exact writes one value so that it reads back to the same bits; NULL is the
// empty text.
func Exact(v *column.Vector, row int) string { return string(v.AppendValue(nil, row)) }

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
