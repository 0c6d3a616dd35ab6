package column

import (
	"fmt"
	"slices"
)

// Builder collects values of one type, one after the other, into a Vector.
// The zero Builder is not usable; see NewBuilder.
type Builder struct {
	v     Vector
	nulls bool

	// For texts: codes finds a text in the dictionary, nil until it is needed.
	// A borrowed dictionary belongs to another vector too and is copied before
	// a text is added. trans turns the codes of the dictionary last appended
	// from into ours, plus 1; 0 where that was not needed yet.
	codes    map[string]uint32
	borrowed bool
	from     *Dict
	trans    []uint32
}

// NewBuilder starts a column of the type.
func NewBuilder(t Type, unit *Unit) *Builder {
	b := &Builder{v: Vector{Type: t, Unit: unit}}
	if t == Text {
		b.v.Dict = &Dict{}
	}
	return b
}

// Len is the number of values so far.
func (b *Builder) Len() int { return b.v.N }

// Grow makes room for n more values.
func (b *Builder) Grow(n int) {
	v := &b.v
	switch v.Type {
	case Integer, Timestamp, Interval:
		v.I = roomy(v.I, n)
	case Real:
		v.F = roomy(v.F, n)
	case Point:
		v.F = roomy(v.F, 3*n)
	case Text:
		v.C = roomy(v.C, n)
	case Boolean:
		v.Bits = roomy(v.Bits, Words(v.N+n)-len(v.Bits))
	}
	v.Valid = roomy(v.Valid, Words(v.N+n)-len(v.Valid))
}

// roomy is the slice with room for n more. Unlike slices.Grow it does not go over memory
// that comes zeroed from the system: of a large column that is its first touch.
func roomy[T any](s []T, n int) []T {
	if n <= cap(s)-len(s) {
		return s
	}
	more := make([]T, len(s), len(s)+n)
	copy(more, s)
	return more
}

// Reset empties the builder, which keeps its memory for the next column of its type: what
// Finish gave before must not be used any longer, but for its dictionary.
func (b *Builder) Reset() {
	v := &b.v
	*b = Builder{v: Vector{Type: v.Type, Unit: v.Unit, I: v.I[:0], F: v.F[:0], C: v.C[:0], Bits: v.Bits[:0], Valid: v.Valid[:0]}}
	if v.Type == Text {
		b.v.Dict = &Dict{}
	}
}

func (b *Builder) grow(valid bool) {
	i := b.v.N
	b.v.N++
	if i&63 == 0 {
		b.v.Valid = append(b.v.Valid, 0)
		if b.v.Type == Boolean {
			b.v.Bits = append(b.v.Bits, 0)
		}
	}
	if valid {
		SetBit(b.v.Valid, i)
	} else {
		b.nulls = true
	}
}

// AppendNull adds a NULL.
func (b *Builder) AppendNull() {
	b.grow(false)
	switch b.v.Type {
	case Integer, Timestamp, Interval:
		b.v.I = append(b.v.I, 0)
	case Real:
		b.v.F = append(b.v.F, 0)
	case Point:
		b.v.F = append(b.v.F, 0, 0, 0)
	case Text:
		b.v.C = append(b.v.C, 0)
		if len(b.v.Dict.Texts) == 0 {
			b.codeOf("") // a NULL slot holds code 0, which must exist
		}
	}
}

// AppendInt adds an Integer, Timestamp or Interval.
func (b *Builder) AppendInt(i int64) { b.grow(true); b.v.I = append(b.v.I, i) }

// AppendFloat adds a Real.
func (b *Builder) AppendFloat(f float64) { b.grow(true); b.v.F = append(b.v.F, f) }

// AppendText adds a Text.
func (b *Builder) AppendText(s string) {
	b.grow(true)
	b.v.C = append(b.v.C, b.codeOf(s))
}

// AppendBytes adds a Text; s is copied only if the column has not got it yet.
func (b *Builder) AppendBytes(s []byte) {
	b.grow(true)
	if c, ok := b.codes[string(s)]; ok {
		b.v.C = append(b.v.C, c)
		return
	}
	b.v.C = append(b.v.C, b.codeOf(string(s)))
}

// AppendBool adds a Boolean.
func (b *Builder) AppendBool(x bool) {
	b.grow(true)
	if x {
		SetBit(b.v.Bits, b.v.N-1)
	}
}

// AppendPoint adds a Point.
func (b *Builder) AppendPoint(p [3]float64) { b.grow(true); b.v.F = append(b.v.F, p[:]...) }

// Append adds a value of the builder's type (an Integer is taken by a Real
// builder) or a NULL of any type. It panics on a value of another type.
func (b *Builder) Append(x Value) {
	switch {
	case x.Null || x.Type == Null:
		b.AppendNull()
	case b.v.Type == Real && x.Type == Integer:
		b.AppendFloat(float64(x.I))
	case b.v.Type != x.Type:
		panic(fmt.Sprintf("column: a %s in a builder of %s", x.Type, b.v.Type))
	case b.v.Type.Counted():
		b.AppendInt(x.I)
	case b.v.Type == Real:
		b.AppendFloat(x.F)
	case b.v.Type == Text:
		b.AppendText(x.S)
	case b.v.Type == Boolean:
		b.AppendBool(x.I != 0)
	case b.v.Type == Point:
		b.AppendPoint(x.P)
	}
}

