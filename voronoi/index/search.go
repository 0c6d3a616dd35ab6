package index

import "math"

// Used is a set of points that a query passes over. Emptying it costs nothing.
// It belongs to one goroutine.
type Used struct {
	round uint32
	mark  []uint32
}

// NewUsed is an empty set of points of a tree of n points.
func NewUsed(n int) *Used { return &Used{round: 1, mark: make([]uint32, n)} }

// Reset empties the set.
func (u *Used) Reset() {
	u.round++
	if u.round == 0 {
		clear(u.mark)
		u.round = 1
	}
}

// Add puts point i into the set.
func (u *Used) Add(i int32) { u.mark[i] = u.round }

// Has tells whether point i is in the set.
func (u *Used) Has(i int32) bool { return u.mark[i] == u.round }

// Neighbour is an answer of a query: a point's number and its squared distance.
type Neighbour struct {
	Point int32
	Dist2 float64
}

// Nearest is the point nearest to q and its squared distance; -1 and +Inf in an
// empty tree.
func (t *Tree) Nearest(q Vec) (int32, float64) {
	i, d, _ := t.NearestWithin(q, math.Inf(1), nil)
	return i, d
}

// NearestWithin is the point nearest to q among those that are not used (nil:
// all) and whose squared distance is below within2.
func (t *Tree) NearestWithin(q Vec, within2 float64, used *Used) (point int32, dist2 float64, ok bool) {
	point, dist2 = -1, within2
	if len(t.points) == 0 {
		return -1, math.Inf(1), false
	}
	var stack [64]frame
	stack[0] = frame{t.boxes[0].Dist2(q), 0, 0, int32(len(t.points)), 0}
	for top := 1; top > 0; {
		top--
		f := stack[top]
		for {
			if f.far2 > float64(dist2*slack) {
				break
			}
			if int(f.depth) == t.depth {
				for i := f.from; i < f.to; i++ {
					if used != nil && used.mark[i] == used.round {
						continue
					}
					d := distance2(t.points[i], q)
					if d < dist2 || d == dist2 && point >= 0 && i < point {
						point, dist2 = i, d
					}
				}
				break
			}
			var other frame
			f, other = t.children(f, q)
			stack[top] = other
			top++
		}
	}
	if point < 0 {
		return -1, math.Inf(1), false
	}
	return point, dist2, true
}

// children are the two halves of a node, the one nearer to q first.
func (t *Tree) children(f frame, q Vec) (near, far frame) {
	mid := f.from + (f.to-f.from+1)/2
	near = frame{t.boxes[2*f.node+1].Dist2(q), 2*f.node + 1, f.from, mid, f.depth + 1}
	far = frame{t.boxes[2*f.node+2].Dist2(q), 2*f.node + 2, mid, f.to, f.depth + 1}
	if far.far2 < near.far2 {
		near, far = far, near
	}
	return near, far
}

// KNearest appends to buf the k points nearest to q among those not used (nil:
// all), by growing distance, equal distances by number. Fewer than k if there are
// no more.
func (t *Tree) KNearest(q Vec, k int, used *Used, buf []Neighbour) []Neighbour {
	if k <= 0 || len(t.points) == 0 {
		return buf
	}
	base := len(buf)
	worst := math.Inf(1)
	var stack [64]frame
	stack[0] = frame{t.boxes[0].Dist2(q), 0, 0, int32(len(t.points)), 0}
	for top := 1; top > 0; {
		top--
		f := stack[top]
		for f.far2 <= float64(worst*slack) {
			if int(f.depth) == t.depth {
				for i := f.from; i < f.to; i++ {
					if used != nil && used.mark[i] == used.round {
						continue
					}
					if d := distance2(t.points[i], q); d <= worst {
						buf = insert(buf, base, k, Neighbour{i, d})
						if len(buf) == base+k {
							worst = buf[len(buf)-1].Dist2
						}
					}
				}
				break
			}
			var other frame
			f, other = t.children(f, q)
			stack[top] = other
			top++
		}
	}
	return buf
}

// insert puts n into the sorted list buf[base:], which keeps at most k.
func insert(buf []Neighbour, base, k int, n Neighbour) []Neighbour {
	if len(buf) < base+k {
		buf = append(buf, n)
	} else if last := buf[len(buf)-1]; n.Dist2 < last.Dist2 || n.Dist2 == last.Dist2 && n.Point < last.Point {
		buf[len(buf)-1] = n
	} else {
		return buf
	}
	i := len(buf) - 1
	for ; i > base; i-- {
		b := buf[i-1]
		if b.Dist2 < n.Dist2 || b.Dist2 == n.Dist2 && b.Point < n.Point {
			break
		}
		buf[i] = b
	}
	buf[i] = n
	return buf
}

// Beyond calls visit for the points with n·x >= d, as far as rounding tells with
// points within the given slack called too, until visit returns false.
func (t *Tree) Beyond(n Vec, d, slack float64, visit func(i int32) bool) {
	if len(t.points) > 0 {
		t.beyond(frame{to: int32(len(t.points))}, n, d-slack, visit)
	}
}

func (t *Tree) beyond(f frame, n Vec, d float64, visit func(i int32) bool) bool {
	b := &t.boxes[f.node]
	if float64(max(n.X*b.Lo.X, n.X*b.Hi.X))+float64(max(n.Y*b.Lo.Y, n.Y*b.Hi.Y))+float64(max(n.Z*b.Lo.Z, n.Z*b.Hi.Z)) < d {
		return true
	}
	if int(f.depth) == t.depth {
		for i := f.from; i < f.to; i++ {
			p := t.points[i]
			if float64(n.X*p.X)+float64(n.Y*p.Y)+float64(n.Z*p.Z) >= d && !visit(i) {
				return false
			}
		}
		return true
	}
	mid := f.from + (f.to-f.from+1)/2
	return t.beyond(frame{node: 2*f.node + 1, from: f.from, to: mid, depth: f.depth + 1}, n, d, visit) &&
		t.beyond(frame{node: 2*f.node + 2, from: mid, to: f.to, depth: f.depth + 1}, n, d, visit)
}
