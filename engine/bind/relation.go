package bind

import (
	"fmt"
	"slices"
	"strings"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine/function"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
	"nearcell/voronoi"
)

// relation binds a geometric relation as a source without a name.
func (b *binder) relation(r *lang.Relation) (bound, error) {
	def, err := b.noun(r)
	if err != nil {
		return bound{}, err
	}
	if def.Over == relation.OverNothing {
		return b.overNothing(&relation.Bound{Def: def}, r)
	}
	in, campaign, err := b.sites(r)
	if err != nil {
		return bound{}, err
	}
	rel := &relation.Bound{Def: def, Name: b.operandName(r.Operand), Input: fields(in.scope), Place: b.at(r.Operand), Shapes: b.env.Shapes}
	if def.Over == relation.OverRows {
		rel.ID, rel.X, rel.Y, rel.Z = -1, -1, -1, -1
		return b.overRows(rel, r, in)
	}
	if err := b.position(rel, r); err != nil {
		return bound{}, err
	}
	if campaign != nil {
		if err := b.inherit(rel, campaign); err != nil {
			return bound{}, err
		}
	}
	if err := b.clauses(rel, r, campaign != nil); err != nil {
		return bound{}, err
	}
	if err := b.solidsInSystem(rel, r, campaign); err != nil {
		return bound{}, err
	}
	beside, err := b.estimatingInput(rel, r)
	if err != nil {
		return bound{}, err
	}
	if def.Pairs {
		other, err := b.against(rel, r)
		if err != nil {
			return bound{}, err
		}
		beside = append(beside, other)
	}
	return b.relationNode(rel, r, in, beside...)
}

// relationNode is the source that a bound relation makes.
func (b *binder) relationNode(rel *relation.Bound, r *lang.Relation, in bound, beside ...plan.Node) (bound, error) {
	rel.Layout()
	node := &plan.Relation{Bound: rel, Input: in.node, Beside: beside, Place: b.at(r)}
	s := newScope("", rel.Title(), rel.Schema())
	s.sources[0].notYet = rel.Def.NotYet
	b.markPlaces(rel, s)
	for i, c := range rel.Columns {
		s.columns[i].costly = c.Costly
	}
	return bound{node, s}, nil
}

// fields are the columns of a scope under their names there.
func fields(s *scope) column.Schema {
	out := make(column.Schema, len(s.columns))
	for i, c := range s.columns {
		out[i] = c.Field
	}
	return out
}

// noun finds the relation by its noun.
func (b *binder) noun(r *lang.Relation) (*relation.Definition, error) {
	if def, ok := relation.Lookup(r.Noun.Text); ok && (r.Operand != nil || def.Over == relation.OverNothing) {
		return def, nil
	}
	if name, ok := relation.Planned(r.Noun.Text); ok {
		return nil, b.notYet(&r.Noun, name)
	}
	p := problem.New("no-relation", b.at(&r.Noun), "there is no relation '%s'", r.Noun.Text)
	return nil, didYouMean(p, r.Noun.Text, relation.Nouns())
}

// sites binds what a relation is made OF. campaign is set where that is a
// campaign by its name: only then the campaign's own clauses hold.
func (b *binder) sites(r *lang.Relation) (in bound, campaign *catalog.Object, err error) {
	switch o := r.Operand.(type) {
	case *lang.Name:
		if b.findCTE(o) == nil {
			if obj, err := b.env.Catalog.Get(o.Key()); err == nil && obj.Kind == catalog.Campaign {
				campaign = obj
			}
		}
		in, err = b.named(o)
	case *lang.Query:
		in, err = b.subquery(o)
	case *lang.Relation:
		in, err = b.relation(o)
	default:
		err = problem.New("failed", b.at(r), "a relation of an unknown kind of sites")
	}
	return in, campaign, err
}

// operandName is what messages and notes call the sites.
func (b *binder) operandName(o lang.Operand) string {
	switch o := o.(type) {
	case *lang.Name:
		return o.Text
	case *lang.Relation:
		return "(" + strings.ToUpper(o.Noun.Text) + " …)"
	}
	return queryName
}

