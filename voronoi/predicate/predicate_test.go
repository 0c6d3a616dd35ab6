package predicate

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/spatial/r2"
	"gonum.org/v1/gonum/spatial/r3"
)

var (
	o  = r3.Vec{}
	ex = r3.Vec{X: 1}
	ey = r3.Vec{Y: 1}
	ez = r3.Vec{Z: 1}
)

func TestConventions(t *testing.T) {
	if got := Orient3D(o, ex, ey, ez); got != 1 {
		t.Errorf("Orient3D of the unit corner = %d, want +1", got)
	}
	centre := r3.Vec{X: 0.5, Y: 0.5, Z: 0.5}
	if got := InSphere(o, ex, ey, ez, centre); got != 1 {
		t.Errorf("InSphere of the centre = %d, want +1", got)
	}
	if got := InSphere(o, ex, ey, ez, r3.Vec{X: 3}); got != -1 {
		t.Errorf("InSphere of a far point = %d, want -1", got)
	}
	if got := InSphere(o, ex, ey, ez, r3.Vec{X: 1, Y: 1, Z: 1}); got != 0 {
		t.Errorf("InSphere of the eighth corner of the cube = %d, want 0", got)
	}
	if got := Orient2D(r2.Vec{}, r2.Vec{X: 1}, r2.Vec{X: 5, Y: 1e-300}); got != 1 {
		t.Errorf("Orient2D of a left turn = %d, want +1", got)
	}
	if got := SideOfBisector(o, ex, r3.Vec{X: 0.5, Y: 1e9, Z: -3}); got != 0 {
		t.Errorf("SideOfBisector on the bisector = %d, want 0", got)
	}
	if got := SideOfBisector(o, ex, r3.Vec{X: math.Nextafter(0.5, 0), Y: 1e9}); got != -1 {
		t.Errorf("SideOfBisector just before the bisector = %d, want -1", got)
	}
}

// TestDegenerateOrient3D has one case for each way in which a part of the
// determinant vanishes.
func TestDegenerateOrient3D(t *testing.T) {
	tiny := math.Ldexp(1, -52)
	tests := []struct {
		name       string
		a, b, c, d r3.Vec
		want       int
	}{
		{"all equal", ex, ex, ex, ex, 0},
		{"two equal", o, ex, ex, ez, 0},
		{"first equals last", ez, ex, ey, ez, 0},
		{"three collinear", o, ex, r3.Vec{X: 2}, ez, 0},
		{"four collinear", o, ex, r3.Vec{X: 2}, r3.Vec{X: -7}, 0},
		{"u.X = 0", o, ey, ez, ex, 1},
		{"u.Y = 0", o, ez, ex, ey, 1},
		{"minor of x vanishes", o, r3.Vec{X: 1, Y: 1, Z: 0}, r3.Vec{X: 1, Y: 2, Z: 2}, r3.Vec{X: 0, Y: 1, Z: 1}, -1},
		{"horizontal plane", r3.Vec{Z: 0.1}, r3.Vec{X: 1, Z: 0.1}, r3.Vec{Y: 1, Z: 0.1}, r3.Vec{X: 3, Y: 4, Z: 0.1}, 0},
		{"one ulp above it", r3.Vec{Z: 0.1}, r3.Vec{X: 1, Z: 0.1}, r3.Vec{Y: 1, Z: 0.1}, r3.Vec{X: 3, Y: 4, Z: math.Nextafter(0.1, 1)}, 1},
		{"one ulp below it", r3.Vec{Z: 0.1}, r3.Vec{X: 1, Z: 0.1}, r3.Vec{Y: 1, Z: 0.1}, r3.Vec{X: 3, Y: 4, Z: math.Nextafter(0.1, 0)}, -1},
		{"vertical plane", o, ez, r3.Vec{X: 1, Y: 3}, r3.Vec{X: 2, Y: 6, Z: 5}, 0},
		{"oblique plane", ex, ey, ez, r3.Vec{X: 1. / 4, Y: 1. / 4, Z: 1. / 2}, 0},
		{"oblique, nudged", ex, ey, ez, r3.Vec{X: 1. / 4, Y: 1. / 4, Z: 0.5 + tiny}, 1},
		{"differences need a tail", r3.Vec{X: tiny}, r3.Vec{X: 1, Y: 1 + tiny}, r3.Vec{X: 1, Y: 1}, ez, -1},
		{"subnormal volume", o, r3.Vec{X: 5e-324}, r3.Vec{Y: 5e-324}, r3.Vec{Z: 5e-324}, 1},
		{"differences overflow", r3.Vec{X: -1e308}, r3.Vec{X: 1e308}, ey, ez, 1},
	}
	for _, tt := range tests {
		if want := exactOrient3D(tt.a, tt.b, tt.c, tt.d); want != tt.want {
			t.Fatalf("%s: the case itself is wrong: %d by integers", tt.name, want)
		}
		if got := Orient3D(tt.a, tt.b, tt.c, tt.d); got != tt.want {
			t.Errorf("%s: %d, want %d", tt.name, got, tt.want)
		}
	}
}

