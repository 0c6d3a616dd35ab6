package plan

import "nearcell/engine/expr"

// Examined is what a query looked at when it found no row: the condition that it
// put to the rows of Input. Cond is nil where it put none.
//
// A requirement is not met by an empty answer alone: of an empty log, or of a log
// that none of the loggers of a register occurs in, no reading is above the limit
// either. So the rows before the last condition are counted. Conditions further
// inside are those of views, which choose what is spoken of.
type Examined struct {
	Input Node
	Cond  expr.Expr
}

// ExaminedBy finds the inputs whose rows a query puts its outermost condition to:
// several for UNION, of which each has to have been looked at.
func ExaminedBy(n Node) []Examined {
	switch n := n.(type) {
	case *Filter:
		return []Examined{{n.Input, n.Cond}}
	case *Project, *Sort, *Limit, *Distinct, *Aggregate:
		return ExaminedBy(n.Inputs()[0])
	case *Shared:
		return ExaminedBy(n.Common.Plan)
	case *Union:
		var all []Examined
		for _, p := range n.Parts {
			all = append(all, ExaminedBy(p)...)
		}
		return all
	case *Matched:
		all := ExaminedBy(n.Left)
		if n.Kind == Intersect {
			all = append(all, ExaminedBy(n.Right)...)
		}
		return all
	case *Join: // its condition is that of ON
		all := ExaminedBy(n.Left)
		if n.Kind == Inner || n.Kind == Semi {
			all = append(all, ExaminedBy(n.Right)...)
		}
		return all
	case *Relation: // it may find nothing in what it looked at: no excursion
		return []Examined{{n.Input, nil}}
	}
	return []Examined{{n, nil}}
}

// Quiet are the inputs of relations that may well give no rows: where an input
// without a row comes from one of them, its own input was looked at.
func Quiet(n Node) []Node {
	switch n := n.(type) {
	case *Relation:
		return []Node{n.Input}
	case *Project, *Sort, *Limit, *Distinct, *Aggregate, *Filter:
		return Quiet(n.Inputs()[0])
	case *Shared:
		return Quiet(n.Common.Plan)
	case *Join:
		return append(Quiet(n.Left), Quiet(n.Right)...)
	}
	return nil
}

// SourceName names what an input is made of, for messages: "log", "EPISODES OF log".
func SourceName(n Node) string {
	names := sourceNames(n, nil)
	switch {
	case len(names) == 0:
		return "the query"
	case len(names) == 1:
		return names[0]
	}
	text := names[0]
	for i, name := range names[1:] {
		if i == len(names)-2 {
			text += " and " + name
		} else {
			text += ", " + name
		}
	}
	return text
}

func sourceNames(n Node, names []string) []string {
	add := func(name string) {
		for _, have := range names {
			if have == name {
				return
			}
		}
		names = append(names, name)
	}
	switch n := n.(type) {
	case *Scan:
		add(n.Name)
		return names
	case *Relation:
		add(n.Bound.Title())
		return names
	case *Shared:
		return sourceNames(n.Common.Plan, names)
	}
	for _, in := range n.Inputs() {
		names = sourceNames(in, names)
	}
	return names
}
