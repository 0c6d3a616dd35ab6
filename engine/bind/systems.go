package bind

import (
	"cmp"
	"slices"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// Coordinates carry with them what they count from (column.System): from the campaign or
// table that has them through queries and views to wherever they meet others. Here it is
// seen that they are not compared with what counts from elsewhere, in silence or at all.

// placed are the columns of an object, its coordinates marked with their system.
func placed(o *catalog.Object) column.Schema {
	s := o.Table.Schema
	var at []int
	for _, name := range [3]string{"x", "y", "z"} {
		hits := named(s, name)
		if len(hits) != 1 || !s[hits[0]].Type.Numeric() {
			return s
		}
		at = append(at, hits[0])
	}
	s = slices.Clone(s)
	system := &column.System{Of: o.Name, Text: o.System, Loose: o.Kind == catalog.Table}
	for _, i := range at {
		s[i].System = system
	}
	return s
}

// SystemOf is what the value of an expression counts from: nil if it is no coordinate.
func SystemOf(e expr.Expr) *column.System {
	switch e := e.(type) {
	case *expr.Column:
		return e.Field.System
	case *expr.Outer:
		return e.Field.System
	case *expr.Subquery:
		if e.Kind == expr.ScalarQuery {
			return e.Query.Field().System
		}
		return nil
	case *expr.Call:
		if e.Fn.Name == "DISTANCE" {
			return nil
		}
	}
	if t := e.Type(); !t.Numeric() && t != column.Point {
		return nil
	}
	for _, c := range e.Children() {
		if s := SystemOf(c); s != nil {
			return s
		}
	}
	return nil
}

// systemOfCall is what an aggregate counts from: AVG(x) is a coordinate as x is, COUNT(x)
// and STDDEV_SAMP(x) are none.
func systemOfCall(c *plan.Call, result column.Type) *column.System {
	if c.Fn != nil && !slices.Contains([]string{"AVG", "MIN", "MAX", "MEDIAN", "QUANTILE", "ANY_VALUE"}, c.Fn.Name) {
		return nil
	}
	for _, a := range c.Args {
		if s := SystemOf(a); s != nil && (result.Numeric() || result == column.Point) {
			return s
		}
	}
	return nil
}

// oneSystemIn sees that what stands together in an expression counts from one place.
func (x *exprs) oneSystemIn(n lang.Node, e expr.Expr) error {
	if q, ok := e.(*expr.Subquery); ok {
		if q.X == nil {
			return nil
		}
		return x.oneSystem(SystemOf(q.X), q.Query.Field().System, x.at(n))
	}
	var first *column.System
	for _, c := range e.Children() {
		s := SystemOf(c)
		if s == nil {
			continue
		}
		if err := x.oneSystem(first, s, x.at(n)); err != nil {
			return err
		}
		first = s
	}
	return nil
}

// oneSystem refuses coordinates that have nothing to do with each other, and says what is
// taken for granted of those that may.
func (b *binder) oneSystem(one, other *column.System, at problem.Place) error {
	same, taken := catalog.SameSystem(one, other)
	if same {
		if taken != "" {
			b.say(note.Note, note.Sites, "%s", taken)
		}
		return nil
	}
	p := problem.New("systems", at, "the coordinates of %s, %s and those of %s, %s are of two systems: they cannot be compared", one.Of, catalog.SystemText(one.Text),
		other.Of, catalog.SystemText(other.Text))
	if origin, ok := catalog.GeographicOrigin(one.Text); ok {
		if _, both := catalog.GeographicOrigin(other.Text); both {
			return p.WithHint("import the campaign of %s anew with POSITION (…) GEOGRAPHIC ORIGIN (%s)", other.Of, origin)
		}
	}
	return p.WithHint("bring one to the other's: local metres by POSITION (…) GEOGRAPHIC ORIGIN (lat, lon) in both, or a drawing's by IN FRAME")
}

// sitesSystem is what the sites of a relation count from.
func (b *binder) sitesSystem(rel *relation.Bound) (*column.System, error) {
	var first *column.System
	for _, i := range []int{rel.X, rel.Y, rel.Z} {
		if i < 0 || rel.Input[i].System == nil {
			continue
		}
		if err := b.oneSystem(first, rel.Input[i].System, rel.Place); err != nil {
			return nil, err
		}
		first = rel.Input[i].System
	}
	return first, nil
}

// SolidSystem is what a solid counts from, nil where it is written out in numbers. Parts
// of it that count from different places are refused, or noted.
func SolidSystem(env *Env, s lang.Solid) (*column.System, error) {
	return newBinder(env).solidSystem(s)
}

func (b *binder) solidSystem(s lang.Solid) (*column.System, error) {
	switch s := s.(type) {
	case *lang.SolidOp:
		left, err := b.solidSystem(s.Left)
		if err != nil {
			return nil, err
		}
		right, err := b.solidSystem(s.Right)
		if err != nil {
			return nil, err
		}
		if left == nil || left.Text == "" && left.Loose && right != nil {
			left, right = right, left
		}
		return left, b.oneSystem(left, right, b.at(s))
	case *lang.SolidName:
		if o, err := b.env.Catalog.Get(s.Name.Key()); err == nil && o.Kind == catalog.Solid {
			return &column.System{Of: o.Name, Text: o.System, Loose: true}, nil
		}
	case *lang.EnvelopeSolid:
		if o, err := b.env.Catalog.Get(s.Of.Key()); err == nil && o.Kind == catalog.Campaign {
			return &column.System{Of: "the envelope of " + o.Name, Text: o.System}, nil
		}
	case *lang.MeshSolid, *lang.BoxesSolid, *lang.TerrainSolid:
		return &column.System{Of: b.text(s), Loose: true}, nil
	case *lang.PrismSolid:
		if s.File != nil {
			return &column.System{Of: b.text(s), Loose: true}, nil
		}
	}
	return nil, nil
}

// InSystem sees that a campaign and a solid count from one place, and in one unit: "" is
// that of what has none.
func InSystem(env *Env, sites *column.System, unit string, s lang.Solid) error {
	b := newBinder(env)
	own, err := b.solidSystem(s)
	if err != nil {
		return err
	}
	if err := b.oneSystem(sites, own, b.at(s)); err != nil {
		return err
	}
	return b.metresMeet(sites.Of, unit, s, b.at(s))
}

// solidsInSystem sees that the solids of a relation's clauses, and those that a campaign
// brings along, count from where its sites do. What was taken for granted of the latter was
// said when the campaign was made.
func (b *binder) solidsInSystem(rel *relation.Bound, r *lang.Relation, campaign *catalog.Object) error {
	sites, err := b.sitesSystem(rel)
	if err != nil {
		return err
	}
	var solids []lang.Solid
	within := false
	for _, c := range r.Clauses {
		switch c := c.(type) {
		case *lang.WithinClause:
			solids, within = append(solids, c.Solids...), true
		case *lang.UnclippedClause:
			within = true
		case *lang.MeasuredInClause:
			for i := range c.Parts {
				solids = append(solids, &lang.SolidName{At: c.Parts[i].At, Name: c.Parts[i]})
			}
		}
	}
	for _, s := range solids {
		own, err := b.solidSystem(s)
		if err != nil {
			return err
		}
		if err := b.oneSystem(sites, own, b.at(s)); err != nil {
			return err
		}
		if err := b.metresMeet(rel.Name, rel.Clauses.Unit.String(), s, b.at(s)); err != nil {
			return err
		}
	}
	if within || campaign == nil {
		return nil
	}
	for _, text := range append(slices.Clone(campaign.Options.Zones), campaign.Options.Within) {
		s, err := lang.ParseSolid(text)
		if err != nil {
			continue
		}
		own, err := b.solidSystem(s)
		if err != nil {
			return err
		}
		if same, _ := catalog.SameSystem(sites, own); !same {
			return b.oneSystem(sites, own, rel.Place)
		}
		if err := b.metresMeet(rel.Name, rel.Clauses.Unit.String(), s, rel.Place); err != nil {
			return err
		}
	}
	return nil
}

// metresMeet refuses sites in feet, say, in a solid that UNIT has brought to metres, or in
// the envelope of sites in metres. Other numbers are taken in the unit of the sites.
func (b *binder) metresMeet(sites, unit string, s lang.Solid, at problem.Place) error {
	own := b.solidUnit(s)
	if unit == "" || own == "" || own == unit {
		return nil
	}
	return problem.New("units", at, "the sites of %s are in %s, and %s is in %s", sites, unit, lang.Print(s), own).
		WithHint("import one of them in the unit of the other; a mesh that is read without UNIT has its numbers in %s, as those of the sites are", unit)
}

// solidUnit is the unit of a solid, where something tells it: that of the sites in an
// envelope, metres where UNIT has brought a mesh to them; else "".
func (b *binder) solidUnit(s lang.Solid) string {
	switch s := s.(type) {
	case *lang.SolidOp:
		if left := b.solidUnit(s.Left); left != "" {
			return left
		}
		return b.solidUnit(s.Right)
	case *lang.MeshSolid:
		if s.Unit.Text != "" {
			return "m"
		}
	case *lang.EnvelopeSolid:
		if o, err := b.env.Catalog.Get(s.Of.Key()); err == nil && o.Kind == catalog.Campaign {
			return cmp.Or(o.Options.LengthUnit, "m")
		}
	case *lang.SolidName:
		o, err := b.env.Catalog.Get(s.Name.Key())
		if err != nil || o.Kind != catalog.Solid {
			return ""
		}
		if of, err := lang.ParseSolid(o.Text); err == nil {
			return b.solidUnit(of)
		}
	}
	return ""
}

// coordinateColumns are the columns of relations that are places.
var coordinateColumns = []string{"x", "y", "z", "cx", "cy", "cz", "mx", "my", "mz"}

// markPlaces marks the places among a relation's columns with what they count from.
func (b *binder) markPlaces(rel *relation.Bound, s *scope) {
	system := rel.System
	if system == nil && rel.X >= 0 {
		system = rel.Input[rel.X].System
	}
	for i := range s.columns {
		c := &s.columns[i]
		if c.System == nil && c.Type.Numeric() && slices.Contains(coordinateColumns, lang.Fold(c.Name)) {
			c.System = system
		}
	}
}
