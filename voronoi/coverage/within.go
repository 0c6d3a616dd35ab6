package coverage

import "nearcell/voronoi/solid"

// within is the part of a solid (nil: all of space) that lies in another.
func within(body, of solid.Solid) (solid.Divided, error) {
	part, ok := of.(solid.Divided)
	if !ok {
		return nil, &UndividedError{of.Facts().Kind}
	}
	if body == nil {
		return part, nil
	}
	divided, ok := body.(solid.Divided)
	if !ok {
		return nil, &UndividedError{body.Facts().Kind}
	}
	c := &common{Divided: part, other: divided}
	for i := range part.NumParts() {
		lo, hi := part.PartBounds(i)
		for k := range divided.NumParts() {
			a, b := divided.PartBounds(k)
			if lo.X < b.X && a.X < hi.X && lo.Y < b.Y && a.Y < hi.Y && lo.Z < b.Z && a.Z < hi.Z {
				c.pairs = append(c.pairs, [2]int{i, k})
			}
		}
	}
	return c, nil
}

// common is the space that two solids share, as far as those need it who look for
// places: its convex parts, its walls and its corners.
type common struct {
	solid.Divided
	other solid.Divided
	pairs [][2]int // parts of both that meet
}

func (c *common) NumParts() int { return len(c.pairs) }

func (c *common) PartBounds(i int) (lo, hi Vec) {
	lo, hi = c.Divided.PartBounds(c.pairs[i][0])
	a, b := c.other.PartBounds(c.pairs[i][1])
	return Vec{X: max(lo.X, a.X), Y: max(lo.Y, a.Y), Z: max(lo.Z, a.Z)}, Vec{X: min(hi.X, b.X), Y: min(hi.Y, b.Y), Z: min(hi.Z, b.Z)}
}

func (c *common) PartPlanes(i int, site Vec, buf []solid.Plane) []solid.Plane {
	buf = c.Divided.PartPlanes(c.pairs[i][0], site, buf)
	return c.other.PartPlanes(c.pairs[i][1], site, buf)
}

func (c *common) WallsAt(p Vec, tol float64, buf []solid.Plane) []solid.Plane {
	buf = c.Divided.WallsAt(p, tol, buf)
	return c.other.WallsAt(p, tol, buf)
}

func (c *common) Corners() []Vec { return append(c.Divided.Corners(), c.other.Corners()...) }

func (c *common) Planes() []solid.Plane { return nil }
