package solid

import "nearcell/voronoi/polyhedron"

// CommonVolume is the volume of the space that two solids share, and whether it can be
// told: at least one of them must be convex or know convex parts of itself.
func CommonVolume(a, b Solid) (volume float64, ok bool, err error) {
	alo, ahi := a.Bounds()
	blo, bhi := b.Bounds()
	if alo.X >= bhi.X || blo.X >= ahi.X || alo.Y >= bhi.Y || blo.Y >= ahi.Y || alo.Z >= bhi.Z || blo.Z >= ahi.Z {
		return 0, true, nil
	}
	if a.Planes() == nil && (b.Planes() != nil || parts(b) > 0 && parts(a) == 0) {
		a, b = b, a
	}
	n := parts(a)
	if n == 0 {
		return 0, false, nil
	}
	var c polyhedron.Cell
	var w Work
	var m Measures
	for i := range n {
		site := partOf(a, i, &c)
		if c.Empty() {
			continue
		}
		if b.Planes() != nil {
			b.ClipConvex(&c, site)
			volume += max(0, c.Volume())
			continue
		}
		clipToBox(&c, sub3(blo, site), sub3(bhi, site))
		if c.Empty() {
			continue
		}
		if err := b.Measure(&c, site, WantVolume, &w, &m); err != nil {
			return 0, true, err
		}
		volume += max(0, m.Volume)
	}
	return volume, true, nil
}

// parts is the number of convex parts that a solid knows of itself, 0: none.
func parts(s Solid) int {
	if s.Planes() != nil {
		return 1
	}
	if d, ok := s.(Divided); ok {
		return d.NumParts()
	}
	return 0
}

// partOf makes c convex part i of a solid, local to a place in its middle.
func partOf(s Solid, i int, c *polyhedron.Cell) (site Vec) {
	lo, hi := s.Bounds()
	if s.Planes() == nil {
		lo, hi = s.(Divided).PartBounds(i)
	}
	site = Vec{X: lo.X/2 + hi.X/2, Y: lo.Y/2 + hi.Y/2, Z: lo.Z/2 + hi.Z/2}
	var labels [6]int32
	for k := range labels {
		labels[k] = polyhedron.Wall(int32(k))
	}
	c.SetBox(sub3(lo, site), sub3(hi, site), labels)
	if s.Planes() != nil {
		s.ClipConvex(c, site)
		return site
	}
	for _, p := range s.(Divided).PartPlanes(i, site, nil) {
		if c.Empty() {
			break
		}
		c.Clip(p.N, p.D, polyhedron.Wall(0))
	}
	return site
}

// clipToBox cuts c by a box in the same coordinates.
func clipToBox(c *polyhedron.Cell, lo, hi Vec) {
	for _, p := range [6]Plane{{N: Vec{X: -1}, D: -lo.X}, {N: Vec{X: 1}, D: hi.X}, {N: Vec{Y: -1}, D: -lo.Y},
		{N: Vec{Y: 1}, D: hi.Y}, {N: Vec{Z: -1}, D: -lo.Z}, {N: Vec{Z: 1}, D: hi.Z}} {
		if c.Empty() {
			return
		}
		c.Clip(p.N, p.D, polyhedron.Wall(0))
	}
}
