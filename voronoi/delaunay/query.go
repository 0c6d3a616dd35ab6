package delaunay

// NumTets is the number of real tetrahedra.
func (t *T) NumTets() int { return t.real }
