package index

import (
	"math"
	"sync"

	"gonum.org/v1/gonum/spatial/r3"
)

// Vec is a point or a vector in space.
type Vec = r3.Vec

// leafSize is the most points a leaf holds.
const leafSize = 8

// slack widens the radius within which boxes are searched: the squared distance
// to a box and to a point in it are rounded differently.
const slack = 1 + 0x1p-49

// Tree is a k-d tree. It is immutable and safe for concurrent readers.
type Tree struct {
	points   []Vec   // in the tree's order
	original []int32 // place in the input
	boxes    []Box   // by node
	depth    int     // nodes at this depth are leaves
}

// New builds the tree of the points; it keeps no reference to them.
func New(points []Vec) *Tree {
	n := len(points)
	t := &Tree{points: append([]Vec(nil), points...), original: make([]int32, n)}
	for i := range t.original {
		t.original[i] = int32(i)
	}
	t.boxes = make([]Box, 2<<t.setDepth(n)-1)
	if len(points) > 0 {
		t.build(0, 0, 0, len(points))
	}
	return t
}

// parallelFrom is the number of points from which a node builds its two halves
// at the same time. The halves share nothing, so that the tree is the same.
const parallelFrom = 1 << 15

func (t *Tree) build(node, depth, from, to int) {
	b := boundingBox(t.points[from:to])
	t.boxes[node] = b
	if depth == t.depth {
		t.sortLeaf(from, to, widest(b))
		return
	}
	mid := from + (to-from+1)/2
	t.selectNth(from, to, mid, widest(b))
	if to-from < parallelFrom {
		t.build(2*node+1, depth+1, from, mid)
		t.build(2*node+2, depth+1, mid, to)
		return
	}
	var both sync.WaitGroup
	both.Go(func() { t.build(2*node+1, depth+1, from, mid) })
	t.build(2*node+2, depth+1, mid, to)
	both.Wait()
}

func boundingBox(points []Vec) Box {
	b := Box{points[0], points[0], len(points)}
	for _, p := range points[1:] {
		b.Lo = Vec{X: min(b.Lo.X, p.X), Y: min(b.Lo.Y, p.Y), Z: min(b.Lo.Z, p.Z)}
		b.Hi = Vec{X: max(b.Hi.X, p.X), Y: max(b.Hi.Y, p.Y), Z: max(b.Hi.Z, p.Z)}
	}
	return b
}

func widest(b Box) int {
	x, y, z := b.Hi.X-b.Lo.X, b.Hi.Y-b.Lo.Y, b.Hi.Z-b.Lo.Z
	switch {
	case x >= y && x >= z:
		return 0
	case y >= z:
		return 1
	}
	return 2
}

// turned is the point with the given axis first.
func turned(p Vec, axis int) (a, b, c float64) {
	switch axis {
	case 0:
		return p.X, p.Y, p.Z
	case 1:
		return p.Y, p.Z, p.X
	}
	return p.Z, p.X, p.Y
}

// less orders points by the axis, then the other axes, then the input.
func (t *Tree) less(i int, pivot Vec, place int32, axis int) bool {
	a, b, c := turned(t.points[i], axis)
	p, q, r := turned(pivot, axis)
	if a != p {
		return a < p
	}
	if b != q {
		return b < q
	}
	if c != r {
		return c < r
	}
	return t.original[i] < place
}

func (t *Tree) swap(i, j int) {
	t.points[i], t.points[j] = t.points[j], t.points[i]
	t.original[i], t.original[j] = t.original[j], t.original[i]
}

// selectNth moves points within [from, to) so that those before nth are less
// than those from nth on (Hoare 1961, pivot the median of three).
func (t *Tree) selectNth(from, to, nth, axis int) {
	for to-from > 2 {
		pivot, place := t.medianOfThree(from, from+(to-from)/2, to-1, axis)
		i, j := from, to-1
		for i <= j {
			for t.less(i, pivot, place, axis) {
				i++
			}
			for t.less2(pivot, place, j, axis) {
				j--
			}
			if i <= j {
				t.swap(i, j)
				i++
				j--
			}
		}
		switch {
		case nth <= j:
			to = j + 1
		case nth >= i:
			from = i
		default:
			return
		}
	}
	if to-from == 2 && t.less(from+1, t.points[from], t.original[from], axis) {
		t.swap(from, from+1)
	}
}

// less2 tells whether the pivot is less than point j.
func (t *Tree) less2(pivot Vec, place int32, j, axis int) bool {
	return t.original[j] != place && !t.less(j, pivot, place, axis)
}

func (t *Tree) medianOfThree(a, b, c, axis int) (Vec, int32) {
	if t.less(b, t.points[a], t.original[a], axis) {
		a, b = b, a
	}
	if t.less(c, t.points[b], t.original[b], axis) {
		b = c
		if t.less(b, t.points[a], t.original[a], axis) {
			b = a
		}
	}
	return t.points[b], t.original[b]
}

// sortLeaf sorts a leaf by insertion, so that the order does not remember how
// the selection came about.
func (t *Tree) sortLeaf(from, to, axis int) {
	for i := from + 1; i < to; i++ {
		for j := i; j > from && t.less(j, t.points[j-1], t.original[j-1], axis); j-- {
			t.swap(j, j-1)
		}
	}
}

// Len is the number of points.
func (t *Tree) Len() int { return len(t.points) }

// Point is point i in the tree's order.
func (t *Tree) Point(i int32) Vec { return t.points[i] }

// Points are all points in the tree's order: a view not to be written to.
func (t *Tree) Points() []Vec { return t.points }

// Original is the place in the input of point i of the tree's order.
func (t *Tree) Original(i int32) int32 { return t.original[i] }

// Bounds is the bounding box of all points; of none, +Inf to -Inf.
func (t *Tree) Bounds() (lo, hi Vec) {
	if len(t.points) == 0 {
		inf := math.Inf(1)
		return Vec{X: inf, Y: inf, Z: inf}, Vec{X: -inf, Y: -inf, Z: -inf}
	}
	return t.boxes[0].Lo, t.boxes[0].Hi
}

func distance2(a, b Vec) float64 {
	x, y, z := a.X-b.X, a.Y-b.Y, a.Z-b.Z
	return float64(x*x) + float64(y*y) + float64(z*z)
}

// frame is a node on the stack of a search, with the points it owns.
type frame struct {
	far2           float64
	node, from, to int32
	depth          int32
}
