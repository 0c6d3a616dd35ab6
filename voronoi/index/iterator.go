package index

// Iterator hands out the points of a tree by growing distance from a place. Its
// buffers are kept from one Start to the next. It belongs to one goroutine.
type Iterator struct {
	tree *Tree
	q    Vec
	heap []entry
}

// entry is a node (point < 0) or a point waiting for its turn.
type entry struct {
	frame
	point int32
}

// Start begins a walk at q.
func (it *Iterator) Start(t *Tree, q Vec) {
	it.tree, it.q, it.heap = t, q, it.heap[:0]
	if len(t.points) > 0 {
		it.push(entry{frame{t.boxes[0].Dist2(q), 0, 0, int32(len(t.points)), 0}, -1})
	}
}

// Next is the next point by growing squared distance, equal ones by number;
// false when there are no more.
func (it *Iterator) Next() (Neighbour, bool) {
	t := it.tree
	for len(it.heap) > 0 {
		e := it.pop()
		if e.point >= 0 {
			return Neighbour{e.point, e.far2}, true
		}
		if int(e.depth) == t.depth {
			for i := e.from; i < e.to; i++ {
				it.push(entry{frame{far2: distance2(t.points[i], it.q)}, i})
			}
			continue
		}
		near, far := t.children(e.frame, it.q)
		it.push(entry{near, -1})
		it.push(entry{far, -1})
	}
	return Neighbour{}, false
}

// before orders the heap: a node stands for the least distance that rounding
// lets one of its points have.
func (e *entry) before(o *entry) bool {
	a, b := e.key(), o.key()
	if a != b {
		return a < b
	}
	if (e.point < 0) != (o.point < 0) {
		return e.point < 0
	}
	return e.point < o.point
}

func (e *entry) key() float64 {
	if e.point < 0 {
		return float64(e.far2 * (2 - slack))
	}
	return e.far2
}

func (it *Iterator) push(e entry) {
	it.heap = append(it.heap, e)
	h := it.heap
	i := len(h) - 1
	for i > 0 {
		up := (i - 1) / 2
		if !h[i].before(&h[up]) {
			break
		}
		h[i], h[up] = h[up], h[i]
		i = up
	}
}

func (it *Iterator) pop() entry {
	h := it.heap
	top := h[0]
	last := len(h) - 1
	h[0] = h[last]
	h = h[:last]
	it.heap = h
	for i := 0; ; {
		k := 2*i + 1
		if k >= len(h) {
			break
		}
		if k+1 < len(h) && h[k+1].before(&h[k]) {
			k++
		}
		if !h[k].before(&h[i]) {
			break
		}
		h[i], h[k] = h[k], h[i]
		i = k
	}
	return top
}
