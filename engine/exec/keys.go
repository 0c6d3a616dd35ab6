package exec

import (
	"math"

	"nearcell/catalog/column"
)

// keyTable numbers the distinct keys of rows by open addressing. A key is a
// fixed number of words: one a column (three for a POINT), then one bit a
// column that marks NULL. Words are canonical, so that equal words are equal
// keys: -0 is 0, a text is its code in the table's own dictionary whichever
// dictionary it came with, NULLs are equal to each other.
type keyTable struct {
	types  []column.Type
	texts  []*textCodes // of text columns, else nil
	width  int          // words a key
	words  []uint64     // n * width
	n      int
	slots  []int32    // key + 1, 0: free; the length is a power of two
	shift  uint       // 64 - log2(len(slots))
	single *wordTable // where the one column is a word: instead of slots
	// codeKey gives the key of a text code where the one column is a text:
	// such a table needs no slots.
	codeKey []int32
	nullKey int32 // the key of NULL in a table of one text or one word, -1: none
	// stop is asked while a large table grows, nil: nobody asks. When it gives an error
	// the table is left as it is and may hold keys twice: nobody wants it any more.
	stop func() error
}

const firstSlots = 1 << 10

func newKeyTable(types []column.Type) *keyTable {
	t := &keyTable{types: types, texts: make([]*textCodes, len(types)), nullKey: -1}
	for i, ty := range types {
		t.width++
		if ty == column.Point {
			t.width += 2
		}
		if ty == column.Text {
			t.texts[i] = &textCodes{codes: map[string]int32{}}
		}
	}
	t.width += column.Words(len(types))
	switch {
	case singleWord(types):
		t.single = &wordTable{}
	case !t.oneText():
		t.resize(firstSlots)
	}
	return t
}

// oneText reports whether the key is a single text: then its code says all.
func (t *keyTable) oneText() bool { return len(t.types) == 1 && t.types[0] == column.Text }

func (t *keyTable) resize(size int) {
	t.slots = large[int32](t.stop, size)
	t.shift = 64
	for s := size; s > 1; s >>= 1 {
		t.shift--
	}
	mask := size - 1
	for k := 0; k < t.n; k++ {
		if t.stopped(k) {
			return
		}
		i := int(t.hash(t.words[k*t.width:(k+1)*t.width]) >> t.shift)
		for t.slots[i] != 0 {
			i = (i + 1) & mask
		}
		t.slots[i] = int32(k) + 1
	}
}

// freshRows is after how many rows a loop that touches fresh memory in any order asks
// whether to go on: each of them may cost a page that the system has to find first.
const freshRows = 1 << 12

// stopped asks whether to leave before key k.
func (t *keyTable) stopped(k int) bool {
	return k&(freshRows-1) == 0 && t.stop != nil && t.stop() != nil
}

// until sets what a large table asks whether to go on.
func (t *keyTable) until(stop func() error) *keyTable {
	t.stop = stop
	return t
}

// hash spreads a key's words over the high bits (multiplication by 2^64 over
// the golden ratio, between foldings of the high half onto the low one).
func (t *keyTable) hash(key []uint64) uint64 {
	h := uint64(len(key))
	for _, w := range key {
		h = (h ^ w) * 0x9e3779b97f4a7c15
		h ^= h >> 32
	}
	return h * 0x9e3779b97f4a7c15
}

// put is the number of a key that is added if it is new.
func (t *keyTable) put(key []uint64) int32 {
	if t.single != nil {
		if key[1] != 0 {
			return t.putNull()
		}
		return t.putWord(key[0])
	}
	if 2*(t.n+1) > len(t.slots) {
		t.resize(2 * len(t.slots))
	}
	mask := len(t.slots) - 1
	for i := int(t.hash(key) >> t.shift); ; i = (i + 1) & mask {
		k := t.slots[i]
		if k == 0 {
			t.slots[i] = int32(t.n) + 1
			return t.add(key)
		}
		if t.same(int(k-1), key) {
			return k - 1
		}
	}
}

func (t *keyTable) add(key []uint64) int32 {
	t.words = widened(t.stop, t.words, len(t.words)+t.width)
	t.words = append(t.words, key...)
	t.n++
	return int32(t.n - 1)
}

func (t *keyTable) same(k int, key []uint64) bool {
	have := t.words[k*t.width : (k+1)*t.width]
	for i, w := range key {
		if have[i] != w {
			return false
		}
	}
	return true
}