// position finds identifier and coordinates among the columns of the sites.
func (b *binder) position(rel *relation.Bound, r *lang.Relation) error {
	at := [4]*int{&rel.ID, &rel.X, &rel.Y, &rel.Z}
	var missing []string
	for i, name := range [4]string{"id", "x", "y", "z"} {
		hits := named(rel.Input, name)
		switch {
		case len(hits) == 0:
			missing = append(missing, name)
		case len(hits) > 1:
			return problem.New("ambiguous", b.at(r.Operand), "%s gives %d columns called '%s'", rel.Name, len(hits), name).
				WithHint("name one of them otherwise: SELECT s.id AS id, l.id AS log_id …")
		default:
			*at[i] = hits[0]
		}
	}
	if len(missing) > 0 {
		return b.noPosition(rel, r, missing)
	}
	for _, i := range []int{rel.X, rel.Y, rel.Z} {
		if f := rel.Input[i]; !f.Type.Numeric() {
			return problem.New("types", b.at(r.Operand), "the coordinate '%s' of %s is %s, not a number", f.Name, rel.Name, f.Type).
				WithHint("CAST(%s AS REAL) AS %s", f.Name, f.Name)
		}
	}
	if f := rel.Input[rel.ID]; f.Type == column.Point || f.Type == column.Null {
		return problem.New("types", b.at(r.Operand), "'%s' of %s is %s, which identifies nothing", f.Name, rel.Name, f.Type)
	}
	return b.lengthUnit(rel, r)
}

// lengthUnit is the one unit of the coordinates: m where none of them says.
func (b *binder) lengthUnit(rel *relation.Bound, r *lang.Relation) error {
	for _, i := range []int{rel.X, rel.Y, rel.Z} {
		u := rel.Input[i].Unit
		switch {
		case u == nil:
		case rel.Clauses.Unit == nil:
			rel.Clauses.Unit = u
		case !column.SameUnit(u, rel.Clauses.Unit):
			return problem.New("units", b.at(r.Operand), "x, y, z of %s are in %s, %s, %s: a position has one unit", rel.Name,
				unitName(rel.Input[rel.X].Unit), unitName(rel.Input[rel.Y].Unit), unitName(rel.Input[rel.Z].Unit))
		}
	}
	if rel.Clauses.Unit == nil {
		rel.Clauses.Unit = column.Symbol("m")
	}
	return nil
}

func unitName(u *column.Unit) string {
	if u == nil {
		return "no unit"
	}
	return u.String()
}

// named are the columns with a name, in any case; exactly spelt ones go before.
func named(s column.Schema, name string) []int {
	var hits, exact []int
	for i, f := range s {
		if lang.Fold(f.Name) == name {
			hits = append(hits, i)
			if f.Name == name {
				exact = append(exact, i)
			}
		}
	}
	if len(exact) == 1 {
		return exact
	}
	return hits
}

func (b *binder) noPosition(rel *relation.Bound, r *lang.Relation, missing []string) error {
	var gives []string
	for _, f := range rel.Input {
		gives = append(gives, f.Name)
	}
	p := problem.New("no-position", b.at(r.Operand), "%s needs the columns id, x, y, z: %s has no %s, it gives %s", rel.Def.Noun,
		rel.Name, strings.Join(missing, ", "), shortList(gives))
	if _, ok := r.Operand.(*lang.Name); ok {
		return p.WithHint("join the sites: %s OF (SELECT s.id, s.x, s.y, s.z, … FROM campaign s JOIN %s l ON …)", rel.Def.Noun, rel.Name)
	}
	return p.WithHint("name them in SELECT, with AS where they are called otherwise")
}

func shortList(names []string) string {
	const shown = 8
	if len(names) > shown+1 {
		return fmt.Sprintf("%s and %d more", strings.Join(names[:shown], ", "), len(names)-shown)
	}
	return strings.Join(names, ", ")
}

// inherit takes over what CREATE CAMPAIGN said.
func (b *binder) inherit(rel *relation.Bound, o *catalog.Object) error {
	opt := o.Options
	if opt.LengthUnit != "" {
		rel.Clauses.Unit = column.ParseUnit(opt.LengthUnit)
	}
	rel.Clauses.Tolerance = opt.Tolerance
	rel.Clauses.Duplicates = opt.Duplicates
	if opt.Duplicates == relation.Mean {
		rel.Clauses.Means = means(rel.Input)
	}
	rel.Clauses.Stretch = voronoi.Vec{X: opt.Stretched[0], Y: opt.Stretched[1], Z: opt.Stretched[2]}
	if len(opt.Zones) > 0 {
		return b.inheritZones(rel, o)
	}
	if opt.Within == "" {
		return nil
	}
	inner := &binder{env: b.env, sources: b.sources, source: &problem.Source{Name: "campaign " + o.Name, Text: opt.Within}}
	s, err := lang.ParseSolid(opt.Within)
	if err != nil {
		return inner.misread(err)
	}
	rel.Clauses.SolidName = inner.text(s)
	rel.Clauses.Solid, err = inner.solid(s)
	return err
}

