package bind

import (
	"math"
	"slices"

	"nearcell/catalog/column"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

func init() {
	rowClauses["EXTREMES"] = (*binder).extremeClauses
}

func (b *binder) extremeClauses(rel *relation.Bound, r *lang.Relation, _ bound) ([]plan.Node, error) {
	for _, c := range r.Clauses {
		var err error
		switch c := c.(type) {
		case *lang.ForClause:
			err = b.forClause(rel, c)
		case *lang.NumberClause:
			err = b.howMany(rel, c)
		case *lang.UncertaintyClause:
			err = b.spread(rel, c)
		}
		if err != nil {
			return nil, err
		}
	}
	if len(rel.Clauses.For) == 0 {
		return nil, b.needsClause(rel, r, "FOR, the column to rank by", "FOR hi NUMBER 5")
	}
	if rel.Choice.Number == 0 {
		return nil, b.needsClause(rel, r, "NUMBER, how many ranks", "FOR "+rel.Input[rel.Clauses.For[0]].Name+" NUMBER 5")
	}
	return nil, nil
}

// howMany is the whole number of NUMBER.
func (b *binder) howMany(rel *relation.Bound, c *lang.NumberClause) error {
	v, err := b.value(c.Value)
	if err != nil {
		return err
	}
	if v.Null || v.Type != column.Integer || v.I < 1 || v.I > math.MaxInt32 {
		return problem.New("clauses", b.at(c), "NUMBER is a whole number of 1 or more")
	}
	rel.Choice.Number = int(v.I)
	return nil
}

// spread binds the uncertainty of ranked rows: a column of standard uncertainties, or
// one for all.
func (b *binder) spread(rel *relation.Bound, c *lang.UncertaintyClause) error {
	rel.Choice.Uncertain = true
	if !c.Column.IsZero() {
		at, err := b.column(rel, &c.Column)
		if err != nil {
			return err
		}
		if f := rel.Input[at]; !f.Type.Numeric() {
			return problem.New("types", b.at(&c.Column), "the uncertainty '%s' of %s is %s, not a number", f.Name, rel.Name, f.Type)
		}
		rel.Choice.Spread = []int{at}
		return nil
	}
	squares := 0.0
	for _, p := range c.Parts {
		u, err := b.real(p.Value, "UNCERTAINTY")
		if err != nil {
			return err
		}
		if u < 0 {
			return problem.New("clauses", b.at(p), "a standard uncertainty is a number of 0 or more, not %s", column.FormatReal(u))
		}
		if p.Common {
			rel.Choice.Common = true
			continue
		}
		squares += float64(u * u)
	}
	rel.Choice.Each = math.Sqrt(squares)
	return nil
}

// representativeClause binds a clause that REPRESENTATIVES takes beside those of all
// relations over sites.
func (b *binder) representativeClause(rel *relation.Bound, c lang.Clause) error {
	switch c := c.(type) {
	case *lang.ForClause:
		return b.forClause(rel, c)
	case *lang.NumberClause:
		return b.howMany(rel, c)
	case *lang.KeepClause:
		for _, id := range c.IDs {
			if slices.Contains(rel.Choice.Keep, id.Value) {
				return problem.New("same-name", b.at(id), "KEEP names '%s' twice", id.Value)
			}
			rel.Choice.Keep = append(rel.Choice.Keep, id.Value)
			rel.Choice.KeepPlaces = append(rel.Choice.KeepPlaces, b.at(id))
		}
		return nil
	case *lang.ByClause:
		if len(c.Names) != 1 || !c.On.IsZero() {
			return problem.New("clauses", b.at(c), "REPRESENTATIVES are chosen BY MEAN, BY HIGHEST or BY COURSE")
		}
		var err error
		rel.Choice.Aim, err = b.word(&c.Names[0], "what sites are chosen by", "MEAN", "HIGHEST", "COURSE")
		return err
	}
	return b.notYet(c, clauseName(c))
}

// representativesWhole checks that REPRESENTATIVES has what it cannot do without.
func (b *binder) representativesWhole(rel *relation.Bound, r *lang.Relation) error {
	const example = "FOR EACH t FOR temp NUMBER 5 BY COURSE"
	switch {
	case rel.Def.Noun != "REPRESENTATIVES":
		return nil
	case len(rel.Clauses.Each) == 0:
		return b.needsClause(rel, r, "FOR EACH, the instants", example)
	case len(rel.Clauses.Each) > 1:
		return problem.New("clauses", rel.EachPlace, "REPRESENTATIVES goes along one column of FOR EACH, the time")
	case len(rel.Clauses.For) == 0:
		return b.needsClause(rel, r, "FOR, the reading", example)
	case rel.Choice.Number == 0:
		return b.needsClause(rel, r, "NUMBER, how many to choose", example)
	case rel.Choice.Aim == "":
		return b.needsClause(rel, r, "BY MEAN, BY HIGHEST or BY COURSE, what they are to stand for", example)
	case len(rel.Choice.Keep) > rel.Choice.Number:
		return problem.New("clauses", rel.Choice.KeepPlaces[rel.Choice.Number], "KEEP names %d sites, and NUMBER is %d", len(rel.Choice.Keep), rel.Choice.Number)
	}
	if t := rel.Input[rel.Clauses.Each[0]].Type; t == column.Text || t == column.Boolean || t == column.Point {
		return problem.New("types", rel.EachPlace, "'%s' is %s, which goes along no time", rel.Input[rel.Clauses.Each[0]].Name, t).
			WithHint("FOR EACH takes the instants, or the numbers of passes in their order")
	}
	return nil
}
