package jsonl

import (
	"bytes"
	"context"
	"errors"
	"sort"
	"strconv"
	"strings"
	"unicode/utf8"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
	"nearcell/catalog/reader/csv"
)

// Reader reads JSON lines and lists of objects.
type Reader struct{}

var _ reader.Reader = Reader{}

// Read implements reader.Reader.
func (r Reader) Read(ctx context.Context, src *reader.Source, o reader.Options) (*reader.Result, error) {
	return r.ReadFiles(ctx, []*reader.Source{src}, o)
}

// ReadFiles implements reader.Reader.
func (Reader) ReadFiles(ctx context.Context, sources []*reader.Source, o reader.Options) (*reader.Result, error) {
	if o.MaxFaults <= 0 {
		o.MaxFaults = 10
	}
	o.DecimalMark = '.'
	files := map[string]*file{}
	var list []*file
	for _, src := range sources {
		f := &file{src: src, o: &o, missing: map[string]bool{}}
		for _, m := range o.Missing {
			f.missing[strings.TrimSpace(m)] = true
		}
		if err := f.survey(ctx); err != nil {
			return nil, err
		}
		files[src.Name] = f
		list = append(list, f)
	}
	types := commonTypes(list)
	for _, name := range o.Censored { // numbers, and texts such as <0.1
		types[name] = column.Null
	}
	var records []csv.Records
	for _, f := range list {
		r, err := f.records(ctx, types)
		if err != nil {
			return nil, err
		}
		records = append(records, r)
	}
	if refused := o.Refused; refused != nil {
		o.Refused = func(line int, _ []byte, x reader.Fault) error {
			f := files[x.File]
			obj := f.objectOf(line)
			f.relocate(&x)
			return refused(x.Line, f.bytesOf(obj), x)
		}
	}
	result, err := csv.ReadRecords(ctx, records, o)
	var faults *reader.Faults
	if errors.As(err, &faults) {
		for i := range faults.List {
			files[faults.List[i].File].relocate(&faults.List[i])
		}
	}
	if err != nil {
		return nil, err
	}
	for i, f := range list {
		f.tell(result, i)
	}
	return result, nil
}

// file is one of the files.
type file struct {
	src     *reader.Source
	o       *reader.Options
	missing map[string]bool
	names   []string
	tallies []tally
	objects []place // of each record
	refused int
	text    []byte // as the parser has it, without the byte order mark
	rows    []int  // the line of the records that each object has
	faults  reader.Faults
	lines   lineCounter
}

type place struct{ start, end int }

// tally is what is known of a key.
type tally struct {
	present, has                             int
	booleans, integers, longs, reals, texts_ int
	times                                    int
}

// survey is the first pass: it finds the keys and what their values are.
func (f *file) survey(ctx context.Context) error {
	data := f.src.Data
	if len(bytes.TrimSpace(bytes.TrimPrefix(data, []byte("\xEF\xBB\xBF")))) == 0 {
		return reader.One(f.src, reader.Fault{Kind: reader.EmptyFile})
	}
	if len(data) > 1 && (data[0] == 0xFF && data[1] == 0xFE || data[0] == 0xFE && data[1] == 0xFF || data[0] == '{' && data[1] == 0) {
		return reader.One(f.src, reader.Fault{Kind: reader.NotUTF8})
	}
	p := newParser(data)
	f.text, f.faults.File = p.src, f.src.Name
	err := f.each(ctx, p, func(int) error {
		for len(f.tallies) < len(p.names) {
			f.tallies = append(f.tallies, tally{})
		}
		for i := range p.values {
			f.count(&f.tallies[p.values[i].key], &p.values[i])
		}
		return nil
	}, true)
	if err != nil {
		return err
	}
	f.names = p.names
	if len(f.faults.List) > 0 {
		return &f.faults
	}
	if len(f.names) == 0 {
		return reader.One(f.src, reader.Fault{Kind: reader.NothingToRead, Detail: "JSON"})
	}
	return nil
}

func (f *file) count(t *tally, v *value) {
	t.has++
	switch v.kind {
	case boolean:
		t.booleans++
	case number:
		switch {
		case bytes.ContainsAny(v.raw, ".eE"), string(v.raw) == "-0":
			t.reals++
		case isLong(v.raw):
			t.longs++
		default:
			t.integers++
		}
	case text:
		if f.missing[strings.TrimSpace(string(v.raw))] {
			return
		}
		t.texts_++
		if _, _, err := column.ParseTimestamp(string(v.raw)); err != column.ErrTimestamp {
			t.times++
		}
	default:
		return
	}
	t.present++
}

