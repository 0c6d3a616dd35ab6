package store

import (
	"encoding/binary"
	"fmt"
	"io"
	"math"
	"unicode/utf8"

	"github.com/apache/arrow-go/v18/arrow"
	"github.com/apache/arrow-go/v18/arrow/array"
	"github.com/apache/arrow-go/v18/arrow/ipc"
	"github.com/apache/arrow-go/v18/arrow/memory"

	"nearcell/catalog/column"
)

var (
	timestampType = &arrow.TimestampType{Unit: arrow.Microsecond, TimeZone: "UTC"}
	pointType     = arrow.FixedSizeListOfNonNullable(3, arrow.PrimitiveTypes.Float64)
	textType      = dictionaryOf(arrow.BinaryTypes.String)
	longTextType  = dictionaryOf(arrow.BinaryTypes.LargeString) // where the texts take more than 2 GiB
)

func dictionaryOf(t arrow.DataType) *arrow.DictionaryType {
	return &arrow.DictionaryType{IndexType: arrow.PrimitiveTypes.Int32, ValueType: t}
}

// The keys of a field's metadata.
const (
	unitKey    = "unit"
	meaningKey = "meaning"
)

// Encode writes a table as an Arrow IPC file of one record batch.
func Encode(w io.Writer, t *column.Table) error {
	fields := make([]arrow.Field, len(t.Cols))
	arrays := make([]arrow.Array, len(t.Cols))
	for i := range t.Cols {
		data, err := arrowData(&t.Cols[i])
		if err != nil {
			return fmt.Errorf("store: column %s: %w", t.Schema[i].Name, err)
		}
		arrays[i] = array.MakeFromData(data)
		fields[i] = arrowField(t.Schema[i], data.DataType())
	}
	schema := arrow.NewSchema(fields, nil)
	out, err := ipc.NewFileWriter(w, ipc.WithSchema(schema))
	if err != nil {
		return err
	}
	if err := out.Write(array.NewRecordBatch(schema, arrays, int64(t.N))); err != nil {
		return err
	}
	return out.Close()
}

func arrowField(f column.Field, t arrow.DataType) arrow.Field {
	var keys, values []string
	if f.Unit != nil {
		keys, values = append(keys, unitKey), append(values, f.Unit.String())
	}
	if f.Meaning != "" {
		keys, values = append(keys, meaningKey), append(values, f.Meaning)
	}
	return arrow.Field{Name: f.Name, Type: t, Nullable: true, Metadata: arrow.NewMetadata(keys, values)}
}

// arrowData lays a vector out as Arrow does, which for numbers is as it is.
func arrowData(v *column.Vector) (arrow.ArrayData, error) {
	nulls := v.NullCount()
	var valid *memory.Buffer
	if nulls > 0 && v.Type != column.Null {
		valid = bitmapBuffer(v.Valid, v.N)
	}
	flat := func(t arrow.DataType, values []byte) (arrow.ArrayData, error) {
		return array.NewData(t, v.N, []*memory.Buffer{valid, memory.NewBufferBytes(values)}, nil, nulls, 0), nil
	}
	switch v.Type {
	case column.Null:
		return array.NewData(arrow.Null, v.N, []*memory.Buffer{nil}, nil, v.N, 0), nil
	case column.Integer:
		return flat(arrow.PrimitiveTypes.Int64, arrow.Int64Traits.CastToBytes(v.I))
	case column.Timestamp:
		return flat(timestampType, arrow.Int64Traits.CastToBytes(v.I))
	case column.Interval:
		return flat(arrow.FixedWidthTypes.Duration_us, arrow.Int64Traits.CastToBytes(v.I))
	case column.Real:
		return flat(arrow.PrimitiveTypes.Float64, arrow.Float64Traits.CastToBytes(v.F))
	case column.Boolean:
		return array.NewData(arrow.FixedWidthTypes.Boolean, v.N, []*memory.Buffer{valid, bitmapBuffer(v.Bits, v.N)}, nil, nulls, 0), nil
	case column.Point:
		child := array.NewData(arrow.PrimitiveTypes.Float64, 3*v.N,
			[]*memory.Buffer{nil, memory.NewBufferBytes(arrow.Float64Traits.CastToBytes(v.F))}, nil, 0, 0)
		return array.NewData(pointType, v.N, []*memory.Buffer{valid}, []arrow.ArrayData{child}, nulls, 0), nil
	case column.Text:
		c := column.Compact(v)
		dict, t, err := arrowDict(c.Dict)
		if err != nil {
			return nil, err
		}
		codes := memory.NewBufferBytes(arrow.Uint32Traits.CastToBytes(c.C))
		return array.NewDataWithDictionary(t, v.N, []*memory.Buffer{valid, codes}, nulls, 0, dict), nil
	}
	return nil, fmt.Errorf("no Arrow type for %s", v.Type)
}

// arrowDict lays the texts of a dictionary out one behind the other.
func arrowDict(d *column.Dict) (*array.Data, *arrow.DictionaryType, error) {
	total := 0
	for _, s := range d.Texts {
		if !utf8.ValidString(s) {
			return nil, nil, fmt.Errorf("the text %q is no UTF-8", s)
		}
		total += len(s)
	}
	if len(d.Texts) > math.MaxInt32 {
		return nil, nil, fmt.Errorf("%d distinct texts", len(d.Texts))
	}
	texts := make([]byte, 0, total)
	t := textType
	var offsets []byte
	if total > math.MaxInt32 {
		t = longTextType
		ends := make([]int64, 1, len(d.Texts)+1)
		for _, s := range d.Texts {
			texts = append(texts, s...)
			ends = append(ends, int64(len(texts)))
		}
		offsets = arrow.Int64Traits.CastToBytes(ends)
	} else {
		ends := make([]int32, 1, len(d.Texts)+1)
		for _, s := range d.Texts {
			texts = append(texts, s...)
			ends = append(ends, int32(len(texts)))
		}
		offsets = arrow.Int32Traits.CastToBytes(ends)
	}
	buffers := []*memory.Buffer{nil, memory.NewBufferBytes(offsets), memory.NewBufferBytes(texts)}
	return array.NewData(t.ValueType, len(d.Texts), buffers, nil, 0, 0), t, nil
}

// bitmapBuffer writes a bitmap as bytes, lowest bits first on any machine.
func bitmapBuffer(b []uint64, n int) *memory.Buffer {
	out := make([]byte, 0, 8*column.Words(n))
	for _, w := range b[:column.Words(n)] {
		out = binary.LittleEndian.AppendUint64(out, w)
	}
	return memory.NewBufferBytes(out)
}
