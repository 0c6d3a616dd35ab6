package bind

import (
	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
	"nearcell/voronoi"
)

// against binds the sites of AGAINST: a campaign brings its solid, tolerance and policy
// along as that of OF does, and WITHIN and STRETCHED hold for both.
func (b *binder) against(rel *relation.Bound, r *lang.Relation) (plan.Node, error) {
	var clause *lang.AgainstClause
	within, stretched := false, false
	for _, c := range r.Clauses {
		switch c := c.(type) {
		case *lang.AgainstClause:
			clause = c
		case *lang.WithinClause:
			within = true
		case *lang.StretchedClause:
			stretched = true
		}
	}
	if clause == nil {
		return nil, b.needsClause(rel, r, "the other campaign: AGAINST", rel.Def.Noun+" OF "+rel.Name+" AGAINST after")
	}
	side := &lang.Relation{At: clause.At, Noun: r.Noun, Operand: clause.Operand}
	in, campaign, err := b.sites(side)
	if err != nil {
		return nil, err
	}
	other := &relation.Bound{Def: rel.Def, Name: b.operandName(clause.Operand), Input: fields(in.scope), Place: b.at(clause.Operand)}
	if err := b.position(other, side); err != nil {
		return nil, err
	}
	if campaign != nil {
		if err := b.inherit(other, campaign); err != nil {
			return nil, err
		}
	}
	if within {
		other.Clauses.Solid, other.Clauses.SolidName, other.Clauses.Zones = rel.Clauses.Solid, rel.Clauses.SolidName, rel.Clauses.Zones
	}
	if stretched {
		other.Clauses.Stretch = rel.Clauses.Stretch
	}
	if err := b.againstSystem(rel, other, side, campaign); err != nil {
		return nil, err
	}
	if err := b.oneSpace(rel, other); err != nil {
		return nil, err
	}
	if err := b.sameEach(rel, other); err != nil {
		return nil, err
	}
	rel.Other = other
	rel.Beside = append(rel.Beside, relation.Beside{Name: other.Name, Input: other.Input, Clause: "AGAINST"})
	return in.node, nil
}

// againstSystem sees that both sides, and the solids that each brings, count from one
// place.
func (b *binder) againstSystem(rel, other *relation.Bound, side *lang.Relation, campaign *catalog.Object) error {
	if err := b.solidsInSystem(other, side, campaign); err != nil {
		return err
	}
	return b.oneSystem(rel.Input[rel.X].System, other.Input[other.X].System, other.Place)
}

// oneSpace sees that both sides end somewhere: one without a solid ends where the other
// does.
func (b *binder) oneSpace(rel, other *relation.Bound) error {
	if !column.SameUnit(rel.Clauses.Unit, other.Clauses.Unit) {
		return problem.New("units", other.Place, "the sites of %s are in %s, and those of %s in %s", rel.Name, unitName(rel.Clauses.Unit), other.Name, unitName(other.Clauses.Unit))
	}
	take := func(to, from *relation.Bound) {
		to.Clauses.Solid, to.Clauses.SolidName, to.Clauses.Zones = from.Clauses.Solid, from.Clauses.SolidName, from.Clauses.Zones
		b.say(note.Note, note.Sites, "%s has no solid of its own: its cells end at that of %s, %s", to.Name, from.Name, from.Clauses.SolidName)
	}
	switch {
	case !rel.Closed() && !other.Closed():
		return problem.New("no-solid", rel.Place, "%s and %s have no solid: the space around them has no end, and neither has what their outer cells share", rel.Name, other.Name).
			WithHint("WITHIN a solid, which holds for both; WITHIN (ENVELOPE OF %s MARGIN 1), if there is none", envelopeName(rel.Name))
	case !rel.Closed():
		take(rel, other)
	case !other.Closed():
		take(other, rel)
	}
	if a, c := rel.Clauses.Stretch, other.Clauses.Stretch; a != c && (voronoi.IsStretch(a) || voronoi.IsStretch(c)) {
		b.say(note.Warning, note.Sites, "distances are stretched differently in %s and %s: STRETCHED holds for both", rel.Name, other.Name)
	}
	return nil
}

// envelopeName is a campaign for the hint.
func envelopeName(name string) string {
	if name == queryName {
		return "campaign"
	}
	return name
}

// sameEach finds the columns of FOR EACH on the other side. Where it has none of them, it
// is one partition, which every value is held against.
func (b *binder) sameEach(rel, other *relation.Bound) error {
	for _, c := range rel.Clauses.Each {
		f := rel.Input[c]
		hits := named(other.Input, lang.Fold(f.Name))
		switch {
		case len(hits) == 0:
			continue
		case len(hits) > 1:
			return problem.New("ambiguous", other.Place, "%s gives %d columns called '%s'", other.Name, len(hits), f.Name)
		case other.Input[hits[0]].Type != f.Type:
			return problem.New("types", rel.EachPlace, "'%s' is %s in %s and %s in %s: FOR EACH needs values that can be equal", f.Name, f.Type, rel.Name,
				other.Input[hits[0]].Type, other.Name)
		}
		other.Clauses.Each = append(other.Clauses.Each, hits[0])
	}
	if n := len(other.Clauses.Each); n > 0 && n < len(rel.Clauses.Each) {
		return problem.New("for-each", rel.EachPlace, "%s has some columns of FOR EACH and lacks others", other.Name).
			WithHint("all of them, or none: then every partition is held against the one of %s", other.Name)
	}
	if len(rel.Clauses.Each) > 0 && len(other.Clauses.Each) == 0 {
		b.say(note.Note, note.Sites, "%s has no %s: every partition of %s is held against the one of %s", other.Name, rel.Input[rel.Clauses.Each[0]].Name, rel.Name, other.Name)
	}
	other.EachPlace = other.Place
	return nil
}
