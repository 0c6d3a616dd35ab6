package plan

import (
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
		at, ok := expr.AsColumn(c.Args[0])
		if !ok || input[at].Relation == nil {
			continue
		}
		o := input[at]
		for _, u := range o.Relation.Bound.Clauses.Uncertain {
			if u.Column == o.Column { // own columns are those of the input, one by one
				found = append(found, Instruments{i, u, o.Relation.Bound.Input[u.Column].Unit, onceIn(n, o.Relation, input)})
			}
		}
	}
	return found
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
