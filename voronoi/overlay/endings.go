package overlay

import (
	"errors"

	"nearcell/voronoi"
	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
	"nearcell/voronoi/solid/mesh"
)

// endings says how the solids of the two diagrams end the pieces. Cells of a come cut by
// a's solid where that is convex, else by its bounding box.
type endings struct {
	convex  solid.Solid   // cuts the cells of a: b's convex solid; nil: none has to
	box     bool          // cut by the bounds lo, hi of b's solid, which is not convex
	lo, hi  Vec           //
	divided solid.Divided // the pieces are cut by its convex parts; nil: none has to
	rough   solid.Solid   // says what of a polyhedron lies inside; nil: all of it
	nothing bool          // the solids share none
}

// endingsOf finds out what has to be done about two solids.
func endingsOf(a, b solid.Solid) (endings, error) {
	var e endings
	if a.Key() == b.Key() {
		if a.Planes() == nil {
			e.rough = a
		}
		return e, nil
	}
	if b.Planes() != nil {
		e.convex = b
		if a.Planes() == nil {
			e.rough = a
		}
		return e, nil
	}
	e.box = true
	e.lo, e.hi = b.Bounds()
	e.rough = b
	if a.Planes() != nil {
		return e, nil
	}
	if d, ok := a.(solid.Divided); ok {
		e.divided = d
		return e, nil
	}
	if d, ok := b.(solid.Divided); ok {
		e.divided, e.rough = d, a
		return e, nil
	}
	// Two solids that are known by their surfaces: what they share is arranged exactly.
	r, err := mesh.NewRegion(a, b)
	var fault *mesh.Error
	switch {
	case err == nil:
		e.rough = r
	case errors.As(err, &fault) && fault.Fault == mesh.NothingLeft:
		e.nothing = true
	default:
		return e, errors.Join(ErrUndivided, err)
	}
	return e, nil
}

// Common is the volume that two solids share; known is false where their surfaces cannot be
// arranged.
func Common(a, b solid.Solid) (volume float64, known bool) {
	if v, known, err := solid.CommonVolume(a, b); known && err == nil {
		return v, true
	}
	r, err := mesh.NewRegion(a, b)
	var fault *mesh.Error
	if errors.As(err, &fault) && fault.Fault == mesh.NothingLeft {
		return 0, true
	}
	if err != nil {
		return 0, false
	}
	return r.Volume(), true
}

// enter cuts a cell of a by what of b's solid is convex: flooding it needs a convex space.
func (e *endings) enter(c *polyhedron.Cell, at Vec) {
	switch {
	case e.convex != nil:
		e.convex.ClipConvex(c, at)
	case e.box:
		lo, hi := sub(e.lo, at), sub(e.hi, at)
		for _, p := range [6]solid.Plane{{N: Vec{X: -1}, D: -lo.X}, {N: Vec{X: 1}, D: hi.X}, {N: Vec{Y: -1}, D: -lo.Y},
			{N: Vec{Y: 1}, D: hi.Y}, {N: Vec{Z: -1}, D: -lo.Z}, {N: Vec{Z: 1}, D: hi.Z}} {
			if c.Empty() {
				return
			}
			c.Clip(p.N, p.D, polyhedron.Wall(p.Wall))
		}
	}
}

// volume is that of what of c, which is local to at, lies in the solids.
func (w *work) volume(c *polyhedron.Cell, at Vec) (float64, error) {
	e := &w.x.ends
	if e.divided == nil {
		return w.inside(c, at)
	}
	var sum voronoi.Sum
	err := w.eachConvex(&w.chip, c, e.divided, at, func(c *polyhedron.Cell) error {
		v, err := w.inside(c, at)
		sum.Add(v)
		return err
	})
	return sum.Value(), err
}

// inside is the volume of what of c lies in the solid that is neither convex nor cut by
// its parts.
func (w *work) inside(c *polyhedron.Cell, at Vec) (float64, error) {
	if w.x.ends.rough == nil {
		return max(0, c.Volume()), nil
	}
	if err := w.x.ends.rough.Measure(c, at, solid.WantVolume, &w.solid, &w.out); err != nil {
		return 0, err
	}
	return max(0, w.out.Volume), nil
}
