package coverage

import (
	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// Surfaced is a solid that gives its surface as triangles, counter-clockwise from outside.
type Surfaced interface {
	solid.Solid
	Surface() ([]Vec, [][3]int32)
}

// carver takes what a solid has of a cell apart into convex pieces, each with a sign: what
// is measured of the cell in the solid is the sum over the pieces. It is the scratch of one
// goroutine.
//
// A solid that knows its convex parts gives these. Any other is, almost everywhere, the
// sum of the columns below its triangles, with the sign of the way that they look, up or
// down (the signed decomposition by which its volumes are measured, too).
type carver struct {
	body   solid.Solid // nil: none
	parts  solid.Divided
	v      []Vec
	t      [][3]int32
	piece  polyhedron.Cell
	planes []solid.Plane
}

func newCarver(body solid.Solid) (*carver, error) {
	c := &carver{}
	if body == nil || body.Planes() != nil {
		return c, nil
	}
	c.body = body
	if divided, ok := body.(solid.Divided); ok {
		c.parts = divided
		return c, nil
	}
	surfaced, ok := body.(Surfaced)
	if !ok {
		return nil, &UndividedError{body.Facts().Kind}
	}
	c.v, c.t = surfaced.Surface()
	return c, nil
}

// each calls do for the pieces of a cell that is local to a site.
func (c *carver) each(cell *polyhedron.Cell, site Vec, do func(piece *polyhedron.Cell, sign float64)) {
	switch {
	case c.body == nil:
		do(cell, 1)
	case c.parts != nil:
		lo, hi := cell.Bounds()
		for i := range c.parts.NumParts() {
			if a, b := c.parts.PartBounds(i); !meet(sub(a, site), sub(b, site), lo, hi, 0) {
				continue
			}
			c.piece.CopyFrom(cell)
			c.planes = c.parts.PartPlanes(i, site, c.planes[:0])
			for _, w := range c.planes {
				if c.piece.Clip(w.N, w.D, polyhedron.Wall(0)) == polyhedron.Empty {
					break
				}
			}
			if !c.piece.Empty() {
				do(&c.piece, 1)
			}
		}
	default:
		for _, t := range c.t {
			c.column(cell, site, t, do)
		}
	}
}

// column is what the cell has of the space below a triangle.
func (c *carver) column(cell *polyhedron.Cell, site Vec, t [3]int32, do func(piece *polyhedron.Cell, sign float64)) {
	var p [3]Vec
	for k := range 3 {
		p[k] = sub(c.v[t[k]], site)
	}
	n := cross(sub(p[1], p[0]), sub(p[2], p[0]))
	lo, hi := cell.Bounds()
	if n.Z == 0 || max(p[0].X, p[1].X, p[2].X) <= lo.X || min(p[0].X, p[1].X, p[2].X) >= hi.X ||
		max(p[0].Y, p[1].Y, p[2].Y) <= lo.Y || min(p[0].Y, p[1].Y, p[2].Y) >= hi.Y || max(p[0].Z, p[1].Z, p[2].Z) <= lo.Z {
		return
	}
	sign := 1.0
	if n.Z < 0 {
		sign = -1
	}
	c.piece.CopyFrom(cell)
	for k := range 3 {
		// The upright plane through an edge is the same to the last bit for both triangles.
		a, b, turn := k, (k+1)%3, sign
		if t[a] > t[b] {
			a, b, turn = b, a, -sign
		}
		e := sub(c.v[t[b]], c.v[t[a]])
		out := Vec{X: e.Y, Y: -e.X}
		d := dot(out, p[a])
		if c.piece.Clip(scale(turn, out), turn*d, polyhedron.Wall(0)) == polyhedron.Empty {
			return
		}
	}
	n = scale(sign, n)
	if c.piece.Clip(n, dot(n, p[0]), polyhedron.Wall(0)) != polyhedron.Empty {
		do(&c.piece, sign)
	}
}
