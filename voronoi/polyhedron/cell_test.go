package polyhedron

import (
	"math"
	"testing"
)

var walls = [6]int32{Wall(0), Wall(1), Wall(2), Wall(3), Wall(4), Wall(5)}

func box(lo, hi Vec) *Cell {
	var c Cell
	c.SetBox(lo, hi, walls)
	return &c
}

func unit() *Cell { return box(Vec{X: -1, Y: -1, Z: -1}, Vec{X: 1, Y: 1, Z: 1}) }

func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol*max(1, math.Abs(want))) {
		t.Errorf("%s = %.17g, want %.17g", what, got, want)
	}
}

func valid(t *testing.T, c *Cell) {
	t.Helper()
	if err := c.Validate(); err != nil {
		t.Fatal(err)
	}
}

func TestBox(t *testing.T) {
	c := box(Vec{X: -1, Y: -2, Z: -3}, Vec{X: 4, Y: 5, Z: 6})
	valid(t, c)
	near(t, "volume", c.Volume(), 5*7*9, 1e-15)
	if got, want := c.Shape(), (Shape{Walls: 6, Edges: 12, Vertices: 8}); got != want {
		t.Errorf("shape %+v, want %+v", got, want)
	}
	want := map[int32]Vec{
		Wall(0): {X: -63}, Wall(1): {X: 63}, Wall(2): {Y: -45}, Wall(3): {Y: 45}, Wall(4): {Z: -35}, Wall(5): {Z: 35},
	}
	for i := 0; i < c.NumFaces(); i++ {
		label, loop := c.Face(i)
		if c.FaceArea(i) != want[label] || len(loop) != 4 {
			t.Errorf("side %d has the area vector %v and %d corners", label, c.FaceArea(i), len(loop))
		}
	}
	m := c.Moments()
	near(t, "first x", m.First.X, 315*1.5, 1e-14)
	near(t, "first y", m.First.Y, 315*1.5, 1e-14)
	near(t, "second zz", m.Second[2], 35*(216+27)/3, 1e-14)
	near(t, "second xy", m.Second[3], 9*7.5*10.5, 1e-14)
}

func TestCutCorner(t *testing.T) {
	c := unit()
	if r := c.Clip(Vec{X: 1, Y: 1, Z: 1}, 2, 7); r != Cut {
		t.Fatalf("cutting a corner: %v", r)
	}
	valid(t, c)
	near(t, "volume", c.Volume(), 8-1.0/6, 1e-15)
	if got, want := c.Shape(), (Shape{Contacts: 1, Walls: 6, Edges: 15, Vertices: 10}); got != want {
		t.Errorf("shape %+v, want %+v", got, want)
	}
}
