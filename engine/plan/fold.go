package plan

import (
	"nearcell/catalog/column"
	"nearcell/engine/expr"
)

// fold replaces constant parts of expressions by their values and drops
// conditions that are always TRUE. What cannot be computed stays and fails only
// where a row reaches it.
func fold(n Node) (Node, error) {
	return rewrite(n, func(n Node) (Node, error) {
		n = mapExprs(n, expr.Fold)
		switch n := n.(type) {
		case *Filter:
			if always(n.Cond) {
				return n.Input, nil
			}
		case *Join:
			if n.Rest != nil && always(n.Rest) {
				c := *n
				c.Rest = nil
				return &c, nil
			}
		}
		return n, nil
	})
}

// always reports whether a condition is the constant TRUE.
func always(e expr.Expr) bool {
	if e.CanFail() {
		return false
	}
	v, ok := expr.Const(e)
	return ok && v.Type == column.Boolean && !v.Null && v.I != 0
}
