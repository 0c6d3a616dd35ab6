package bind

import (
	"errors"
	"math"
	"math/big"
	"slices"
	"strconv"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/problem"
	"nearcell/lang"
)

func sorted(names []string) []string { slices.Sort(names); return names }

// literal binds a constant or a value of LET.
func (x *exprs) literal(e lang.Expr) (expr.Expr, error) {
	switch e := e.(type) {
	case *lang.Number:
		return x.number(e.Text, e.IsInteger, e)
	case *lang.Text:
		return expr.NewConst(column.String(e.Value), x.at(e)), nil
	case *lang.Boolean:
		return expr.NewConst(column.Bool(e.Value), x.at(e)), nil
	case *lang.Timestamp:
		return x.timestamp(e)
	case *lang.Interval:
		return x.interval(e)
	case *lang.Param:
		v, err := x.param(e)
		if err != nil {
			return nil, err
		}
		return expr.NewConst(v, x.at(e)), nil
	}
	return expr.NewConst(column.NullOf(column.Null), x.at(e)), nil
}

// number reads a number; whole ones that do not fit an INTEGER are refused
// rather than rounded.
func (x *exprs) number(text string, integer bool, n lang.Node) (expr.Expr, error) {
	if integer {
		i, err := strconv.ParseInt(text, 10, 64)
		if err != nil {
			return nil, problem.New("overflow", x.at(n), "%s is beyond INTEGER (64 bits)", text).WithHint("written %s.0 it is a REAL", text)
		}
		return expr.NewConst(column.Int(i), x.at(n)), nil
	}
	f, err := strconv.ParseFloat(text, 64)
	if err != nil || math.IsInf(f, 0) {
		return nil, problem.New("overflow", x.at(n), "%s is beyond REAL", text)
	}
	return expr.NewConst(column.Float(f), x.at(n)), nil
}

func (x *exprs) timestamp(e *lang.Timestamp) (expr.Expr, error) {
	us, _, err := column.ParseTimestamp(e.Text.Value)
	if err != nil {
		message := "'%s' is no time stamp"
		if errors.Is(err, column.ErrDate) {
			message = "'%s' has no such date or time of day"
		}
		return nil, problem.New("timestamp", x.at(e.Text), message, e.Text.Value).WithHint("write TIMESTAMP '2031-04-07 08:15:00'")
	}
	return expr.NewConst(column.Value{Type: column.Timestamp, I: us}, x.at(e)), nil
}

// intervalUnits are the units of INTERVAL in microseconds.
var intervalUnits = []struct {
	name string
	us   int64
}{
	{"MICROSECOND", 1}, {"MILLISECOND", 1000}, {"SECOND", 1e6}, {"MINUTE", 60e6}, {"HOUR", 3600e6}, {"DAY", 86400e6}, {"WEEK", 7 * 86400e6},
}

func (x *exprs) interval(e *lang.Interval) (expr.Expr, error) {
	unit, err := x.intervalUnit(e.Unit)
	if err != nil {
		return nil, err
	}
	text := strings.TrimSpace(e.Text.Value)
	count, ok := new(big.Rat).SetString(text)
	if !ok || strings.ContainsAny(text, "/xXpP_") || len(text) > 40 {
		return nil, problem.New("interval", x.at(e.Text), "'%s' is no number of %ss", e.Text.Value, strings.ToLower(e.Unit.Text)).
			WithHint("write INTERVAL '15' MINUTE")
	}
	us := count.Mul(count, new(big.Rat).SetInt64(unit))
	if !us.IsInt() {
		return nil, problem.New("interval", x.at(e.Text), "an interval has whole microseconds, and '%s' %s has not", e.Text.Value, e.Unit.Text)
	}
	if !us.Num().IsInt64() {
		return nil, problem.New("overflow", x.at(e), "this interval is too long")
	}
	return expr.NewConst(column.Value{Type: column.Interval, I: us.Num().Int64()}, x.at(e)), nil
}

