package exec

import (
	"errors"

	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/plan"
	"nearcell/lang"
)

// offerEnvelope names, in the fault of a weight that is infinite, the solid that is
// always at hand: the box around the campaign whose cells nothing closes off.
func offerEnvelope(err error, n *plan.Aggregate, weight expr.Expr) {
	var f *function.RowFault
	if weight == nil || !errors.As(err, &f) || f.Hint != function.OpenCell {
		return
	}
	origins := plan.Lineage(n.Input)
	used := make([]bool, len(origins))
	expr.Columns(weight, used)
	for i, o := range origins {
		if !used[i] || o.Relation == nil || o.Relation.Bound.Clauses.Solid != nil {
			continue
		}
		if name := onlyCampaign(o.Relation.Input); name != "" {
			f.Hint = "a cell that nothing closes off is unbounded: put the campaign WITHIN a solid, such as ENVELOPE OF " + lang.QuoteName(name) +
				" MARGIN 1, or leave such cells out with WHERE bounded"
			return
		}
	}
}

// onlyCampaign is the name of the one campaign that a plan reads, "" where it reads
// none or several.
func onlyCampaign(n plan.Node) string {
	if s, ok := n.(*plan.Scan); ok && s.Kind == "campaign" {
		return s.Name
	}
	name := ""
	for _, in := range n.Inputs() {
		inner := onlyCampaign(in)
		if inner != "" && name != "" && inner != name {
			return ""
		}
		if inner != "" {
			name = inner
		}
	}
	return name
}
