package function

import (
	"fmt"
	"math"
	"strconv"

	"nearcell/catalog/column"
)

func checkRound(args []Arg) (Result, error) {
	if err := wantCount("ROUND", args, 1, 2); err != nil {
		return Result{}, err
	}
	if err := wantNumber("ROUND", args, 0); err != nil {
		return Result{}, err
	}
	t := numberType(args[:1])
	types := []column.Type{t}
	if len(args) == 2 {
		if err := wantType("ROUND", args, 1, column.Integer); err != nil {
			return Result{}, err
		}
		types = append(types, column.Integer)
	}
	return Result{t, args[0].Unit, types}, nil
}

func evalRound(_ *Arena, args []column.Vector, on []uint64, n int, out *column.Vector) error {
	x := &args[0]
	digits := func(int) int64 { return 0 }
	if len(args) == 2 {
		digits = func(i int) int64 { return args[1].I[i] }
	}
	if out.Type == column.Integer {
		row := FirstRow(on, n, func(i int) bool {
			r, ok := roundInteger(x.I[i], digits(i))
			out.I[i] = r
			return !ok
		})
		if row >= 0 {
			return &RowFault{Row: row, Code: "overflow", Message: fmt.Sprintf("ROUND(%d, %d) is beyond the 64 bits of an INTEGER", x.I[row], digits(row))}
		}
		return nil
	}
	row := FirstRow(on, n, func(i int) bool {
		r := RoundDecimal(x.F[i], int(max(-400, min(400, digits(i)))))
		out.F[i] = r
		return math.IsInf(r, 0) && !math.IsInf(x.F[i], 0)
	})
	return rowFault(row, "overflow", "ROUND of %s has no finite value", x)
}

// roundInteger rounds to tens, hundreds … where digits is negative.
func roundInteger(x, digits int64) (int64, bool) {
	if digits >= 0 {
		return x, true
	}
	if digits < -19 {
		return 0, true
	}
	unit := uint64(1)
	for range -digits {
		unit *= 10 // 10^19 fits 64 bits without sign
	}
	u := uint64(x)
	if x < 0 {
		u = -u
	}
	rest := u % unit
	u -= rest
	if rest >= unit-rest {
		if u > math.MaxUint64-unit {
			return 0, false
		}
		u += unit
	}
	if x < 0 {
		return int64(-u), u <= 1<<63
	}
	return int64(u), u < 1<<63
}

// RoundDecimal rounds x to so many decimal places, halves away from zero. It
// rounds the decimal number that people see, the shortest one that reads back
// as x: 2.675 becomes 2.68, although the nearest float64 lies below 2.675.
func RoundDecimal(x float64, digits int) float64 {
	if x == 0 || math.IsInf(x, 0) {
		return x + 0
	}
	if digits >= 0 && digits <= 15 {
		scale := powersOfTen[digits]
		t := float64(math.Abs(x) * scale)
		if t < 1<<40 {
			// far from a half, the product decides; the quotient of two exact
			// numbers is the float64 nearest to the decimal
			whole := math.Floor(t)
			if rest := t - whole; math.Abs(rest-0.5) > 1e-3 {
				if rest > 0.5 {
					whole++
				}
				return math.Copysign(whole/scale, x) + 0
			}
		}
	}
	return roundDigits(x, digits)
}

var powersOfTen = [...]float64{1, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15,
	1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22}

// roundDigits rounds the shortest decimal text of x.
func roundDigits(x float64, places int) float64 {
	digits, exponent := shortest(math.Abs(x)) // 0.d1d2d3… times 10^exponent
	keep := exponent + places                 // digits that stay
	switch {
	case keep >= len(digits):
		return x
	case keep < 0:
		return 0
	}
	up := digits[keep] >= '5'
	digits = digits[:keep]
	if up {
		i := keep - 1
		for ; i >= 0 && digits[i] == '9'; i-- {
			digits[i] = '0'
		}
		if i >= 0 {
			digits[i]++
		} else {
			digits = append([]byte{'1'}, digits...)
			exponent++
		}
	}
	if len(digits) == 0 {
		return 0
	}
	r, _ := strconv.ParseFloat("0."+string(digits)+"e"+strconv.Itoa(exponent), 64) // beyond the range it is infinite
	return math.Copysign(r, x) + 0
}

// shortest gives the digits of the shortest decimal 0.d1d2… · 10^exponent that
// reads back as x > 0.
func shortest(x float64) (digits []byte, exponent int) {
	text := strconv.AppendFloat(make([]byte, 0, 32), x, 'e', -1, 64) // d.ddde±xx
	for i, c := range text {
		if c == 'e' {
			exponent, _ = strconv.Atoi(string(text[i+1:]))
			break
		}
		if c != '.' {
			digits = append(digits, c)
		}
	}
	return digits, exponent + 1
}

// multiples are the multiples of a step that is a decimal number m·10^exponent.
type multiples struct {
	step     float64
	m        float64 // an integer
	exponent int
}

func multiplesOf(step float64) multiples {
	digits, exponent := shortest(step)
	m, _ := strconv.ParseFloat(string(digits), 64) // at most 17 digits
	return multiples{step, m, exponent - len(digits)}
}

// at is the float64 nearest to k·step, as exact as k·m is.
func (s *multiples) at(k float64) float64 {
	p := float64(k * s.m)
	if math.Abs(p) > 1<<53 || s.exponent < -22 || s.exponent > 22 {
		return float64(k * s.step)
	}
	if s.exponent < 0 {
		return p/powersOfTen[-s.exponent] + 0
	}
	return float64(p*powersOfTen[s.exponent]) + 0
}

// floor is the largest multiple, as a float64, that is not above x.
func (s *multiples) floor(x float64) float64 {
	k := math.Floor(x / s.step)
	if up := s.at(k + 1); up <= x {
		return up
	}
	if at := s.at(k); at <= x {
		return at
	}
	return s.at(k - 1)
}
