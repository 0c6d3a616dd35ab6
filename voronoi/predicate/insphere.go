package predicate

import (
	"math"
	"math/big"

	"gonum.org/v1/gonum/spatial/r3"
)

// InSphere returns, for a positive tetrahedron a, b, c, d (see [Orient3D]), +1 when
// e lies strictly inside the sphere through its corners, -1 when it lies strictly
// outside and 0 when it lies on the sphere. For a negative tetrahedron the sign is
// turned; for a flat one it is that of the determinant
//
//	q(a) det(b,c,d) - q(b) det(a,c,d) + q(c) det(a,b,d) - q(d) det(a,b,c)
//
// with every point taken from e and q the squared length. It panics when a
// coordinate is not finite.
func InSphere(a, b, c, d, e r3.Vec) int {
	ax, ay, az := a.X-e.X, a.Y-e.Y, a.Z-e.Z
	bx, by, bz := b.X-e.X, b.Y-e.Y, b.Z-e.Z
	cx, cy, cz := c.X-e.X, c.Y-e.Y, c.Z-e.Z
	dx, dy, dz := d.X-e.X, d.Y-e.Y, d.Z-e.Z
	ab, ac, ad := ax*by-ay*bx, ax*cy-ay*cx, ax*dy-ay*dx
	bc, bd, cd := bx*cy-by*cx, bx*dy-by*dx, cx*dy-cy*dx
	qa := ax*ax + ay*ay + az*az
	qb := bx*bx + by*by + bz*bz
	qc := cx*cx + cy*cy + cz*cz
	qd := dx*dx + dy*dy + dz*dz
	det := (qa*(bz*cd-cz*bd+dz*bc) - qb*(az*cd-cz*ad+dz*ac)) +
		(qc*(az*bd-bz*ad+dz*ab) - qd*(az*bc-bz*ac+cz*ab))
	if inSphereNormSure(det, qa, qb, qc, qd) {
		return signOf(det)
	}
	return inSphereSlow(a, b, c, d, e)
}

// inSphereNormFactor is the square of the relative bound of the norm filter.
//
// Each term of the determinant carries at most sixteen roundings: three differences
// of its minor and two of its square, the two products and one subtraction that make
// the inner minor and scale it (3), two sums of the minor, three of the square (one
// product, two sums), the product of square and minor (1) and two final sums; that is
// 3+2+3+2+3+1+2 = 16. So |computed - exact| <= 16ε/(1-16ε) · P, where P is the sum
// over the points of |i|² times the permanent of the other three, at most
// √2 |j||k||l| (see orient3DNormFactor): P <= √2 |a||b||c||d| (|a|+|b|+|c|+|d|)
// <= 2√2 |a||b||c||d| √(|a|²+|b|²+|c|²+|d|²). The square of the bound is
// (32√2 ε)² = 2048 ε² times the product of the five squares; 1 + 2^-40 covers the
// roundings of the bound itself.
const inSphereNormFactor = 2048 * epsilon * epsilon * (1 + 0x1p-40)

// Squared lengths inside these limits keep the bound's square above 1e-278 and an
// underflowing product, grown by at most 1e75, far below the bound's slack.
const inSphereNormLow, inSphereNormHigh = 1e-50, 1e50

func inSphereNormSure(det, qa, qb, qc, qd float64) bool {
	return det*det > inSphereNormFactor*((qa*qb)*(qc*qd))*(qa+qb+qc+qd) &&
		qa > inSphereNormLow && qb > inSphereNormLow && qc > inSphereNormLow && qd > inSphereNormLow &&
		qa < inSphereNormHigh && qb < inSphereNormHigh && qc < inSphereNormHigh && qd < inSphereNormHigh
}

func inSphereSlow(a, b, c, d, e r3.Vec) int {
	const low, high = degree5Low, degree5High
	if within3(a, low, high) && within3(b, low, high) && within3(c, low, high) &&
		within3(d, low, high) && within3(e, low, high) {
		if s, ok := inSpherePermanent(a, b, c, d, e); ok {
			return s
		}
		if s, ok := inSphereExpansion(a, b, c, d, e); ok {
			return s
		}
	}
	if s, ok := inSphereWide(a, b, c, d, e); ok {
		return s
	}
	return inSphereBig(a, b, c, d, e)
}

// inSphereBound: sixteen roundings of the determinant (see inSphereNormFactor) and
// at most sixteen of the computed permanent m:
// 16ε/(1-16ε) · m/(1-16ε) < (16 + 1024ε)ε m.
const inSphereBound = (16 + 1024*epsilon) * epsilon

