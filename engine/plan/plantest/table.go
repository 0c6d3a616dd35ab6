// Package plantest makes random tables, expressions and plans for the tests of
// the rules and of the pipelines, and a relation that needs no geometry.
//
// Everything follows from a seed, so that a failure can be repeated. Numbers are
// small dyadic fractions, so that sums of them are exact in any order.
//
// # Limitations
//
// Tables have few distinct values on purpose: equal keys, NULLs, -0 beside 0
// and equal texts under different codes are to meet each other often.
package plantest

import (
	"math"
	"math/rand/v2"
	"strconv"

	"nearcell/catalog/column"
	"nearcell/engine/problem"
)

// Schema is that of every random table: an identifier that differs from row to
// row, then a column of each type with few values.
var Schema = column.Schema{
	{Name: "id", Type: column.Text},
	{Name: "n", Type: column.Integer},
	{Name: "r", Type: column.Real},
	{Name: "s", Type: column.Text},
	{Name: "b", Type: column.Boolean},
	{Name: "t", Type: column.Timestamp},
	{Name: "p", Type: column.Point},
}

// Nowhere is the place of the expressions that are made here.
var Nowhere problem.Place

// Table is a random table of n rows, about a tenth of the values NULL.
func Table(rng *rand.Rand, n int) *column.Table {
	builders := make([]*column.Builder, len(Schema))
	for i, f := range Schema {
		builders[i] = column.NewBuilder(f.Type, f.Unit)
	}
	// two tables shall give one text different codes
	for _, s := range rng.Perm(len(texts)) {
		builders[3].AppendText(texts[s])
	}
	for row := range n {
		builders[0].AppendText("R" + strconv.Itoa(row))
		for i := 1; i < len(Schema); i++ {
			builders[i].Append(Value(rng, Schema[i].Type))
		}
	}
	t := &column.Table{Schema: Schema, N: n, Cols: make([]column.Vector, len(Schema))}
	for i, b := range builders {
		t.Cols[i] = b.Finish()
	}
	// the rows that only filled the dictionary go
	t.Cols[3].C = t.Cols[3].C[len(texts):]
	t.Cols[3].Valid = shifted(t.Cols[3].Valid, len(texts), n)
	t.Cols[3].N = n
	return t
}

// shifted is the bitmap of n values from bit lo on.
func shifted(valid []uint64, lo, n int) []uint64 {
	if valid == nil {
		return nil
	}
	out := make([]uint64, column.Words(n))
	for i := range n {
		if column.Bit(valid, lo+i) {
			column.SetBit(out, i)
		}
	}
	return out
}

var (
	texts = []string{"", "a", "ab", "b", "É", "Z", "dock door", "10", "9"}
	reals = []float64{math.Copysign(0, -1), 0, 0.5, -0.5, 1, 2, 2.25, -3, 7.75, math.Inf(1)}
)

// Value is a random value of a type, now and then NULL.
func Value(rng *rand.Rand, t column.Type) column.Value {
	if rng.IntN(10) == 0 {
		return column.NullOf(t)
	}
	switch t {
	case column.Integer:
		return column.Int(int64(rng.IntN(7) - 3))
	case column.Real:
		return column.Float(reals[rng.IntN(len(reals)-1)]) // without Infinity, which has no sum with -Infinity
	case column.Text:
		return column.String(texts[rng.IntN(len(texts))])
	case column.Boolean:
		return column.Bool(rng.IntN(2) == 0)
	case column.Point:
		return column.Value{Type: t, P: [3]float64{reals[rng.IntN(3)], reals[rng.IntN(2)], 1}}
	case column.Timestamp, column.Interval:
		return column.Value{Type: t, I: int64(rng.IntN(4)) * 900_000_000}
	}
	return column.NullOf(t)
}
