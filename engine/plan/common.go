package plan

import "nearcell/engine/expr"

// Inline puts the plan of a common part where it is used if that is one place,
// computed once: then the rules know more. A query that depends on the row outside
// uses what is in it many times.
func Inline(n Node) Node {
	uses := map[*Common]int{}
	countUses(n, 1, uses, map[*Common]bool{})
	return inlined(n, uses, map[*Common]*Common{}, map[*Query]*Query{})
}

func countUses(n Node, times int, uses map[*Common]int, seen map[*Common]bool) {
	for _, e := range exprsOf(n) {
		expr.Walk(e, func(e expr.Expr) {
			if s, ok := e.(*expr.Subquery); ok {
				inner := times
				if len(s.Outer) > 0 {
					inner = 2
				}
				countUses(s.Query.(*Query).Plan, inner, uses, seen)
			}
		})
	}
	if s, ok := n.(*Shared); ok {
		uses[s.Common] += times
		if !seen[s.Common] {
			seen[s.Common] = true
			countUses(s.Common.Plan, 1, uses, seen)
		}
	}
	for _, in := range n.Inputs() {
		countUses(in, times, uses, seen)
	}
}

func inlined(n Node, uses map[*Common]int, commons map[*Common]*Common, queries map[*Query]*Query) Node {
	out, _ := rewrite(n, func(n Node) (Node, error) {
		if s, ok := n.(*Shared); ok {
			if uses[s.Common] == 1 {
				return inlined(s.Common.Plan, uses, commons, queries), nil
			}
			c := commons[s.Common]
			if c == nil {
				c = &Common{Name: s.Common.Name, Plan: inlined(s.Common.Plan, uses, commons, queries)}
				commons[s.Common] = c
			}
			return &Shared{Common: c, Fields: s.Fields}, nil
		}
		if !hasQueries(n) {
			return n, nil
		}
		return mapExprs(n, func(e expr.Expr) expr.Expr {
			return expr.Rewrite(e, func(e expr.Expr) expr.Expr {
				s, ok := e.(*expr.Subquery)
				if !ok {
					return e
				}
				q := s.Query.(*Query)
				if queries[q] == nil {
					queries[q] = &Query{Plan: inlined(q.Plan, uses, commons, queries)}
				}
				return s.Of(queries[q])
			})
		}), nil
	})
	return out
}
