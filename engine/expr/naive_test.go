package expr

import (
	"fmt"
	"math"
	"math/big"
	"regexp"
	"strings"

	"nearcell/catalog/column"
	"nearcell/lang"
)

// naive computes an expression for one row, value by value, as the definitions
// read: the measure of the vectorised kernels. It shares no code with them.
func naive(e Expr, row []column.Value) (column.Value, error) {
	null := column.NullOf(e.Type())
	switch e := e.(type) {
	case *Column:
		return row[e.Index], nil
	case *Literal:
		return e.Value, nil
	case *Logic:
		return naiveLogic(e, row)
	case *Not:
		x, err := naive(e.X, row)
		if err != nil || x.Null {
			return null, err
		}
		return column.Bool(x.I == 0), nil
	case *Is:
		x, err := naive(e.X, row)
		answer := false
		switch e.What {
		case lang.IsNull, lang.IsUnknown:
			answer = x.Null
		case lang.IsTrue:
			answer = !x.Null && x.I == 1
		case lang.IsFalse:
			answer = !x.Null && x.I == 0
		}
		return column.Bool(answer != e.Not), err
	case *Compare:
		return naiveCompare(e.Op, e.Left, e.Right, row)
	case *Distinct:
		same, err := naiveCompare(lang.Equals, e.Left, e.Right, row)
		l, _ := naive(e.Left, row)
		r, _ := naive(e.Right, row)
		distinct := l.Null != r.Null || !same.Null && same.I == 0
		return column.Bool(distinct != e.Not), err
	case *Between:
		low, err := naiveCompare(lang.GreaterOrEqual, e.X, e.Low, row)
		if err != nil {
			return null, err
		}
		high := column.Bool(true)
		if low.Null || low.I == 1 {
			if high, err = naiveCompare(lang.LessOrEqual, e.X, e.High, row); err != nil {
				return null, err
			}
		}
		v := kleene(low, high)
		if !v.Null && e.Not {
			v.I = 1 - v.I
		}
		return v, nil
	case *In, *Case, *Coalesce, *NullIf:
		return naiveChoice(e, row)
	}
	return naiveStrict(e, row)
}

// naiveChoice computes what goes through a list until something is found.
func naiveChoice(e Expr, row []column.Value) (column.Value, error) {
	null := column.NullOf(e.Type())
	switch e := e.(type) {
	case *In:
		answer := column.Bool(false)
		if _, err := naive(e.X, row); err != nil {
			return null, err
		}
		for _, item := range e.List {
			same, err := naiveCompare(lang.Equals, e.X, item, row)
			if err != nil {
				return null, err
			}
			if same.Null {
				answer = null
			} else if same.I == 1 {
				answer = same
				break
			}
		}
		if !answer.Null && e.Not {
			answer.I = 1 - answer.I
		}
		return answer, nil
	case *Case:
		for _, arm := range e.Whens {
			cond := arm.Cond
			var hit column.Value
			var err error
			if e.Operand == nil {
				hit, err = naive(cond, row)
			} else {
				hit, err = naiveCompare(lang.Equals, e.Operand, cond, row)
			}
			if err != nil {
				return null, err
			}
			if !hit.Null && hit.I == 1 {
				return naive(arm.Result, row)
			}
		}
		return naive(e.Otherwise, row)
	case *Coalesce:
		for _, a := range e.Args {
			if v, err := naive(a, row); err != nil || !v.Null {
				return v, err
			}
		}
		return null, nil
	case *NullIf:
		l, err := naive(e.Left, row)
		if err != nil {
			return null, err
		}
		same, err := naiveCompare(lang.Equals, e.Left, e.Right, row)
		if err != nil || !same.Null && same.I == 1 {
			return null, err
		}
		return l, nil
	}
	panic("no choice")
}

// naiveStrict computes what is NULL as soon as one operand is.
func naiveStrict(e Expr, row []column.Value) (column.Value, error) {
	null := column.NullOf(e.Type())
	args := make([]column.Value, len(e.Children()))
	anyNull := false
	for i, c := range e.Children() {
		v, err := naive(c, row)
		if err != nil {
			return null, err
		}
		args[i] = v
		anyNull = anyNull || v.Null || v.Type == column.Null
	}
	if anyNull {
		return null, nil
	}
	switch e := e.(type) {
	case *Neg:
		if e.Type() == column.Real {
			return column.Float(0 - args[0].F), nil
		}
		return wholeNumber(e.Type(), new(big.Int).Neg(big.NewInt(args[0].I)))
	case *Arith:
		return naiveArith(e, args[0], args[1])
	case *Concat:
		return column.String(args[0].S + args[1].S), nil
	case *Like:
		pattern := "(?s)^"
		for _, r := range args[1].S {
			switch r {
			case '%':
				pattern += ".*"
			case '_':
				pattern += "."
			default:
				pattern += regexp.QuoteMeta(string(r))
			}
		}
		return column.Bool(regexp.MustCompile(pattern+"$").MatchString(args[0].S) != e.Not), nil
	case *Cast:
		return naiveCast(e, args[0])
	case *Call:
		switch e.Fn.Name {
		case "UPPER":
			return column.String(strings.ToUpper(args[0].S)), nil
		case "CHAR_LENGTH":
			return column.Int(int64(len([]rune(args[0].S)))), nil
		case "SQRT":
			if args[0].F < 0 {
				return null, fmt.Errorf("negative")
			}
			return column.Float(math.Sqrt(args[0].F)), nil
		}
	}
	return null, fmt.Errorf("the test does not know %T", e)
}

