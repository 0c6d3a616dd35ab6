package predicate

import (
	"math/big"

	"gonum.org/v1/gonum/spatial/r3"
)

// SideOfBisector compares the distances from x to the sites p and q: -1 when p is
// nearer, +1 when q is nearer, 0 when x is equally far from both. It is the sign of
// |x-p|² - |x-q|². It panics when a coordinate is not finite.
func SideOfBisector(p, q, x r3.Vec) int {
	if s, ok := bisectorFilter(p, q, x); ok {
		return s
	}
	const low, high = degree2Low, degree2High
	if within3(p, low, high) && within3(q, low, high) && within3(x, low, high) {
		if s, ok := bisectorExpansion(p, q, x); ok {
			return s
		}
	}
	return bisectorBig(p, q, x)
}

// bisectorNormFactor is the square of the relative bound: (q-p)·((x-p)+(x-q)) has in
// each term one rounding of q-p, two of the sum, one of the product and two of the
// sums, six in all. The magnitudes are at most |q-p| (|x-p|+|x-q|), whose square is at
// most 2 |q-p|² (|x-p|²+|x-q|²): (6ε)² · 2 = 72 ε². 1 + 2^-40 covers the roundings of
// the norms and of the comparison.
const bisectorNormFactor = 72 * epsilon * epsilon * (1 + 0x1p-40)

// Squared lengths inside these limits keep the square of the bound normal, and an
// underflowing product, at most 2^-1074, far below the bound's slack.
const bisectorNormLow, bisectorNormHigh = 1e-120, 1e120

func bisectorFilter(p, q, x r3.Vec) (sign int, ok bool) {
	n, u, v := r3.Sub(q, p), r3.Sub(x, p), r3.Sub(x, q)
	val := n.X*(u.X+v.X) + n.Y*(u.Y+v.Y) + n.Z*(u.Z+v.Z)
	nn, nm := r3.Norm2(n), r3.Norm2(u)+r3.Norm2(v)
	ok = val*val > bisectorNormFactor*nn*nm &&
		nn > bisectorNormLow && nn < bisectorNormHigh && nm > bisectorNormLow && nm < bisectorNormHigh
	return signOf(val), ok
}

func bisectorExpansion(p, q, x r3.Vec) (sign int, ok bool) {
	s := newArena()
	n, u, v := s.row(q, p), s.row(x, p), s.row(x, q)
	for k := range u {
		u[k] = s.add(u[k], v[k])
	}
	return s.sign(s.dot(&n, &u))
}

func bisectorBig(p, q, x r3.Vec) int {
	r := bigRows(bigs(p.X, p.Y, p.Z, q.X, q.Y, q.Z, x.X, x.Y, x.Z))
	sum := new(big.Int)
	for k := range 3 {
		sum = bigAdd(sum, bigSub(bigMul(r[0][k], r[0][k]), bigMul(r[1][k], r[1][k])))
	}
	return sum.Sign()
}
