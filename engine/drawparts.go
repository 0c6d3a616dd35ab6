package engine

import (
	"context"
	"errors"
	"slices"

	"gonum.org/v1/gonum/spatial/r3"

	"nearcell/engine/draw"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
	"nearcell/voronoi"
	"nearcell/voronoi/section"
	"nearcell/voronoi/solid"
)

// bindParts finds the parts of MEASURED IN by binding the relation with it; the rows of
// the picture come from one without it, a row for each site.
func (s *Session) bindParts(m *sectionMap, names []lang.Name) error {
	counted := *m.plain
	counted.Clauses = append(slices.Clone(m.plain.Clauses), m.measured)
	node, err := s.prepare(m.st, selecting(m.t, &lang.RelationSource{At: m.t.Relation.At, Relation: &counted}, names...))
	if err != nil {
		return err
	}
	b := boundIn(node)
	if b == nil {
		return problem.New("failed", m.st.at(m.t), "the plan of a section has no partition")
	}
	m.parts = b.Clauses.Measured
	return nil
}

// partSolids are the solids of the parts.
func (m *sectionMap) partSolids() []solid.Solid {
	var list []solid.Solid
	for _, r := range m.parts {
		list = append(list, r.Solid)
	}
	return list
}

// whole cuts a solid that one site has for itself: what the plane has of the solid, and
// of the parts inside it.
func (m *sectionMap) whole(ctx context.Context, region relation.Region, parts []solid.Solid) (*section.Section, error) {
	lo, hi := region.Solid.Bounds()
	c := m.bound.Clauses
	d, err := voronoi.New([]voronoi.Vec{r3.Scale(0.5, r3.Add(lo, hi))}, voronoi.Options{Solid: region.Solid, Tolerance: r3.Norm(r3.Sub(hi, lo)), Stretch: c.Stretch})
	if err != nil {
		return nil, err
	}
	cut, err := section.Cut(ctx, d, m.plane.Plane, nil, section.Options{Outlines: true, Within: parts})
	return cut, m.cutProblem(err, region)
}

// cutProblem tells of a solid that no plane can cut.
func (m *sectionMap) cutProblem(err error, region relation.Region) error {
	var bare *section.NoSurfaceError
	if errors.As(err, &bare) {
		return problem.New("no-value", m.plane.at, "the solid %s gives no surface that a plane could cut", region.Name)
	}
	return err
}

// outlineParts gives a panel the outlines of the parts inside a solid, and tells whether they
// overlap there.
func (m *sectionMap) outlineParts(ctx context.Context, p *draw.Panel, region relation.Region) error {
	solids := m.partSolids()
	cut, err := m.whole(ctx, region, solids)
	if err != nil {
		return err
	}
	if p.Within == nil {
		p.Within = make([][]draw.Polygon, len(m.parts))
	}
	for _, piece := range cut.Pieces {
		for _, polygon := range piece.Polygons {
			p.Within[piece.Part] = append(p.Within[piece.Part], m.flatten(polygon))
		}
	}
	for i, one := range solids {
		var near []solid.Solid
		for _, other := range solids[:i] {
			if boxesMeet(one, other) {
				near = append(near, other)
			}
		}
		if len(near) == 0 || p.Overlap {
			continue
		}
		if cut, err = m.whole(ctx, relation.Region{Name: m.parts[i].Name, Solid: one}, near); err != nil {
			return err
		}
		for _, piece := range cut.Pieces {
			p.Overlap = p.Overlap || piece.Area > 1e-9*cut.Area
		}
	}
	return nil
}

// boxesMeet tells whether the boxes about two solids share space.
func boxesMeet(a, b solid.Solid) bool {
	alo, ahi := a.Bounds()
	blo, bhi := b.Bounds()
	return alo.X < bhi.X && blo.X < ahi.X && alo.Y < bhi.Y && blo.Y < ahi.Y && alo.Z < bhi.Z && blo.Z < ahi.Z
}

// emptyZone is a zone without sites: it is part of the section, and nothing is known of it.
func (m *sectionMap) emptyZone(ctx context.Context, p *draw.Panel, region relation.Region) error {
	parts := m.partSolids()
	cut, err := m.whole(ctx, region, parts)
	if err != nil {
		return err
	}
	for _, w := range cut.Space {
		p.Walls = append(p.Walls, m.flatten(w))
	}
	for _, piece := range cut.Pieces {
		for _, polygon := range piece.Polygons {
			p.Empty = append(p.Empty, m.flatten(polygon))
		}
		p.Parts = append(p.Parts, draw.Part{Missing: true, Area: piece.Area, In: max(0, int(piece.Part))})
	}
	return nil
}

// planeNotes say where the plane lies in walls or in faces between cells.
func (s *Session) planeNotes(m *sectionMap, cut *section.Section, region relation.Region) {
	say := func(format string, args ...any) {
		if text := pictureSentence(format, args...); !slices.Contains(m.out.Notes, text) {
			s.noted(m.st, &m.out.Notes, format, args...)
		}
	}
	if cut.InFaces {
		say("the plane %s lies in faces between cells: what it cuts there counts to the cell above", m.plane.where)
	}
	if cut.InWalls {
		say("the plane %s lies in walls of %s: it is seen from above, and from below where the solid ends there", m.plane.where, region.Name)
	}
}
