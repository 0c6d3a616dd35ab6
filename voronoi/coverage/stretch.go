package coverage

import (
	"cmp"
	"context"
	"slices"

	"nearcell/voronoi"
	"nearcell/voronoi/solid"
)

// With stretched distances the landscape is that of the stretched space: its peaks are
// looked for there, among the stretched sites in the stretched solid, and brought back.
// What is told of them is true again: the true distance to the site that is truly
// nearest, so that no site lies within the radius about the place.

// stretchedGaps are the gaps of a diagram with stretched distances.
func stretchedGaps(ctx context.Context, d *voronoi.Diagram, sites []Vec, o Options) ([]Gap, error) {
	plain, err := newSearch(d, sites, o)
	if err != nil {
		return nil, err
	}
	factors := d.Stretch()
	moved := make([]Vec, 0, plain.tree.Len())
	for i := range plain.tree.Len() {
		moved = append(moved, times(plain.tree.Point(int32(i)), factors))
	}
	var options voronoi.Options
	if body := d.Solid(); body != nil {
		if options.Solid, err = solid.Stretch(body, factors); err != nil {
			return nil, err
		}
		// Which sites take part is decided already.
		lo, hi := options.Solid.Bounds()
		options.Tolerance = 4 * (largest(lo) + largest(hi))
		for _, p := range moved {
			options.Tolerance = max(options.Tolerance, 4*largest(p))
		}
	}
	inner := o
	if o.Within != nil {
		part, err := solid.Stretch(o.Within, factors)
		if err != nil {
			return nil, err
		}
		inner.Within = part
	}
	options.Threads = o.Threads
	if len(moved) == 0 {
		return nil, nil
	}
	in, err := voronoi.New(moved, options)
	if err != nil {
		return nil, err
	}
	found, err := Gaps(ctx, in, moved, inner)
	if err != nil {
		return nil, err
	}
	b := ball{tree: plain.tree}
	for i := range found {
		plain.bringBack(&found[i], factors, &b)
	}
	slices.SortStableFunc(found, func(a, b Gap) int { return cmp.Compare(b.Radius, a.Radius) })
	return found, nil
}

// bringBack turns a gap of the stretched space into one of the true.
func (s *search) bringBack(g *Gap, factors Vec, b *ball) {
	g.At = Vec{X: g.At.X / factors.X, Y: g.At.Y / factors.Y, Z: g.At.Z / factors.Z}
	nearest, _ := s.tree.Nearest(g.At)
	g.Radius = length(sub(s.tree.Point(nearest), g.At))
	b.list(g.At, float64(g.Radius*(1+equal))+s.grain)
	for k, i := range b.in {
		if k == 0 || s.of[i] < g.Site {
			g.Site = s.of[i]
		}
	}
}

func times(p, k Vec) Vec {
	return Vec{X: float64(p.X * k.X), Y: float64(p.Y * k.Y), Z: float64(p.Z * k.Z)}
}
