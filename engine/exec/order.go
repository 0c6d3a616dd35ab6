package exec

import (
	"cmp"
	"math"
	"slices"

	"nearcell/catalog/column"
	"nearcell/engine/function"
)

// orderKey is one column to sort by.
type orderKey struct {
	v          *column.Vector
	descending bool
	nullsFirst bool
}

// argsort is the order of rows 0..n-1 by the keys; rows with equal keys keep
// their order. Keys become words whose order is that of the values, which are
// sorted by their bytes from the last key to the first.
func argsort(stop func() error, keys []orderKey, n int) ([]int32, error) {
	rows := large[rowWord](stop, n)
	for i := range rows {
		if i&(cancelRows-1) == 0 {
			if err := stop(); err != nil {
				return nil, err
			}
		}
		rows[i].row = int32(i)
	}
	var spare []rowWord
	var ranks []uint64
	for k := len(keys) - 1; k >= 0; k-- {
		key := keys[k]
		if key.v.Type == column.Null {
			continue
		}
		if key.v.Type == column.Text {
			var err error
			if ranks, err = textRanks(stop, key.v); err != nil {
				return nil, err
			}
		}
		for part := wordsOf(key.v.Type) - 1; part >= 0; part-- {
			for lo := 0; lo < n; lo += cancelRows {
				if err := stop(); err != nil {
					return nil, err
				}
				key.fill(rows[lo:min(lo+cancelRows, n)], part, ranks)
			}
			var err error
			if rows, spare, err = radixSortUntil(stop, rows, spare); err != nil {
				return nil, err
			}
		}
		if key.v.Valid != nil {
			var err error
			if rows, spare, err = nullsToEnd(stop, key, rows, spare); err != nil {
				return nil, err
			}
		}
	}
	order := large[int32](stop, n)
	for i, r := range rows {
		if i&(cancelRows-1) == 0 {
			if err := stop(); err != nil {
				return nil, err
			}
		}
		order[i] = r.row
	}
	return order, nil
}

type rowWord struct {
	word uint64
	row  int32
}

// cancelRows is after how many rows of a loop over many somebody asks whether to go on:
// also where each of them is the first one in its page of memory some tens of milliseconds.
const cancelRows = 1 << 14

// fill gives rows the words of a key, whose order is that of the values; NULLs have one
// word, whatever their slot holds.
func (k *orderKey) fill(rows []rowWord, part int, ranks []uint64) {
	turn := uint64(0)
	if k.descending {
		turn = ^turn
	}
	switch v := k.v; {
	case v.Valid != nil:
		for i := range rows {
			rows[i].word = turn
			if column.Bit(v.Valid, int(rows[i].row)) {
				rows[i].word = orderWord(v, int(rows[i].row), part, ranks) ^ turn
			}
		}
	case v.Type.Counted():
		for i := range rows {
			rows[i].word = uint64(v.I[rows[i].row]) ^ 1<<63 ^ turn
		}
	case v.Type == column.Real:
		for i := range rows {
			rows[i].word = orderedReal(v.F[rows[i].row]) ^ turn
		}
	default:
		for i := range rows {
			rows[i].word = orderWord(v, int(rows[i].row), part, ranks) ^ turn
		}
	}
}

// orderWord maps a value that is not NULL to a word so that greater values have greater words.
func orderWord(v *column.Vector, row, part int, ranks []uint64) uint64 {
	switch {
	case v.Type.Counted():
		return uint64(v.I[row]) ^ 1<<63
	case v.Type == column.Real:
		return orderedReal(v.F[row])
	case v.Type == column.Point:
		return orderedReal(v.F[3*row+part])
	case v.Type == column.Text:
		return ranks[v.C[row]]
	case v.Type == column.Boolean:
		return v.Bits[row>>6] >> (uint(row) & 63) & 1
	}
	return 0
}

