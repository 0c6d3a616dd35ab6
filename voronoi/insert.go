package voronoi

import "nearcell/voronoi/polyhedron"

// Insert makes c the cell that p would get if it were one more site, in
// coordinates local to p. The labels of its faces are sites (representatives of
// their groups), walls, or polyhedron.Open where it is unbounded. At the place of a
// site it is that site's own cell.
//
// In a convex solid the cell is cut by the solid; in any other it is cut by the
// solid's bounding box only, and Solid.Measure tells what of it lies inside. For a
// p outside the solid c can be empty. The cell is in true units, whatever the distances.
//
// It fails with *NotFiniteError (its site is then -1).
func (d *Diagram) Insert(p Vec, c *polyhedron.Cell) error {
	for axis, x := range [3]float64{p.X, p.Y, p.Z} {
		if !(x >= -1e150 && x <= 1e150) {
			return &NotFiniteError{-1, axis, x}
		}
	}
	b := d.builder()
	defer d.free(b)
	p = positive(p)
	local := d.local(p)
	self := int32(-1)
	if i, d2 := d.tree.Nearest(local); d2 == 0 && d.tree.Point(i) == local {
		self = i
	}
	b.build(c, local, p, self)
	c.Relabel(d.site)
	return nil
}
