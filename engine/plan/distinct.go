package plan

import (
	"math"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/lang"
)

// counted is a column of a stored table.
type counted struct {
	table *column.Table
	at    int
}

// columnValues is how many different values column `at` of n has: as many as
// where it comes from, but not more than n has rows.
func (e *Estimator) columnValues(n Node, at int) values {
	switch n := n.(type) {
	case *Scan:
		return e.stored(n.Table, n.Use[at])
	case *Sort:
		v := e.columnValues(n.Input, at)
		if n.Top > 0 {
			v.exact = false
		}
		return e.capped(v, n)
	case *Filter:
		v := e.columnValues(n.Input, at)
		v.exact = false
		if fixes(n.Cond, at) {
			v = values{count: 1}
		}
		return e.capped(v, n)
	case *Limit:
		v := e.columnValues(n.Input, at)
		v.exact = false
		return e.capped(v, n)
	case *Window:
		if at < len(n.Input.Schema()) {
			return e.columnValues(n.Input, at)
		}
	case *Distinct:
		return e.columnValues(n.Input, at)
	case *Number:
		if at < len(n.Input.Schema()) {
			return e.columnValues(n.Input, at)
		}
	case *Shared:
		return e.columnValues(n.Common.Plan, at)
	case *Nearest:
		v := e.columnValues(n.Common.Plan, at)
		v.exact = false
		return e.capped(v, n)
	case *Lookup:
		v := e.columnValues(n.Common.Plan, at)
		v.exact = false
		return e.capped(v, n)
	case *Matched:
		v := e.columnValues(n.Left, at)
		v.exact = false
		return e.capped(v, n)
	case *Project:
		return e.values(n.Exprs[at], n.Input)
	case *Aggregate:
		if at < len(n.Keys) {
			return e.capped(e.values(n.Keys[at], n.Input), n)
		}
	case *Interpolate:
		if at < len(n.Input.Schema()) {
			return e.columnValues(n.Input, at)
		}
	case *Join:
		// not capped: its own rows are estimated by this
		if left := len(n.Left.Schema()); at >= left {
			v := e.columnValues(n.Right, at-left)
			v.exact, v.nulls = false, v.nulls || n.Kind == Left
			return v
		}
		v := e.columnValues(n.Left, at)
		v.exact = false
		return v
	case *Relation:
		if site := n.Bound.Columns[at].Site; site >= 0 {
			v := e.columnValues(n.Input, site)
			v.exact = false
			return e.capped(v, n)
		}
	case *Union:
		sum := values{}
		for _, in := range n.Parts {
			v := e.columnValues(in, at)
			sum.count += v.count
			sum.nulls = sum.nulls || v.nulls
		}
		return sum
	}
	return values{count: max(1, e.rows(n))}
}

func (e *Estimator) capped(v values, n Node) values {
	if rows := e.rows(n); v.count > rows {
		v.count, v.exact = rows, false
	}
	return v
}

// fixes reports whether a condition leaves one value of a column.
func fixes(cond expr.Expr, at int) bool {
	for _, c := range expr.Conjuncts(cond) {
		eq, ok := c.(*expr.Compare)
		if !ok || eq.Op != lang.Equals {
			continue
		}
		for _, side := range [2][2]expr.Expr{{eq.Left, eq.Right}, {eq.Right, eq.Left}} {
			col, plain := expr.AsColumn(side[0])
			if _, constant := expr.Const(side[1]); plain && constant && col == at {
				return true
			}
		}
	}
	return false
}

// stored is the vector of a stored table that column `at` of n reads, where
// the rows of n are those of the table, less some or in another order.
func stored(n Node, at int) (*column.Vector, bool) {
	switch n := n.(type) {
	case *Scan:
		return &n.Table.Cols[n.Use[at]], true
	case *Filter:
		return stored(n.Input, at)
	case *Sort:
		return stored(n.Input, at)
	case *Limit:
		return stored(n.Input, at)
	case *Window:
		if at < len(n.Input.Schema()) {
			return stored(n.Input, at)
		}
	case *Project:
		if c, ok := expr.AsColumn(n.Exprs[at]); ok {
			return stored(n.Input, c)
		}
	case *Interpolate:
		if at < len(n.Input.Schema()) {
			return stored(n.Input, at)
		}
	case *Join:
		if left := len(n.Left.Schema()); at >= left {
			return stored(n.Right, at-left)
		}
		return stored(n.Left, at)
	case *Number:
		if at < len(n.Input.Schema()) {
			return stored(n.Input, at)
		}
	case *Shared:
		return stored(n.Common.Plan, at)
	case *Relation:
		if site := n.Bound.Columns[at].Site; site >= 0 {
			return stored(n.Input, site)
		}
	}
	return nil, false
}

