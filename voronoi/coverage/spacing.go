package coverage

import (
	"context"
	"math"

	"nearcell/voronoi"
	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// Spread tells how a solid lies about its sites.
type Spread struct {
	Volume float64 // of the solid, as the sum of its cells
	// MeanSquare is the mean over the solid of the squared distance to the nearest site.
	MeanSquare float64
	Beyond     []float64 // for each distance, the volume farther than it from every site
}

// Spacing measures how far the solid of a diagram lies from its sites. across and up are
// the half axes of the ellipsoid that stands for a ball: for a distance r, what lies outside all
// ellipsoids that reach r across and r·up/across up counts as beyond it. 0: balls.
// MeanSquare is of true distances all the same.
//
// With Options.Within it is the part that counts. With stretched distances a place belongs to
// the site that is nearest by these, and its distance from that is the true one; ellipsoids need
// plain distances.
//
// The shares of balls in cells are exact but for rounding. It needs a solid or a part. The error is
// ErrNoSolid, ErrStretched, an *[UndividedError], a *solid.StretchError, or that of ctx.
func Spacing(ctx context.Context, d *voronoi.Diagram, distances []float64, across, up float64, o Options) (*Spread, error) {
	if d.Solid() == nil && o.Within == nil {
		return nil, ErrNoSolid
	}
	s, err := spread(ctx, d, distances, o)
	if err != nil || !(across > 0) || across == up || len(distances) == 0 {
		return s, err
	}
	if voronoi.IsStretch(d.Stretch()) {
		return nil, ErrStretched
	}
	moved, inner, err := lifted(d, across/up, o)
	if err != nil {
		return nil, err
	}
	in, err := spread(ctx, moved, distances, inner)
	if err != nil {
		return nil, err
	}
	s.Beyond = in.Beyond
	for i := range s.Beyond {
		s.Beyond[i] /= across / up
	}
	return s, nil
}

// lifted is the diagram of the sites in the solid, with heights multiplied; and the options
// for it.
func lifted(d *voronoi.Diagram, factor float64, o Options) (*voronoi.Diagram, Options, error) {
	var sites []Vec
	for _, i := range distinct(d) {
		sites = append(sites, d.Place(i))
	}
	in, _, inner, err := moved(d, sites, Vec{X: 1, Y: 1, Z: factor}, o)
	return in, inner, err
}

// distinct lists the sites that have a cell of their own, ascending.
func distinct(d *voronoi.Diagram) []int32 {
	facts := d.Facts()
	skip := make([]bool, d.Len())
	for _, g := range facts.Groups {
		for _, i := range g.Members {
			skip[i] = i != g.Representative
		}
	}
	for _, i := range facts.Outside {
		skip[i] = true
	}
	list := make([]int32, 0, facts.Distinct)
	for i, out := range skip {
		if !out {
			list = append(list, int32(i))
		}
	}
	return list
}

// spread adds up the cells, in the order of their sites.
func spread(ctx context.Context, d *voronoi.Diagram, distances []float64, o Options) (*Spread, error) {
	body := d.Solid()
	if o.Within != nil {
		body = o.Within
		if _, ok := body.(solid.Faceted); !ok && d.Solid() != nil {
			common, err := within(d.Solid(), body)
			if err != nil {
				return nil, err
			}
			body = common
		}
	}
	if _, err := newCarver(body); err != nil {
		return nil, err
	}
	lo, hi := body.Bounds()
	sites := distinct(d)
	width := 2 + len(distances)
	found := make([]float64, width*len(sites))
	type scratch struct {
		cell  polyhedron.Cell
		carve *carver
	}
	err := forCells(ctx, len(sites), o, func() *scratch {
		c, _ := newCarver(body)
		return &scratch{carve: c}
	}, func(w *scratch, i int) error {
		p := d.Place(sites[i])
		if err := d.Insert(p, &w.cell); err != nil || w.cell.Empty() {
			return err
		}
		if o.Within != nil && !boxed(&w.cell, sub(lo, p), sub(hi, p)) {
			return nil
		}
		sums := make([]voronoi.Sum, width)
		far := w.cell.Farthest()
		w.carve.each(&w.cell, p, func(piece *polyhedron.Cell, sign float64) {
			m := piece.Moments()
			sums[0].Add(sign * m.Volume)
			sums[1].Add(sign * (m.Second[0] + m.Second[1] + m.Second[2]))
			for k, r := range distances {
				if far > r {
					sums[2+k].Add(sign * (m.Volume - inBall(piece, r)))
				}
			}
		})
		for k := range sums {
			found[i*width+k] = sums[k].Value()
		}
		return nil
	})
	if err != nil {
		return nil, err
	}
	sums := make([]voronoi.Sum, width)
	for i := range found {
		sums[i%width].Add(found[i])
	}
	s := &Spread{Volume: sums[0].Value(), Beyond: make([]float64, len(distances))}
	if s.Volume > 0 {
		s.MeanSquare = sums[1].Value() / s.Volume
	}
	for k := range distances {
		x := sums[2+k].Value()
		if x < 1e-13*s.Volume { // what rounding leaves of nothing
			x = 0
		}
		s.Beyond[k] = math.Min(x, s.Volume)
	}
	return s, nil
}

// boxed cuts a cell by a box and tells whether anything is left: parts are small, and open
// cells are not.
func boxed(c *polyhedron.Cell, lo, hi Vec) bool {
	w := polyhedron.Wall(0)
	return c.Clip(Vec{X: 1}, hi.X, w) != polyhedron.Empty && c.Clip(Vec{X: -1}, -lo.X, w) != polyhedron.Empty &&
		c.Clip(Vec{Y: 1}, hi.Y, w) != polyhedron.Empty && c.Clip(Vec{Y: -1}, -lo.Y, w) != polyhedron.Empty &&
		c.Clip(Vec{Z: 1}, hi.Z, w) != polyhedron.Empty && c.Clip(Vec{Z: -1}, -lo.Z, w) != polyhedron.Empty
}
