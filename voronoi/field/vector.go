package field

import "math"

// These round every product on its own, so that all builds give the same bits.

func dot(a, b Vec) float64 {
	return float64(a.X*b.X) + float64(a.Y*b.Y) + float64(a.Z*b.Z)
}

func sub(a, b Vec) Vec { return Vec{X: a.X - b.X, Y: a.Y - b.Y, Z: a.Z - b.Z} }

func add(a, b Vec) Vec { return Vec{X: a.X + b.X, Y: a.Y + b.Y, Z: a.Z + b.Z} }

func scale(t float64, a Vec) Vec {
	return Vec{X: float64(t * a.X), Y: float64(t * a.Y), Z: float64(t * a.Z)}
}

func cross(a, b Vec) Vec {
	return Vec{
		X: float64(a.Y*b.Z) - float64(a.Z*b.Y),
		Y: float64(a.Z*b.X) - float64(a.X*b.Z),
		Z: float64(a.X*b.Y) - float64(a.Y*b.X),
	}
}

func length(a Vec) float64 { return math.Sqrt(dot(a, a)) }

// positive turns -0 into +0: adding zero does.
func positive(p Vec) Vec { return Vec{X: p.X + 0, Y: p.Y + 0, Z: p.Z + 0} }
