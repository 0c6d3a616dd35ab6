package exec

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"nearcell/catalog/column"
	"nearcell/engine/plan/plantest"
)

// Keys of any types are equal exactly if the naive texts of their rows are,
// whichever dictionary a text comes with; find agrees with put, but for NULLs,
// which it does not find; absorbing a table in parts gives the same keys.
func TestKeyTable(t *testing.T) {
	for _, list := range [][]int{{}, {1}, {2}, {3}, {4}, {5}, {6}, {0}, {3, 1}, {2, 6, 4}, {0, 1, 2, 3, 4, 5, 6}} {
		rng := rand.New(rand.NewPCG(4, uint64(len(list))))
		schema := fields(plantest.Schema, list...)
		var types []column.Type
		for _, f := range schema {
			types = append(types, f.Type)
		}
		whole, parted := newKeyTable(types), newKeyTable(types)
		reader := newKeyReader(whole)
		naiveKeys := map[string]int32{}
		for range 3 {
			table := plantest.Table(rng, 1500)
			var cols []column.Vector
			for _, c := range list {
				cols = append(cols, table.Cols[c])
			}
			part := newKeyTable(types)
			ids, partIDs := make([]int32, table.N), make([]int32, table.N)
			reader.put(cols, nil, table.N, ids)
			newKeyReader(part).put(cols, nil, table.N, partIDs)
			to := parted.absorb(part, nil)
			found := make([]int32, table.N)
			if len(list) > 0 {
				newKeyReader(whole).find(cols, nil, table.N, found)
			}
			for i, r := range rowsOf(&column.Batch{N: table.N, Cols: cols}) {
				want, known := naiveKeys[keyText(r)]
				if !known {
					want = int32(len(naiveKeys))
					naiveKeys[keyText(r)] = want
				}
				null := slices.ContainsFunc(r, func(v column.Value) bool { return v.Null })
				if ids[i] != want || to[partIDs[i]] != want || len(list) > 0 && (null && found[i] != -1 || !null && found[i] != want) {
					t.Fatalf("columns %v, row %d: key %d, in parts %d, found %d, want %d", list, i, ids[i], to[partIDs[i]], found[i], want)
				}
			}
		}
		back := rowsOf(&column.Batch{N: whole.n, Cols: whole.columns()})
		for k, r := range back {
			if len(list) > 0 && naiveKeys[keyText(r)] != int32(k) {
				t.Fatalf("columns %v: key %d reads back as %v", list, k, r)
			}
		}
	}
}

// A text that the table does not know is not found, though its code is.
func TestFindUnknownText(t *testing.T) {
	texts := func(list ...string) column.Vector {
		b := column.NewBuilder(column.Text, nil)
		for _, s := range list {
			b.AppendText(s)
		}
		return b.Finish()
	}
	ints := func(list ...int64) column.Vector { return column.Vector{Type: column.Integer, N: len(list), I: list} }
	for _, two := range []bool{false, true} {
		types := []column.Type{column.Text}
		have, ask := []column.Vector{texts("a", "b")}, []column.Vector{texts("b", "c", "a", "")}
		if two {
			types = append(types, column.Integer)
			have, ask = append(have, ints(0, 0)), append(ask, ints(0, 0, 0, 0))
		}
		table := newKeyTable(types)
		keys := make([]int32, 4)
		newKeyReader(table).put(have, nil, 2, keys)
		newKeyReader(table).find(ask, nil, 4, keys)
		if !slices.Equal(keys, []int32{1, -1, 0, -1}) {
			t.Errorf("found %v", keys)
		}
	}
}

// An INTEGER key meets a REAL one exactly: 2^53 and 2^53 + 1 are two numbers,
// a fraction and Infinity equal no INTEGER, -0 equals 0.
func TestIntegerMeetsReal(t *testing.T) {
	v := column.Vector{Type: column.Real, N: 7, F: []float64{1 << 53, 1<<53 + 2, 0.5, math.Inf(1), math.Copysign(0, -1), -1 << 63, 1 << 63}}
	got := keyColumn(&v, column.Integer)
	want := []int64{1 << 53, 1<<53 + 2, 0, 0, 0, math.MinInt64, 0}
	null := []bool{false, false, true, true, false, false, true}
	for i := range want {
		if got.I[i] != want[i] || got.IsNull(i) != null[i] {
			t.Errorf("%v becomes %d, NULL %v", v.F[i], got.I[i], got.IsNull(i))
		}
	}
}

// The order words keep the order of all numbers, signs and infinities included.
func TestOrderedReal(t *testing.T) {
	list := []float64{math.Inf(-1), -math.MaxFloat64, -2, -1, -math.SmallestNonzeroFloat64, 0, math.SmallestNonzeroFloat64, 1, 2, math.MaxFloat64, math.Inf(1)}
	for i := 1; i < len(list); i++ {
		if orderedReal(list[i-1]) >= orderedReal(list[i]) {
			t.Errorf("%v is not below %v", list[i-1], list[i])
		}
	}
	if orderedReal(math.Copysign(0, -1)) != orderedReal(0) {
		t.Error("-0 is not 0")
	}
}

// Radix sorting agrees with a stable sort, for few and for many rows.
func TestRadixSort(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 5))
	for _, n := range []int{0, 1, 2, 255, 256, 5000} {
		for _, mask := range []uint64{0, 0xff, 0xff00ff, math.MaxUint64} {
			rows := make([]rowWord, n)
			for i := range rows {
				rows[i] = rowWord{rng.Uint64() & mask, int32(i)}
			}
			want := slices.Clone(rows)
			slices.SortStableFunc(want, func(a, b rowWord) int {
				switch {
				case a.word < b.word:
					return -1
				case a.word > b.word:
					return 1
				}
				return 0
			})
			if got, _, err := radixSortUntil(func() error { return nil }, rows, nil); err != nil || !slices.Equal(got, want) {
				t.Errorf("%d rows, mask %x: not sorted", n, mask)
			}
		}
	}
}

// What is behind a NULL, and behind the last row, never counts as TRUE or as a
// value, whatever an expression left there.
func TestJunkBehindNulls(t *testing.T) {
	all := []uint64{math.MaxUint64}
	cond := column.Vector{Type: column.Boolean, N: 5, Bits: all, Valid: []uint64{0b10110}}
	if got := trueRows(nil, &cond, []uint64{0b00111}, 5); got[0] != 0b00110 {
		t.Errorf("TRUE rows %b", got[0])
	}
	cond.Valid = nil
	if got := trueRows(nil, &cond, nil, 5); got[0] != 0b11111 {
		t.Errorf("TRUE rows %b", got[0])
	}
	g := newGatherer(column.Field{Type: column.Integer})
	g.addAll(&column.Vector{Type: column.Integer, N: 2, I: []int64{7, 7}, Valid: []uint64{math.MaxUint64 - 1}}, 2)
	g.add(&column.Vector{Type: column.Integer, N: 2, I: []int64{8, 8}, Valid: []uint64{0b10}}, []int32{0, 1})
	v := g.finish()
	if !slices.Equal(v.I, []int64{0, 7, 0, 8}) || !v.IsNull(0) || v.IsNull(1) || !v.IsNull(2) || v.IsNull(3) {
		t.Errorf("gathered %v, valid %b", v.I, v.Valid)
	}
}
