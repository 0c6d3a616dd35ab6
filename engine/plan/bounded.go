package plan

import (
	"math"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
)

// canFailHere is canFail with a look at the numbers: a sum or a mean of a stored
// column fails only where the column holds an Infinity or numbers so large that a
// sum of all of them leaves its type.
func canFailHere(n Node) bool {
	fails := false
	Everywhere(n, func(n Node) {
		for _, e := range exprsOf(n) {
			fails = fails || e.CanFail()
		}
		switch n := n.(type) {
		case *Relation:
			fails = true
		case *Aggregate:
			for i := range n.Calls {
				c := &n.Calls[i]
				fails = fails || callFails(c) && !sumFits(c, n.Input)
			}
		}
	})
	return fails
}

// sumFits reports whether a call adds up a stored column of which no part can leave
// the type of the sum.
func sumFits(c *Call, input Node) bool {
	if c.Weight != nil || c.Fn.Name != "SUM" && c.Fn.Name != "AVG" || len(c.Args) != 1 {
		return false
	}
	v := storedColumn(input, c.Args[0])
	if v == nil {
		return false
	}
	switch {
	case v.Type == column.Real:
		largest := 0.0
		for _, f := range v.F[:v.N] {
			largest = max(largest, math.Abs(f))
		}
		return largest <= math.MaxFloat64/4/float64(v.N+1)
	case v.Type == column.Integer || v.Type == column.Interval:
		lo, hi := int64(0), int64(0)
		for _, i := range v.I[:v.N] {
			lo, hi = min(lo, i), max(hi, i)
		}
		most := math.MaxInt64 / (int64(v.N) + 1)
		return lo >= -most && hi <= most
	}
	return false
}

// storedColumn is the column of a table that an expression hands through, without
// anything between that could repeat its rows; nil where it is none.
func storedColumn(n Node, e expr.Expr) *column.Vector {
	at, ok := expr.AsColumn(e)
	if !ok {
		return nil
	}
	switch n := n.(type) {
	case *Scan:
		return &n.Table.Cols[n.Use[at]]
	case *Filter:
		return storedColumn(n.Input, e)
	case *Sort:
		return storedColumn(n.Input, e)
	case *Project:
		return storedColumn(n.Input, n.Exprs[at])
	}
	return nil
}