func isLong(b []byte) bool {
	_, err := strconv.ParseInt(string(b), 10, 64)
	return err != nil
}

// each goes over the objects; take is called for those without a fault, with the number
// of the object. first says that objects at fault are noted or handed over.
func (f *file) each(ctx context.Context, p *parser, take func(n int) error, first bool) error {
	for n := 0; ; n++ {
		if n&1023 == 0 && ctx.Err() != nil {
			return ctx.Err()
		}
		p.space()
		start := p.pos
		if p.list && p.some && p.peek() == ',' {
			start++
		}
		more, bad := p.next()
		if bad == nil {
			if !more {
				return nil
			}
			if first {
				for start < p.pos && (f.text[start] <= ' ') {
					start++
				}
				f.objects = append(f.objects, place{start, p.pos})
			}
			if err := take(n); err != nil {
				return err
			}
			continue
		}
		if first {
			if err := f.bad(start, bad); err != nil {
				return err
			}
		}
		if !p.mend(start) {
			if first && p.list && f.o.Refused != nil { // nothing tells where the next object begins
				return reader.One(f.src, f.located(bad))
			}
			return nil
		}
	}
}

// bad notes a fault of an object that cannot be read.
func (f *file) bad(start int, bad *fault) error {
	x := f.located(bad)
	if f.o.Refused != nil && (bytes.IndexByte(f.text, '[') != 0) {
		f.refused++
		return f.o.Refused(x.Line, f.bytesOf(place{start, lineEnd(f.text, start)}), x)
	}
	if len(f.faults.List) >= f.o.MaxFaults {
		f.faults.More++
		return nil
	}
	f.faults.List = append(f.faults.List, x)
	return nil
}

func lineEnd(b []byte, at int) int {
	if n := bytes.IndexByte(b[at:], '\n'); n >= 0 {
		return at + n
	}
	return len(b)
}

// located gives a fault its line and column.
func (f *file) located(bad *fault) reader.Fault {
	x := bad.Fault
	x.File = f.src.Name
	at := min(bad.at, len(f.text))
	start := bytes.LastIndexByte(f.text[:at], '\n') + 1
	x.Line = f.lines.at(f.text, at)
	x.Column = utf8.RuneCount(f.text[start:at]) + 1
	const most = 400
	end := lineEnd(f.text, start)
	if end-start <= most {
		x.Source = string(bytes.ToValidUTF8(bytes.TrimRight(f.text[start:end], "\r"), []byte("?")))
	}
	return x
}

// lineCounter counts lines up to places that mostly ascend.
type lineCounter struct{ pos, line int }

func (c *lineCounter) at(b []byte, at int) int {
	if at < c.pos {
		c.pos, c.line = 0, 0
	}
	c.line += bytes.Count(b[c.pos:at], []byte("\n"))
	c.pos = at
	return c.line + 1
}

func (f *file) bytesOf(p place) []byte { return bytes.TrimRight(f.text[p.start:p.end], "\r\n") }

// commonTypes are the types of the keys over all files; Null where there is no value.
func commonTypes(files []*file) map[string]column.Type {
	sum := map[string]*tally{}
	for _, f := range files {
		for k, name := range f.names {
			t := sum[name]
			if t == nil {
				t = &tally{}
				sum[name] = t
			}
			x := &f.tallies[k]
			t.present += x.present
			t.booleans += x.booleans
			t.integers += x.integers
			t.longs += x.longs
			t.reals += x.reals
			t.texts_ += x.texts_
			t.times += x.times
		}
	}
	types := map[string]column.Type{}
	for name, t := range sum {
		numbers := t.integers + t.longs + t.reals
		switch {
		case t.present == 0:
			types[name] = column.Null
		case numbers >= t.texts_ && numbers >= t.booleans && t.reals > 0:
			types[name] = column.Real
		case numbers >= t.texts_ && numbers >= t.booleans:
			types[name] = column.Integer
		case t.booleans >= t.texts_:
			types[name] = column.Boolean
		case t.times == t.texts_:
			types[name] = column.Timestamp
		default:
			types[name] = column.Text
		}
	}
	return types
}

