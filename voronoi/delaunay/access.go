package delaunay

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
