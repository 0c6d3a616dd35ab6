package polyhedron

import (
	"math"

	"gonum.org/v1/gonum/spatial/r3"
)

// Vec is a point or a vector in space.
type Vec = r3.Vec

// dot, cross and the like round every product on its own: the explicit
// conversions forbid the fused multiply-add that some builds would use, so that
// signs and coordinates have the same bits everywhere.

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

func sub(a, b Vec) Vec { return Vec{X: a.X - b.X, Y: a.Y - b.Y, Z: a.Z - b.Z} }

func add(a, b Vec) Vec { return Vec{X: a.X + b.X, Y: a.Y + b.Y, Z: a.Z + b.Z} }

func scale(t float64, a Vec) Vec {
	return Vec{X: float64(t * a.X), Y: float64(t * a.Y), Z: float64(t * a.Z)}
}

func length(a Vec) float64 { return math.Sqrt(dot(a, a)) }

// largest is the largest absolute component.
func largest(a Vec) float64 {
	return max(math.Abs(a.X), math.Abs(a.Y), math.Abs(a.Z))
}

// along is the point a + t (b - a).
func along(a, b Vec, t float64) Vec {
	return Vec{
		X: a.X + float64(t*(b.X-a.X)),
		Y: a.Y + float64(t*(b.Y-a.Y)),
		Z: a.Z + float64(t*(b.Z-a.Z)),
	}
}
