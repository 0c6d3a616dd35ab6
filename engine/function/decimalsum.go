package function

import "math"

// DecimalSum is a + b as the sum of the decimal numbers that people see: 0.8 - 0.1
// is 0.7, although the float64 0.8 less the float64 0.1 is a little more. Where one of
// them has too many digits for that it is the sum of the float64.
func DecimalSum(a, b float64) float64 {
	sum := a + b
	if a == math.Trunc(a) && b == math.Trunc(b) || sum-sum != 0 {
		return sum
	}
	places := max(decimalPlaces(a), decimalPlaces(b))
	if places < 0 || places > 15 {
		return sum
	}
	scale := powersOfTen[places]
	x, y := math.Round(float64(a*scale)), math.Round(float64(b*scale))
	if math.Abs(x)+math.Abs(y) >= 1<<53 {
		return sum
	}
	return (x+y)/scale + 0
}

// decimalPlaces is how many digits a number has behind its point.
func decimalPlaces(x float64) int {
	if x == math.Trunc(x) {
		return 0
	}
	digits, exponent := shortest(math.Abs(x))
	return max(0, len(digits)-exponent)
}
