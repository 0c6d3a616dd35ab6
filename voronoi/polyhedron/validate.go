package polyhedron

import (
	"fmt"
	"math"
)

// Validate checks what must hold after every cut, whatever the input: each
// half-edge has one twin, faces keep to their cut all round, V - E + F = 2 for
// every piece of surface, coordinates are finite, and the area vectors of the
// faces sum to zero within 1e-12 of the surface (for a splinter thinner than that,
// within what rounding makes of its length squared). An empty cell is valid.
func (c *Cell) Validate() error {
	if c.Empty() {
		return nil
	}
	if len(c.twin) != 3*len(c.v) || len(c.face) != len(c.twin) {
		return fmt.Errorf("polyhedron: %d vertices with %d half-edges", len(c.v), len(c.twin))
	}
	for i, p := range c.v {
		if s := p.X + p.Y + p.Z; math.IsNaN(s) || math.IsInf(s, 0) {
			return fmt.Errorf("polyhedron: vertex %d is not finite: %v", i, p)
		}
	}
	for h, t := range c.twin {
		if t < 0 || int(t) >= len(c.twin) || c.twin[t] != int32(h) || t/3 == int32(h)/3 {
			return fmt.Errorf("polyhedron: half-edge %d has the twin %d", h, t)
		}
		if next := before(t); c.face[next] != c.face[h] {
			return fmt.Errorf("polyhedron: half-edges %d and %d of one face belong to cuts %d and %d", h, next, c.face[h], c.face[next])
		}
	}
	euler := len(c.v) - len(c.twin)/2 + c.NumFaces()
	if pieces := c.pieces(); euler != 2*pieces {
		return fmt.Errorf("polyhedron: V - E + F = %d for %d pieces of surface", euler, pieces)
	}
	var sum Vec
	total := 0.0
	for i := 0; i < c.NumFaces(); i++ {
		a := c.FaceArea(i)
		sum = add(sum, a)
		total += length(a)
	}
	lo, hi := c.Bounds()
	size := length(sub(hi, lo))
	if !(length(sum) <= max(1e-12*total, 0x1p-48*size*size)) {
		return fmt.Errorf("polyhedron: area vectors sum to %g of a surface of %g", length(sum), total)
	}
	return nil
}

// pieces counts the connected pieces of the surface: one, unless rounding split
// off a crumb.
func (c *Cell) pieces() int {
	done := make([]bool, len(c.v))
	n := 0
	for i := range c.v {
		if done[i] {
			continue
		}
		n++
		done[i] = true
		for stack := []int32{int32(i)}; len(stack) > 0; {
			v := stack[len(stack)-1]
			stack = stack[:len(stack)-1]
			for k := int32(0); k < 3; k++ {
				if w := c.twin[3*v+k] / 3; !done[w] {
					done[w] = true
					stack = append(stack, w)
				}
			}
		}
	}
	return n
}
