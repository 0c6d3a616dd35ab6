package bind

import (
	"math"
	"slices"

	"nearcell/catalog/column"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
	"nearcell/voronoi"
	"nearcell/voronoi/section"
)

// The clauses of SECTION, SPACING, PLACEMENTS and REDUNDANCY, and DISTANCES of CELLS.

// coveringClause binds one of them; ok is false for any other.
func (b *binder) coveringClause(rel *relation.Bound, c lang.Clause) (ok bool, err error) {
	switch c := c.(type) {
	case *lang.AtPlaneClause:
		if rel.Def.Noun != "SECTION" {
			return false, nil
		}
		return true, b.plane(rel, c)
	case *lang.AtPointsClause:
		if rel.Def.Noun != "SECTION" {
			return false, nil
		}
		return true, problem.New("clauses", b.at(c), "SECTION is cut by a plane, not by points").
			WithHint("AT z = 1.1, AT x = …, AT y = …, or THROUGH (x, y, z) NORMAL (nx, ny, nz)")
	case *lang.ThroughClause:
		return true, b.leaning(rel, c)
	case *lang.DistancesClause:
		for _, e := range c.Values {
			d, err := b.more(e, "a distance of DISTANCES")
			if err != nil {
				return true, err
			}
			if slices.Contains(rel.Clauses.Distances, d) {
				return true, problem.New("same-name", b.at(e), "DISTANCES names %s twice", column.FormatReal(d))
			}
			rel.Clauses.Distances = append(rel.Clauses.Distances, d)
		}
		return true, nil
	case *lang.AcrossClause:
		if rel.Clauses.Across, err = b.more(c.Across, "ACROSS"); err == nil {
			rel.Clauses.Up, err = b.more(c.Up, "UP")
		}
		return true, err
	case *lang.ClearanceClause:
		d, err := b.real(c.Value, "CLEARANCE")
		if err == nil && !(d >= 0 && !math.IsInf(d, 0)) {
			err = problem.New("clauses", b.at(c), "CLEARANCE is a length of 0 or more")
		}
		rel.Clauses.Clearance = d
		return true, err
	case *lang.AmongClause:
		return true, nil // bound with its rows
	case *lang.NumberClause:
		if rel.Def.Noun != "PLACEMENTS" {
			return false, nil
		}
		return true, b.howMany(rel, c)
	}
	return false, nil
}

// more is a number greater than 0.
func (b *binder) more(e lang.Expr, what string) (float64, error) {
	d, err := b.real(e, what)
	if err == nil && !(d > 0 && !math.IsInf(d, 0)) {
		err = problem.New("clauses", b.at(e), "%s is a length of more than 0", what)
	}
	return d, err
}

// plane is that of AT z = 1.1.
func (b *binder) plane(rel *relation.Bound, c *lang.AtPlaneClause) error {
	axis := slices.IndexFunc([]string{"x", "y", "z"}, c.Axis.Matches)
	if axis < 0 {
		return problem.New("clauses", b.at(&c.Axis), "a plane stands across x, y or z, not across '%s'", c.Axis.Text).
			WithHint("AT z = 1.1, or THROUGH (x, y, z) NORMAL (nx, ny, nz)")
	}
	at, err := b.finite(c.Value, "the place of the plane")
	if err != nil {
		return err
	}
	rel.Clauses.Plane = section.Across(axis, at)
	rel.Clauses.PlaneText = "xyz"[axis:axis+1] + " = " + column.FormatReal(at)
	return nil
}

func (b *binder) finite(e lang.Expr, what string) (float64, error) {
	x, err := b.real(e, what)
	if err == nil && !(math.Abs(x) <= 1e150) {
		err = problem.New("clauses", b.at(e), "%s must be a finite number", what)
	}
	return x, err
}

// leaning is the plane of THROUGH … NORMAL ….
func (b *binder) leaning(rel *relation.Bound, c *lang.ThroughClause) (err error) {
	p := &rel.Clauses.Plane
	if p.At, err = b.vector(c.Point); err != nil {
		return err
	}
	if p.Normal, err = b.vector(c.Normal); err != nil {
		return err
	}
	for _, x := range []float64{p.At.X, p.At.Y, p.At.Z, p.Normal.X, p.Normal.Y, p.Normal.Z} {
		if !(math.Abs(x) <= 1e150) {
			return problem.New("clauses", b.at(c), "a plane needs finite numbers")
		}
	}
	if p.Normal == (section.Vec{}) {
		return problem.New("clauses", b.at(c.Normal), "NORMAL (0, 0, 0) has no direction").WithHint("NORMAL (0, 0, 1) makes a level plane")
	}
	rel.Clauses.PlaneText = b.text(c)
	return nil
}

// coveringWhole checks that the relations have what they cannot do without.
func (b *binder) coveringWhole(rel *relation.Bound, r *lang.Relation) error {
	c := &rel.Clauses
	switch rel.Def.Noun {
	case "SECTION":
		planes := 0
		for _, c := range r.Clauses {
			switch c := c.(type) {
			case *lang.AtPlaneClause, *lang.ThroughClause:
				if planes++; planes == 2 {
					return problem.New("clauses", b.at(c), "a SECTION has one plane: AT or THROUGH")
				}
			}
		}
		if planes == 0 {
			return b.needsClause(rel, r, "the plane: AT, or THROUGH and NORMAL", "AT z = 1.1")
		}
	case "SPACING", "CELLS":
		if c.Across > 0 && len(c.Distances) == 0 {
			if rel.Def.Noun == "CELLS" {
				return b.needsClause(rel, r, "DISTANCES beside ACROSS", "DISTANCES (5) ACROSS 5 UP 2")
			}
			c.Distances = []float64{c.Across}
		}
		if c.Across > 0 && c.Up != c.Across && voronoi.IsStretch(c.Stretch) {
			return problem.New("clauses", b.at(r), "ACROSS … UP … and STRETCHED are two ways to say that a metre up is not a metre across").
				WithHint("STRETCHED with DISTANCES alone tells true distances to the site that is nearest by stretched ones")
		}
	case "PLACEMENTS":
		if rel.Choice.Number == 0 {
			return b.needsClause(rel, r, "NUMBER, how many", "NUMBER 5")
		}
		if c.Clearance > 0 && !slices.ContainsFunc(r.Clauses, isAmong) && voronoi.IsStretch(c.Stretch) {
			return problem.New("clauses", b.at(r), "by stretched distances no place can be found that keeps a CLEARANCE").
				WithHint("AMONG (GRID OF a solid STEP 0.5) gives places to choose from, and CLEARANCE then drops those too near to a wall")
		}
	}
	return nil
}

// among binds the places to choose from.
func (b *binder) among(rel *relation.Bound, r *lang.Relation) ([]plan.Node, error) {
	for _, c := range r.Clauses {
		if c, ok := c.(*lang.AmongClause); ok {
			node, err := b.points(rel, c.Operand, "AMONG")
			rel.Clauses.Covering.Among = true
			return []plan.Node{node}, err
		}
	}
	return nil, nil
}

func isAmong(c lang.Clause) bool {
	_, is := c.(*lang.AmongClause)
	return is
}
