package parquet

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"strings"

	"github.com/parquet-go/parquet-go"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

// Reader reads Parquet files.
type Reader struct{}

var _ reader.Reader = Reader{}

// Read implements reader.Reader.
func (r Reader) Read(ctx context.Context, src *reader.Source, o reader.Options) (*reader.Result, error) {
	return r.ReadFiles(ctx, []*reader.Source{src}, o)
}

// ReadFiles implements reader.Reader.
func (Reader) ReadFiles(ctx context.Context, sources []*reader.Source, o reader.Options) (*reader.Result, error) {
	done, total := int64(0), int64(0)
	for _, src := range sources {
		total += int64(len(src.Data))
	}
	return reader.EachFile(sources, &o, func(src *reader.Source) (*reader.Result, error) {
		f := &file{ctx: ctx, src: src, o: &o, done: done, total: total}
		result, err := f.guarded()
		done += int64(len(src.Data))
		return result, err
	})
}

// file is one being read.
type file struct {
	ctx         context.Context
	src         *reader.Source
	o           *reader.Options
	done, total int64
	in          *parquet.File
	leaves      []*leaf
	notes       []reader.ColumnNote
	part        string // what is read at the moment, for faults
}

// guarded keeps a panic of the library from going further: a damaged file is a fault.
func (f *file) guarded() (result *reader.Result, err error) {
	defer func() {
		if x := recover(); x != nil {
			result, err = nil, f.damaged(fmt.Errorf("%v", x))
		}
	}()
	return f.read()
}

func (f *file) damaged(err error) error {
	x := reader.Fault{Kind: reader.Damaged, Text: f.part, Detail: firstLine(err.Error())}
	if errors.Is(err, io.ErrUnexpectedEOF) || errors.Is(err, io.EOF) {
		x.Kind = reader.CutShort
	}
	return reader.One(f.src, x)
}

func firstLine(s string) string {
	s, _, _ = strings.Cut(s, "\n")
	const most = 160
	if len(s) > most {
		s = strings.ToValidUTF8(s[:most], "") + "…"
	}
	return s
}

// read reads the file.
func (f *file) read() (*reader.Result, error) {
	data := f.src.Data
	f.part = "footer"
	switch {
	case len(data) == 0:
		return nil, reader.One(f.src, reader.Fault{Kind: reader.EmptyFile})
	case bytes.HasPrefix(data, []byte("PARE")):
		return nil, reader.One(f.src, reader.Fault{Kind: reader.NotSupported, Text: "encryption", Detail: "Parquet"})
	case !bytes.HasPrefix(data, []byte("PAR1")):
		return nil, reader.One(f.src, reader.Fault{Kind: reader.NotTheFormat, Detail: "Parquet"})
	case len(data) < 12 || !bytes.HasSuffix(data, []byte("PAR1")):
		return nil, reader.One(f.src, reader.Fault{Kind: reader.CutShort, Text: "footer"})
	}
	if n := int64(data[len(data)-8]) | int64(data[len(data)-7])<<8 | int64(data[len(data)-6])<<16 | int64(data[len(data)-5])<<24; n > int64(len(data)-12) {
		return nil, reader.One(f.src, reader.Fault{Kind: reader.CutShort, Text: "footer", Got: len(data) - 12, Expected: int(n)})
	}
	var err error
	f.in, err = parquet.OpenFile(bytes.NewReader(data), int64(len(data)), parquet.SkipPageIndex(true), parquet.SkipBloomFilters(true), parquet.FileReadMode(parquet.ReadModeSync))
	if err != nil {
		return nil, f.damaged(err)
	}
	rows := int64(0)
	for _, g := range f.in.RowGroups() {
		n := g.NumRows()
		if n < 0 {
			return nil, f.damaged(errors.New("negative number of rows"))
		}
		rows += n
	}
	if limit := 1<<20 + 1024*int64(len(data)); rows > limit {
		return nil, reader.One(f.src, reader.Fault{Kind: reader.TooLarge, Text: "rows", Got: int(rows), Expected: int(limit)})
	}
	for _, c := range f.in.Root().Columns() {
		f.collect(c, "")
	}
	if len(f.leaves) == 0 {
		x := reader.Fault{Kind: reader.NothingToRead}
		if len(f.notes) > 0 {
			x.FieldName, x.Detail = f.notes[0].Column, f.notes[0].Detail
		}
		return nil, reader.One(f.src, x)
	}
	return f.table(rows)
}

