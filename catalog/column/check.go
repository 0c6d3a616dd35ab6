package column

import (
	"fmt"
	"math"
)

// Equal reports whether two vectors have the same type, unit, length and
// values: numbers by their bits, texts by what they say and not by their codes.
func Equal(a, b *Vector) bool { return Diff(a, b) == "" }

// Diff says in one line where two vectors differ first, "" if they are Equal.
func Diff(a, b *Vector) string {
	switch {
	case a.Type != b.Type:
		return fmt.Sprintf("type %s, not %s", a.Type, b.Type)
	case !SameUnit(a.Unit, b.Unit):
		return fmt.Sprintf("unit %q, not %q", a.Unit, b.Unit)
	case a.N != b.N:
		return fmt.Sprintf("%d values, not %d", a.N, b.N)
	}
	for i := range a.N {
		if !sameValue(a.Value(i), b.Value(i)) {
			return fmt.Sprintf("value %d: %s, not %s", i, show(a, i), show(b, i))
		}
	}
	return ""
}

func show(v *Vector, i int) string {
	if v.IsNull(i) {
		return "NULL"
	}
	if v.Type == Text {
		return fmt.Sprintf("%q", v.Text(i))
	}
	return v.Value(i).String()
}

// sameValue compares two values of one type.
func sameValue(a, b Value) bool {
	if a.Null || b.Null {
		return a.Null == b.Null
	}
	if a.I != b.I || a.S != b.S || !sameBits(a.F, b.F) {
		return false
	}
	for k := range a.P {
		if !sameBits(a.P[k], b.P[k]) {
			return false
		}
	}
	return true
}

func sameBits(a, b float64) bool { return math.Float64bits(a) == math.Float64bits(b) }

// DiffTables says in one line where two tables differ first, "" if they have
// the same schema and equal columns.
func DiffTables(a, b *Table) string {
	if a.N != b.N || len(a.Cols) != len(b.Cols) || len(a.Schema) != len(b.Schema) {
		return fmt.Sprintf("%d rows of %d columns, not %d of %d", a.N, len(a.Cols), b.N, len(b.Cols))
	}
	for i, f := range a.Schema {
		g := b.Schema[i]
		if f.Name != g.Name || f.Type != g.Type || f.Meaning != g.Meaning || !SameUnit(f.Unit, g.Unit) {
			return fmt.Sprintf("field %d is %s %s %q (%s), not %s %s %q (%s)", i,
				f.Name, f.Type, f.Unit, f.Meaning, g.Name, g.Type, g.Unit, g.Meaning)
		}
		if d := Diff(&a.Cols[i], &b.Cols[i]); d != "" {
			return "column " + f.Name + ": " + d
		}
	}
	return ""
}

// Validate checks that a vector keeps the rules of the package: the slices its
// type uses are long enough and the others nil, NULL slots and the bits beyond N
// are zero, codes are in the dictionary, no NaN is present.
func (v *Vector) Validate() error {
	if err := v.validateSlices(); err != nil {
		return err
	}
	for i := range v.N {
		if err := v.validateSlot(i); err != nil {
			return err
		}
	}
	if err := clearBeyond("Valid", v.Valid, v.N); err != nil {
		return err
	}
	return clearBeyond("Bits", v.Bits, v.N)
}

func (v *Vector) validateSlices() error {
	want := func(name string, have, need int, used bool) error {
		if used && have != need || !used && have != 0 {
			return fmt.Errorf("column: %s of a %s vector of %d has length %d", name, v.Type, v.N, have)
		}
		return nil
	}
	reals := v.N
	if v.Type == Point {
		reals = 3 * v.N
	}
	for _, err := range []error{
		want("I", len(v.I), v.N, v.Type.Counted()),
		want("F", len(v.F), reals, v.Type == Real || v.Type == Point),
		want("C", len(v.C), v.N, v.Type == Text),
		want("Bits", len(v.Bits), Words(v.N), v.Type == Boolean),
		want("Valid", len(v.Valid), Words(v.N), v.Valid != nil),
	} {
		if err != nil {
			return err
		}
	}
	if (v.Dict != nil) != (v.Type == Text) {
		return fmt.Errorf("column: a %s vector with or without a dictionary", v.Type)
	}
	return nil
}

func (v *Vector) validateSlot(i int) error {
	null := v.IsNull(i)
	zero := true
	switch v.Type {
	case Integer, Timestamp, Interval:
		zero = v.I[i] == 0
	case Real:
		zero = math.Float64bits(v.F[i]) == 0
		if v.F[i] != v.F[i] {
			return fmt.Errorf("column: value %d is NaN", i)
		}
	case Point:
		for _, f := range v.F[3*i : 3*i+3] {
			zero = zero && math.Float64bits(f) == 0
			if f != f {
				return fmt.Errorf("column: point %d has a NaN", i)
			}
		}
	case Text:
		zero = v.C[i] == 0
		if int(v.C[i]) >= len(v.Dict.Texts) {
			return fmt.Errorf("column: value %d has code %d of %d texts", i, v.C[i], len(v.Dict.Texts))
		}
	case Boolean:
		zero = !Bit(v.Bits, i)
	}
	if null && !zero {
		return fmt.Errorf("column: value %d is NULL and not zero", i)
	}
	return nil
}

func clearBeyond(name string, b []uint64, n int) error {
	if r := uint(n) & 63; r != 0 && len(b) > 0 && b[len(b)-1]>>r != 0 {
		return fmt.Errorf("column: %s has bits beyond value %d", name, n)
	}
	return nil
}

// Validate checks the columns of a table, and that they fit its schema.
func (t *Table) Validate() error {
	if len(t.Cols) != len(t.Schema) {
		return fmt.Errorf("column: %d columns for %d fields", len(t.Cols), len(t.Schema))
	}
	for i := range t.Cols {
		c, f := &t.Cols[i], t.Schema[i]
		if c.N != t.N || c.Type != f.Type || !SameUnit(c.Unit, f.Unit) {
			return fmt.Errorf("column: %s is %d values %s [%s] in a table of %d rows where the field says %s [%s]",
				f.Name, c.N, c.Type, c.Unit, t.N, f.Type, f.Unit)
		}
		if err := c.Validate(); err != nil {
			return fmt.Errorf("%s: %w", f.Name, err)
		}
	}
	return nil
}
