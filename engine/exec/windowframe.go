package exec

import (
	"nearcell/catalog/column"
	"nearcell/engine/function"
	"nearcell/engine/plan"
)

// rowFrames sets the frames that count rows.
func rowFrames(lo, hi []int32, f plan.Frame) {
	n := int64(len(lo))
	at := func(b plan.FrameBound, k int64) int64 {
		switch b.Kind {
		case plan.UnboundedPreceding:
			return 0
		case plan.UnboundedFollowing:
			return n - 1
		case plan.Preceding:
			return k - min(b.Offset.I, n+1)
		case plan.Following:
			return k + min(b.Offset.I, n+1)
		}
		return k
	}
	for k := range n {
		lo[k] = int32(min(n, max(0, at(f.Start, k))))
		hi[k] = int32(min(n, max(0, at(f.End, k)+1)))
	}
}

// rangeFrames sets the frames that go by the key of the order. Rows whose key is
// NULL have each other where others have the rows within the offset.
func (w *windowWorker) rangeFrames(rows []int32, f plan.Frame) error {
	for k := range rows {
		switch f.Start.Kind {
		case plan.UnboundedPreceding:
			w.lo[k] = 0
		case plan.CurrentRow:
			w.lo[k] = w.peers[k]
		}
		switch f.End.Kind {
		case plan.UnboundedFollowing:
			w.hi[k] = int32(len(rows))
		case plan.CurrentRow:
			w.hi[k] = w.ends[k]
		}
	}
	if b := f.Start; b.Kind == plan.Preceding || b.Kind == plan.Following {
		if err := w.offsets(rows, b, w.lo, w.peers, func(c int) bool { return c < 0 }); err != nil {
			return err
		}
	}
	if b := f.End; b.Kind == plan.Preceding || b.Kind == plan.Following {
		return w.offsets(rows, b, w.hi, w.ends, func(c int) bool { return c <= 0 })
	}
	return nil
}

// offsets sets each bound to the first row for which before no longer holds. before
// is given how a row compares with the key of the current one moved by the offset.
func (w *windowWorker) offsets(rows []int32, b plan.FrameBound, bound, ofNull []int32, before func(int) bool) error {
	key := w.run.order[0]
	first, end := 0, len(rows)
	for first < end && key.v.IsNull(int(rows[first])) {
		first++
	}
	for end > first && key.v.IsNull(int(rows[end-1])) {
		end--
	}
	at := first
	for k, row := range rows {
		if k&(cancelRows-1) == 0 {
			if err := w.stop(); err != nil {
				return err
			}
		}
		if key.v.IsNull(int(row)) {
			bound[k] = ofNull[k]
			continue
		}
		for at < end && before(compareMoved(key, rows[at], row, b)) {
			at++
		}
		bound[k] = int32(at)
	}
	return nil
}

// compareMoved compares the key of a row with that of another moved by an offset, in
// the direction of the order.
func compareMoved(key orderKey, row, from int32, b plan.FrameBound) int {
	up := (b.Kind == plan.Following) != key.descending
	c := 0
	if key.v.Type == column.Real {
		offset := b.Offset.F
		if !up {
			offset = -offset
		}
		to := function.DecimalSum(key.v.F[from], offset)
		switch x := key.v.F[row]; {
		case x < to:
			c = -1
		case x > to:
			c = 1
		}
	} else {
		c = compareApart(key.v.I[row], key.v.I[from], b.Offset.I, up)
	}
	if key.descending {
		return -c
	}
	return c
}

// compareApart compares a with b + offset or b - offset, offset >= 0, without
// leaving 64 bits.
func compareApart(a, b, offset int64, up bool) int {
	if !up {
		return -compareUp(b, a, offset)
	}
	return compareUp(a, b, offset)
}

// compareUp compares a with b + offset.
func compareUp(a, b, offset int64) int {
	if a < b {
		return -1
	}
	switch apart := uint64(a) - uint64(b); {
	case apart < uint64(offset):
		return -1
	case apart > uint64(offset):
		return 1
	}
	return 0
}
