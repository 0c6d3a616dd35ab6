package main

import (
	"fmt"
	"math"
	"math/rand/v2"
)

// stream is a sequence of random numbers of its own. It uses nothing of the
// generator but its 64-bit outputs, whose sequence is fixed by the algorithm (PCG,
// O'Neill 2014), so that another version of the library cannot change the files.
type stream struct{ pcg *rand.PCG }

func newStream(number uint64) stream { return stream{rand.NewPCG(seed, number)} }

// uniform gives a number in [0, 1).
func (s stream) uniform() float64 { return float64(s.pcg.Uint64()>>11) / (1 << 53) }

// between gives a number in [lo, hi).
func (s stream) between(lo, hi float64) float64 { return lo + (hi-lo)*s.uniform() }

// below gives a whole number in [0, n).
func (s stream) below(n int) int { return int(s.uniform() * float64(n)) }

// bell gives a number with mean 0 and standard deviation 1, never beyond 3.5: a
// sum of four uniforms, since a wild tail would look like a fault of a logger.
func (s stream) bell() float64 {
	sum := s.uniform() + s.uniform() + s.uniform() + s.uniform()
	return (sum - 2) * math.Sqrt(3)
}

// nearTie is the distance from a rounding tie, in steps, below which the last bits
// of a value could decide how it is rounded: far above those bits (about 1e-13),
// far below what 50,000 values are likely to meet by chance.
const nearTie = 1e-9

// fence rounds values to whole steps. It keeps the first value that lay too near
// to a tie to come out the same on every machine.
type fence struct{ err error }

// steps gives v in whole steps of 1/perUnit, the nearest.
func (f *fence) steps(v float64, perUnit int) int {
	s := v * float64(perUnit)
	if f.err == nil && !(math.Abs(s-math.Floor(s)-0.5) > nearTie) {
		f.err = fmt.Errorf("%v lies on a tie between two steps of 1/%d: choose another seed", v, perUnit)
	}
	return int(math.Floor(s + 0.5))
}

// decimal writes a whole number of steps of 1/perUnit (a power of ten) as a
// decimal number.
func decimal(steps, perUnit int) string {
	sign := ""
	if steps < 0 {
		sign, steps = "-", -steps
	}
	if perUnit == 1 {
		return fmt.Sprintf("%s%d", sign, steps)
	}
	digits := 0
	for p := perUnit; p > 1; p /= 10 {
		digits++
	}
	return fmt.Sprintf("%s%d.%0*d", sign, steps/perUnit, digits, steps%perUnit)
}