// TestDegenerateInSphere: likewise for the parts of in-sphere.
func TestDegenerateInSphere(t *testing.T) {
	corner := r3.Vec{X: 1, Y: 1, Z: 1}
	far := r3.Vec{X: 5e5, Y: 5e6, Z: 100}
	at := func(v r3.Vec) r3.Vec { return r3.Add(far, v) }
	tests := []struct {
		name          string
		a, b, c, d, e r3.Vec
		want          int
	}{
		{"query equals a corner", o, ex, ey, ez, ey, 0},
		{"query equals the first", o, ex, ey, ez, o, 0},
		{"flat tetrahedron, query in its plane", o, ex, ey, r3.Vec{X: 1, Y: 1}, r3.Vec{X: 5}, 0},
		{"flat, cocircular, query above", o, ex, ey, r3.Vec{X: 1, Y: 1}, ez, 0},
		{"flat, not cocircular, query above", o, ex, ey, r3.Vec{X: 2, Y: 2}, ez, 1},
		{"corner of the cube", o, ex, ey, ez, corner, 0},
		{"corner, pulled in by an ulp", o, ex, ey, ez, r3.Vec{X: 1, Y: 1, Z: math.Nextafter(1, 0)}, 1},
		{"corner, pushed out by an ulp", o, ex, ey, ez, r3.Vec{X: 1, Y: 1, Z: math.Nextafter(1, 2)}, -1},
		{"far corner of the cube", at(o), at(ex), at(ey), at(ez), at(corner), 0},
		{"two heights vanish", o, ex, ey, ez, r3.Vec{X: 1, Y: 1}, 0},
		{"flat tetrahedron with three on a line", o, ex, r3.Vec{X: 2}, ez, ey, 1},
		{"tiny cube", o, r3.Scale(1e-200, ex), r3.Scale(1e-200, ey), r3.Scale(1e-200, ez), r3.Scale(1e-200, corner), 0},
		{"tiny, inside", o, r3.Scale(1e-200, ex), r3.Scale(1e-200, ey), r3.Scale(1e-200, ez), r3.Scale(9e-201, corner), 1},
		{"huge cube", o, r3.Scale(1e150, ex), r3.Scale(1e150, ey), r3.Scale(1e150, ez), r3.Scale(1e150, corner), 0},
	}
	for _, tt := range tests {
		if want := exactInSphere(tt.a, tt.b, tt.c, tt.d, tt.e); want != tt.want {
			t.Errorf("%s: the case itself is wrong: %d by integers", tt.name, want)
			continue
		}
		if got := InSphere(tt.a, tt.b, tt.c, tt.d, tt.e); got != tt.want {
			t.Errorf("%s: %d, want %d", tt.name, got, tt.want)
		}
	}
}

// permutations of n things with their signs.
func permutations(n int) (perms [][]int, signs []int) {
	var grow func(p []int)
	grow = func(p []int) {
		if len(p) == n {
			sign := 1
			for i := range p {
				for j := range i {
					if p[j] > p[i] {
						sign = -sign
					}
				}
			}
			perms, signs = append(perms, append([]int{}, p...)), append(signs, sign)
			return
		}
	next:
		for i := range n {
			for _, j := range p {
				if i == j {
					continue next
				}
			}
			grow(append(p, i))
		}
	}
	grow(nil)
	return perms, signs
}