// find is the number of a key, -1 where it is not there.
func (t *keyTable) find(key []uint64) int32 {
	if t.single != nil {
		if key[1] != 0 {
			return -1
		}
		return t.findWord(key[0])
	}
	mask := len(t.slots) - 1
	for i := int(t.hash(key) >> t.shift); ; i = (i + 1) & mask {
		k := t.slots[i]
		if k == 0 {
			return -1
		}
		if t.same(int(k-1), key) {
			return k - 1
		}
	}
}

// putText is the number of the key that is one text code, below 0 for NULL.
func (t *keyTable) putText(code int32) int32 {
	if code < 0 {
		if t.nullKey < 0 {
			t.nullKey = t.add([]uint64{0, 1})
		}
		return t.nullKey
	}
	for int(code) >= len(t.codeKey) {
		t.codeKey = append(t.codeKey, -1)
	}
	if t.codeKey[code] < 0 {
		t.codeKey[code] = t.add([]uint64{uint64(code), 0})
	}
	return t.codeKey[code]
}

// absorb adds the keys of another table of the same types; key k of it is key
// to[k] here, unless the run was to end meanwhile. Where first is not nil, the first column is a number i that stands
// for first[i] here.
func (t *keyTable) absorb(o *keyTable, first []int32) (to []int32) {
	to = make([]int32, o.n)
	key := make([]uint64, t.width)
	for k := range to {
		if t.stopped(k) {
			break
		}
		copy(key, o.words[k*o.width:(k+1)*o.width])
		if first != nil {
			key[0] = uint64(first[key[0]])
		}
		at := 0
		for c, ty := range t.types {
			if ty == column.Text && !marked(key, t.width, len(t.types), c) {
				key[at] = uint64(t.texts[c].code(o.texts[c].texts[key[at]]))
			}
			at += wordsOf(ty)
		}
		switch {
		case t.width == 0:
			if t.n == 0 {
				t.add(nil)
			}
		case !t.oneText():
			to[k] = t.put(key)
		case key[1] != 0:
			to[k] = t.putText(-1)
		default:
			to[k] = t.putText(int32(key[0]))
		}
	}
	return to
}

func wordsOf(ty column.Type) int {
	if ty == column.Point {
		return 3
	}
	return 1
}

// marked reports whether column c of a key is NULL.
func marked(key []uint64, width, columns, c int) bool {
	return column.Bit(key[width-column.Words(columns):], c)
}

// bytes is about what the table takes.
func (t *keyTable) bytes() int64 {
	n := int64(8*len(t.words) + 4*len(t.slots) + 4*len(t.codeKey))
	if t.single != nil {
		n += int64(4*len(t.single.direct) + 16*len(t.single.slots))
	}
	return n
}

// columns are the keys as vectors, key k in row k.
func (t *keyTable) columns() []column.Vector {
	cols := make([]column.Vector, len(t.types))
	at := 0
	for c, ty := range t.types {
		v := column.New(ty, nil, t.n)
		if ty == column.Text {
			v.Dict = t.texts[c].dict()
		}
		for k := 0; k < t.n; k++ {
			if t.stopped(k) {
				break
			}
			key := t.words[k*t.width : (k+1)*t.width]
			if marked(key, t.width, len(t.types), c) {
				v.SetNull(k)
				continue
			}
			setWord(&v, k, key[at:])
		}
		cols[c] = v
		at += wordsOf(ty)
	}
	return cols
}

func setWord(v *column.Vector, k int, words []uint64) {
	switch {
	case v.Type.Counted():
		v.I[k] = int64(words[0])
	case v.Type == column.Real:
		v.F[k] = math.Float64frombits(words[0])
	case v.Type == column.Text:
		v.C[k] = uint32(words[0])
	case v.Type == column.Boolean:
		if words[0] != 0 {
			column.SetBit(v.Bits, k)
		}
	case v.Type == column.Point:
		for j := range 3 {
			v.F[3*k+j] = math.Float64frombits(words[j])
		}
	}
}

// textCodes is the dictionary of one text column of a key table.
type textCodes struct {
	texts []string
	codes map[string]int32
}

func (t *textCodes) code(s string) int32 {
	if c, ok := t.codes[s]; ok {
		return c
	}
	c := int32(len(t.texts))
	t.texts = append(t.texts, s)
	t.codes[s] = c
	return c
}

func (t *textCodes) dict() *column.Dict {
	if len(t.texts) == 0 {
		return &column.Dict{Texts: []string{""}} // what a NULL slot refers to
	}
	return &column.Dict{Texts: t.texts}
}
