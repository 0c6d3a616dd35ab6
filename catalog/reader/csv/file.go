package csv

import (
	"bytes"
	"math"
	"strings"
	"unicode/utf8"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

// file is one of the files of an import.
type file struct {
	src   *reader.Source
	given *Records // where the records are made of another format
	facts reader.FileFacts
	data  []byte // in UTF-8, without the byte order mark
	clean bool   // all of it is UTF-8, without NUL bytes

	head     *heading
	trailing int   // empty fields that end every record, and that the heading has not
	column   []int // of the table, for each field
	body     int   // where the records begin
	bodyLine int
	preamble []constant
	chunks   []chunk // of the records

	// For each of Options.Times: the instants of records whose local time a
	// clock change repeats, where the order of the records decides.
	repeated []map[int]int64
}

// constant is what stands behind a text of the preamble.
type constant struct {
	text []byte
	line int
}

// records starts a pass over the records behind the heading.
func (f *file) records() *scanner {
	return newScanner(f.data, f.facts.Delimiter, f.body, f.bodyLine)
}

// bytes are those to be read.
func (f *file) bytes() []byte {
	if f.given != nil {
		return f.given.Text
	}
	return f.src.Data
}

// heading is the line that the heading stands in, 0 where it is to be found.
func (f *file) heading(o *reader.Options) int {
	if f.given != nil {
		return f.given.Heading
	}
	return o.Heading
}

// skips reports whether the record that was just read is a blank line.
func (f *file) skips(s *scanner) bool {
	return s.rec.blank() && (f.given == nil || !f.given.Whole)
}

// fixed is the type of a column by the word of a file that has one, else Null.
func (im *importer) fixed(i int) column.Type {
	for _, f := range im.files {
		if f.given == nil || f.given.Types == nil {
			continue
		}
		for k, c := range f.column {
			if c == i && k < len(f.given.Types) && f.given.Types[k] != column.Null {
				return f.given.Types[k]
			}
		}
	}
	return column.Null
}

// begin finds and reads the heading of a file.
func (im *importer) begin(f *file) error {
	if !im.decode(f) {
		return im.faults.err()
	}
	pos, line, ok := findHeading(f.data, f.heading(&im.o))
	said := rune(0)
	if ok && f.given == nil && im.o.Heading == 0 {
		var behind int
		if said, behind = saidDelimiter(f.data[pos:]); said != 0 {
			next, more, found := findHeading(f.data[pos+behind:], 0)
			pos, line, ok = pos+behind+next, line+more, found
		}
	}
	if !ok {
		im.faults.add(reader.Fault{Kind: reader.NoHeading, Line: max(f.heading(&im.o), 1), Got: line})
		return im.faults.err()
	}
	if f.facts.Delimiter = im.o.Delimiter; f.facts.Delimiter == 0 {
		f.facts.Delimiter = said
	}
	if f.facts.Delimiter == 0 {
		f.facts.Delimiter = detect(f.data, pos, line, im.o.DecimalMark)
	}
	s := newScanner(f.data, f.facts.Delimiter, pos, line)
	s.next()
	if x, bad := s.recordFault(f.clean, 0, math.MaxInt); bad {
		im.faults.add(x)
		return im.faults.err()
	}
	f.facts.CRLF = bytes.HasPrefix(f.data[s.rec.end:], []byte("\r\n"))
	f.facts.Heading, f.facts.HeadingLine = string(f.data[s.rec.start:s.rec.end]), line
	f.head = readHeading(s, &im.faults)
	f.body, f.bodyLine = s.pos, s.line
	f.facts.NumericHeading = f.head.numeric(im.mark)
	if err := im.faults.err(); err != nil {
		return err
	}
	f.lookAtTrailing()
	im.match(f, s)
	im.readPreamble(f, pos)
	if err := im.faults.err(); err != nil {
		return err
	}
	if f.given == nil || f.given.Types == nil {
		im.readUnits(f)
	}
	im.mergeUnits(f, s)
	return im.faults.err()
}

// saidDelimiter reads a first line such as sep=; by which spreadsheets tell each other
// the delimiter; behind is where the next line begins. 0: there is no such line.
func saidDelimiter(b []byte) (delimiter rune, behind int) {
	end := lineEnd(b, 0)
	line := trim(b[:end])
	if len(line) < 5 || !bytes.EqualFold(line[:4], []byte("sep=")) {
		return 0, 0
	}
	d, size := utf8.DecodeRune(line[4:])
	if len(line) != 4+size || d == utf8.RuneError || d == '"' {
		return 0, 0
	}
	return d, end + breakLen(b[end:])
}

// decode makes UTF-8 of the file; false where it is at fault.
func (im *importer) decode(f *file) bool {
	encoding := im.o.Encoding
	if raw := f.bytes(); encoding == "" && f.given == nil && (bytes.HasPrefix(raw, []byte{0xFF, 0xFE}) || bytes.HasPrefix(raw, []byte{0xFE, 0xFF})) {
		encoding = reader.UTF16Text // no UTF-8 text begins so
	}
	data, bad := reader.Decode(f.bytes(), encoding)
	if bad != nil {
		im.faults.add(*bad)
		return false
	}
	if bytes.HasPrefix(data, []byte("\xEF\xBB\xBF")) {
		data, im.facts.BOM = data[3:], true
	}
	if f.given == nil {
		data = bytes.TrimSuffix(data, []byte{0x1A}) // the end of a text file, on the systems of old
	}
	f.data = data
	switch {
	case looksUTF16(data):
		im.faults.add(reader.Fault{Kind: reader.UTF16})
		return false
	case len(trim(data)) == 0:
		im.faults.add(reader.Fault{Kind: reader.EmptyFile})
		return false
	}
	f.clean = isText(data)
	return true
}

// looksUTF16 recognises the byte order marks, and ASCII characters of two bytes.
func looksUTF16(b []byte) bool {
	if len(b) < 4 {
		return false
	}
	return b[0] == 0xFF && b[1] == 0xFE || b[0] == 0xFE && b[1] == 0xFF ||
		b[0] == 0 && b[1] != 0 && b[2] == 0 && b[3] != 0 || b[0] != 0 && b[1] == 0 && b[2] != 0 && b[3] == 0
}

// lookAtTrailing sees whether the records end with empty fields that the heading
// has no delimiters for. The first record tells; another number of fields in a
// later one is a fault like any other.
func (f *file) lookAtTrailing() {
	s := f.records()
	for s.next() {
		if f.skips(s) {
			continue
		}
		n := len(f.head.names) + f.head.extra
		for i := n; i < len(s.rec.fields); i++ {
			if x := &s.rec.fields[i]; x.quoted || len(trim(x.text)) > 0 {
				return
			}
		}
		if more := len(s.rec.fields) - n; more > 0 && s.rec.fault.kind == reader.NoFault {
			f.trailing = f.head.extra + more
			f.head.extra = 0
			f.facts.TrailingFields = true
		}
		return
	}
}

// match finds the file's columns among those of the files before it; the first
// file gives them.
func (im *importer) match(f *file, s *scanner) {
	if len(im.files) == 0 {
		for i, name := range f.head.names {
			im.columns = append(im.columns, tally{name: name})
			f.column = append(f.column, i)
		}
		for _, p := range im.o.Preamble {
			im.columns = append(im.columns, tally{name: p.Column, constant: true})
			for i, name := range f.head.names {
				if strings.EqualFold(name, p.Column) {
					x := fault(s, &f.head.at[i], i, reader.ColumnTaken)
					x.Text = name
					im.faults.add(x)
				}
			}
		}
		return
	}
	first := im.files[0]
	at := map[string]int{}
	for i, name := range first.head.names {
		at[name] = i
	}
	seen := make([]bool, len(first.head.names))
	for i, name := range f.head.names {
		j, known := at[name]
		if !known {
			if !im.faults.full() {
				x := fault(s, &f.head.at[i], i, reader.ColumnAdded)
				x.Text, x.Detail = name, first.src.Name
				im.faults.add(x)
			}
			continue
		}
		seen[j] = true
		f.column = append(f.column, j)
	}
	for j, name := range first.head.names {
		if !seen[j] && !im.faults.full() {
			x := place(s, s.rec.start, s.rec.line, s.rec.lineStart, reader.ColumnMissing)
			x.Text, x.Detail = name, first.src.Name
			im.faults.add(x)
		}
	}
}

// mergeUnits takes the units of the file's headings. Files must agree on them,
// unless Options.Units says what a column is in and a file does not.
func (im *importer) mergeUnits(f *file, s *scanner) {
	for i, unit := range f.head.units[:len(f.head.names)] {
		c := &im.columns[f.column[i]]
		if len(im.files) == 0 {
			c.unit = unit
			continue
		}
		said := im.unitSaid(c.name) && (unit == nil || c.unit == nil)
		if !column.SameUnit(c.unit, unit) && !said && !im.faults.full() {
			x := fault(s, &f.head.at[i], i, reader.UnitsDiffer)
			x.FieldName, x.Text, x.Detail = c.name, unit.String(), c.unit.String()
			im.faults.add(x)
		}
		if c.unit == nil {
			c.unit = unit
		}
	}
}

func (im *importer) unitSaid(name string) bool {
	for _, u := range im.o.Units {
		if strings.EqualFold(u.Column, name) {
			return true
		}
	}
	return false
}

// applyOptions gives the columns what the options say of them.
func (im *importer) applyOptions() error {
	for _, u := range im.o.Units {
		i := im.find(u.Column)
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
		if i := im.find(name); i >= 0 {
			im.columns[i].text = true
		} else {
			im.facts.UnknownText = append(im.facts.UnknownText, name)
		}
	}
	for _, name := range im.o.Censored {
		i := im.find(name)
		if i < 0 {
			return &reader.ColumnError{Column: name, Have: im.names()}
		}
		im.columns[i].censored = true
	}
	for k := range im.o.Times {
		t := &im.o.Times[k]
		i := im.find(t.Column)
		if i < 0 || i >= im.fileColumns() {
			return &reader.ColumnError{Column: t.Column, Have: im.names()}
		}
		im.columns[i].time = t
		im.columns[i].timeIndex = k
	}
	return nil
}

func (im *importer) names() []string {
	names := make([]string, 0, im.fileColumns())
	for _, c := range im.columns[:im.fileColumns()] {
		names = append(names, c.name)
	}
	return names
}

// find is the column of a name: the one written so, else the only one that
// differs in case alone; -1 if there is none.
func (im *importer) find(name string) int {
	found := -1
	for i := range im.columns {
		switch have := im.columns[i].name; {
		case have == name:
			return i
		case strings.EqualFold(have, name) && found >= 0:
			found = len(im.columns) // two of them
		case strings.EqualFold(have, name):
			found = i
		}
	}
	if found >= len(im.columns) {
		return -1
	}
	return found
}
