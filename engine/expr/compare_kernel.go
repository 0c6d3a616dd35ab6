package expr

import (
	"math"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/function"
)

// bit makes a bit of a condition without a branch.
func bit(b bool) uint64 {
	if b {
		return 1
	}
	return 0
}

// lessBits sets bit i where a[i] < b[i]. A nil slice stands for the constant
// beside it.
func lessBits[T int64 | float64](a, b []T, ca, cb T, out []uint64) {
	switch {
	case a == nil && b == nil:
		fillBits(ca < cb, out)
	case b == nil:
		lessThanConst(a, cb, out)
	case a == nil:
		constLessThan(ca, b, out)
	default:
		lessThan(a, b, out)
	}
}

func equalBits[T int64 | float64](a, b []T, ca, cb T, out []uint64) {
	switch {
	case a == nil && b == nil:
		fillBits(ca == cb, out)
	case b == nil:
		equalsConst(a, cb, out)
	default:
		equals(a, b, out)
	}
}

func fillBits(set bool, out []uint64) {
	fill := -bit(set)
	for i := range out {
		out[i] = fill
	}
}

// The loops below make a word of 64 comparisons in four accumulators of 16
// bits, each shifted by one: that is faster than shifts by i. The rest of less
// than 64 values goes bit by bit.

func lessThanConst[T int64 | float64](a []T, c T, out []uint64) {
	k := 0
	for ; len(a) >= 64; a, k = a[64:], k+1 {
		s := (*[64]T)(a)
		var w0, w1, w2, w3 uint64
		for i := 15; i >= 0; i-- {
			w0 = w0<<1 | bit(s[i] < c)
			w1 = w1<<1 | bit(s[16+i] < c)
			w2 = w2<<1 | bit(s[32+i] < c)
			w3 = w3<<1 | bit(s[48+i] < c)
		}
		out[k] = w0 | w1<<16 | w2<<32 | w3<<48
	}
	if len(a) > 0 {
		out[k] = 0
		for i, x := range a {
			out[k] |= bit(x < c) << i
		}
	}
}

func constLessThan[T int64 | float64](c T, a []T, out []uint64) {
	k := 0
	for ; len(a) >= 64; a, k = a[64:], k+1 {
		s := (*[64]T)(a)
		var w0, w1, w2, w3 uint64
		for i := 15; i >= 0; i-- {
			w0 = w0<<1 | bit(c < s[i])
			w1 = w1<<1 | bit(c < s[16+i])
			w2 = w2<<1 | bit(c < s[32+i])
			w3 = w3<<1 | bit(c < s[48+i])
		}
		out[k] = w0 | w1<<16 | w2<<32 | w3<<48
	}
	if len(a) > 0 {
		out[k] = 0
		for i, x := range a {
			out[k] |= bit(c < x) << i
		}
	}
}

func lessThan[T int64 | float64](a, b []T, out []uint64) {
	k := 0
	for ; len(a) >= 64; a, b, k = a[64:], b[64:], k+1 {
		s, t := (*[64]T)(a), (*[64]T)(b)
		var w0, w1, w2, w3 uint64
		for i := 15; i >= 0; i-- {
			w0 = w0<<1 | bit(s[i] < t[i])
			w1 = w1<<1 | bit(s[16+i] < t[16+i])
			w2 = w2<<1 | bit(s[32+i] < t[32+i])
			w3 = w3<<1 | bit(s[48+i] < t[48+i])
		}
		out[k] = w0 | w1<<16 | w2<<32 | w3<<48
	}
	if len(a) > 0 {
		out[k] = 0
		for i, x := range a {
			out[k] |= bit(x < b[i]) << i
		}
	}
}

func equalsConst[T int64 | float64 | uint32](a []T, c T, out []uint64) {
	k := 0
	for ; len(a) >= 64; a, k = a[64:], k+1 {
		s := (*[64]T)(a)
		var w0, w1, w2, w3 uint64
		for i := 15; i >= 0; i-- {
			w0 = w0<<1 | bit(s[i] == c)
			w1 = w1<<1 | bit(s[16+i] == c)
			w2 = w2<<1 | bit(s[32+i] == c)
			w3 = w3<<1 | bit(s[48+i] == c)
		}
		out[k] = w0 | w1<<16 | w2<<32 | w3<<48
	}
	if len(a) > 0 {
		out[k] = 0
		for i, x := range a {
			out[k] |= bit(x == c) << i
		}
	}
}

