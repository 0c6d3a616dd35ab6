package bind

import (
	"nearcell/engine/expr"
	"nearcell/engine/plan"
	"nearcell/lang"
)

// join binds a JOIN. Its condition stays whole: a rule of package plan makes keys
// out of the equalities in it.
func (b *binder) join(j *lang.JoinSource) (bound, error) {
	if j.Kind == lang.RightJoin || j.Kind == lang.FullJoin {
		p := b.notYet(j, string(j.Kind)+" JOIN")
		if j.Kind == lang.RightJoin {
			p.WithHint("exchange the sides and write LEFT JOIN")
		}
		return bound{}, p
	}
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
	n := &plan.Join{Kind: plan.Inner, Left: left.node, Right: right.node}
	if j.Kind == lang.LeftJoin {
		n.Kind = plan.Left
	}
	x := bound{n, left.scope.beside(right.scope)}
	if len(j.Using) > 0 {
		return x, b.using(j, n, left.scope, right.scope, x.scope)
	}
	if j.On == nil {
		return x, nil
	}
	on := &exprs{binder: b, scope: x.scope, clause: "ON"}
	n.Rest, err = on.condition(j.On)
	return x, err
}

// using joins by columns of one name, which the result then has once.
func (b *binder) using(j *lang.JoinSource, n *plan.Join, left, right, both *scope) error {
	var rest []expr.Expr
	for i := range j.Using {
		name := &j.Using[i]
		c := &lang.Column{At: name.At, Name: *name}
		l, err := left.resolve(b, c)
		if err != nil {
			return err
		}
		r, err := right.resolve(b, c)
		if err != nil {
			return err
		}
		at := len(left.columns) + r
		le := expr.NewColumn(l, left.columns[l].Field, b.at(name))
		re := expr.NewColumn(at, both.columns[at].Field, b.at(name))
		cond, err := expr.NewCompare(lang.Equals, le, re, b.at(name))
		if err != nil {
			return b.faulty(err, b.at(name), []expr.Expr{le, re})
		}
		both.columns[at].merged = true
		rest = append(rest, cond)
	}
	n.Rest = expr.AndAll(rest)
	return nil
}
