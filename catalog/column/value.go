package column

// Value is a single value: a constant, a parameter, a cell of a result.
type Value struct {
	Type Type
	Null bool
	I    int64      // Integer, Timestamp, Interval; Boolean as 0 and 1
	F    float64    // Real
	S    string     // Text
	P    [3]float64 // Point
	Unit *Unit
}

// NullOf is the NULL of a type.
func NullOf(t Type) Value { return Value{Type: t, Null: true} }

// Int, Float, String and Bool make values without a unit.
func Int(i int64) Value     { return Value{Type: Integer, I: i} }
func Float(f float64) Value { return Value{Type: Real, F: f} }
func String(s string) Value { return Value{Type: Text, S: s} }
func Bool(b bool) Value {
	if b {
		return Value{Type: Boolean, I: 1}
	}
	return Value{Type: Boolean}
}

// Value is value i on its own.
func (v *Vector) Value(i int) Value {
	x := Value{Type: v.Type, Unit: v.Unit}
	if v.IsNull(i) {
		x.Null = true
		return x
	}
	switch v.Type {
	case Integer, Timestamp, Interval:
		x.I = v.I[i]
	case Real:
		x.F = v.F[i]
	case Point:
		copy(x.P[:], v.F[3*i:3*i+3])
	case Text:
		x.S = v.Dict.Texts[v.C[i]]
	case Boolean:
		if Bit(v.Bits, i) {
			x.I = 1
		}
	}
	return x
}

// Table is a whole table in memory (or mapped): one vector a field, each N long.
type Table struct {
	Schema Schema
	Cols   []Vector
	N      int
}

// Batch is a view of rows lo..hi-1 of the table, all active; lo must be a
// multiple of 64.
func (t *Table) Batch(lo, hi int) Batch {
	b := Batch{N: hi - lo, Cols: make([]Vector, len(t.Cols))}
	for i := range t.Cols {
		b.Cols[i] = t.Cols[i].Slice(lo, hi)
	}
	return b
}
