package relation

import "strings"

// Space is the volume of the solid, or of the zones together, that one partition
// divides, and how messages call it; 0 where nothing closes the cells.
func (b *Bound) Space() (volume float64, name string) {
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
