package index

import (
	"math"
	"math/rand/v2"
	"slices"
	"sync"
	"testing"

	"gonum.org/v1/gonum/spatial/kdtree"
	"pgregory.net/rapid"
)

func points(n int, seed uint64) []Vec {
	r := rand.New(rand.NewPCG(seed, 3))
	p := make([]Vec, n)
	for i := range p {
		p[i] = Vec{X: r.Float64(), Y: r.Float64(), Z: r.Float64()}
	}
	return p
}

// coarse points have many equal coordinates, distances and places.
func coarse(n int, seed uint64) []Vec {
	p := points(n, seed)
	for i := range p {
		p[i] = Vec{X: math.Round(4 * p[i].X), Y: math.Round(4 * p[i].Y), Z: math.Round(4 * p[i].Z)}
	}
	return p
}

// sorted are all points of the tree by distance from q, equal ones by number.
func sorted(t *Tree, q Vec) []Neighbour {
	all := make([]Neighbour, t.Len())
	for i := range all {
		all[i] = Neighbour{int32(i), distance2(t.Point(int32(i)), q)}
	}
	slices.SortStableFunc(all, func(a, b Neighbour) int {
		switch {
		case a.Dist2 < b.Dist2:
			return -1
		case a.Dist2 > b.Dist2:
			return 1
		}
		return int(a.Point - b.Point)
	})
	return all
}

func TestQueriesAgainstSorting(t *testing.T) {
	for _, n := range []int{0, 1, 2, 7, 8, 9, 15, 16, 17, 33, 100, 1000} {
		for name, p := range map[string][]Vec{"uniform": points(n, 1), "coarse": coarse(n, 2)} {
			tree := New(p)
			used := NewUsed(tree.Len())
			var it Iterator
			for k, q := range append(points(20, 3), coarse(20, 4)...) {
				want := sorted(tree, q)
				check := func(what string, got []Neighbour, want []Neighbour) {
					t.Helper()
					if !slices.Equal(got, want) {
						t.Fatalf("%s, n = %d: %s is %v, want %v", name, n, what, got, want)
					}
				}
				check("the five nearest", tree.KNearest(q, 5, nil, nil), want[:min(5, n)])
				it.Start(tree, q)
				for i := range want {
					if got, ok := it.Next(); !ok || got != want[i] {
						t.Fatalf("%s, n = %d: step %d is %v, want %v", name, n, i, got, want[i])
					}
				}
				if _, ok := it.Next(); ok {
					t.Fatalf("%s: more points than there are", name)
				}
				used.Reset()
				for _, w := range want[:min(k, n)] {
					used.Add(w.Point)
				}
				rest := want[min(k, n):]
				check("the three nearest unused", tree.KNearest(q, 3, used, nil), rest[:min(3, len(rest))])
				i, d2, ok := tree.NearestWithin(q, math.Inf(1), used)
				if ok != (len(rest) > 0) || ok && (Neighbour{i, d2}) != rest[0] {
					t.Fatalf("%s, n = %d: nearest unused %d at %v, want %v", name, n, i, d2, rest)
				}
				if ok {
					if _, _, ok := tree.NearestWithin(q, rest[0].Dist2, used); ok {
						t.Fatal("a point at the radius is within it")
					}
				}
			}
		}
	}
}

// gonum's k-d tree is an independent witness on distances.
func TestNearestAgainstGonum(t *testing.T) {
	p := points(2000, 5)
	var theirs kdtree.Points
	for _, q := range p {
		theirs = append(theirs, kdtree.Point{q.X, q.Y, q.Z})
	}
	other := kdtree.New(theirs, false)
	tree := New(p)
	for _, q := range points(500, 6) {
		_, want := other.Nearest(kdtree.Point{q.X, q.Y, q.Z})
		if _, got := tree.Nearest(q); math.Abs(got-want) > 1e-15 {
			t.Fatalf("nearest to %v at %v, want %v", q, got, want)
		}
	}
}

