package expr

import (
	"math"

	"nearcell/catalog/column"
	"nearcell/engine/function"
	"nearcell/lang"
)

// Limit is a REAL that a condition compares with a constant or with another column:
// whether temp > 8 holds of a reading of 8.000000000000002, which somebody computed and
// the display shows as 8, hangs on the last bit.
type Limit struct {
	X       Expr
	At      float64
	Against Expr // what X is compared with where that is no constant, nil: At
	// When holds of the rows that come as far as the comparison: the other conditions that
	// stand beside it with AND; nil: all rows. Where it is not TRUE, X may fail.
	When Expr
}

// Limits are the comparisons inside a condition, each once.
func Limits(e Expr) []Limit {
	if e == nil {
		return nil
	}
	var found []Limit
	conds := Conjuncts(e)
	for k, c := range conds {
		var beside []Expr
		for j, o := range conds {
			if j < k || j > k && !o.CanFail() {
				beside = append(beside, o)
			}
		}
		when := AndAll(beside)
		for _, l := range limitsIn(c) {
			l.When = when
			if !known(found, l) {
				found = append(found, l)
			}
		}
	}
	return found
}

func known(found []Limit, l Limit) bool {
	for _, o := range found {
		if o.At == l.At && (o.Against == nil) == (l.Against == nil) && Equal(o.X, l.X) && (l.Against == nil || Equal(o.Against, l.Against)) {
			return true
		}
	}
	return false
}

// limitsIn are the comparisons in one of the conditions that AND joins. One that stands
// inside OR or a CASE may be kept from rows where it would fail; such are left alone.
func limitsIn(cond Expr) []Limit {
	var found []Limit
	add := func(whole, x, c Expr) {
		if x.Type() != column.Real || isConst(x) || x.CanFail() && !isWhole(cond, whole) {
			return
		}
		if at, ok := limitOf(c); ok {
			found = append(found, Limit{X: x, At: at})
		}
	}
	pair := func(whole, l, r Expr) {
		number := func(e Expr) bool {
			return (e.Type() == column.Real || e.Type() == column.Integer) && !isConst(Fold(e)) && !HasQuery(e)
		}
		if !number(l) || !number(r) || l.Type() != column.Real && r.Type() != column.Real || whole.CanFail() && !isWhole(cond, whole) {
			return
		}
		found = append(found, Limit{X: l, Against: r})
	}
	Walk(cond, func(e Expr) {
		switch e := e.(type) {
		case *Compare:
			if e.Op != lang.Equals && e.Op != lang.NotEquals {
				add(e, e.Left, e.Right)
				add(e, e.Right, e.Left)
				pair(e, e.Left, e.Right)
			}
		case *Between:
			add(e, e.X, e.Low)
			add(e, e.X, e.High)
			pair(e, e.X, e.Low)
			pair(e, e.X, e.High)
		}
	})
	return found
}

// isWhole reports whether a comparison is all that a condition is, or what it denies.
func isWhole(cond, comparison Expr) bool {
	for {
		if cond == comparison {
			return true
		}
		n, ok := cond.(*Not)
		if !ok {
			return false
		}
		cond = n.X
	}
}

func limitOf(e Expr) (float64, bool) {
	v, ok := Const(Fold(e))
	switch {
	case !ok || v.Null:
		return 0, false
	case v.Type == column.Integer:
		return float64(v.I), true
	case v.Type == column.Real && !math.IsInf(v.F, 0):
		return v.F, true
	}
	return 0, false
}

func isConst(e Expr) bool {
	_, ok := Const(e)
	return ok
}

// Text is how messages call the limit.
func (l *Limit) Text() string {
	if l.Against != nil {
		return l.Against.String()
	}
	return column.FormatReal(l.At)
}

// NearRows is how many values lie within function.NearLimit of a limit, and how
// many of those are equal to it.
type NearRows struct{ Near, Equal int64 }

// Look counts the rows of a vector that are on. Against is what they are compared with,
// nil: the number.
func (n *NearRows) Look(v, against *column.Vector, on []uint64, rows int, at float64) {
	if v.Type != column.Real && (against == nil || v.Type != column.Integer) {
		return
	}
	for i := range rows {
		x, limit := numberAt(v, i), at
		if against != nil {
			limit = numberAt(against, i)
		}
		if d := x - limit; d > function.NearLimit || d < -function.NearLimit || d != d {
			continue
		}
		if on != nil && !column.Bit(on, i) || v.IsNull(i) || against != nil && against.IsNull(i) {
			continue
		}
		n.Near++
		if x == limit {
			n.Equal++
		}
	}
}

func numberAt(v *column.Vector, i int) float64 {
	switch v.Type {
	case column.Real:
		return v.F[i]
	case column.Integer:
		return float64(v.I[i])
	}
	return math.NaN()
}

// Add adds the counts of others.
func (n *NearRows) Add(o NearRows) { n.Near, n.Equal = n.Near+o.Near, n.Equal+o.Equal }
