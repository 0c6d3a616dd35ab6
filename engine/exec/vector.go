package exec

import (
	"math"
	"math/bits"
	"slices"
	"unsafe"

	"nearcell/catalog/column"
	"nearcell/voronoi/delaunay"
)

// bitsFor is b with room for n bits, all clear.
func bitsFor(b []uint64, n int) []uint64 {
	words := column.Words(n)
	if cap(b) < words {
		return make([]uint64, words)
	}
	b = b[:words]
	clear(b)
	return b
}

// room is s with n elements of any content.
func room[T any](s []T, n int) []T {
	if cap(s) < n {
		return large[T](nil, n+n/4)[:n]
	}
	return s[:n]
}

// large is a slice of n zeros, on large pages where there are many: what they cost is
// mostly the system's search for small ones. A large page takes its time too, and rows
// in any order soon want all of them: they are fetched one by one, until stop gives an
// error (nil: they come as they are wanted).
func large[T any](stop func() error, n int) []T {
	s := make([]T, n)
	if n < stretch {
		return s
	}
	delaunay.AdviseHugePages(s)
	var zero T
	step := max(1, (2<<20)/int(unsafe.Sizeof(zero)))
	for i := 0; i < n && stop != nil && stop() == nil; i += step {
		s[i] = zero
	}
	return s
}

// stretch is how many elements of a large slice are moved between two questions.
const stretch = 1 << 18

// widened is s with room for n elements in all. Many are moved in stretches, between
// which stop is asked (nil: nobody is): when it gives an error the rest is left zero, for
// nobody wants it any more.
func widened[T any](stop func() error, s []T, n int) []T {
	if n <= cap(s) {
		return s
	}
	if n < stretch {
		return slices.Grow(s, n-len(s))
	}
	if len(s) == 0 {
		return large[T](nil, n)[:0] // as many as there will be
	}
	wider := large[T](nil, n+n/2)[:len(s)]
	for lo := 0; lo < len(s); lo += stretch {
		if stop != nil && stop() != nil {
			break
		}
		copy(wider[lo:], s[lo:min(lo+stretch, len(s))])
	}
	return wider
}

// forEachOn calls f for the active rows in rising order.
func forEachOn(on []uint64, n int, f func(i int)) {
	if on == nil {
		for i := 0; i < n; i++ {
			f(i)
		}
		return
	}
	for w, word := range on[:column.Words(n)] {
		for ; word != 0; word &= word - 1 {
			if i := w<<6 + bits.TrailingZeros64(word); i < n {
				f(i)
			}
		}
	}
}

// activeRows lists the active rows in rising order into idx.
func activeRows(idx []int32, on []uint64, n int) []int32 {
	idx = room(idx, n)[:0]
	if on == nil {
		idx = idx[:n]
		for i := range idx {
			idx[i] = int32(i)
		}
		return idx
	}
	for w, word := range on[:column.Words(n)] {
		for ; word != 0; word &= word - 1 {
			if i := w<<6 + bits.TrailingZeros64(word); i < n {
				idx = append(idx, int32(i))
			}
		}
	}
	return idx
}

// countOn is the number of active rows.
func countOn(on []uint64, n int) int {
	if on == nil {
		return n
	}
	total := column.Count(on[:n>>6])
	if rest := uint(n) & 63; rest != 0 {
		total += bits.OnesCount64(on[n>>6] & (1<<rest - 1))
	}
	return total
}

// trueRows sets out to the rows of on for which cond is TRUE: rows where it is
// FALSE or NULL fall away.
func trueRows(out []uint64, cond *column.Vector, on []uint64, n int) []uint64 {
	out = bitsFor(out, n)
	if cond.Type == column.Null {
		return out
	}
	copy(out, cond.Bits[:len(out)])
	if cond.Valid != nil {
		for i := range out {
			out[i] &= cond.Valid[i]
		}
	}
	if on != nil {
		for i := range out {
			out[i] &= on[i]
		}
	}
	if rest := uint(n) & 63; rest != 0 {
		out[len(out)-1] &= 1<<rest - 1
	}
	return out
}

