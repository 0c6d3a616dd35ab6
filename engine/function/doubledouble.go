package function

import "math"

// dd is a number as the unevaluated sum of two float64, hi the nearest to it:
// about 32 decimal digits (Dekker 1971; Knuth, The Art of Computer Programming,
// volume 2). Products are fenced by float64(…), so that no compiler fuses them
// with the sums around them: error-free transformations would break.
type dd struct{ hi, lo float64 }

// twoSum is a + b and its rounding error.
func twoSum(a, b float64) dd {
	s := a + b
	t := s - a
	return dd{s, (a - (s - t)) + (b - t)}
}

// fastTwoSum is twoSum for |a| >= |b|.
func fastTwoSum(a, b float64) dd {
	s := a + b
	return dd{s, b - (s - a)}
}

// twoProduct is a · b and its rounding error.
func twoProduct(a, b float64) dd {
	p := float64(a * b)
	return dd{p, math.FMA(a, b, -p)}
}

func (a dd) value() float64 { return a.hi + a.lo }

func (a dd) negative() dd { return dd{-a.hi, -a.lo} }

// plus adds a float64.
func (a dd) plus(x float64) dd {
	s := twoSum(a.hi, x)
	return fastTwoSum(s.hi, s.lo+a.lo)
}

// add adds accurately also where the two cancel.
func (a dd) add(b dd) dd {
	s, t := twoSum(a.hi, b.hi), twoSum(a.lo, b.lo)
	s = fastTwoSum(s.hi, s.lo+t.hi)
	return fastTwoSum(s.hi, s.lo+t.lo)
}

// accumulate adds b with an error of 2^-105 (|a| + |b|): enough where many
// numbers are added up, and faster than add.
func (a dd) accumulate(b dd) dd {
	s := twoSum(a.hi, b.hi)
	return fastTwoSum(s.hi, s.lo+(a.lo+b.lo))
}

func (a dd) times(x float64) dd {
	p := twoProduct(a.hi, x)
	return fastTwoSum(p.hi, p.lo+float64(a.lo*x))
}

func (a dd) mul(b dd) dd {
	p := twoProduct(a.hi, b.hi)
	return fastTwoSum(p.hi, p.lo+(float64(a.hi*b.lo)+float64(a.lo*b.hi)))
}

// over is a / b, b not 0.
func (a dd) over(b dd) dd {
	q1 := a.hi / b.hi
	r := a.add(b.times(q1).negative())
	q2 := r.hi / b.hi
	r = r.add(b.times(q2).negative())
	return fastTwoSum(q1, q2).plus(r.hi / b.hi)
}

// finite reports whether nothing has overflowed.
func (a dd) finite() bool { return a.hi-a.hi == 0 && a.lo-a.lo == 0 }

// ofInt is an int64 exactly.
func ofInt(i int64) dd {
	hi := float64(i)
	if hi >= 1<<63 {
		return dd{hi, float64(i - math.MaxInt64 - 1)}
	}
	return dd{hi, float64(i - int64(hi))}
}
