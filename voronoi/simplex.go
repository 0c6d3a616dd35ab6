package voronoi

import "math"

// Tetrahedron is what can be said of the tetrahedron of four places. Volumes of flat
// tetrahedra, and all that follows from them, come from two words a number, so that
// slivers keep their digits. Angles are in radians.
type Tetrahedron struct {
	Volume            float64
	Centre            Vec // of the sphere through the corners
	Radius            float64
	Shortest, Longest float64 // edges
	// Dihedral angles between faces, the sharpest and the bluntest.
	MinDihedral, MaxDihedral float64
}

// MeasureTetrahedron measures the tetrahedron a, b, c, d, which must not be flat.
func MeasureTetrahedron(a, b, c, d Vec) Tetrahedron {
	u, v, w := difference(b, a), difference(c, a), difference(d, a)
	six := math.Abs(u.dot(v.cross(w)).high)
	t := Tetrahedron{Volume: six / 6, Shortest: math.Inf(1), MinDihedral: math.Inf(1)}
	p := [4]Vec{a, b, c, d}
	end := 0 // of the shortest edge
	for i := range 4 {
		for j := range i {
			// The faces at the edge i, j have the other corners k and l.
			k := 0
			for k == i || k == j {
				k++
			}
			l := 6 - i - j - k
			e := sub(p[j], p[i])
			edge := length(e)
			if edge < t.Shortest {
				t.Shortest, end = edge, i
			}
			t.Longest = max(t.Longest, edge)
			// With normals m and n of the two faces that look along the edge the same
			// way round, |m × n| = 6V|e|, and m·n is the cosine.
			m, n := cross(e, sub(p[k], p[i])), cross(e, sub(p[l], p[i]))
			angle := math.Atan2(six*edge, dot(m, n))
			t.MinDihedral, t.MaxDihedral = min(t.MinDihedral, angle), max(t.MaxDihedral, angle)
		}
	}
	// Seen from there the other corners differ most.
	o, _ := fineCircumcentre(p[end], p[(end+1)%4], p[(end+2)%4], p[(end+3)%4])
	t.Centre, t.Radius = add(p[end], o), length(o)
	return t
}

// MeasureTriangle gives area and circumradius of the triangle a, b, c, and the unit
// normal of the side from which the corners run counter-clockwise.
func MeasureTriangle(a, b, c Vec) (area, radius float64, normal Vec) {
	u, v, w := difference(b, a), difference(c, a), sub(c, b)
	n := u.cross(v)
	normal = Vec{X: n.x.high, Y: n.y.high, Z: n.z.high}
	twice := length(normal)
	radius = length(sub(b, a)) * length(sub(c, a)) * length(w) / (2 * twice)
	return twice / 2, radius, Vec{X: normal.X / twice, Y: normal.Y / twice, Z: normal.Z / twice}
}

// DualLength is the length of the Voronoi edge between the centres of the spheres
// through a, b, c, d and a, b, c, e.
func DualLength(a, b, c, d, e Vec) float64 {
	o, _ := fineCircumcentre(a, b, c, d)
	p, _ := fineCircumcentre(a, b, c, e)
	return length(sub(o, p))
}

// StretchedCentre is the place that is as far from a, b, c, d in distances stretched by s
// as from one another: the vertex of a stretched diagram, in true units.
func StretchedCentre(a, b, c, d, s Vec) Vec {
	return add(a, centreFrom(a, b, c, d, s))
}

// centreFrom is the same as seen from a.
func centreFrom(a, b, c, d, s Vec) Vec {
	from := func(p Vec) Vec { return stretch(sub(p, a), s) }
	o, _ := fineCircumcentre(Vec{}, from(b), from(c), from(d))
	return Vec{X: o.X / s.X, Y: o.Y / s.Y, Z: o.Z / s.Z}
}

// StretchedDualLength is DualLength of a diagram with distances stretched by s: the true
// length of its edge.
func StretchedDualLength(a, b, c, d, e, s Vec) float64 {
	return length(sub(centreFrom(a, b, c, d, s), centreFrom(a, b, c, e, s)))
}
