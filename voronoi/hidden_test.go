package voronoi

import (
	"context"
	"math"
	"testing"

	"nearcell/voronoi/solid"
	"nearcell/voronoi/solid/mesh"
)

// One site in an L sees all but a triangle or a quadrilateral behind the corner, which is
// known by hand; a plan and its mesh agree, and so do threads.
func TestHidden(t *testing.T) {
	outline := []solid.Vec2{{X: 0, Y: 0}, {X: 10, Y: 0}, {X: 10, Y: 4}, {X: 4, Y: 4}, {X: 4, Y: 10}, {X: 0, Y: 10}}
	prism, err := solid.NewPrism(outline, nil, 0, 3)
	if err != nil {
		t.Fatal(err)
	}
	v, tri := prism.Surface()
	body, _, err := mesh.New(v, tri, mesh.Options{})
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		site Vec
		want float64
	}{
		// From (8, 2) the corner (4, 4) hides what lies beyond the line to (0, 6).
		{Vec{X: 8, Y: 2, Z: 1}, (4*6 - 4*2/2.0) / 64},
		{Vec{X: 2, Y: 2, Z: 1}, 0},
		{Vec{X: 10, Y: 0, Z: 0}, (4*6 - 4*(4*4/6.0)/2) / 64}, // in a corner of the room
	} {
		shares := [2]float64{}
		for k, s := range []solid.Solid{prism, body} {
			for threads := 1; threads <= 2; threads++ {
				d, err := New([]Vec{c.site}, Options{Solid: s, Threads: threads})
				if err != nil {
					t.Fatal(err)
				}
				got, err := d.Hidden(context.Background(), nil)
				if err != nil {
					t.Fatal(err)
				}
				if threads == 2 && got.Hidden[0] != shares[k] {
					t.Errorf("%v: two threads give %v and one %v", c.site, got.Hidden[0], shares[k])
				}
				shares[k] = got.Hidden[0]
				if math.Abs(got.Hidden[0]-c.want) > 4*got.Error[0]+1e-12 || got.Error[0] > 0.02 {
					t.Errorf("%v hides %v ± %v, want %v", c.site, got.Hidden[0], got.Error[0], c.want)
				}
			}
		}
		if shares[0] != shares[1] {
			t.Errorf("%v: the plan hides %v, its mesh %v", c.site, shares[0], shares[1])
		}
	}
	box, err := solid.NewBox(Vec{}, Vec{X: 1, Y: 1, Z: 1})
	if err != nil {
		t.Fatal(err)
	}
	d, err := New([]Vec{{X: 0.5, Y: 0.5, Z: 0.5}, {X: 0.1, Y: 0.1, Z: 0.1}}, Options{Solid: box})
	if err != nil {
		t.Fatal(err)
	}
	if got, err := d.Hidden(context.Background(), []int32{1}); err != nil || len(got.Hidden) != 1 || got.Hidden[0] != 0 {
		t.Errorf("a box hides %v: %v", got, err)
	}
}
