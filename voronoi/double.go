package voronoi

import "math"

// double is a number of two words, high + low, with about 106 bits (Dekker 1971).
type double struct{ high, low float64 }

func quickTwoSum(a, b float64) double {
	s := a + b
	return double{s, b - (s - a)}
}

func twoSum(a, b float64) double {
	s := a + b
	t := s - a
	return double{s, (a - (s - t)) + (b - t)}
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

// over is x / y, rounded to one word.
func (x double) over(y double) float64 {
	q := x.high / y.high
	r := x.sub(y.mul(double{q, 0}))
	return q + r.high/y.high
}

// double3 is a vector of two words a coordinate.
type double3 struct{ x, y, z double }

// difference is a - b, exactly.
func difference(a, b Vec) double3 {
	return double3{twoSum(a.X, -b.X), twoSum(a.Y, -b.Y), twoSum(a.Z, -b.Z)}
}

func (a double3) dot(b double3) double {
	return a.x.mul(b.x).add(a.y.mul(b.y)).add(a.z.mul(b.z))
}

func (a double3) cross(b double3) double3 {
	return double3{
		a.y.mul(b.z).sub(a.z.mul(b.y)),
		a.z.mul(b.x).sub(a.x.mul(b.z)),
		a.x.mul(b.y).sub(a.y.mul(b.x)),
	}
}

func (a double3) times(s double) double3 {
	return double3{a.x.mul(s), a.y.mul(s), a.z.mul(s)}
}

func (a double3) add(b double3) double3 {
	return double3{a.x.add(b.x), a.y.add(b.y), a.z.add(b.z)}
}