// clauses binds the clauses of the relation itself.
func (b *binder) clauses(rel *relation.Bound, r *lang.Relation, campaign bool) error {
	var within, unclipped lang.Clause
	var measured *lang.MeasuredInClause
	for _, c := range r.Clauses {
		err := b.takes(rel, c)
		if err != nil {
			return err
		}
		switch c := c.(type) {
		case *lang.WithinClause:
			within = c
			err = b.within(rel, c)
		case *lang.UnclippedClause:
			unclipped = c
			rel.Clauses.Solid, rel.Clauses.SolidName, rel.Clauses.Zones = nil, "", nil
		case *lang.MeasuredInClause:
			measured = c
		case *lang.StretchedClause:
			err = b.stretched(rel, c)
		case *lang.ForEachClause:
			err = b.forEach(rel, c)
		case *lang.OmittingClause:
			for _, id := range c.IDs {
				rel.Clauses.Omitting = append(rel.Clauses.Omitting, id.Value)
				rel.Clauses.OmitPlaces = append(rel.Clauses.OmitPlaces, b.at(id))
			}
			rel.Clauses.Because = c.Because.Value
		default:
			var known bool
			if rel.Def.Noun != "REPRESENTATIVES" {
				known, err = b.coveringClause(rel, c)
				if !known && err == nil {
					known, err = b.estimatingClause(rel, c)
				}
			}
			if !known {
				err = b.representativeClause(rel, c)
			}
		}
		if err != nil {
			return err
		}
	}
	if err := b.coveringWhole(rel, r); err != nil {
		return err
	}
	if err := b.representativesWhole(rel, r); err != nil {
		return err
	}
	if err := b.spaceTaken(rel, r); err != nil {
		return err
	}
	if measured != nil {
		if err := b.measuredIn(rel, measured); err != nil {
			return err
		}
	}
	if within != nil && unclipped != nil {
		return problem.New("clauses", b.at(unclipped), "WITHIN and UNCLIPPED say the opposite of each other")
	}
	if within == nil && unclipped == nil && measured == nil && !campaign && slices.Contains(rel.Def.Clauses, "WITHIN") &&
		rel.Def.Noun != "REPRESENTATIVES" && !rel.Def.Pairs {
		b.say(note.Note, note.Sites, "%s has no WITHIN, so its cells end nowhere: only a campaign named after OF brings its solid along", rel.Title())
	}
	return nil
}

// means are how the columns of the sites make means: by their units.
func means(s column.Schema) []relation.MeanKind {
	list := make([]relation.MeanKind, len(s))
	for i, f := range s {
		switch function.NoPlainMean(f.Unit) {
		case function.NoMeanLevel:
			list[i] = relation.LevelMean
		case function.NoMeanDirection:
			list[i] = relation.DirectionMean
		case function.NoMeanAcid:
			list[i] = relation.AcidMean
		}
	}
	return list
}

// takes refuses a clause that the relation does not take, or not yet.
func (b *binder) takes(rel *relation.Bound, c lang.Clause) error {
	name := clauseName(c)
	if slices.Contains(rel.Def.Later, name) {
		return b.notYet(c, name)
	}
	if !slices.Contains(rel.Def.Clauses, name) {
		return problem.New("no-clause", b.at(c), "%s takes no %s", rel.Def.Noun, name).
			WithHint("it takes %s", strings.Join(rel.Def.Clauses, ", "))
	}
	return nil
}

func (b *binder) forEach(rel *relation.Bound, c *lang.ForEachClause) error {
	rel.EachPlace = b.at(c)
	for i := range c.Names {
		n := &c.Names[i]
		at, err := b.column(rel, n)
		if err != nil {
			return err
		}
		switch {
		case slices.Contains(rel.Clauses.Each, at):
			return problem.New("same-name", b.at(n), "FOR EACH names '%s' twice", n.Text)
		case at == rel.ID:
			return problem.New("for-each", b.at(n), "FOR EACH %s would make a partition of every single site", n.Text).
				WithHint("FOR EACH takes an instant or a pass")
		case rel.Input[at].Type == column.Null:
			return problem.New("types", b.at(n), "FOR EACH needs values, and '%s' is NULL throughout", n.Text)
		}
		rel.Clauses.Each = append(rel.Clauses.Each, at)
	}
	return nil
}

// clauseName is how the language writes a clause.
func clauseName(c lang.Clause) string {
	switch c := c.(type) {
	case *lang.WithinClause:
		return "WITHIN"
	case *lang.UnclippedClause:
		return "UNCLIPPED"
	case *lang.StretchedClause:
		return "STRETCHED"
	case *lang.ForEachClause:
		return "FOR EACH"
	case *lang.ForClause:
		return "FOR"
	case *lang.MethodClause:
		return "METHOD"
	case *lang.MeasuredInClause:
		return "MEASURED IN"
	case *lang.OmittingClause:
		return "OMITTING"
	case *lang.AtPlaneClause, *lang.AtPointsClause:
		return "AT"
	case *lang.LongestGapClause:
		return "LONGEST GAP"
	case *lang.AboveClause:
		if c.Below {
			return "BELOW"
		}
		return "ABOVE"
	}
	return strings.TrimSuffix(strings.ToUpper(strings.TrimPrefix(fmt.Sprintf("%T", c), "*lang.")), "CLAUSE")
}
