package exec

import (
	"sync"
	"sync/atomic"
)

// valueCodes numbers the first mostCodes different values that all workers meet. A
// value that has a number has it from its first row on, and one that is met when there
// are no more never gets one: which values are numbered depends on timing, what is
// counted does not. Readings of an instrument have few different values.
type valueCodes struct {
	mu   sync.Mutex
	all  codeTable
	full atomic.Bool // then all is not changed any more
}

const (
	mostCodes = 1 << 14
	noCode    = int32(-1)
)

// codeTable finds the codes of words by open addressing.
type codeTable struct {
	slots []codeSlot // the length is a power of two
	n     int
}

type codeSlot struct {
	word uint64
	code int32 // one more, 0: free
}

func (t *codeTable) find(word uint64) (code int32, ok bool) {
	if t.slots == nil {
		return noCode, false
	}
	mask := len(t.slots) - 1
	for i := int(mix(word)>>32) & mask; ; i = (i + 1) & mask {
		s := &t.slots[i]
		if s.code == 0 {
			return noCode, false
		}
		if s.word == word {
			return s.code - 1, true
		}
	}
}

func (t *codeTable) put(word uint64, code int32) {
	if 2*(t.n+1) > len(t.slots) {
		old := t.slots
		t.slots = make([]codeSlot, max(256, 4*len(old)))
		for _, s := range old {
			if s.code != 0 {
				t.place(s)
			}
		}
	}
	t.n++
	t.place(codeSlot{word, code + 1})
}

func (t *codeTable) place(s codeSlot) {
	mask := len(t.slots) - 1
	i := int(mix(s.word)>>32) & mask
	for t.slots[i].code != 0 {
		i = (i + 1) & mask
	}
	t.slots[i] = s
}

// localCodes is what one worker knows of valueCodes.
type localCodes struct {
	of    *valueCodes
	known codeTable
	whole bool // all codes there will ever be are known
}

// code is that of a word, noCode where it has none.
func (l *localCodes) code(word uint64) int32 {
	if l.whole {
		code, _ := l.of.all.find(word)
		return code
	}
	if code, ok := l.known.find(word); ok {
		return code
	}
	code := l.of.learn(word)
	if l.of.full.Load() {
		l.whole = true
	} else {
		l.known.put(word, code)
	}
	return code
}

// learn numbers a word that a worker does not know.
func (c *valueCodes) learn(word uint64) int32 {
	c.mu.Lock()
	defer c.mu.Unlock()
	code, ok := c.all.find(word)
	if ok || c.full.Load() {
		return code
	}
	code = int32(c.all.n)
	c.all.put(word, code)
	if c.all.n == mostCodes {
		c.full.Store(true)
	}
	return code
}
