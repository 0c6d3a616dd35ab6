// Package predicate decides on which side things lie, and is never wrong.
//
// It owns the signs of a few polynomials in the coordinates of given points:
//
//   - [Orient2D]: on which side of a directed line of the plane a point lies;
//   - [Orient3D]: on which side of an oriented plane a point lies;
//   - [InSphere]: whether a point lies inside the sphere through four others;
//   - [InSpherePerturbed]: the same with ties broken by a symbolic perturbation
//     (Devillers and Teillaud 2011), so that cospherical sites have one
//     triangulation that does not depend on the order of insertion;
//   - [SideOfBisector]: which of two sites is nearer to a point.
//
// # Model
//
// All functions are pure: they keep no state and return -1, 0 or +1. The
// coordinates are taken as the float64 values that they are; the sign returned is
// the sign of the exact polynomial of these values. Orient3D(a, b, c, d) is the
// sign of det(b-a, c-a, d-a): a tetrahedron a, b, c, d is called positive when it
// is +1. InSphere is +1 for a point strictly inside the sphere of a positive
// tetrahedron.
//
// Every predicate goes through named stages and stops at the first that is sure:
//
//  1. a norm filter: the determinant in floating point against a bound made of
//     squared norms, which needs neither absolute values nor square roots;
//  2. a permanent filter (Shewchuk 1997): the same determinant against the sum of
//     the absolute values of its terms, sharper for flat and stretched sets;
//  3. expansions (Shewchuk 1997): exact sums of float64 values, in fixed arrays
//     that are used again, without allocation;
//  4. where a product could underflow or overflow or an expansion would outgrow its
//     array: the same determinant of orient3d and in-sphere in numbers whose exponents
//     have no limits, against the sum of its terms' magnitudes; coordinates of very
//     different magnitudes, whose determinants are mostly one large product, end here;
//  5. math/big.
//
// # Laws
//
// The tests refer to these numbers.
//
//  1. The sign is that of the exact polynomial of the given float64 values.
//  2. An even permutation of the points keeps the sign of a determinant, an odd one
//     turns it.
//  3. The perturbed predicate agrees with the plain one where that is not 0, and its
//     answer does not depend on the order of the corners.
//  4. The tetrahedra with empty perturbed spheres are one proper triangulation.
//
// # Degenerate input
//
// Equal, collinear, coplanar and cospherical points are ordinary input: the answer
// is 0 exactly when the polynomial is 0. Subnormal, tiny and huge coordinates are
// handled. A coordinate that is NaN or infinite has no sign: the functions panic,
// since a silent answer would be a wrong one; check coordinates where they enter.
//
// # What is exact and what is rounded
//
// The signs are exact, under every build level: each product whose rounding
// matters is written float64(x*y), which forbids the compiler to fuse it with a
// following addition. The filters' bounds hold whether or not it fuses elsewhere.
// Nothing else leaves the package, in particular no determinant as a number.
//
// # Limitations
//
// The arguments are input points. A constructed point (a Voronoi vertex, the
// meeting of three planes) is rounded before it comes here, and the exact sign for
// the rounded point need not be the sign for the point that was meant.
package predicate
