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
	if plain.tree.Len() == 0 {
		return nil, nil
	}
	in, sitesIn, inner, err := moved(d, plain.places(), factors, o)
	if err != nil {
		return nil, err
	}
	found, err := Gaps(ctx, in, sitesIn, inner)
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

// places are those of the sites that take part, each once.
func (s *search) places() []Vec {
	list := make([]Vec, s.tree.Len())
	for i := range list {
		list[i] = s.tree.Point(int32(i))
	}
	return list
}

// moved is the diagram of sites in the solid, with all coordinates multiplied, by plain
// distances; its sites, and the options for it.
func moved(d *voronoi.Diagram, sites []Vec, factors Vec, o Options) (in *voronoi.Diagram, at []Vec, inner Options, err error) {
	inner = o
	options := voronoi.Options{Threads: o.Threads}
	for _, p := range sites {
		at = append(at, times(p, factors))
	}
	if body := d.Solid(); body != nil {
		if options.Solid, err = solid.Stretch(body, factors); err != nil {
			return nil, nil, o, err
		}
		// Which sites take part is decided already.
		lo, hi := options.Solid.Bounds()
		options.Tolerance = 4 * (largest(lo) + largest(hi))
		for _, p := range at {
			options.Tolerance = max(options.Tolerance, 4*largest(p))
		}
	}
	if o.Within != nil {
		if inner.Within, err = solid.Stretch(o.Within, factors); err != nil {
			return nil, nil, o, err
		}
	}
	in, err = voronoi.New(at, options)
	return in, at, inner, err
}

// stretchedPlaces are the places of a diagram with stretched distances. They are chosen by
// these; radii are true: of each place to the truly nearest site, and of the place that is
// then farthest by stretched distances.
func stretchedPlaces(ctx context.Context, d *voronoi.Diagram, sites []Vec, n int, o PlaceOptions) ([]Placement, error) {
	plain, err := newSearch(d, sites, o.Options)
	if err != nil {
		return nil, err
	}
	if o.Clearance > 0 && o.Among == nil {
		return nil, ErrStretched
	}
	factors := d.Stretch()
	if plain.tree.Len() == 0 {
		return nil, nil
	}
	in, at, inner, err := moved(d, plain.places(), factors, o.Options)
	if err != nil {
		return nil, err
	}
	p := PlaceOptions{Options: inner}
	if o.Among != nil {
		body := d.Solid()
		if o.Within != nil {
			body = o.Within
		}
		p.Among = []Vec{}
		var index []int32
		for i, q := range o.Among {
			if Allowed(body, q, o.Clearance) {
				p.Among, index = append(p.Among, times(q, factors)), append(index, int32(i))
			}
		}
		placed, err := Places(ctx, in, at, n, p)
		for i := range placed {
			placed[i].Index = index[placed[i].Index]
			placed[i].At = o.Among[placed[i].Index]
		}
		return plain.trueRadii(placed, factors), err
	}
	placed, err := Places(ctx, in, at, n, p)
	for i := range placed {
		placed[i].At = divided(placed[i].At, factors)
	}
	return plain.trueRadii(placed, factors), err
}

// trueRadii makes the radii of placements true.
func (s *search) trueRadii(placed []Placement, factors Vec) []Placement {
	for i := range placed {
		p := &placed[i]
		radius := func(at Vec, before []Placement) float64 {
			k, _ := s.tree.Nearest(at)
			r := length(sub(s.tree.Point(k), at))
			for _, q := range before {
				r = min(r, length(sub(q.At, at)))
			}
			return r
		}
		p.Radius = radius(p.At, placed[:i])
		if p.After > 0 {
			p.Left = divided(p.Left, factors)
			p.After = radius(p.Left, placed[:i+1])
		}
	}
	return placed
}

func divided(p, k Vec) Vec { return Vec{X: p.X / k.X, Y: p.Y / k.Y, Z: p.Z / k.Z} }

// bringBack turns a gap of the stretched space into one of the true.
func (s *search) bringBack(g *Gap, factors Vec, b *ball) {
	g.At = divided(g.At, factors)
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