// ScanOf is the stored table or campaign that a column comes from unchanged, nil
// where it was computed.
func ScanOf(n Node, at int) *Scan {
	switch n := n.(type) {
	case *Scan:
		return n
	case *Filter, *Sort, *Limit, *Distinct:
		return ScanOf(n.Inputs()[0], at)
	case *Project:
		if c, ok := expr.AsColumn(n.Exprs[at]); ok {
			return ScanOf(n.Input, c)
		}
	case *Aggregate:
		if at < len(n.Keys) {
			if c, ok := expr.AsColumn(n.Keys[at]); ok {
				return ScanOf(n.Input, c)
			}
		}
	case *Interpolate:
		if at < len(n.Input.Schema()) {
			return ScanOf(n.Input, at)
		}
	case *Join:
		if left := len(n.Left.Schema()); at >= left {
			return ScanOf(n.Right, at-left)
		}
		return ScanOf(n.Left, at)
	case *Number:
		if at < len(n.Input.Schema()) {
			return ScanOf(n.Input, at)
		}
	case *Shared:
		return ScanOf(n.Common.Plan, at)
	case *Relation:
		if site := n.Bound.Columns[at].Site; site >= 0 {
			return ScanOf(n.Input, site)
		}
	}
	return nil
}

// stored counts the values of a column once.
func (e *Estimator) stored(t *column.Table, at int) values {
	key := counted{t, at}
	v, ok := e.counted[key]
	if !ok {
		v = countValues(&t.Cols[at])
		e.counted[key] = v
	}
	return v
}

// wholeColumn values are all counted; of longer columns sampleRows are, spread
// evenly. Codes of texts are always all counted.
const (
	wholeColumn = 1 << 17
	sampleRows  = 1 << 16
)

func countValues(v *column.Vector) values {
	out := values{exact: true, nulls: v.NullCount() > 0}
	switch v.Type {
	case column.Null:
		return out
	case column.Text:
		out.count = float64(usedCodes(v))
		return out
	case column.Boolean, column.Point:
		out.exact = false
		out.count = float64(v.N)
		if v.Type == column.Boolean {
			out.count = min(out.count, 2)
		}
		return out
	}
	step := 1
	if v.N > wholeColumn {
		step = v.N / sampleRows
	}
	seen := map[uint64]bool{} // true: once so far
	rows := 0
	for i := 0; i < v.N; i += step {
		if v.IsNull(i) {
			continue
		}
		rows++
		w := word(v, i)
		_, again := seen[w]
		seen[w] = !again
	}
	out.count = float64(len(seen))
	if step > 1 {
		out.exact = false
		out.count = scaled(seen, rows, v.N-v.NullCount())
	}
	return out
}

func usedCodes(v *column.Vector) int {
	used := make([]uint64, column.Words(len(v.Dict.Texts)))
	for i, c := range v.C[:v.N] {
		if !v.IsNull(i) {
			column.SetBit(used, int(c))
		}
	}
	return column.Count(used)
}

func word(v *column.Vector, i int) uint64 {
	if v.Type == column.Real {
		return math.Float64bits(v.F[i] + 0) // -0 + 0 is 0
	}
	return uint64(v.I[i])
}

// scaled estimates the values of a whole column from a sample: √(N/n)·f₁ + the
// values seen more than once, where f₁ were seen once (Charikar et al. 2000).
// Where none came twice the column is taken to be a key.
func scaled(seen map[uint64]bool, rows, all int) float64 {
	once := 0
	for _, first := range seen {
		if first {
			once++
		}
	}
	if once == rows {
		return float64(all)
	}
	return min(float64(all), math.Sqrt(float64(all)/float64(rows))*float64(once)+float64(len(seen)-once))
}