// gatherInto makes dst the rows idx of v; an index below 0 gives NULL. The
// slices of dst are used again.
func gatherInto(dst, v *column.Vector, idx []int32, mayMiss bool) {
	n := len(idx)
	*dst = column.Vector{Type: v.Type, Unit: v.Unit, N: n, Dict: v.Dict,
		I: dst.I, F: dst.F, C: dst.C, Bits: dst.Bits, Valid: dst.Valid}
	if v.Type == column.Null {
		return
	}
	gatherValues(dst, v, idx, mayMiss)
	if v.Valid == nil && !mayMiss {
		dst.Valid = nil
		return
	}
	dst.Valid = bitsFor(dst.Valid, n)
	for k, i := range idx {
		if i >= 0 && (v.Valid == nil || column.Bit(v.Valid, int(i))) {
			dst.Valid[k>>6] |= 1 << (uint(k) & 63)
		}
	}
}

func gatherValues(dst, v *column.Vector, idx []int32, mayMiss bool) {
	n := len(idx)
	switch {
	case v.Type.Counted():
		dst.I = gatherSlice(dst.I, v.I, idx, mayMiss)
	case v.Type == column.Real:
		dst.F = gatherSlice(dst.F, v.F, idx, mayMiss)
	case v.Type == column.Text:
		dst.C = gatherSlice(dst.C, v.C, idx, mayMiss)
	case v.Type == column.Point:
		dst.F = room(dst.F, 3*n)
		for k, i := range idx {
			if i < 0 {
				dst.F[3*k], dst.F[3*k+1], dst.F[3*k+2] = 0, 0, 0
				continue
			}
			copy(dst.F[3*k:3*k+3], v.F[3*i:3*i+3])
		}
	case v.Type == column.Boolean:
		dst.Bits = bitsFor(dst.Bits, n)
		for k, i := range idx {
			if i >= 0 && column.Bit(v.Bits, int(i)) {
				dst.Bits[k>>6] |= 1 << (uint(k) & 63)
			}
		}
	}
}

func gatherSlice[T any](dst, from []T, idx []int32, mayMiss bool) []T {
	dst = room(dst, len(idx))
	if !mayMiss {
		for k, i := range idx {
			dst[k] = from[i]
		}
		return dst
	}
	var zero T
	for k, i := range idx {
		if i < 0 {
			dst[k] = zero
		} else {
			dst[k] = from[i]
		}
	}
	return dst
}

// gather is the rows idx of v in memory of their own.
func gather(v *column.Vector, idx []int32) column.Vector {
	var dst column.Vector
	gatherInto(&dst, v, idx, false)
	return dst
}

// gatherUntil is gather for many rows: it leaves with the error of stop soon after that
// gives one.
func gatherUntil(stop func() error, v *column.Vector, idx []int32, mayMiss bool) (column.Vector, error) {
	if len(idx) <= cancelRows || v.Type == column.Null {
		var dst column.Vector
		gatherInto(&dst, v, idx, mayMiss)
		return dst, stop()
	}
	dst := column.New(v.Type, v.Unit, len(idx))
	dst.Dict = v.Dict
	if v.Valid != nil || mayMiss {
		dst.Valid = make([]uint64, column.Words(dst.N))
	}
	for lo := 0; lo < len(idx); lo += cancelRows {
		if err := stop(); err != nil {
			return dst, err
		}
		hi := min(lo+cancelRows, len(idx))
		part := dst.Slice(lo, hi) // whole words, so that it shares all of them
		gatherInto(&part, v, idx[lo:hi], mayMiss)
	}
	return dst, nil
}

// realWord is the canonical word of a REAL: 0 and -0 are one value.
func realWord(f float64) uint64 {
	if f == 0 {
		return 0
	}
	return math.Float64bits(f)
}

// compactor turns batches with a mask into batches without one.
type compactor struct {
	idx  []int32
	cols []column.Vector
	out  column.Batch
}

// compact is b without its inactive rows: b itself where all are active.
func (c *compactor) compact(b *column.Batch) *column.Batch {
	if b.On == nil {
		return b
	}
	c.idx = activeRows(c.idx, b.On, b.N)
	c.out.N = len(c.idx)
	if len(c.cols) < len(b.Cols) {
		c.cols = make([]column.Vector, len(b.Cols))
	}
	for i := range b.Cols {
		gatherInto(&c.cols[i], &b.Cols[i], c.idx, false)
	}
	// the caller may look at the vectors but their memory stays with c
	c.out.Cols = c.cols[:len(b.Cols)]
	return &c.out
}
