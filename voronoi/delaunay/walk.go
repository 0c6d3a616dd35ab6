package delaunay

// locate walks from the last star towards p and returns a tetrahedron in conflict
// with it, or the vertex that p is equal to. It stops as soon as a stored sphere
// certainly contains p, which is a step or two before the tetrahedron of p.
func (w *worker) locate(p int32) (seed uint32, equal int32) {
	m := w.m
	tets, pts := m.tets, m.pts
	px, py, pz := pts[p].x, pts[p].y, pts[p].z
	cur := w.hint
	for {
		t := &tets[cur]
		x, y, z := t.c[0]-px, t.c[1]-py, t.c[2]-pz
		if x*x+y*y+z*z < float64(t.lo) {
			return cur, 0
		}
		if t.lo == loGhost {
			return cur, 0 // p is strictly outside the facet that was crossed
		}
		a, b, c, d := &pts[t.v[0]], &pts[t.v[1]], &pts[t.v[2]], &pts[t.v[3]]
		ax, ay, az := a.x-px, a.y-py, a.z-pz
		bx, by, bz := b.x-px, b.y-py, b.z-pz
		cx, cy, cz := c.x-px, c.y-py, c.z-pz
		dx, dy, dz := d.x-px, d.y-py, d.z-pz
		ab, ac, ad := ax*by-ay*bx, ax*cy-ay*cx, ax*dy-ay*dx
		bc, bd, cd := bx*cy-by*cx, bx*dy-by*dx, cx*dy-cy*dx
		s0 := bz*cd - cz*bd + dz*bc
		s1 := cz*ad - az*cd - dz*ac
		s2 := az*bd - bz*ad + dz*ab
		s3 := bz*ac - az*bc - cz*ab
		k, s := 0, s0
		if s1 < s {
			k, s = 1, s1
		}
		if s2 < s {
			k, s = 2, s2
		}
		if s3 < s {
			k, s = 3, s3
		}
		if s < 0 {
			q := [4]float64{
				ax*ax + ay*ay + az*az, bx*bx + by*by + bz*bz,
				cx*cx + cy*cy + cz*cz, dx*dx + dy*dy + dz*dz,
			}
			n := q[(k+1)&3] * q[(k+2)&3] * q[(k+3)&3]
			if s*s > orientFactor*n && n > filterFloor {
				cur = t.n[k] >> 2
				continue
			}
		}
		next, equal := w.step(cur, p)
		if equal != 0 || next == cur {
			return cur, equal
		}
		cur = next
	}
}

// step takes one exact step of the walk from a real tetrahedron: it returns the
// neighbour beyond a face that separates t from p, t itself when p is in it, or the
// vertex that p is equal to.
func (w *worker) step(t uint32, p int32) (next uint32, equal int32) {
	m := w.m
	q := &m.tets[t]
	for _, v := range q.v {
		if m.same(v, p) {
			return t, v
		}
	}
	for k := range 4 {
		v := q.v
		v[k] = p
		if m.orient(v[0], v[1], v[2], v[3]) < 0 {
			return q.n[k] >> 2, 0
		}
	}
	return t, 0
}
