package relation

import (
	"context"
	"errors"

	"nearcell/engine/diagram"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/voronoi"
	"nearcell/voronoi/coverage"
	"nearcell/voronoi/section"
	"nearcell/voronoi/solid"
)

// Covering are the clauses of relations that say how the sites lie in their space: where to
// cut, how far is far, where further sites may stand.
type Covering struct {
	Plane     section.Plane // of SECTION
	PlaneText string        // as in notes: "z = 1.1"

	Distances  []float64 // of DISTANCES, as given
	Across, Up float64   // half axes of an ellipsoid; 0: a distance is the same everywhere

	Clearance float64
	Among     bool // the places to choose from are Beside[0]
}

// solidKnown refuses what the geometry of a solid does not know.
func (s *sites) solidKnown(err error, p *Part) error {
	var undivided *coverage.UndividedError
	var bare *section.NoSurfaceError
	var rigid *solid.StretchError
	switch {
	case errors.As(err, &undivided), errors.As(err, &bare):
		return problem.New("failed", s.b.Place, "%s cannot be told in %s: it knows neither parts nor a surface", s.b.Def.Noun, s.b.Clauses.SolidName).
			WithHint("a BOX, a PRISM or a MESH does")
	case errors.Is(err, coverage.ErrStretched):
		return problem.New("stretched", s.b.Place, "%s by stretched distances takes no ellipsoids and keeps no clearance", s.b.Def.Noun).
			WithHint("DISTANCES without ACROSS; AMONG for places that are clear of the walls")
	case errors.As(err, &rigid):
		return problem.New("stretched", s.b.Place, "ACROSS … UP … stretches %s, which is a %s and cannot be stretched yet", s.b.Clauses.SolidName, rigid.Kind).
			WithHint("DISTANCES without ACROSS")
	}
	return s.refused(err, p)
}

// needsSolid refuses what has no end without a solid.
func (b *Bound) needsSolid(what string) error {
	if b.Closed() {
		return nil
	}
	return problem.New("no-solid", b.Place, "%s needs a solid: the space around %s has no end", what, b.Name).
		WithHint("WITHIN a solid says where it ends")
}

// far adds up what of the space lies beyond DISTANCES, over the partitions.
type far struct {
	volume float64
	beyond []float64
	parts  int
}

// lookBeyond measures for the cells of a part what lies beyond DISTANCES, where volumes are
// asked for: it is told beside the weighted answer.
func (c *cellRows) lookBeyond(ctx context.Context, h *diagram.Handle, p *Part) error {
	k := &c.b.Clauses
	if len(k.Distances) == 0 || c.want&voronoi.Volume == 0 || p.Solid == nil && !c.b.measuredIn() {
		return nil
	}
	c.far.parts++
	if c.far.beyond == nil {
		c.far.beyond = make([]float64, len(k.Distances))
	}
	return c.b.eachRegion(p, func(_ int32, within solid.Solid) error {
		found, err := h.Spacing(ctx, k.Distances, k.Across, k.Up, coverage.Options{Threads: c.env.Threads, Progress: c.progress(), Within: within})
		if err != nil {
			return c.solidKnown(err, p)
		}
		c.far.volume += found.Volume
		for i, x := range found.Beyond {
			c.far.beyond[i] += x
		}
		return nil
	})
}

// tell says for each of DISTANCES how much of the space is farther from every site.
func (f *far) tell(s *sites, err error) {
	c := &s.b.Clauses
	if err != nil || len(c.Distances) == 0 {
		return
	}
	if f.parts == 0 {
		if !s.b.Closed() && len(s.parts) > 0 {
			s.env.Notes.Add(note.Note, note.Weights, "without a solid no share of the space around %s can lie beyond DISTANCES", s.b.Name)
		}
		return
	}
	unit := c.Unit.Pow(3).String()
	if unit != "" {
		unit = " " + unit
	}
	_, of := s.b.Space()
	if f.parts > 1 {
		of = count(f.parts, "partition") + " of " + of
	}
	for i, d := range c.Distances {
		reach := s.length(d)
		if c.Across > 0 {
			reach += " across and " + s.length(d*(c.Up/c.Across)) + " up"
		}
		s.env.Notes.Add(note.Note, note.Weights, "of %.4g%s of %s, %.4g (%s) lies farther than %s from every site", f.volume, unit, of, f.beyond[i],
			percent(f.beyond[i]/f.volume), reach)
	}
}
