package exec

import (
	"nearcell/catalog/column"
)

// keyReader turns rows into keys of a table. It holds the scratch of one
// goroutine; the table may be shared by readers that only find.
type keyReader struct {
	table *keyTable
	words []uint64  // of the active rows of one batch
	remap []codeMap // one a column
	order []int32   // the active rows
}

// codeMap remembers what the codes of the last dictionary mean in the table. A
// reader puts or finds, it does not do both: for a table of one text, put keeps
// the key here and find the table's code.
type codeMap struct {
	from *column.Dict
	to   []int32 // code in the table (or key), unseen, absent
}

const (
	unseen = -1 - iota
	absent // the table has no such text
)

func newKeyReader(t *keyTable) *keyReader {
	return &keyReader{table: t, remap: make([]codeMap, len(t.types))}
}

// put adds the keys of the active rows and sets keys[i] for each of them.
func (r *keyReader) put(cols []column.Vector, on []uint64, n int, keys []int32) {
	t := r.table
	switch {
	case n == 0: // a part that nothing came to
	case len(t.types) == 0:
		if t.n == 0 && countOn(on, n) > 0 {
			t.add(nil)
		}
		clear(keys[:n])
	case t.oneText():
		r.putText(&cols[0], on, n, keys)
	case t.single != nil:
		r.putSingle(&cols[0], on, n, keys)
	default:
		r.encode(cols, on, n, true)
		for k, i := range r.order {
			keys[i] = t.put(r.words[k*t.width : (k+1)*t.width])
		}
	}
}

// find sets keys[i] to the key of each active row, -1 where there is none.
// Keys with a NULL are not found.
func (r *keyReader) find(cols []column.Vector, on []uint64, n int, keys []int32) {
	t := r.table
	if t.oneText() {
		r.eachCode(0, &cols[0], on, n, false, func(i int, code int32) {
			keys[i] = -1
			if code >= 0 && int(code) < len(t.codeKey) {
				keys[i] = t.codeKey[code]
			}
		})
		return
	}
	if t.single != nil {
		r.findSingle(&cols[0], on, n, keys)
		return
	}
	r.encode(cols, on, n, false)
	marks := column.Words(len(t.types))
	for k, i := range r.order {
		key := r.words[k*t.width : (k+1)*t.width]
		keys[i] = -1
		if !anySet(key[t.width-marks:]) {
			keys[i] = t.find(key)
		}
	}
}

func anySet(words []uint64) bool {
	for _, w := range words {
		if w != 0 {
			return true
		}
	}
	return false
}

// putText is put for a single text column: what the reader remembers of a code
// is its key at once.
func (r *keyReader) putText(v *column.Vector, on []uint64, n int, keys []int32) {
	t := r.table
	if v.Type == column.Null {
		forEachOn(on, n, func(i int) { keys[i] = t.putText(unseen) })
		return
	}
	m := r.remembered(0, v.Dict)
	one := func(i int) {
		if v.Valid != nil && !column.Bit(v.Valid, i) {
			keys[i] = t.putText(unseen)
			return
		}
		code := v.C[i]
		if m.to[code] == unseen {
			m.to[code] = t.putText(t.texts[0].code(v.Dict.Texts[code]))
		}
		keys[i] = m.to[code]
	}
	if on != nil || v.Valid != nil {
		forEachOn(on, n, one)
		return
	}
	for i, code := range v.C[:n] {
		if k := m.to[code]; k >= 0 {
			keys[i] = k
		} else {
			one(i)
		}
	}
}

// remembered is what column c's reader knows of the codes of a dictionary.
func (r *keyReader) remembered(c int, d *column.Dict) *codeMap {
	m := &r.remap[c]
	if m.from != d {
		m.from = d
		m.to = room(m.to, len(d.Texts))
		for i := range m.to {
			m.to[i] = unseen
		}
	}
	return m
}

// encode writes the keys of the active rows into r.words.
func (r *keyReader) encode(cols []column.Vector, on []uint64, n int, adding bool) {
	t := r.table
	r.order = activeRows(r.order, on, n)
	r.words = room(r.words, len(r.order)*t.width)
	clear(r.words)
	if len(r.order) == 0 {
		return
	}
	at := 0
	marks := t.width - column.Words(len(t.types))
	for c := range cols {
		v := &cols[c]
		switch {
		case v.Type == column.Null:
		case v.Type == column.Text:
			k := 0
			r.eachCode(c, v, on, n, adding, func(_ int, code int32) {
				r.words[k*t.width+at] = uint64(uint32(max(code, 0)))
				if code == absent {
					// a word that no key has: codes stay below 2^31
					r.words[k*t.width+at] = 1 << 40
				}
				k++
			})
		default:
			encodeWords(r.words[at:], t.width, v, r.order)
		}
		if v.Type == column.Null || v.Valid != nil {
			r.markNulls(v, c, at, marks)
		}
		at += wordsOf(t.types[c])
	}
}

// markNulls sets the mark of column c in the keys of rows where it is NULL and
// clears their words.
func (r *keyReader) markNulls(v *column.Vector, c, at, marks int) {
	t := r.table
	for k, i := range r.order {
		if !v.IsNull(int(i)) {
			continue
		}
		key := r.words[k*t.width : (k+1)*t.width]
		clear(key[at : at+wordsOf(t.types[c])])
		key[marks+c>>6] |= 1 << (uint(c) & 63)
	}
}

func encodeWords(words []uint64, width int, v *column.Vector, rows []int32) {
	switch {
	case v.Type.Counted():
		for k, i := range rows {
			words[k*width] = uint64(v.I[i])
		}
	case v.Type == column.Real:
		for k, i := range rows {
			words[k*width] = realWord(v.F[i])
		}
	case v.Type == column.Boolean:
		for k, i := range rows {
			words[k*width] = v.Bits[i>>6] >> (uint(i) & 63) & 1
		}
	case v.Type == column.Point:
		for k, i := range rows {
			for j := range 3 {
				words[k*width+j] = realWord(v.F[3*int(i)+j])
			}
		}
	}
}

// eachCode calls f for the active rows with the table's code of their text:
// below 0 where it is NULL or, when not adding, unknown to the table.
func (r *keyReader) eachCode(c int, v *column.Vector, on []uint64, n int, adding bool, f func(i int, code int32)) {
	if v.Type == column.Null {
		forEachOn(on, n, func(i int) { f(i, unseen) })
		return
	}
	m := r.remembered(c, v.Dict)
	texts := r.table.texts[c]
	forEachOn(on, n, func(i int) {
		if v.Valid != nil && !column.Bit(v.Valid, i) {
			f(i, unseen)
			return
		}
		code := v.C[i]
		if m.to[code] == unseen {
			if adding {
				m.to[code] = texts.code(v.Dict.Texts[code])
			} else if known, ok := texts.codes[v.Dict.Texts[code]]; ok {
				m.to[code] = known
			} else {
				m.to[code] = absent
			}
		}
		f(i, m.to[code])
	})
}
