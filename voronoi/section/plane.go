package section

import (
	"errors"
	"math"

	"gonum.org/v1/gonum/spatial/r2"

	"nearcell/voronoi/polyhedron"
)

// Vec is a point or a vector in space.
type Vec = polyhedron.Vec

// Vec2 is a place in the plane, along U and V from the foot.
type Vec2 = r2.Vec

// Plane is where to cut: a point and what stands upright on it, of any length.
type Plane struct{ At, Normal Vec }

// Across is the plane across axis 0, 1 or 2 (x, y, z) at a coordinate; above is where it is larger.
func Across(axis int, value float64) Plane {
	p := Plane{}
	*[]*float64{&p.At.X, &p.At.Y, &p.At.Z}[axis] = value
	*[]*float64{&p.Normal.X, &p.Normal.Y, &p.Normal.Z}[axis] = 1
	return p
}

// ErrPlane: a plane needs a finite point and a finite normal that is not zero.
var ErrPlane = errors.New("section: a plane needs a finite point and a finite normal that is not zero")

// frame is the plane with axes of its own: (U, V, N) are right-handed, of length 1.
type frame struct {
	foot, u, v, n Vec
	axis          int // the plane stands across this axis; -1: across none
}

// newFrame puts the foot of the origin into the plane, so that coordinates in it are small.
func newFrame(p Plane, origin Vec) (frame, error) {
	size := largest(p.Normal)
	if !(size > 0) || math.IsInf(size, 0) || !(largest(p.At) <= 1e150) {
		return frame{}, ErrPlane
	}
	n := scale(1/size, p.Normal)
	n = scale(1/length(n), n)
	f := frame{n: n, axis: -1}
	x, y, z := Vec{X: 1}, Vec{Y: 1}, Vec{Z: 1}
	for axis, a := range [3][3]Vec{{x, y, z}, {y, z, x}, {z, x, y}} {
		switch n {
		case a[0]:
			f.axis, f.u, f.v = axis, a[1], a[2]
		case sub(Vec{}, a[0]):
			f.axis, f.u, f.v = axis, a[2], a[1]
		}
	}
	if f.axis < 0 {
		f.u = cross(z, n)
		f.u = scale(1/length(f.u), f.u)
		f.v = cross(n, f.u)
	}
	f.foot = add(origin, scale(dot(n, sub(p.At, origin)), n))
	switch f.axis {
	case 0:
		f.foot = Vec{X: p.At.X, Y: origin.Y, Z: origin.Z}
	case 1:
		f.foot = Vec{X: origin.X, Y: p.At.Y, Z: origin.Z}
	case 2:
		f.foot = Vec{X: origin.X, Y: origin.Y, Z: p.At.Z}
	}
	return f, nil
}

// flat is a place in the plane, given by its difference from the foot.
func (f *frame) flat(d Vec) Vec2 { return Vec2{X: dot(f.u, d), Y: dot(f.v, d)} }

// raise is a place of the plane in space.
func (f *frame) raise(p Vec2) Vec {
	switch f.axis {
	case -1:
		return add(f.foot, add(scale(p.X, f.u), scale(p.Y, f.v)))
	default: // each coordinate is one sum
		return Vec{
			X: f.foot.X + (float64(f.u.X*p.X) + float64(f.v.X*p.Y)),
			Y: f.foot.Y + (float64(f.u.Y*p.X) + float64(f.v.Y*p.Y)),
			Z: f.foot.Z + (float64(f.u.Z*p.X) + float64(f.v.Z*p.Y)),
		}
	}
}

func dot(a, b Vec) float64 { return float64(a.X*b.X) + float64(a.Y*b.Y) + float64(a.Z*b.Z) }
func sub(a, b Vec) Vec     { return Vec{X: a.X - b.X, Y: a.Y - b.Y, Z: a.Z - b.Z} }
func add(a, b Vec) Vec     { return Vec{X: a.X + b.X, Y: a.Y + b.Y, Z: a.Z + b.Z} }
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

func length(a Vec) float64  { return math.Sqrt(dot(a, a)) }
func largest(a Vec) float64 { return max(math.Abs(a.X), math.Abs(a.Y), math.Abs(a.Z)) }

func sub2(a, b Vec2) Vec2      { return Vec2{X: a.X - b.X, Y: a.Y - b.Y} }
func cross2(a, b Vec2) float64 { return float64(a.X*b.Y) - float64(a.Y*b.X) }
func length2(a Vec2) float64   { return math.Hypot(a.X, a.Y) }
func between(a, b Vec2, t float64) Vec2 {
	return Vec2{X: a.X + float64(t*(b.X-a.X)), Y: a.Y + float64(t*(b.Y-a.Y))}
}