func naiveLogic(e *Logic, row []column.Value) (column.Value, error) {
	l, err := naive(e.Left, row)
	if err != nil {
		return l, err
	}
	if !l.Null && (l.I == 0) == (e.Op == lang.And) {
		return l, nil
	}
	r, err := naive(e.Right, row)
	if err != nil {
		return r, err
	}
	if e.Op == lang.And {
		return kleene(l, r), nil
	}
	// a OR b is NOT (NOT a AND NOT b)
	l.I, r.I = 1-l.I, 1-r.I
	v := kleene(l, r)
	v.I = 1 - v.I
	return v, nil
}

// kleene is a AND b.
func kleene(a, b column.Value) column.Value {
	switch {
	case !a.Null && a.I == 0 || !b.Null && b.I == 0:
		return column.Bool(false)
	case a.Null || b.Null:
		return column.NullOf(column.Boolean)
	}
	return column.Bool(true)
}

func naiveCompare(op lang.Op, left, right Expr, row []column.Value) (column.Value, error) {
	l, err := naive(left, row)
	if err != nil {
		return l, err
	}
	r, err := naive(right, row)
	if err != nil {
		return r, err
	}
	if l.Null || r.Null || l.Type == column.Null || r.Type == column.Null {
		return column.NullOf(column.Boolean), nil
	}
	c := 0
	switch l.Type {
	case column.Text:
		c = strings.Compare(l.S, r.S)
	case column.Integer, column.Real:
		c = exactNumber(l).Cmp(exactNumber(r))
	default:
		c = big.NewInt(l.I).Cmp(big.NewInt(r.I))
	}
	return column.Bool(map[lang.Op]bool{lang.Equals: c == 0, lang.NotEquals: c != 0, lang.Less: c < 0,
		lang.LessOrEqual: c <= 0, lang.Greater: c > 0, lang.GreaterOrEqual: c >= 0}[op]), nil
}

func exactNumber(v column.Value) *big.Float {
	if v.Type == column.Integer {
		return new(big.Float).SetPrec(2000).SetInt64(v.I)
	}
	return new(big.Float).SetPrec(2000).SetFloat64(v.F)
}

func wholeNumber(t column.Type, i *big.Int) (column.Value, error) {
	if !i.IsInt64() || t == column.Timestamp && (i.Int64() < firstTimestamp || i.Int64() > lastTimestamp) {
		return column.NullOf(t), fmt.Errorf("overflow")
	}
	return column.Value{Type: t, I: i.Int64()}, nil
}

func naiveArith(e *Arith, l, r column.Value) (column.Value, error) {
	if e.Type() != column.Real {
		if l.Type == column.Real || r.Type == column.Real {
			return naiveScale(e, l, r)
		}
		a, b, z := big.NewInt(l.I), big.NewInt(r.I), new(big.Int)
		switch e.Op {
		case lang.Plus:
			z.Add(a, b)
		case lang.Minus:
			z.Sub(a, b)
		case lang.Times:
			z.Mul(a, b)
		case lang.Modulo:
			if r.I == 0 {
				return l, fmt.Errorf("division by 0")
			}
			z.Rem(a, b)
		}
		return wholeNumber(e.Type(), z)
	}
	var f float64
	switch e.Op {
	case lang.Plus:
		f = l.F + r.F
	case lang.Minus:
		f = l.F - r.F
	case lang.Times:
		f = l.F * r.F
	case lang.Divide:
		if r.F == 0 {
			return l, fmt.Errorf("division by 0")
		}
		f = l.F / r.F
	case lang.Modulo:
		f = math.Mod(l.F, r.F)
	}
	if math.IsNaN(f) || math.IsInf(f, 0) && !math.IsInf(l.F, 0) && !math.IsInf(r.F, 0) {
		return l, fmt.Errorf("no value")
	}
	return column.Float(f + 0), nil
}

func naiveScale(e *Arith, l, r column.Value) (column.Value, error) {
	interval, factor := l, r.F
	if l.Type == column.Real {
		interval, factor = r, l.F
	}
	f := float64(interval.I)
	if e.Op == lang.Divide {
		f /= factor
	} else {
		f *= factor
	}
	if f = math.Round(f); math.IsNaN(f) || math.IsInf(f, 0) || math.Abs(f) > 1<<63 || f == 1<<63 || e.Op == lang.Divide && factor == 0 {
		return l, fmt.Errorf("no value")
	}
	return column.Value{Type: column.Interval, I: int64(f)}, nil
}

func naiveCast(e *Cast, x column.Value) (column.Value, error) {
	switch {
	case x.Type == e.Type():
		x.Unit = nil
		return x, nil
	case e.Type() == column.Text:
		return column.String(x.String()), nil
	case x.Type == column.Integer && e.Type() == column.Real:
		return column.Float(float64(x.I)), nil
	case x.Type == column.Real && e.Type() == column.Integer:
		r := math.Round(x.F)
		if !(r >= -1<<63 && r < 1<<63) {
			return x, fmt.Errorf("overflow")
		}
		return column.Int(int64(r)), nil
	case x.Type == column.Text && e.Type() == column.Real:
		if !regexp.MustCompile(`^ *[+-]?([0-9]+[.]?[0-9]*|[.][0-9]+)([eE][+-]?[0-9]+)? *$`).MatchString(x.S) {
			return x, fmt.Errorf("no number")
		}
		f, _ := new(big.Rat).SetString(strings.TrimSpace(x.S))
		v, _ := f.Float64()
		return column.Float(v), nil
	}
	return x, fmt.Errorf("the test does not know this cast")
}
