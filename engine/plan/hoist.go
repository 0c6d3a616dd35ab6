package plan

import (
	"nearcell/engine/expr"
	"nearcell/lang"
)

// hoist makes common parts of what does not depend on the row outside in queries
// that do: it is computed once and not for every such row. Where a condition asks
// that columns of it equal values of the row outside, its rows are found by hash.
//
// Safe: the rows of a part are the same for every row outside. A part that can
// fail is left alone where a LIMIT above it may spare some of its rows.
func hoist(n Node) (Node, error) {
	return rewrite(n, func(n Node) (Node, error) {
		if !hasQueries(n) {
			return n, nil
		}
		return mapExprs(n, func(e expr.Expr) expr.Expr {
			return expr.Rewrite(e, func(e expr.Expr) expr.Expr {
				s, ok := e.(*expr.Subquery)
				if !ok || len(s.Outer) == 0 {
					return e
				}
				return s.Of(&Query{Plan: hoisted(s.Query.(*Query).Plan, false)})
			})
		}), nil
	})
}

func hasQueries(n Node) bool {
	for _, e := range exprsOf(n) {
		if expr.HasQuery(e) {
			return true
		}
	}
	return false
}

// hoisted is a plan with common parts in the place of what does not read the row
// outside. limited: a step above may not take all rows.
func hoisted(n Node, limited bool) Node {
	if !ReadsOuter(n) {
		if limited && exprsFail(n) {
			return n
		}
		return commonPart(n)
	}
	if f, ok := n.(*Filter); ok && !ReadsOuter(f.Input) && !(limited && exprsFail(f.Input)) {
		return lookup(f)
	}
	known := func(base Node) bool { return !ReadsOuter(base) && !(limited && exprsFail(base)) }
	switch x := n.(type) {
	case *Sort:
		if near, ok := nearestFirst(x, known); ok {
			return near
		}
	case *Aggregate:
		if near, ok := nearestLeast(x, known); ok {
			return near
		}
	}
	if l, ok := n.(*Limit); ok {
		limited = limited || l.Count >= 0
	}
	in := n.Inputs()
	if len(in) == 0 {
		return n
	}
	out := make([]Node, len(in))
	for i, child := range in {
		out[i] = hoisted(child, limited)
	}
	return withInputs(n, out)
}

// commonPart shares what costs anything.
func commonPart(n Node) Node {
	switch n.(type) {
	case *One, *Values, *Scan, *Shared:
		return n
	}
	return &Shared{Common: &Common{Name: "rows of a query", Plan: n}, Fields: n.Schema()}
}

// exprsFail reports whether an expression or an aggregate of a plan can fail.
func exprsFail(n Node) bool {
	for _, e := range exprsOf(n) {
		if e.CanFail() {
			return true
		}
	}
	if a, ok := n.(*Aggregate); ok {
		for i := range a.Calls {
			if callFails(&a.Calls[i]) {
				return true
			}
		}
	}
	if w, ok := n.(*Window); ok && windowFails(w) {
		return true
	}
	for _, in := range n.Inputs() {
		if exprsFail(in) {
			return true
		}
	}
	return false
}

// lookup finds by hash the rows for which columns equal what the row outside
// says.
func lookup(f *Filter) Node {
	l := &Lookup{Fields: f.Input.Schema()}
	var rest []expr.Expr
	for _, c := range expr.Conjuncts(f.Cond) {
		if key, value, ok := equalsOuter(c); ok {
			l.Keys, l.Values = append(l.Keys, key), append(l.Values, value)
			continue
		}
		rest = append(rest, c)
	}
	if len(l.Keys) == 0 {
		c := *f
		c.Input = commonPart(f.Input)
		return &c
	}
	if s, ok := f.Input.(*Shared); ok {
		l.Common = s.Common
	} else {
		l.Common = &Common{Name: "rows of a query", Plan: f.Input}
	}
	for _, v := range l.Values {
		if v.CanFail() {
			// then the Lookup gives all rows, and the condition fails where a row
			// reaches what fails
			return &Filter{Input: l, Cond: f.Cond, Clause: f.Clause}
		}
	}
	if len(rest) == 0 {
		return l
	}
	return &Filter{Input: l, Cond: expr.AndAll(rest), Clause: f.Clause}
}

// equalsOuter takes an equality apart into what reads columns and what reads the
// row outside. What reads the row outside may fail.
func equalsOuter(e expr.Expr) (key, value expr.Expr, ok bool) {
	eq, is := e.(*expr.Compare)
	if !is || eq.Op != lang.Equals || expr.HasQuery(e) || !keyTypes(eq.Left.Type(), eq.Right.Type()) {
		return nil, nil, false
	}
	key, value = eq.Left, eq.Right
	if expr.HasOuter(key) {
		key, value = value, key
	}
	if !readsColumns(key) || key.CanFail() || expr.HasOuter(key) || readsColumns(value) || !expr.HasOuter(value) {
		return nil, nil, false
	}
	return key, value, true
}

func readsColumns(e expr.Expr) bool {
	found := false
	expr.Walk(e, func(e expr.Expr) {
		_, is := e.(*expr.Column)
		found = found || is
	})
	return found
}
