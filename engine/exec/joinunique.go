package exec

import (
	"context"

	"nearcell/catalog/column"
	"nearcell/engine/plan"
)

// unique reports whether no key has more than one row: then row k has key k, as keys
// are numbered as they come.
func (s *buildSide) unique() bool {
	return s.keys != nil && len(s.rows) == s.keys.n
}

// sparse is the part of a batch below which its matches are gathered instead of
// being handed on under a mask.
const sparse = 4

// runUnique joins a batch where each row has at most one partner and equal keys are
// all that is asked. The left columns are handed on as they are, under a mask as a
// filter does; only the right ones are gathered. It reports whether it did.
func (s *joinStep) runUnique(_ context.Context, w *Worker, l *joinLocal, b *column.Batch, emit Emit) (bool, error) {
	if !s.right.unique() || s.kind != plan.Inner && s.kind != plan.Left {
		return false, nil
	}
	active := countOn(b.On, b.N)
	l.active = room(l.active, b.N)
	matched := 0
	if s.kind == plan.Left {
		for i := range l.active {
			l.active[i] = -1
		}
		forEachOn(b.On, b.N, func(i int) {
			if k := l.keys[i]; k >= 0 {
				l.active[i] = s.right.rows[k]
			}
		})
	} else {
		l.stay = bitsFor(l.stay, b.N)
		if matched = s.partners(l, b); matched*sparse < b.N {
			return matched == 0, nil
		}
	}
	left, right := b.Cols, s.right.table.Cols
	if l.wide == nil {
		l.wide = make([]column.Vector, len(left)+len(right))
	}
	copy(l.wide, left)
	for c := range right {
		gatherInto(&l.wide[len(left)+c], &right[c], l.active, s.kind == plan.Left)
	}
	l.batch = column.Batch{N: b.N, Cols: l.wide, On: b.On}
	if s.kind == plan.Inner && matched < b.N {
		l.batch.On = l.stay
	}
	if active == 0 {
		return true, nil
	}
	return true, w.deeper(&l.batch, emit)
}

// partners sets l.active to the right row of each left one, any where there is none,
// and l.stay to the rows that have one; it counts them.
func (s *joinStep) partners(l *joinLocal, b *column.Batch) int {
	matched := 0
	rows := s.right.rows
	if b.On == nil {
		for i, k := range l.keys[:b.N] {
			l.active[i] = 0
			if k >= 0 {
				l.active[i] = rows[k]
				l.stay[i>>6] |= 1 << (uint(i) & 63)
				matched++
			}
		}
		return matched
	}
	clear(l.active)
	forEachOn(b.On, b.N, func(i int) {
		if k := l.keys[i]; k >= 0 {
			l.active[i] = rows[k]
			column.SetBit(l.stay, i)
			matched++
		}
	})
	return matched
}
