package index

import "math"

// Box is the tight bounding box of some points of a tree.
type Box struct {
	Lo, Hi Vec
	Points int // how many it holds
}

// Dist2 is the squared distance from q to the box, 0 inside.
func (b *Box) Dist2(q Vec) float64 {
	x := max(b.Lo.X-q.X, q.X-b.Hi.X, 0)
	y := max(b.Lo.Y-q.Y, q.Y-b.Hi.Y, 0)
	z := max(b.Lo.Z-q.Z, q.Z-b.Hi.Z, 0)
	return float64(x*x) + float64(y*y) + float64(z*z)
}

// Leaves hands out the leaves of a tree, roughly by growing distance from a place,
// and passes over the boxes that its user has no use for. Its buffers are kept from
// one Start to the next. It belongs to one goroutine.
type Leaves struct {
	tree  *Tree
	q     Vec
	stack []frame
}

// Start begins a walk at q.
func (l *Leaves) Start(t *Tree, q Vec) {
	l.tree, l.q, l.stack = t, q, l.stack[:0]
	if len(t.points) > 0 {
		l.stack = append(l.stack, frame{t.boxes[0].Dist2(q), 0, 0, int32(len(t.points)), 0})
	}
}

// Next is the next leaf: points from … to-1. useful is asked about every box on
// the way, with its squared distance from the start; what it declines is not
// entered. ok is false when nothing is left.
func (l *Leaves) Next(useful func(box *Box, dist2 float64) bool) (from, to int32, ok bool) {
	t := l.tree
	for len(l.stack) > 0 {
		f := l.stack[len(l.stack)-1]
		l.stack = l.stack[:len(l.stack)-1]
		for useful(&t.boxes[f.node], f.far2) {
			if int(f.depth) == t.depth {
				return f.from, f.to, true
			}
			var other frame
			f, other = t.children(f, l.q)
			l.stack = append(l.stack, other)
		}
	}
	return 0, 0, false
}

// Meets tells whether the box can hold a point that is nearer to p+v than p is: a
// point in the open ball of radius |v| about p+v. With m the point's offset from p
// that is m·(m-2v) < 0, and the least value over the box is taken axis by axis. In
// this form nothing cancels when v is far away and the box is near.
func (b *Box) Meets(p, v Vec) bool {
	x := min(max(v.X, b.Lo.X-p.X), b.Hi.X-p.X)
	y := min(max(v.Y, b.Lo.Y-p.Y), b.Hi.Y-p.Y)
	z := min(max(v.Z, b.Lo.Z-p.Z), b.Hi.Z-p.Z)
	gx, gy, gz := float64(x*(x-2*v.X)), float64(y*(y-2*v.Y)), float64(z*(z-2*v.Z))
	return gx+gy+gz <= 0x1p-48*(math.Abs(gx)+math.Abs(gy)+math.Abs(gz))
}
