package las

import (
	"math"
	"math/big"
	"strconv"
)

// decimal is scale and offset as decimals: a whole number n stands for
// (n scale + offset) / 10^digits.
type decimal struct {
	scale, offset *big.Int
	digits        int

	small  bool // scale and offset fit into int64, with room for any 32-bit n
	s, o   int64
	divide float64 // 10^digits where float64 holds that exactly, else 0
}

// newDecimal takes the shortest decimals that read as the two numbers.
func newDecimal(scale, offset float64) *decimal {
	sm, se := digitsOf(scale)
	om, oe := digitsOf(offset)
	low := min(se, oe, 0)
	d := &decimal{digits: -low, scale: shifted(sm, se-low), offset: shifted(om, oe-low)}
	if d.scale.BitLen() <= 30 && d.offset.BitLen() <= 62 {
		d.small, d.s, d.o = true, d.scale.Int64(), d.offset.Int64()
	}
	if d.digits <= 22 { // powers of ten that float64 holds
		d.divide = 1
		for range d.digits {
			d.divide *= 10
		}
	}
	return d
}

// digitsOf is x as mantissa times a power of ten.
func digitsOf(x float64) (mantissa *big.Int, exponent int) {
	if x == 0 {
		return new(big.Int), 0
	}
	text := strconv.FormatFloat(x, 'e', -1, 64)
	digits := make([]byte, 0, 24)
	fraction, i := 0, 0
	point := false
	for ; text[i] != 'e'; i++ {
		switch {
		case text[i] == '.':
			point = true
			continue
		case point:
			fraction++
		}
		digits = append(digits, text[i])
	}
	exponent, _ = strconv.Atoi(text[i+1:])
	mantissa, _ = new(big.Int).SetString(string(digits), 10)
	return mantissa, exponent - fraction
}

func shifted(m *big.Int, power int) *big.Int {
	return m.Mul(m, new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(power)), nil))
}

// value is the float64 nearest to n scale + offset; false beyond their range. Where the
// numerator and the power of ten are both exact, one division rounds once.
func (d *decimal) value(n int64) (float64, bool) {
	if d.small && d.divide > 0 && n>>32 == n>>63 {
		if sum := n*d.s + d.o; sum > -1<<53 && sum < 1<<53 {
			return float64(sum) / d.divide, true
		}
	}
	sum := new(big.Int).Mul(big.NewInt(n), d.scale)
	sum.Add(sum, d.offset)
	x, err := strconv.ParseFloat(sum.String()+"e-"+strconv.Itoa(d.digits), 64)
	return x, err == nil && !math.IsInf(x, 0)
}
