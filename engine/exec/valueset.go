package exec

import (
	"math"

	"nearcell/catalog/column"
)

// valueSet is the values of a query of IN. Where an INTEGER meets a REAL the
// keys are integers, as in a join: a REAL that is none equals no INTEGER.
type valueSet struct {
	t      column.Type // of the keys; Null: nothing can be equal
	keys   *keyTable
	reader *keyReader
	ids    []int32
	mask   []uint64
	any    bool // there is a row
	null   bool // there is a NULL among them
}

func newValueSet(x, values column.Type) *valueSet {
	s := &valueSet{t: values}
	switch {
	case x == column.Null || values == column.Null:
		s.t = column.Null
	case x == column.Integer:
		s.t = column.Integer
	}
	s.keys = newKeyTable([]column.Type{s.t})
	s.reader = newKeyReader(s.keys)
	return s
}

func (s *valueSet) bytes() int64 { return s.keys.bytes() + 128 }

// add puts the active rows of a column into the set.
func (s *valueSet) add(v *column.Vector, on []uint64, n int) {
	s.any = true
	s.mask = bitsFor(s.mask, n)
	if on == nil {
		column.FillOn(s.mask, n)
	} else {
		copy(s.mask, on)
	}
	rows := countOn(s.mask, n)
	maskPresent(s.mask, v)
	s.null = s.null || countOn(s.mask, n) < rows
	if s.t == column.Null {
		return
	}
	cols := [1]column.Vector{keyColumn(v, s.t)}
	maskPresent(s.mask, &cols[0])
	s.ids = room(s.ids, n)
	s.reader.put(cols[:], s.mask, n, s.ids)
}

// truth is TRUE, FALSE or NULL.
type truth uint8

const (
	unknown truth = iota
	no
	yes
)

// absence is what IN says of a value that equals none: unknown where it might
// equal a NULL.
func (s *valueSet) absence() truth {
	if s.null {
		return unknown
	}
	return no
}

// has says whether row i of x is in the set.
func (s *valueSet) has(x *column.Vector, i int) truth {
	switch {
	case !s.any:
		return no
	case x.Type == column.Null || x.IsNull(i):
		return unknown
	case s.t == column.Null:
		return s.absence()
	}
	found := false
	switch {
	case x.Type == column.Text:
		_, found = s.keys.texts[0].codes[x.Text(i)]
	case x.Type == column.Real && s.t == column.Integer:
		f := x.F[i]
		found = math.Trunc(f) == f && f >= -1<<63 && f < 1<<63 && s.keys.find([]uint64{uint64(int64(f)), 0}) >= 0
	case x.Type.Counted():
		found = s.keys.find([]uint64{uint64(x.I[i]), 0}) >= 0
	case x.Type == column.Real:
		found = s.keys.find([]uint64{realWord(x.F[i]), 0}) >= 0
	case x.Type == column.Boolean:
		found = s.keys.find([]uint64{x.Bits[i>>6] >> (uint(i) & 63) & 1, 0}) >= 0
	case x.Type == column.Point:
		found = s.keys.find([]uint64{realWord(x.F[3*i]), realWord(x.F[3*i+1]), realWord(x.F[3*i+2]), 0}) >= 0
	}
	if found {
		return yes
	}
	return s.absence()
}

// search is has for all active rows at once. Each goroutine has a reader of its
// own.
func (s *valueSet) search(reader *keyReader, x *column.Vector, on []uint64, n int, not bool) column.Vector {
	t := newTruths(n)
	if !s.any || s.t == column.Null || x.Type == column.Null {
		forEachOn(on, n, func(i int) { t.set(i, s.has(x, i), not) })
		return t.vector()
	}
	keys := make([]int32, n)
	cols := [1]column.Vector{keyColumn(x, s.t)}
	reader.find(cols[:], on, n, keys)
	absent := s.absence()
	forEachOn(on, n, func(i int) {
		is := absent
		switch {
		case x.Valid != nil && !column.Bit(x.Valid, i):
			is = unknown
		case keys[i] >= 0:
			is = yes
		}
		t.set(i, is, not)
	})
	return t.vector()
}

// truths is a BOOLEAN vector in the making; what is not set is NULL.
type truths struct{ v column.Vector }

func newTruths(n int) *truths {
	t := &truths{column.New(column.Boolean, nil, n)}
	t.v.Valid = make([]uint64, column.Words(n))
	return t
}

func (t *truths) set(i int, is truth, not bool) {
	if is == unknown {
		return
	}
	column.SetBit(t.v.Valid, i)
	if (is == yes) != not {
		column.SetBit(t.v.Bits, i)
	}
}

func (t *truths) vector() column.Vector { return t.v }
