package exec

import (
	"errors"

	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/plan"
)

// offerEnvelope names, in the fault of a weight that is infinite, the solid that is
// always at hand: the box around the campaign whose cells nothing closes off.
func offerEnvelope(err error, n *plan.Aggregate, weight expr.Expr) {
	var f *function.RowFault
	if weight == nil || !errors.As(err, &f) || f.Hint != function.OpenCell {
		return
	}
	if solid := plan.Envelope(n, weight); solid != "" {
		f.Hint = "a cell that nothing closes off is unbounded: put the campaign WITHIN a solid, such as " + solid +
			", or leave such cells out with WHERE bounded"
	}
}
