package bind

import (
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/note"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// censored looks whether an aggregate is asked of a column that CENSORED has read:
// a text, beside which stand its two bounds. Which bound is meant, the aggregate does
// not say, and the text must not be compared as one. A quantile has an answer all the
// same where both bounds give the same: then it does not matter.
func (x *exprs) censored(c *lang.Call, fn *function.Aggregate) (e expr.Expr, isCensored bool, err error) {
	if len(c.Args) == 0 || x.scope == nil || fn.Name == "COUNT" || fn.Ordered {
		return nil, false, nil
	}
	name, ok := c.Args[0].(*lang.Column)
	if !ok {
		return nil, false, nil
	}
	low, high, ok := x.boundsOf(name)
	if !ok {
		return nil, false, nil
	}
	if fn.Name != "QUANTILE" && fn.Name != "MEDIAN" {
		return nil, true, problem.New("censored", x.at(name), "'%s' has values that are only bounds: %s needs %s or %s", name.Name.Text, fn.Name,
			low.Name.Text, high.Name.Text).WithHint("%s(%s) and %s(%s) are what it can be at least and at most", fn.Name, low.Name.Text, fn.Name, high.Name.Text)
	}
	of := func(bound *lang.Column) *lang.Call {
		call := *c
		call.Args = append([]lang.Expr{bound}, c.Args[1:]...)
		return &call
	}
	x.say(note.Note, note.Rows, "%s is NULL where %s and %s do not agree on it", x.text(c), low.Name.Text, high.Name.Text)
	e, err = x.bind(&lang.Case{At: c.At, Whens: []*lang.When{{At: c.At,
		Condition: &lang.Binary{At: c.At, Op: lang.Equals, Left: of(low), Right: of(high)},
		Result:    of(low)}}})
	return e, true, err
}

// boundsOf are the bounds of a censored column, by their names.
func (x *exprs) boundsOf(c *lang.Column) (low, high *lang.Column, ok bool) {
	at, err := x.scope.find(x.binder, c.Qualifier, c.Name)
	if err != nil || len(at) != 1 || x.scope.columns[at[0]].Type != column.Text {
		return nil, nil, false
	}
	bound := func(suffix string) *lang.Column {
		name := c.Name
		name.Text = x.scope.columns[at[0]].Name + suffix
		b := &lang.Column{At: c.At, Qualifier: c.Qualifier, Name: name}
		found, err := x.scope.find(x.binder, b.Qualifier, b.Name)
		if err != nil || len(found) != 1 || x.scope.columns[found[0]].Type != column.Real {
			return nil
		}
		return b
	}
	low, high = bound("_low"), bound("_high")
	return low, high, low != nil && high != nil && !strings.EqualFold(low.Name.Text, high.Name.Text)
}
