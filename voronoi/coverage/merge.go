package coverage

import (
	"cmp"
	"slices"

	"nearcell/voronoi/index"
)

// mergeWithin is the distance, as a share of the radius, within which two gaps are
// one: several cells share each place, and rounded lattices have clusters of places.
const mergeWithin = 1e-4

// merge sorts the gaps and leaves out of each cluster all but the largest.
func merge(found []Gap) []Gap {
	slices.SortFunc(found, func(a, b Gap) int {
		return cmp.Or(cmp.Compare(b.Radius, a.Radius), cmp.Compare(a.At.X, b.At.X), cmp.Compare(a.At.Y, b.At.Y),
			cmp.Compare(a.At.Z, b.At.Z), cmp.Compare(a.Site, b.Site))
	})
	places := make([]Vec, len(found))
	for i := range found {
		places[i] = found[i].At
	}
	tree := index.New(places)
	dropped := make([]bool, len(found))
	var walk index.Iterator
	kept := found[:0]
	for i := range dropped {
		if dropped[i] {
			continue
		}
		g := found[i]
		reach := float64(mergeWithin * g.Radius)
		for walk.Start(tree, g.At); ; {
			n, ok := walk.Next()
			if !ok || n.Dist2 > float64(reach*reach) {
				break
			}
			dropped[tree.Original(n.Point)] = true
		}
		kept = append(kept, g)
	}
	return slices.Clip(kept)
}
