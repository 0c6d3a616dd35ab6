package bind

import (
	"errors"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// outside is where a query inside an expression stands: names that mean nothing
// in the query are looked up there.
type outside struct {
	x    *exprs
	refs []expr.Expr // over the rows outside: what the query depends on
}

// inside binds a query that stands in an expression.
func (x *exprs) inside(q *lang.Query) (plan.Node, *outside, error) {
	o := &outside{x: x}
	b := *x.binder
	b.outer = o
	n, err := b.query(q)
	return n, o, err
}

// scalar binds a query that stands for a value.
func (x *exprs) scalar(e *lang.Subquery) (expr.Expr, error) {
	n, o, err := x.inside(e.Query)
	if err != nil {
		return nil, err
	}
	if err := x.oneColumn(e, n, "a query that stands for a value"); err != nil {
		return nil, err
	}
	q := &plan.Query{Plan: n}
	if !q.OneRow() {
		q.Plan = &plan.Limit{Input: n, Count: 2} // the second row is one too many
	}
	return expr.NewScalarQuery(q, o.refs, x.at(e)), nil
}

func (x *exprs) oneColumn(e lang.Node, n plan.Node, what string) error {
	if c := len(n.Schema()); c != 1 {
		return problem.New("columns", x.at(e), "%s has one column, and this one has %d", what, c).
			WithHint("name the one column that is meant")
	}
	return nil
}

// exists binds EXISTS (query), which asks for no column.
func (x *exprs) exists(e *lang.Exists) (expr.Expr, error) {
	n, o, err := x.inside(withoutStar(e.Query))
	if err != nil {
		return nil, err
	}
	q := &plan.Query{Plan: &plan.Limit{Input: &plan.Project{Input: n}, Count: 1}}
	return expr.NewExistsQuery(q, o.refs, x.at(e)), nil
}

// withoutStar is a query of EXISTS without its *, which stands for no column in
// particular and would have a lot to say.
func withoutStar(q *lang.Query) *lang.Query {
	s, ok := q.Body.(*lang.Select)
	if !ok || len(s.Items) != 1 || !s.Items[0].Star || !s.Items[0].Qualifier.IsZero() || s.Distinct ||
		len(s.GroupBy) > 0 || s.Having != nil || len(s.From) == 0 || len(q.OrderBy) > 0 {
		return q
	}
	bare, one := *s, *s.Items[0]
	one.Star = false
	one.Expr = &lang.Number{At: s.Items[0].At, Text: "1", IsInteger: true}
	bare.Items = []*lang.Item{&one}
	c := *q
	c.Body = &bare
	return &c
}

// inQuery binds x [NOT] IN (query).
func (x *exprs) inQuery(e *lang.In) (expr.Expr, error) {
	operand, err := x.bind(e.Operand)
	if err != nil {
		return nil, err
	}
	n, o, err := x.inside(e.Query)
	if err != nil {
		return nil, err
	}
	if err := x.oneColumn(e.Query, n, "the query of IN"); err != nil {
		return nil, err
	}
	return x.made(e, operand)(expr.NewInQuery(operand, &plan.Query{Plan: n}, o.refs, e.Not, x.at(e)))
}

// outward looks a column up around the query; err says why it is none of the
// query's own.
func (x *exprs) outward(c *lang.Column, err error) (expr.Expr, error) {
	o := x.outer
	var p *problem.Problem
	if o == nil || !errors.As(err, &p) || p.Code != "no-column" && p.Code != "no-source" {
		return nil, err
	}
	if x.scope != nil && !c.Qualifier.IsZero() && p.Code == "no-column" {
		return nil, err // the nearest source of that name is meant
	}
	e, outerErr := o.x.bind(c)
	if outerErr != nil {
		return nil, bothScopes(p, outerErr, o.x)
	}
	return o.ref(c, e), nil
}

// bothScopes says that a name means nothing here nor outside.
func bothScopes(p *problem.Problem, outer error, x *exprs) error {
	var q *problem.Problem
	if !errors.As(outer, &q) || q.Code != p.Code || x.scope == nil || len(x.scope.sources) == 0 {
		return outer
	}
	if p.Code == "no-source" {
		p.Message += ", nor outside of the query"
	} else {
		p.Message += ", nor outside in " + x.scope.what()
	}
	if p.Hint == "" {
		p.Hint = q.Hint
	}
	return p
}

// ref is the value of an expression over the rows outside, for the query.
func (o *outside) ref(c *lang.Column, e expr.Expr) expr.Expr {
	f := column.Field{Name: c.Name.Text, Type: e.Type(), Unit: e.Unit(), System: SystemOf(e)}
	at := o.x.at(c)
	for i, r := range o.refs {
		if expr.Equal(r, e) {
			return expr.NewOuter(i, f, at)
		}
	}
	o.refs = append(o.refs, e)
	return expr.NewOuter(len(o.refs)-1, f, at)
}

// ofOutside binds an aggregate that belongs to the groups outside: it stands in
// a query inside HAVING, SELECT or ORDER BY, and all columns in it are columns
// outside. ok is false where it is the query's own.
func (x *exprs) ofOutside(c *lang.Call) (expr.Expr, bool, error) {
	o := x.outer
	if o == nil || o.x.group == nil || o.x.within != "" || x.within != "" {
		return nil, false, nil
	}
	own, any := false, false
	for _, a := range append(append([]lang.Expr{}, c.Args...), c.Filter, c.Weight) {
		walk(a, func(e lang.Expr) {
			col, ok := e.(*lang.Column)
			if !ok {
				return
			}
			any = true
			if x.scope != nil {
				if hits, err := x.scope.find(x.binder, col.Qualifier, col.Name); err == nil && len(hits) > 0 {
					own = true
				}
			}
		})
	}
	if own || !any {
		return nil, false, nil
	}
	e, err := o.x.bind(c)
	if err != nil {
		return nil, true, err
	}
	return o.ref(&lang.Column{At: c.At, Name: c.Name}, e), true, nil
}
