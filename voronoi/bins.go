package voronoi

import "math"

// bins is a sum whose bits do not depend on the order of its terms (after Demmel and
// Nguyen 2013): every term is split at two binary places that are the same for all of
// them, and each of the two parts adds up without rounding.
//
// A term of at most b, a power of two, is cut to multiples of 2^-38 b and the rest to
// multiples of 2^-76 b; what is less is lost. Sums stay exact while they are below
// 2^15 b and have at most 2^15 terms.
type bins struct{ high, low float64 }

// mostTerms is how many terms are sure to add up exactly.
const mostTerms = 1 << 15

// splitter is the number that add wants for terms of at most 2^e: one and a half times
// 2^(e+14), whose last binary place is that of the cut.
func splitter(e int32) float64 { return math.Float64frombits(uint64(1023+14+e)<<52 | 1<<51) }

// add adds x; m is the splitter of all terms.
func (b *bins) add(x, m float64) {
	h := (float64(x) + m) - m
	low := m * 0x1p-38
	b.high += h
	b.low += ((float64(x) - h) + low) - low
}

// merge adds another sum with the same splitter.
func (b *bins) merge(c bins) {
	b.high += c.high
	b.low += c.low
}

func (b bins) value() float64 { return b.high + b.low }