func equals[T int64 | float64 | uint32](a, b []T, out []uint64) {
	k := 0
	for ; len(a) >= 64; a, b, k = a[64:], b[64:], k+1 {
		s, t := (*[64]T)(a), (*[64]T)(b)
		var w0, w1, w2, w3 uint64
		for i := 15; i >= 0; i-- {
			w0 = w0<<1 | bit(s[i] == t[i])
			w1 = w1<<1 | bit(s[16+i] == t[16+i])
			w2 = w2<<1 | bit(s[32+i] == t[32+i])
			w3 = w3<<1 | bit(s[48+i] == t[48+i])
		}
		out[k] = w0 | w1<<16 | w2<<32 | w3<<48
	}
	if len(a) > 0 {
		out[k] = 0
		for i, x := range a {
			out[k] |= bit(x == b[i]) << i
		}
	}
}

// compareIntReal is the sign of i - f, exactly. f is not NaN.
func compareIntReal(i int64, f float64) int {
	switch {
	case f >= 1<<63:
		return -1
	case f < -1<<63:
		return 1
	}
	whole := math.Trunc(f)
	switch k := int64(whole); {
	case i < k:
		return -1
	case i > k:
		return 1
	case f > whole:
		return -1
	case f < whole:
		return 1
	}
	return 0
}

// mixedBits compares INTEGER with REAL.
func mixedBits(l, r *operand, out []uint64, n int, less bool) {
	clear(out)
	want, integers, others := -1, l, r
	if l.v.Type == column.Real {
		want, integers, others = 1, r, l
	}
	if !less {
		want = 0
	}
	k, f := constInt(integers), constReal(others)
	for i := range n {
		if integers.one == nil {
			k = integers.v.I[i]
		}
		if others.one == nil {
			f = others.v.F[i]
		}
		if f != f {
			continue // an inactive row; no active one is NaN
		}
		out[i>>6] |= bit(compareIntReal(k, f) == want) << (i & 63)
	}
}

func pointBits(l, r *operand, out []uint64, n int) {
	clear(out)
	at := func(o *operand, i int) [3]float64 {
		if o.one != nil {
			return o.one.P
		}
		return [3]float64(o.v.F[3*i : 3*i+3])
	}
	for i := range n {
		out[i>>6] |= bit(at(l, i) == at(r, i)) << (i & 63)
	}
}

// textBits compares by code points, which for UTF-8 is the order of the bytes.
func (w *Work) textBits(by caller, l, r *operand, out []uint64, n int, less bool) {
	clear(out)
	switch {
	case l.one != nil && r.one != nil:
		c := strings.Compare(l.one.S, r.one.S)
		fillBits(c < 0 && less || c == 0 && !less, out)
	case r.one != nil && !less:
		if code, ok := w.codeOf(by, l.v.Dict, r.one.S); ok {
			equalsConst(l.v.C[:n], code, out)
		}
	case r.one != nil:
		c := r.one.S
		w.lookUp(by, &l.v, out, func(s string) bool { return s < c })
	case l.one != nil:
		c := l.one.S
		w.lookUp(by, &r.v, out, func(s string) bool { return c < s })
	case !less && l.v.Dict == r.v.Dict:
		equals(l.v.C[:n], r.v.C[:n], out)
	default:
		textsRowByRow(&l.v, &r.v, out, n, less)
	}
}

func textsRowByRow(a, b *column.Vector, out []uint64, n int, less bool) {
	if len(a.Dict.Texts) == 0 || len(b.Dict.Texts) == 0 {
		return // nothing but NULLs
	}
	for i := range n {
		x, y := a.Dict.Texts[a.C[i]], b.Dict.Texts[b.C[i]]
		out[i>>6] |= bit(less && x < y || !less && x == y) << (i & 63)
	}
}

// codeOf is the code that a text has in a dictionary, looked for once.
func (w *Work) codeOf(by caller, d *column.Dict, s string) (code uint32, ok bool) {
	key := function.TableKey{Owner: by.e, Slot: by.slot, Dict: d}
	at, ok := w.Table(key).(int)
	if !ok {
		at = -1
		for i, t := range d.Texts {
			if t == s {
				at = i
				break
			}
		}
		w.SetTable(key, at)
	}
	return uint32(at), at >= 0
}

// What a table says of a text of the dictionary.
const (
	unknown = iota
	holds
	fails
)

// lookUp sets the bits of the rows whose text satisfies a condition, which is
// computed once for each text of the dictionary that is met.
func (w *Work) lookUp(by caller, v *column.Vector, out []uint64, cond func(string) bool) {
	texts := v.Dict.Texts
	if len(texts) == 0 {
		return // nothing but NULLs
	}
	key := function.TableKey{Owner: by.e, Slot: by.slot, Dict: v.Dict}
	table, ok := w.Table(key).([]uint8)
	if !ok {
		table = make([]uint8, len(texts))
		w.SetTable(key, table)
	}
	for i, c := range v.C[:v.N] {
		state := table[c]
		if state == unknown {
			state = fails
			if cond(texts[c]) {
				state = holds
			}
			table[c] = state
		}
		out[i>>6] |= bit(state == holds) << (i & 63)
	}
}