// The order of the input does not show, but for which of two equal points is which.
func TestOrderOfInputDoesNotShow(t *testing.T) {
	for name, p := range map[string][]Vec{"uniform": points(3000, 7), "coarse": coarse(3000, 8), "large": points(70000, 9)} {
		a := New(p)
		shuffled := slices.Clone(p)
		rand.New(rand.NewPCG(1, 1)).Shuffle(len(p), func(i, j int) { shuffled[i], shuffled[j] = shuffled[j], shuffled[i] })
		b := New(shuffled)
		if !slices.Equal(a.points, b.points) || !slices.Equal(a.boxes, b.boxes) {
			t.Errorf("%s: the tree depends on the order of the input", name)
		}
		for i := range p {
			if p[a.Original(int32(i))] != a.Point(int32(i)) || shuffled[b.Original(int32(i))] != b.Point(int32(i)) {
				t.Fatalf("%s: point %d does not lead back", name, i)
			}
		}
	}
}

func TestLeaves(t *testing.T) {
	for _, n := range []int{0, 1, 8, 9, 500} {
		tree := New(points(n, 10))
		q := Vec{X: 0.3, Y: 0.2, Z: 0.9}
		for _, radius := range []float64{0, 0.2, 3} {
			var l Leaves
			l.Start(tree, q)
			seen := make([]bool, n)
			for {
				from, to, ok := l.Next(func(_ *Box, d2 float64) bool { return d2 <= radius*radius })
				if !ok {
					break
				}
				for i := from; i < to; i++ {
					if seen[i] {
						t.Fatalf("point %d comes twice", i)
					}
					seen[i] = true
				}
			}
			for i := range seen {
				if !seen[i] && distance2(tree.Point(int32(i)), q) <= radius*radius {
					t.Fatalf("point %d is within %v and was passed over", i, radius)
				}
			}
		}
	}
}

// A box that holds a point nearer to p+v than p meets the ball, however far v is.
func TestMeets(t *testing.T) {
	tree := New(points(300, 15))
	p := Vec{X: 0.5, Y: 0.5, Z: 0.5}
	passed := 0
	for i, u := range points(400, 16) {
		far := math.Exp2(float64(i%60) - 3)
		v := Vec{X: far * (u.X - 0.5), Y: far * (u.Y - 0.5), Z: far * (u.Z - 0.5)}
		b := tree.boxes[i%len(tree.boxes)]
		holds := false
		for _, q := range tree.points {
			in := q.X >= b.Lo.X && q.X <= b.Hi.X && q.Y >= b.Lo.Y && q.Y <= b.Hi.Y && q.Z >= b.Lo.Z && q.Z <= b.Hi.Z
			m := Vec{X: q.X - p.X, Y: q.Y - p.Y, Z: q.Z - p.Z}
			holds = holds || in && m.X*(m.X-2*v.X)+m.Y*(m.Y-2*v.Y)+m.Z*(m.Z-2*v.Z) < 0
		}
		if holds && !b.Meets(p, v) {
			t.Fatalf("box %v, p+v with v = %v", b, v)
		}
		if !b.Meets(p, v) {
			passed++
		}
	}
	if passed < 100 {
		t.Errorf("%d boxes passed over", passed)
	}
}

func TestBeyond(t *testing.T) {
	tree := New(coarse(700, 11))
	for _, n := range points(50, 12) {
		n = Vec{X: n.X - 0.5, Y: n.Y - 0.5, Z: n.Z - 0.5}
		for _, d := range []float64{-1, 0, 0.5, 9} {
			got := map[int32]bool{}
			tree.Beyond(n, d, 1e-9, func(i int32) bool { got[i] = true; return true })
			for i := range int32(tree.Len()) {
				p := tree.Point(i)
				s := n.X*p.X + n.Y*p.Y + n.Z*p.Z
				if s > d && !got[i] || s < d-1e-6 && got[i] {
					t.Fatalf("point %d at %v beyond %v: %v", i, s, d, got[i])
				}
			}
		}
		calls := 0
		tree.Beyond(n, -100, 0, func(int32) bool { calls++; return calls < 3 })
		if calls != 3 {
			t.Fatalf("%d calls after the third said no", calls)
		}
	}
}

