package index

import (
	"errors"
	"sync"
)

// Restore is the tree that New made of some points, of its Points and the Original of
// each, which it keeps and which must not be changed. It costs one pass over them. What
// it is given must come from such a tree: only lengths and ranges are checked.
func Restore(points []Vec, original []int32) (*Tree, error) {
	n := len(points)
	if len(original) != n {
		return nil, errors.New("index: points and their places do not fit")
	}
	for _, i := range original {
		if i < 0 || int(i) >= n {
			return nil, errors.New("index: a place out of range")
		}
	}
	t := &Tree{points: points, original: original}
	t.boxes = make([]Box, 2<<t.setDepth(n)-1)
	if n > 0 {
		t.box(0, 0, 0, n)
	}
	return t, nil
}

// Originals is what Original gives of every point, to be stored. It is shared.
func (t *Tree) Originals() []int32 { return t.original }

// setDepth sets the depth of a tree of n points.
func (t *Tree) setDepth(n int) int {
	for n > leafSize {
		n = (n + 1) / 2
		t.depth++
	}
	return t.depth
}

// box finds the boxes of a node and of those below it.
func (t *Tree) box(node, depth, from, to int) {
	if depth == t.depth {
		t.boxes[node] = boundingBox(t.points[from:to])
		return
	}
	mid := from + (to-from+1)/2
	if to-from >= 1<<17 {
		var left sync.WaitGroup
		left.Go(func() { t.box(2*node+1, depth+1, from, mid) })
		t.box(2*node+2, depth+1, mid, to)
		left.Wait()
	} else {
		t.box(2*node+1, depth+1, from, mid)
		t.box(2*node+2, depth+1, mid, to)
	}
	a, b := &t.boxes[2*node+1], &t.boxes[2*node+2]
	t.boxes[node] = Box{
		Lo:     Vec{X: min(a.Lo.X, b.Lo.X), Y: min(a.Lo.Y, b.Lo.Y), Z: min(a.Lo.Z, b.Lo.Z)},
		Hi:     Vec{X: max(a.Hi.X, b.Hi.X), Y: max(a.Hi.Y, b.Hi.Y), Z: max(a.Hi.Z, b.Hi.Z)},
		Points: to - from,
	}
}
