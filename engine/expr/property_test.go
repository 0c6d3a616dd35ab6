package expr

import (
	"errors"
	"flag"
	"math"
	"testing"

	"nearcell/catalog/column"
	"nearcell/engine/function"
	"nearcell/engine/problem"
	"nearcell/lang"

	"pgregory.net/rapid"
)

func init() {
	// more than rapid's 100; the command line still decides
	if err := flag.Set("rapid.checks", "500"); err != nil {
		panic(err)
	}
}

var propertySchema = column.Schema{
	{Name: "i", Type: column.Integer}, {Name: "j", Type: column.Integer}, {Name: "f", Type: column.Real}, {Name: "g", Type: column.Real},
	{Name: "s", Type: column.Text}, {Name: "u", Type: column.Text}, {Name: "b", Type: column.Boolean}, {Name: "c", Type: column.Boolean},
	{Name: "t", Type: column.Timestamp}, {Name: "d", Type: column.Interval},
}

// valuePool has the values at which kernels go wrong.
func valuePool(t column.Type) []column.Value {
	var out []column.Value
	switch t {
	case column.Integer:
		for _, i := range []int64{0, 1, -1, 2, 7, -3, 1<<53 + 1, math.MaxInt64, math.MinInt64} {
			out = append(out, column.Int(i))
		}
	case column.Real:
		for _, f := range []float64{0, 1, -1, 2.5, -0.5, 0.1, 7, 1 << 53, 1e308, 1e-300, math.Inf(1), math.Inf(-1)} {
			out = append(out, column.Float(f))
		}
	case column.Text:
		for _, s := range []string{"", "a", "ab", "B", "ä", "12", "-1.5", "a%", "%b", "_", "%a_%"} {
			out = append(out, column.String(s))
		}
	case column.Boolean:
		out = []column.Value{column.Bool(true), column.Bool(false)}
	case column.Timestamp:
		for _, i := range []int64{0, 1_000_000, -5, firstTimestamp, lastTimestamp} {
			out = append(out, column.Value{Type: t, I: i})
		}
	case column.Interval:
		for _, i := range []int64{0, 900e6, -3600e6, 1, math.MaxInt64} {
			out = append(out, column.Value{Type: t, I: i})
		}
	}
	return append(out, column.NullOf(t))
}

// drawExpr draws an expression of a type.
func drawExpr(t *rapid.T, typ column.Type, depth int) Expr {
	for {
		if depth == 0 || rapid.IntRange(0, 4).Draw(t, "leaf") == 0 {
			return drawLeaf(t, typ)
		}
		e, err := drawNode(t, typ, depth-1)
		if err != nil {
			t.Fatalf("the constructor refuses what the generator drew: %v", err)
		}
		return e
	}
}

func drawLeaf(t *rapid.T, typ column.Type) Expr {
	if rapid.Bool().Draw(t, "constant") {
		return NewConst(rapid.SampledFrom(valuePool(typ)).Draw(t, "value"), problem.Place{})
	}
	var at []int
	for i, f := range propertySchema {
		if f.Type == typ {
			at = append(at, i)
		}
	}
	i := rapid.SampledFrom(at).Draw(t, "column")
	return NewColumn(i, propertySchema[i], problem.Place{})
}

var allTypes = []column.Type{column.Integer, column.Real, column.Text, column.Boolean, column.Timestamp, column.Interval}

func drawNode(t *rapid.T, typ column.Type, depth int) (Expr, error) {
	sub := func(typ column.Type) Expr { return drawExpr(t, typ, depth) }
	none := problem.Place{}
	if rapid.IntRange(0, 3).Draw(t, "choice") == 0 {
		switch rapid.IntRange(0, 3).Draw(t, "which") {
		case 3:
			of := rapid.SampledFrom([]column.Type{column.Integer, column.Text, column.Real}).Draw(t, "of")
			other := of
			if of == column.Real {
				other = column.Integer
			}
			return NewCase(sub(of), []When{{sub(of), sub(typ)}, {sub(other), sub(typ)}}, nil, none)
		case 0:
			whens := []When{{sub(column.Boolean), sub(typ)}, {sub(column.Boolean), sub(typ)}}
			return NewCase(nil, whens, sub(typ), none)
		case 1:
			return NewCall(function.LookupScalar("COALESCE"), []Expr{sub(typ), sub(typ)}, none)
		}
		return NewCall(function.LookupScalar("NULLIF"), []Expr{sub(typ), sub(typ)}, none)
	}
	switch typ {
	case column.Integer:
		switch rapid.IntRange(0, 3).Draw(t, "int") {
		case 0:
			return NewNeg(sub(typ), none)
		case 1:
			return NewCast(sub(column.Real), typ, none)
		case 2:
			return NewCall(function.LookupScalar("CHAR_LENGTH"), []Expr{sub(column.Text)}, none)
		}
		return NewArith(rapid.SampledFrom([]lang.Op{lang.Plus, lang.Minus, lang.Times, lang.Modulo}).Draw(t, "op"), sub(typ), sub(typ), none)
	case column.Real:
		switch rapid.IntRange(0, 4).Draw(t, "real") {
		case 0:
			return NewNeg(sub(typ), none)
		case 1:
			return NewCast(sub(rapid.SampledFrom([]column.Type{column.Integer, column.Text}).Draw(t, "from")), typ, none)
		case 2:
			return NewCall(function.LookupScalar("SQRT"), []Expr{sub(typ)}, none)
		}
		other := rapid.SampledFrom([]column.Type{column.Integer, column.Real}).Draw(t, "other")
		return NewArith(rapid.SampledFrom([]lang.Op{lang.Plus, lang.Minus, lang.Times, lang.Divide, lang.Modulo}).Draw(t, "op"), sub(typ), sub(other), none)
	case column.Text:
		if rapid.Bool().Draw(t, "text") {
			return NewConcat(sub(typ), sub(typ), none)
		}
		return NewCall(function.LookupScalar("UPPER"), []Expr{sub(typ)}, none)
	case column.Timestamp:
		return NewArith(rapid.SampledFrom([]lang.Op{lang.Plus, lang.Minus}).Draw(t, "op"), sub(typ), sub(column.Interval), none)
	case column.Interval:
		switch rapid.IntRange(0, 2).Draw(t, "interval") {
		case 0:
			return NewArith(lang.Minus, sub(column.Timestamp), sub(column.Timestamp), none)
		case 1:
			return NewArith(rapid.SampledFrom([]lang.Op{lang.Times, lang.Divide}).Draw(t, "op"), sub(typ), sub(column.Real), none)
		}
		return NewArith(lang.Times, sub(column.Integer), sub(typ), none)
	}
	return drawCondition(t, sub)
}

