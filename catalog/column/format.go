package column

import (
	"math"
	"strconv"
)

// FormatReal is the shortest text that reads back to the same bits; it uses an
// exponent only below 1e-6 and from 1e15 (so that no whole number comes out that
// a 64-bit integer could not hold). The infinities are Infinity and
// -Infinity.
func FormatReal(f float64) string { return string(AppendReal(nil, f)) }

// AppendReal adds to b what FormatReal writes.
func AppendReal(b []byte, f float64) []byte {
	abs := math.Abs(f)
	switch {
	case math.IsInf(f, 1):
		return append(b, "Infinity"...)
	case math.IsInf(f, -1):
		return append(b, "-Infinity"...)
	case abs != 0 && (abs < 1e-6 || abs >= 1e15):
		return strconv.AppendFloat(b, f, 'e', -1, 64)
	}
	return strconv.AppendFloat(b, f, 'f', -1, 64)
}

// String is the value as results are saved: the empty text for NULL, TRUE and
// FALSE, a time stamp in UTC, numbers that read back to the same bits, texts as
// they are.
func (x Value) String() string {
	if x.Type == Text && !x.Null {
		return x.S
	}
	return string(x.Append(nil))
}

// Append adds to b what String gives.
func (x Value) Append(b []byte) []byte {
	if x.Null {
		return b
	}
	switch x.Type {
	case Integer:
		return strconv.AppendInt(b, x.I, 10)
	case Real:
		return AppendReal(b, x.F)
	case Text:
		return append(b, x.S...)
	case Boolean:
		if x.I != 0 {
			return append(b, "TRUE"...)
		}
		return append(b, "FALSE"...)
	case Timestamp:
		return AppendTimestamp(b, x.I)
	case Interval:
		return AppendInterval(b, x.I)
	case Point:
		b = append(b, "POINT("...)
		for i, f := range x.P {
			if i > 0 {
				b = append(b, ", "...)
			}
			b = AppendReal(b, f)
		}
		return append(b, ')')
	}
	return b
}

// AppendValue adds to b value i of the vector as Value.String writes it.
func (v *Vector) AppendValue(b []byte, i int) []byte {
	if v.IsNull(i) {
		return b
	}
	if v.Type == Text {
		return append(b, v.Dict.Texts[v.C[i]]...)
	}
	return v.Value(i).Append(b)
}
