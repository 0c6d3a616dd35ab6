package plan

import (
	"slices"

	"nearcell/engine/expr"
	"nearcell/lang"
)

// Envelope is the solid that closes the open cells behind an expression over the input
// of an aggregate, as it is written: ENVELOPE OF hall MARGIN 1. It is "" where the
// expression speaks of no relation without a solid, or the sites come from no campaign
// or from several.
func Envelope(n *Aggregate, e expr.Expr) string {
	for _, o := range reads(e, Lineage(n.Input)) {
		if o.Relation == nil || o.Relation.Bound.Closed() {
			continue
		}
		if names := campaigns(o.Relation.Input, nil); len(names) == 1 {
			return "ENVELOPE OF " + lang.QuoteName(names[0]) + " MARGIN 1"
		}
	}
	return ""
}

// campaigns adds the names of the campaigns that a plan reads, each once.
func campaigns(n Node, names []string) []string {
	if s, ok := n.(*Scan); ok && s.Kind == "campaign" && !slices.Contains(names, s.Name) {
		return append(names, s.Name)
	}
	for _, in := range n.Inputs() {
		names = campaigns(in, names)
	}
	return names
}
