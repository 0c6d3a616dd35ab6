package las

import (
	"bytes"
	"context"
	"encoding/binary"
	"fmt"
	"math"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

// Reader reads LAS files.
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
		result, err := readFile(ctx, src, &o, func(at int) {
			if o.Progress != nil {
				o.Progress(done+int64(at), total)
			}
		})
		done += int64(len(src.Data))
		return result, err
	})
}

// header is what a file says of itself.
type header struct {
	major, minor byte
	format       byte
	size         int   // of the header
	start        int64 // of the points
	length       int   // of a point
	count        uint64
	records      uint32 // of variable length, behind the header
	scale        [3]float64
	offset       [3]float64
}

// pointLength is that of each point format.
var pointLength = [...]int{20, 28, 26, 34, 57, 63, 30, 36, 38, 59, 67}

func readHeader(data []byte) (*header, *reader.Fault) {
	if !bytes.HasPrefix(data, []byte("LASF")) {
		if len(data) == 0 {
			return nil, &reader.Fault{Kind: reader.EmptyFile}
		}
		return nil, &reader.Fault{Kind: reader.NotTheFormat, Detail: "LAS"}
	}
	if len(data) < 227 {
		return nil, &reader.Fault{Kind: reader.CutShort, Text: "header", Got: len(data), Expected: 227}
	}
	le := binary.LittleEndian
	h := &header{
		major: data[24], minor: data[25], size: int(le.Uint16(data[94:])), start: int64(le.Uint32(data[96:])),
		records: le.Uint32(data[100:]), format: data[104], length: int(le.Uint16(data[105:])), count: uint64(le.Uint32(data[107:])),
	}
	least := 227
	switch {
	case h.major != 1 || h.minor > 4:
		return nil, &reader.Fault{Kind: reader.NotSupported, Text: fmt.Sprintf("version %d.%d", h.major, h.minor), Detail: "LAS"}
	case h.format&0xC0 != 0:
		return nil, &reader.Fault{Kind: reader.NotSupported, Text: "LAZ", Detail: "LAS"}
	case int(h.format) >= len(pointLength):
		return nil, &reader.Fault{Kind: reader.NotSupported, Text: fmt.Sprintf("point format %d", h.format), Detail: "LAS"}
	case h.minor == 3:
		least = 235
	case h.minor == 4:
		least = 375
	}
	switch {
	case h.size < least:
		return nil, &reader.Fault{Kind: reader.Damaged, Text: "header", Got: h.size, Expected: least, Detail: "header size"}
	case len(data) < h.size:
		return nil, &reader.Fault{Kind: reader.CutShort, Text: "header", Got: len(data), Expected: h.size}
	case h.length < pointLength[h.format]:
		return nil, &reader.Fault{Kind: reader.Damaged, Text: "header", Got: h.length, Expected: pointLength[h.format], Detail: "length of a point"}
	case h.start < int64(h.size):
		return nil, &reader.Fault{Kind: reader.Damaged, Text: "header", Got: int(h.start), Expected: h.size, Detail: "start of the points"}
	}
	if h.minor == 4 {
		if n := le.Uint64(data[247:]); n != h.count {
			if h.count != 0 && n != 0 {
				return nil, &reader.Fault{Kind: reader.Damaged, Text: "header", Got: int(min(n, math.MaxInt64)), Expected: int(h.count), Detail: "number of points"}
			}
			h.count = max(n, h.count)
		}
	}
	for i := range 3 {
		h.scale[i] = math.Float64frombits(le.Uint64(data[131+8*i:]))
		h.offset[i] = math.Float64frombits(le.Uint64(data[155+8*i:]))
		if !plausible(h.scale[i], h.offset[i]) {
			return nil, &reader.Fault{Kind: reader.Damaged, Text: "header", Detail: "scale or offset"}
		}
	}
	have := max(int64(len(data))-h.start, 0)
	if fit := uint64(have) / uint64(h.length); h.count > fit {
		return nil, &reader.Fault{Kind: reader.CutShort, Text: "points", Got: int(fit), Expected: int(min(h.count, math.MaxInt64))}
	}
	return h, nil
}

// plausible bounds scale and offset to what lengths can be: a flipped bit may give 300
// digits, which would be worked out for every point.
func plausible(scale, offset float64) bool {
	const most = 1e30
	small := math.Abs(offset) < 1/most && offset != 0
	return math.Abs(scale) > 1/most && math.Abs(scale) < most && math.Abs(offset) < most && !small
}

// readFile reads one file.
func readFile(ctx context.Context, src *reader.Source, o *reader.Options, progress func(int)) (*reader.Result, error) {
	h, bad := readHeader(src.Data)
	if bad != nil {
		return nil, reader.One(src, *bad)
	}
	extra, notes, bad := h.describedBytes(src.Data)
	if bad != nil {
		return nil, reader.One(src, *bad)
	}
	fields := h.fields()
	fields = append(fields, extra...)
	names := map[string]int{}
	for i := range fields {
		for names[fields[i].name] > 0 { // an extra field that is called like one of the format
			fields[i].name += "_extra"
		}
		names[fields[i].name]++
	}
	table, bad, err := h.build(ctx, src.Data, fields, progress)
	if err != nil {
		return nil, err
	}
	if bad != nil {
		return nil, reader.One(src, *bad)
	}
	result := reader.OfTable(src, table, o)
	result.Facts.Format = fmt.Sprintf("LAS %d.%d, point format %d", h.major, h.minor, h.format)
	result.Facts.Columns = append(result.Facts.Columns, notes...)
	for i := range fields {
		if n := fields[i].none; n > 0 {
			result.Facts.AddNote(reader.ColumnNote{Column: fields[i].name, Kind: reader.NoDataMissing, Count: n})
		}
	}
	return result, nil
}

// build makes the columns, field by field.
func (h *header) build(ctx context.Context, data []byte, fields []field, progress func(int)) (*column.Table, *reader.Fault, error) {
	n := int(h.count)
	t := &column.Table{N: n}
	points := data[h.start : h.start+int64(n)*int64(h.length)]
	for k := range fields {
		f := &fields[k]
		b := column.NewBuilder(f.kind, f.unit)
		b.Grow(n)
		for i := range n {
			if i&(1<<16-1) == 0 && ctx.Err() != nil {
				return nil, nil, ctx.Err()
			}
			if x := f.read(f, points[i*h.length:(i+1)*h.length], b); x != reader.NoFault {
				return nil, &reader.Fault{Kind: x, Record: int64(i) + 1, FieldName: f.name, Want: f.kind}, nil
			}
		}
		v := b.Finish()
		t.Cols = append(t.Cols, v)
		t.Schema = append(t.Schema, column.Field{Name: f.name, Type: f.kind, Unit: f.unit, Meaning: f.meaning})
		progress(len(data) / len(fields) * (k + 1))
	}
	return t, nil, nil
}
