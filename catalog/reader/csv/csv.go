package csv

import (
	"bytes"
	"context"
	"slices"
	"unicode/utf8"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

// Reader reads delimited text files.
type Reader struct{}

var _ reader.Reader = Reader{}

// Read implements reader.Reader.
func (r Reader) Read(ctx context.Context, src *reader.Source, o reader.Options) (*reader.Result, error) {
	return r.ReadFiles(ctx, []*reader.Source{src}, o)
}

// ReadFiles implements reader.Reader.
func (Reader) ReadFiles(ctx context.Context, sources []*reader.Source, o reader.Options) (*reader.Result, error) {
	if err := checkOptions(&o); err != nil {
		return nil, err
	}
	im := newImporter(ctx, o)
	for _, src := range sources {
		im.add(&file{src: src})
	}
	return im.guarded()
}

// guarded is read for files that may be mapped.
func (im *importer) guarded() (r *reader.Result, err error) {
	fault := reader.Guard(func() error {
		r, err = im.read()
		return nil
	})
	if fault != nil {
		return nil, fault
	}
	return r, err
}

func newImporter(ctx context.Context, o reader.Options) *importer {
	im := &importer{ctx: ctx, o: o, mark: byte(o.DecimalMark), missing: map[string]bool{}}
	im.faults.max = o.MaxFaults
	for _, m := range o.Missing {
		im.missing[string(trim([]byte(m)))] = true
	}
	return im
}

// add puts a file on the list of those to be read.
func (im *importer) add(f *file) {
	f.facts = reader.FileFacts{Name: f.src.Name, Bytes: f.src.Size()}
	im.waiting = append(im.waiting, f)
	im.total += 2 * int64(len(f.bytes()))
}

// read reads the files that were added.
func (im *importer) read() (*reader.Result, error) {
	for i, f := range im.waiting {
		im.enter(f)
		if i == 0 {
			im.faults.File = f.src.Name
		}
		if err := im.begin(f); err != nil {
			return nil, err
		}
		im.files = append(im.files, f)
	}
	if err := im.applyOptions(); err != nil {
		return nil, err
	}
	if err := im.infer(); err != nil {
		return nil, err
	}
	if err := im.settle(); err != nil {
		return nil, err
	}
	t, err := im.build()
	if err != nil {
		return nil, err
	}
	return im.result(t), nil
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
	case o.Encoding != "" && !slices.Contains(reader.Encodings, o.Encoding):
		return &reader.OptionError{Option: reader.OptionEncoding}
	}
	return nil
}

// importer is one reading of one or several files.
type importer struct {
	ctx     context.Context
	o       reader.Options
	mark    byte
	missing map[string]bool
	faults  collector
	facts   reader.Facts

	waiting     []*file // to be begun
	files       []*file
	total, done int64 // bytes of both passes, and of the files passed

	columns []tally // those of the files, then those of the preamble
	types   []column.Type
	spare   *spareBuilders
}

// enter makes f the file that faults are in.
func (im *importer) enter(f *file) { im.faults.current = f.src.Name }

// fileColumns is how many columns stand in the files.
func (im *importer) fileColumns() int { return len(im.columns) - len(im.o.Preamble) }

// recordFault judges the record that was just read.
func (im *importer) recordFault(s *scanner, f *file) (reader.Fault, bool) {
	n := len(f.head.names)
	x, bad := s.recordFault(f.clean, n, n+f.trailing+f.head.extra)
	if x.Kind == reader.FieldCount && f.trailing > 0 {
		x.Expected = n
	}
	return x, bad
}

// progress tells that a file has been passed up to a byte, and looks whether to go on.
func (im *importer) progress(f *file, done int) error {
	if f.given == nil {
		f.src.Passed(done)
	}
	if im.o.Progress != nil {
		im.o.Progress(im.done+int64(done), im.total)
	}
	return im.ctx.Err()
}

// isNull reports whether a trimmed value is missing.
func (im *importer) isNull(b []byte) bool {
	return len(b) == 0 || len(im.missing) > 0 && im.missing[string(b)]
}

