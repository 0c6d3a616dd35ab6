package column

import (
	"fmt"
	"math/rand/v2"
	"testing"
)

const benchRows = 1 << 20

func benchColumn(typ Type) Vector {
	b := NewBuilder(typ, nil)
	for i := range benchRows {
		switch {
		case i%97 == 5:
			b.AppendNull()
		case typ == Text:
			b.AppendText(fmt.Sprint("L", i%54))
		case typ == Real:
			b.AppendFloat(float64(i) / 7)
		default:
			b.AppendInt(int64(i))
		}
	}
	return b.Finish()
}

func BenchmarkGather(b *testing.B) {
	rows := make([]int32, benchRows)
	for i, r := range rand.New(rand.NewPCG(1, 2)).Perm(benchRows) {
		rows[i] = int32(r)
	}
	for _, typ := range []Type{Integer, Real, Text} {
		v := benchColumn(typ)
		b.Run(typ.String(), func(b *testing.B) {
			for b.Loop() {
				Gather(&v, rows)
			}
		})
	}
}

func BenchmarkAppendVector(b *testing.B) {
	on := AllOn(benchRows)
	for i := 0; i < benchRows; i += 3 {
		ClearBit(on, i)
	}
	for _, typ := range []Type{Integer, Real, Text} {
		v := benchColumn(typ)
		b.Run(typ.String(), func(b *testing.B) {
			for b.Loop() {
				w := NewBuilder(typ, nil)
				w.AppendVector(&v, on)
			}
		})
	}
}

func BenchmarkKey(b *testing.B) {
	v := benchColumn(Real)
	b.SetBytes(8 * benchRows)
	for b.Loop() {
		v.Key()
	}
}

func BenchmarkValidate(b *testing.B) {
	v := benchColumn(Real)
	b.SetBytes(8 * benchRows)
	for b.Loop() {
		if err := v.Validate(); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkParseTimestamp(b *testing.B) {
	for b.Loop() {
		if _, _, err := ParseTimestamp("2031-04-07 08:15:00"); err != nil {
			b.Fatal(err)
		}
	}
}
