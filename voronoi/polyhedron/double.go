package polyhedron

import "math"

// double is a number of two words, high + low, with about 106 bits (Dekker 1971).
// Far-reaching cells are cut with them: see SetFarBox.
type double struct{ high, low float64 }

func twoSum(a, b float64) double {
	s := a + b
	t := s - a
	return double{s, (a - (s - t)) + (b - t)}
}

func quickTwoSum(a, b float64) double {
	s := a + b
	return double{s, b - (s - a)}
}

func (x double) add(y double) double {
	s, t := twoSum(x.high, y.high), twoSum(x.low, y.low)
	s = quickTwoSum(s.high, s.low+t.high)
	return quickTwoSum(s.high, s.low+t.low)
}

func (x double) sub(y double) double { return x.add(double{-y.high, -y.low}) }

func (x double) mul(y double) double {
	p := float64(x.high * y.high)
	e := math.FMA(x.high, y.high, -p)
	e += float64(x.high*y.low) + float64(x.low*y.high)
	return quickTwoSum(p, e)
}

// doubleDot is a·b for vectors of two words a coordinate.
func doubleDot(a, aLow, b, bLow Vec) double {
	x := double{a.X, aLow.X}.mul(double{b.X, bLow.X})
	y := double{a.Y, aLow.Y}.mul(double{b.Y, bLow.Y})
	z := double{a.Z, aLow.Z}.mul(double{b.Z, bLow.Z})
	return x.add(y).add(z)
}
