package csv

import (
	"bytes"
	"context"
	"math"
	"slices"
	"strconv"
	"unicode/utf8"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

// Reader reads delimited text files.
type Reader struct{}

var _ reader.Reader = Reader{}

// Read implements reader.Reader.
func (Reader) Read(ctx context.Context, src *reader.Source, o reader.Options) (*reader.Result, error) {
	if err := checkOptions(&o); err != nil {
		return nil, err
	}
	im := &importer{ctx: ctx, o: o, mark: byte(o.DecimalMark), data: src.Data, missing: map[string]bool{}}
	im.faults.File, im.faults.max = src.Name, o.MaxFaults
	for _, m := range o.Missing {
		im.missing[string(trim([]byte(m)))] = true
	}
	im.facts.Bytes = int64(len(src.Data))
	if err := im.begin(); err != nil {
		return nil, err
	}
	if err := im.infer(); err != nil {
		return nil, err
	}
	t, err := im.build()
	if err != nil {
		return nil, err
	}
	im.facts.SHA256 = src.SHA256()
	return &reader.Result{Table: t, Facts: im.facts}, nil
}

// checkOptions fills in what was left out and refuses what cannot be.
func checkOptions(o *reader.Options) error {
	if o.DecimalMark == 0 {
		o.DecimalMark = '.'
	}
	if o.MaxFaults <= 0 {
		o.MaxFaults = 10
	}
	switch {
	case o.DecimalMark != '.' && o.DecimalMark != ',':
		return &reader.OptionError{Option: reader.OptionDecimalMark, Rune: o.DecimalMark}
	case o.Delimiter != 0 && (!utf8.ValidRune(o.Delimiter) || o.Delimiter == utf8.RuneError || bytes.ContainsRune([]byte("\"\r\n"), o.Delimiter)):
		return &reader.OptionError{Option: reader.OptionDelimiter, Rune: o.Delimiter}
	case o.Heading < 0:
		return &reader.OptionError{Option: reader.OptionHeading}
	}
	return nil
}

// importer is one reading of one file.
type importer struct {
	ctx     context.Context
	o       reader.Options
	mark    byte
	missing map[string]bool
	data    []byte // without the byte order mark
	clean   bool   // all of it is UTF-8, without NUL bytes
	faults  collector
	facts   reader.Facts

	head      *heading
	body      int // where the records begin
	bodyLine  int
	columns   []tally
	types     []column.Type
	extraUsed bool
}

// begin finds and reads the heading.
func (im *importer) begin() error {
	if bytes.HasPrefix(im.data, []byte("\xEF\xBB\xBF")) {
		im.data, im.facts.BOM = im.data[3:], true
	}
	if looksUTF16(im.data) {
		im.faults.add(reader.Fault{Kind: reader.UTF16})
		return im.faults.err()
	}
	if len(trim(im.data)) == 0 {
		im.faults.add(reader.Fault{Kind: reader.EmptyFile})
		return im.faults.err()
	}
	im.clean = isText(im.data)
	pos, line, ok := findHeading(im.data, im.o.Heading)
	if !ok {
		im.faults.add(reader.Fault{Kind: reader.NoHeading, Line: max(im.o.Heading, 1), Got: line})
		return im.faults.err()
	}
	if im.facts.Delimiter = im.o.Delimiter; im.facts.Delimiter == 0 {
		im.facts.Delimiter = detect(im.data, pos, line, im.o.DecimalMark)
	}
	s := newScanner(im.data, im.facts.Delimiter, pos, line)
	s.next()
	if x, bad := s.recordFault(im.clean, 0, math.MaxInt); bad {
		im.faults.add(x)
		return im.faults.err()
	}
	im.facts.CRLF = bytes.HasPrefix(im.data[s.rec.end:], []byte("\r\n"))
	im.head = readHeading(s, &im.faults)
	im.body, im.bodyLine = s.pos, s.line
	im.facts.NumericHeading = im.head.numeric(im.mark)
	im.columns = make([]tally, len(im.head.names))
	for i, name := range im.head.names {
		im.columns[i] = tally{name: name, unit: im.head.units[i]}
	}
	im.applyOptions()
	return im.faults.err()
}

// looksUTF16 recognises the byte order marks, and ASCII characters of two bytes.
func looksUTF16(b []byte) bool {
	if len(b) < 4 {
		return false
	}
	return b[0] == 0xFF && b[1] == 0xFE || b[0] == 0xFE && b[1] == 0xFF ||
		b[0] == 0 && b[1] != 0 && b[2] == 0 && b[3] != 0 || b[0] != 0 && b[1] == 0 && b[2] != 0 && b[3] == 0
}

// applyOptions gives the columns what the options say of them.
func (im *importer) applyOptions() {
	for _, u := range im.o.Units {
		i := im.head.find(u.Column)
		if i < 0 {
			im.facts.UnknownUnits = append(im.facts.UnknownUnits, u.Column)
			continue
		}
		c := &im.columns[i]
		if c.unit != nil && !column.SameUnit(c.unit, u.Unit) {
			im.facts.UnitConflicts = append(im.facts.UnitConflicts, reader.UnitsConflict{Column: c.name, Heading: c.unit, Said: u.Unit})
		}
		c.unit = u.Unit
	}
	for _, name := range im.o.TextColumns {
		if i := im.head.find(name); i >= 0 {
			im.columns[i].text = true
		} else {
			im.facts.UnknownText = append(im.facts.UnknownText, name)
		}
	}
}

// records starts a pass over the records behind the heading.
func (im *importer) records() *scanner {
	return newScanner(im.data, im.facts.Delimiter, im.body, im.bodyLine)
}

// recordFault judges the record that was just read.
func (im *importer) recordFault(s *scanner) (reader.Fault, bool) {
	n := len(im.columns)
	return s.recordFault(im.clean, n, n+im.head.extra)
}

// tick is called for every record: every so often it looks whether to go on.
func (im *importer) tick(n, done int) error {
	if n&1023 != 0 {
		return nil
	}
	if im.o.Progress != nil {
		im.o.Progress(int64(done), 2*int64(len(im.data)))
	}
	return im.ctx.Err()
}

// isNull reports whether a trimmed value is missing.
func (im *importer) isNull(b []byte) bool {
	return len(b) == 0 || len(im.missing) > 0 && im.missing[string(b)]
}

// infer is the first pass: it decides the types.
func (im *importer) infer() error {
	s := im.records()
	for n := 0; s.next(); n++ {
		if err := im.tick(n, s.pos); err != nil {
			return err
		}
		if s.rec.blank() {
			im.facts.Blank++
			continue
		}
		if _, bad := im.recordFault(s); bad {
			continue
		}
		for i := range s.rec.fields {
			f := &s.rec.fields[i]
			b := trim(f.text)
			switch {
			case i >= len(im.columns):
				im.extraUsed = im.extraUsed || len(b) > 0
			case !im.isNull(b):
				im.columns[i].add(b, im.mark, f.line)
			}
		}
	}
	im.facts.Lines = s.line
	if s.lineStart == len(im.data) {
		im.facts.Lines-- // the last line break begins no line
	}
	for i := range im.columns {
		t, stayed := im.columns[i].decide()
		im.types = append(im.types, t)
		if stayed != nil {
			im.facts.StayedText = append(im.facts.StayedText, *stayed)
		}
		if im.columns[i].present == 0 {
			im.facts.AllMissing = append(im.facts.AllMissing, im.columns[i].name)
		}
	}
	return im.checkExtra()
}

// checkExtra refuses a column without a name that has values.
func (im *importer) checkExtra() error {
	im.facts.TrailingDelimiter = im.head.extra > 0
	if !im.extraUsed {
		return nil
	}
	s := newScanner(im.data, im.facts.Delimiter, 0, 1)
	for i := len(im.columns); i < len(im.head.at); i++ {
		if !im.faults.full() {
			im.faults.add(fault(s, &im.head.at[i], i, reader.HeadingEmpty))
		}
	}
	return im.faults.err()
}

// cell is a value on its way into a column.
type cell struct {
	null  bool
	i     int64
	f     float64
	b     []byte
	naive bool
}

// build is the second pass: it makes the columns and finds the faults.
func (im *importer) build() (*column.Table, error) {
	builders := make([]*column.Builder, len(im.columns))
	for i := range im.columns {
		builders[i] = column.NewBuilder(im.types[i], im.columns[i].unit)
	}
	naive := make([]bool, len(im.columns))
	cells := make([]cell, len(im.columns))
	s := im.records()
	for n := 0; s.next(); n++ {
		if err := im.tick(n, len(im.data)+s.pos); err != nil {
			return nil, err
		}
		if s.rec.blank() {
			continue
		}
		ok, err := im.convert(s, cells)
		if err != nil {
			return nil, err
		}
		if !ok || len(im.faults.List) > 0 {
			continue
		}
		for i := range cells {
			appendCell(builders[i], im.types[i], &cells[i])
			naive[i] = naive[i] || cells[i].naive
		}
	}
	if err := im.faults.err(); err != nil {
		return nil, err
	}
	if im.o.Progress != nil {
		im.o.Progress(2*int64(len(im.data)), 2*int64(len(im.data)))
	}
	return im.finish(builders, naive), nil
}

// convert turns the record into cells. ok is false where it is at fault; then
// its faults have been listed or the record handed over.
func (im *importer) convert(s *scanner, cells []cell) (ok bool, err error) {
	if x, bad := im.recordFault(s); bad {
		if im.o.Refused == nil && im.faults.full() {
			return false, nil
		}
		return false, im.refuse(s, x)
	}
	ok = true
	for i := range cells {
		f := &s.rec.fields[i]
		kind := im.value(i, f, &cells[i])
		if kind == reader.NoFault {
			continue
		}
		ok = false
		if im.o.Refused == nil && im.faults.full() {
			continue
		}
		x := fault(s, f, i, kind)
		x.FieldName, x.Want = im.columns[i].name, im.types[i]
		if err := im.refuse(s, x); err != nil || im.o.Refused != nil {
			return false, err
		}
	}
	return ok, nil
}

// refuse hands a record over, or lists its fault where nobody takes it.
func (im *importer) refuse(s *scanner, x reader.Fault) error {
	if x.FieldName == "" && x.Field >= 1 && x.Field <= len(im.columns) {
		x.FieldName = im.columns[x.Field-1].name
	}
	if im.o.Refused == nil {
		im.faults.add(x) // the caller has made sure that there is room
		return nil
	}
	im.facts.Refused++
	return im.o.Refused(s.rec.line, s.data[s.rec.start:s.rec.end], x)
}

// value reads a field as a value of column i.
func (im *importer) value(i int, f *field, c *cell) reader.FaultKind {
	*c = cell{}
	b := trim(f.text)
	t := im.types[i]
	if t == column.Text && f.quoted && len(b) == 0 {
		c.b = f.text // the empty text, or one of blanks
		return reader.NoFault
	}
	if im.isNull(b) {
		c.null = true
		return reader.NoFault
	}
	switch t {
	case column.Text:
		c.b = f.text
	case column.Integer, column.Real:
		return im.number(t, b, c)
	case column.Boolean:
		v, ok := parseBool(b)
		if !ok {
			return reader.NotABoolean
		}
		if v {
			c.i = 1
		}
	case column.Timestamp:
		us, naive, err := column.ParseTimestamp(string(b))
		if err != nil {
			return reader.NotATimestamp
		}
		c.i, c.naive = us, naive
	}
	return reader.NoFault
}

func (im *importer) number(t column.Type, b []byte, c *cell) reader.FaultKind {
	switch lookAtNumber(b, im.mark).class {
	case isWord:
		if notFinite(b) {
			return reader.NotFinite
		}
		return reader.NotANumber
	case isInt:
		if t == column.Integer {
			c.i, _ = strconv.ParseInt(string(b), 10, 64)
			return reader.NoFault
		}
	}
	var ok bool
	if c.f, ok = parseReal(b, im.mark); !ok || t == column.Integer {
		return reader.OutOfRange
	}
	return reader.NoFault
}

func appendCell(b *column.Builder, t column.Type, c *cell) {
	switch {
	case c.null:
		b.AppendNull()
	case t == column.Real:
		b.AppendFloat(c.f)
	case t == column.Text:
		b.AppendBytes(c.b)
	case t == column.Boolean:
		b.AppendBool(c.i != 0)
	default:
		b.AppendInt(c.i)
	}
}

// finish makes the table.
func (im *importer) finish(builders []*column.Builder, naive []bool) *column.Table {
	t := &column.Table{}
	for i, b := range builders {
		c := &im.columns[i]
		v := b.Finish()
		t.N = v.N
		t.Cols = append(t.Cols, v)
		t.Schema = append(t.Schema, column.Field{Name: c.name, Type: v.Type, Unit: c.unit})
		im.facts.Missing = append(im.facts.Missing, v.NullCount())
		if naive[i] {
			im.facts.NaiveTimes = append(im.facts.NaiveTimes, c.name)
		}
	}
	im.facts.Rows = t.N
	im.facts.StayedText = slices.Clip(im.facts.StayedText)
	return t
}
