package present

import (
	"bytes"
	"io"

	"github.com/olekukonko/tablewriter"
	"github.com/olekukonko/tablewriter/renderer"
	"github.com/olekukonko/tablewriter/tw"

	"nearcell/catalog/column"
)

// MaxTableRows is how many rows of a result a table prints.
const MaxTableRows = 5000

// rule is what the line under the headings is made of.
const rule = "─"

// tableWriter prints a heading line, a line of units where any column has one,
// a thin rule and the rows.
type tableWriter struct {
	w      io.Writer
	o      Options
	schema column.Schema
	cells  [][]string
	rows   int64
	out    []string // names of columns that did not fit
}

func (t *tableWriter) Begin(s column.Schema) error {
	t.schema = s
	return nil
}

func (t *tableWriter) Batch(b *column.Batch) error {
	return eachRow(b, func(row int) error {
		t.rows++
		if t.rows > t.most() {
			return nil
		}
		line := make([]string, len(b.Cols))
		for c := range b.Cols {
			line[c] = Cell(&b.Cols[c], row, t.o.Digits)
		}
		t.cells = append(t.cells, line)
		return nil
	})
}

func (t *tableWriter) End() (rows, unwritten int64, err error) {
	if len(t.schema) > 0 {
		err = t.print()
	}
	return t.rows, t.rows - int64(len(t.cells)), err
}

// most is how many rows are kept.
func (t *tableWriter) most() int64 {
	if t.o.Rows > 0 && t.o.Rows < MaxTableRows {
		return int64(t.o.Rows)
	}
	return MaxTableRows
}

// LeftOut implements Fitted.
func (t *tableWriter) LeftOut() []string { return t.out }

func (t *tableWriter) print() error {
	t.fit()
	var buffer bytes.Buffer
	table := tablewriter.NewTable(&buffer, tableOptions(t.schema)...)
	table.Header(headings(t.schema))
	if err := table.Bulk(t.cells); err != nil {
		return err
	}
	if err := table.Render(); err != nil {
		return err
	}
	for line := range bytes.Lines(buffer.Bytes()) {
		line = bytes.TrimRight(line, " \n")
		if len(bytes.Trim(line, rule)) == 0 {
			line = bytes.TrimSuffix(line, []byte(rule+rule)) // it spans the gap behind the last column too
		}
		line = append(line, '\n')
		if _, err := t.w.Write(line); err != nil {
			return err
		}
	}
	return nil
}

// headings are the names, with the unit on a second line where any column has one.
func headings(s column.Schema) []string {
	names := make([]string, len(s))
	units := false
	for i, f := range s {
		names[i] = oneLine(f.Name)
		units = units || f.Unit.String() != ""
	}
	if units {
		for i, f := range s {
			names[i] += "\n" + oneLine(f.Unit.String())
		}
	}
	return names
}

// tableOptions switch off what the library would do to the texts: it rewrites
// headings, trims, wraps and guesses widths of East Asian characters by locale.
func tableOptions(s column.Schema) []tablewriter.Option {
	align := make([]tw.Align, len(s))
	for i, f := range s {
		align[i] = tw.AlignLeft
		if f.Type.Numeric() || f.Type == column.Interval {
			align[i] = tw.AlignRight
		}
	}
	cell := tw.CellAlignment{PerColumn: align}
	thin := tw.NewSymbolCustom("thin").WithRow(rule).WithColumn(" ").WithCenter(rule).
		WithHeaderMid(rule).WithMidLeft("").WithMidRight("")
	return []tablewriter.Option{
		tablewriter.WithRenderer(renderer.NewBlueprint(tw.Rendition{
			Borders: tw.Border{Left: tw.Off, Right: tw.Off, Top: tw.Off, Bottom: tw.Off},
			Symbols: thin,
			Settings: tw.Settings{
				Separators: tw.Separators{ShowHeader: tw.On, BetweenRows: tw.Off, BetweenColumns: tw.Off},
				Lines:      tw.Lines{ShowHeaderLine: tw.On, ShowTop: tw.Off, ShowBottom: tw.Off},
			},
		})),
		tablewriter.WithHeaderAutoFormat(tw.Off),
		tablewriter.WithTrimSpace(tw.Off),
		tablewriter.WithTrimLine(tw.Off),
		tablewriter.WithHeaderAutoWrap(tw.WrapNone),
		tablewriter.WithRowAutoWrap(tw.WrapNone),
		tablewriter.WithEastAsian(tw.Off),
		tablewriter.WithHeaderAlignmentConfig(cell),
		tablewriter.WithRowAlignmentConfig(cell),
		tablewriter.WithPadding(tw.Padding{Left: "", Right: "  ", Overwrite: true}),
	}
}