// Boxes hold their points, halves their share, and medians are medians.
func TestShape(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := rapid.SliceOfN(rapid.Custom(func(t *rapid.T) Vec {
			f := rapid.OneOf(rapid.Float64Range(-9, 9), rapid.SampledFrom([]float64{0, 1, 2}))
			return Vec{X: f.Draw(t, "x"), Y: f.Draw(t, "y"), Z: f.Draw(t, "z")}
		}), 1, 200).Draw(t, "points")
		tree := New(p)
		var walk func(node, depth, from, to int)
		walk = func(node, depth, from, to int) {
			if tree.boxes[node] != boundingBox(tree.points[from:to]) {
				t.Fatalf("node %d has the box %v", node, tree.boxes[node])
			}
			if depth == tree.depth {
				if to-from > leafSize || to == from {
					t.Fatalf("a leaf of %d points", to-from)
				}
				return
			}
			mid := from + (to-from+1)/2
			axis := widest(tree.boxes[node])
			for i := from; i < mid; i++ {
				for j := mid; j < to; j++ {
					if tree.less(j, tree.points[i], tree.original[i], axis) {
						t.Fatalf("point %d stands before %d", i, j)
					}
				}
			}
			walk(2*node+1, depth+1, from, mid)
			walk(2*node+2, depth+1, mid, to)
		}
		walk(0, 0, 0, len(p))
	})
}

func TestManyReaders(t *testing.T) {
	tree := New(points(5000, 13))
	var all sync.WaitGroup
	for k := range 4 {
		all.Go(func() {
			for _, q := range points(300, uint64(k)) {
				i, d := tree.Nearest(q)
				if distance2(tree.Point(i), q) != d {
					t.Error("wrong distance")
				}
			}
		})
	}
	all.Wait()
}

func TestUsed(t *testing.T) {
	u := NewUsed(3)
	u.Add(1)
	if u.Has(0) || !u.Has(1) {
		t.Error("a set of one")
	}
	u.Reset()
	if u.Has(1) {
		t.Error("Reset leaves a point")
	}
	u.Add(2)
	u.round = math.MaxUint32
	u.Reset() // the rounds begin anew
	if u.Has(0) || u.Has(1) || u.Has(2) {
		t.Error("the last Reset leaves a point")
	}
}

func TestQueriesDoNotAllocate(t *testing.T) {
	tree := New(points(10000, 14))
	used := NewUsed(tree.Len())
	var it Iterator
	buf := make([]Neighbour, 0, 16)
	work := func() {
		q := Vec{X: 0.5, Y: 0.4, Z: 0.3}
		used.Reset()
		tree.Nearest(q)
		buf = tree.KNearest(q, 16, used, buf[:0])
		it.Start(tree, q)
		for range 20 {
			it.Next()
		}
	}
	work()
	if n := testing.AllocsPerRun(100, work); n != 0 {
		t.Errorf("%v allocations", n)
	}
}

func BenchmarkNew100k(b *testing.B) {
	p := points(100000, 1)
	for b.Loop() {
		New(p)
	}
}

func BenchmarkNearest(b *testing.B) {
	tree := New(points(100000, 1))
	q := points(1000, 2)
	for i := 0; b.Loop(); i++ {
		tree.Nearest(q[i%len(q)])
	}
}

func BenchmarkKNearest16(b *testing.B) {
	tree := New(points(100000, 1))
	q := points(1000, 2)
	buf := make([]Neighbour, 0, 16)
	for i := 0; b.Loop(); i++ {
		buf = tree.KNearest(q[i%len(q)], 16, nil, buf[:0])
	}
}
