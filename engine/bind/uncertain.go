package bind

import (
	"math"
	"slices"

	"nearcell/catalog/column"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

const (
	uncertainNumbers = "UNCERTAINTY (temp 0.1 EACH, 0.2 COMMON)"
	uncertainColumn  = "UNCERTAINTY (temp (u) EACH)"
)

// uncertain binds UNCERTAINTY (temp 0.1 EACH, (drift) COMMON) of CELLS: a part without a
// reading is of the reading before it. Several parts of one kind add up as squares.
func (b *binder) uncertain(rel *relation.Bound, c *lang.UncertaintyClause) error {
	if !c.Column.IsZero() {
		return problem.New("clauses", b.at(c), "UNCERTAINTY of %s says of which reading, and whether of EACH instrument or COMMON to all", rel.Def.Noun).
			WithHint("%s: the reading, and in parentheses the column of uncertainties", uncertainColumn)
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
			return problem.New("clauses", b.at(p), "UNCERTAINTY names the reading first").WithHint(uncertainNumbers)
		}
		k := slices.IndexFunc(rel.Clauses.Uncertain, func(x relation.Uncertain) bool { return x.Column == at })
		if k < 0 {
			k = len(rel.Clauses.Uncertain)
			rel.Clauses.Uncertain = append(rel.Clauses.Uncertain, relation.Uncertain{Column: at})
		}
		if err := b.uncertainPart(rel, &rel.Clauses.Uncertain[k], p); err != nil {
			return err
		}
	}
	return nil
}

// uncertainPart adds a part, a number or a column, to what a reading has so far.
func (b *binder) uncertainPart(rel *relation.Bound, x *relation.Uncertain, p *lang.UncertaintyPart) error {
	if c, ok := p.Value.(*lang.Column); ok {
		by, err := b.uncertainBy(rel, x.Column, c)
		if err != nil {
			return err
		}
		if p.Common {
			x.CommonBy = append(x.CommonBy, by)
		} else {
			x.EachBy = append(x.EachBy, by)
		}
		return nil
	}
	columns := false
	walk(p.Value, func(e lang.Expr) {
		_, is := e.(*lang.Column)
		columns = columns || is
	})
	if columns {
		return problem.New("clauses", b.at(p), "an uncertainty is a number or a column by its name, and nothing computed from columns").
			WithHint("%s OF (SELECT *, … AS u FROM %s) WITHIN … %s: computed as a column of the sites", rel.Def.Noun, rel.Name, uncertainColumn)
	}
	u, err := b.real(p.Value, "UNCERTAINTY")
	if err != nil {
		return err
	}
	if !(u >= 0) || math.IsInf(u, 1) {
		return problem.New("clauses", b.at(p), "a standard uncertainty is a number of 0 or more, not %s", column.FormatReal(u))
	}
	if p.Common {
		x.Common = math.Hypot(x.Common, u)
	} else {
		x.Each = math.Hypot(x.Each, u)
	}
	return nil
}

// uncertainBy is a column of uncertainties of a reading, in the reading's unit where it
// has one of its own.
func (b *binder) uncertainBy(rel *relation.Bound, reading int, c *lang.Column) (by relation.UncertainBy, err error) {
	at, err := newScope("", rel.Name, rel.Input).resolve(b, c)
	if err != nil {
		return by, err
	}
	f, of := rel.Input[at], rel.Input[reading]
	switch {
	case !f.Type.Numeric() || at == rel.ID:
		return by, problem.New("types", b.at(c), "the uncertainty '%s' of %s is %s, and a standard uncertainty is a number", f.Name, rel.Name, typeOrIdentifier(f, at == rel.ID)).
			WithHint("CAST(%s AS REAL) reads a text as a number, in OF (SELECT …)", f.Name)
	case f.Unit != nil && !sameDifference(of.Unit, f.Unit):
		return by, problem.New("units", b.at(c), "the uncertainty '%s' of %s is in %s, and '%s' is in %s", f.Name, rel.Name, f.Unit, of.Name, unitName(of.Unit)).
			WithHint("units are never converted: bring it to the unit of the reading in OF (SELECT *, CAST(%s AS REAL) * factor AS u FROM …); CAST drops the unit", f.Name)
	}
	return relation.UncertainBy{Column: at, Name: f.Name, Place: b.at(c)}, nil
}

func typeOrIdentifier(f column.Field, id bool) string {
	if id {
		return "the identifier"
	}
	return f.Type.String()
}

// sameDifference reports whether differences of a reading are measured in a unit: its
// own, and kelvins for degrees Celsius, whose steps are the same.
func sameDifference(reading, u *column.Unit) bool {
	if reading == nil {
		return false
	}
	return column.SameUnit(reading, u) || reading.String() == "°C" && u.String() == "K"
}
