package field

import (
	"math"
	"math/bits"
)

// fixed adds numbers of [0, 1) as integers of 2^-120, so that neither their order nor
// the number of goroutines changes a bit of the sum: the numbers of tetrahedra depend
// on how many threads built them.
type fixed struct{ hi, lo uint64 }

const fixedBits = 120

// add adds x >= 0; what lies below 2^-120 is cut off.
func (f *fixed) add(x float64) {
	if !(x > 0) {
		return
	}
	m, e := math.Frexp(x)
	word := uint64(math.Ldexp(m, 53))
	shift := e - 53 + fixedBits
	var hi, lo uint64
	switch {
	case shift <= -64:
	case shift < 0:
		lo = word >> uint(-shift)
	case shift < 64:
		lo, hi = word<<uint(shift), word>>uint(64-shift)
	default:
		hi = word << uint(shift-64)
	}
	f.merge(fixed{hi, lo})
}

func (f *fixed) merge(o fixed) {
	var carry uint64
	f.lo, carry = bits.Add64(f.lo, o.lo, 0)
	f.hi, _ = bits.Add64(f.hi, o.hi, carry)
}

// value is the sum, rounded once or twice.
func (f *fixed) value() float64 {
	return math.Ldexp(float64(f.hi), 64-fixedBits) + math.Ldexp(float64(f.lo), -fixedBits)
}
