package predicate

import (
	"math"
	"sync"
)

// An expansion is a sum of float64 components, none zero, in order of growing
// magnitude and without overlapping bits; the empty expansion is zero. Its sign is
// that of its last component (Shewchuk 1997).
//
// A product is always written float64(x*y): without the conversion the compiler may
// fuse it with a later addition, and the error-free sums below would lose the very
// error they exist for.

// twoSum returns s = fl(a+b) and e with s + e = a + b exactly (Knuth).
func twoSum(a, b float64) (s, e float64) {
	s = a + b
	bb := s - a
	return s, (a - (s - bb)) + (b - bb)
}

// fastTwoSum is twoSum for |a| >= |b| (Dekker).
func fastTwoSum(a, b float64) (s, e float64) {
	s = a + b
	return s, b - (s - a)
}

// twoProduct returns p = fl(a*b) and e with p + e = a*b exactly, unless it
// underflows.
func twoProduct(a, b float64) (p, e float64) {
	p = float64(a * b)
	return p, math.FMA(a, b, -p)
}

// arenaSize is the room for all the expansions of one predicate. In-sphere of
// coordinates with 53 bits spread over a few dozen binary places fills a tenth of it.
const arenaSize = 4096

// arena holds the components of the expansions of one evaluation. Once full is set
// its expansions are worthless and the caller has to ask math/big.
type arena struct {
	buf  [arenaSize]float64
	used int
	full bool
}

var arenas = sync.Pool{New: func() any { return new(arena) }}

func newArena() *arena {
	s := arenas.Get().(*arena)
	s.used, s.full = 0, false
	return s
}

// reserve returns an empty expansion with room for n components, or nil.
func (s *arena) reserve(n int) []float64 {
	if s.full || s.used+n > arenaSize {
		s.full = true
		return nil
	}
	return s.buf[s.used : s.used : s.used+n]
}

// keep makes the expansion that was built in the last reserved room permanent and
// gives the rest of the room back.
func (s *arena) keep(h []float64) []float64 {
	s.used += len(h)
	return h[:len(h):len(h)]
}

// settle moves an expansion down to mark and gives back everything above it.
func (s *arena) settle(mark int, h []float64) []float64 {
	if s.full {
		return nil
	}
	n := copy(s.buf[mark:], h)
	s.used = mark + n
	return s.buf[mark : mark+n : mark+n]
}

// diff returns a - b exactly, in at most two components.
func (s *arena) diff(a, b float64) []float64 {
	h := s.reserve(2)
	if s.full {
		return nil
	}
	x, y := twoSum(a, -b)
	if y != 0 {
		h = append(h, y)
	}
	if x != 0 {
		h = append(h, x)
	}
	return s.keep(h)
}

// add returns e + f (fast-expansion-sum with zero elimination).
func (s *arena) add(e, f []float64) []float64 {
	h := s.reserve(len(e) + len(f))
	if s.full {
		return nil
	}
	var q, r float64
	i, j := 0, 0
	for i < len(e) || j < len(f) {
		var x float64
		if j == len(f) || (i < len(e) && math.Abs(e[i]) <= math.Abs(f[j])) {
			x = e[i]
			i++
		} else {
			x = f[j]
			j++
		}
		q, r = twoSum(q, x)
		if r != 0 {
			h = append(h, r)
		}
	}
	if q != 0 {
		h = append(h, q)
	}
	return s.keep(h)
}

// neg returns -e.
func (s *arena) neg(e []float64) []float64 {
	h := s.reserve(len(e))
	if s.full {
		return nil
	}
	for _, x := range e {
		h = append(h, -x)
	}
	return s.keep(h)
}

// scale returns b*e (scale-expansion with zero elimination).
func (s *arena) scale(e []float64, b float64) []float64 {
	h := s.reserve(2 * len(e))
	if s.full || len(e) == 0 {
		return nil
	}
	q, r := twoProduct(e[0], b)
	if r != 0 {
		h = append(h, r)
	}
	for _, x := range e[1:] {
		hi, lo := twoProduct(x, b)
		q, r = twoSum(q, lo)
		if r != 0 {
			h = append(h, r)
		}
		q, r = fastTwoSum(hi, q)
		if r != 0 {
			h = append(h, r)
		}
	}
	if q != 0 {
		h = append(h, q)
	}
	return s.keep(h)
}

// mul returns e*f, compressed.
func (s *arena) mul(e, f []float64) []float64 {
	if len(e) < len(f) {
		e, f = f, e
	}
	mark := s.used
	if len(f) == 0 || s.full {
		return nil
	}
	sum := s.scale(e, f[0])
	for _, b := range f[1:] {
		sum = s.add(sum, s.scale(e, b))
	}
	return s.settle(mark, compress(sum))
}

// compress rewrites h in place with as few components as its bits allow (Shewchuk
// 1997, fig. 15) and returns it. Without it the lengths would multiply with every
// product although the value needs only a few hundred bits.
func compress(h []float64) []float64 {
	n := len(h)
	if n < 2 {
		return h
	}
	bottom := n - 1
	q := h[n-1]
	for i := n - 2; i >= 0; i-- {
		s, r := fastTwoSum(q, h[i])
		if r != 0 {
			h[bottom] = s
			bottom--
			q = r
		} else {
			q = s
		}
	}
	h[bottom] = q
	top := 0
	for i := bottom + 1; i < n; i++ {
		s, r := fastTwoSum(h[i], q)
		if r != 0 {
			h[top] = r
			top++
		}
		q = s
	}
	if q != 0 {
		h[top] = q
		top++
	}
	return h[:top]
}

// det2 returns a*d - b*c.
func (s *arena) det2(a, b, c, d []float64) []float64 {
	mark := s.used
	return s.settle(mark, s.add(s.mul(a, d), s.neg(s.mul(b, c))))
}

// dot returns the sum of the three products x[i]*y[i].
func (s *arena) dot(x, y *[3][]float64) []float64 {
	mark := s.used
	h := s.add(s.mul(x[0], y[0]), s.mul(x[1], y[1]))
	return s.settle(mark, compress(s.add(h, s.mul(x[2], y[2]))))
}

// sign ends the evaluation: it returns the sign of h and whether it can be trusted,
// and hands the arena back. h must not be used any more.
func (s *arena) sign(h []float64) (int, bool) {
	sign, ok := 0, !s.full
	if ok && len(h) > 0 {
		sign = signOf(h[len(h)-1])
	}
	arenas.Put(s)
	return sign, ok
}

func signOf(x float64) int {
	switch {
	case x > 0:
		return 1
	case x < 0:
		return -1
	}
	return 0
}
