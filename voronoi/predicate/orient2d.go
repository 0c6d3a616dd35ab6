package predicate

import (
	"math"

	"gonum.org/v1/gonum/spatial/r2"
	"gonum.org/v1/gonum/spatial/r3"
)

// epsilon is half the distance from 1 to the next float64: the largest relative
// error of one rounded operation.
const epsilon = 1.0 / (1 << 53)

// Orient2D returns the sign of det(b-a, c-a): +1 when a, b, c turn to the left
// (c lies to the left of the line from a to b), -1 when they turn to the right, 0
// when they are collinear. It panics when a coordinate is not finite.
func Orient2D(a, b, c r2.Vec) int {
	if s, ok := orient2DFilter(a, b, c); ok {
		return s
	}
	return orient2DExact(a, b, c)
}

// orient2DBound: each of the two products carries the roundings of two differences
// and its own, and the final subtraction one: four. With the computed sum m of the
// products' magnitudes, itself at most 4 roundings too small, the error is at most
// 4ε/(1-4ε) · m/(1-4ε) < (4 + 64ε)ε m.
const orient2DBound = (4 + 64*epsilon) * epsilon

// orient2DFloor: an underflowing product errs by at most 2^-1075, which disappears
// in the slack of orient2DBound (some 28ε of it) as long as m is above this.
const orient2DFloor = 1e-280

func orient2DFilter(a, b, c r2.Vec) (sign int, ok bool) {
	l := float64((b.X - a.X) * (c.Y - a.Y))
	r := float64((b.Y - a.Y) * (c.X - a.X))
	det, m := l-r, math.Abs(l)+math.Abs(r)
	if bound := orient2DBound * m; m > orient2DFloor && (det > bound || -det > bound) {
		return signOf(det), true
	}
	return 0, false
}

// A polynomial of degree k in coordinates that are multiples of 2^m and below 2^n
// is free of underflow and overflow, in all its partial products and errors, when
// k·m >= -1074 and k·n stays some bits below 1023. A coordinate x that is not 0 is
// a multiple of 2^-52 |x|. The limits below leave room for the differences.
const (
	degree2Low, degree2High = 0x1p-480, 0x1p500
	degree3Low, degree3High = 0x1p-300, 0x1p330
	degree5Low, degree5High = 0x1p-160, 0x1p199
)

func within(x, low, high float64) bool {
	x = math.Abs(x)
	return x == 0 || (x >= low && x <= high)
}

func within3(v r3.Vec, low, high float64) bool {
	return within(v.X, low, high) && within(v.Y, low, high) && within(v.Z, low, high)
}

func within2(v r2.Vec, low, high float64) bool {
	return within(v.X, low, high) && within(v.Y, low, high)
}

func orient2DExact(a, b, c r2.Vec) int {
	const low, high = degree2Low, degree2High
	if within2(a, low, high) && within2(b, low, high) && within2(c, low, high) {
		s := newArena()
		ux, uy := s.diff(b.X, a.X), s.diff(b.Y, a.Y)
		vx, vy := s.diff(c.X, a.X), s.diff(c.Y, a.Y)
		if sign, ok := s.sign(s.det2(ux, uy, vx, vy)); ok {
			return sign
		}
	}
	p := bigs(a.X, a.Y, b.X, b.Y, c.X, c.Y)
	return bigDet2(bigSub(p[2], p[0]), bigSub(p[3], p[1]), bigSub(p[4], p[0]), bigSub(p[5], p[1])).Sign()
}
