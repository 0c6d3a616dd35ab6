package voronoi

import "math"

// These round every product on its own, so that all builds give the same bits.

func dot(a, b Vec) float64 {
	return float64(a.X*b.X) + float64(a.Y*b.Y) + float64(a.Z*b.Z)
}

func sub(a, b Vec) Vec { return Vec{X: a.X - b.X, Y: a.Y - b.Y, Z: a.Z - b.Z} }

func add(a, b Vec) Vec { return Vec{X: a.X + b.X, Y: a.Y + b.Y, Z: a.Z + b.Z} }

func cross(a, b Vec) Vec {
	return Vec{
		X: float64(a.Y*b.Z) - float64(a.Z*b.Y),
		Y: float64(a.Z*b.X) - float64(a.X*b.Z),
		Z: float64(a.X*b.Y) - float64(a.Y*b.X),
	}
}

func length(a Vec) float64 { return math.Sqrt(dot(a, a)) }

// lostBySub is what rounding lost of d = a - b: a - b - d, exactly (Knuth's
// two-sum).
func lostBySub(a, b, d Vec) Vec {
	lost := func(a, b, d float64) float64 {
		back := a - d
		return (a - (d + back)) + (back - b)
	}
	return Vec{X: lost(a.X, b.X, d.X), Y: lost(a.Y, b.Y, d.Y), Z: lost(a.Z, b.Z, d.Z)}
}

// positive turns -0 into +0: adding zero does.
func positive(p Vec) Vec { return Vec{X: p.X + 0, Y: p.Y + 0, Z: p.Z + 0} }
