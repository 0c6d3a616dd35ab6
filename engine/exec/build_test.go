package exec

import (
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/plan"
	"nearcell/engine/plan/plantest"
	"nearcell/lang"
)

func must(e expr.Expr, err error) expr.Expr {
	if err != nil {
		panic(err)
	}
	return e
}

func contains(s, part string) bool { return strings.Contains(s, part) }

func arith(op string, l, r expr.Expr) expr.Expr {
	return must(expr.NewArith(lang.Op(op), l, r, plantest.Nowhere))
}

// compare is "column op constant".
func compare(op string, schema column.Schema, c int, with float64) expr.Expr {
	v := expr.NewConst(column.Float(with), plantest.Nowhere)
	return must(expr.NewCompare(lang.Op(op), plantest.Column(schema, c), v, plantest.Nowhere))
}

func columns(schema column.Schema, list ...int) []expr.Expr {
	var out []expr.Expr
	for _, c := range list {
		out = append(out, plantest.Column(schema, c))
	}
	return out
}

func fields(schema column.Schema, list ...int) column.Schema {
	var out column.Schema
	for _, c := range list {
		out = append(out, schema[c])
	}
	return out
}

// calls makes aggregates of pairs of name and column.
func calls(schema column.Schema, list ...any) []plan.Call {
	var out []plan.Call
	for i := 0; i < len(list); i += 2 {
		name, c := list[i].(string), list[i+1].(int)
		out = append(out, plan.Call{Fn: function.LookupAggregate(name), Args: columns(schema, c),
			Text: name + "(" + schema[c].Name + ")"})
	}
	return out
}
