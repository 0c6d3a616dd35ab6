package bind

import (
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// call binds a function or an aggregate.
func (x *exprs) call(c *lang.Call) (expr.Expr, error) {
	if c.Over != nil {
		return x.over(c)
	}
	if fn := function.LookupWindow(c.Name.Text); fn != nil {
		return nil, problem.New("window", x.at(c), "%s needs OVER (…), which says among which rows", fn.Name).WithHint("%s", fn.Signature)
	}
	if fn := function.LookupAggregate(c.Name.Text); fn != nil {
		return x.aggregate(c, fn)
	}
	if c.Along != nil {
		return nil, x.notYet(c, strings.ToUpper(c.Name.Text)+"(… ALONG …)")
	}
	if c.Name.Is("POINT") {
		return x.point(c)
	}
	fn := function.LookupScalar(c.Name.Text)
	if fn == nil {
		return nil, x.noFunction(c)
	}
	if err := x.plainCall(c, fn.Name); err != nil {
		return nil, err
	}
	args, err := x.arguments(c, fn)
	if err != nil {
		return nil, err
	}
	return x.made(c, args...)(expr.NewCall(fn, args, x.at(c)))
}

// arguments binds the arguments of a scalar function; EXTRACT(HOUR FROM t) has a
// word for its first.
func (x *exprs) arguments(c *lang.Call, fn *function.Scalar) ([]expr.Expr, error) {
	if fn.Name == "EXTRACT" {
		field, ok := lang.Expr(nil), false
		if len(c.Args) == 2 && len(c.Separators) == 1 && c.Separators[0] == lang.FromWord {
			field, ok = c.Args[0], true
		}
		word, isName := field.(*lang.Column)
		if !ok || !isName || !word.Qualifier.IsZero() {
			return nil, problem.New("arguments", x.at(c), "EXTRACT is written EXTRACT(HOUR FROM t)")
		}
		t, err := x.bind(c.Args[1])
		if err != nil {
			return nil, err
		}
		return []expr.Expr{expr.NewConst(column.String(strings.ToUpper(word.Name.Text)), x.at(word)), t}, nil
	}
	if fn.Name == "TRIM" && len(c.Args) == 2 && (len(c.Separators) != 1 || c.Separators[0] != lang.FromWord) {
		return nil, problem.New("arguments", x.at(c), "TRIM is written TRIM(text), or TRIM(' ' FROM text) for a character of its own")
	}
	if c.Separators != nil && fn.Name != "SUBSTRING" && fn.Name != "TRIM" {
		return nil, problem.New("arguments", x.at(c), "the arguments of %s are separated by commas", fn.Name).WithHint("%s", fn.Signature)
	}
	return x.all(c.Args)
}

// plainCall refuses what may only follow an aggregate.
func (x *exprs) plainCall(c *lang.Call, name string) error {
	what := ""
	at := x.at(c)
	switch {
	case c.Star:
		what = "*"
	case c.Distinct:
		what = "DISTINCT"
	case c.OrderBy != nil:
		what, at = "ORDER BY", x.at(c.OrderBy[0])
	case c.Filter != nil:
		what, at = "FILTER", x.at(c.Filter)
	case c.Weight != nil:
		what, at = "WEIGHTED BY", x.at(c.Weight)
	default:
		return nil
	}
	return problem.New("arguments", at, "%s takes no %s: it is a function of one row, not an aggregate", name, what)
}

func (x *exprs) point(c *lang.Call) (expr.Expr, error) {
	if err := x.plainCall(c, "POINT"); err != nil {
		return nil, err
	}
	if len(c.Args) != 3 || c.Separators != nil {
		return nil, problem.New("arguments", x.at(c), "POINT takes three numbers: POINT(1.5, 2, 0.3)")
	}
	v, err := x.all(c.Args)
	if err != nil {
		return nil, err
	}
	return x.made(c, v...)(expr.NewPoint(v[0], v[1], v[2], x.at(c)))
}

func (x *exprs) noFunction(c *lang.Call) error {
	name := strings.ToUpper(c.Name.Text)
	if function.Planned(c.Name.Text) {
		return x.notYet(c, name)
	}
	p := problem.New("no-function", x.at(&c.Name), "there is no function '%s'", c.Name.Text)
	if _, ok := relation.Lookup(name); ok {
		return p.WithHint("%s OF … is a relation and stands in FROM", name)
	}
	if here := function.Elsewhere(c.Name.Text); here != "" {
		return p.WithHint("write %s", here)
	}
	return didYouMean(p, c.Name.Text, append(function.Names(), "POINT"))
}

// aggregate binds an aggregate: where rows are groups it becomes a column of the
// aggregation.
func (x *exprs) aggregate(c *lang.Call, fn *function.Aggregate) (expr.Expr, error) {
	if e, ok, err := x.ofOutside(c); ok {
		return e, err
	}
	switch {
	case x.within != "":
		return nil, problem.New("nested-aggregate", x.at(c), "%s stands inside %s, and an aggregate cannot hold another", fn.Name, x.within).
			WithHint("compute the inner one in a query of its own: FROM (SELECT …)")
	case x.group == nil:
		p := problem.New("aggregate", x.at(c), "%s cannot stand in %s, where rows are still single", fn.Name, x.clause)
		if x.clause == "WHERE" {
			p.WithHint("conditions on groups stand in HAVING")
		}
		if x.scope == nil {
			p = problem.New("aggregate", x.at(c), "%s needs rows, and there are none here", fn.Name)
		}
		return nil, p
	}
	if err := x.aggregateClauses(c, fn); err != nil {
		return nil, err
	}
	if e, isCensored, err := x.censored(c, fn); isCensored {
		return e, err
	}
	inner := *x
	inner.within, inner.aliases = fn.Name, nil
	call := plan.Call{Fn: fn, Distinct: c.Distinct, Place: x.at(c), Text: x.text(c)}
	result, err := inner.aggregateParts(c, &call)
	if err != nil {
		return nil, err
	}
	return x.group.call(x, call, column.Field{Name: call.Text, Type: result.Type, Unit: result.Unit, System: systemOfCall(&call, result.Type)}), nil
}

// aggregateParts binds the arguments of an aggregate and what follows it.
func (x *exprs) aggregateParts(c *lang.Call, call *plan.Call) (function.Result, error) {
	var err error
	if call.Args, err = x.aggregateArguments(c); err != nil {
		return function.Result{}, err
	}
	if c.Filter != nil {
		f := *x
		f.clause = "FILTER"
		if call.Filter, err = f.condition(c.Filter); err != nil {
			return function.Result{}, err
		}
	}
	if c.Weight != nil {
		if call.Weight, err = x.bind(c.Weight); err != nil {
			return function.Result{}, err
		}
	}
	for _, k := range c.OrderBy {
		e, err := x.bind(k.Expr)
		if err != nil {
			return function.Result{}, err
		}
		call.OrderBy = append(call.OrderBy, sortKey(e, k))
	}
	return x.checked(c, call)
}

// aggregateArguments binds the arguments; those of INTERPOLATE are y, x, v and the
// word behind OUTSIDE.
func (x *exprs) aggregateArguments(c *lang.Call) ([]expr.Expr, error) {
	if c.Along == nil {
		return x.all(c.Args)
	}
	if len(c.Args) != 1 {
		return nil, problem.New("arguments", x.at(c), "%s takes one value before ALONG, not %d", strings.ToUpper(c.Name.Text), len(c.Args))
	}
	args, err := x.all([]lang.Expr{c.Args[0], c.Along, c.AtValue})
	if err != nil {
		return nil, err
	}
	outside := function.OutsideNull
	if !c.Outside.IsZero() {
		var ok bool
		if outside, ok = function.OutsideNamed(strings.ToUpper(c.Outside.Text)); !ok {
			return nil, problem.New("arguments", x.at(&c.Outside), "OUTSIDE is NULL, HOLD or FAIL, not '%s'", c.Outside.Text)
		}
	}
	return append(args, expr.NewConst(column.String(outside.String()), x.at(c))), nil
}

// aggregateClauses checks what follows an aggregate against what it takes.
func (x *exprs) aggregateClauses(c *lang.Call, fn *function.Aggregate) error {
	switch {
	case fn.Along && c.Along == nil:
		return problem.New("arguments", x.at(c), "%s needs ALONG and AT", fn.Name).WithHint("%s", fn.Signature)
	case fn.Along && c.Distinct:
		return problem.New("arguments", x.at(c), "%s takes no DISTINCT: rows that repeat change nothing", fn.Name)
	case c.Along != nil && !fn.Along:
		return problem.New("arguments", x.at(c), "%s takes no ALONG", fn.Name).WithHint("%s", fn.Signature)
	case c.Separators != nil:
		return problem.New("arguments", x.at(c), "the arguments of %s are separated by commas", fn.Name).WithHint("%s", fn.Signature)
	case c.Star && !fn.Star:
		return problem.New("arguments", x.at(c), "%s(*) has no meaning: * stands in COUNT only", fn.Name).WithHint("%s", fn.Signature)
	case c.Weight != nil && !fn.Weighted:
		return problem.New("arguments", x.at(c.Weight), "%s cannot be weighted", fn.Name).
			WithHint("%s", weightedNames())
	case c.Weight != nil && c.Distinct:
		return problem.New("arguments", x.at(c), "DISTINCT and WEIGHTED BY do not go together: equal values may have different weights")
	case len(c.OrderBy) > 0 && !fn.Ordered:
		return problem.New("arguments", x.at(c.OrderBy[0]), "%s takes no ORDER BY: its value does not depend on an order", fn.Name)
	case len(c.OrderBy) == 0 && fn.Ordered:
		return problem.New("arguments", x.at(c), "%s needs an order", fn.Name).WithHint("%s", fn.Signature)
	}
	return nil
}

func weightedNames() string {
	var names []string
	for _, fn := range function.Aggregates() {
		if fn.Weighted {
			names = append(names, fn.Name)
		}
	}
	return "WEIGHTED BY may follow " + strings.Join(names, ", ")
}

// checked lets the aggregate check its arguments and casts them as it wants.
func (x *exprs) checked(c *lang.Call, call *plan.Call) (function.Result, error) {
	args := make([]function.Arg, len(call.Args))
	for i, a := range call.Args {
		args[i] = argument(a)
	}
	var weight *function.Arg
	if call.Weight != nil {
		w := argument(call.Weight)
		weight = &w
	}
	result, err := call.Fn.Check(args, weight)
	if err != nil {
		at := x.at(c)
		if c.Weight != nil && isWeightError(err) {
			at = x.at(c.Weight)
		}
		return result, x.faulty(err, at, call.Args)
	}
	if err := x.castArgs(c, call.Args, result.Args); err != nil {
		return result, err
	}
	if call.Weight != nil && call.Weight.Type() == column.Integer {
		call.Weight, err = x.made(c)(expr.NewCast(call.Weight, column.Real, call.Weight.Place()))
	}
	return result, err
}

// castArgs casts arguments to the types that the function wants.
func (x *exprs) castArgs(c *lang.Call, args []expr.Expr, types []column.Type) error {
	for i, t := range types {
		if i < len(args) && args[i].Type() != t {
			cast, err := x.made(c)(expr.NewCast(args[i], t, args[i].Place()))
			if err != nil {
				return err
			}
			args[i] = cast
		}
	}
	return nil
}

func argument(e expr.Expr) function.Arg {
	a := function.Arg{Type: e.Type(), Unit: e.Unit()}
	if v, ok := expr.Const(e); ok {
		a.Const = &v
	}
	return a
}
