package column

import (
	"crypto/sha256"
	"encoding/binary"
	"hash"
	"math"
)

// Key is a fingerprint of a table: of its names, types, units, meanings and
// values. It does not depend on how texts are coded. Two tables of one key are
// taken to be the same (the first half of SHA-256).
func (t *Table) Key() [16]byte {
	h := &hasher{h: sha256.New()}
	h.count(t.N)
	h.count(len(t.Schema))
	for i, f := range t.Schema {
		h.text(f.Name)
		h.text(f.Meaning)
		h.vector(&t.Cols[i])
	}
	return h.sum()
}

// Key is a fingerprint of a vector: of its type, unit and values.
func (v *Vector) Key() [16]byte {
	h := &hasher{h: sha256.New()}
	h.vector(v)
	return h.sum()
}

// hasher writes numbers as eight bytes, lowest first, through a buffer.
type hasher struct {
	h   hash.Hash
	buf [4096]byte
	n   int
}

func (h *hasher) word(x uint64) {
	if h.n+8 > len(h.buf) {
		h.flush()
	}
	binary.LittleEndian.PutUint64(h.buf[h.n:], x)
	h.n += 8
}

func (h *hasher) flush() {
	h.h.Write(h.buf[:h.n])
	h.n = 0
}

func (h *hasher) count(n int) { h.word(uint64(n)) }

// text writes length and bytes, so that no two lists of texts run together alike.
func (h *hasher) text(s string) {
	h.count(len(s))
	h.flush()
	h.h.Write([]byte(s))
}

func (h *hasher) vector(v *Vector) {
	h.word(uint64(v.Type))
	h.text(v.Unit.String())
	h.count(v.N)
	nulls := v.NullCount()
	h.count(nulls)
	if nulls > 0 && v.Valid != nil {
		h.bitmap(v.Valid, v.N)
	}
	switch v.Type {
	case Integer, Timestamp, Interval:
		for _, x := range v.I {
			h.word(uint64(x))
		}
	case Real, Point:
		for _, x := range v.F {
			h.word(math.Float64bits(x))
		}
	case Boolean:
		h.bitmap(v.Bits, v.N)
	case Text:
		c := Compact(v)
		h.count(len(c.Dict.Texts))
		for _, s := range c.Dict.Texts {
			h.text(s)
		}
		for _, x := range c.C {
			h.word(uint64(x))
		}
	}
}

func (h *hasher) bitmap(b []uint64, n int) {
	for _, w := range b[:Words(n)] {
		h.word(w)
	}
}

func (h *hasher) sum() (k [16]byte) {
	h.flush()
	copy(k[:], h.h.Sum(nil))
	return k
}
