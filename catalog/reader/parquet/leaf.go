package parquet

import (
	"bytes"
	"encoding/binary"
	"encoding/hex"
	"math"
	"math/big"
	"strconv"
	"unicode/utf8"

	"github.com/parquet-go/parquet-go"
	"github.com/parquet-go/parquet-go/format"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

// The years 1 to 9999 in UTC, in microseconds since 1970: what a TIMESTAMP holds.
const (
	firstTime = -62_135_596_800_000_000
	lastTime  = 253_402_300_800_000_000 - 1
)

// leaf is a column of the file.
type leaf struct {
	name  string
	index int
	kind  column.Type
	b     *column.Builder
	take  func(l *leaf, v *parquet.Value) reader.FaultKind
	naive bool

	scale   int // of decimals
	perUnit int64
	bytes   bool // no text after all: not read

	nans, inexact, rounded int
	firstInexact           string
	unit                   string
}

// newLeaf finds how a column is read; nil and the name of its type where it is not.
func newLeaf(c *parquet.Column, name string) (*leaf, string) {
	t := c.Type()
	l := &leaf{name: name, index: c.Index()}
	physical := t.Kind()
	if logical := t.LogicalType(); logical != nil && logical.Value != nil {
		if as, known := l.logical(logical.Value, physical, t.Length()); known {
			if as != "" {
				return nil, as
			}
			l.b = column.NewBuilder(l.kind, nil)
			return l, ""
		}
	}
	switch physical {
	case parquet.Boolean:
		l.kind, l.take = column.Boolean, takeBool
	case parquet.Int32, parquet.Int64:
		l.kind, l.take = column.Integer, takeInt
	case parquet.Int96:
		l.kind, l.take, l.naive, l.unit = column.Timestamp, takeInt96, true, "nanoseconds"
	case parquet.Float, parquet.Double:
		l.kind, l.take = column.Real, takeFloat
	case parquet.ByteArray, parquet.FixedLenByteArray:
		l.kind, l.take = column.Text, takeBytes
	default:
		return nil, t.String()
	}
	l.b = column.NewBuilder(l.kind, nil)
	return l, ""
}

// logical is how a column with a meaning beyond its bytes is read; not is the name of a
// type that is not read. known is false where the bytes alone tell.
func (l *leaf) logical(x format.LogicalTypeValue, physical parquet.Kind, length int) (not string, known bool) {
	switch x := x.(type) {
	case *format.StringType, *format.EnumType, *format.JsonType:
		l.kind, l.take = column.Text, takeText
	case *format.UUIDType:
		if length != 16 {
			return x.String(), true
		}
		l.kind, l.take = column.Text, takeUUID
	case *format.DecimalType:
		if x.Scale < 0 || x.Scale > 400 || x.Precision < 1 {
			return x.String(), true
		}
		l.kind, l.take, l.scale = column.Real, takeDecimal, int(x.Scale)
		if x.Scale == 0 && x.Precision <= 18 {
			l.kind = column.Integer
		}
	case *format.IntType:
		l.kind, l.take = column.Integer, takeInt
		if !x.IsSigned {
			l.take = takeUnsigned
		}
	case *format.DateType:
		l.kind, l.take, l.naive = column.Timestamp, takeDate, true
	case *format.TimestampType:
		l.kind, l.take, l.naive = column.Timestamp, takeTime, !x.IsAdjustedToUTC
		return l.timeUnit(x.Unit)
	case *format.TimeType:
		l.kind, l.take = column.Interval, takeTime
		return l.timeUnit(x.Unit)
	case *format.Float16Type:
		if length != 2 {
			return x.String(), true
		}
		l.kind, l.take = column.Real, takeHalf
	case *format.NullType:
		l.kind, l.take = column.Real, takeFloat
	case *format.BsonType:
		return "BSON", true
	default:
		return "", false
	}
	return "", true
}

func (l *leaf) timeUnit(u format.TimeUnit) (string, bool) {
	if u.Value == nil {
		return "time without a unit", true
	}
	l.perUnit = int64(u.Value.Duration())
	if l.unit = "milliseconds"; l.perUnit == 1 {
		l.unit = "nanoseconds"
	}
	return "", true
}

// add takes a value.
func (l *leaf) add(v *parquet.Value) reader.FaultKind {
	if v.IsNull() {
		l.b.AppendNull()
		return reader.NoFault
	}
	return l.take(l, v)
}

func takeBool(l *leaf, v *parquet.Value) reader.FaultKind {
	l.b.AppendBool(v.Boolean())
	return reader.NoFault
}

func intOf(v *parquet.Value) int64 {
	if v.Kind() == parquet.Int32 {
		return int64(v.Int32())
	}
	return v.Int64()
}

func takeInt(l *leaf, v *parquet.Value) reader.FaultKind {
	l.b.AppendInt(intOf(v))
	return reader.NoFault
}

func takeUnsigned(l *leaf, v *parquet.Value) reader.FaultKind {
	x := v.Uint64()
	if v.Kind() == parquet.Int32 {
		x = uint64(v.Uint32())
	}
	if x > math.MaxInt64 {
		return reader.BeyondInteger
	}
	l.b.AppendInt(int64(x))
	return reader.NoFault
}

func takeFloat(l *leaf, v *parquet.Value) reader.FaultKind {
	x := 0.0
	if v.Kind() == parquet.Float {
		x = float64(v.Float())
	} else {
		x = v.Double()
	}
	return l.real(x)
}

func (l *leaf) real(x float64) reader.FaultKind {
	switch {
	case math.IsNaN(x):
		l.nans++
		l.b.AppendNull()
	case math.IsInf(x, 0):
		return reader.NotFinite
	default:
		l.b.AppendFloat(x)
	}
	return reader.NoFault
}

// takeHalf reads a float of 16 bits (IEEE 754), low byte first.
func takeHalf(l *leaf, v *parquet.Value) reader.FaultKind {
	b := v.ByteArray()
	if len(b) != 2 {
		return reader.Damaged
	}
	h := binary.LittleEndian.Uint16(b)
	exponent, fraction := int(h>>10&31), float64(h&1023)
	x := 0.0
	switch exponent {
	case 0:
		x = math.Ldexp(fraction, -24)
	case 31:
		if x = math.Inf(1); fraction != 0 {
			x = math.NaN()
		}
	default:
		x = math.Ldexp(1024+fraction, exponent-25)
	}
	if h>>15 != 0 {
		x = -x
	}
	return l.real(x)
}

func takeText(l *leaf, v *parquet.Value) reader.FaultKind {
	b := v.ByteArray()
	if !utf8.Valid(b) {
		return reader.NotUTF8
	}
	l.b.AppendBytes(b)
	return reader.NoFault
}

// takeBytes reads bytes that nothing calls a text.
func takeBytes(l *leaf, v *parquet.Value) reader.FaultKind {
	b := v.ByteArray()
	if !utf8.Valid(b) || bytes.IndexByte(b, 0) >= 0 {
		l.bytes = true
		return reader.NoFault
	}
	l.b.AppendBytes(b)
	return reader.NoFault
}

func takeUUID(l *leaf, v *parquet.Value) reader.FaultKind {
	b := v.ByteArray()
	if len(b) != 16 {
		return reader.Damaged
	}
	h := hex.EncodeToString(b)
	l.b.AppendText(h[:8] + "-" + h[8:12] + "-" + h[12:16] + "-" + h[16:20] + "-" + h[20:])
	return reader.NoFault
}

func takeDecimal(l *leaf, v *parquet.Value) reader.FaultKind {
	switch v.Kind() {
	case parquet.Int32, parquet.Int64:
		n := intOf(v)
		if l.kind == column.Integer {
			l.b.AppendInt(n)
			return reader.NoFault
		}
		if n > -1e15 && n < 1e15 && l.scale <= 22 {
			l.b.AppendFloat(float64(n) / powers[l.scale]) // both exact: rounded once
			return reader.NoFault
		}
		return l.decimal(big.NewInt(n))
	case parquet.ByteArray, parquet.FixedLenByteArray:
		b := v.ByteArray()
		n := new(big.Int).SetBytes(b) // two's complement, high bytes first
		if len(b) > 0 && b[0]&0x80 != 0 {
			n.Sub(n, new(big.Int).Lsh(big.NewInt(1), uint(8*len(b))))
		}
		return l.decimal(n)
	}
	return reader.Damaged
}

// powers are those of ten that float64 holds.
var powers = func() (p [23]float64) {
	p[0] = 1
	for i := 1; i < len(p); i++ {
		p[i] = p[i-1] * 10
	}
	return p
}()

func (l *leaf) decimal(n *big.Int) reader.FaultKind {
	if l.kind == column.Integer {
		if !n.IsInt64() {
			return reader.BeyondInteger
		}
		l.b.AppendInt(n.Int64())
		return reader.NoFault
	}
	text := n.String() + "e-" + strconv.Itoa(l.scale)
	x, err := strconv.ParseFloat(text, 64)
	if err != nil {
		return reader.OutOfRange
	}
	if strconv.FormatFloat(x, 'f', l.scale, 64) != plainDecimal(n, l.scale) {
		if l.inexact++; l.firstInexact == "" {
			l.firstInexact = plainDecimal(n, l.scale)
		}
	}
	l.b.AppendFloat(x)
	return reader.NoFault
}

// plainDecimal writes n / 10^scale.
func plainDecimal(n *big.Int, scale int) string {
	digits := new(big.Int).Abs(n).String()
	for len(digits) <= scale {
		digits = "0" + digits
	}
	if scale > 0 {
		digits = digits[:len(digits)-scale] + "." + digits[len(digits)-scale:]
	}
	if n.Sign() < 0 {
		return "-" + digits
	}
	return digits
}

func takeDate(l *leaf, v *parquet.Value) reader.FaultKind {
	const day = 86_400_000_000
	return l.time(int64(v.Int32()) * day)
}

func (l *leaf) time(us int64) reader.FaultKind {
	if us < firstTime || us > lastTime {
		return reader.NoSuchTime
	}
	l.b.AppendInt(us)
	return reader.NoFault
}

func takeTime(l *leaf, v *parquet.Value) reader.FaultKind {
	n := intOf(v)
	us := n
	switch l.perUnit {
	case 1:
		us = l.micro(n)
	case 1_000_000:
		if n > math.MaxInt64/1000 || n < math.MinInt64/1000 {
			return reader.NoSuchTime
		}
		us = n * 1000
	}
	if l.kind == column.Interval {
		l.b.AppendInt(us)
		return reader.NoFault
	}
	return l.time(us)
}

// micro rounds nanoseconds to the nearest microsecond.
func (l *leaf) micro(ns int64) int64 {
	us, rest := ns/1000, ns%1000
	if rest == 0 {
		return us
	}
	l.rounded++
	switch {
	case rest >= 500:
		us++
	case rest < -500:
		us--
	}
	return us
}

// takeInt96 reads nanoseconds of a day and the number of that day (Julian).
func takeInt96(l *leaf, v *parquet.Value) reader.FaultKind {
	x := v.Int96()
	ns, day := uint64(x[0])|uint64(x[1])<<32, int64(x[2])
	const ofDay, first = 86_400_000_000_000, 2_440_588 // 1970-01-01
	if ns > ofDay || day > 5_373_484+1 {
		return reader.NoSuchTime
	}
	return l.time((day-first)*86_400_000_000 + l.micro(int64(ns)))
}

// notes are what became of the column's values.
func (l *leaf) notes() []reader.ColumnNote {
	var list []reader.ColumnNote
	for _, n := range []reader.ColumnNote{
		{Kind: reader.NaNMissing, Count: l.nans}, {Kind: reader.Inexact, Count: l.inexact, Detail: l.firstInexact},
		{Kind: reader.TimesRounded, Count: l.rounded, Detail: l.unit},
	} {
		if n.Count > 0 {
			n.Column = l.name
			list = append(list, n)
		}
	}
	return list
}
