package solid

import (
	"cmp"
	"math"
)

// Every product is rounded on its own (no fused multiply-add), so that all builds
// compute the same planes and cut in the same places.

func add2(a, b Vec2) Vec2           { return Vec2{X: a.X + b.X, Y: a.Y + b.Y} }
func sub2(a, b Vec2) Vec2           { return Vec2{X: a.X - b.X, Y: a.Y - b.Y} }
func scale2(t float64, a Vec2) Vec2 { return Vec2{X: t * a.X, Y: t * a.Y} }
func dot2(a, b Vec2) float64        { return float64(a.X*b.X) + float64(a.Y*b.Y) }
func cross2(a, b Vec2) float64      { return float64(a.X*b.Y) - float64(a.Y*b.X) }
func norm2(a Vec2) float64          { return math.Hypot(a.X, a.Y) }
func distance2(a, b Vec2) float64   { return norm2(sub2(a, b)) }
func mid2(a, b Vec2) Vec2           { return Vec2{X: a.X + (b.X-a.X)/2, Y: a.Y + (b.Y-a.Y)/2} }
func sub3(a, b Vec) Vec             { return Vec{X: a.X - b.X, Y: a.Y - b.Y, Z: a.Z - b.Z} }
func add3(a, b Vec) Vec             { return Vec{X: a.X + b.X, Y: a.Y + b.Y, Z: a.Z + b.Z} }
func norm3(a Vec) float64           { return math.Sqrt(float64(a.X*a.X) + float64(a.Y*a.Y) + float64(a.Z*a.Z)) }
func less2(a, b Vec2) bool          { return compare2(a, b) < 0 }

// compare2 orders by x, then y.
func compare2(a, b Vec2) int {
	if c := cmp.Compare(a.X, b.X); c != 0 {
		return c
	}
	return cmp.Compare(a.Y, b.Y)
}

// sum adds with compensation (Neumaier 1974).
type sum struct{ s, c float64 }

func (k *sum) add(x float64) {
	t := k.s + x
	if math.Abs(k.s) >= math.Abs(x) {
		k.c += (k.s - t) + x
	} else {
		k.c += (x - t) + k.s
	}
	k.s = t
}

func (k *sum) value() float64 { return k.s + k.c }
