package function

import (
	"hash/maphash"

	"nearcell/catalog/column"
)

// Arena hands out scratch slices that live until Reset, and keeps what was
// once computed from a dictionary. The zero Arena is ready. An Arena belongs to
// one goroutine.
type Arena struct {
	words  pool[uint64]
	ints   pool[int64]
	floats pool[float64]
	codes  pool[uint32]
	tables map[TableKey]any // of small dictionaries
	large  map[TableKey]any // of large ones
	texts  []*TextBuilder
	inUse  int // of texts
}

// Words is a scratch bitmap of so many words; its content is anything.
func (a *Arena) Words(n int) []uint64 { return a.words.get(n) }

// Ints is a scratch slice; its content is anything.
func (a *Arena) Ints(n int) []int64 { return a.ints.get(n) }

// Floats is a scratch slice; its content is anything.
func (a *Arena) Floats(n int) []float64 { return a.floats.get(n) }

// Codes is a scratch slice; its content is anything.
func (a *Arena) Codes(n int) []uint32 { return a.codes.get(n) }

// Reset takes all slices back. What was computed from dictionaries stays.
func (a *Arena) Reset() {
	a.words.next, a.ints.next, a.floats.next, a.codes.next, a.inUse = 0, 0, 0, 0, 0
}

// pool keeps its slices in the order in which they are asked for: a pipeline
// asks for the same ones batch after batch.
type pool[T any] struct {
	slices [][]T
	next   int
}

func (p *pool[T]) get(n int) []T {
	if p.next == len(p.slices) {
		p.slices = append(p.slices, nil)
	}
	if cap(p.slices[p.next]) < n {
		p.slices[p.next] = make([]T, n)
	}
	s := p.slices[p.next][:n:n]
	p.next++
	return s
}

// TableKey names a table that was computed from a dictionary: the expression
// or function that it belongs to (a pointer), which of its tables it is, and
// the dictionary.
type TableKey struct {
	Owner any
	Slot  int
	Dict  *column.Dict
}

// The memory of tables is bounded. Texts that are made anew for each batch come
// with a small dictionary of their own each time; they do not push out what was
// computed from the large dictionary of a stored column.
const (
	maxTables = 128
	largeDict = 4096
)

// Table is what SetTable kept, or nil.
func (a *Arena) Table(k TableKey) any {
	if len(k.Dict.Texts) >= largeDict {
		return a.large[k]
	}
	return a.tables[k]
}

// SetTable keeps a table over Reset. Tables may be dropped at any time.
func (a *Arena) SetTable(k TableKey, table any) {
	tables := &a.tables
	if len(k.Dict.Texts) >= largeDict {
		tables = &a.large
	}
	if *tables == nil || len(*tables) >= maxTables {
		*tables = make(map[TableKey]any)
	}
	(*tables)[k] = table
}

// Texts is an empty builder, to be used until Reset.
func (a *Arena) Texts() *TextBuilder {
	if a.inUse == len(a.texts) {
		a.texts = append(a.texts, &TextBuilder{})
	}
	t := a.texts[a.inUse]
	a.inUse++
	t.begin()
	return t
}

// TextBuilder makes a dictionary of distinct texts, code by code. Code 0 is
// the empty text, which NULL slots and inactive rows hold.
type TextBuilder struct {
	dict   *column.Dict
	hashes []uint64
	slots  []uint32 // code+1, 0 free; the length is a power of two
}

var textSeed = maphash.MakeSeed()

func (t *TextBuilder) begin() {
	t.dict = &column.Dict{}
	t.hashes = t.hashes[:0]
	if t.slots == nil {
		t.slots = make([]uint32, 64)
	}
	clear(t.slots)
	t.Code("")
}

// Code is the code of a text in the new dictionary.
func (t *TextBuilder) Code(s string) uint32 {
	h := maphash.String(textSeed, s)
	mask := uint64(len(t.slots) - 1)
	for i := h & mask; ; i = (i + 1) & mask {
		slot := t.slots[i]
		if slot == 0 {
			code := uint32(len(t.dict.Texts))
			t.dict.Texts = append(t.dict.Texts, s)
			t.hashes = append(t.hashes, h)
			t.slots[i] = code + 1
			if 2*len(t.dict.Texts) > len(t.slots) {
				t.grow()
			}
			return code
		}
		if t.hashes[slot-1] == h && t.dict.Texts[slot-1] == s {
			return slot - 1
		}
	}
}

func (t *TextBuilder) grow() {
	t.slots = make([]uint32, 2*len(t.slots))
	mask := uint64(len(t.slots) - 1)
	for code, h := range t.hashes {
		i := h & mask
		for t.slots[i] != 0 {
			i = (i + 1) & mask
		}
		t.slots[i] = uint32(code) + 1
	}
}

// Finish is the dictionary. The builder must not be used afterwards.
func (t *TextBuilder) Finish() *column.Dict {
	d := t.dict
	t.dict = nil
	return d
}

// CodeBytes is Code of a text that is not kept if the dictionary has it.
func (t *TextBuilder) CodeBytes(s []byte) uint32 {
	h := maphash.Bytes(textSeed, s)
	mask := uint64(len(t.slots) - 1)
	for i := h & mask; t.slots[i] != 0; i = (i + 1) & mask {
		if slot := t.slots[i]; t.hashes[slot-1] == h && t.dict.Texts[slot-1] == string(s) {
			return slot - 1
		}
	}
	return t.Code(string(s))
}
