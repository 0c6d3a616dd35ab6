package relation

import (
	"slices"

	"nearcell/catalog/column"
	"nearcell/lang"
)

// ownColumns are the sites' own columns beside computed ones: a column that has
// the name of a computed one is read as own_<name>.
func (b *Bound) ownColumns(computed []Column) []Column {
	taken := map[string]bool{}
	computed = slices.Concat(computed, b.roles())
	for _, c := range computed {
		taken[lang.Fold(c.Name)] = true
	}
	for _, f := range b.Input {
		if !taken[lang.Fold(f.Name)] {
			taken[lang.Fold(f.Name)] = true
		}
	}
	own := make([]Column, len(b.Input))
	for i, f := range b.Input {
		own[i] = Column{Field: f, Site: i}
		if b.policy() == Mean && b.averaged(i) {
			// The row shows the mean of several sites: a condition on it says
			// nothing about one row of the input.
			own[i].Site = -1
			own[i].Type = column.Real
		}
		if !isComputed(computed, f.Name) {
			continue
		}
		name := "own_" + f.Name
		for taken[lang.Fold(name)] {
			name = "own_" + name
		}
		taken[lang.Fold(name)] = true
		own[i].Name = name
	}
	return own
}

func isComputed(computed []Column, name string) bool {
	return slices.ContainsFunc(computed, func(c Column) bool { return lang.Fold(c.Name) == lang.Fold(name) })
}

// averaged reports whether MEAN averages a column of the input: numbers that
// are neither identifier nor position nor FOR EACH.
func (b *Bound) averaged(i int) bool {
	return b.Input[i].Type.Numeric() && i != b.ID && i != b.X && i != b.Y && i != b.Z && !slices.Contains(b.Clauses.Each, i)
}

// computed are the relation's own columns with the units of this query.
func (b *Bound) computed() []Column {
	columns := slices.Clone(b.Def.Computed)
	for i := range columns {
		columns[i].Site = -1
		if columns[i].Power != 0 {
			columns[i].Unit = b.Clauses.Unit.Pow(columns[i].Power)
		}
	}
	return columns
}
