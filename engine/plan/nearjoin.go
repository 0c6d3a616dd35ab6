package plan

import (
	"nearcell/engine/expr"
	"nearcell/lang"
)

// Near says that only right rows whose point Right is within Within of the left row's
// point Left can match it. What matches, the condition decides as it would for
// every pair: Near only spares it pairs that are too far apart.
type Near struct {
	Left   expr.Expr // a POINT over the columns of the left side
	Right  expr.Expr // a POINT over those of the right side
	Within expr.Expr // over those of the left side
	// OfRight says that Within is over the right side instead: the farthest that any
	// right row reaches then bounds all pairs.
	OfRight bool
}

// nearJoins lets joins without other keys look up by a k-d tree which right rows a
// bound on their distance lets match: DISTANCE(a, b) <= r, < r or = r, where r reads one
// side alone.
//
// Safe: what can fail is still decided by the condition, for fewer pairs. Where the
// bound itself cannot be computed for a left row, or for any right one, all pairs stay.
func nearJoins(n Node) (Node, error) {
	return rewrite(n, func(n Node) (Node, error) {
		switch n := n.(type) {
		case *Join:
			return nearJoin(n, n.Rest), nil
		case *Filter:
			if j, ok := n.Input.(*Join); ok && j.Kind == Inner {
				c := *n
				c.Input = nearJoin(j, n.Cond)
				return &c, nil
			}
		}
		return n, nil
	})
}

// nearJoin takes the first bound on a distance in cond, which holds for all pairs that
// anybody wants.
func nearJoin(j *Join, cond expr.Expr) Node {
	if cond == nil || len(j.LeftKeys) > 0 || j.Near != nil {
		return j
	}
	left, right := len(j.Left.Schema()), len(j.Right.Schema())
	toLeft, toRight := sides(left, right)
	for _, e := range expr.Conjuncts(cond) {
		call, within, ok := distanceBound(e)
		ofRight := ok && !readsNothingBut(within, toLeft)
		if !ok || ofRight && !readsNothingBut(within, toRight) {
			continue
		}
		p, q := call.Args[0], call.Args[1]
		if readsOnly(p, toRight) {
			p, q = q, p
		}
		if !readsOnly(q, toRight) || !readsNothingBut(p, toLeft) || q.CanFail() || p.CanFail() || expr.HasQuery(p) || expr.HasQuery(q) {
			continue
		}
		c := *j
		c.Near = &Near{Left: p, Right: expr.Remap(q, toRight), Within: within, OfRight: ofRight}
		if ofRight {
			c.Near.Within = expr.Remap(within, toRight)
		}
		return &c
	}
	return j
}

// readsNothingBut reports whether all columns that e reads have a place in to.
func readsNothingBut(e expr.Expr, to []int) bool { return !readsColumns(e) || readsOnly(e, to) }

// distanceBound takes DISTANCE(p, q) <= r apart, whichever way it is written.
func distanceBound(e expr.Expr) (call *expr.Call, within expr.Expr, ok bool) {
	cmp, is := e.(*expr.Compare)
	if !is {
		return nil, nil, false
	}
	far, within, op := cmp.Left, cmp.Right, cmp.Op
	if c, is := within.(*expr.Call); is && c.Fn.Name == "DISTANCE" {
		turned := map[lang.Op]lang.Op{lang.Greater: lang.Less, lang.GreaterOrEqual: lang.LessOrEqual, lang.Equals: lang.Equals}
		if first, is := far.(*expr.Call); !is || first.Fn.Name != "DISTANCE" {
			far, within, op = within, far, turned[op]
		}
	}
	call, is = far.(*expr.Call)
	ok = is && call.Fn.Name == "DISTANCE" && within.Type().Numeric() && (op == lang.Less || op == lang.LessOrEqual || op == lang.Equals)
	return call, within, ok
}
