package store

import (
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"strings"
	"unsafe"

	"github.com/apache/arrow-go/v18/arrow"
	"github.com/apache/arrow-go/v18/arrow/array"
	"github.com/apache/arrow-go/v18/arrow/ipc"

	"nearcell/catalog/column"
)

// Decode makes a table of what Encode wrote. Numbers, codes and bitmaps are views
// of data where it is aligned for them, and then good as long as data is; texts
// are copied.
func Decode(data []byte) (t *column.Table, err error) {
	defer func() {
		// the library panics on some malformed files
		if p := recover(); p != nil {
			t, err = nil, fmt.Errorf("store: malformed Arrow file: %v", p)
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
	t = &column.Table{N: int(rec.NumRows())}
	for i, f := range in.Schema().Fields() {
		v, err := vector(rec.Column(i).Data())
		if err != nil {
			return nil, fmt.Errorf("store: column %s: %w", f.Name, err)
		}
		field := column.Field{Name: f.Name, Type: v.Type, Meaning: metadata(f, meaningKey), Unit: column.ParseUnit(metadata(f, unitKey))}
		v.Unit = field.Unit
		t.Schema, t.Cols = append(t.Schema, field), append(t.Cols, v)
	}
	if _, err := in.Read(); !errors.Is(err, io.EOF) {
		return nil, errors.New("store: more than one record batch in an Arrow file")
	}
	return t, nil
}

func metadata(f arrow.Field, key string) string {
	s, _ := f.Metadata.GetValue(key)
	return s
}

var errShort = errors.New("too few bytes for its values")

// vector is the view of an array.
func vector(a arrow.ArrayData) (v column.Vector, err error) {
	if a.Offset() != 0 {
		return v, errors.New("an array that begins inside its buffers")
	}
	v.N = a.Len()
	switch t := a.DataType().(type) {
	case *arrow.NullType:
		return v, nil
	case *arrow.Int64Type:
		v.Type = column.Integer
		v.I, err = view[int64](buffer(a, 1), v.N)
	case *arrow.TimestampType:
		v.Type = column.Timestamp
		v.I, err = view[int64](buffer(a, 1), v.N)
	case *arrow.DurationType:
		v.Type = column.Interval
		v.I, err = view[int64](buffer(a, 1), v.N)
	case *arrow.Float64Type:
		v.Type = column.Real
		v.F, err = view[float64](buffer(a, 1), v.N)
	case *arrow.BooleanType:
		v.Type = column.Boolean
		v.Bits, err = viewBitmap(buffer(a, 1), v.N)
	case *arrow.FixedSizeListType:
		if t.Len() != 3 || t.Elem().ID() != arrow.FLOAT64 || a.Children()[0].Offset() != 0 {
			return v, fmt.Errorf("unexpected type %s", t)
		}
		v.Type = column.Point
		v.F, err = view[float64](buffer(a.Children()[0], 1), 3*v.N)
	case *arrow.DictionaryType:
		if t.IndexType.ID() != arrow.INT32 {
			return v, fmt.Errorf("unexpected type %s", t)
		}
		v.Type = column.Text
		if v.C, err = view[uint32](buffer(a, 1), v.N); err == nil {
			v.Dict, err = texts(a.Dictionary(), t.ValueType)
		}
	default:
		return v, fmt.Errorf("unexpected type %s", t)
	}
	if err == nil && a.NullN() > 0 {
		v.Valid, err = viewBitmap(buffer(a, 0), v.N)
	}
	return v, err
}

func buffer(a arrow.ArrayData, i int) []byte {
	if b := a.Buffers()[i]; b != nil {
		return b.Bytes()
	}
	return nil
}

// texts copies a dictionary: texts may outlive the file.
func texts(a arrow.ArrayData, t arrow.DataType) (*column.Dict, error) {
	var at func(i int) string
	switch t.ID() {
	case arrow.STRING:
		at = array.NewStringData(a).Value
	case arrow.LARGE_STRING:
		at = array.NewLargeStringData(a).Value
	default:
		return nil, fmt.Errorf("unexpected texts %s", t)
	}
	d := &column.Dict{Texts: make([]string, a.Len())}
	advise(d.Texts)
	total := 0
	for i := range d.Texts {
		d.Texts[i] = at(i) // a view, for now
		total += len(d.Texts[i])
	}
	// one allocation for all texts; each is a piece of it
	var all strings.Builder
	all.Grow(total)
	for i, text := range d.Texts {
		all.WriteString(text)
		d.Texts[i] = all.String()[all.Len()-len(text):]
	}
	return d, nil
}

type fixed interface {
	~int64 | ~float64 | ~uint32 | ~uint64 | ~int32 | ~uint8
}

// view reads n values in the machine's byte order, without a copy where the
// bytes are aligned for them.
func view[T fixed](b []byte, n int) ([]T, error) {
	var zero T
	size := int(unsafe.Sizeof(zero))
	if n < 0 || len(b)/size < n {
		return nil, errShort
	}
	if n == 0 {
		return []T{}, nil
	}
	if uintptr(unsafe.Pointer(&b[0]))%unsafe.Alignof(zero) == 0 {
		return unsafe.Slice((*T)(unsafe.Pointer(&b[0])), n), nil
	}
	out := make([]T, n)
	copy(unsafe.Slice((*byte)(unsafe.Pointer(&out[0])), n*size), b)
	return out, nil
}

// littleEndian says whether the words of a bitmap can be read where they are.
var littleEndian = binary.NativeEndian.Uint16([]byte{1, 0}) == 1

// viewBitmap reads the bitmap of n values, whose bytes may end with the last bit.
func viewBitmap(b []byte, n int) ([]uint64, error) {
	if len(b) < (n+7)/8 {
		return nil, errShort
	}
	words := column.Words(n)
	if littleEndian && len(b) >= 8*words {
		return view[uint64](b, words)
	}
	padded := make([]byte, 8*words)
	copy(padded, b)
	out := make([]uint64, words)
	for i := range out {
		out[i] = binary.LittleEndian.Uint64(padded[8*i:])
	}
	return out, nil
}