func drawCondition(t *rapid.T, sub func(column.Type) Expr) (Expr, error) {
	none := problem.Place{}
	of := rapid.SampledFrom(allTypes).Draw(t, "of")
	other := of
	if of.Numeric() {
		other = rapid.SampledFrom([]column.Type{column.Integer, column.Real}).Draw(t, "other")
	}
	not := rapid.Bool().Draw(t, "not")
	switch rapid.IntRange(0, 8).Draw(t, "condition") {
	case 0:
		return NewAnd(sub(column.Boolean), sub(column.Boolean), none)
	case 1:
		return NewOr(sub(column.Boolean), sub(column.Boolean), none)
	case 2:
		return NewNot(sub(column.Boolean), none)
	case 3:
		return NewIs(sub(column.Boolean), rapid.SampledFrom([]lang.IsWhat{lang.IsNull, lang.IsTrue, lang.IsFalse, lang.IsUnknown}).Draw(t, "what"), not, none)
	case 4:
		return NewIsDistinct(sub(of), sub(other), not, none)
	case 5:
		return NewBetween(sub(of), sub(other), sub(of), not, none)
	case 6:
		if rapid.Bool().Draw(t, "constants") {
			list := make([]Expr, rapid.IntRange(1, 12).Draw(t, "items"))
			for i := range list {
				list[i] = NewConst(rapid.SampledFrom(valuePool(of)).Draw(t, "item"), none)
			}
			return NewIn(sub(of), list, not, none)
		}
		return NewIn(sub(of), []Expr{sub(other), sub(of), sub(other)}, not, none)
	case 7:
		return NewLike(sub(column.Text), sub(column.Text), nil, not, none)
	}
	return NewCompare(rapid.SampledFrom([]lang.Op{lang.Equals, lang.NotEquals, lang.Less, lang.LessOrEqual, lang.Greater, lang.GreaterOrEqual}).Draw(t, "op"),
		sub(of), sub(other), none)
}

func drawRows(t *rapid.T) [][]column.Value {
	n := rapid.SampledFrom([]int{1, 3, 63, 64, 65, 130}).Draw(t, "rows")
	seed := rapid.Uint64().Draw(t, "seed")
	rows := make([][]column.Value, n)
	for i := range rows {
		for _, f := range propertySchema {
			seed = seed*6364136223846793005 + 1442695040888963407
			pool := valuePool(f.Type)
			rows[i] = append(rows[i], pool[int(seed>>33)%len(pool)])
		}
	}
	return rows
}

func drawMask(t *rapid.T, n int) []uint64 {
	switch rapid.IntRange(0, 3).Draw(t, "mask") {
	case 0:
		return nil
	case 1:
		return make([]uint64, column.Words(n))
	}
	mask := column.AllOn(n)
	for i := range mask {
		mask[i] &= rapid.Uint64().Draw(t, "bits")
	}
	return mask
}

// TestVectorsAgreeWithRows is the law of this package: for the rows of the
// mask, and for them only, a batch computes what the definitions give row by
// row; it fails exactly where one of them does, and names such a row.
func TestVectorsAgreeWithRows(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		e := drawExpr(t, rapid.SampledFrom(allTypes).Draw(t, "type"), rapid.IntRange(1, 4).Draw(t, "depth"))
		rows := drawRows(t)
		b, on := batchOf(propertySchema, rows), drawMask(t, len(rows))
		var w Work
		for round := range 2 { // the second meets the tables of the first
			got, err := e.Eval(&w, b, on)
			compareWithNaive(t, e, rows, on, &got, err)
			if round == 0 && err == nil {
				compareWithNaive(t, Fold(e), rows, on, &got, nil)
			}
			w.Reset()
		}
	})
}

