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
// the free records. Neither pass looks at more than those that are not real.
func (t *T) compact(workers []*worker) {
	tail := t.allGhosts(workers)
	t.ghosts = len(tail)
	for _, w := range workers {
		tail = append(tail, w.free...)
		for ; w.next < w.end; w.next++ {
			tail = append(tail, w.next)
		}
		if w.owner != nil || w.spare != 0 {
			tail = append(tail, w.spare)
		}
		w.free, w.next, w.end = nil, 0, 0
	}
	used := int(t.used)
	t.real = used - len(tail)
	high := t.real
	for _, i := range tail {
		if int(i) >= t.real {
			continue
		}
		for t.tets[high].isFree() || t.tets[high].lo == loGhost {
			high++
		}
		t.exchange(i, uint32(high))
	}
	all := t.real + t.ghosts
	high = all
	for i := t.real; i < all; i++ {
		if t.tets[i].isFree() {
			for t.tets[high].isFree() {
				high++
			}
			t.exchange(uint32(i), uint32(high))
		}
	}
	t.used = int64(all)
	t.tets = t.tets[:all]
	t.pts[0].tet = uint32(t.real)
}

// allGhosts lists the ghosts, from neighbour to neighbour.
func (t *T) allGhosts(workers []*worker) []uint32 {
	const seen = loGhost - 1
	var list []uint32
	for _, w := range workers {
		// Of the last ghosts that the workers made the newest is still there.
		if q := &t.tets[w.ghost]; len(list) == 0 && !q.isFree() && q.lo == loGhost {
			q.lo = seen
			list = append(list, w.ghost)
		}
	}
	for head := 0; head < len(list); head++ {
		for _, r := range t.tets[list[head]].n {
			if q := &t.tets[r>>2]; q.lo == loGhost {
				q.lo = seen
				list = append(list, r>>2)
			}
		}
	}
	for _, i := range list {
		t.tets[i].lo = loGhost
	}
	return list
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
