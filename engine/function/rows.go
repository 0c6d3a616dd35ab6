package function

import (
	"math/bits"

	"nearcell/catalog/column"
)

// ActiveRows is the bitmap of the rows that are on and have a value in every
// vector, nil where that is all n rows. The bitmap is scratch of the arena.
func ActiveRows(a *Arena, on []uint64, n int, vectors ...*column.Vector) []uint64 {
	var out []uint64
	words := column.Words(n)
	if on != nil {
		out = on[:words]
	}
	owned := false
	for _, v := range vectors {
		switch {
		case v.Type == column.Null:
			out = a.Words(words)
			clear(out)
			return out
		case v.Valid == nil:
			continue
		case out == nil:
			out = v.Valid[:words]
			continue
		case !owned:
			fresh := a.Words(words)
			copy(fresh, out)
			out, owned = fresh, true
		}
		for i, w := range v.Valid[:words] {
			out[i] &= w
		}
	}
	return out
}

// FirstRow is the first of n rows that is on (nil: all) and for which bad
// holds, -1 where there is none. It serves the slow path of kernels that have
// found something suspicious in a batch.
func FirstRow(on []uint64, n int, bad func(i int) bool) int {
	if on == nil {
		for i := range n {
			if bad(i) {
				return i
			}
		}
		return -1
	}
	for k, w := range on[:column.Words(n)] {
		for ; w != 0; w &= w - 1 {
			i := k<<6 + bits.TrailingZeros64(w)
			if i >= n {
				return -1
			}
			if bad(i) {
				return i
			}
		}
	}
	return -1
}
