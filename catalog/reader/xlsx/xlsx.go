package xlsx

import (
	"bytes"
	"context"
	"errors"
	"sort"
	"strings"

	"nearcell/catalog/reader"
	"nearcell/catalog/reader/csv"
)

// Reader reads sheets of workbooks.
type Reader struct{}

var _ reader.Reader = Reader{}

// Read implements reader.Reader.
func (r Reader) Read(ctx context.Context, src *reader.Source, o reader.Options) (*reader.Result, error) {
	return r.ReadFiles(ctx, []*reader.Source{src}, o)
}

// ReadFiles implements reader.Reader.
func (Reader) ReadFiles(ctx context.Context, sources []*reader.Source, o reader.Options) (*reader.Result, error) {
	var list []csv.Records
	var facts reader.Facts
	layouts := map[string]*layout{}
	for i, src := range sources {
		l, more, bad, err := readSheet(ctx, src, &o)
		if err != nil {
			return nil, err
		}
		if bad != nil {
			return nil, reader.One(src, *bad)
		}
		layouts[src.Name] = l
		list = append(list, csv.Records{Source: src, Text: l.text, Heading: l.lineOf(o.Heading)})
		if i == 0 {
			facts = more
			continue
		}
		for _, n := range more.Columns {
			facts.AddNote(n)
		}
	}
	if refused := o.Refused; refused != nil {
		o.Refused = func(line int, raw []byte, f reader.Fault) error {
			l := layouts[f.File]
			l.relocate(&f)
			return refused(l.rowOf(line), raw, f)
		}
	}
	result, err := csv.ReadRecords(ctx, list, o)
	var faults *reader.Faults
	if errors.As(err, &faults) {
		for i := range faults.List {
			layouts[faults.List[i].File].relocate(&faults.List[i])
		}
	}
	if err != nil {
		return nil, err
	}
	relocateFacts(result, layouts)
	result.Facts.Sheet, result.Facts.Sheets, result.Facts.Hidden = facts.Sheet, facts.Sheets, facts.Hidden
	result.Facts.Columns = append(result.Facts.Columns, facts.Columns...)
	return result, nil
}

// readSheet reads the sheet of one workbook.
func readSheet(ctx context.Context, src *reader.Source, o *reader.Options) (*layout, reader.Facts, *reader.Fault, error) {
	var facts reader.Facts
	b, bad := open(src)
	if bad != nil {
		return nil, facts, bad, nil
	}
	i, bad := b.choose(o.Sheet)
	if bad != nil {
		return nil, facts, bad, nil
	}
	mark := o.DecimalMark
	if mark == 0 {
		mark = '.'
	}
	s, bad, err := b.read(ctx, i, mark)
	if bad != nil || err != nil {
		return nil, facts, bad, err
	}
	facts.Sheet = s.name
	for k, other := range b.sheets {
		switch {
		case other.hidden && k != i:
			facts.Hidden++
		case k != i && o.Sheet == "":
			facts.Sheets = append(facts.Sheets, other.name)
		}
	}
	note := func(kind reader.NoteKind, n int, detail string) {
		if n > 0 {
			facts.AddNote(reader.ColumnNote{Kind: kind, Count: n, Detail: detail})
		}
	}
	note(reader.ErrorCells, s.errors, strings.TrimSpace(s.errorAt+" "+s.errorText))
	note(reader.FormulaCells, s.formulas, s.formulaAt)
	note(reader.MergedCells, s.merged, s.m)
	l := s.layout()
	return l, facts, nil, nil
}

// layout is a sheet as records, and where they stand in it.
type layout struct {
	sheet   string
	text    []byte
	rows    []int // of each line that begins a record, by lines
	lines   []int // the lines that begin records, ascending
	columns []int // of each field
}

// layout writes the rows as records: a line for every row of the sheet up to the last with
// a value, blank where it has none, all with as many fields as there are columns in use.
func (s *sheet) layout() *layout {
	l := &layout{sheet: s.name}
	field := make([]int, len(s.used))
	for c, used := range s.used {
		if used {
			field[c] = len(l.columns)
			l.columns = append(l.columns, c)
		}
	}
	var b bytes.Buffer
	at, line := 1, 1 // the row and the line to be written next
	for i := range s.lines {
		row := &s.lines[i]
		for ; at < row.row; at, line = at+1, line+1 {
			l.begin(at, line)
			b.WriteByte('\n')
		}
		l.begin(at, line)
		next := 0
		for _, c := range row.cells {
			for ; next < field[c.column]; next++ {
				b.WriteByte(',')
			}
			line += writeField(&b, c.text, c.quoted)
		}
		for ; next < len(l.columns)-1; next++ {
			b.WriteByte(',')
		}
		b.WriteByte('\n')
		at, line = at+1, line+1
	}
	l.text = b.Bytes()
	return l
}

// writeField writes a field and gives the number of line breaks in it.
func writeField(b *bytes.Buffer, text string, quoted bool) (breaks int) {
	if !quoted && !strings.ContainsAny(text, ",\"\r\n") {
		b.WriteString(text)
		return 0
	}
	text = strings.ReplaceAll(text, "\r\n", "\n")
	text = strings.ReplaceAll(text, "\r", "\n")
	b.WriteByte('"')
	b.WriteString(strings.ReplaceAll(text, `"`, `""`))
	b.WriteByte('"')
	return strings.Count(text, "\n")
}

func (l *layout) begin(row, line int) {
	l.rows = append(l.rows, row)
	l.lines = append(l.lines, line)
}

// rowOf is the row of the sheet that a line belongs to.
func (l *layout) rowOf(line int) int {
	if line <= 0 {
		return 0
	}
	i := sort.SearchInts(l.lines, line+1) - 1
	return l.rows[max(i, 0)]
}

// lineOf is the line of a row; one beyond the last for rows beyond it.
func (l *layout) lineOf(row int) int {
	if row <= 0 || row > len(l.lines) {
		return row
	}
	return l.lines[row-1]
}

// relocate gives a fault the place that it has in the sheet.
func (l *layout) relocate(f *reader.Fault) {
	if f.Line == 0 {
		return
	}
	f.Line = l.rowOf(f.Line)
	f.Column, f.Source = 0, ""
	if f.Field >= 1 && f.Field <= len(l.columns) {
		f.Cell = l.sheet + "!" + Cell(l.columns[f.Field-1], f.Line)
	}
}

// relocateFacts does the same for what was met.
func relocateFacts(r *reader.Result, layouts map[string]*layout) {
	for i := range r.Facts.StayedText {
		s := &r.Facts.StayedText[i]
		if l := layouts[s.File]; l != nil {
			s.FirstLine = l.rowOf(s.FirstLine)
		}
	}
	for i := range r.Facts.Repeated {
		h := &r.Facts.Repeated[i]
		if l := layouts[h.File]; l != nil {
			h.FirstLine = l.rowOf(h.FirstLine)
		}
	}
	for i := range r.Files {
		f := &r.Files[i]
		if l := layouts[f.Name]; l != nil {
			f.HeadingLine, f.UnitsLine = l.rowOf(f.HeadingLine), l.rowOf(f.UnitsLine)
		}
	}
}

// Text is a sheet as the records that are read, for those who guess how it is laid out;
// rowOf is the row of the sheet that a line stands for.
func Text(ctx context.Context, src *reader.Source, o reader.Options) (text []byte, rowOf func(line int) int, err error) {
	l, _, bad, err := readSheet(ctx, src, &o)
	if bad != nil {
		return nil, nil, reader.One(src, *bad)
	}
	if err != nil {
		return nil, nil, err
	}
	return l.text, l.rowOf, nil
}
