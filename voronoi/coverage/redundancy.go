package coverage

import (
	"context"
	"errors"
	"math"
	"slices"

	"nearcell/voronoi"
	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// ErrNoSolid: what is asked for has no end without a solid.
var ErrNoSolid = errors.New("coverage: a solid is needed")

// Taker is a site that takes part of the cell of one that goes.
type Taker struct {
	Site   int32
	Volume float64
}

// Loss is what the sites are without one of them.
type Loss struct {
	Site   int32   // the representative of its group
	Volume float64 // of its cell
	// Takers share its cell among them: the others that are nearest there, by number.
	Takers []Taker
	// Radius is the covering radius without it; +Inf if it is the only one.
	Radius float64
}

// Redundancy tells for each site what becomes of its cell if it goes: the cells of the others keep what
// they have, and its own is divided among its neighbours (no diagram is built again).
// With Options.Within all is of that part. With stretched distances sites are nearest by these, and
// radii are true. It needs a solid or a part. The error is ErrNoSolid, one of the solid, or that
// of ctx.
func Redundancy(ctx context.Context, d *voronoi.Diagram, o Options) ([]Loss, error) {
	body := d.Solid()
	if o.Within != nil {
		body = o.Within
	}
	if body == nil {
		return nil, ErrNoSolid
	}
	sites := distinct(d)
	farthest, err := reaches(ctx, d, o)
	if err != nil {
		return nil, err
	}
	// The largest of the others is the largest, or the second for the largest itself.
	first, second := int32(-1), 0.0
	for _, i := range sites {
		switch r := farthest[i]; {
		case first < 0 || r > farthest[first]:
			if first >= 0 {
				second = farthest[first]
			}
			first = i
		case r > second:
			second = r
		}
	}
	losses := make([]Loss, len(sites))
	k := d.Stretch()
	metric := times(k, k)
	convex := o.Within == nil && body.Planes() != nil
	err = forCells(ctx, len(sites), o, func() *divider { return &divider{d: d, body: body, convex: convex, metric: metric} }, func(w *divider, i int) error {
		l := &losses[i]
		l.Site = sites[i]
		if len(sites) == 1 {
			l.Volume, l.Radius = body.Volume(), math.Inf(1)
			return nil
		}
		if l.Radius = second; sites[i] != first {
			l.Radius = farthest[first]
		}
		return w.divide(l)
	})
	if err != nil {
		return nil, err
	}
	return losses, nil
}

// reaches are the distances from the sites to the farthest points of what counts of their
// cells.
func reaches(ctx context.Context, d *voronoi.Diagram, o Options) ([]float64, error) {
	if o.Within == nil {
		cells, err := d.Measure(ctx, voronoi.Farthest, nil)
		if err != nil {
			return nil, err
		}
		return cells.Farthest, nil
	}
	in, err := d.MeasureIn(ctx, voronoi.Farthest|voronoi.Volume, nil, []solid.Solid{o.Within})
	if err != nil {
		return nil, err
	}
	far := make([]float64, d.Len())
	for s, list := range in {
		if len(list) > 0 {
			far[s] = list[0].Farthest
		}
	}
	return far, nil
}

// divider shares cells out. It is the scratch of one goroutine.
type divider struct {
	d           *voronoi.Diagram
	body        solid.Solid
	convex      bool // the cells are cut by the body already
	metric      Vec
	cell, piece polyhedron.Cell
	near        []int32
	work        solid.Work
	measures    solid.Measures
}

func (w *divider) divide(l *Loss) error {
	p := w.d.Place(l.Site)
	if err := w.d.Insert(p, &w.cell); err != nil || w.cell.Empty() {
		return err
	}
	w.near = w.near[:0]
	for i := range w.cell.NumFaces() {
		if label, _ := w.cell.Face(i); label >= 0 && !slices.Contains(w.near, label) {
			w.near = append(w.near, label)
		}
	}
	slices.Sort(w.near)
	if lo, hi := w.body.Bounds(); !w.convex && !boxed(&w.cell, sub(lo, p), sub(hi, p)) {
		return nil
	}
	var sum voronoi.Sum
	for _, j := range w.near {
		volume, far, err := w.share(p, j)
		if err != nil {
			return err
		}
		if !(volume > 0) {
			continue
		}
		sum.Add(volume)
		l.Takers = append(l.Takers, Taker{j, volume})
		l.Radius = max(l.Radius, far)
	}
	l.Volume = sum.Value()
	return nil
}

// share is what of the cell at p is nearest to j among its neighbours, seen from j.
func (w *divider) share(p Vec, j int32) (volume, far float64, err error) {
	q := w.d.Place(j)
	by := sub(q, p)
	lo, hi := w.cell.Bounds()
	c := &w.piece
	c.SetBox(sub(lo, by), sub(hi, by), [6]int32{-1, -1, -1, -1, -1, -1})
	for i := range w.cell.NumFaces() {
		n, d := w.cell.FacePlane(i)
		if label, _ := w.cell.Face(i); c.Clip(n, d-dot(n, by), label) == polyhedron.Empty {
			return 0, 0, nil
		}
	}
	for _, k := range w.near {
		if k == j {
			continue
		}
		by := sub(w.d.Place(k), q)
		if w.metric == (Vec{X: 1, Y: 1, Z: 1}) {
			if c.Bisect(by, Vec{}, k) == polyhedron.Empty {
				return 0, 0, nil
			}
		} else if n := times(w.metric, by); c.Clip(n, dot(n, by)/2, k) == polyhedron.Empty {
			return 0, 0, nil
		}
	}
	if w.convex {
		return c.Volume(), c.Farthest(), nil
	}
	if err := w.body.Measure(c, q, solid.WantVolume|solid.WantFarthest, &w.work, &w.measures); err != nil {
		return 0, 0, err
	}
	if w.measures.Empty {
		return 0, 0, nil
	}
	return w.measures.Volume, w.measures.Farthest, nil
}