// TestPermutationLaws: law 2, an even permutation of the points keeps the sign of a
// determinant, an odd one turns it. In-sphere has all 5! of them, since its 5x5 form
// treats the query like the corners.
func TestPermutationLaws(t *testing.T) {
	p4, s4 := permutations(4)
	p5, s5 := permutations(5)
	for k, f := range families {
		r := rand.New(rand.NewPCG(uint64(k), 3))
		for range 12 {
			p := f.make(r)
			want := Orient3D(p[0], p[1], p[2], p[3])
			for i, m := range p4 {
				if got := Orient3D(p[m[0]], p[m[1]], p[m[2]], p[m[3]]); got != s4[i]*want {
					t.Fatalf("%s: Orient3D of %v in the order %v = %d, want %d", f.name, p, m, got, s4[i]*want)
				}
			}
			want = InSphere(p[0], p[1], p[2], p[3], p[4])
			for i, m := range p5 {
				if got := InSphere(p[m[0]], p[m[1]], p[m[2]], p[m[3]], p[m[4]]); got != s5[i]*want {
					t.Fatalf("%s: InSphere of %v in the order %v = %d, want %d", f.name, p, m, got, s5[i]*want)
				}
			}
			if a, b := SideOfBisector(p[0], p[1], p[2]), SideOfBisector(p[1], p[0], p[2]); a != -b {
				t.Fatalf("%s: SideOfBisector of %v is %d and %d", f.name, p, a, b)
			}
		}
	}
}

// positive orders four points so that they make a positive tetrahedron.
func positive(p [5]r3.Vec) ([5]r3.Vec, bool) {
	switch Orient3D(p[0], p[1], p[2], p[3]) {
	case 1:
		return p, true
	case -1:
		p[0], p[1] = p[1], p[0]
		return p, true
	}
	return p, false
}

// TestPerturbed: law 3, the perturbed predicate agrees with the plain one where that
// is not 0, is never 0, and does not depend on the order of the corners.
func TestPerturbed(t *testing.T) {
	even, signs := permutations(4)
	ties := 0
	for k, f := range families {
		r := rand.New(rand.NewPCG(uint64(k), 4))
		for range min(f.n, 400) {
			p, ok := positive(f.make(r))
			if !ok {
				continue
			}
			got := InSpherePerturbed(p[0], p[1], p[2], p[3], p[4])
			if plain := InSphere(p[0], p[1], p[2], p[3], p[4]); plain != 0 && got != plain {
				t.Fatalf("%s: perturbed %d, plain %d for %v", f.name, got, plain, p)
			} else if plain == 0 {
				ties++
			}
			if got != 1 && got != -1 {
				t.Fatalf("%s: perturbed %d for %v", f.name, got, p)
			}
			for i, m := range even {
				if signs[i] == 1 && InSpherePerturbed(p[m[0]], p[m[1]], p[m[2]], p[m[3]], p[4]) != got {
					t.Fatalf("%s: the order %v of the corners of %v changes the answer", f.name, m, p)
				}
			}
		}
	}
	if ties < 100 {
		t.Errorf("only %d ties met", ties)
	}
}

// TestPerturbedTriangulatesTheLattice: law 4, on a 3x3x3 lattice, full of cospherical
// points, the tetrahedra whose perturbed sphere is empty are one proper
// triangulation: volumes add up to the cube and inner facets are shared by two.
func TestPerturbedTriangulatesTheLattice(t *testing.T) {
	var pts []r3.Vec
	for i := range 27 {
		pts = append(pts, r3.Vec{X: float64(i % 3), Y: float64(i / 3 % 3), Z: float64(i / 9)})
	}
	facets := map[[3]int]int{}
	volume := 0.0
	n := len(pts)
	for a := range n {
		for b := a + 1; b < n; b++ {
			for c := b + 1; c < n; c++ {
				for d := c + 1; d < n; d++ {
					if !emptySphere(pts, a, b, c, d) {
						continue
					}
					u, v, w := r3.Sub(pts[b], pts[a]), r3.Sub(pts[c], pts[a]), r3.Sub(pts[d], pts[a])
					volume += math.Abs(r3.Dot(u, r3.Cross(v, w))) / 6
					for _, f := range [][3]int{{a, b, c}, {a, b, d}, {a, c, d}, {b, c, d}} {
						facets[f]++
					}
				}
			}
		}
	}
	if math.Abs(volume-8) > 1e-12 {
		t.Errorf("the tetrahedra fill %v of 8", volume)
	}
	for f, uses := range facets {
		onHull := false
		for axis := range 3 {
			x := [3]float64{}
			for i, p := range f {
				x[i] = [3]float64{pts[p].X, pts[p].Y, pts[p].Z}[axis]
			}
			onHull = onHull || (x[0] == x[1] && x[1] == x[2] && x[0] != 1)
		}
		if want := map[bool]int{true: 1, false: 2}[onHull]; uses != want {
			t.Errorf("facet %v is used %d times, want %d", f, uses, want)
		}
	}
}