// inSphereFloor: with coordinates below degree5High an underflowing product errs by
// less than 2^-1074 · 2^200 · 2^402 < 1e-141, lost in the slack of inSphereBound
// (about 1e-14 of it) as long as the permanent is above this.
const inSphereFloor = 1e-100

func inSpherePermanent(a, b, c, d, e r3.Vec) (sign int, ok bool) {
	a, b, c, d = r3.Sub(a, e), r3.Sub(b, e), r3.Sub(c, e), r3.Sub(d, e)
	ab, mab := minor(a, b)
	ac, mac := minor(a, c)
	ad, mad := minor(a, d)
	bc, mbc := minor(b, c)
	bd, mbd := minor(b, d)
	cd, mcd := minor(c, d)
	qa, qb, qc, qd := r3.Norm2(a), r3.Norm2(b), r3.Norm2(c), r3.Norm2(d)
	det := (qa*(b.Z*cd-c.Z*bd+d.Z*bc) - qb*(a.Z*cd-c.Z*ad+d.Z*ac)) +
		(qc*(a.Z*bd-b.Z*ad+d.Z*ab) - qd*(a.Z*bc-b.Z*ac+c.Z*ab))
	az, bz, cz, dz := math.Abs(a.Z), math.Abs(b.Z), math.Abs(c.Z), math.Abs(d.Z)
	m := (qa*(bz*mcd+cz*mbd+dz*mbc) + qb*(az*mcd+cz*mad+dz*mac)) +
		(qc*(az*mbd+bz*mad+dz*mab) + qd*(az*mbc+bz*mac+cz*mab))
	if bound := inSphereBound * m; m > inSphereFloor && (det > bound || -det > bound) {
		return signOf(det), true
	}
	return 0, false
}

// minor returns the determinant of the two points' x and y and the sum of the
// magnitudes of its terms.
func minor(p, q r3.Vec) (det, m float64) {
	l, r := p.X*q.Y, p.Y*q.X
	return l - r, math.Abs(l) + math.Abs(r)
}

func inSphereExpansion(a, b, c, d, e r3.Vec) (sign int, ok bool) {
	s := newArena()
	u, v, w, t := s.row(a, e), s.row(b, e), s.row(c, e), s.row(d, e)
	ab, ac, ad := s.det2(u[0], u[1], v[0], v[1]), s.det2(u[0], u[1], w[0], w[1]), s.det2(u[0], u[1], t[0], t[1])
	bc, bd, cd := s.det2(v[0], v[1], w[0], w[1]), s.det2(v[0], v[1], t[0], t[1]), s.det2(w[0], w[1], t[0], t[1])
	h := s.lifted(&u, v[2], w[2], t[2], cd, bd, bc)
	h = s.add(h, s.neg(s.lifted(&v, u[2], w[2], t[2], cd, ad, ac)))
	h = s.add(h, s.lifted(&w, u[2], v[2], t[2], bd, ad, ab))
	h = s.add(h, s.neg(s.lifted(&t, u[2], v[2], w[2], bc, ac, ab)))
	return s.sign(h)
}

// lifted returns |p|² (x·yz - y·xz + z·xy), one of the four terms of in-sphere: x, y
// and z are the heights of the three other points and the rest their minors.
func (s *arena) lifted(p *[3][]float64, x, y, z, yz, xz, xy []float64) []float64 {
	mark := s.used
	h := s.add(s.mul(x, yz), s.neg(s.mul(y, xz)))
	h = s.add(h, s.mul(z, xy))
	return s.settle(mark, s.mul(s.dot(p, p), compress(h)))
}

func inSphereBig(a, b, c, d, e r3.Vec) int {
	r := bigRows(bigs(a.X, a.Y, a.Z, b.X, b.Y, b.Z, c.X, c.Y, c.Z, d.X, d.Y, d.Z, e.X, e.Y, e.Z))
	sum := new(big.Int)
	for i := range r {
		o := make([][3]*big.Int, 0, 3)
		q := new(big.Int)
		for j := range r {
			if j != i {
				o = append(o, r[j])
			}
		}
		for k := range 3 {
			q = bigAdd(q, bigMul(r[i][k], r[i][k]))
		}
		term := bigMul(q, bigDet3(o[0], o[1], o[2]))
		if i%2 == 0 {
			sum = bigAdd(sum, term)
		} else {
			sum = bigSub(sum, term)
		}
	}
	return sum.Sign()
}
