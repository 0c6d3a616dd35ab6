package delaunay

import (
	"math"
	"sync"
)

// Lattices are full of sites on one sphere, and on rectilinear ones such sites are the
// corners of a box with axis-parallel edges, exactly so whatever the rounding of the
// step. A corner is three bits, one an axis, set for the larger of its two values: as
// a number, x before y before z, it orders corners as coordinates would, and the sign
// of an orientation of corners is that of the bits taken as coordinates.

// oneBox asks whether o and the four others are corners of one box and, when they are,
// whether o is inside their sphere by the tie of inSphere. A table knows the answer.
func (m *mesh) oneBox(a, b, c, d, o *point) (in, ok bool) {
	x, ok := twoValues(a.x, b.x, c.x, d.x, o.x)
	if !ok {
		return false, false
	}
	y, ok := twoValues(a.y, b.y, c.y, d.y, o.y)
	if !ok {
		return false, false
	}
	z, ok := twoValues(a.z, b.z, c.z, d.z, o.z)
	if !ok {
		return false, false
	}
	key := x | y<<5 | z<<10
	return m.boxTies[key>>6&511]>>(key&63)&1 != 0, true
}

// twoValues sets bit 0 to 3 for those of the four that differ from o, and bit 4 when they
// are smaller; ok is false when they differ among each other too. Zeros are positive
// here, so that equal values have equal bits. There is no branch, for it would be a guess.
func twoValues(a, b, c, d, o float64) (key uint32, ok bool) {
	uo := math.Float64bits(o)
	ua, ub, uc, ud := math.Float64bits(a)^uo, math.Float64bits(b)^uo, math.Float64bits(c)^uo, math.Float64bits(d)^uo
	all := ua | ub | uc | ud
	na, nb, nc, nd := bit(ua != 0), bit(ub != 0), bit(uc != 0), bit(ud != 0)
	bad := (na & bit(ua != all)) | (nb & bit(ub != all)) | (nc & bit(uc != all)) | (nd & bit(ud != all))
	return na | nb<<1 | nc<<2 | nd<<3 | bit(math.Float64frombits(uo^all) < o)<<4, bad == 0
}

// makeBoxTies is boxTie for every key of oneBox, one bit each.
var makeBoxTies = sync.OnceValue(func() *[512]uint64 {
	ties := new([512]uint64)
	for key := range uint32(1 << 15) {
		var codes [5]uint8
		for i := range codes {
			for _, axis := range [3]uint32{key, key >> 5, key >> 10} {
				// The fifth corner has bit 4 itself, the others where they are like it.
				larger := axis >> 4 & 1
				if i < 4 {
					larger ^= axis >> i & 1
				}
				codes[i] = codes[i]<<1 | uint8(larger)
			}
		}
		if boxTie(codes) {
			ties[key>>6] |= 1 << (key & 63)
		}
	}
	return ties
})

// boxOrient is the sign of det(b-a, c-a, d-a) for corners of a box.
var boxOrient = makeBoxOrient()

func makeBoxOrient() (sign [4096]int8) {
	for i := range sign {
		var v [4][3]int
		for k := range v {
			code := i >> (3 * k)
			v[k] = [3]int{code >> 2 & 1, code >> 1 & 1, code & 1}
		}
		var r [3][3]int
		for k := range r {
			for j := range 3 {
				r[k][j] = v[k+1][j] - v[0][j]
			}
		}
		det := r[0][0]*(r[1][1]*r[2][2]-r[1][2]*r[2][1]) +
			r[0][1]*(r[1][2]*r[2][0]-r[1][0]*r[2][2]) +
			r[0][2]*(r[1][0]*r[2][1]-r[1][1]*r[2][0])
		sign[i] = int8(signInt(int64(det)))
	}
	return sign
}

// boxTie is tie for corners of a box: codes[4] asks about the others.
func boxTie(codes [5]uint8) bool {
	e := codes[4]
	key := uint(codes[0]) | uint(codes[1])<<3 | uint(codes[2])<<6 | uint(codes[3])<<9
	for top := uint8(8); top > 0; {
		// The largest corner below the last; when that is e, it is outside.
		best, at := e, -1
		for k, c := range codes[:4] {
			if c < top && c > best {
				best, at = c, k
			}
		}
		if at < 0 {
			return false
		}
		shift := 3 * uint(at)
		if s := boxOrient[key&^(7<<shift)|uint(e)<<shift]; s != 0 {
			return s > 0
		}
		top = best
	}
	return false
}
