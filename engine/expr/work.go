package expr

import (
	"nearcell/catalog/column"
	"nearcell/engine/function"
)

// Work is the scratch memory of one goroutine. The zero Work is ready.
type Work struct {
	function.Arena
	// Asker computes the queries inside expressions; nil: there can be none.
	Asker    Asker
	repeated map[*Literal]column.Vector
}

// Reset takes back all vectors that Eval has returned. Whoever runs a pipeline
// calls it between batches.
func (w *Work) Reset() { w.Arena.Reset() }

// blank is a bitmap over n rows without any bit.
func (w *Work) blank(n int) []uint64 {
	b := w.Words(column.Words(n))
	clear(b)
	return b
}

// rows is the bitmap on, or one of all n rows where on is nil. The bitmap may
// be the caller's and is not to be changed.
func (w *Work) rows(on []uint64, n int) []uint64 {
	if on != nil {
		return on[:column.Words(n)]
	}
	b := w.Words(column.Words(n))
	column.FillOn(b, n)
	return b
}

// fresh is a vector of n values; what they are is anything but, for TEXT, a
// code that the dictionary has: there the codes are 0 and the caller sets Dict.
func (w *Work) fresh(t column.Type, unit *column.Unit, n int) column.Vector {
	v := column.Vector{Type: t, Unit: unit, N: n}
	switch t {
	case column.Integer, column.Timestamp, column.Interval:
		v.I = w.Ints(n)
	case column.Real:
		v.F = w.Floats(n)
	case column.Point:
		v.F = w.Floats(3 * n)
	case column.Text:
		v.C = w.Codes(n)
		clear(v.C)
	case column.Boolean:
		v.Bits = w.Words(column.Words(n))
	}
	return v
}

var emptyDict = &column.Dict{Texts: []string{""}}

// nulls is a vector of n NULLs.
func (w *Work) nulls(t column.Type, unit *column.Unit, n int) column.Vector {
	v := w.fresh(t, unit, n)
	clear(v.I)
	clear(v.F)
	clear(v.Bits)
	if t == column.Text {
		v.Dict = emptyDict
	}
	if t != column.Null {
		v.Valid = w.blank(n)
	}
	return v
}

// both is the validity of what needs two values: nil where neither has NULLs.
func (w *Work) both(a, b []uint64, n int) []uint64 {
	switch {
	case a == nil:
		return b
	case b == nil:
		return a
	}
	k := column.Words(n)
	out := w.Words(k)
	a, b = a[:k], b[:k]
	for i := range out {
		out[i] = a[i] & b[i]
	}
	return out
}

// truth splits a BOOLEAN vector into the bitmaps of TRUE and of FALSE rows.
// The bitmaps may be those of the vector.
func (w *Work) truth(v *column.Vector) (yes, no []uint64) {
	k := column.Words(v.N)
	if v.Type == column.Null {
		b := w.blank(v.N)
		return b, b
	}
	no = w.Words(k)
	if v.Valid == nil {
		yes = v.Bits[:k]
		column.FillOn(no, v.N)
		if v.N&63 != 0 { // a view may have bits of later rows
			yes = w.Words(k)
			for i := range yes {
				yes[i] = v.Bits[i] & no[i]
			}
		}
		for i := range no {
			no[i] &^= yes[i]
		}
		return yes, no
	}
	yes = w.Words(k)
	for i := range no {
		yes[i] = v.Bits[i] & v.Valid[i]
		no[i] = v.Valid[i] &^ v.Bits[i]
	}
	return yes, no
}

// boolean makes a vector of the rows that are TRUE and those that are FALSE;
// the rest is NULL.
func (w *Work) boolean(yes, no []uint64, n int) column.Vector {
	v := column.Vector{Type: column.Boolean, N: n, Bits: yes}
	valid := w.Words(column.Words(n))
	for i := range valid {
		valid[i] = yes[i] | no[i]
	}
	v.Valid = valid
	return v
}

func none(b []uint64) bool {
	for _, x := range b {
		if x != 0 {
			return false
		}
	}
	return true
}

// True is the bitmap of the rows for which a BOOLEAN vector is TRUE, within on
// (nil: all). It is valid as long as the vector.
func (w *Work) True(v *column.Vector, on []uint64) []uint64 {
	k := column.Words(v.N)
	out := w.Words(k)
	if v.Type == column.Null {
		clear(out)
		return out
	}
	copy(out, v.Bits[:k])
	if v.Valid != nil {
		for i := range out {
			out[i] &= v.Valid[i]
		}
	}
	if on != nil {
		for i := range out {
			out[i] &= on[i]
		}
	} else if r := uint(v.N) & 63; r != 0 {
		out[k-1] &= 1<<r - 1
	}
	return out
}
