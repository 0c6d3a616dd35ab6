package bind

import (
	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/plan"
	"nearcell/lang"
)

// opposite are the comparisons that hold where others do not.
var opposite = map[lang.Op]lang.Op{lang.Equals: lang.NotEquals, lang.NotEquals: lang.Equals, lang.Less: lang.GreaterOrEqual,
	lang.GreaterOrEqual: lang.Less, lang.Greater: lang.LessOrEqual, lang.LessOrEqual: lang.Greater}

// quantified binds x > ANY (query) and x > ALL (query). ANY is TRUE where the comparison
// is for a row, else NULL where it is for one, else FALSE: of no rows FALSE. ALL is what
// the opposite is not for any row: of no rows TRUE.
func (x *exprs) quantified(e *lang.Quantified) (expr.Expr, error) {
	if e.All == (e.Op == lang.NotEquals) && (e.Op == lang.Equals || e.Op == lang.NotEquals) {
		return x.inQuery(&lang.In{At: e.At, Not: e.All, Operand: e.Operand, Query: e.Query})
	}
	operand, err := x.bind(e.Operand)
	if err != nil {
		return nil, err
	}
	n, o, err := x.inside(e.Query)
	if err != nil {
		return nil, err
	}
	if err := x.oneColumn(e.Query, n, "the query of a comparison"); err != nil {
		return nil, err
	}
	op := e.Op
	if e.All {
		op = opposite[op]
	}
	at := x.at(e)
	value := expr.NewColumn(0, n.Schema()[0], x.at(e.Query))
	if _, err := x.made(e, operand, value)(expr.NewCompare(op, operand, value, at)); err != nil {
		return nil, err // in the words of the query outside
	}
	holds, err := expr.NewCompare(op, o.operand(operand), value, at)
	if err != nil {
		return nil, err
	}
	open, err := expr.NewIs(holds, lang.IsUnknown, false, at)
	if err != nil {
		return nil, err
	}
	counts := &plan.Aggregate{Input: n}
	for i, filter := range []expr.Expr{holds, open} {
		name := []string{"rows for which it holds", "rows for which it is unknown"}[i]
		counts.Calls = append(counts.Calls, plan.Call{Fn: function.LookupAggregate("COUNT"), Filter: filter, Place: at, Text: name})
		counts.Fields = append(counts.Fields, column.Field{Name: name, Type: column.Integer})
	}
	whens := make([]expr.When, 2)
	for i, result := range []expr.Expr{expr.NewConst(column.Bool(!e.All), at), expr.NewConst(column.NullOf(column.Boolean), at)} {
		some, err := expr.NewCompare(lang.Greater, expr.NewColumn(i, counts.Fields[i], at), expr.NewConst(column.Int(0), at), at)
		if err != nil {
			return nil, err
		}
		whens[i] = expr.When{Cond: some, Result: result}
	}
	answer, err := expr.NewCase(nil, whens, expr.NewConst(column.Bool(e.All), at), at)
	if err != nil {
		return nil, err
	}
	p := &plan.Project{Input: counts, Exprs: []expr.Expr{answer}, Fields: column.Schema{{Name: "answer", Type: column.Boolean}}}
	return expr.NewScalarQuery(&plan.Query{Plan: p}, o.refs, at), nil
}

// operand is the value of an expression over the rows outside, for the query.
func (o *outside) operand(e expr.Expr) expr.Expr {
	f := column.Field{Name: e.String(), Type: e.Type(), Unit: e.Unit()}
	for i, r := range o.refs {
		if expr.Equal(r, e) {
			return expr.NewOuter(i, f, e.Place())
		}
	}
	o.refs = append(o.refs, e)
	return expr.NewOuter(len(o.refs)-1, f, e.Place())
}
