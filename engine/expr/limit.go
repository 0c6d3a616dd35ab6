package expr

import (
	"math"

	"nearcell/catalog/column"
	"nearcell/engine/function"
	"nearcell/lang"
)

// Limit is a REAL that an expression compares with a constant: whether temp > 8
// holds of a reading of 8.000000000000002, which somebody computed and the display
// shows as 8, hangs on the last bit.
type Limit struct {
	X  Expr
	At float64
}

// Limits are the comparisons with constants inside a condition, each once.
func Limits(e Expr) []Limit {
	var found []Limit
	add := func(x, c Expr) {
		at, ok := limitOf(c)
		if !ok || x.Type() != column.Real || isConst(x) {
			return
		}
		for _, l := range found {
			if l.At == at && Equal(l.X, x) {
				return
			}
		}
		found = append(found, Limit{x, at})
	}
	if e == nil {
		return nil
	}
	Walk(e, func(e Expr) {
		switch e := e.(type) {
		case *Compare:
			if e.Op != lang.Equals && e.Op != lang.NotEquals {
				add(e.Left, e.Right)
				add(e.Right, e.Left)
			}
		case *Between:
			add(e.X, e.Low)
			add(e.X, e.High)
		}
	})
	return found
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

// NearRows is how many values lie within function.NearLimit of a limit, and how
// many of those are equal to it.
type NearRows struct{ Near, Equal int64 }

// Look counts the rows of a vector that are on.
func (n *NearRows) Look(v *column.Vector, on []uint64, rows int, at float64) {
	if v.Type != column.Real {
		return
	}
	for i, x := range v.F[:rows] {
		if d := x - at; d > function.NearLimit || d < -function.NearLimit || d != d {
			continue
		}
		if on != nil && !column.Bit(on, i) || v.IsNull(i) {
			continue
		}
		n.Near++
		if x == at {
			n.Equal++
		}
	}
}

// Add adds the counts of others.
func (n *NearRows) Add(o NearRows) { n.Near, n.Equal = n.Near+o.Near, n.Equal+o.Equal }
