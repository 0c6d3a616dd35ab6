package column

// Builder collects values of one type, one after the other, into a Vector.
// The zero Builder is not usable; see NewBuilder.
type Builder struct {
	v     Vector
	nulls bool
	codes map[string]uint32
}

// NewBuilder starts a column of the type.
func NewBuilder(t Type, unit *Unit) *Builder {
	b := &Builder{v: Vector{Type: t, Unit: unit}}
	if t == Text {
		b.v.Dict = &Dict{}
		b.codes = map[string]uint32{}
	}
	return b
}

// Len is the number of values so far.
func (b *Builder) Len() int { return b.v.N }

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
		b.codeOf("") // a NULL slot holds code 0, which must exist
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
// builder) or a NULL of any type.
func (b *Builder) Append(x Value) {
	switch {
	case x.Null || x.Type == Null:
		b.AppendNull()
	case b.v.Type == Real && x.Type == Integer:
		b.AppendFloat(float64(x.I))
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

func (b *Builder) codeOf(s string) uint32 {
	if c, ok := b.codes[s]; ok {
		return c
	}
	c := uint32(len(b.v.Dict.Texts))
	b.v.Dict.Texts = append(b.v.Dict.Texts, s)
	b.codes[s] = c
	return c
}

// Finish is the column. The builder must not be used afterwards.
func (b *Builder) Finish() Vector {
	v := b.v
	if !b.nulls {
		v.Valid = nil
	}
	return v
}
