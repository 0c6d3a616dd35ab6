package polyhedron

// Relabel replaces every label i >= 0 by to[i]; walls keep theirs.
func (c *Cell) Relabel(to []int32) {
	for i := range c.cuts {
		if l := c.cuts[i].label; l >= 0 {
			c.cuts[i].label = to[l]
		}
	}
}
