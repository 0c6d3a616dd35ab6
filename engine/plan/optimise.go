package plan

import "nearcell/engine/expr"

// Rule is one way to improve a plan. A rule gives a new tree and leaves the one
// that it was given as it is.
type Rule struct {
	Name  string
	Apply func(Node) (Node, error)
}

// Rules are all rules, in the order in which Optimise applies them: the queries
// inside expressions first, so that those which become joins are joins for the
// rules after it; conditions are split and moved once they are folded, equalities
// become keys once they have arrived at their join, and columns are dropped last,
// when it is settled who reads them. What is left of the queries shares what does
// not depend on the row outside.
var Rules []Rule

func init() { // inside calls Optimise
	Rules = []Rule{
		{"queries", func(n Node) (Node, error) { return newOptimiser().inside(n) }},
		{"unnest", unnest},
		{"fold", fold},
		{"push down", pushDown},
		{"join order", joinOrder},
		{"join keys", joinKeys},
		{"top", top},
		{"prune", prune},
		{"nearest", nearest},
		{"hoist", hoist},
		{"near joins", nearJoins},
		{"shared cells", sharedCells},
	}
}

// Optimise applies every rule once.
func Optimise(n Node) (Node, error) { return newOptimiser().optimise(n) }

// optimiser remembers what became of queries and common parts, so that what was
// one stays one.
type optimiser struct {
	queries map[*Query]*Query
	commons map[*Common]*Common
	apply   func(Node) (Node, error) // what becomes of their plans
}

func newOptimiser() *optimiser {
	o := &optimiser{queries: map[*Query]*Query{}, commons: map[*Common]*Common{}}
	o.apply = o.optimise
	return o
}

func (o *optimiser) optimise(n Node) (Node, error) {
	n, err := o.inside(n)
	for i := 1; err == nil && i < len(Rules); i++ {
		n, err = Rules[i].Apply(n)
	}
	return n, err
}

// inside applies it to the queries in expressions and the common parts of a plan.
func (o *optimiser) inside(n Node) (Node, error) {
	var failed error
	return rewrite(n, func(n Node) (Node, error) {
		switch s := n.(type) {
		case *Shared:
			c, err := o.common(s.Common)
			return &Shared{Common: c, Fields: s.Fields}, err
		case *Nearest:
			c, err := o.common(s.Common)
			l := *s
			l.Common = c
			return &l, err
		case *Lookup:
			c, err := o.common(s.Common)
			l := *s
			l.Common = c
			return &l, err
		}
		for _, e := range exprsOf(n) {
			if !expr.HasQuery(e) {
				continue
			}
			n = mapExprs(n, func(e expr.Expr) expr.Expr {
				return expr.Rewrite(e, func(e expr.Expr) expr.Expr {
					s, ok := e.(*expr.Subquery)
					if !ok {
						return e
					}
					q, err := o.query(s.Query.(*Query))
					if err != nil {
						failed = err
						return e
					}
					return s.Of(q)
				})
			})
			break
		}
		return n, failed
	})
}

func (o *optimiser) query(q *Query) (*Query, error) {
	if better, ok := o.queries[q]; ok {
		return better, nil
	}
	n, err := o.apply(q.Plan)
	if err != nil {
		return nil, err
	}
	o.queries[q] = &Query{Plan: n}
	return o.queries[q], nil
}

func (o *optimiser) common(c *Common) (*Common, error) {
	if better, ok := o.commons[c]; ok {
		return better, nil
	}
	n, err := o.apply(c.Plan)
	if err != nil {
		return nil, err
	}
	o.commons[c] = &Common{Name: c.Name, Plan: n}
	return o.commons[c], nil
}
