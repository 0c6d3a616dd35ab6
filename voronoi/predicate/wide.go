package predicate

import (
	"math"

	"gonum.org/v1/gonum/spatial/r3"
)

// wide is a floating-point number of 53 bits whose exponent has no limits: m·2^e with
// 1/2 <= |m| < 1, or m = 0. Sums and products have a relative rounding error of at most
// ε and cannot underflow. They serve coordinates of very different magnitudes, whose
// determinants are as a rule one product that is larger than all others.
type wide struct {
	m float64
	e int
}

func wideOf(x float64) wide {
	m, e := math.Frexp(x)
	return wide{m, e}
}

func (a wide) mul(b wide) wide {
	m, e := float64(a.m*b.m), a.e+b.e
	if math.Abs(m) < 0.5 {
		m, e = m+m, e-1
	}
	return wide{m, e}
}

func (a wide) neg() wide { return wide{-a.m, a.e} }

func (a wide) abs() wide { return wide{math.Abs(a.m), a.e} }

func (a wide) add(b wide) wide {
	if a.m == 0 {
		return b
	}
	if b.m == 0 {
		return a
	}
	if a.e < b.e {
		a, b = b, a
	}
	d := a.e - b.e
	if d > 100 { // less than a rounding, even when a is a half
		return a
	}
	m, e := math.Frexp(a.m + float64(b.m*math.Float64frombits(uint64(1023-d)<<52)))
	return wide{m, e + a.e}
}

// above reports whether |a| > factor·b, for b >= 0 and a factor within 2^-60 and 1.
func (a wide) above(factor float64, b wide) bool {
	return a.abs().add(b.mul(wideOf(factor)).neg()).m > 0
}

// A term is a polynomial's value and the sum of the magnitudes of its monomials.
type term struct{ value, size wide }

func termOf(x float64) term {
	w := wideOf(x)
	return term{w, w.abs()}
}

func (a term) mul(b term) term { return term{a.value.mul(b.value), a.size.mul(b.size)} }
func (a term) add(b term) term { return term{a.value.add(b.value), a.size.add(b.size)} }
func (a term) sub(b term) term { return term{a.value.add(b.value.neg()), a.size.add(b.size)} }

// sign returns the sign where it is sure: no monomial goes through more than sixteen
// roundings, and neither does its share of the size, so that the value errs by at most
// 16ε/(1-16ε) times the exact size, which is below 17ε times the computed one.
func (a term) sign() (sign int, ok bool) {
	if a.size.m == 0 {
		return 0, true // every monomial is zero
	}
	if !(a.size.m < 1) {
		return 0, false // a coordinate is not finite
	}
	return signOf(a.value.m), a.value.above(17*epsilon, a.size)
}

// points are up to five points as terms. Nothing is subtracted before it is multiplied:
// a difference of coordinates of different magnitudes would lose the smaller one.
type points struct {
	x, y, z [5]term
}

func pointsOf(list ...r3.Vec) *points {
	p := new(points)
	for i, v := range list {
		p.x[i], p.y[i], p.z[i] = termOf(v.X), termOf(v.Y), termOf(v.Z)
	}
	return p
}

// minor is det of x and y of points i and j: two roundings.
func (p *points) minor(i, j int) term { return p.x[i].mul(p.y[j]).sub(p.x[j].mul(p.y[i])) }

// det3 is det(i, j, k): five roundings.
func (p *points) det3(i, j, k int) term {
	return p.z[i].mul(p.minor(j, k)).sub(p.z[j].mul(p.minor(i, k))).add(p.z[k].mul(p.minor(i, j)))
}

// orient is det(j-i, k-i, l-i): seven roundings.
func (p *points) orient(i, j, k, l int) term {
	return p.det3(j, k, l).sub(p.det3(i, k, l)).add(p.det3(i, j, l).sub(p.det3(i, j, k)))
}

// norm is |i|²: three roundings.
func (p *points) norm(i int) term {
	return p.x[i].mul(p.x[i]).add(p.y[i].mul(p.y[i])).add(p.z[i].mul(p.z[i]))
}

func orient3DWide(a, b, c, d r3.Vec) (sign int, ok bool) {
	return pointsOf(a, b, c, d).orient(0, 1, 2, 3).sign()
}

// inSphereWide is the determinant with rows x, y, z, |p|², 1, expanded by the squares:
// eleven roundings a product and three for the sum.
func inSphereWide(a, b, c, d, e r3.Vec) (sign int, ok bool) {
	p := pointsOf(a, b, c, d, e)
	sum := p.norm(1).mul(p.orient(0, 2, 3, 4)).sub(p.norm(0).mul(p.orient(1, 2, 3, 4)))
	sum = sum.add(p.norm(3).mul(p.orient(0, 1, 2, 4)).sub(p.norm(2).mul(p.orient(0, 1, 3, 4))))
	return sum.sub(p.norm(4).mul(p.orient(0, 1, 2, 3))).sign()
}
