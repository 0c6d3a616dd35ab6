package csv

import (
	"strconv"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
	"nearcell/catalog/reader/timeform"
)

// The years 1 to 9999 in UTC, in microseconds since 1970: what a TIMESTAMP holds.
const (
	firstTime = -62_135_596_800_000_000
	lastTime  = 253_402_300_800_000_000 - 1
)

// cell is a value on its way into a column.
type cell struct {
	null  bool
	i     int64
	f     float64
	b     []byte
	naive bool
}

// builder makes the columns of the table.
type builder struct {
	columns []*column.Builder
	naive   []bool
	cells   []cell
}

// build is the second pass: it makes the columns and finds the faults.
func (im *importer) build() (*column.Table, error) {
	b := &builder{naive: make([]bool, len(im.columns)), cells: make([]cell, len(im.columns))}
	im.spare = &spareBuilders{}
	rows := 0
	for _, f := range im.files {
		for _, c := range f.chunks {
			rows += c.records
		}
	}
	if need := im.least(rows); im.o.Memory > 0 && need > im.o.Memory {
		return nil, &reader.MemoryError{Need: need, Limit: im.o.Memory, Rows: rows}
	}
	for i := range im.columns {
		b.columns = append(b.columns, column.NewBuilder(im.types[i], im.columns[i].unit))
		b.columns[i].Grow(rows)
	}
	for _, f := range im.files {
		im.enter(f)
		if err := im.buildFile(f, b); err != nil {
			return nil, err
		}
		im.done += int64(len(f.data))
	}
	if err := im.faults.err(); err != nil {
		return nil, err
	}
	if im.o.Progress != nil {
		im.o.Progress(im.total, im.total)
	}
	return im.finish(b), nil
}

// least is what so many rows take at least: texts are counted as if there were few.
func (im *importer) least(rows int) int64 {
	var bits int64
	for _, t := range im.types {
		bits++ // present or not
		switch t {
		case column.Text:
			bits += 32
		case column.Boolean:
			bits++
		default:
			bits += 64
		}
	}
	return int64(rows) * bits / 8
}

func (im *importer) buildFile(f *file, b *builder) error {
	for i, p := range f.preamble {
		at := im.fileColumns() + i
		im.value(at, &field{text: p.text}, &b.cells[at], f, 0)
	}
	return inOrder(im.ctx, im.threads(), len(f.chunks), func(i int) *built { return im.makeChunk(f, f.chunks[i], b.cells) }, func(i int, x *built) error {
		for _, r := range x.refused {
			f.facts.Refused++
			if err := im.o.Refused(r.line, r.raw, r.x); err != nil {
				return err
			}
		}
		im.faults.merge(&x.faults)
		if len(im.faults.List) == 0 {
			f.facts.Rows += x.rows
			for k := range x.columns {
				b.columns[k].AppendVector(&x.columns[k], nil)
				b.naive[k] = b.naive[k] || x.naive[k]
			}
		}
		im.spare.give(x.from)
		return im.progress(f, f.chunks[i].to)
	})
}

// convert turns record n of a file into cells. ok is false where it is at fault;
// then its faults have been listed or the record handed over.
func (im *importer) convert(s *scanner, f *file, n int, cells []cell) (ok bool, err error) {
	if x, bad := im.recordFault(s, f); bad {
		if im.o.Refused == nil && im.faults.full() {
			return false, nil
		}
		if x.Field >= 1 && x.Field <= len(f.column) {
			x.FieldName = im.columns[f.column[x.Field-1]].name
		}
		return false, im.refuse(s, f, x)
	}
	ok = true
	for k, i := range f.column {
		y := &s.rec.fields[k]
		kind := im.value(i, y, &cells[i], f, n)
		if kind == reader.NoFault {
			continue
		}
		ok = false
		if im.o.Refused == nil && im.faults.full() {
			continue
		}
		x := fault(s, y, k, kind)
		x.FieldName, x.Want = im.columns[i].name, im.types[i]
		if t := im.columns[i].time; t != nil {
			x.Detail = t.Form.String()
			if kind == reader.SkippedTime || kind == reader.RepeatedTime {
				x.Detail = t.Zone.String()
			}
		}
		if err := im.refuse(s, f, x); err != nil || im.o.Refused != nil {
			return false, err
		}
	}
	return ok, nil
}

// refuse hands a record over, or lists its fault where nobody takes it.
func (im *importer) refuse(s *scanner, f *file, x reader.Fault) error {
	if im.o.Refused == nil {
		im.faults.add(x) // the caller has made sure that there is room
		return nil
	}
	x.File = f.src.Name
	return im.o.Refused(s.rec.line, s.data[s.rec.start:s.rec.end], x)
}

// value reads a field of record n of a file as a value of column i.
func (im *importer) value(i int, f *field, c *cell, in *file, n int) reader.FaultKind {
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
		if im.columns[i].censored {
			if _, ok := reader.ParseCensored(string(b), im.mark); !ok {
				return reader.NotANumber
			}
			c.b = b
			return reader.NoFault
		}
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
		if im.columns[i].time != nil {
			return im.formed(&im.columns[i], b, c, in, n)
		}
		us, naive, err := column.ParseTimestamp(string(b))
		if err != nil {
			return reader.NotATimestamp
		}
		c.i, c.naive = us, naive
	}
	return reader.NoFault
}

// formed reads a time by the pattern of its column.
func (im *importer) formed(t *tally, b []byte, c *cell, in *file, n int) reader.FaultKind {
	local, outcome := t.time.Form.Read(b)
	switch {
	case outcome == timeform.NoMatch:
		return reader.NotThisTime
	case outcome != timeform.OK:
		return reader.NoSuchTime
	case t.time.Zone == nil:
		c.i, c.naive = local, true
		return reader.NoFault
	}
	at, _, outcome := t.time.Zone.Instants(local)
	switch outcome {
	case timeform.Skipped:
		return reader.SkippedTime
	case timeform.Repeats:
		var decided bool
		if at, decided = in.repeated[t.timeIndex][n]; !decided {
			return reader.RepeatedTime
		}
	}
	if at < firstTime || at > lastTime {
		return reader.NoSuchTime // the zone leads out of the years
	}
	c.i = at
	return reader.NoFault
}

func (im *importer) number(t column.Type, b []byte, c *cell) reader.FaultKind {
	if t == column.Real {
		if f, ok := quickReal(b, im.mark); ok {
			c.f = f
			return reader.NoFault
		}
	}
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
func (im *importer) finish(b *builder) *column.Table {
	t := &column.Table{}
	for i := range b.columns {
		c := &im.columns[i]
		v := b.columns[i].Finish()
		t.N = v.N
		t.Cols = append(t.Cols, v)
		t.Schema = append(t.Schema, column.Field{Name: c.name, Type: v.Type, Unit: c.unit})
		im.facts.Missing = append(im.facts.Missing, v.NullCount())
		if b.naive[i] {
			im.facts.NaiveTimes = append(im.facts.NaiveTimes, c.name)
		}
	}
	return t
}
