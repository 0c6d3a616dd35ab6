package report

import (
	"fmt"
	"slices"
	"unicode/utf8"

	"nearcell/catalog/column"
	"nearcell/engine/present"
)

// DefaultRows is how many rows of a table a report shows unless told otherwise.
const DefaultRows = 200

// Table is a writer of one result into the report. line and statement say where the
// result comes from. Of the options Digits and Rows matter.
func (r *Report) Table(place, statement string, o present.Options) present.Writer {
	if o.Digits == 0 {
		o.Digits = present.DefaultDigits
	}
	if o.Rows <= 0 {
		o.Rows = DefaultRows
	}
	o.Rows = min(o.Rows, present.MaxTableRows)
	return &tableWriter{report: r, o: o, data: table{Place: place, Statement: lines(statement)}}
}

type tableWriter struct {
	report *Report
	o      present.Options
	data   table
	rows   int64
}

// table is what the template gets.
type table struct {
	Place, Statement string
	Columns          []columnHead
	Units, Wide      bool
	Rows             [][]cell
	Count            string
}

type columnHead struct {
	Name, Unit, Meaning string
	Number, Short       bool
}

type cell struct {
	Text   string
	Number bool
	Null   bool
	Short  bool
}

func (t *tableWriter) Begin(s column.Schema) error {
	for _, f := range s {
		unit := clean(f.Unit.String())
		t.data.Columns = append(t.data.Columns, columnHead{Name: clean(f.Name), Unit: unit, Meaning: clean(f.Meaning),
			Number: f.Type.Numeric() || f.Type == column.Interval})
		t.data.Units = t.data.Units || unit != ""
	}
	t.data.Wide = len(s) > 8
	return nil
}

func (t *tableWriter) Batch(b *column.Batch) error {
	for i := 0; i < b.N; i++ {
		if b.On != nil && !column.Bit(b.On, i) {
			continue
		}
		if t.rows++; t.rows > int64(t.o.Rows) {
			continue
		}
		line := make([]cell, len(b.Cols))
		for c := range b.Cols {
			v := &b.Cols[c]
			line[c] = cell{Text: clean(present.Cell(v, i, t.o.Digits)), Number: t.data.Columns[c].Number, Null: v.IsNull(i)}
		}
		t.data.Rows = append(t.data.Rows, line)
	}
	return nil
}

func (t *tableWriter) End() (rows, unwritten int64, err error) {
	unwritten = t.rows - int64(len(t.data.Rows))
	t.data.Count = counted(t.rows)
	if unwritten > 0 {
		t.data.Count = fmt.Sprintf("the first %d of %s", len(t.data.Rows), counted(t.rows))
	}
	t.keepShort()
	t.report.add("table", t.data)
	return t.rows, unwritten, t.report.err
}

// Characters of a line on paper: of the usual tables and of wide ones, which are set smaller.
const (
	lineOfPaper = 92
	lineOfWide  = 124
)

// keepShort says which columns of text are not to be broken into lines: the shortest ones,
// as long as all of a row finds room on paper. Without it a long text in one column would
// break names in another letter by letter.
func (t *tableWriter) keepShort() {
	room := lineOfPaper
	if t.data.Wide {
		room = lineOfWide
	}
	widths := make([]int, len(t.data.Columns))
	order := make([]int, 0, len(widths))
	for c := range widths {
		widths[c] = max(utf8.RuneCountInString(t.data.Columns[c].Name), utf8.RuneCountInString(t.data.Columns[c].Unit))
		for _, line := range t.data.Rows {
			widths[c] = max(widths[c], utf8.RuneCountInString(line[c].Text))
		}
		if t.data.Columns[c].Number {
			room -= widths[c] + 2 // numbers are never broken
			continue
		}
		order = append(order, c)
	}
	slices.SortStableFunc(order, func(a, b int) int { return widths[a] - widths[b] })
	for i, c := range order {
		rest := 0 // what those after it need, broken into lines
		for _, d := range order[i+1:] {
			rest += min(widths[d], 30)
		}
		if room -= widths[c] + 2; room < rest {
			return
		}
		t.data.Columns[c].Short = true
		for r := range t.data.Rows {
			t.data.Rows[r][c].Short = true
		}
	}
}

func counted(n int64) string {
	if n == 1 {
		return "1 row"
	}
	return fmt.Sprintf("%d rows", n)
}
