package voronoi

import "math"

// Sum adds numbers with a second word for what rounding loses (Neumaier 1974).
// The zero value is an empty sum. Infinities add up as they do in plain sums.
type Sum struct{ sum, lost float64 }

// Add adds x.
func (s *Sum) Add(x float64) {
	t := s.sum + x
	switch {
	case math.IsInf(t, 0): // nothing is lost in an infinite sum, and Inf-Inf is no loss
	case math.Abs(s.sum) >= math.Abs(x):
		s.lost += (s.sum - t) + x
	default:
		s.lost += (x - t) + s.sum
	}
	s.sum = t
}

// Value is the sum so far.
func (s *Sum) Value() float64 { return s.sum + s.lost }

// Total is the compensated sum of the numbers, in their order.
func Total(numbers []float64) float64 {
	var s Sum
	for _, x := range numbers {
		s.Add(x)
	}
	return s.Value()
}
