package planar

import (
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/predicate"
)

// check holds a triangulation to its laws and returns twice the area.
func check(t *testing.T, name string, m *Mesh, delaunay bool) float64 {
	t.Helper()
	area := 0.0
	for i, c := range m.T {
		a, b, d := m.P[c[0]], m.P[c[1]], m.P[c[2]]
		if predicate.Orient2D(a, b, d) <= 0 {
			t.Fatalf("%s: triangle %d does not turn counter-clockwise", name, i)
		}
		area += (b.X-a.X)*(d.Y-a.Y) - (b.Y-a.Y)*(d.X-a.X)
		for k, u := range m.Next[i] {
			if u < 0 {
				continue
			}
			j := m.across(u, int32(i))
			if m.T[u][j] != c[(k+1)%3] || m.T[u][(j+1)%3] != c[k] {
				t.Fatalf("%s: sides of %d and %d differ", name, i, u)
			}
			if delaunay && inCircle(a, b, d, m.P[m.T[u][(j+2)%3]]) {
				t.Fatalf("%s: triangle %d has a point in its circle", name, i)
			}
		}
	}
	return area
}

func TestDelaunay(t *testing.T) {
	if a, b, c := (Vec{}), (Vec{X: 1}), (Vec{Y: 1}); !inCircle(a, b, c, Vec{X: 0.9, Y: 0.9}) || inCircle(a, b, c, Vec{X: 1, Y: 1}) ||
		inCircle(a, b, c, Vec{X: 1.1, Y: 1}) {
		t.Fatal("the circle around a right angle is wrong")
	}
	grid := []Vec{}
	for i := range 12 {
		for j := range 9 {
			grid = append(grid, Vec{X: float64(i) * 0.1, Y: float64(j) * 0.1})
		}
	}
	m := Delaunay(grid)
	if a := check(t, "lattice", m, true); a < 1.75999999 || a > 1.76000001 || len(m.T) != 2*11*8 {
		t.Errorf("a lattice of twice the area 1.76 has %v in %d triangles", a, len(m.T))
	}
	for seed := range uint64(30) {
		r := rand.New(rand.NewPCG(seed, 3))
		points := []Vec{{X: 0, Y: 0}, {X: 1, Y: 0}, {X: 0, Y: 1}, {X: 1, Y: 1}}
		for range r.IntN(300) {
			points = append(points, Vec{X: r.Float64(), Y: r.Float64()})
		}
		m := Delaunay(points)
		if a := check(t, "scattered", m, true); a < 2-1e-12 || a > 2+1e-12 || len(m.T) != 2*len(points)-6 {
			t.Errorf("seed %d: %d points, %d triangles, twice the area %v", seed, len(points), len(m.T), a)
		}
	}
	for name, points := range map[string][]Vec{
		"none": nil, "one": {{X: 1}}, "two": {{X: 1}, {X: 2}}, "a line": {{X: 1}, {X: 2}, {X: 3}}, "an upright line": {{Y: 3}, {Y: 1}, {Y: 2}},
	} {
		if m := Delaunay(points); len(m.T) != 0 {
			t.Errorf("%s: %d triangles", name, len(m.T))
		}
	}
	if m := Delaunay([]Vec{{X: 0}, {X: 1}, {X: 2}, {X: 3}, {X: 1, Y: -1}, {X: 3, Y: 1}}); check(t, "a line first", m, true) != 3+3 {
		t.Errorf("a line first: %v", m.T)
	}
}

func TestConstrain(t *testing.T) {
	for seed := range uint64(40) {
		r := rand.New(rand.NewPCG(seed, 9))
		var points []Vec
		// A comb whose teeth nearly touch: sides that Delaunay triangulations leave out.
		n := 3 + r.IntN(20)
		for i := range n {
			points = append(points, Vec{X: float64(i), Y: 0}, Vec{X: float64(i) + 0.5, Y: 5 + r.Float64()})
		}
		points = append(points, Vec{X: float64(n), Y: -3}, Vec{X: -1, Y: -3})
		var sides [][2]int32
		for i := range points {
			sides = append(sides, [2]int32{int32(i), int32((i + 1) % len(points))})
		}
		m := Delaunay(points)
		before := check(t, "before", m, true)
		if err := m.Constrain(sides); err != nil {
			t.Fatal(err)
		}
		if after := check(t, "after", m, false); after-before > 1e-9 || before-after > 1e-9 {
			t.Fatalf("the area was %v and is %v", before, after)
		}
		have := map[[2]int32]bool{}
		for _, c := range m.T {
			for k := range 3 {
				have[[2]int32{c[k], c[(k+1)%3]}], have[[2]int32{c[(k+1)%3], c[k]}] = true, true
			}
		}
		for _, s := range sides {
			if !have[s] {
				t.Fatalf("seed %d: the side %v is missing", seed, s)
			}
		}
	}
	square := []Vec{{X: 0, Y: 0}, {X: 2, Y: 0}, {X: 2, Y: 2}, {X: 0, Y: 2}, {X: 1, Y: 1}}
	if err := Delaunay(square).Constrain([][2]int32{{0, 2}}); err == nil {
		t.Error("a segment through a point is accepted")
	}
	if err := Delaunay(square[:4]).Constrain([][2]int32{{0, 2}, {1, 3}}); err == nil {
		t.Error("crossing segments are accepted")
	}
}
