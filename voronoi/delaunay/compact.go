package delaunay

import "slices"

func sortInts(s []int32) { slices.Sort(s) }

func sortPoints(m *mesh, list []int32) {
	slices.SortFunc(list, func(a, b int32) int {
		switch {
		case m.less(a, b):
			return -1
		case m.less(b, a):
			return 1
		}
		return int(m.order[a-1]) - int(m.order[b-1])
	})
}

// isFree reports whether a record holds no tetrahedron: it was marked when its cavity
// was emptied, or never used. A ghost has one vertex 0, never two.
func (q *tet) isFree() bool { return q.v[0] < 0 || q.v[0]|q.v[1] == 0 }

// compact moves the real tetrahedra to the front, the ghosts behind them and forgets
// the rest.
func (t *T) compact(w *worker) {
	m := &t.mesh
	w.free, w.next, w.end = nil, 0, 0
	ghosts, real := 0, 0
	for i := range m.tets[:m.used] {
		q := &m.tets[i]
		if q.isFree() {
			continue
		}
		if q.lo == loGhost {
			ghosts++
		} else {
			real++
		}
	}
	t.real, t.ghosts = real, ghosts
	t.partition(0, real, m.used, func(q *tet) bool { return !q.isFree() && q.lo != loGhost })
	t.partition(real, real+ghosts, m.used, func(q *tet) bool { return !q.isFree() })
	m.used = real + ghosts
	m.tets = m.tets[:m.used]
	m.pts[0].tet = uint32(real)
}

// partition exchanges records so that those of lo..end-1 that belong fill lo..middle-1.
func (t *T) partition(lo, middle, end int, belongs func(*tet) bool) {
	tets := t.tets
	j := end
	for i := lo; i < middle; i++ {
		if belongs(&tets[i]) {
			continue
		}
		for j--; !belongs(&tets[j]); j-- {
		}
		t.exchange(uint32(i), uint32(j))
	}
}

// exchange swaps two records and mends what refers to them.
func (t *T) exchange(i, j uint32) {
	tets := t.tets
	tets[i], tets[j] = tets[j], tets[i]
	// References between the two first: they still name the old places.
	for _, x := range [2]uint32{i, j} {
		for k := range tets[x].n {
			switch r := tets[x].n[k]; r >> 2 {
			case i:
				tets[x].n[k] = j<<2 | r&3
			case j:
				tets[x].n[k] = i<<2 | r&3
			}
		}
	}
	for _, x := range [2]uint32{i, j} {
		q := &tets[x]
		if q.isFree() {
			continue
		}
		for k, r := range q.n {
			tets[r>>2].n[r&3] = x<<2 | uint32(k)
		}
		for _, v := range q.v {
			t.pts[v].tet = x
		}
	}
}
