package expr

import (
	"math"
	"math/bits"

	"nearcell/catalog/column"
	"nearcell/engine/function"
	"nearcell/lang"
)

// arithKernel is an operation on two vectors.
type arithKernel uint8

const (
	addInt arithKernel = iota
	subInt
	mulInt
	modInt
	addReal
	subReal
	mulReal
	divReal
	modReal
	powReal
	mulInterval        // INTERVAL * REAL
	mulIntervalSwapped // REAL * INTERVAL
	divInterval        // INTERVAL / REAL
)

func numberKernel(op lang.Op, t column.Type) (arithKernel, bool) {
	ints := map[lang.Op]arithKernel{lang.Plus: addInt, lang.Minus: subInt, lang.Times: mulInt, lang.Modulo: modInt}
	reals := map[lang.Op]arithKernel{lang.Plus: addReal, lang.Minus: subReal, lang.Times: mulReal,
		lang.Divide: divReal, lang.Modulo: modReal, lang.Power: powReal}
	if t == column.Integer {
		k, ok := ints[op]
		return k, ok
	}
	k, ok := reals[op]
	return k, ok
}

// firstActive is the first row that is on, has a value in v and for which bad
// holds; -1 where there is none.
func firstActive(on []uint64, v *column.Vector, bad func(i int) bool) int {
	return function.FirstRow(on, v.N, func(i int) bool { return !v.IsNull(i) && bad(i) })
}

// run computes all rows, active or not, and reports whether some row may be an
// error. Rows that are off or NULL may be reported without being one.
func (k arithKernel) run(l, r, out *column.Vector) (suspicious bool) {
	n := out.N
	if n == 0 {
		return false
	}
	switch k {
	case addInt, subInt, mulInt, modInt:
		return k.runInts(l.I[:n], r.I[:n], out.I[:n], out.Type == column.Timestamp)
	case mulInterval:
		return scaleIntervals(l.I[:n], r.F[:n], out.I[:n], false)
	case mulIntervalSwapped:
		return scaleIntervals(r.I[:n], l.F[:n], out.I[:n], false)
	case divInterval:
		return scaleIntervals(l.I[:n], r.F[:n], out.I[:n], true)
	}
	return k.runReals(l.F[:n], r.F[:n], out.F[:n])
}

func (k arithKernel) runInts(a, b, c []int64, stamps bool) bool {
	b, c = b[:len(a)], c[:len(a)]
	var flag int64 // negative once a sum has overflowed
	bad := false
	switch k {
	case addInt:
		for i, x := range a {
			s := x + b[i]
			flag |= (x ^ s) & (b[i] ^ s)
			c[i] = s
		}
	case subInt:
		for i, x := range a {
			s := x - b[i]
			flag |= (x ^ b[i]) & (x ^ s)
			c[i] = s
		}
	case mulInt:
		for i, x := range a {
			c[i] = x * b[i]
			bad = bad || productOverflows(x, b[i])
		}
	case modInt:
		for i, x := range a {
			if b[i] == 0 {
				bad, c[i] = true, 0
				continue
			}
			c[i] = x % b[i]
		}
	}
	if stamps {
		for _, t := range c {
			bad = bad || t < firstTimestamp || t > lastTimestamp
		}
	}
	return bad || flag < 0
}

// The years 1 to 9999, in which time stamps are written.
const (
	firstTimestamp = -719162 * 86400 * 1_000_000
	lastTimestamp  = 2932897*86400*1_000_000 - 1
)

func productOverflows(a, b int64) bool {
	if int64(int32(a)) == a && int64(int32(b)) == b {
		return false
	}
	hi, lo := bits.Mul64(magnitude(a), magnitude(b))
	if (a < 0) != (b < 0) {
		return hi != 0 || lo > 1<<63
	}
	return hi != 0 || lo > math.MaxInt64
}

// magnitude is |a|, right for the smallest int64 too.
func magnitude(a int64) uint64 {
	if a < 0 {
		return -uint64(a)
	}
	return uint64(a)
}

