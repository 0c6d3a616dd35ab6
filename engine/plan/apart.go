package plan

import "nearcell/engine/expr"

// Apart is a copy of a plan in which no node stands twice, so that what is
// counted for a node is that of one place in the tree. Views share their plans.
// Common parts stay common, but have no node with the rest. Single rows without
// columns stay shared: Go gives things without size no address of their own.
func Apart(n Node) Node {
	a := &apart{map[*Common]*Common{}, map[*Query]*Query{}}
	return a.node(n)
}

type apart struct {
	commons map[*Common]*Common
	queries map[*Query]*Query
}

func (a *apart) node(n Node) Node {
	in := n.Inputs()
	out := make([]Node, len(in))
	for i, child := range in {
		out[i] = a.node(child)
	}
	switch s := n.(type) {
	case *Values:
		c := *s
		n = &c
	case *Scan:
		c := *s
		n = &c
	case *Shared:
		n = &Shared{Common: a.common(s.Common), Fields: s.Fields}
	case *Nearest:
		c := *s
		c.Common = a.common(s.Common)
		n = &c
	case *Lookup:
		c := *s
		c.Common = a.common(s.Common)
		n = &c
	default:
		n = withInputs(n, out)
	}
	if !hasQueries(n) {
		return n
	}
	return mapExprs(n, func(e expr.Expr) expr.Expr {
		return expr.Rewrite(e, func(e expr.Expr) expr.Expr {
			if s, ok := e.(*expr.Subquery); ok {
				return s.Of(a.query(s.Query.(*Query)))
			}
			return e
		})
	})
}

func (a *apart) common(c *Common) *Common {
	if a.commons[c] == nil {
		a.commons[c] = &Common{Name: c.Name, Plan: a.node(c.Plan)}
	}
	return a.commons[c]
}

func (a *apart) query(q *Query) *Query {
	if a.queries[q] == nil {
		a.queries[q] = &Query{Plan: a.node(q.Plan)}
	}
	return a.queries[q]
}

// QueriesOf lists the queries in the expressions of a node, each once.
func QueriesOf(n Node) []*expr.Subquery {
	var list []*expr.Subquery
	seen := map[*Query]bool{}
	for _, e := range exprsOf(n) {
		expr.Walk(e, func(e expr.Expr) {
			if s, ok := e.(*expr.Subquery); ok && !seen[s.Query.(*Query)] {
				seen[s.Query.(*Query)] = true
				list = append(list, s)
			}
		})
	}
	return list
}

// CommonOf is the common part that a node uses, nil where it uses none.
func CommonOf(n Node) *Common {
	switch n := n.(type) {
	case *Shared:
		return n.Common
	case *Lookup:
		return n.Common
	case *Nearest:
		return n.Common
	}
	return nil
}
