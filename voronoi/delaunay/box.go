package delaunay

import "math"

// Lattices are full of sites on one sphere, and on rectilinear ones such sites are the
// corners of a box with axis-parallel edges, exactly so whatever the rounding of the
// step. A corner is three bits, one an axis, set for the larger of its two values: as
// a number, x before y before z, it orders corners as coordinates would, and the sign
// of an orientation of corners is that of the bits taken as coordinates.

// oneBox returns the corners as bits if the points are corners of one box.
func oneBox(a, b, c, d, o *point) (codes [5]uint8, ok bool) {
	var x, y, z uint8
	if x, ok = twoValues(a.x, b.x, c.x, d.x, o.x); !ok {
		return codes, false
	}
	if y, ok = twoValues(a.y, b.y, c.y, d.y, o.y); !ok {
		return codes, false
	}
	if z, ok = twoValues(a.z, b.z, c.z, d.z, o.z); !ok {
		return codes, false
	}
	for i := range codes {
		codes[i] = (x>>i&1)<<2 | (y>>i&1)<<1 | z>>i&1
	}
	return codes, true
}

// twoValues sets bit i when value i is the larger of the two that occur; ok is false
// when there are more. Zeros are positive here, so that equal values have equal bits.
func twoValues(a, b, c, d, o float64) (larger uint8, ok bool) {
	ua, ub, uc, ud, uo := math.Float64bits(a), math.Float64bits(b), math.Float64bits(c), math.Float64bits(d), math.Float64bits(o)
	like := bit(ua == uo) | bit(ub == uo)<<1 | bit(uc == uo)<<2 | bit(ud == uo)<<3
	other := ua
	if ub != uo {
		other = ub
	}
	if uc != uo {
		other = uc
	}
	if ud != uo {
		other = ud
	}
	unlike := bit(ua == other) | bit(ub == other)<<1 | bit(uc == other)<<2 | bit(ud == other)<<3
	if like|unlike != 15 {
		return 0, false
	}
	if math.Float64frombits(other) > o {
		return uint8(unlike), true
	}
	if other == uo {
		return 0, true
	}
	return uint8(like | 16), true
}

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
