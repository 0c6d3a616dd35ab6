package column

// Gather is the vector of the given rows of v, in that order; row -1 gives
// NULL. The dictionary of a text vector is shared.
func Gather(v *Vector, rows []int32) Vector {
	out := New(v.Type, v.Unit, len(rows))
	if v.Type == Text {
		out.Dict = v.Dict.withText()
	}
	for i, r := range rows {
		if r < 0 || v.IsNull(int(r)) {
			out.SetNull(i)
			continue
		}
		switch v.Type {
		case Integer, Timestamp, Interval:
			out.I[i] = v.I[r]
		case Real:
			out.F[i] = v.F[r]
		case Point:
			copy(out.F[3*i:3*i+3], v.F[3*r:3*r+3])
		case Text:
			out.C[i] = v.C[r]
		case Boolean:
			if Bit(v.Bits, int(r)) {
				SetBit(out.Bits, i)
			}
		}
	}
	return out
}

// withText is the dictionary, or one with a single empty text where it has
// none: the code 0 of a NULL slot must exist.
func (d *Dict) withText() *Dict {
	if d == nil || len(d.Texts) == 0 {
		return &Dict{Texts: []string{""}}
	}
	return d
}

// Concat puts vectors of one type (or of type Null) after each other. The unit
// is that of the first; dictionaries are merged.
func Concat(vs ...*Vector) Vector {
	if len(vs) == 0 {
		return Vector{}
	}
	t, unit := Null, vs[0].Unit
	for _, v := range vs {
		if t == Null {
			t = v.Type
		}
	}
	b := NewBuilder(t, unit)
	for _, v := range vs {
		b.AppendVector(v, nil)
	}
	return b.Finish()
}

// AppendVector adds the values of v that on selects, all where on is nil. v
// must have the builder's type or type Null.
func (b *Builder) AppendVector(v *Vector, on []uint64) {
	for i := range v.N {
		if on == nil || Bit(on, i) {
			b.Append(v.Value(i))
		}
	}
}
