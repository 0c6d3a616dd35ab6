package mesh

import (
	"cmp"
	"math"

	"gonum.org/v1/gonum/spatial/r2"
)

// Every product is rounded on its own (no fused multiply-add), so that all builds
// compute the same planes and cut in the same places.

func add(a, b Vec) Vec           { return Vec{X: a.X + b.X, Y: a.Y + b.Y, Z: a.Z + b.Z} }
func sub(a, b Vec) Vec           { return Vec{X: a.X - b.X, Y: a.Y - b.Y, Z: a.Z - b.Z} }
func scale(t float64, a Vec) Vec { return Vec{X: t * a.X, Y: t * a.Y, Z: t * a.Z} }
func dot(a, b Vec) float64 {
	return float64(a.X*b.X) + float64(a.Y*b.Y) + float64(a.Z*b.Z)
}
func cross(a, b Vec) Vec {
	return Vec{
		X: float64(a.Y*b.Z) - float64(a.Z*b.Y),
		Y: float64(a.Z*b.X) - float64(a.X*b.Z),
		Z: float64(a.X*b.Y) - float64(a.Y*b.X),
	}
}
func length(a Vec) float64 { return math.Sqrt(dot(a, a)) }
func least(a, b Vec) Vec   { return Vec{X: min(a.X, b.X), Y: min(a.Y, b.Y), Z: min(a.Z, b.Z)} }
func most(a, b Vec) Vec    { return Vec{X: max(a.X, b.X), Y: max(a.Y, b.Y), Z: max(a.Z, b.Z)} }
func largest(a Vec) float64 {
	return max(math.Abs(a.X), math.Abs(a.Y), math.Abs(a.Z))
}
func xy(a Vec) r2.Vec { return r2.Vec{X: a.X, Y: a.Y} }

// compare orders by x, then y, then z.
func compare(a, b Vec) int {
	return cmp.Or(cmp.Compare(a.X, b.X), cmp.Compare(a.Y, b.Y), cmp.Compare(a.Z, b.Z))
}

// along drops the coordinate of an axis, so that what turns counter-clockwise seen from
// the axis' positive end still does.
func along(a Vec, axis int) r2.Vec {
	switch axis {
	case 0:
		return r2.Vec{X: a.Y, Y: a.Z}
	case 1:
		return r2.Vec{X: a.Z, Y: a.X}
	}
	return r2.Vec{X: a.X, Y: a.Y}
}

func component(a Vec, axis int) float64 {
	switch axis {
	case 0:
		return a.X
	case 1:
		return a.Y
	}
	return a.Z
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
