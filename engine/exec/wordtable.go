package exec

import (
	"math"

	"nearcell/catalog/column"
)

// wordTable finds the keys of a keyTable whose one column is a word (everything but
// texts and points). Numbers that lie close together are looked up by their distance
// from the least of them; others by open addressing, with the word beside the key so
// that a look costs one line of the cache.
type wordTable struct {
	direct []int32 // key + 1 of the number least + i, 0: none; nil: hashed, or nothing yet
	least  int64
	slots  []wordSlot // the length is a power of two; nil: direct, or nothing yet
	shift  uint       // 64 - log2(len(slots))
}

type wordSlot struct {
	word uint64
	key  int32 // + 1, 0: free
}

// mostDirect is the widest range of numbers that is looked up by distance: what fits
// into the second cache of a core.
const mostDirect = 1 << 16

// singleWord reports whether a key of these columns is one word, beside the mark of
// NULL.
func singleWord(types []column.Type) bool {
	return len(types) == 1 && types[0] != column.Text && types[0] != column.Point
}

// covers makes the numbers from lo to hi ones that are looked up by distance, if
// that can be; words of other types than numbers never are.
func (t *keyTable) covers(lo, hi int64) bool {
	w := t.single
	if w.slots != nil || !t.types[0].Counted() {
		return false
	}
	if w.direct == nil {
		if uint64(hi)-uint64(lo) >= mostDirect {
			return false
		}
		w.least, w.direct = lo, make([]int32, hi-lo+1)
		return true
	}
	last := w.least + int64(len(w.direct)) - 1
	if lo >= w.least && hi <= last {
		return true
	}
	newLo, newHi := min(lo, w.least), max(hi, last)
	if uint64(newHi)-uint64(newLo) >= mostDirect {
		t.hashWords()
		return false
	}
	// as much again on the side that grew, so that numbers that come one by one do
	// not move the table each time
	spare := min(int64(len(w.direct)), mostDirect-1-(newHi-newLo))
	if newLo < w.least && newLo > math.MinInt64+spare {
		newLo -= spare
	} else if newHi > last && newHi < math.MaxInt64-spare {
		newHi += spare
	}
	wider := make([]int32, newHi-newLo+1)
	copy(wider[w.least-newLo:], w.direct)
	w.least, w.direct = newLo, wider
	return true
}

// hashWords gives up looking up by distance.
func (t *keyTable) hashWords() {
	t.single.direct = nil
	size := firstSlots
	for size < 4*t.n {
		size *= 2
	}
	t.rehashWords(size)
}

func (t *keyTable) rehashWords(size int) {
	w := t.single
	w.slots = large[wordSlot](t.stop, size)
	w.shift = 64
	for s := size; s > 1; s >>= 1 {
		w.shift--
	}
	for k := range t.n {
		if t.stopped(k) {
			return
		}
		if t.words[2*k+1] != 0 {
			continue // NULL has a place of its own
		}
		word := t.words[2*k]
		i := int(mix(word) >> w.shift)
		for w.slots[i].key != 0 {
			i = (i + 1) & (size - 1)
		}
		w.slots[i] = wordSlot{word, int32(k) + 1}
	}
}

// mix spreads a word over the high bits: a multiplication by 2^64 over the golden
// ratio, folded and multiplied again, so that words that differ in their high bits
// alone (REALs) do not meet.
func mix(w uint64) uint64 {
	w *= 0x9e3779b97f4a7c15
	w ^= w >> 32
	return w * 0x9e3779b97f4a7c15
}

// putWord is the key of a word that is added if it is new.
func (t *keyTable) putWord(word uint64) int32 {
	w := t.single
	if w.slots == nil {
		if t.covers(int64(word), int64(word)) {
			k := &w.direct[int64(word)-w.least]
			if *k == 0 {
				*k = t.add2(word, 0) + 1
			}
			return *k - 1
		}
		if w.slots == nil {
			t.hashWords()
		}
	}
	return t.putHashed(word)
}

func (t *keyTable) putHashed(word uint64) int32 {
	w := t.single
	mask := len(w.slots) - 1
	for i := int(mix(word) >> w.shift); ; i = (i + 1) & mask {
		s := &w.slots[i]
		if s.key == 0 {
			k := t.add2(word, 0)
			*s = wordSlot{word, k + 1}
			if 2*t.n > len(w.slots) {
				t.rehashWords(grownSlots(len(w.slots)))
			}
			return k
		}
		if s.word == word {
			return s.key - 1
		}
	}
}

func (t *keyTable) add2(a, b uint64) int32 {
	t.words = widened(t.stop, t.words, len(t.words)+2)
	t.words = append(t.words, a, b)
	t.n++
	return int32(t.n - 1)
}

// putNull is the key of NULL in a table of single words.
func (t *keyTable) putNull() int32 {
	if t.nullKey < 0 {
		t.nullKey = t.add2(0, 1)
	}
	return t.nullKey
}

// grownSlots is the next size of a table: large ones, whose memory counts, grow less.
func grownSlots(n int) int {
	if n >= 1<<22 {
		return 2 * n
	}
	return 4 * n
}

