package column

// Gather is the vector of the given rows of v, in that order; row -1 gives
// NULL. The dictionary of a text vector is shared.
func Gather(v *Vector, rows []int32) Vector {
	out := New(v.Type, v.Unit, len(rows))
	if v.Type == Null {
		return out
	}
	if v.Type == Text {
		out.Dict = v.Dict.withText()
	}
	gatherValues(&out, v, rows)
	if v.Valid != nil {
		for i, r := range rows {
			if r < 0 || !Bit(v.Valid, int(r)) {
				out.SetNull(i)
			}
		}
		return out
	}
	for i, r := range rows {
		if r < 0 {
			out.SetNull(i)
		}
	}
	return out
}

// gatherValues copies the values; the place of a row -1 stays zero.
func gatherValues(out, v *Vector, rows []int32) {
	switch v.Type {
	case Integer, Timestamp, Interval:
		for i, r := range rows {
			if r >= 0 {
				out.I[i] = v.I[r]
			}
		}
	case Real:
		for i, r := range rows {
			if r >= 0 {
				out.F[i] = v.F[r]
			}
		}
	case Point:
		for i, r := range rows {
			if r >= 0 {
				copy(out.F[3*i:3*i+3], v.F[3*r:3*r+3])
			}
		}
	case Text:
		for i, r := range rows {
			if r >= 0 {
				out.C[i] = v.C[r]
			}
		}
	case Boolean:
		for i, r := range rows {
			if r >= 0 && Bit(v.Bits, int(r)) {
				SetBit(out.Bits, i)
			}
		}
	}
}

// withText is the dictionary, or one with a single empty text where it has
// none: the code 0 of a NULL slot must exist.
func (d *Dict) withText() *Dict {
	if d == nil || len(d.Texts) == 0 {
		return &Dict{Texts: []string{""}}
	}
	return d
}

// GatherTable is the table of the given rows, in that order; row -1 gives a row
// of NULLs.
func GatherTable(t *Table, rows []int32) *Table {
	out := &Table{Schema: t.Schema, Cols: make([]Vector, len(t.Cols)), N: len(rows)}
	for i := range t.Cols {
		out.Cols[i] = Gather(&t.Cols[i], rows)
	}
	return out
}

// Concat puts vectors of one type after each other; those of type Null give
// NULLs. The unit is that of the first vector that is not of type Null.
// Dictionaries are merged; one that all share is kept. It panics where the
// types differ, except that Integer vectors may follow a Real one.
func Concat(vs ...*Vector) Vector {
	n := 0
	var first *Vector
	for _, v := range vs {
		n += v.N
		if first == nil && v.Type != Null {
			first = v
		}
	}
	if first == nil {
		return Vector{N: n}
	}
	b := NewBuilder(first.Type, first.Unit)
	b.Grow(n)
	shared := first.Type == Text
	for _, v := range vs {
		shared = shared && (v.Type == Null || v.Dict == first.Dict)
	}
	if shared {
		b.v.Dict = first.Dict.withText()
		b.borrowed = true
	}
	for _, v := range vs {
		b.AppendVector(v, nil)
	}
	return b.Finish()
}
