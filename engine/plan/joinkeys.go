package plan

import (
	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/lang"
)

// joinKeys makes keys out of equalities between the two sides of a join, so
// that it need not look at every pair. Both say the same: NULL equals nothing,
// and a key compares an INTEGER with a REAL as exactly as = does. Keys that can
// fail are left alone, since they are computed for rows without a partner too.
func joinKeys(n Node) (Node, error) {
	return rewrite(n, func(n Node) (Node, error) {
		j, ok := n.(*Join)
		if !ok || j.Rest == nil {
			return n, nil
		}
		c := *j
		left, right := len(j.Left.Schema()), len(j.Right.Schema())
		var rest []expr.Expr
		for _, e := range expr.Conjuncts(j.Rest) {
			l, r, ok := keyPair(e, left, right)
			if !ok {
				rest = append(rest, e)
				continue
			}
			c.LeftKeys = append(c.LeftKeys[:len(c.LeftKeys):len(c.LeftKeys)], l)
			c.RightKeys = append(c.RightKeys[:len(c.RightKeys):len(c.RightKeys)], r)
		}
		c.Rest = expr.AndAll(rest)
		return &c, nil
	})
}

// keyPair takes an equality apart into what the left and what the right side
// computes.
func keyPair(e expr.Expr, left, right int) (l, r expr.Expr, ok bool) {
	eq, is := keyEquality(e)
	if !is {
		return nil, nil, false
	}
	toLeft, toRight := sides(left, right)
	l, r = eq.Left, eq.Right
	if readsOnly(l, toRight) {
		l, r = r, l
	}
	if !readsOnly(l, toLeft) || !readsOnly(r, toRight) {
		return nil, nil, false
	}
	return l, expr.Remap(r, toRight), true
}

// keyEquality is a condition that may be a key, whichever side computes what.
func keyEquality(e expr.Expr) (*expr.Compare, bool) {
	eq, is := e.(*expr.Compare)
	return eq, is && eq.Op == lang.Equals && !e.CanFail() && keyTypes(eq.Left.Type(), eq.Right.Type())
}

func keyTypes(a, b column.Type) bool {
	return a != column.Null && (a == b || a.Numeric() && b.Numeric())
}
