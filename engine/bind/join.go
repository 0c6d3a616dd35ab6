package bind

import (
	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// join binds a JOIN. Its condition stays whole: a rule of package plan makes keys
// out of the equalities in it.
func (b *binder) join(j *lang.JoinSource) (bound, error) {
	left, err := b.fromSource(j.Left)
	if err != nil {
		return bound{}, err
	}
	right, err := b.fromSource(j.Right)
	if err != nil {
		return bound{}, err
	}
	if err := b.clash(left.scope, right.scope, j.Right); err != nil {
		return bound{}, err
	}
	both := left.scope.beside(right.scope)
	var cond expr.Expr
	switch {
	case len(j.Using) > 0:
		if cond, err = b.using(j, left.scope, right.scope, both); err != nil {
			return bound{}, err
		}
	case j.On != nil:
		on := &exprs{binder: b, scope: both, clause: "ON"}
		if cond, err = on.condition(j.On); err != nil {
			return bound{}, err
		}
	}
	x := bound{joined(j.Kind, left.node, right.node, cond), both}
	if len(j.Using) > 0 {
		return b.merged(j, x, len(left.scope.columns))
	}
	return x, nil
}

// joined is the join of two sides; its columns are those of the left one, then
// those of the right one.
//
// RIGHT JOIN is LEFT JOIN of the sides in the other order. FULL JOIN is the rows
// of LEFT JOIN and then those rows of the right side that no left row matches;
// both sides are computed once.
func joined(kind lang.JoinKind, left, right plan.Node, cond expr.Expr) plan.Node {
	l, r := len(left.Schema()), len(right.Schema())
	switch kind {
	case lang.LeftJoin:
		return &plan.Join{Kind: plan.Left, Left: left, Right: right, Rest: cond}
	case lang.RightJoin:
		j := &plan.Join{Kind: plan.Left, Left: right, Right: left, Rest: exchanged(cond, l, r)}
		p := &plan.Project{Input: j}
		fields := j.Schema()
		for i := range l + r {
			at := (i + r) % (l + r)
			p.Exprs = append(p.Exprs, expr.NewColumn(at, fields[at], problem.Place{}))
			p.Fields = append(p.Fields, fields[at])
		}
		return p
	case lang.FullJoin:
		left, right = once(left, "left side of FULL JOIN"), once(right, "right side of FULL JOIN")
		with := &plan.Join{Kind: plan.Left, Left: left, Right: right, Rest: cond}
		p := &plan.Project{Input: &plan.Join{Kind: plan.Anti, Left: right, Right: left, Rest: exchanged(cond, l, r)}, Fields: with.Schema()}
		for i, f := range with.Schema() {
			if i < l {
				p.Exprs = append(p.Exprs, expr.NewConst(column.Value{Type: f.Type, Null: true, Unit: f.Unit}, problem.Place{}))
			} else {
				p.Exprs = append(p.Exprs, expr.NewColumn(i-l, f, problem.Place{}))
			}
		}
		return &plan.Union{Parts: []plan.Node{with, p}, Fields: with.Schema()}
	}
	return &plan.Join{Kind: plan.Inner, Left: left, Right: right, Rest: cond}
}

// exchanged is a condition over l left and r right columns where the right ones
// come first.
func exchanged(cond expr.Expr, l, r int) expr.Expr {
	to := make([]int, l+r)
	for i := range to {
		to[i] = (i + r) % (l + r)
	}
	return expr.Remap(cond, to)
}

// once is a node that is computed once however often it stands in the plan.
func once(n plan.Node, name string) plan.Node {
	switch n.(type) {
	case *plan.Scan, *plan.Values, *plan.One, *plan.Shared:
		return n
	}
	return &plan.Shared{Common: &plan.Common{Name: name, Plan: n}, Fields: n.Schema()}
}

// using is the condition that columns of one name are equal.
func (b *binder) using(j *lang.JoinSource, left, right, both *scope) (expr.Expr, error) {
	var conds []expr.Expr
	for i := range j.Using {
		name := &j.Using[i]
		l, r, err := b.usingPair(name, left, right)
		if err != nil {
			return nil, err
		}
		le := expr.NewColumn(l, left.columns[l].Field, b.at(name))
		re := expr.NewColumn(r, both.columns[r].Field, b.at(name))
		if err := b.oneSystem(left.columns[l].System, both.columns[r].System, b.at(name)); err != nil {
			return nil, err
		}
		cond, err := expr.NewCompare(lang.Equals, le, re, b.at(name))
		if err != nil {
			return nil, b.faulty(err, b.at(name), []expr.Expr{le, re})
		}
		conds = append(conds, cond)
	}
	return expr.AndAll(conds), nil
}

// usingPair finds a column of USING on both sides, as columns of the join.
func (b *binder) usingPair(name *lang.Name, left, right *scope) (l, r int, err error) {
	c := &lang.Column{At: name.At, Name: *name}
	if l, err = left.resolve(b, c); err != nil {
		return 0, 0, err
	}
	if r, err = right.resolve(b, c); err != nil {
		return 0, 0, err
	}
	return l, len(left.columns) + r, nil
}

// merged gives a join with USING its columns: first those of USING, which stand
// once, then the others of the left side and of the right side. Of a left (or
// inner) join the one copy is the left column, of a right join the right one, of a
// full join whichever is not NULL; the copies stay known under their source.
func (b *binder) merged(j *lang.JoinSource, x bound, l int) (bound, error) {
	out := &scope{sources: x.scope.sources}
	p := &plan.Project{Input: x.node}
	add := func(e expr.Expr, c scopeColumn) {
		p.Exprs, p.Fields = append(p.Exprs, e), append(p.Fields, c.Field)
		out.columns = append(out.columns, c)
	}
	left, right := &scope{sources: x.scope.sources, columns: x.scope.columns[:l]}, &scope{sources: x.scope.sources, columns: x.scope.columns[l:]}
	copies := make([]bool, len(x.scope.columns)) // not to be added again
	hidden := make([]bool, len(x.scope.columns)) // seen under their source alone
	for i := range j.Using {
		name := &j.Using[i]
		at, other, err := b.usingPair(name, left, right)
		if err != nil {
			return bound{}, err
		}
		place := b.at(name)
		le := expr.NewColumn(at, x.scope.columns[at].Field, place)
		re := expr.NewColumn(other, x.scope.columns[other].Field, place)
		if j.Kind != lang.FullJoin {
			if j.Kind == lang.RightJoin {
				at, other, le = other, at, re
			}
			copies[at], hidden[other] = true, true
			add(le, x.scope.columns[at])
			continue
		}
		e, err := expr.NewCall(function.LookupScalar("COALESCE"), []expr.Expr{le, re}, place)
		if err != nil {
			return bound{}, b.faulty(err, place, []expr.Expr{le, re})
		}
		hidden[at], hidden[other] = true, true
		c := x.scope.columns[at]
		c.Type, c.Unit, c.source = e.Type(), e.Unit(), len(out.sources)
		add(e, c)
	}
	if j.Kind == lang.FullJoin {
		out.sources = append(out.sources[:len(out.sources):len(out.sources)], scopeSource{what: "the join"})
	}
	for i, c := range x.scope.columns {
		if copies[i] {
			continue
		}
		c.merged = c.merged || hidden[i]
		add(expr.NewColumn(i, c.Field, b.at(j)), c)
	}
	return bound{p, out}, nil
}