func compareWithNaive(t *rapid.T, e Expr, rows [][]column.Value, on []uint64, got *column.Vector, err error) {
	var failed *RowError
	if err != nil && !errors.As(err, &failed) {
		t.Fatalf("%s: %v is no error of a row", e, err)
	}
	if failed != nil {
		if on != nil && !column.Bit(on, failed.Row) {
			t.Fatalf("%s: an error of row %d, which is off: %v", e, failed.Row, err)
		}
		if !e.CanFail() {
			t.Fatalf("%s failed and says it cannot", e)
		}
		if _, err := naive(e, rows[failed.Row]); err == nil {
			t.Fatalf("%s: row %d has a value, not %v", e, failed.Row, failed)
		}
		return
	}
	for i, row := range rows {
		if on != nil && !column.Bit(on, i) {
			continue
		}
		want, err := naive(e, row)
		if err != nil {
			t.Fatalf("%s: row %d (%v) should fail (%v) and is %s", e, i, row, err, show(got.Value(i)))
		}
		v := got.Value(i)
		if v.Null != (want.Null || want.Type == column.Null) || !v.Null && (v.I != want.I || v.F != want.F || v.S != want.S) {
			t.Fatalf("%s: row %d (%v) is %s, want %s", e, i, row, show(v), show(want))
		}
		if v.Null && got.Type == column.Boolean && column.Bit(got.Bits, i) {
			t.Fatalf("%s: the NULL of row %d is not zero", e, i)
		}
	}
}

// TestSplitsAgree: halves of a mask, and parts of a batch, give what the whole
// gives.
func TestSplitsAgree(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		e := drawExpr(t, rapid.SampledFrom(allTypes).Draw(t, "type"), 3)
		rows := drawRows(t)
		b := batchOf(propertySchema, rows)
		var w, w2 Work
		whole, err := e.Eval(&w, b, nil)
		if err != nil {
			t.Skip("a row fails")
		}
		half := column.AllOn(b.N)
		for i := range half {
			half[i] &= rapid.Uint64().Draw(t, "half")
		}
		table := column.Table{Cols: b.Cols, N: b.N}
		for lo := 0; lo < b.N; lo += 64 {
			// a view may end inside a word of the bitmaps
			part := table.Batch(lo, min(lo+rapid.IntRange(1, 64).Draw(t, "length"), b.N))
			word := half[lo>>6]
			for _, on := range [][]uint64{{word & column.AllOn(part.N)[0]}, {^word & column.AllOn(part.N)[0]}, nil} {
				v, err := e.Eval(&w2, &part, on)
				if err != nil {
					t.Fatalf("%s fails in a part and not in the whole: %v", e, err)
				}
				for i := range part.N {
					if (on == nil || column.Bit(on, i)) && show(v.Value(i)) != show(whole.Value(lo+i)) {
						t.Fatalf("%s: row %d is %s in the whole and %s in a part", e, lo+i, show(whole.Value(lo+i)), show(v.Value(i)))
					}
				}
			}
			w2.Reset()
		}
	})
}

// TestTextRoundTrip: what an expression is written as reads back as the same
// expression.
func TestTextRoundTrip(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		e := drawExpr(t, rapid.SampledFrom(allTypes).Draw(t, "type"), 3)
		text := e.String()
		back, err := read(text, propertySchema)
		if err != nil {
			t.Skip("infinities and the extremes of time are not written as literals")
		}
		if back.String() != text {
			t.Fatalf("%s reads back as %s", text, back)
		}
	})
}

// TestRemap: moving the columns of an expression and of the rows alike changes
// nothing, and back again gives an equal expression.
func TestRemap(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		e := drawExpr(t, rapid.SampledFrom(allTypes).Draw(t, "type"), 3)
		n := len(propertySchema)
		to := rapid.Permutation([]int{0, 1, 2, 3, 4, 5, 6, 7, 8, 9}).Draw(t, "to")
		back := make([]int, n)
		for i, k := range to {
			back[k] = i
		}
		moved := Remap(e, to)
		used, usedMoved := make([]bool, n), make([]bool, n)
		Columns(e, used)
		Columns(moved, usedMoved)
		for i := range used {
			if used[i] != usedMoved[to[i]] {
				t.Fatalf("%s: column %d is used: %v; moved to %d: %v", e, i, used[i], to[i], usedMoved[to[i]])
			}
		}
		if !Equal(Remap(moved, back), e) || !Equal(Shift(Shift(e, 3), -3), e) {
			t.Fatalf("%s is not itself again", e)
		}
		row := drawRows(t)[0]
		other := make([]column.Value, n)
		for i, k := range to {
			other[k] = row[i]
		}
		a, errA := naive(e, row)
		c, errC := naive(moved, other)
		if (errA == nil) != (errC == nil) || errA == nil && show(a) != show(c) {
			t.Fatalf("%s is %s and moved %s", e, show(a), show(c))
		}
	})
}
