package mesh

import (
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/solid"
)

func v2(xy ...float64) []solid.Vec2 {
	var out []solid.Vec2
	for i := 0; i < len(xy); i += 2 {
		out = append(out, solid.Vec2{X: xy[i], Y: xy[i+1]})
	}
	return out
}

func rect(x0, y0, x1, y1 float64) []solid.Vec2 { return v2(x0, y0, x1, y0, x1, y1, x0, y1) }

var plans = []struct {
	name  string
	outer []solid.Vec2
	holes [][]solid.Vec2
}{
	{"L", v2(0, 0, 30, 0, 30, 12, 18, 12, 18, 18, 0, 18), nil},
	{"L with a hole in the corner", v2(0, 0, 30, 0, 30, 12, 18, 12, 18, 18, 0, 18), [][]solid.Vec2{rect(0, 0, 4, 3)}},
	{"U", v2(0, 0, 10, 0, 10, 8, 7, 8, 7, 3, 3, 3, 3, 8, 0, 8), nil},
	{"frame", rect(0, 0, 10, 8), [][]solid.Vec2{rect(3, 2, 7, 6)}},
	{"triangle and square holes", rect(0, 0, 12, 6), [][]solid.Vec2{v2(1, 1, 5, 1, 3, 5), rect(7, 2, 10, 5)}},
	{"hole touches a side in a corner", rect(0, 0, 8, 8), [][]solid.Vec2{v2(4, 0, 6, 3, 2, 3)}},
	{"two holes share a side", rect(0, 0, 10, 6), [][]solid.Vec2{rect(2, 2, 4, 4), rect(4, 2, 7, 5)}},
	{"hole cuts the hall in two", rect(0, 0, 10, 4), [][]solid.Vec2{rect(4, 0, 5, 4)}},
	{"two rooms through a corner", rect(0, 0, 4, 4), [][]solid.Vec2{rect(0, 2, 2, 4), rect(2, 0, 4, 2)}},
}

// A prism, the mesh of its surface, and its outline's prism MINUS those of its holes are
// one solid: for scattered sites and for lattices whose faces lie in the walls.
func TestPrismIsItsMesh(t *testing.T) {
	for _, p := range plans {
		prism, err := solid.NewPrism(p.outer, p.holes, -0.5, 3)
		if err != nil {
			t.Fatal(err)
		}
		v, tri := prism.Surface()
		m, _, err := New(v, tri, Options{})
		if err != nil {
			t.Errorf("%s: %v", p.name, err)
			continue
		}
		whole, err := solid.NewPrism(p.outer, nil, -0.5, 3)
		if err != nil {
			t.Fatal(err)
		}
		bodies, ops := []solid.Solid{whole}, []Op(nil)
		for _, h := range p.holes {
			b, err := solid.NewPrism(h, nil, -0.5, 3)
			if err != nil {
				t.Fatal(err)
			}
			bodies, ops = append(bodies, b), append(ops, Minus)
		}
		minus, err := Join(ops, bodies...)
		if err != nil {
			t.Errorf("%s: %v", p.name, err)
			continue
		}
		r := rand.New(rand.NewPCG(3, 4))
		for name, s := range map[string]*Mesh{"mesh": m, "minus": minus} {
			name = p.name + ", " + name
			same(t, name, s, prism, sitesIn(r, prism, 25))
			same(t, name+", lattice", s, prism, lattice(Vec{X: 1, Y: 1, Z: 0.5}, Vec{X: 2, Y: 2, Z: 2}, 6, 5, 2))
			same(t, name+", in the walls", s, prism, lattice(Vec{X: 0, Y: 0, Z: -0.5}, Vec{X: 2, Y: 2, Z: 1.75}, 5, 5, 3))
			if s.Pieces() != prism.Pieces() {
				t.Errorf("%s: %d pieces, want %d", name, s.Pieces(), prism.Pieces())
			}
		}
	}
}
