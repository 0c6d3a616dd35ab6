package polyhedron_test

import (
	"fmt"

	"nearcell/voronoi/polyhedron"
)

// A cube loses a corner.
func Example() {
	var c polyhedron.Cell
	var sides [6]int32
	for w := range sides {
		sides[w] = polyhedron.Wall(int32(w))
	}
	c.SetBox(polyhedron.Vec{X: -1, Y: -1, Z: -1}, polyhedron.Vec{X: 1, Y: 1, Z: 1}, sides)
	fmt.Println(c.Clip(polyhedron.Vec{X: 1, Y: 1, Z: 1}, 2, 7))
	s := c.Shape()
	fmt.Printf("volume %.4f, %d walls, %d contact, %d edges, %d vertices\n", c.Volume(), s.Walls, s.Contacts, s.Edges, s.Vertices)
	for i := range c.NumFaces() {
		if label, loop := c.Face(i); label == 7 {
			fmt.Printf("the new face has %d corners and the area %.4f\n", len(loop), c.Area(i))
		}
	}
	// Output:
	// cut
	// volume 7.8333, 6 walls, 1 contact, 15 edges, 10 vertices
	// the new face has 3 corners and the area 0.8660
}