func (x *exprs) intervalUnit(n lang.Name) (int64, error) {
	var names []string
	for _, u := range intervalUnits {
		if n.Is(u.name) || n.Is(u.name+"S") {
			return u.us, nil
		}
		names = append(names, u.name)
	}
	p := problem.New("interval", x.at(&n), "'%s' is no unit of an interval", n.Text)
	for _, long := range []string{"MONTH", "YEAR", "QUARTER"} {
		if n.Is(long) || n.Is(long+"S") {
			return 0, p.WithHint("its length would depend on the date: count in days")
		}
	}
	didYouMean(p, n.Text, names)
	if p.Hint == "" {
		p.WithHint("the units are SECOND, MINUTE, HOUR, DAY and WEEK")
	}
	return 0, p
}

// param is a value set by LET.
func (b *binder) param(e *lang.Param) (column.Value, error) {
	if v, ok := b.env.Params[lang.Fold(e.Name)]; ok {
		return v, nil
	}
	var names []string
	for name := range b.env.Params {
		names = append(names, name)
	}
	p := problem.New("no-parameter", b.at(e), "the value :%s is not set", e.Name)
	if near := lang.Nearest(e.Name, sorted(names)); near != "" {
		return column.Value{}, p.WithHint("did you mean :%s?", near)
	}
	return column.Value{}, p.WithHint("LET %s = …; before, or --let %s=…", e.Name, e.Name)
}

// constant binds an expression without columns.
func (b *binder) constant(e lang.Expr) (expr.Expr, error) {
	x := &exprs{binder: b, clause: "a value"}
	return x.bind(e)
}

// value computes an expression without columns.
func (b *binder) value(e lang.Expr) (column.Value, error) {
	x, err := b.constant(e)
	if err != nil {
		return column.Value{}, err
	}
	if v, ok := expr.Const(x); ok {
		return v, nil
	}
	if expr.HasQuery(x) {
		return column.Value{}, problem.New("query-here", b.at(e), "a query cannot stand here").
			WithHint("here a value is needed before any query runs: LET n = (SELECT …); before, and :n here")
	}
	var w expr.Work
	v, err := x.Eval(&w, &column.Batch{N: 1}, nil)
	if err != nil {
		var row *expr.RowError
		if errors.As(err, &row) {
			err = row.Err
		}
		return column.Value{}, problem.At(err, b.at(e))
	}
	value := v.Value(0)
	value.Unit = x.Unit()
	return value, nil
}

// real is the value of a constant expression that must be a number.
func (b *binder) real(e lang.Expr, what string) (float64, error) {
	v, err := b.value(e)
	if err != nil {
		return 0, err
	}
	switch {
	case v.Null:
		return 0, problem.New("types", b.at(e), "%s is NULL, not a number", what)
	case v.Type == column.Integer:
		return float64(v.I), nil
	case v.Type == column.Real && math.IsInf(v.F, 0):
		return 0, problem.New("types", b.at(e), "%s must be finite", what)
	case v.Type == column.Real:
		return v.F, nil
	}
	return 0, problem.New("types", b.at(e), "%s must be a number, not %s", what, v.Type)
}

// wholeNumber is the value of a constant expression that must be an INTEGER of
// at least 0.
func (b *binder) wholeNumber(e lang.Expr, what string) (int64, error) {
	v, err := b.value(e)
	if err != nil {
		return 0, err
	}
	if v.Null || v.Type != column.Integer || v.I < 0 {
		return 0, problem.New("types", b.at(e), "%s needs a whole number of at least 0", what)
	}
	return v.I, nil
}

// overSchema binds an expression over the columns of a file.
func (b *binder) overSchema(e lang.Expr, schema column.Schema, what string) (expr.Expr, error) {
	x := &exprs{binder: b, scope: newScope("", what, schema), clause: "POSITION"}
	return x.bind(e)
}