// findWord is the key of a word, -1 where it is not there.
func (t *keyTable) findWord(word uint64) int32 {
	w := t.single
	if w.direct != nil {
		if d := word - uint64(w.least); d < uint64(len(w.direct)) {
			return w.direct[d] - 1
		}
		return -1
	}
	if w.slots == nil {
		return -1
	}
	mask := len(w.slots) - 1
	for i := int(mix(word) >> w.shift); ; i = (i + 1) & mask {
		s := &w.slots[i]
		if s.key == 0 || s.word == word {
			return s.key - 1
		}
	}
}

// putSingle is put for one column that is a word.
func (r *keyReader) putSingle(v *column.Vector, on []uint64, n int, keys []int32) {
	t := r.table
	if v.Type == column.Null {
		forEachOn(on, n, func(i int) { keys[i] = t.putNull() })
		return
	}
	if v.Type.Counted() && r.putNear(v, on, n, keys) {
		return
	}
	one := func(i int) {
		if v.Valid != nil && !column.Bit(v.Valid, i) {
			keys[i] = t.putNull()
			return
		}
		keys[i] = t.putWord(wordAt(v, i))
	}
	if on != nil || v.Valid != nil || !v.Type.Counted() || t.single.slots == nil {
		forEachOn(on, n, one)
		return
	}
	last, key := v.I[0], t.putHashed(uint64(v.I[0]))
	for i, x := range v.I[:n] {
		if x != last { // a log has runs of one instant
			last, key = x, t.putHashed(uint64(x))
		}
		keys[i] = key
	}
}

func wordAt(v *column.Vector, i int) uint64 {
	switch {
	case v.Type.Counted():
		return uint64(v.I[i])
	case v.Type == column.Real:
		return realWord(v.F[i])
	}
	return v.Bits[i>>6] >> (uint(i) & 63) & 1
}

// putNear is putSingle for numbers that are looked up by distance; it reports
// whether these are.
func (r *keyReader) putNear(v *column.Vector, on []uint64, n int, keys []int32) bool {
	t := r.table
	if t.single.slots != nil {
		return false
	}
	rows := v.Valid != nil || on != nil
	if rows {
		r.order = activeRows(r.order, on, n)
	} else if putKnown(t.single, v.I[:n], keys) {
		return true
	}
	lo, hi, some := r.span(v, rows, n)
	if some && !t.covers(lo, hi) {
		if t.single.slots == nil {
			t.hashWords()
		}
		return false
	}
	direct, least := t.single.direct, t.single.least
	if !rows {
		for i, x := range v.I[:n] {
			k := direct[x-least]
			if k == 0 {
				k = t.add2(uint64(x), 0) + 1
				direct[x-least] = k
			}
			keys[i] = k - 1
		}
		return true
	}
	for _, i := range r.order {
		if v.Valid != nil && !column.Bit(v.Valid, int(i)) {
			keys[i] = t.putNull()
			continue
		}
		x := v.I[i]
		k := direct[x-least]
		if k == 0 {
			k = t.add2(uint64(x), 0) + 1
			direct[x-least] = k
		}
		keys[i] = k - 1
	}
	return true
}

// putKnown gives numbers the keys that they have already, and reports whether all have
// one.
func putKnown(t *wordTable, numbers []int64, keys []int32) bool {
	direct, least := t.direct, uint64(t.least)
	keys = keys[:len(numbers)]
	for i, x := range numbers {
		d := uint64(x) - least
		if d >= uint64(len(direct)) || direct[d] == 0 {
			return false
		}
		keys[i] = direct[d] - 1
	}
	return true
}

// span is the least and the greatest of the active numbers, of all n or of the rows
// in r.order that are not NULL.
func (r *keyReader) span(v *column.Vector, rows bool, n int) (lo, hi int64, some bool) {
	if !rows {
		if n == 0 {
			return 0, 0, false
		}
		lo, hi = v.I[0], v.I[0]
		for _, x := range v.I[:n] {
			lo, hi = min(lo, x), max(hi, x)
		}
		return lo, hi, true
	}
	for _, i := range r.order {
		if v.Valid != nil && !column.Bit(v.Valid, int(i)) {
			continue
		}
		x := v.I[i]
		if !some {
			lo, hi, some = x, x, true
		}
		lo, hi = min(lo, x), max(hi, x)
	}
	return lo, hi, some
}

// findSingle is find for one column that is a word.
func (r *keyReader) findSingle(v *column.Vector, on []uint64, n int, keys []int32) {
	t := r.table
	switch {
	case v.Type == column.Null:
		forEachOn(on, n, func(i int) { keys[i] = -1 })
	case on != nil || v.Valid != nil || !v.Type.Counted():
		forEachOn(on, n, func(i int) {
			keys[i] = -1
			if v.Valid == nil || column.Bit(v.Valid, i) {
				keys[i] = t.findWord(wordAt(v, i))
			}
		})
	case t.single.direct != nil:
		direct, least := t.single.direct, uint64(t.single.least)
		for i, x := range v.I[:n] {
			k := int32(0)
			if d := uint64(x) - least; d < uint64(len(direct)) {
				k = direct[d]
			}
			keys[i] = k - 1
		}
	default:
		for i, x := range v.I[:n] {
			keys[i] = t.findWord(uint64(x))
		}
	}
}