// AppendVector adds the values of v that on selects, all where on is nil. v
// must have the builder's type or type Null. A builder of texts that holds none
// yet takes over v's dictionary, so that columns keep sharing it.
func (b *Builder) AppendVector(v *Vector, on []uint64) {
	if b.v.Type == Text && v.Type == Text && len(b.v.Dict.Texts) == 0 && len(v.Dict.Texts) > 0 {
		b.v.Dict, b.borrowed, b.codes = v.Dict, true, nil
	}
	if on == nil && v.N > 0 && b.v.Type == v.Type && b.v.Type != Text {
		b.appendWhole(v)
		return
	}
	if on == nil && v.N > 0 && v.Type == Text && b.v.Type == Text && v.Valid == nil {
		b.appendTexts(v)
		return
	}
	for i := range v.N {
		if on == nil || Bit(on, i) {
			b.AppendRow(v, i)
		}
	}
}

// appendWhole adds a whole vector of the builder's type.
func (b *Builder) appendWhole(v *Vector) {
	if v.Type == Null {
		b.v.N += v.N
		return
	}
	b.v.I = append(b.v.I, v.I...)
	b.v.F = append(b.v.F, v.F...)
	if v.Type == Boolean {
		b.v.Bits = appendBits(b.v.Bits, b.v.N, v.Bits, v.N)
	}
	if v.Valid == nil {
		b.v.Valid = appendBits(b.v.Valid, b.v.N, AllOn(v.N), v.N)
	} else {
		b.v.Valid = appendBits(b.v.Valid, b.v.N, v.Valid, v.N)
		b.nulls = b.nulls || v.NullCount() > 0
	}
	b.v.N += v.N
}

// appendTexts adds texts of which none is missing.
func (b *Builder) appendTexts(v *Vector) {
	b.v.Valid = appendBits(b.v.Valid, b.v.N, AllOn(v.N), v.N)
	b.v.N += v.N
	if v.Dict == b.v.Dict {
		b.v.C = append(b.v.C, v.C[:v.N]...)
		return
	}
	if v.Dict != b.from {
		b.from, b.trans = v.Dict, make([]uint32, len(v.Dict.Texts))
	}
	for _, c := range v.C[:v.N] {
		if b.trans[c] == 0 {
			b.trans[c] = b.codeOf(v.Dict.Texts[c]) + 1
		}
		b.v.C = append(b.v.C, b.trans[c]-1)
	}
}

// appendBits adds the first m bits of src behind the first n of dst, beyond which dst
// has none. src may have more, those of a longer vector.
func appendBits(dst []uint64, n int, src []uint64, m int) []uint64 {
	words := Words(n + m)
	shift := uint(n) & 63
	for _, w := range src[:Words(m)] {
		if shift == 0 {
			dst = append(dst, w)
			continue
		}
		dst[len(dst)-1] |= w << shift
		dst = append(dst, w>>(64-shift))
	}
	dst = dst[:words]
	clearTail(dst, n+m)
	return dst
}

// clearTail clears the bits of b's last word beyond bit n. A slice of a longer
// vector may have bits there.
func clearTail(b []uint64, n int) {
	if r := uint(n) & 63; r != 0 {
		b[len(b)-1] &= 1<<r - 1
	}
}

// AppendRow adds value i of v, whose type must be the builder's or Null.
func (b *Builder) AppendRow(v *Vector, i int) {
	switch {
	case v.IsNull(i):
		b.AppendNull()
	case b.v.Type != v.Type:
		b.Append(v.Value(i)) // an Integer for a Real, or a panic
	case v.Type == Real:
		b.AppendFloat(v.F[i])
	case v.Type.Counted():
		b.AppendInt(v.I[i])
	case v.Type == Text:
		b.appendCode(v.Dict, v.C[i])
	default:
		b.Append(v.Value(i))
	}
}

func (b *Builder) appendCode(d *Dict, c uint32) {
	b.grow(true)
	if d == b.v.Dict {
		b.v.C = append(b.v.C, c)
		return
	}
	if d != b.from {
		b.from, b.trans = d, make([]uint32, len(d.Texts))
	}
	if b.trans[c] == 0 {
		b.trans[c] = b.codeOf(d.Texts[c]) + 1
	}
	b.v.C = append(b.v.C, b.trans[c]-1)
}

func (b *Builder) codeOf(s string) uint32 {
	if b.codes == nil {
		b.codes = b.v.Dict.Index()
	}
	if c, ok := b.codes[s]; ok {
		return c
	}
	if b.borrowed {
		b.v.Dict, b.borrowed = &Dict{Texts: slices.Clone(b.v.Dict.Texts)}, false
	}
	c := uint32(len(b.v.Dict.Texts))
	b.v.Dict.Texts = append(b.v.Dict.Texts, s)
	b.codes[s] = c
	return c
}

// Finish is the column. The builder must not be used afterwards.
func (b *Builder) Finish() Vector {
	v := b.v
	if !b.nulls || v.Type == Null {
		v.Valid = nil
	}
	return v
}
