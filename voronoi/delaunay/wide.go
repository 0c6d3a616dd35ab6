package delaunay

import "math/bits"

// Signed integers of two, three and five words, two's complement, least word first.
// They serve the exact stage of in-sphere for coordinates that are whole multiples
// of one power of two; additions wrap.

type int128 [2]uint64
type int192 [3]uint64
type int320 [5]uint64

// mul64 returns a*b.
func mul64(a, b int64) int128 {
	hi, lo := bits.Mul64(uint64(a), uint64(b))
	hi -= uint64(a>>63)&uint64(b) + uint64(b>>63)&uint64(a)
	return int128{lo, hi}
}

func (a int128) add(b int128) int128 {
	lo, c := bits.Add64(a[0], b[0], 0)
	hi, _ := bits.Add64(a[1], b[1], c)
	return int128{lo, hi}
}

func (a int128) sub(b int128) int128 {
	lo, c := bits.Sub64(a[0], b[0], 0)
	hi, _ := bits.Sub64(a[1], b[1], c)
	return int128{lo, hi}
}

// mulWrap returns a*b modulo 2^128.
func (a int128) mulWrap(b int128) int128 {
	hi, lo := bits.Mul64(a[0], b[0])
	return int128{lo, hi + a[0]*b[1] + a[1]*b[0]}
}

func (a int128) sign() int {
	switch {
	case int64(a[1]) < 0:
		return -1
	case a[0]|a[1] == 0:
		return 0
	}
	return 1
}

// times returns a*b.
func (a int128) times(b int64) int192 {
	h0, l0 := bits.Mul64(a[0], uint64(b))
	h1, l1 := bits.Mul64(a[1], uint64(b))
	var r int192
	var c uint64
	r[0] = l0
	r[1], c = bits.Add64(h0, l1, 0)
	r[2] = h1 + c
	// A negative factor stands for itself plus 2^64 or 2^128: take those away.
	negB, negA := uint64(b>>63), uint64(int64(a[1])>>63)
	var d uint64
	r[1], d = bits.Sub64(r[1], a[0]&negB, 0)
	r[2], _ = bits.Sub64(r[2], a[1]&negB, d)
	r[2] -= uint64(b) & negA
	return r
}

func (a int192) add(b int192) (r int192) {
	var c uint64
	r[0], c = bits.Add64(a[0], b[0], 0)
	r[1], c = bits.Add64(a[1], b[1], c)
	r[2], _ = bits.Add64(a[2], b[2], c)
	return r
}

func (a int192) sub(b int192) (r int192) {
	var c uint64
	r[0], c = bits.Sub64(a[0], b[0], 0)
	r[1], c = bits.Sub64(a[1], b[1], c)
	r[2], _ = bits.Sub64(a[2], b[2], c)
	return r
}

func (a int192) sign() int {
	switch {
	case int64(a[2]) < 0:
		return -1
	case a[0]|a[1]|a[2] == 0:
		return 0
	}
	return 1
}

// times returns a*b for b >= 0 below 2^127.
func (a int192) times(b int128) (r int320) {
	var hi, lo, c, carry uint64
	for i := range 3 {
		hi, lo = bits.Mul64(a[i], b[0])
		lo, c = bits.Add64(lo, carry, 0)
		carry = hi + c
		r[i] = lo
	}
	r[3] = carry
	carry = 0
	for i := range 3 {
		hi, lo = bits.Mul64(a[i], b[1])
		lo, c = bits.Add64(lo, carry, 0)
		carry = hi + c
		r[i+1], c = bits.Add64(r[i+1], lo, 0)
		carry += c
	}
	r[4] = carry
	neg := uint64(int64(a[2]) >> 63)
	r[3], c = bits.Sub64(r[3], b[0]&neg, 0)
	r[4], _ = bits.Sub64(r[4], b[1]&neg, c)
	return r
}

func (a int320) add(b int320) (r int320) {
	var c uint64
	for i := range r {
		r[i], c = bits.Add64(a[i], b[i], c)
	}
	return r
}

func (a int320) sub(b int320) (r int320) {
	var c uint64
	for i := range r {
		r[i], c = bits.Sub64(a[i], b[i], c)
	}
	return r
}

func (a int320) sign() int {
	switch {
	case int64(a[4]) < 0:
		return -1
	case a[0]|a[1]|a[2]|a[3]|a[4] == 0:
		return 0
	}
	return 1
}
