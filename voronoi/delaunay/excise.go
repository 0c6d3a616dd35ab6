package delaunay

import "math"

// excise removes vertex p and fills the hole by wrapping: over each open face of the
// hole the tetrahedron whose sphere contains no other vertex of the link. Devillers
// and Teillaud (2011): with the shared perturbation the hole's tetrahedra are those of
// the whole without p, so that each face has exactly one. It reports false when that
// leaves no tetrahedron at all, and nothing can be relied on any more.
func (t *T) excise(p int32) bool {
	star := t.star(p, nil)
	h := hole{t: t, p: p, open: make(map[[3]int32]uint32)}
	h.link = t.linkPoints(p, nil)
	if h.link[0] == 0 {
		h.link = h.link[1:]
	}
	old := make([]uint32, len(star))
	for i, s := range star {
		old[i] = uint32(s)
	}
	deltaReal := -t.countReal(old)
	for _, i := range old {
		q := &t.tets[i]
		for k, v := range q.v {
			if v == p {
				h.outer = append(h.outer, q.n[k])
			}
		}
	}
	for _, i := range old {
		t.tets[i].v[0] |= marked
	}
	h.w = t.editor()
	h.w.free = append(h.w.free, old...)
	h.wrap()
	made := t.countReal(h.made)
	if len(h.open) > 0 || t.real+deltaReal+made <= 0 {
		return false
	}
	for _, q := range h.link {
		t.mendVertex(q, h.made)
	}
	t.pts[p].tet = noTet
	t.settle(h.w, append(old, h.made...), deltaReal+made, len(h.made)-len(old))
	return true
}

// hole is what is left of a star while it is filled.
type hole struct {
	t     *T
	p     int32
	w     *worker
	link  []int32
	outer []uint32            // faces that look into the hole and have no partner yet
	open  map[[3]int32]uint32 // the same by their sorted vertices
	made  []uint32
}

func faceKey(a, b, c int32) [3]int32 {
	if a > b {
		a, b = b, a
	}
	if b > c {
		b, c = c, b
	}
	if a > b {
		a, b = b, a
	}
	return [3]int32{a, b, c}
}

func (h *hole) wrap() {
	t := h.t
	for _, r := range h.outer {
		v, back := &t.tets[r>>2].v, &faceBack[r&3]
		h.open[faceKey(v[back[0]], v[back[1]], v[back[2]])] = r
	}
	for head := 0; head < len(h.outer); head++ {
		r := h.outer[head]
		v, back := &t.tets[r>>2].v, &faceBack[r&3]
		a, b, c := v[back[0]], v[back[1]], v[back[2]]
		key := faceKey(a, b, c)
		if key[0] == 0 || h.open[key] != r {
			continue // a ghost's face waits for another ghost; or closed meanwhile
		}
		if _, still := h.open[key]; !still {
			continue
		}
		h.add([4]int32{h.apex(a, b, c), a, b, c})
	}
}

// apex returns the vertex over the face a, b, c, or 0 when it lies on the hull.
func (h *hole) apex(a, b, c int32) int32 {
	best := int32(0)
	for _, e := range h.link {
		if e == a || e == b || e == c || h.t.orient(e, a, b, c) <= 0 {
			continue
		}
		if best == 0 || h.t.inSphere(best, a, b, c, e) {
			best = e
		}
	}
	return best
}

// add makes a tetrahedron and joins its faces to open ones.
func (h *hole) add(v [4]int32) {
	t := h.t
	t.room(h.w, 1)
	id := h.w.fresh()
	h.made = append(h.made, id)
	q := &t.tets[id]
	q.v = v
	if v[0] == 0 {
		q.lo, q.hi = loGhost, float32(math.Inf(1))
	} else {
		t.setSphere(q)
	}
	for k := range uint32(4) {
		f := &faceOf[k]
		key := faceKey(v[f[0]], v[f[1]], v[f[2]])
		ref := id<<2 | k
		if other, found := h.open[key]; found {
			delete(h.open, key)
			q.n[k] = other
			t.tets[other>>2].n[other&3] = ref
		} else {
			h.open[key] = ref
			h.outer = append(h.outer, ref)
		}
	}
}

// mendVertex gives a vertex of the link one of the new tetrahedra.
func (t *T) mendVertex(p int32, made []uint32) {
	for _, i := range made {
		if has(t.tets[i].v[:], nil, p) {
			t.pts[p].tet = i
			return
		}
	}
}
