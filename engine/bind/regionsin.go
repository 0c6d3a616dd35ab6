package bind

import (
	"crypto/sha256"
	"errors"

	"nearcell/engine/relation"
	"nearcell/voronoi/solid"
	"nearcell/voronoi/solid/mesh"
)

// sharedParts makes what each part of MEASURED IN shares with each space that sites divide.
// A part with convex pieces cuts cells itself; of any other, or where a relation looks for
// places in a solid without such pieces, what part and space share is arranged exactly,
// once for all cells and partitions; so it is where a relation asks for it (Definition.Regions).
func (b *binder) sharedParts(rel *relation.Bound, list []relation.Region) error {
	spaces := []solid.Solid{rel.Clauses.Solid}
	if zones := rel.Clauses.Zones; len(zones) > 0 {
		spaces = spaces[:0]
		for _, z := range zones {
			spaces = append(spaces, z.Solid)
		}
	}
	rel.Clauses.Shared = nil
	for _, space := range spaces {
		shared := make([]solid.Solid, len(list))
		for i, p := range list {
			_, divided := p.Solid.(solid.Divided)
			divided = divided && !rel.Def.Regions
			if _, ok := space.(solid.Divided); space != nil && !ok && rel.Def.Places {
				divided = false
			}
			if divided {
				shared[i] = p.Solid
				continue
			}
			r, err := b.region(space, p.Solid)
			if err != nil {
				return err
			}
			if r != nil {
				shared[i] = r
			}
		}
		rel.Clauses.Shared = append(rel.Clauses.Shared, shared)
	}
	return nil
}

// region is what a part shares with a solid (nil: all of space); nil if nothing.
func (b *binder) region(space, part solid.Solid) (solid.Solid, error) {
	h := sha256.New()
	h.Write([]byte("region"))
	if space != nil {
		k := space.Key()
		h.Write(k[:])
	}
	k := part.Key()
	h.Write(k[:])
	var key [32]byte
	h.Sum(key[:0])
	return cached(b.env.Solids, func() *map[[32]byte]solid.Solid { return &b.env.Solids.made }, key, func() (solid.Solid, error) {
		r, err := mesh.NewRegion(space, part)
		var fault *mesh.Error
		if errors.As(err, &fault) && fault.Fault == mesh.NothingLeft {
			return nil, nil
		}
		if err != nil {
			return nil, err
		}
		return r, nil
	})
}

// shared is the volume that two solids share: by convex pieces of one of them, or, where
// neither has any, by arranging their surfaces.
func (b *binder) shared(p, q solid.Solid) (float64, error) {
	volume, known, err := solid.CommonVolume(p, q)
	if err != nil || known {
		return volume, err
	}
	r, err := b.region(p, q)
	if err != nil || r == nil {
		return 0, err
	}
	return r.Volume(), nil
}
