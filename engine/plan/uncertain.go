package plan

import (
	"slices"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/relation"
)

// Instruments is a weighted mean of a column whose instruments have an UNCERTAINTY.
type Instruments struct {
	Call int
	Of   relation.Uncertain
	Unit *column.Unit
	// Once: each instrument has one row in a group, so that its own errors are
	// independent. A join, or several partitions in one group, bring it in again.
	Once bool
	// Each and Common are the columns of the aggregate's input with the uncertainties of
	// Of.EachBy and Of.CommonBy; Lost names those that do not reach it.
	Each, Common []int
	Lost         []string
	// Merged: a row may be the mean of several instruments at one place, and what a mean
	// of their uncertainties says of it is not known.
	Merged bool
}

// ByColumn tells whether the uncertainty differs from instrument to instrument.
func (m *Instruments) ByColumn() bool { return len(m.Of.EachBy)+len(m.Of.CommonBy) > 0 }

// mark needs the columns of uncertainties, and the id, to name a row where one is none.
func (m *Instruments) mark(need []bool, schema column.Schema) {
	for _, at := range append(slices.Clone(m.Each), m.Common...) {
		need[at] = true
		markID(need, schema)
	}
}

// find looks up where the columns of uncertainties are.
func (m *Instruments) find(r *Relation, input []Origin) {
	look := func(list []relation.UncertainBy) (found []int) {
		for _, by := range list {
			at := -1
			if by.Column >= 0 { // own columns are those of the input, one by one
				at = slices.Index(input, Origin{r, by.Column})
			}
			if at < 0 {
				m.Lost = append(m.Lost, by.Name)
				continue
			}
			found = append(found, at)
		}
		return found
	}
	m.Each, m.Common = look(m.Of.EachBy), look(m.Of.CommonBy)
	m.Merged = m.ByColumn() && r.Bound.Clauses.Duplicates == relation.Mean
}

// Uncertainties are the weighted means of an aggregate that UNCERTAINTY speaks of.
func Uncertainties(n *Aggregate) []Instruments {
	input := Lineage(n.Input)
	var found []Instruments
	for i := range n.Calls {
		c := &n.Calls[i]
		if c.Fn.Name != "AVG" || c.Weight == nil || c.Distinct || len(c.Args) != 1 {
			continue
		}
		at, ok := expr.AsColumn(asRead(c.Args[0]))
		if !ok || input[at].Relation == nil {
			continue
		}
		o := input[at]
		for _, u := range o.Relation.Bound.Clauses.Uncertain {
			if u.Column == o.Column { // own columns are those of the input, one by one
				m := Instruments{Call: i, Of: u, Unit: o.Relation.Bound.Input[u.Column].Unit, Once: onceIn(n, o.Relation, input)}
				m.find(o.Relation, input)
				found = append(found, m)
			}
		}
	}
	return found
}

// asRead is an argument without the step from whole numbers to REAL that a mean takes.
func asRead(e expr.Expr) expr.Expr {
	if c, ok := e.(*expr.Cast); ok && c.Type() == column.Real && c.X.Type() == column.Integer {
		return c.X
	}
	return e
}

// onceIn tells whether a site of a relation has one row at most in each group.
func onceIn(n *Aggregate, r *Relation, input []Origin) bool {
	if cellsOf(n.Input) != r || len(r.Bound.Clauses.Measured) > 0 {
		return false
	}
	for _, each := range r.Bound.Clauses.Each {
		grouped := false
		for _, k := range n.Keys {
			if c, ok := expr.AsColumn(k); ok && input[c].Relation == r && input[c].Column == each {
				grouped = true
			}
		}
		if !grouped {
			return false
		}
	}
	return true
}