// scaleIntervals multiplies or divides by real numbers, to the nearest
// microsecond.
func scaleIntervals(a []int64, b []float64, c []int64, divide bool) (suspicious bool) {
	for i, x := range a {
		f, ok := scaled(x, b[i], divide)
		if !ok {
			suspicious = true
			f = 0
		}
		c[i] = int64(f)
	}
	return suspicious
}

func scaled(x int64, y float64, divide bool) (f float64, ok bool) {
	if divide {
		if y == 0 {
			return 0, false
		}
		f = math.Round(float64(x) / y)
	} else {
		f = math.Round(float64(x) * y)
	}
	return f, f >= math.MinInt64 && f < -math.MinInt64
}

func (k arithKernel) runReals(a, b, c []float64) (suspicious bool) {
	b, c = b[:len(a)], c[:len(a)]
	// y - y is 0 for finite y and NaN else; + 0 leaves no negative zero behind
	switch k {
	case addReal:
		for i, x := range a {
			y := x + b[i]
			suspicious = suspicious || y-y != 0
			c[i] = y
		}
	case subReal:
		for i, x := range a {
			y := x - b[i]
			suspicious = suspicious || y-y != 0
			c[i] = y
		}
	case mulReal:
		for i, x := range a {
			y := float64(x*b[i]) + 0
			suspicious = suspicious || y-y != 0
			c[i] = y
		}
	case divReal:
		for i, x := range a {
			y := x/b[i] + 0
			suspicious = suspicious || y-y != 0
			c[i] = y
		}
	case modReal:
		for i, x := range a {
			y := math.Mod(x, b[i]) + 0
			suspicious = suspicious || y != y
			c[i] = y
		}
	case powReal:
		for i, x := range a {
			y := power(x, b[i])
			suspicious = suspicious || y-y != 0
			c[i] = y
		}
	}
	return suspicious
}

// power is x^y; squares are rounded once.
func power(x, y float64) float64 {
	if y == 2 {
		return float64(x * x)
	}
	return math.Pow(x, y) + 0
}

// fault is the code of the error of row i, "" where there is none.
func (k arithKernel) fault(l, r, out *column.Vector, i int) string {
	switch k {
	case addInt, subInt, mulInt, modInt:
		return k.intFault(l.I[i], r.I[i], out.Type)
	case mulInterval:
		return scaleFault(l.I[i], r.F[i], false)
	case mulIntervalSwapped:
		return scaleFault(r.I[i], l.F[i], false)
	case divInterval:
		return scaleFault(l.I[i], r.F[i], true)
	}
	return k.realFault(l.F[i], r.F[i], out.F[i])
}

func (k arithKernel) intFault(a, b int64, t column.Type) string {
	over := false
	s := a
	switch k {
	case addInt:
		s = a + b
		over = (a^s)&(b^s) < 0
	case subInt:
		s = a - b
		over = (a^b)&(a^s) < 0
	case mulInt:
		s = a * b
		over = productOverflows(a, b)
	case modInt:
		if b == 0 {
			return CodeNoValue
		}
		return ""
	}
	if over || t == column.Timestamp && (s < firstTimestamp || s > lastTimestamp) {
		return CodeOverflow
	}
	return ""
}

func scaleFault(x int64, y float64, divide bool) string {
	if _, ok := scaled(x, y, divide); ok {
		return ""
	}
	if divide && y == 0 || y != y {
		return CodeNoValue
	}
	return CodeOverflow
}

// realFault: a NaN and a division by 0 have no value, an infinity from finite
// operands has no finite one. Infinity that came in stays.
func (k arithKernel) realFault(a, b, y float64) string {
	switch {
	case y != y, k == divReal && b == 0, k == powReal && a == 0 && b < 0:
		return CodeNoValue
	case math.IsInf(y, 0) && !math.IsInf(a, 0) && !math.IsInf(b, 0):
		return CodeOverflow
	}
	return ""
}