func emptySphere(pts []r3.Vec, a, b, c, d int) bool {
	switch Orient3D(pts[a], pts[b], pts[c], pts[d]) {
	case 0:
		return false
	case -1:
		a, b = b, a
	}
	for e := range pts {
		if e != a && e != b && e != c && e != d && InSpherePerturbed(pts[a], pts[b], pts[c], pts[d], pts[e]) > 0 {
			return false
		}
	}
	return true
}

func TestNotFinitePanics(t *testing.T) {
	for _, bad := range []float64{math.NaN(), math.Inf(1), math.Inf(-1)} {
		v := r3.Vec{X: bad}
		calls := map[string]func(){
			"Orient2D":          func() { Orient2D(r2.Vec{X: bad}, r2.Vec{}, r2.Vec{Y: 1}) },
			"Orient3D":          func() { Orient3D(ex, ey, v, ez) },
			"InSphere":          func() { InSphere(o, ex, ey, ez, v) },
			"InSpherePerturbed": func() { InSpherePerturbed(o, ex, ey, ez, v) },
			"SideOfBisector":    func() { SideOfBisector(o, ex, v) },
		}
		for name, call := range calls {
			func() {
				defer func() {
					if recover() == nil {
						t.Errorf("%s with %v gives an answer", name, bad)
					}
				}()
				call()
			}()
		}
	}
}

// TestNoAllocation: the exact stages work in arrays that are used again.
func TestNoAllocation(t *testing.T) {
	p := nearSphere(rand.New(rand.NewPCG(5, 5)))
	corner := r3.Vec{X: 0.1, Y: 0.1, Z: 0.1}
	n := testing.AllocsPerRun(200, func() {
		InSphere(p[0], p[1], p[2], p[3], p[4])
		InSphere(o, r3.Scale(0.1, ex), r3.Scale(0.1, ey), r3.Scale(0.1, ez), corner)
		Orient3D(o, r3.Scale(0.1, ex), r3.Scale(0.1, ey), r3.Vec{X: 0.3, Y: 0.7})
		SideOfBisector(o, ex, r3.Vec{X: 0.5, Y: 0.1})
	})
	if n >= 1 {
		t.Errorf("%v allocations", n)
	}
}

func ExampleInSphere() {
	a, b, c, d := r3.Vec{}, r3.Vec{X: 1}, r3.Vec{Y: 1}, r3.Vec{Z: 1}
	fmt.Println(InSphere(a, b, c, d, r3.Vec{X: 1, Y: 1, Z: 1}))
	fmt.Println(InSphere(a, b, c, d, r3.Vec{X: 1, Y: 1, Z: math.Nextafter(1, 0)}))
	fmt.Println(InSpherePerturbed(a, b, c, d, r3.Vec{X: 1, Y: 1, Z: 1}))
	// Output:
	// 0
	// 1
	// -1
}

func ExampleOrient2D() {
	// 0.1 + 0.2 is not 0.3 in binary: the third point lies a little off the line.
	x, y := 0.1, 0.2
	fmt.Println(Orient2D(r2.Vec{X: x, Y: x}, r2.Vec{X: y, Y: y}, r2.Vec{X: x + y, Y: 0.3}))
	// Output: -1
}

// TestWideStageIsSure: coordinates of all magnitudes are decided without math/big nearly
// always, and never wrongly (the families with mixed exponents ask that of the whole).
func TestWideStageIsSure(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	asked, sure := 0, 0
	for range 2000 {
		p := mixed(r)
		asked += 2
		if s, ok := orient3DWide(p[0], p[1], p[2], p[3]); ok {
			sure++
			if want := exactOrient3D(p[0], p[1], p[2], p[3]); s != want {
				t.Fatalf("orientation of %v: %d, want %d", p, s, want)
			}
		}
		if s, ok := inSphereWide(p[0], p[1], p[2], p[3], p[4]); ok {
			sure++
			if want := exactInSphere(p[0], p[1], p[2], p[3], p[4]); s != want {
				t.Fatalf("in-sphere of %v: %d, want %d", p, s, want)
			}
		}
	}
	if 10*sure < 9*asked {
		t.Errorf("%d of %d decisions are sure", sure, asked)
	}
	inf := r3.Vec{X: math.Inf(1), Y: 1, Z: 1}
	if _, ok := orient3DWide(inf, o, ex, ey); ok {
		t.Error("an infinite coordinate has a sign")
	}
	if _, ok := inSphereWide(o, ex, ey, ez, r3.Vec{X: math.NaN()}); ok {
		t.Error("NaN has a sign")
	}
}
