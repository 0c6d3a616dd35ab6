package coverage

import (
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"
)

// On directions with small whole components the question has an exact answer: whether
// some vector but 0 has no positive product with any of them. If there is one, there is
// one along the cross product of two, or all lie on a line.
func TestConeExactly(t *testing.T) {
	whole := func(v Vec) bool { return v != Vec{} }
	rapid.Check(t, func(r *rapid.T) {
		component := rapid.IntRange(-3, 3)
		var k cone
		var exact []Vec
		for range rapid.IntRange(1, 12).Draw(r, "n") {
			v := Vec{X: float64(component.Draw(r, "x")), Y: float64(component.Draw(r, "y")), Z: float64(component.Draw(r, "z"))}
			if whole(v) {
				exact = append(exact, v)
				k.c = append(k.c, scale(1/length(v), v))
			}
		}
		open := len(exact) == 0
		onLine := true
		for i, a := range exact {
			for _, b := range exact[:i] {
				n := cross(a, b)
				if !whole(n) {
					continue
				}
				onLine = false
				up, down := true, true
				for _, c := range exact {
					up, down = up && dot(c, n) <= 0, down && dot(c, n) >= 0
				}
				open = open || up || down
			}
		}
		open = open || onLine
		if k.isClosed(1e-7) == open {
			r.Fatalf("%v: closed is %v, want %v", exact, !open, open)
		}
	})
}

// The slack is a slope: four directions that surround the origin by less than it do
// not count.
func TestConeSlack(t *testing.T) {
	for _, c := range []struct {
		tilt, slack float64
		closed      bool
	}{{1e-3, 1e-7, true}, {1e-6, 1e-7, true}, {1e-8, 1e-7, false}, {0, 1e-7, false}, {-1e-6, 1e-7, false}, {1e-5, 2e-4, false}} {
		// Three in a plane, leaning up a little, and one straight down.
		k := cone{c: []Vec{{Z: -1}}}
		for _, v := range []Vec{{X: 1, Z: c.tilt}, {X: -0.5, Y: 0.8660254037844386, Z: c.tilt}, {X: -0.5, Y: -0.8660254037844386, Z: c.tilt}} {
			k.c = append(k.c, scale(1/length(v), v))
		}
		if got := k.isClosed(c.slack); got != c.closed {
			t.Errorf("leaning by %g, slack %g: closed is %v", c.tilt, c.slack, got)
		}
	}
}

// Many directions around the origin take no more than a few steps.
func BenchmarkCone(b *testing.B) {
	r := rand.New(rand.NewPCG(1, 1))
	var k cone
	for range 10000 {
		k.c = append(k.c, direction(r))
	}
	for b.Loop() {
		if !k.isClosed(1e-7) {
			b.Fatal("open")
		}
	}
}
