package mesh

import (
	"cmp"
	"math"
	"slices"
)

// tree is a hierarchy of boxes around triangles, or whatever else has a box.
type tree struct {
	nodes []node
	items []int32 // a leaf holds items[from:to]
}

type node struct {
	lo, hi   Vec
	from, to int32 // a leaf: its items; else to is 0 and from the number of the second child
}

const leafSize = 4

// newTree makes the hierarchy of n boxes.
func newTree(n int, box func(i int32) (lo, hi Vec)) *tree {
	t := &tree{items: make([]int32, n)}
	lo, hi, mid := make([]Vec, n), make([]Vec, n), make([]Vec, n)
	for i := range t.items {
		t.items[i] = int32(i)
		lo[i], hi[i] = box(int32(i))
		mid[i] = add(scale(0.5, lo[i]), scale(0.5, hi[i]))
	}
	if n > 0 {
		t.nodes = make([]node, 0, n)
		t.build(0, int32(n), lo, hi, mid)
	}
	return t
}

func (t *tree) build(from, to int32, lo, hi, mid []Vec) {
	k := len(t.nodes)
	t.nodes = append(t.nodes, node{lo: lo[t.items[from]], hi: hi[t.items[from]], from: from, to: to})
	a, b := mid[t.items[from]], mid[t.items[from]]
	for _, i := range t.items[from:to] {
		t.nodes[k].lo, t.nodes[k].hi = least(t.nodes[k].lo, lo[i]), most(t.nodes[k].hi, hi[i])
		a, b = least(a, mid[i]), most(b, mid[i])
	}
	if to-from <= leafSize {
		return
	}
	wide := sub(b, a)
	axis := 0
	if wide.Y > wide.X {
		axis = 1
	}
	if wide.Z > component(wide, axis) {
		axis = 2
	}
	half := from + (to-from)/2
	selectNth(t.items[from:to], int(half-from), func(x, y int32) int {
		return cmp.Or(cmp.Compare(component(mid[x], axis), component(mid[y], axis)), cmp.Compare(x, y))
	})
	t.build(from, half, lo, hi, mid)
	t.nodes[k].from, t.nodes[k].to = int32(len(t.nodes)), 0
	t.build(half, to, lo, hi, mid)
}

// selectNth puts the nth in its place, smaller ones before, larger ones after it.
func selectNth(s []int32, nth int, order func(a, b int32) int) {
	for len(s) > 24 {
		x, y, z := s[0], s[len(s)/2], s[len(s)-1]
		pivot := y
		if (order(x, y) < 0) == (order(z, x) < 0) {
			pivot = x
		} else if (order(x, z) < 0) == (order(z, y) < 0) {
			pivot = z
		}
		i, j := 0, len(s)-1
		for i <= j {
			for order(s[i], pivot) < 0 {
				i++
			}
			for order(pivot, s[j]) < 0 {
				j--
			}
			if i <= j {
				s[i], s[j] = s[j], s[i]
				i++
				j--
			}
		}
		switch {
		case nth <= j:
			s = s[:j+1]
		case nth >= i:
			s, nth = s[i:], nth-i
		default:
			return
		}
	}
	slices.SortFunc(s, order)
}

// inBox calls do for the items whose leaf meets the box, until it returns false.
func (t *tree) inBox(lo, hi Vec, do func(i int32) bool) {
	if len(t.nodes) == 0 {
		return
	}
	var stack [64]int32
	top := 1
	for top > 0 {
		top--
		k := stack[top]
		n := &t.nodes[k]
		if n.lo.X > hi.X || n.hi.X < lo.X || n.lo.Y > hi.Y || n.hi.Y < lo.Y || n.lo.Z > hi.Z || n.hi.Z < lo.Z {
			continue
		}
		if n.to == 0 {
			stack[top], stack[top+1] = n.from, k+1
			top += 2
			continue
		}
		for _, i := range t.items[n.from:n.to] {
			if !do(i) {
				return
			}
		}
	}
}

// nearest goes through the items by growing distance of their leaves' boxes, as far as
// do, which returns the distance beyond which nothing matters any more, lets it.
func (t *tree) nearest(p Vec, within float64, do func(i int32) float64) {
	if len(t.nodes) > 0 {
		t.descend(0, p, within, do)
	}
}

func (t *tree) descend(k int32, p Vec, within float64, do func(i int32) float64) float64 {
	n := &t.nodes[k]
	if boxDistance(p, n.lo, n.hi) > within {
		return within
	}
	if n.to > 0 {
		for _, i := range t.items[n.from:n.to] {
			within = min(within, do(i))
		}
		return within
	}
	a, b := k+1, n.from
	if boxDistance(p, t.nodes[b].lo, t.nodes[b].hi) < boxDistance(p, t.nodes[a].lo, t.nodes[a].hi) {
		a, b = b, a
	}
	within = t.descend(a, p, within, do)
	return t.descend(b, p, within, do)
}

func boxDistance(p, lo, hi Vec) float64 {
	d := Vec{
		X: max(lo.X-p.X, p.X-hi.X, 0),
		Y: max(lo.Y-p.Y, p.Y-hi.Y, 0),
		Z: max(lo.Z-p.Z, p.Z-hi.Z, 0),
	}
	return length(d)
}

var inf = math.Inf(1)
