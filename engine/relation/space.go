package relation

import "strings"

// Space is the volume of the solid, or of the zones together, that one partition
// divides, and how messages call it; 0 where nothing closes the cells. With MEASURED
// IN it is that of the parts in which measures count, whether or not they lie in the
// solid.
func (b *Bound) Space() (volume float64, name string) {
	if len(b.Clauses.Measured) > 0 {
		var names []string
		for _, m := range b.Clauses.Measured {
			volume += m.Solid.Volume()
			names = append(names, m.Name)
		}
		return volume, someOf(names)
	}
	if b.Clauses.Solid != nil {
		return b.Clauses.Solid.Volume(), b.Clauses.SolidName
	}
	var names []string
	for _, z := range b.Clauses.Zones {
		volume += z.Solid.Volume()
		names = append(names, z.Name)
	}
	return volume, strings.Join(names, " and ")
}
