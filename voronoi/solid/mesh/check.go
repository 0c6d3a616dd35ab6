package mesh

import (
	"cmp"
	"math"
	"slices"
)

// use is a directed edge of a triangle, under the undirected edge.
type use struct {
	lo, hi   int32
	triangle int32
	up       bool // from lo to hi
}

// uses lists the edges of all triangles by their ends.
func uses(t [][3]int32) []use {
	list := make([]use, 0, 3*len(t))
	for i, c := range t {
		for k := range 3 {
			a, b := c[k], c[(k+1)%3]
			list = append(list, use{min(a, b), max(a, b), int32(i), a < b})
		}
	}
	slices.SortFunc(list, func(a, b use) int {
		return cmp.Or(cmp.Compare(a.lo, b.lo), cmp.Compare(a.hi, b.hi), cmp.Compare(a.triangle, b.triangle))
	})
	return list
}

// eachEdge calls do for the uses of each undirected edge.
func eachEdge(list []use, do func(of []use)) {
	for from := 0; from < len(list); {
		to := from + 1
		for to < len(list) && list[to].lo == list[from].lo && list[to].hi == list[from].hi {
			to++
		}
		do(list[from:to])
		from = to
	}
}

// balance is the error of a surface that is not closed, or nil: over every edge, the
// uses one way and the other must cancel.
func balance(v []Vec, list []use) error {
	e := &Error{Fault: Leak}
	var total sum
	var open []use
	eachEdge(list, func(of []use) {
		up := 0
		for _, u := range of {
			if u.up {
				up++
			} else {
				up--
			}
		}
		if up == 0 {
			return
		}
		open = append(open, of[0])
		total.add(length(sub(v[of[0].lo], v[of[0].hi])))
		if len(of) == 2 {
			e.Turned++
		} else if len(of) > 2 {
			e.Crowded++
		}
	})
	if len(open) == 0 {
		return nil
	}
	e.Count, e.Length = len(open), total.value()
	for _, u := range open[:min(len(open), listed)] {
		e.Edges = append(e.Edges, [2]Vec{v[u.lo], v[u.hi]})
	}
	e.Junctions, e.At = junctions(v, open)
	return e
}

// listed is how many open edges an error shows.
const listed = 5

// junctions counts the ends of open edges that lie in the middle of another open edge
// but for rounding: there a side of one triangle was divided and that of its neighbour
// was not.
func junctions(v []Vec, open []use) (n int, at Vec) {
	box := func(i int32) (lo, hi Vec) {
		a, b := v[open[i].lo], v[open[i].hi]
		return least(a, b), most(a, b)
	}
	t := newTree(len(open), box)
	seen := map[int32]bool{}
	for _, u := range open {
		for _, x := range [2]int32{u.lo, u.hi} {
			if seen[x] {
				continue
			}
			seen[x] = true
			p := v[x]
			tol := 1e-9 * (1 + largest(p))
			r := Vec{X: tol, Y: tol, Z: tol}
			t.inBox(sub(p, r), add(p, r), func(i int32) bool {
				if open[i].lo == x || open[i].hi == x {
					return true
				}
				a, b := v[open[i].lo], v[open[i].hi]
				if segmentDistance(sub(a, p), sub(b, p)) > 1e-7*length(sub(a, b)) {
					return true
				}
				if n == 0 {
					at = p
				}
				n++
				return false
			})
		}
	}
	return n, at
}

// components numbers the triangles by the connected surface that they belong to. Where
// more than two triangles share an edge, those belong together that have the solid
// between them.
func components(v []Vec, t [][3]int32, list []use) (of []int32, n int) {
	parent := make([]int32, len(t))
	for i := range parent {
		parent[i] = int32(i)
	}
	root := func(i int32) int32 {
		for parent[i] != i {
			parent[i] = parent[parent[i]]
			i = parent[i]
		}
		return i
	}
	unite := func(a, b int32) {
		a, b = root(a), root(b)
		parent[max(a, b)] = min(a, b)
	}
	eachEdge(list, func(of []use) {
		if len(of) == 2 || !pairs(v, t, of, unite) {
			for _, u := range of[1:] {
				unite(of[0].triangle, u.triangle)
			}
		}
	})
	number := make([]int32, len(t))
	of = make([]int32, len(t))
	for i := range t {
		if r := root(int32(i)); int(r) == i {
			number[i] = int32(n)
			n++
		} else {
			number[i] = number[r]
		}
		of[i] = number[i]
	}
	return of, n
}

// pairs unites, of the triangles around an edge, each with the one across the solid. It
// does nothing and returns false where the angles do not tell.
func pairs(v []Vec, t [][3]int32, of []use, unite func(a, b int32)) bool {
	p, q := v[of[0].lo], v[of[0].hi]
	axis := sub(q, p)
	if !(length(axis) > 0) {
		return false
	}
	type leaf struct {
		angle float64
		use
	}
	var first, second Vec
	leaves := make([]leaf, len(of))
	for i, u := range of {
		apex := v[opposite(t[u.triangle], u.lo, u.hi)]
		w := cross(axis, cross(sub(apex, p), axis))
		if !(length(w) > 0) {
			return false
		}
		if i == 0 {
			first, second = w, cross(axis, w)
			first, second = scale(1/length(first), first), scale(1/length(second), second)
		}
		leaves[i] = leaf{math.Atan2(dot(w, second), dot(w, first)), u}
	}
	slices.SortStableFunc(leaves, func(a, b leaf) int { return cmp.Compare(a.angle, b.angle) })
	for i := range leaves {
		next := &leaves[(i+1)%len(leaves)]
		if leaves[i].up == next.up || math.Abs(leaves[i].angle-next.angle) < 1e-9 {
			return false
		}
	}
	for i := range leaves {
		// A triangle that uses the edge upwards has the solid at smaller angles.
		if next := &leaves[(i+1)%len(leaves)]; next.up {
			unite(leaves[i].triangle, next.triangle)
		}
	}
	return true
}

