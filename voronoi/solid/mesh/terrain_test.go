package mesh

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/solid"
)

// Surfaces whose volumes are known by hand.
func TestTerrain(t *testing.T) {
	square := func(z ...float64) []Vec {
		return []Vec{{X: 0, Y: 0, Z: z[0]}, {X: 4, Y: 0, Z: z[1]}, {X: 4, Y: 4, Z: z[2]}, {X: 0, Y: 4, Z: z[3]}}
	}
	for _, c := range []struct {
		name        string
		points      []Vec
		height      float64
		under, over float64
		pieces      int
	}{
		{"a basin", square(-2, -2, -2, -2), 0, 32, 0, 1},
		{"a heap", square(1, 1, 1, 1), 0, 0, 16, 1},
		{"a slope", square(-2, -2, 0, 0), 0, 16, 0, 1},
		{"a slope through the height", square(-2, -2, 2, 2), 0, 8, 8, 2},
		{"a corner under water", square(-4, 4, 4, 4), 0, 8. / 3, 64 - 64./3 + 8./3, 2},
		{"a spike in the middle", append(square(0, 0, 0, 0), Vec{X: 2, Y: 2, Z: -3}), 0, 16, 0, 1},
	} {
		m, g, err := Terrain(c.points, c.height)
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		near(t, c.name+": under", g.Under, c.under, 1e-12)
		if c.name != "a corner under water" { // the diagonal may run either way
			near(t, c.name+": over", g.Over, c.over, 1e-12)
		}
		near(t, c.name+": volume", m.Volume(), g.Under+g.Over, 1e-12)
		near(t, c.name+": plan", g.Area, 16, 1e-12)
		if m.Pieces() != c.pieces {
			t.Errorf("%s: %d pieces, want %d", c.name, m.Pieces(), c.pieces)
		}
		laws(t, c.name, m, sitesIn(rand.New(rand.NewPCG(1, 1)), m, 15))
	}
	r := rand.New(rand.NewPCG(5, 5))
	var points []Vec
	for range 400 {
		x, y := 5e5+r.Float64()*200, 4e6+r.Float64()*100
		points = append(points, Vec{X: x, Y: y, Z: 3*math.Sin(x/20) + 2*math.Cos(y/15) - 1})
	}
	m, g, err := Terrain(points, 0)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "a lake", m.Volume(), g.Under+g.Over, 1e-9*m.Volume())
	laws(t, "a lake", m, sitesIn(r, m, 40))
	var e *Error
	if _, _, err := Terrain([]Vec{{X: 1}, {X: 2}, {X: 3}}, 1); !errors.As(err, &e) || e.Fault != NoPlan {
		t.Errorf("a line: %v", err)
	}
	if _, _, err := Terrain(append(square(1, 2, 3, 4), Vec{Z: 7}), 0); !errors.As(err, &e) || e.Fault != TwoHeights || e.Corner != 4 {
		t.Errorf("two heights: %v", err)
	}
	if _, _, err := Terrain(square(1, 1, 1, 1), 1); !errors.As(err, &e) || e.Fault != NoVolume {
		t.Errorf("no volume: %v", err)
	}
	if _, g, err := Terrain(append(square(1, 2, 3, 4), Vec{Z: 1}), 0); err != nil || g.Repeated != 1 {
		t.Errorf("a point twice: %v", err)
	}
}

// Boxes that touch and overlap are one solid with named parts.
func TestBoxes(t *testing.T) {
	part := func(name string, a, b Vec) solid.Part {
		s, err := solid.NewBox(a, b)
		if err != nil {
			t.Fatal(err)
		}
		return solid.Part{Name: name, Solid: s}
	}
	b, err := NewBoxes([]solid.Part{
		part("A", Vec{}, Vec{X: 2, Y: 1, Z: 3}), part("B", Vec{X: 2}, Vec{X: 4, Y: 1, Z: 3}),
		part("A", Vec{Y: 2}, Vec{X: 2, Y: 3, Z: 3}), part("C", Vec{X: 3, Y: 2}, Vec{X: 5, Y: 3, Z: 1}), part("C", Vec{X: 4, Y: 2}, Vec{X: 6, Y: 3, Z: 1}),
	})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "volume", b.Volume(), 12+6+3, 1e-12)
	if len(b.Parts()) != 3 || b.Parts()[0].Name != "A" || b.Parts()[0].Solid.Volume() != 12 || b.Parts()[2].Solid.Volume() != 3 || b.Pieces() != 3 {
		t.Errorf("%+v, %d pieces", b.Parts(), b.Pieces())
	}
	laws(t, "boxes", b, sitesIn(rand.New(rand.NewPCG(1, 1)), b, 30))
	s, err := solid.Stretch(b, Vec{X: 1, Y: 1, Z: 5})
	if err != nil || s.Volume() != 5*21 || s.(solid.Parted).Parts()[1].Solid.Volume() != 30 {
		t.Errorf("stretched: %v %v", s, err)
	}
}
