package predicate

import "gonum.org/v1/gonum/spatial/r3"

// InSpherePerturbed is [InSphere] for a positive tetrahedron a, b, c, d without
// ties: +1 for inside, -1 for outside, never 0. A point on the sphere is judged as
// if the squared length of every point, its height on the paraboloid, were raised
// by an infinitesimal that is larger for lexicographically larger points (Devillers
// and Teillaud 2011). Points are not moved, so no tetrahedron becomes flat, and the
// answer depends on the coordinates alone, not on any numbering. A point equal to a
// corner counts as outside. It panics when a coordinate is not finite.
func InSpherePerturbed(a, b, c, d, e r3.Vec) int {
	if s := InSphere(a, b, c, d, e); s != 0 {
		return s
	}
	p := [5]r3.Vec{a, b, c, d, e}
	order := [5]int{0, 1, 2, 3, 4}
	for i := 1; i < 5; i++ {
		for j := i; j > 0 && Less(p[order[j-1]], p[order[j]]); j-- {
			order[j-1], order[j] = order[j], order[j-1]
		}
	}
	for _, r := range order {
		if p[r] == e {
			return -1
		}
		// Raising the corner r tilts the sphere; e comes to lie inside it when
		// it lies on the same side of the opposite face as r.
		t := [4]r3.Vec{a, b, c, d}
		t[r] = e
		if s := Orient3D(t[0], t[1], t[2], t[3]); s != 0 {
			return s
		}
	}
	return -1
}

// Less reports whether p comes before q in the order of x, then y, then z. It is the
// order in which [InSpherePerturbed] perturbs.
func Less(p, q r3.Vec) bool {
	if p.X != q.X {
		return p.X < q.X
	}
	if p.Y != q.Y {
		return p.Y < q.Y
	}
	return p.Z < q.Z
}
