package coverage

import (
	"context"
	"errors"
	"fmt"

	"nearcell/voronoi"
	"nearcell/voronoi/index"
	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// Vec is a point or a vector in space.
type Vec = polyhedron.Vec

// Place tells on what part of the solid a gap lies.
type Place int8

const (
	Inside Place = iota // off every wall, or there is no solid
	Wall                // on one plane of walls
	Edge                // where two planes of walls meet
	Corner              // where three or more meet
)

func (p Place) String() string {
	switch p {
	case Wall:
		return "wall"
	case Edge:
		return "edge"
	case Corner:
		return "corner"
	}
	return "inside"
}

// Gap is a place that is farther from every site than all places around it: the
// centre of a sphere that holds no site and cannot be made larger by moving it a
// little within the solid.
type Gap struct {
	At     Vec     // in the coordinates of the sites
	Radius float64 // distance from At to the nearest site
	Site   int32   // the nearest site; of several as near, the one with the lowest number
	Place  Place
}

// Options say how gaps are looked for. The zero value is good.
type Options struct {
	// Threads is how many goroutines look; 0: as many as there are processors. The
	// gaps are the same for any number.
	Threads int
	// Progress is told now and then how many cells are done, from one goroutine at
	// a time. It may be nil.
	Progress func(done, total int)
	// Within has the gaps looked for in this part of the solid alone: places of it that
	// are farther from every site than all around them in it. Nil: the whole solid. It is
	// a solid.Divided, as the diagram's own solid is then, or a solid.Faceted that lies in
	// that wholly, such as a mesh.Region.
	Within solid.Solid
}

var (
	// ErrSites: the sites are not those of the diagram.
	ErrSites = errors.New("coverage: the sites are not those of the diagram")
	// ErrStretched: what is asked for needs plain distances.
	ErrStretched = errors.New("coverage: distances are stretched")
)

// UndividedError is a solid that knows neither convex parts of itself nor its surface.
type UndividedError struct{ Kind string }

func (e *UndividedError) Error() string {
	return fmt.Sprintf("coverage: a solid of the kind %q has neither convex parts nor facets", e.Kind)
}

// Gaps finds all gaps of a diagram, by falling radius, equal ones by x, y, z. sites
// are those that the diagram was made of.
//
// With a solid these are all places of it that are local maxima of the distance to
// the nearest site, on walls, edges and corners too. Without one, they are the
// vertices of the diagram that lie strictly inside the hull of their nearest sites;
// beyond the hull of all sites the distance grows without end. The largest gap is the
// centre of the largest empty sphere with its centre in the solid (Toussaint 1983 in
// the plane).
//
// With stretched distances the places are the peaks of these; the radius is the true
// distance to the site that is truly nearest.
//
// The error is ErrSites, an *[UndividedError], or that of ctx.
func Gaps(ctx context.Context, d *voronoi.Diagram, sites []Vec, o Options) ([]Gap, error) {
	if voronoi.IsStretch(d.Stretch()) {
		return stretchedGaps(ctx, d, sites, o)
	}
	s, err := newSearch(d, sites, o)
	if err != nil {
		return nil, err
	}
	found, err := s.run(ctx, o)
	if err != nil {
		return nil, err
	}
	return merge(found), nil
}

// search is what the goroutines that look for gaps share.
type search struct {
	d       *voronoi.Diagram
	solid   solid.Divided // nil: none
	faceted solid.Faceted // or this one, known by its surface
	partial bool          // which is a part of the solid, or of all space
	convex  bool          // the diagram's cells are cut by the solid already
	corners []Vec         // of the solid

	tree  *index.Tree // of the distinct sites that take part
	of    []int32     // by number in the tree: the site
	sites []Vec

	// grain is far above the rounding of coordinates as large as the ones at hand,
	// far below everything that is measured.
	grain float64
}

func newSearch(d *voronoi.Diagram, sites []Vec, o Options) (*search, error) {
	if len(sites) != d.Len() {
		return nil, ErrSites
	}
	s := &search{d: d, sites: sites}
	switch body := d.Solid(); {
	case o.Within != nil:
		if part, ok := o.Within.(solid.Faceted); ok {
			s.faceted, s.partial, s.corners = part, true, part.Corners()
			break
		}
		part, err := within(body, o.Within)
		if err != nil {
			return nil, err
		}
		s.solid, s.corners = part, part.Corners()
	case body != nil:
		if divided, ok := body.(solid.Divided); ok {
			s.solid, s.convex, s.corners = divided, body.Planes() != nil, divided.Corners()
		} else if faceted, ok := body.(solid.Faceted); ok {
			s.faceted, s.corners = faceted, faceted.Corners()
		} else {
			return nil, &UndividedError{body.Facts().Kind}
		}
	}
	s.list()
	s.setGrain()
	return s, nil
}

// list makes the tree of one site of each place that takes part.
func (s *search) list() {
	f := s.d.Facts()
	skip := make([]bool, len(s.sites))
	for _, i := range f.Outside {
		skip[i] = true
	}
	for _, g := range f.Groups {
		for _, i := range g.Members {
			skip[i] = skip[i] || i != g.Representative
		}
	}
	places := make([]Vec, 0, f.Distinct)
	numbers := make([]int32, 0, f.Distinct)
	for i, p := range s.sites {
		if !skip[i] {
			places, numbers = append(places, p), append(numbers, int32(i))
		}
	}
	s.tree = index.New(places)
	s.of = make([]int32, len(places))
	for i := range s.of {
		s.of[i] = numbers[s.tree.Original(int32(i))]
	}
}

func (s *search) setGrain() {
	lo, hi := s.tree.Bounds()
	size := 0.0
	if s.tree.Len() > 0 {
		size = max(largest(lo), largest(hi))
	}
	if s.solid != nil {
		lo, hi = s.solid.Bounds()
		size = max(size, largest(lo), largest(hi))
	}
	if s.faceted != nil {
		lo, hi = s.faceted.Bounds()
		size = max(size, largest(lo), largest(hi))
	}
	s.grain = 0x1p-46 * size
}
