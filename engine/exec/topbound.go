package exec

import (
	"math/bits"
	"sync"
	"sync/atomic"

	"nearcell/catalog/column"
	"nearcell/engine/plan"
)

// topBound is what the first key of a row must not be behind for the row to be among
// the first ones of a sort. It only ever gets tighter, whichever worker found it, and
// takes out only rows that some part has enough better ones for: the result does not
// depend on when that was known.
type topBound struct {
	key  plan.SortKey
	mu   sync.Mutex
	mark atomic.Pointer[topMark]
}

// topMark is the first key of the last row that is wanted.
type topMark struct {
	null bool
	word uint64 // as orderWord has it, of the first coordinate of a point
	text string
}

// tighten takes the mark of row i of v.
func (b *topBound) tighten(v *column.Vector, i int) {
	if v.Type == column.Null {
		return
	}
	m := &topMark{null: v.IsNull(i)}
	if !m.null && v.Type == column.Text {
		m.text = v.Text(i)
	} else if !m.null {
		m.word = orderWord(v, i, 0, nil)
	}
	b.mu.Lock()
	defer b.mu.Unlock()
	if old := b.mark.Load(); old == nil || b.behind(old, m) {
		b.mark.Store(m)
	}
}

// behind reports whether a comes after b in the order of the sort.
func (b *topBound) behind(a, c *topMark) bool {
	switch {
	case a.null || c.null:
		return a.null != c.null && a.null != b.key.NullsFirst
	case b.key.Descending:
		return a.word < c.word || a.text < c.text
	}
	return a.word > c.word || a.text > c.text
}

// within is the active rows that are not behind the mark, in out; on itself where
// nothing is known yet.
func (b *topBound) within(out []uint64, v *column.Vector, on []uint64, n int) []uint64 {
	m := b.mark.Load()
	if m == nil || v.Type == column.Null {
		return on
	}
	out = bitsFor(out, n)
	switch {
	case m.null && !b.key.NullsFirst:
		return on // NULLs are the last ones, and some of them are wanted
	case m.null:
	case v.Type == column.Real && b.key.Descending:
		notBelow(out, v.F[:n], fromOrdered(m.word))
	case v.Type == column.Real:
		notAbove(out, v.F[:n], fromOrdered(m.word))
	case v.Type.Counted() && b.key.Descending:
		notBelow(out, v.I[:n], int64(m.word^1<<63))
	case v.Type.Counted():
		notAbove(out, v.I[:n], int64(m.word^1<<63))
	default:
		b.each(out, m, v, on, n)
	}
	b.nulls(out, v, n)
	if on != nil {
		for i := range out {
			out[i] &= on[i]
		}
	}
	return out
}

// each decides row by row.
func (b *topBound) each(out []uint64, m *topMark, v *column.Vector, on []uint64, n int) {
	forEachOn(on, n, func(i int) {
		if v.IsNull(i) {
			return
		}
		x := topMark{}
		if v.Type == column.Text {
			x.text = v.Text(i)
		} else {
			x.word = orderWord(v, i, 0, nil)
		}
		if !b.behind(&x, m) {
			column.SetBit(out, i)
		}
	})
}

// nulls puts the NULLs where they belong: before the mark or behind it.
func (b *topBound) nulls(out []uint64, v *column.Vector, n int) {
	if v.Valid == nil {
		return
	}
	for i := range out {
		if b.key.NullsFirst {
			out[i] |= ^v.Valid[i]
		} else {
			out[i] &= v.Valid[i]
		}
	}
	if rest := uint(n) & 63; rest != 0 {
		out[len(out)-1] &= 1<<rest - 1
	}
}

type ordered interface{ ~int64 | ~float64 }

func notAbove[T ordered](out []uint64, x []T, most T) {
	for w := range out {
		lo := w << 6
		word := uint64(0)
		for k, f := range x[lo:min(lo+64, len(x))] {
			if f <= most {
				word |= 1 << (uint(k) & 63)
			}
		}
		out[w] = word
	}
}

func notBelow[T ordered](out []uint64, x []T, least T) {
	for w := range out {
		lo := w << 6
		word := uint64(0)
		for k, f := range x[lo:min(lo+64, len(x))] {
			if f >= least {
				word |= 1 << (uint(k) & 63)
			}
		}
		out[w] = word
	}
}

// anyOn reports whether a row is active.
func anyOn(on []uint64, n int) bool {
	if on == nil {
		return n > 0
	}
	for k, w := range on[:column.Words(n)] {
		if w != 0 && k<<6+bits.TrailingZeros64(w) < n {
			return true
		}
	}
	return false
}