// collect finds the columns at or below a node that can be read.
func (f *file) collect(c *parquet.Column, above string) {
	name := above + c.Name()
	leave := func(as string) {
		f.notes = append(f.notes, reader.ColumnNote{Column: name, Kind: reader.NotRead, Detail: as})
	}
	switch {
	case c.Repeated():
		leave("list")
	case !c.Leaf():
		if as := groupKind(c); as != "" {
			leave(as)
			return
		}
		for _, below := range c.Columns() {
			f.collect(below, name+".")
		}
	default:
		l, as := newLeaf(c, strings.ToValidUTF8(name, "?"))
		if l == nil {
			leave(as)
			return
		}
		f.leaves = append(f.leaves, l)
	}
}

// groupKind is "list" or "map" for groups that stand for one, also where only their shape tells.
func groupKind(c *parquet.Column) string {
	if t := c.Type(); t != nil {
		if l := t.LogicalType(); l != nil && l.Value != nil {
			switch s := strings.ToLower(l.String()); {
			case strings.HasPrefix(s, "list"), strings.HasPrefix(s, "map"), strings.HasPrefix(s, "variant"):
				return s
			}
		}
	}
	below := c.Columns()
	if len(below) == 1 && below[0].Repeated() {
		return "list"
	}
	return ""
}

// table reads the columns one after the other.
func (f *file) table(rows int64) (*reader.Result, error) {
	seen := map[string]bool{}
	t := &column.Table{N: int(rows)}
	naive := []string(nil)
	for k, l := range f.leaves {
		if seen[l.name] {
			return nil, reader.One(f.src, reader.Fault{Kind: reader.HeadingRepeated, Text: l.name})
		}
		seen[l.name] = true
		f.part = l.name
		if err := f.readLeaf(l); err != nil {
			return nil, err
		}
		if f.o.Progress != nil {
			f.o.Progress(f.done+int64(len(f.src.Data))*int64(k+1)/int64(len(f.leaves)), f.total)
		}
		if l.bytes {
			f.notes = append(f.notes, reader.ColumnNote{Column: l.name, Kind: reader.NotRead, Detail: "bytes"})
			continue
		}
		if l.naive && l.b.Len() > 0 {
			naive = append(naive, l.name)
		}
		v := l.b.Finish()
		t.Cols = append(t.Cols, v)
		t.Schema = append(t.Schema, column.Field{Name: l.name, Type: v.Type})
		f.notes = append(f.notes, l.notes()...)
	}
	if len(t.Cols) == 0 {
		return nil, reader.One(f.src, reader.Fault{Kind: reader.NothingToRead, FieldName: f.notes[0].Column, Detail: f.notes[0].Detail})
	}
	r := reader.OfTable(f.src, t, f.o)
	r.Facts.Columns, r.Facts.NaiveTimes = f.notes, naive
	return r, nil
}

// readLeaf reads a column through all row groups.
func (f *file) readLeaf(l *leaf) error {
	buffer := make([]parquet.Value, 4096)
	record := int64(0)
	for _, group := range f.in.RowGroups() {
		chunks := group.ColumnChunks()
		if l.index >= len(chunks) {
			return f.damaged(errors.New("row group without this column"))
		}
		got, err := f.readChunk(l, chunks[l.index], group.NumRows(), record, buffer)
		if err != nil || l.bytes {
			return err
		}
		if got != group.NumRows() {
			return reader.One(f.src, reader.Fault{Kind: reader.CutShort, Text: l.name, Got: int(got), Expected: int(group.NumRows())})
		}
		record += got
	}
	return nil
}

// readChunk reads the values of a column in one row group.
func (f *file) readChunk(l *leaf, chunk parquet.ColumnChunk, rows, record int64, buffer []parquet.Value) (got int64, err error) {
	pages := chunk.Pages()
	defer pages.Close()
	for {
		if f.ctx.Err() != nil {
			return 0, f.ctx.Err()
		}
		page, err := pages.ReadPage()
		if err == io.EOF {
			return got, nil
		}
		if err != nil {
			return 0, f.damaged(err)
		}
		if got+page.NumValues() > rows {
			parquet.Release(page)
			return 0, f.damaged(errors.New("more values than rows"))
		}
		values := page.Values()
		for {
			n, err := values.ReadValues(buffer)
			for i := range buffer[:n] {
				got++
				if kind := l.add(&buffer[i]); kind != reader.NoFault {
					x := reader.Fault{Kind: kind, Record: record + got, FieldName: l.name, Want: l.kind, Text: buffer[i].String()}
					parquet.Release(page)
					return 0, reader.One(f.src, x)
				}
			}
			if l.bytes || err == io.EOF {
				break
			}
			if err != nil {
				parquet.Release(page)
				return 0, f.damaged(err)
			}
			if n == 0 {
				parquet.Release(page)
				return 0, f.damaged(io.ErrNoProgress)
			}
		}
		parquet.Release(page)
		if l.bytes {
			return got, nil
		}
	}
}
