package bind

import (
	"math"
	"slices"

	"nearcell/catalog/column"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// uncertain binds UNCERTAINTY (temp 0.1 EACH, 0.2 COMMON) of CELLS: a part without a
// column is of the column before it. Several parts of one kind add up as squares.
func (b *binder) uncertain(rel *relation.Bound, c *lang.UncertaintyClause) error {
	if !c.Column.IsZero() {
		return b.notYet(c, "UNCERTAINTY of "+rel.Def.Noun+" by a column").WithHint("UNCERTAINTY (temp 0.1 EACH, 0.2 COMMON): one figure for all instruments")
	}
	at := -1
	for _, p := range c.Parts {
		if !p.Column.IsZero() {
			of, err := b.column(rel, &p.Column)
			if err != nil {
				return err
			}
			if f := rel.Input[of]; !f.Type.Numeric() || of == rel.ID {
				return problem.New("types", b.at(&p.Column), "'%s' of %s is no reading: UNCERTAINTY needs numbers", f.Name, rel.Name)
			}
			at = of
		}
		if at < 0 {
			return problem.New("clauses", b.at(p), "UNCERTAINTY names the reading first").WithHint("UNCERTAINTY (temp 0.1 EACH, 0.2 COMMON)")
		}
		u, err := b.real(p.Value, "UNCERTAINTY")
		if err != nil {
			return err
		}
		if !(u >= 0) || math.IsInf(u, 1) {
			return problem.New("clauses", b.at(p), "a standard uncertainty is a number of 0 or more, not %s", column.FormatReal(u))
		}
		k := slices.IndexFunc(rel.Clauses.Uncertain, func(x relation.Uncertain) bool { return x.Column == at })
		if k < 0 {
			k = len(rel.Clauses.Uncertain)
			rel.Clauses.Uncertain = append(rel.Clauses.Uncertain, relation.Uncertain{Column: at})
		}
		x := &rel.Clauses.Uncertain[k]
		if p.Common {
			x.Common = math.Hypot(x.Common, u)
		} else {
			x.Each = math.Hypot(x.Each, u)
		}
	}
	return nil
}
