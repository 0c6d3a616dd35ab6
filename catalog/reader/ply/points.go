package ply

import (
	"context"
	"errors"
	"math"
	"strings"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

// Reader reads the vertices of PLY files as rows: every property that is one number is
// a column, INTEGER or REAL as the file has it.
type Reader struct{}

var _ reader.Reader = Reader{}

// Read implements reader.Reader.
func (r Reader) Read(ctx context.Context, src *reader.Source, o reader.Options) (*reader.Result, error) {
	return r.ReadFiles(ctx, []*reader.Source{src}, o)
}

// ReadFiles implements reader.Reader.
func (Reader) ReadFiles(ctx context.Context, sources []*reader.Source, o reader.Options) (*reader.Result, error) {
	return reader.EachFile(sources, &o, func(src *reader.Source) (*reader.Result, error) {
		r, err := readPoints(ctx, src, &o)
		var bad *reader.MeshFault
		if errors.As(err, &bad) {
			return nil, reader.One(src, faultOf(bad))
		}
		return r, err
	})
}

// faultOf is a fault of a mesh as one of a table.
func faultOf(m *reader.MeshFault) reader.Fault {
	f := reader.Fault{Line: m.Line, Text: m.Text, Got: int(m.Got), Expected: int(m.Expected), Detail: m.Want, Want: column.Real}
	if m.Line == 0 {
		f.Record = m.Got + 1
	}
	switch m.Kind {
	case reader.MeshCut:
		f.Kind, f.Record = reader.CutShort, 0
		if m.Want == "end_header" {
			f.Text = "header"
		}
	case reader.MeshNumber:
		f.Kind = reader.NotANumber
		if f.Line == 0 {
			f.Kind, f.Detail = reader.Damaged, m.Want
		}
	case reader.MeshNotFinite:
		f.Kind = reader.NotFinite
	case reader.MeshNoPlace:
		f.Kind, f.Detail = reader.NothingToRead, ""
	case reader.MeshTooLarge:
		f.Kind = reader.TooLarge
	default:
		f.Kind = reader.Damaged
		if f.Detail = m.Text; f.Text != "header" {
			f.Text = "header"
		}
	}
	return f
}

func readPoints(ctx context.Context, src *reader.Source, o *reader.Options) (*reader.Result, error) {
	if !Is(src.Data) {
		if len(src.Data) == 0 {
			return nil, reader.One(src, reader.Fault{Kind: reader.EmptyFile})
		}
		return nil, reader.One(src, reader.Fault{Kind: reader.NotTheFormat, Detail: "PLY"})
	}
	h, err := readHeader(src.Data)
	if err != nil {
		return nil, err
	}
	in := h.source()
	var result *reader.Result
	unread := 0
	for _, e := range h.elements {
		if e.name != "vertex" {
			unread += int(min(e.count, math.MaxInt32))
			if result == nil {
				err = skip(in, e) // behind the vertices nothing is of interest
			}
		} else if result == nil {
			result, err = rows(ctx, src, in, e, o)
		}
		if err != nil {
			return nil, err
		}
	}
	if result == nil {
		return nil, &reader.MeshFault{Kind: reader.MeshNoPlace, Text: "vertex"}
	}
	result.Facts.Format = "PLY, " + h.formatName()
	result.Facts.Unread = unread
	return result, nil
}

// rows makes the table of the vertices.
func rows(ctx context.Context, src *reader.Source, in source, e *element, o *reader.Options) (*reader.Result, error) {
	builders := make([]*column.Builder, len(e.properties))
	missing := make([]int, len(e.properties))
	var notes []reader.ColumnNote
	t := &column.Table{}
	seen := map[string]bool{}
	for i, p := range e.properties {
		switch {
		case p.list != 0:
			notes = append(notes, reader.ColumnNote{Column: p.name, Kind: reader.NotRead, Detail: "list"})
			continue
		case seen[p.name]:
			return nil, reader.One(src, reader.Fault{Kind: reader.HeadingRepeated, Line: e.line, Text: p.name})
		}
		seen[p.name] = true
		kind := column.Real
		if p.kind < float32Kind {
			kind = column.Integer
		}
		builders[i] = column.NewBuilder(kind, nil)
		t.Schema = append(t.Schema, column.Field{Name: strings.ToValidUTF8(p.name, "?"), Type: kind})
	}
	if len(t.Schema) == 0 {
		return nil, &reader.MeshFault{Kind: reader.MeshNoPlace, Line: e.line, Text: "vertex"}
	}
	for i := range e.count {
		if i&(1<<16-1) == 0 && ctx.Err() != nil {
			return nil, ctx.Err()
		}
		if err := in.begin(e, i); err != nil {
			return nil, err
		}
		for k, p := range e.properties {
			n := int64(1)
			if p.list != 0 {
				var err error
				if n, err = count(in, p); err != nil {
					return nil, err
				}
			}
			for range n {
				x, err := in.value(p.kind)
				if err != nil {
					return nil, err
				}
				b := builders[k]
				switch {
				case b == nil:
				case math.IsNaN(x):
					missing[k]++
					b.AppendNull()
				case math.IsInf(x, 0):
					return nil, in.fault(reader.MeshNotFinite, "")
				case p.kind >= float32Kind:
					b.AppendFloat(x)
				case x != math.Trunc(x) || x < least[p.kind] || x > most[p.kind]:
					return nil, in.fault(reader.MeshNumber, p.name)
				default:
					b.AppendInt(int64(x))
				}
			}
		}
		t.N++
	}
	for k, b := range builders {
		if b != nil {
			t.Cols = append(t.Cols, b.Finish())
			if missing[k] > 0 {
				notes = append(notes, reader.ColumnNote{Column: e.properties[k].name, Kind: reader.NaNMissing, Count: missing[k]})
			}
		}
	}
	r := reader.OfTable(src, t, o)
	r.Facts.Columns = notes
	return r, nil
}

// The range of each kind of whole number.
var (
	least = [...]float64{0, -1 << 7, 0, -1 << 15, 0, -1 << 31, 0, 0, 0}
	most  = [...]float64{0, 1<<7 - 1, 1<<8 - 1, 1<<15 - 1, 1<<16 - 1, 1<<31 - 1, 1<<32 - 1, 0, 0}
)
