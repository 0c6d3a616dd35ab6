package mesh

import (
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/solid"
)

func box(t testing.TB, x0, y0, z0, x1, y1, z1 float64) *Mesh {
	t.Helper()
	return block(Vec{X: x0, Y: y0, Z: z0}, Vec{X: x1, Y: y1, Z: z1}).mesh(t)
}

func combined(t testing.TB, op Op, a, b solid.Solid) *Mesh {
	t.Helper()
	m, err := Combine(op, a, b)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// What two boxes make of each other is known by hand.
func TestCombinedBoxes(t *testing.T) {
	a := box(t, 0, 0, 0, 4, 4, 4)
	for _, c := range []struct {
		name          string
		op            Op
		b             *Mesh
		volume, area  float64
		pieces, voids int
	}{
		{"a corner", Minus, box(t, 2, 2, 2, 6, 6, 6), 56, 96, 1, 0},
		{"from inside", Minus, box(t, 1, 1, 1, 3, 3, 3), 56, 96 + 24, 1, 1},
		{"on the floor", Minus, box(t, 1, 1, 0, 3, 3, 2), 56, 96 + 16, 1, 0},
		{"in the corner", Minus, box(t, 0, 0, 0, 2, 2, 2), 56, 96, 1, 0},
		{"through", Minus, box(t, 1, 1, 0, 3, 3, 4), 48, 96 - 8 + 32, 1, 0},
		{"through and beyond", Minus, box(t, 1, 1, -1, 3, 3, 5), 48, 96 - 8 + 32, 1, 0},
		{"in two", Minus, box(t, 1, 0, 0, 3, 4, 4), 32, 96, 2, 0},
		{"in two and beyond", Minus, box(t, 1, -1, -1, 3, 5, 5), 32, 96, 2, 0},
		{"apart", Minus, box(t, 5, 0, 0, 6, 4, 4), 64, 96, 1, 0},
		{"touching in a face", Minus, box(t, 4, 0, 0, 6, 4, 4), 64, 96, 1, 0},
		{"beside", Plus, box(t, 4, 0, 0, 6, 4, 4), 96, 96 + 32, 1, 0},
		{"beside, lower", Plus, box(t, 4, 1, 1, 6, 3, 3), 72, 96 + 16, 1, 0},
		{"touching in an edge", Plus, box(t, 4, 4, 0, 6, 6, 4), 80, 96 + 40, 2, 0},
		{"touching in a corner", Plus, box(t, 4, 4, 4, 6, 6, 6), 72, 96 + 24, 2, 0},
		{"apart, plus", Plus, box(t, 5, 0, 0, 6, 4, 4), 80, 96 + 48, 2, 0},
		{"overlapping", Plus, box(t, 2, 2, 2, 6, 6, 6), 64 + 64 - 8, 96 + 96 - 24, 1, 0},
		{"in line", Plus, box(t, 2, 0, 0, 6, 4, 4), 96, 128, 1, 0},
		{"a cross", Plus, box(t, 1, 1, -2, 3, 3, 6), 64 + 16, 96 + 32, 1, 0},
		{"inside", Plus, box(t, 1, 1, 1, 3, 3, 3), 64, 96, 1, 0},
		{"the same", Plus, box(t, 0, 0, 0, 4, 4, 4), 64, 96, 1, 0},
	} {
		r := rand.New(rand.NewPCG(7, 1))
		for turn := range 3 {
			b, first := c.b, a
			if turn > 0 {
				move := rotation(r, Vec{X: 10, Y: 20, Z: -3})
				first = (&soup{v: a.v, t: a.t}).moved(move).mesh(t)
				b = (&soup{v: c.b.v, t: c.b.t}).moved(move).mesh(t)
			}
			m, err := Combine(c.op, first, b)
			if err != nil {
				t.Errorf("%s, turn %d: %v", c.name, turn, err)
				continue
			}
			near(t, c.name+": volume", m.Volume(), c.volume, 1e-12*c.volume)
			near(t, c.name+": area", m.Area(), c.area, 1e-8*c.area)
			if turn == 0 && (m.pieces != c.pieces || m.voids != c.voids) {
				t.Errorf("%s: %d pieces and %d voids, want %d and %d", c.name, m.pieces, m.voids, c.pieces, c.voids)
			}
			laws(t, c.name, m, sitesIn(r, m, 20))
			if turn == 0 {
				laws(t, c.name+", lattice", m, lattice(Vec{X: 0.5, Y: 0.5, Z: 0.5}, Vec{X: 1, Y: 1, Z: 1}, 6, 6, 6))
				laws(t, c.name+", lattice in the walls", m, lattice(Vec{}, Vec{X: 2, Y: 2, Z: 2}, 3, 3, 3))
			}
		}
	}
	if _, err := Combine(Minus, a, box(t, -1, -1, -1, 5, 5, 5)); err == nil {
		t.Error("nothing is left, and it is no error")
	}
}
