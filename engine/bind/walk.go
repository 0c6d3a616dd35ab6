package bind

import (
	"nearcell/engine/function"
	"nearcell/lang"
)

func isAggregate(name string) bool { return function.LookupAggregate(name) != nil }

// walk calls visit for an expression and all expressions below it that belong
// to the same query.
func walk(e lang.Expr, visit func(lang.Expr)) {
	if e == nil {
		return
	}
	visit(e)
	switch e := e.(type) {
	case *lang.Unary:
		walk(e.Operand, visit)
	case *lang.Binary:
		walk(e.Left, visit)
		walk(e.Right, visit)
	case *lang.Between:
		walkAll([]lang.Expr{e.Operand, e.Low, e.High}, visit)
	case *lang.In:
		walk(e.Operand, visit)
		walkAll(e.List, visit)
	case *lang.Quantified:
		walk(e.Operand, visit)
	case *lang.Like:
		walkAll([]lang.Expr{e.Operand, e.Pattern, e.Escape}, visit)
	case *lang.Is:
		walk(e.Operand, visit)
		walk(e.From, visit)
	case *lang.AtTimeZone:
		walk(e.Operand, visit)
		walk(e.Zone, visit)
	case *lang.Cast:
		walk(e.Operand, visit)
	case *lang.Case:
		walk(e.Operand, visit)
		for _, w := range e.Whens {
			walk(w.Condition, visit)
			walk(w.Result, visit)
		}
		walk(e.Else, visit)
	case *lang.Overlaps:
		walkAll(e.Left.Values, visit)
		walkAll(e.Right.Values, visit)
	case *lang.Call:
		walkCall(e, visit)
	}
}

func walkCall(c *lang.Call, visit func(lang.Expr)) {
	walkAll(c.Args, visit)
	for _, k := range c.OrderBy {
		walk(k.Expr, visit)
	}
	walkAll([]lang.Expr{c.Along, c.AtValue, c.Filter, c.Weight}, visit)
	if c.Over != nil {
		walkAll(c.Over.PartitionBy, visit)
		for _, k := range c.Over.OrderBy {
			walk(k.Expr, visit)
		}
	}
}

func walkAll(list []lang.Expr, visit func(lang.Expr)) {
	for _, e := range list {
		walk(e, visit)
	}
}
