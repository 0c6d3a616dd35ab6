package store

import (
	"errors"
	"fmt"
	"io"

	"github.com/apache/arrow-go/v18/arrow"
	"github.com/apache/arrow-go/v18/arrow/array"
	"github.com/apache/arrow-go/v18/arrow/ipc"
	"github.com/apache/arrow-go/v18/arrow/memory"
)

// Array is a run of numbers of any length with a name. One of the slices holds them; an
// empty array is in none.
type Array struct {
	Name string
	I32  []int32
	F64  []float64
	U8   []uint8
}

// Arrays are what a record keeps instead of a table, where the lengths differ.
type Arrays []Array

// Find is the array of a name, an empty one if there is none.
func (a Arrays) Find(name string) Array {
	for i := range a {
		if a[i].Name == name {
			return a[i]
		}
	}
	return Array{}
}

// EncodeArrays writes arrays as an Arrow IPC file of one row: each array is a list in it.
func EncodeArrays(w io.Writer, arrays Arrays) error {
	fields := make([]arrow.Field, len(arrays))
	lists := make([]arrow.Array, len(arrays))
	for i, a := range arrays {
		t, n, values := arrow.DataType(arrow.PrimitiveTypes.Uint8), len(a.U8), a.U8
		switch {
		case a.I32 != nil:
			t, n, values = arrow.PrimitiveTypes.Int32, len(a.I32), arrow.Int32Traits.CastToBytes(a.I32)
		case a.F64 != nil:
			t, n, values = arrow.PrimitiveTypes.Float64, len(a.F64), arrow.Float64Traits.CastToBytes(a.F64)
		}
		child := array.NewData(t, n, []*memory.Buffer{nil, memory.NewBufferBytes(values)}, nil, 0, 0)
		ends := memory.NewBufferBytes(arrow.Int64Traits.CastToBytes([]int64{0, int64(n)}))
		list := arrow.LargeListOfNonNullable(t)
		lists[i] = array.MakeFromData(array.NewData(list, 1, []*memory.Buffer{nil, ends}, []arrow.ArrayData{child}, 0, 0))
		fields[i] = arrow.Field{Name: a.Name, Type: list}
	}
	schema := arrow.NewSchema(fields, nil)
	out, err := ipc.NewFileWriter(w, ipc.WithSchema(schema))
	if err != nil {
		return err
	}
	if err := out.Write(array.NewRecordBatch(schema, lists, 1)); err != nil {
		return err
	}
	return out.Close()
}

// DecodeArrays reads what EncodeArrays wrote. The arrays are views of data where it is
// aligned for them, and then good as long as data is.
func DecodeArrays(data []byte) (arrays Arrays, err error) {
	defer func() {
		if p := recover(); p != nil {
			arrays, err = nil, fmt.Errorf("store: malformed Arrow file: %v", p)
		}
	}()
	m, err := newMessages(data)
	if err != nil {
		return nil, err
	}
	in, err := ipc.NewReaderFromMessageReader(m)
	if err != nil {
		return nil, err
	}
	rec, err := in.Read()
	if err != nil {
		return nil, err
	}
	if rec.NumRows() != 1 {
		return nil, errors.New("store: not one row of arrays")
	}
	for i, f := range in.Schema().Fields() {
		a, err := listed(rec.Column(i).Data())
		if err != nil {
			return nil, fmt.Errorf("store: array %s: %w", f.Name, err)
		}
		a.Name = f.Name
		arrays = append(arrays, a)
	}
	return arrays, nil
}

// listed is the view of the one list of a column.
func listed(data arrow.ArrayData) (a Array, err error) {
	t, ok := data.DataType().(*arrow.LargeListType)
	if !ok || data.Offset() != 0 || data.Children()[0].Offset() != 0 {
		return a, fmt.Errorf("unexpected type %s", data.DataType())
	}
	ends, err := view[int64](buffer(data, 1), 2)
	if err != nil {
		return a, err
	}
	values := data.Children()[0]
	n := values.Len()
	if ends[0] != 0 || ends[1] != int64(n) {
		return a, errors.New("a list that is not all of its values")
	}
	b := buffer(values, 1)
	switch t.Elem().ID() {
	case arrow.INT32:
		a.I32, err = view[int32](b, n)
	case arrow.FLOAT64:
		a.F64, err = view[float64](b, n)
	case arrow.UINT8:
		a.U8, err = view[uint8](b, n)
	default:
		err = fmt.Errorf("unexpected type %s", t)
	}
	return a, err
}