// records is the second pass: it writes the objects as records.
func (f *file) records(ctx context.Context, types map[string]column.Type) (csv.Records, error) {
	r := csv.Records{Source: f.src, Whole: true}
	var b bytes.Buffer
	for i, name := range f.names {
		if i > 0 {
			b.WriteByte(',')
		}
		writeText(&b, name)
		r.Types = append(r.Types, types[name])
	}
	b.WriteByte('\n')
	line := 2 + strings.Count(string(b.Bytes()[:b.Len()-1]), "\n")
	p := newParser(f.src.Data)
	row := make([]*value, len(f.names))
	kept := 0
	var objects []place
	err := f.each(ctx, p, func(int) error {
		obj := f.objects[kept]
		kept++
		clear(row)
		for i := range p.values {
			row[p.values[i].key] = &p.values[i]
		}
		for i := range p.values {
			if x := f.misfit(&p.values[i], types[f.names[p.values[i].key]]); x != nil {
				return f.bad(obj.start, x)
			}
		}
		objects = append(objects, obj)
		f.rows = append(f.rows, line)
		for i, v := range row {
			if i > 0 {
				b.WriteByte(',')
			}
			line += f.write(&b, v)
		}
		b.WriteByte('\n')
		line++
		return nil
	}, false)
	if err != nil {
		return r, err
	}
	f.objects = objects
	if len(f.faults.List) > 0 {
		return r, &f.faults
	}
	r.Text = b.Bytes()
	return r, nil
}

// misfit is the fault of a value that is of another kind than its column.
func (f *file) misfit(v *value, t column.Type) *fault {
	fits := true
	switch {
	case t == column.Null, v.kind == null, v.kind == text && f.missing[strings.TrimSpace(string(v.raw))]:
		return nil
	case t == column.Boolean:
		fits = v.kind == boolean
	case t.Numeric():
		fits = v.kind == number
	default:
		fits = v.kind == text
	}
	x := &fault{reader.Fault{Kind: reader.OtherKind, Text: string(v.raw), FieldName: f.names[v.key], Want: t}, v.at}
	if fits && t == column.Integer && isLong(v.raw) {
		x.Kind, fits = reader.BeyondInteger, true
		return x
	}
	if fits {
		return nil
	}
	return x
}

// write writes a value as a field and gives the number of line breaks in it.
func (f *file) write(b *bytes.Buffer, v *value) int {
	switch {
	case v == nil || v.kind == null:
		return 0
	case v.kind != text:
		b.Write(v.raw)
		return 0
	}
	writeText(b, string(v.raw))
	n := 0
	for i, c := range v.raw {
		if c == '\n' || c == '\r' && (i+1 == len(v.raw) || v.raw[i+1] != '\n') {
			n++
		}
	}
	return n
}

func writeText(b *bytes.Buffer, s string) {
	b.WriteByte('"')
	b.WriteString(strings.ReplaceAll(s, `"`, `""`))
	b.WriteByte('"')
}

// objectOf is the object of the record that begins at a line or has it.
func (f *file) objectOf(line int) place {
	if len(f.objects) == 0 {
		return place{}
	}
	i := sort.SearchInts(f.rows, line+1) - 1
	return f.objects[max(i, 0)]
}

// relocate gives a fault the place that it has in the file.
func (f *file) relocate(x *reader.Fault) {
	if x.Line <= 1 || len(f.objects) == 0 {
		x.Line, x.Column, x.Source = 0, 0, ""
		return
	}
	obj := f.objectOf(x.Line)
	at := obj.start
	name := ""
	if x.Field >= 1 && x.Field <= len(f.names) {
		name = f.names[x.Field-1]
	}
	p := newParser(f.text[obj.start:obj.end])
	if _, bad := p.next(); bad == nil && name != "" {
		for i := range p.values {
			if p.names[p.values[i].key] == name {
				at += p.values[i].at
			}
		}
	}
	y := f.located(&fault{*x, at})
	if y.Source == "" {
		y.Column = 0
	}
	*x = y
}

// tell adds what only the objects tell.
func (f *file) tell(r *reader.Result, i int) {
	x := &r.Files[i]
	x.Heading, x.HeadingLine, x.UnitsLine, x.Delimiter = "", 0, 0, 0
	x.Refused += f.refused
	r.Facts.Refused += f.refused
	r.Facts.NumericHeading, r.Facts.TrailingDelimiter, r.Facts.CRLF = false, false, false
	x.NumericHeading, x.TrailingDelimiter, x.Undivided = false, false, false
	for k, name := range f.names {
		if n := len(f.objects) - f.tallies[k].has; n > 0 {
			r.Facts.AddNote(reader.ColumnNote{Column: name, Kind: reader.KeyMissing, Count: n})
		}
	}
	for k := range r.Facts.StayedText {
		s := &r.Facts.StayedText[k]
		if s.File == f.src.Name {
			s.FirstLine = f.lines.at(f.text, f.objectOf(s.FirstLine).start)
		}
	}
	for k := range r.Facts.Repeated {
		h := &r.Facts.Repeated[k]
		if h.File == f.src.Name {
			h.FirstLine = f.lines.at(f.text, f.objectOf(h.FirstLine).start)
		}
	}
}
