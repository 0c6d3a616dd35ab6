package column

import "math/bits"

// Vector is one column of N values; which of the slices is in use follows from
// Type: I for Integer, Timestamp and Interval, F for Real (N long) and Point
// (3N long, x y z interleaved), C with Dict for Text, Bits for Boolean.
// A vector of type Null has no slice at all; each of its values is NULL.
type Vector struct {
	Type  Type
	Unit  *Unit
	N     int
	I     []int64
	F     []float64
	C     []uint32
	Dict  *Dict
	Bits  []uint64
	Valid []uint64 // nil: no NULL; else bit i is set where value i is present
}

// Dict is the list of distinct texts that the codes of a text vector refer to.
// It is immutable once a vector uses it; equal pointers mean equal codes.
type Dict struct {
	Texts []string
}

// Batch is a run of rows: N values in each column. On, where not nil, is the
// set of active rows: only for those values are computed and errors raised.
type Batch struct {
	N    int
	Cols []Vector
	On   []uint64
}

// Words is the number of 64-bit words of a bitmap over n rows.
func Words(n int) int { return (n + 63) >> 6 }

// Bit reports whether bit i of a bitmap is set.
func Bit(b []uint64, i int) bool { return b[i>>6]>>(uint(i)&63)&1 != 0 }

// SetBit sets bit i of a bitmap.
func SetBit(b []uint64, i int) { b[i>>6] |= 1 << (uint(i) & 63) }

// ClearBit clears bit i of a bitmap.
func ClearBit(b []uint64, i int) { b[i>>6] &^= 1 << (uint(i) & 63) }

// AllOn is a bitmap with the first n bits set and the rest of its last word clear.
func AllOn(n int) []uint64 {
	b := make([]uint64, Words(n))
	FillOn(b, n)
	return b
}

// FillOn sets the first n bits of b and clears what is left of the last word.
func FillOn(b []uint64, n int) {
	for i := range b {
		b[i] = ^uint64(0)
	}
	if r := uint(n) & 63; r != 0 && len(b) > 0 {
		b[len(b)-1] = 1<<r - 1
	}
}

// Count is the number of set bits.
func Count(b []uint64) int {
	n := 0
	for _, w := range b {
		n += bits.OnesCount64(w)
	}
	return n
}

// IsNull reports whether value i is NULL.
func (v *Vector) IsNull(i int) bool {
	return v.Type == Null || v.Valid != nil && !Bit(v.Valid, i)
}

// NullCount is the number of NULLs.
func (v *Vector) NullCount() int {
	switch {
	case v.Type == Null:
		return v.N
	case v.Valid == nil:
		return 0
	}
	return v.N - Count(v.Valid[:Words(v.N)])
}

// Text is the text of value i, "" where it is NULL.
func (v *Vector) Text(i int) string {
	if v.IsNull(i) {
		return ""
	}
	return v.Dict.Texts[v.C[i]]
}

// Slice is a view of rows lo..hi-1; lo must be a multiple of 64, so that the
// bitmaps can be shared (they are copied where hi is neither a multiple of 64
// nor the end of the vector).
func (v *Vector) Slice(lo, hi int) Vector {
	if lo&63 != 0 {
		panic("column: a slice must begin at a multiple of 64")
	}
	s := Vector{Type: v.Type, Unit: v.Unit, N: hi - lo, Dict: v.Dict}
	switch v.Type {
	case Integer, Timestamp, Interval:
		s.I = v.I[lo:hi:hi]
	case Real:
		s.F = v.F[lo:hi:hi]
	case Point:
		s.F = v.F[3*lo : 3*hi : 3*hi]
	case Text:
		s.C = v.C[lo:hi:hi]
	case Boolean:
		s.Bits = sliceBits(v.Bits, lo, hi, v.N)
	}
	if v.Valid != nil {
		s.Valid = sliceBits(v.Valid, lo, hi, v.N)
	}
	return s
}

// sliceBits is the bitmap of rows lo..hi-1 of n. It is shared, unless its last
// word has bits of rows behind the slice; then it is copied without them.
func sliceBits(b []uint64, lo, hi, n int) []uint64 {
	s := b[lo>>6 : lo>>6+Words(hi-lo) : lo>>6+Words(hi-lo)]
	if hi < n && hi&63 != 0 && hi > lo {
		s = append([]uint64(nil), s...)
		clearTail(s, hi-lo)
	}
	return s
}

// New is a vector of n values of the type, all zero and none NULL, ready to be
// filled. For Text it has an empty dictionary of its own.
func New(t Type, unit *Unit, n int) Vector {
	v := Vector{Type: t, Unit: unit, N: n}
	switch t {
	case Integer, Timestamp, Interval:
		v.I = make([]int64, n)
	case Real:
		v.F = make([]float64, n)
	case Point:
		v.F = make([]float64, 3*n)
	case Text:
		v.C = make([]uint32, n)
		v.Dict = &Dict{}
	case Boolean:
		v.Bits = make([]uint64, Words(n))
	}
	return v
}

// SetNull makes value i NULL and zero.
func (v *Vector) SetNull(i int) {
	if v.Type == Null {
		return
	}
	if v.Valid == nil {
		v.Valid = AllOn(v.N)
	}
	ClearBit(v.Valid, i)
	switch v.Type {
	case Integer, Timestamp, Interval:
		v.I[i] = 0
	case Real:
		v.F[i] = 0
	case Point:
		v.F[3*i], v.F[3*i+1], v.F[3*i+2] = 0, 0, 0
	case Text:
		v.C[i] = 0
	case Boolean:
		ClearBit(v.Bits, i)
	}
}
