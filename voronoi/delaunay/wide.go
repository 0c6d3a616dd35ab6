package delaunay

import "math/bits"

// Signed integers of two and three words, two's complement, l the least word; they
// serve the exact stage of in-sphere for coordinates that are whole multiples of one
// power of two. Additions wrap. Structs of words stay in registers, arrays do not.

type int128 struct{ l, h uint64 }

type int192 struct{ l, m, h uint64 }

// mul64 returns a*b.
func mul64(a, b int64) int128 {
	h, l := bits.Mul64(uint64(a), uint64(b))
	return int128{l, h - (uint64(a>>63)&uint64(b) + uint64(b>>63)&uint64(a))}
}

func (a int128) add(b int128) int128 {
	l, c := bits.Add64(a.l, b.l, 0)
	h, _ := bits.Add64(a.h, b.h, c)
	return int128{l, h}
}

func (a int128) sub(b int128) int128 {
	l, c := bits.Sub64(a.l, b.l, 0)
	h, _ := bits.Sub64(a.h, b.h, c)
	return int128{l, h}
}

// mulWrap returns a*b modulo 2^128.
func (a int128) mulWrap(b int128) int128 {
	h, l := bits.Mul64(a.l, b.l)
	return int128{l, h + a.l*b.h + a.h*b.l}
}

func (a int128) sign() int {
	if a.l|a.h == 0 {
		return 0
	}
	return 1 | int(int64(a.h)>>63)
}

// times returns a*b.
func (a int128) times(b int64) int192 {
	h0, l0 := bits.Mul64(a.l, uint64(b))
	h1, l1 := bits.Mul64(a.h, uint64(b))
	m, c := bits.Add64(h0, l1, 0)
	h := h1 + c
	// A negative factor stands for itself plus 2^64 or 2^128: take those away.
	nb := uint64(b >> 63)
	m, c = bits.Sub64(m, a.l&nb, 0)
	h, _ = bits.Sub64(h, a.h&nb, c)
	return int192{l0, m, h - uint64(b)&uint64(int64(a.h)>>63)}
}

func (a int192) add(b int192) int192 {
	l, c := bits.Add64(a.l, b.l, 0)
	m, c := bits.Add64(a.m, b.m, c)
	h, _ := bits.Add64(a.h, b.h, c)
	return int192{l, m, h}
}

func (a int192) sub(b int192) int192 {
	l, c := bits.Sub64(a.l, b.l, 0)
	m, c := bits.Sub64(a.m, b.m, c)
	h, _ := bits.Sub64(a.h, b.h, c)
	return int192{l, m, h}
}

func (a int192) sign() int {
	if a.l|a.m|a.h == 0 {
		return 0
	}
	return 1 | int(int64(a.h)>>63)
}

// times returns the five words of a*b for b >= 0, least first.
func (a int192) times(b int128) (w0, w1, w2, w3, w4 uint64) {
	var c uint64
	h0, w0 := bits.Mul64(a.l, b.l)
	h1, l1 := bits.Mul64(a.m, b.l)
	h2, l2 := bits.Mul64(a.h, b.l)
	w1, c = bits.Add64(h0, l1, 0)
	w2, c = bits.Add64(h1, l2, c)
	w3 = h2 + c
	h0, l0 := bits.Mul64(a.l, b.h)
	h1, l1 = bits.Mul64(a.m, b.h)
	h2, l2 = bits.Mul64(a.h, b.h)
	l1, c = bits.Add64(l1, h0, 0)
	l2, c = bits.Add64(l2, h1, c)
	w4 = h2 + c
	w1, c = bits.Add64(w1, l0, 0)
	w2, c = bits.Add64(w2, l1, c)
	w3, c = bits.Add64(w3, l2, c)
	w4 += c
	neg := uint64(int64(a.h) >> 63)
	w3, c = bits.Sub64(w3, b.l&neg, 0)
	w4, _ = bits.Sub64(w4, b.h&neg, c)
	return w0, w1, w2, w3, w4
}

// signOfSum is the sign of a*p - b*q + c*r - d*s, for p, q, r, s >= 0, if the sum fits
// five words.
func signOfSum(a int192, p int128, b int192, q int128, c int192, r int128, d int192, s int128) int {
	a0, a1, a2, a3, a4 := a.times(p)
	b0, b1, b2, b3, b4 := b.times(q)
	a0, k := bits.Sub64(a0, b0, 0)
	a1, k = bits.Sub64(a1, b1, k)
	a2, k = bits.Sub64(a2, b2, k)
	a3, k = bits.Sub64(a3, b3, k)
	a4, _ = bits.Sub64(a4, b4, k)
	b0, b1, b2, b3, b4 = c.times(r)
	a0, k = bits.Add64(a0, b0, 0)
	a1, k = bits.Add64(a1, b1, k)
	a2, k = bits.Add64(a2, b2, k)
	a3, k = bits.Add64(a3, b3, k)
	a4, _ = bits.Add64(a4, b4, k)
	b0, b1, b2, b3, b4 = d.times(s)
	a0, k = bits.Sub64(a0, b0, 0)
	a1, k = bits.Sub64(a1, b1, k)
	a2, k = bits.Sub64(a2, b2, k)
	a3, k = bits.Sub64(a3, b3, k)
	a4, _ = bits.Sub64(a4, b4, k)
	if a0|a1|a2|a3|a4 == 0 {
		return 0
	}
	return 1 | int(int64(a4)>>63)
}