// infer is the first pass: it decides the types.
func (im *importer) infer() error {
	for _, f := range im.files {
		im.enter(f)
		if err := im.inferFile(f); err != nil {
			return err
		}
		im.done += int64(len(f.data))
	}
	for i := range im.columns {
		im.columns[i].fixed = im.fixed(i)
		t, stayed := im.columns[i].decide()
		im.types = append(im.types, t)
		if stayed != nil {
			im.facts.StayedText = append(im.facts.StayedText, *stayed)
		}
		if im.columns[i].present == 0 {
			im.facts.AllMissing = append(im.facts.AllMissing, im.columns[i].name)
		}
	}
	return nil
}

func (im *importer) inferFile(f *file) error {
	extraUsed, undivided, records, number := false, 0, 0, 0
	f.chunks = f.cut()
	at, line, last := f.body, f.bodyLine, f.body
	err := inOrder(im.ctx, im.threads(), len(f.chunks), func(i int) *surveyed { return im.survey(f, f.chunks[i]) }, func(i int, x *surveyed) error {
		c := &f.chunks[i]
		switch {
		case at >= c.to: // a quoted field before it spans all of it
			c.from, c.line, c.first, c.to = at, line, number, at
			return im.progress(f, c.to)
		case at != c.from: // it began within a quoted field
			c.from = at
			x = im.survey(f, *c)
		}
		c.line, c.first, c.records = line, number, x.records
		for k := range im.columns {
			im.columns[k].merge(&x.columns[k], line-1)
		}
		im.facts.Blank += x.blank
		records, undivided, extraUsed = records+x.records, undivided+x.undivided, extraUsed || x.extraUsed
		number += x.n
		at, line, last = x.end, line+x.line-1, x.lastEnd
		return im.progress(f, x.end)
	})
	if err != nil {
		return err
	}
	f.facts.Undivided = im.o.Delimiter == 0 && 2*undivided > records
	if last == len(f.data) {
		line-- // the last line break begins no line
	}
	im.facts.Lines += line
	for i, b := range f.preamble {
		if !im.isNull(b.text) {
			im.columns[im.fileColumns()+i].add(b.text, im.mark, b.line, f.src.Name)
		}
	}
	return im.checkExtra(f, extraUsed)
}

// checkExtra refuses a column without a name that has values.
func (im *importer) checkExtra(f *file, used bool) error {
	f.facts.TrailingDelimiter = f.head.extra > 0
	if !used {
		return nil
	}
	s := newScanner(f.data, f.facts.Delimiter, 0, 1)
	if f.trailing > 0 { // the heading has no place for it: the first record that uses it is at fault
		s = f.records()
		for s.next() {
			for i := len(f.head.names); i < len(s.rec.fields); i++ {
				if x := &s.rec.fields[i]; len(trim(x.text)) > 0 {
					y := fault(s, x, i, reader.FieldCount)
					y.Got, y.Expected = i+1, len(f.head.names)
					im.faults.add(y)
					return im.faults.err()
				}
			}
		}
	}
	for i := len(f.head.names); i < len(f.head.at); i++ {
		if !im.faults.full() {
			im.faults.add(fault(s, &f.head.at[i], i, reader.HeadingEmpty))
		}
	}
	return im.faults.err()
}

// result puts the facts together.
func (im *importer) result(t *column.Table) *reader.Result {
	r := &reader.Result{Table: t}
	facts := &im.facts
	for i, f := range im.files {
		x := &f.facts
		x.SHA256 = f.src.SHA256()
		r.Files = append(r.Files, *x)
		facts.Rows += x.Rows
		facts.Refused += x.Refused
		facts.Bytes += x.Bytes
		facts.CRLF = facts.CRLF || x.CRLF
		facts.NumericHeading = facts.NumericHeading || x.NumericHeading
		facts.TrailingDelimiter = facts.TrailingDelimiter || x.TrailingDelimiter
		facts.TrailingFields = facts.TrailingFields || x.TrailingFields
		if i == 0 {
			facts.SHA256, facts.Delimiter = x.SHA256, x.Delimiter
		}
	}
	facts.StayedText = slices.Clip(facts.StayedText)
	r.Facts = *facts
	return r
}
