package plan

import (
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// Shares of the rows for which a condition is taken to be TRUE where nothing
// better is known; one half to one quarter as is usual since Selinger et al.
// (1979). Equalities and lists follow from the numbers of different values.
const (
	shareOfRange   = 1. / 3
	shareOfBetween = 1. / 4
	shareOfLike    = 1. / 10
	shareOfNulls   = 1. / 20
	shareOfFlag    = 1. / 2
	shareOfOther   = 1. / 3
)

var noPlace problem.Place

// share is the estimated share of the rows of n for which a condition over its
// columns is TRUE. Parts of an AND are taken to be independent.
func (e *Estimator) share(cond expr.Expr, n Node) float64 {
	if v, ok := expr.Const(cond); ok {
		if v.Null || v.I == 0 {
			return 0
		}
		return 1
	}
	switch c := cond.(type) {
	case *expr.Logic:
		l, r := e.share(c.Left, n), e.share(c.Right, n)
		if c.Op == lang.And {
			return l * r
		}
		return l + r - l*r
	case *expr.Not:
		return 1 - e.share(c.X, n)
	case *expr.Compare:
		return e.comparison(c, n)
	case *expr.In:
		return negated(c.Not, min(1, float64(len(c.List))/max(1, e.values(c.X, n).count)))
	case *expr.Between:
		return negated(c.Not, shareOfBetween)
	case *expr.Like:
		return negated(c.Not, shareOfLike)
	case *expr.Is:
		return negated(c.Not, e.is(c, n))
	case *expr.Column:
		return shareOfFlag
	case *expr.Subquery:
		return e.asked(c, n)
	}
	return shareOfOther
}

// asked is the share of the values of IN that the query can have, one half for
// EXISTS.
func (e *Estimator) asked(c *expr.Subquery, n Node) float64 {
	if c.Kind != expr.InQuery {
		return shareOfFlag
	}
	q := c.Query.(*Query).Plan
	there := e.rows(q)
	if len(q.Schema()) > 0 {
		there = e.columnValues(q, 0).count
	}
	return negated(c.Not, min(1, there/max(1, e.values(c.X, n).count)))
}

func negated(not bool, share float64) float64 {
	if not {
		return 1 - share
	}
	return share
}

// comparison is one of as many values as there are for =, the rest for <>.
func (e *Estimator) comparison(c *expr.Compare, n Node) float64 {
	if c.Op != lang.Equals && c.Op != lang.NotEquals {
		return shareOfRange
	}
	l, r := e.values(c.Left, n), e.values(c.Right, n)
	return negated(c.Op == lang.NotEquals, 1/max(1, l.count, r.count))
}

// is counts the NULLs of a column of a stored table.
func (e *Estimator) is(c *expr.Is, n Node) float64 {
	if c.What != lang.IsNull && c.What != lang.IsUnknown {
		return shareOfFlag
	}
	if at, plain := expr.AsColumn(c.X); plain {
		if v, ok := stored(n, at); ok && v.N > 0 {
			return float64(v.NullCount()) / float64(v.N)
		}
	}
	return shareOfNulls
}

// values is how many different values an expression has over the rows of n.
type values struct {
	count float64 // NULL apart
	nulls bool
	exact bool
}

// values of an expression that is no column are at most as many as there are
// combinations of the columns that it reads.
func (e *Estimator) values(x expr.Expr, n Node) values {
	if _, ok := expr.Const(x); ok {
		return values{count: 1}
	}
	if at, ok := expr.AsColumn(x); ok {
		return e.columnValues(n, at)
	}
	most := 1.0
	fields := n.Schema()
	if j, ok := n.(*Join); ok {
		fields = j.Both()
	}
	used := make([]bool, len(fields))
	expr.Columns(x, used)
	for at, u := range used {
		if u {
			most *= max(1, e.columnValues(n, at).count)
		}
	}
	if x.Type() == column.Boolean {
		return values{count: min(most, 2)}
	}
	if c, ok := x.(*expr.Call); ok {
		most = min(most, callValues(c, n))
	}
	return values{count: most}
}

// fieldValues are the different values of the fields of a time stamp.
var fieldValues = map[string]float64{"MONTH": 12, "DAY": 31, "HOUR": 24, "MINUTE": 60, "WEEKDAY": 7}

const manyValues = 1e18

// callValues bounds the values of the functions of time that queries group by.
func callValues(c *expr.Call, n Node) float64 {
	if len(c.Args) != 2 {
		return manyValues
	}
	switch c.Fn.Name {
	case "EXTRACT":
		if field, ok := expr.Const(c.Args[0]); ok {
			if v, ok := fieldValues[strings.ToUpper(field.S)]; ok {
				return v
			}
		}
	case "FLOOR_TO":
		step, ok := expr.Const(c.Args[1])
		at, plain := expr.AsColumn(c.Args[0])
		if !ok || !plain || step.Null || step.Type != column.Interval || step.I <= 0 {
			return manyValues
		}
		v, ok := stored(n, at)
		if !ok || v.Type != column.Timestamp {
			return manyValues
		}
		if low, high, any := rangeOf(v); any {
			return float64(floorDiv(high, step.I)-floorDiv(low, step.I)) + 1
		}
	}
	return manyValues
}

func floorDiv(a, b int64) int64 {
	q := a / b
	if a%b < 0 {
		q--
	}
	return q
}

func rangeOf(v *column.Vector) (low, high int64, any bool) {
	for i, x := range v.I[:v.N] {
		if v.IsNull(i) {
			continue
		}
		if !any {
			low, high, any = x, x, true
		}
		low, high = min(low, x), max(high, x)
	}
	return low, high, any
}
