package predicate

import (
	"math"

	"gonum.org/v1/gonum/spatial/r3"
)

// Orient3D returns the sign of det(b-a, c-a, d-a), six times the signed volume of
// the tetrahedron a, b, c, d: +1 when it is positive, 0 when the four points are
// coplanar. Seen from d, a positive triangle a, b, c turns clockwise. It panics when
// a coordinate is not finite.
func Orient3D(a, b, c, d r3.Vec) int {
	ux, uy, uz := b.X-a.X, b.Y-a.Y, b.Z-a.Z
	vx, vy, vz := c.X-a.X, c.Y-a.Y, c.Z-a.Z
	wx, wy, wz := d.X-a.X, d.Y-a.Y, d.Z-a.Z
	det := ux*(vy*wz-vz*wy) + uy*(vz*wx-vx*wz) + uz*(vx*wy-vy*wx)
	nu := ux*ux + uy*uy + uz*uz
	nv := vx*vx + vy*vy + vz*vz
	nw := wx*wx + wy*wy + wz*wz
	if orient3DNormSure(det, nu, nv, nw) {
		return signOf(det)
	}
	return orient3DSlow(a, b, c, d)
}

// orient3DNormFactor is the square of the relative bound of the norm filter.
//
// Each of the six terms of the determinant carries at most eight roundings: three
// differences, the inner product, the inner subtraction, the outer product and two
// sums. So |computed - exact| <= 8ε/(1-8ε) · P, where P is the permanent of the
// magnitudes, |ux|(|vy wz| + |vz wy|) + … By Cauchy and Schwarz
// |vy wz| + |vz wy| <= √(vy²+vz²) √(wy²+wz²), whose squares sum over the three axes
// to at most |v|²|w|² + Σ vi² wi² <= 2 |v|²|w|²; hence P <= √2 |u||v||w|, and the
// square of the bound is (8√2 ε)² |u|²|v|²|w|² = 128 ε² |u|²|v|²|w|². The computed
// norms and the comparison's own roundings are within a few dozen ε: the factor
// 1 + 2^-40 covers them thousands of times. A fused operation only rounds less.
const orient3DNormFactor = 128 * epsilon * epsilon * (1 + 0x1p-40)

// Squared lengths inside these limits keep every number of the norm filter normal:
// the bound's square is at least 1e-300, and an underflowing product of the
// determinant errs by less than 2^-1074 · 1e45, against a bound of at least 1e-150.
const orient3DNormLow, orient3DNormHigh = 1e-90, 1e90

func orient3DNormSure(det, nu, nv, nw float64) bool {
	return det*det > orient3DNormFactor*nu*nv*nw &&
		nu > orient3DNormLow && nv > orient3DNormLow && nw > orient3DNormLow &&
		nu < orient3DNormHigh && nv < orient3DNormHigh && nw < orient3DNormHigh
}

func orient3DSlow(a, b, c, d r3.Vec) int {
	const low, high = degree3Low, degree3High
	if within3(a, low, high) && within3(b, low, high) && within3(c, low, high) && within3(d, low, high) {
		if s, ok := orient3DPermanent(a, b, c, d); ok {
			return s
		}
		if s, ok := orient3DExpansion(a, b, c, d); ok {
			return s
		}
	}
	if s, ok := orient3DWide(a, b, c, d); ok {
		return s
	}
	return orient3DBig(a, b, c, d)
}

// orient3DBound: eight roundings of the determinant (see orient3DNormFactor) and at
// most eight of the computed permanent m: 8ε/(1-8ε) · m/(1-8ε) < (8 + 256ε)ε m.
const orient3DBound = (8 + 256*epsilon) * epsilon

// orient3DFloor: with coordinates below degree3High an underflowing product errs by
// less than 2^-1074 · 2^331 < 1e-223, lost in the slack of orient3DBound (about 1e-14
// of it) as long as the permanent is above this.
const orient3DFloor = 1e-190

func orient3DPermanent(a, b, c, d r3.Vec) (sign int, ok bool) {
	u, v, w := r3.Sub(b, a), r3.Sub(c, a), r3.Sub(d, a)
	det := u.X*(v.Y*w.Z-v.Z*w.Y) + u.Y*(v.Z*w.X-v.X*w.Z) + u.Z*(v.X*w.Y-v.Y*w.X)
	m := math.Abs(u.X)*(math.Abs(v.Y*w.Z)+math.Abs(v.Z*w.Y)) +
		math.Abs(u.Y)*(math.Abs(v.Z*w.X)+math.Abs(v.X*w.Z)) +
		math.Abs(u.Z)*(math.Abs(v.X*w.Y)+math.Abs(v.Y*w.X))
	if bound := orient3DBound * m; m > orient3DFloor && (det > bound || -det > bound) {
		return signOf(det), true
	}
	return 0, false
}

// row returns p - o exactly.
func (s *arena) row(p, o r3.Vec) [3][]float64 {
	return [3][]float64{s.diff(p.X, o.X), s.diff(p.Y, o.Y), s.diff(p.Z, o.Z)}
}

func orient3DExpansion(a, b, c, d r3.Vec) (sign int, ok bool) {
	s := newArena()
	u, v, w := s.row(b, a), s.row(c, a), s.row(d, a)
	m := [3][]float64{
		s.det2(v[1], v[2], w[1], w[2]),
		s.det2(v[2], v[0], w[2], w[0]),
		s.det2(v[0], v[1], w[0], w[1]),
	}
	return s.sign(s.dot(&u, &m))
}

func orient3DBig(a, b, c, d r3.Vec) int {
	// bigRows takes the differences from its last point, so a goes last; b, c and d
	// keep their order and the determinant its sign.
	r := bigRows(bigs(b.X, b.Y, b.Z, c.X, c.Y, c.Z, d.X, d.Y, d.Z, a.X, a.Y, a.Z))
	return bigDet3(r[0], r[1], r[2]).Sign()
}
