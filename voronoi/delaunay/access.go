package delaunay

import "gonum.org/v1/gonum/spatial/r3"

// Record returns the corners of a tetrahedron as points and what lies over its faces:
// 4*tetrahedron + corner there, as in Neighbor. They are views of the tetrahedralisation
// for passes over all of it, and not to be written to.
func (t *T) Record(i uint32) (corners *[4]int32, links *[4]uint32) {
	q := &t.tets[i]
	return &q.v, &q.n
}

// PointTet returns a tetrahedron at a point, perhaps a ghost; ok is false for a point
// that is no vertex.
func (t *T) PointTet(p int32) (tet uint32, ok bool) {
	i := t.pts[p].tet
	return i, i != noTet
}

// PointPlace returns the site of a point that is a vertex, and its coordinates.
func (t *T) PointPlace(p int32) (site int32, at r3.Vec) {
	s := int(t.order[p-1])
	return int32(s), r3.Vec{X: t.sites[3*s], Y: t.sites[3*s+1], Z: t.sites[3*s+2]}
}
