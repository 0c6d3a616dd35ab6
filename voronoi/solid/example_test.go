package solid_test

import (
	"errors"
	"fmt"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// A chilled hall with an L-shaped plan and a plant room in its corner (invented): where
// the plant room stands against the outline there is no wall.
func ExampleNewPrism() {
	outline := []solid.Vec2{{X: 0, Y: 0}, {X: 30, Y: 0}, {X: 30, Y: 12}, {X: 18, Y: 12}, {X: 18, Y: 18}, {X: 0, Y: 18}}
	plant := []solid.Vec2{{X: 0, Y: 0}, {X: 4, Y: 0}, {X: 4, Y: 3}, {X: 0, Y: 3}}
	hall, err := solid.NewPrism(outline, [][]solid.Vec2{plant}, 0, 7.5)
	if err != nil {
		panic(err)
	}
	fmt.Println("volume", hall.Volume(), "surface", hall.Area(), "walls", hall.Facts().Walls)
	for _, p := range []solid.Vec{{X: 2, Y: 0, Z: 1}, {X: 4, Y: 1, Z: 1}, {X: 5, Y: 1, Z: 1}, {X: 20, Y: 15, Z: 1}} {
		fmt.Println(p.X, p.Y, hall.Side(p, 0), hall.Distance(p))
	}
	// Output:
	// volume 3420 surface 1632 walls 10
	// 2 0 outside 2
	// 4 1 on 0
	// 5 1 inside 1
	// 20 15 outside 2
}

// The errors carry numbers, for messages in the caller's words.
func ExampleError() {
	_, err := solid.NewPrism([]solid.Vec2{{X: 0, Y: 0}, {X: 4, Y: 4}, {X: 4, Y: 0}, {X: 0, Y: 3}}, nil, 0, 3)
	var fault *solid.Error
	if errors.As(err, &fault) && fault.Fault == solid.Crossing {
		fmt.Printf("sides %d and %d cross at (%.2f, %.2f)\n", fault.Side, fault.OtherSide, fault.At.X, fault.At.Y)
	}
	// Output: sides 0 and 2 cross at (1.71, 1.71)
}

func ExampleSolid() {
	hall, err := solid.NewBox(solid.Vec{}, solid.Vec{X: 10, Y: 4, Z: 3})
	if err != nil {
		panic(err)
	}
	// The cell of the site at x = 2 in the company of another at x = 6.
	site := solid.Vec{X: 2, Y: 2, Z: 1.5}
	var c polyhedron.Cell
	c.SetBox(solid.Vec{X: -2, Y: -2, Z: -1.5}, solid.Vec{X: 8, Y: 2, Z: 1.5}, [6]int32{-1, -1, -1, -1, -1, -1})
	c.Clip(solid.Vec{X: 4}, 8, 1)

	var w solid.Work
	var m solid.Measures
	if err := hall.Measure(&c, site, solid.WantVolume|solid.WantContacts|solid.WantWalls, &w, &m); err != nil {
		panic(err)
	}
	contact := 0.0
	for _, a := range m.Contacts {
		contact += a
	}
	fmt.Println("volume", m.Volume, "contact", contact, "walls", m.Walls, "in", m.WallFaces)
	// Output: volume 48 contact 12 walls 68 in 5
}