// orderedReal orders as the numbers do, with -0 equal to 0: negative numbers
// are turned over, so that the greater magnitude comes first.
func orderedReal(f float64) uint64 {
	w := realWord(f)
	if w>>63 != 0 {
		return ^w
	}
	return w | 1<<63
}

// fromOrdered is the number that orderedReal made a word of.
func fromOrdered(w uint64) float64 {
	if w>>63 != 0 {
		return math.Float64frombits(w &^ (1 << 63))
	}
	return math.Float64frombits(^w)
}

// textRanks gives each code that v uses the place of its text; equal texts
// have equal ranks. Texts are ordered by their bytes, which for UTF-8 is the
// order of code points.
func textRanks(stop func() error, v *column.Vector) ([]uint64, error) {
	ranks := make([]uint64, len(v.Dict.Texts))
	used := make([]bool, len(ranks))
	var codes []uint32
	for i, c := range v.C[:v.N] {
		if !v.IsNull(i) && !used[c] {
			used[c] = true
			codes = append(codes, c)
		}
	}
	err := function.SortUntil(stop, codes, func(a, b uint32) int { return cmp.Compare(v.Dict.Texts[a], v.Dict.Texts[b]) })
	if err != nil {
		return nil, err
	}
	rank := uint64(0)
	for i, c := range codes {
		if i > 0 && v.Dict.Texts[c] != v.Dict.Texts[codes[i-1]] {
			rank++
		}
		ranks[c] = rank
	}
	return ranks, nil
}

// nullsToEnd moves the rows with a NULL key to one end, all in their order.
func nullsToEnd(stop func() error, key orderKey, rows, spare []rowWord) (sorted, other []rowWord, err error) {
	spare = room(spare, len(rows))[:0]
	for pass := range 2 {
		nulls := (pass == 0) == key.nullsFirst
		for i, r := range rows {
			if i&(cancelRows-1) == 0 {
				if err := stop(); err != nil {
					return rows, spare, err
				}
			}
			if key.v.IsNull(int(r.row)) == nulls {
				spare = append(spare, r)
			}
		}
	}
	return spare, rows, nil
}

// radixSortUntil sorts rows by their words, stably, a byte at a time from the least;
// bytes that all rows share cost nothing. It gives back the sorted and the spare slice.
// Once stop gives an error it leaves, and the order is any.
func radixSortUntil(stop func() error, rows, spare []rowWord) (sorted, other []rowWord, err error) {
	if inOrder(rows) {
		return rows, spare, nil
	}
	if len(rows) < 256 {
		slices.SortStableFunc(rows, func(a, b rowWord) int { return cmp.Compare(a.word, b.word) })
		return rows, spare, nil
	}
	if cap(spare) < len(rows) {
		spare = large[rowWord](stop, len(rows))
	}
	spare = spare[:len(rows)]
	var counts [8][256]int32
	for lo := 0; lo < len(rows); lo += cancelRows {
		if err := stop(); err != nil {
			return rows, spare, err
		}
		for _, r := range rows[lo:min(lo+cancelRows, len(rows))] {
			for b := range 8 {
				counts[b][byte(r.word>>(8*b))]++
			}
		}
	}
	for b := range 8 {
		next := &counts[b]
		if int(next[byte(rows[0].word>>(8*b))]) == len(rows) {
			continue
		}
		at := int32(0)
		for d, c := range next {
			next[d] = at
			at += c
		}
		for lo := 0; lo < len(rows); lo += cancelRows {
			if err := stop(); err != nil {
				return rows, spare, err
			}
			for _, r := range rows[lo:min(lo+cancelRows, len(rows))] {
				d := byte(r.word >> (8 * b))
				spare[next[d]] = r
				next[d]++
			}
		}
		rows, spare = spare, rows
	}
	return rows, spare, nil
}

func inOrder(rows []rowWord) bool {
	last := uint64(0)
	for _, r := range rows {
		if r.word < last {
			return false
		}
		last = r.word
	}
	return true
}