func opposite(t [3]int32, a, b int32) int32 {
	for _, x := range t {
		if x != a && x != b {
			return x
		}
	}
	return t[0]
}

// orient turns the components that are inside out and counts shells and voids. Those
// with the larger volume come first, for nothing lies in anything smaller.
func (b *builder) orient(of []int32, n int) error {
	volumes := make([]sum, n)
	first := make([][]int32, n)
	middle := scale(0.5, add(b.lo, b.hi))
	for i, t := range b.t {
		p, q, r := sub(b.v[t[0]], middle), sub(b.v[t[1]], middle), sub(b.v[t[2]], middle)
		volumes[of[i]].add(dot(p, cross(q, r)) / 6)
		first[of[i]] = append(first[of[i]], int32(i))
	}
	total := sum{}
	for i := range volumes {
		total.add(volumes[i].value())
	}
	way := 1.0
	if total.value() < 0 {
		way = -1
		b.turn(func(int32) bool { return true })
		b.report.Flipped, b.report.InsideOut = n, true
	}
	order := make([]int, n)
	for i := range order {
		order[i] = i
	}
	size := func(i int) float64 { return math.Abs(volumes[i].value()) }
	slices.SortFunc(order, func(x, y int) int { return cmp.Or(cmp.Compare(size(y), size(x)), cmp.Compare(x, y)) })
	rank := make([]int, n)
	for k, i := range order {
		rank[i] = k
	}
	for k, i := range order {
		volume := way * volumes[i].value()
		if !(math.Abs(volume) >= smallest) {
			return &Error{Fault: NoVolume, At: b.v[b.t[first[i][0]][0]]}
		}
		around := 0
		if n > 1 {
			around = b.around(first[i], func(t int32) bool { return rank[of[t]] < k })
		}
		switch {
		case volume > 0 && around == 0:
			b.report.Shells++
		case volume < 0 && around == 1:
			b.report.Voids++
		case volume < 0 && around == 0:
			b.turn(func(t int32) bool { return int(of[t]) == i })
			b.report.Flipped++
			b.report.Shells++
		default:
			return &Error{Fault: Nested, At: b.v[b.t[first[i][0]][0]]}
		}
	}
	return nil
}

// turn turns triangles over.
func (b *builder) turn(which func(t int32) bool) {
	for i := range b.t {
		if which(int32(i)) {
			b.t[i][1], b.t[i][2] = b.t[i][2], b.t[i][1]
		}
	}
}

// around is how often the triangles that pass wind around the component of the given
// ones, of which none crosses those.
func (b *builder) around(component []int32, pass func(t int32) bool) int {
	s := &surface{v: b.v, t: b.t, tree: b.tree, lo: b.lo, hi: b.hi, pass: pass}
	w := 0
	for _, t := range component[:min(len(component), 50)] {
		p, q, r := s.corners(t)
		for _, x := range [4]Vec{p, q, r, scale(1.0/3, add(p, add(q, r)))} {
			on := false
			if w, on = s.winding(x); !on {
				return w
			}
		}
	}
	return w
}

// overlaps looks for triangles that cross or cover one another, and for such that face
// each other.
func (b *builder) overlaps() (facing bool, err error) {
	s := &surface{v: b.v, t: b.t, tree: b.tree, lo: b.lo, hi: b.hi}
	e := &Error{Fault: Overlap, Triangles: [2]int32{-1, -1}}
	note := func(i, j int32) {
		if e.Count == 0 {
			e.Triangles = [2]int32{b.origin(i), b.origin(j)}
			p, q, r := s.corners(i)
			e.At = scale(1.0/3, add(p, add(q, r)))
		}
		e.Count++
	}
	type hinge struct{ i, lo, hi int32 }
	hinges := map[hinge]int{}
	for i := range int32(len(b.t)) {
		lo, hi := s.box(i)
		s.tree.inBox(lo, hi, func(j int32) bool {
			if i == j {
				return true
			}
			jlo, jhi := s.box(j)
			if jlo.X > hi.X || jhi.X < lo.X || jlo.Y > hi.Y || jhi.Y < lo.Y || jlo.Z > hi.Z || jhi.Z < lo.Z {
				return true
			}
			how, edge, above := s.meeting(i, j)
			switch how {
			case crossed, overlaid:
				if i < j {
					note(i, j)
				}
			case faced:
				facing = true
			case hinged:
				x, y := b.t[j][edge], b.t[j][(edge+1)%3]
				h := hinge{i, min(x, y), max(x, y)}
				if other := hinges[h]; other == 0 {
					hinges[h] = above
				} else if other != above {
					note(i, j)
				}
			}
			return true
		})
	}
	if e.Count > 0 {
		return false, e
	}
	return facing, nil
}
