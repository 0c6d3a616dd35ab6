package delaunay

import "math"

// Circumspheres and how far they can be trusted.
//
// With u, v, w the corners seen from a fourth, D = u·(v×w) and P = |u||v||w|, the
// centre is that corner plus N/(2D), N = |u|²v×w + |v|²w×u + |w|²u×v. Counting
// roundings as in exact.go, D errs by at most 8√2 εP and N by 12√2 εP(|u|+|v|+|w|).
// Chords are no longer than 2R, so the centre errs by at most
//
//	R ε (36√2 + 8√2) κ·1.01 + 2εR + ε·|coordinates|,   κ = P/D,
//
// below δ = R(63εκ + 3ε) + 2ε(1+R) for coordinates within 1. A site's squared
// distance to the stored centre then differs from what it would be for the true
// sphere by at most 4δR, and ten roundings of distance and radius add 10εR²: the
// bounds are R²(1 ∓ μ) with
//
//	μ = 252εκ + 30ε + 8ε/R
//
// before they are widened to float32. For κ < 2^20 and R above smallestSphere the sum
// is below 2^-23, and 2^-22 is used without looking closer.
const (
	plainMargin = 0x1p-22
	plainKappa2 = 0x1p40
	kappaFloor  = 1e-250
	floatMargin = 0x1p-23
	worstMargin = 0x1p-8
)

// smallestSphere is the squared radius from which the plain bounds hold: 16ε/R < 2^-25.
const smallestSphere = (16 * epsilon * (1 << 25)) * (16 * epsilon * (1 << 25))

// isExact reports whether the centre and the squared radius r2 of a sphere are exact, for
// coordinates that are whole multiples of a unit of at least 2^-coarseBits. In units: the
// squared chords to three corners, with sum squares, are below 2^16, so that coordinates
// of corners are below 2^8, minors below 2^17, det and the numerators N of the centre
// integers below 2^36. When det is a power of two the centre N/(2 det) is exact, and the
// sum of N² is when (2 R det)² is below 2^50. Places have at most 24 bits before and 28
// behind the point then, which is as exact, and the squared distance of another site
// either is or is larger than any such r2. What is left to ask is whether float32 holds r2.
func (m *mesh) isExact(det, squares, r2 float64) bool {
	return squares < m.limits.exactSquares && math.Float64bits(det)<<12 == 0 &&
		4*r2*det*det < m.limits.exactNumber && float64(float32(r2)) == r2
}

// carefulBounds returns the bounds of a sphere outside the plain range. det is 2D's
// half, p2 the square of P, r2 the squared radius.
func carefulBounds(det, p2, r2 float64) (lo, hi float32) {
	if det > 1e-120 && p2 > 1e-240 && r2 > 1e-30 && r2 < 1e30 {
		kappa := math.Sqrt(p2) / det
		margin := 1.1*(252*epsilon*kappa+30*epsilon+16*epsilon/math.Sqrt(r2)) + floatMargin
		if margin < worstMargin {
			return float32(r2 * (1 - margin)), float32(r2 * (1 + margin))
		}
	}
	return loIll, float32(math.Inf(1))
}
