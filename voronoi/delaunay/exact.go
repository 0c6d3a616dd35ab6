package delaunay

import (
	"math"
	"math/bits"

	"gonum.org/v1/gonum/spatial/r3"

	"nearcell/voronoi/predicate"
)

// The signs behind every combinatorial decision, on internal coordinates.
//
// Stage 1 is a norm filter. With ε = 2^-53 the float determinant of in-sphere errs by
// at most 32√2 ε |a||b||c||d| √(|a|²+|b|²+|c|²+|d|²): sixteen roundings a term,
// differences included, and terms whose magnitudes sum, by Cauchy and Schwarz, to at
// most 2√2 |a||b||c||d| √(Σ|i|²). The square of that, (32√2 ε)² = 2048 ε² times
//
//	M = |a|²|b|²|c|²|d|² (|a|²+|b|²+|c|²+|d|²),
//
// needs no root and no magnitude. For orient3d there are eight roundings a term and
// magnitudes of at most √2 |u||v||w|: 128 ε² times N = |u|²|v|²|w|². The factor
// 1+2^-40 covers the roundings of M, N and of the comparison; the floor keeps
// underflow out: coordinates are within 1 of zero, so no product overflows, and a
// determinant that passes is above 1e-140 where an underflowing product errs by
// 1e-322. A fused operation only rounds less.
//
// Before it, five corners of one box with axis-parallel edges are recognised as
// cospherical (box.go); and where coordinates have few bits the stored sphere of near
// corners is exact, so that a point between its bounds is on it (isExact).
//
// Stage 2, when coordinates are multiples of a unit, all of them (whole) or those of
// the points asked about (commonUnit): in units the determinant and every number on
// its way are integers.
//   - If the bound on the terms' magnitudes is below 2^52, the float determinant was
//     exact after all.
//   - If stage 1 failed, the true determinant is below twice the bound; where that is
//     below 2^62 or 2^126 the integer determinant modulo 2^64 or 2^128 is the true one.
//   - Otherwise integers of five words hold everything.
//
// Stage 3, for the others: expansions, and math/big where these could underflow.
const (
	epsilon      = 0x1p-53
	inFactor     = 2048 * epsilon * epsilon * (1 + 0x1p-40)
	orientFactor = 128 * epsilon * epsilon * (1 + 0x1p-40)
	filterFloor  = 1e-250
)

func (m *mesh) setLimits() {
	m.boxTies = makeBoxTies()
	m.whole = m.frame.bits <= maxBits-headroom || (m.frame.bits <= maxBits && m.frame.box.within(0x1p-2))
	m.fine = m.frame.bits > coarseBits && !m.frame.rounded
	if m.whole {
		m.limits = limitsOf[m.frame.bits]
	}
	m.exact = m.frame.bits <= coarseBits
}

// limits are what the stages for multiples of 2^-k compare M and N with.
type limits struct {
	unit                         float64 // 2^k
	inExact, inWrap64, inWrap128 float64
	orientExact, orientWrap64    float64
	near                         float64 // squared length below which nearKey is right
	exactSquares, exactNumber    float64 // see isExact
}

// coarseBits is how many bits coordinates may have for the float determinants of near
// sites to be exact: with more, corners of boxes are looked for first.
const coarseBits = 24

// mostUnit is the largest k that limits are kept for: beyond it they would underflow.
const mostUnit = 100

var limitsOf = makeLimits()

func makeLimits() (l [mostUnit + 1]limits) {
	for k := range l {
		l[k] = limits{
			unit: math.Ldexp(1, k),
			// terms <= 2√2 √M < 2^52 units of 2^-5k; M < 2^(104-3-10k), one bit spare
			inExact: math.Ldexp(1, 100-10*k),
			// 2 √(inFactor·M) < 2^62 units: M < 2^(124-2+95-10k), one bit spare
			inWrap64:  math.Ldexp(1, 216-10*k),
			inWrap128: math.Ldexp(1, 344-10*k),
			// terms <= √2 √N < 2^52 units of 2^-3k
			orientExact: math.Ldexp(1, 102-6*k),
			// 2 √(orientFactor·N) < 2^62 units: N < 2^(124-2+99-6k)
			orientWrap64: math.Ldexp(1, 220-6*k),
			near:         math.Ldexp(1, 32-2*k),
			exactSquares: math.Ldexp(1, 16-2*k),
			exactNumber:  math.Ldexp(1, 50-8*k),
		}
	}
	return l
}

// commonUnit returns the limits for the largest power of two that the points'
// coordinates are multiples of; ok is false when they are more than 2^60 of it
// from zero, or it is too small.
func commonUnit(points ...*point) (l *limits, ok bool) {
	low, high := 2000, -2000
	for _, p := range points {
		for _, x := range [3]float64{p.x, p.y, p.z} {
			if x == 0 {
				continue
			}
			b := math.Float64bits(x)
			e := int(b>>52&0x7ff) - 1075
			low = min(low, e+bits.TrailingZeros64(b|1<<52))
			high = max(high, e+53)
		}
	}
	k := max(-low, 0)
	if k > mostUnit || high+k > maxBits-headroom {
		return nil, false
	}
	return &limitsOf[k], true
}

func (m *mesh) vec(p int32) r3.Vec {
	if m.frame.rounded {
		s := m.sites[3*int(m.order[p-1]):]
		return r3.Vec{X: s[0], Y: s[1], Z: s[2]}
	}
	q := &m.pts[p]
	return r3.Vec{X: q.x, Y: q.y, Z: q.z}
}

// same reports whether two points are one place.
func (m *mesh) same(p, q int32) bool {
	a, b := &m.pts[p], &m.pts[q]
	if a.x != b.x || a.y != b.y || a.z != b.z {
		return false
	}
	return !m.frame.rounded || m.vec(p) == m.vec(q)
}

// less orders points by x, y and z.
func (m *mesh) less(p, q int32) bool {
	if m.frame.rounded {
		return predicate.Less(m.vec(p), m.vec(q))
	}
	a, b := &m.pts[p], &m.pts[q]
	if a.x != b.x {
		return a.x < b.x
	}
	if a.y != b.y {
		return a.y < b.y
	}
	return a.z < b.z
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

// orient is the sign of det(b-a, c-a, d-a).
func (m *mesh) orient(ia, ib, ic, id int32) int {
	a, b, c, d := &m.pts[ia], &m.pts[ib], &m.pts[ic], &m.pts[id]
	ux, uy, uz := b.x-a.x, b.y-a.y, b.z-a.z
	vx, vy, vz := c.x-a.x, c.y-a.y, c.z-a.z
	wx, wy, wz := d.x-a.x, d.y-a.y, d.z-a.z
	det := ux*(vy*wz-vz*wy) + uy*(vz*wx-vx*wz) + uz*(vx*wy-vy*wx)
	n := (ux*ux + uy*uy + uz*uz) * (vx*vx + vy*vy + vz*vz) * (wx*wx + wy*wy + wz*wz)
	if det*det > orientFactor*n && n > filterFloor {
		return signOf(det)
	}
	l, ok := &m.limits, m.whole
	if !ok && !m.frame.rounded {
		l, ok = commonUnit(a, b, c, d)
	}
	if ok {
		if n < l.orientExact && n > filterFloor {
			return signOf(det)
		}
		return l.orientWhole(a, b, c, d, n)
	}
	return predicate.Orient3D(m.vec(ia), m.vec(ib), m.vec(ic), m.vec(id))
}

func (m *limits) orientWhole(a, b, c, d *point, n float64) int {
	k := m.unit
	ax, ay, az := int64(a.x*k), int64(a.y*k), int64(a.z*k)
	ux, uy, uz := int64(b.x*k)-ax, int64(b.y*k)-ay, int64(b.z*k)-az
	vx, vy, vz := int64(c.x*k)-ax, int64(c.y*k)-ay, int64(c.z*k)-az
	wx, wy, wz := int64(d.x*k)-ax, int64(d.y*k)-ay, int64(d.z*k)-az
	if n < m.orientWrap64 && n > filterFloor {
		return signInt(ux*(vy*wz-vz*wy) + uy*(vz*wx-vx*wz) + uz*(vx*wy-vy*wx))
	}
	yz := mul64(vy, wz).sub(mul64(vz, wy))
	zx := mul64(vz, wx).sub(mul64(vx, wz))
	xy := mul64(vx, wy).sub(mul64(vy, wx))
	return yz.times(ux).add(zx.times(uy)).add(xy.times(uz)).sign()
}

func signInt(x int64) int {
	switch {
	case x > 0:
		return 1
	case x < 0:
		return -1
	}
	return 0
}

// inSphere reports whether e is inside the sphere of the positive tetrahedron
// v0..v3, ties broken by the perturbation of Devillers and Teillaud (2011): as if the
// squared length of every point were raised by an infinitesimal, larger for
// lexicographically larger points.
func (m *mesh) inSphere(v0, v1, v2, v3, e int32) bool {
	pts := m.pts
	a, b, c, d, o := &pts[v0], &pts[v1], &pts[v2], &pts[v3], &pts[e]
	if m.fine {
		if in, ok := m.oneBox(a, b, c, d, o); ok {
			return in
		}
	}
	ax, ay, az := a.x-o.x, a.y-o.y, a.z-o.z
	bx, by, bz := b.x-o.x, b.y-o.y, b.z-o.z
	cx, cy, cz := c.x-o.x, c.y-o.y, c.z-o.z
	dx, dy, dz := d.x-o.x, d.y-o.y, d.z-o.z
	ab, ac, ad := ax*by-ay*bx, ax*cy-ay*cx, ax*dy-ay*dx
	bc, bd, cd := bx*cy-by*cx, bx*dy-by*dx, cx*dy-cy*dx
	qa := ax*ax + ay*ay + az*az
	qb := bx*bx + by*by + bz*bz
	qc := cx*cx + cy*cy + cz*cz
	qd := dx*dx + dy*dy + dz*dz
	ta, tb := bz*cd-cz*bd+dz*bc, az*cd-cz*ad+dz*ac
	tc, td := az*bd-bz*ad+dz*ab, az*bc-bz*ac+cz*ab
	det := (qa*ta - qb*tb) + (qc*tc - qd*td)
	sum := (qa + qb) + (qc + qd)
	n := ((qa * qb) * (qc * qd)) * sum
	if det*det > inFactor*n && n > filterFloor {
		return det > 0
	}
	l, ok := &m.limits, m.whole
	if !ok && !m.frame.rounded {
		l, ok = commonUnit(a, b, c, d, o)
	}
	if !ok {
		return predicate.InSpherePerturbed(m.vec(v0), m.vec(v1), m.vec(v2), m.vec(v3), m.vec(e)) > 0
	}
	if n < l.inExact && n > filterFloor {
		if det != 0 {
			return det > 0
		}
		if sum < l.near {
			// The minors are exact too, and are the orientations that a tie asks for.
			u := l.unit
			return nearTie(nearKey(ax*u, ay*u, az*u, ta), nearKey(bx*u, by*u, bz*u, -tb),
				nearKey(cx*u, cy*u, cz*u, tc), nearKey(dx*u, dy*u, dz*u, -td))
		}
	} else if s := l.inSphereWhole(a, b, c, d, o, n); s != 0 {
		return s > 0
	}
	return m.tie([4]int32{v0, v1, v2, v3}, e)
}

// nearKey puts a corner seen from the point asked about, whose coordinates are integers
// below 2^16, into one number that orders corners as their coordinates do, and below
// it the sign of the orientation when that point takes the corner's place.
func nearKey(x, y, z, orientation float64) int64 {
	return int64((x*(1<<17)+y)*(1<<17)+z)<<2 | int64(bit(orientation > 0)|bit(orientation < 0)<<1)
}

// nearTie is tie for the keys of four corners; the point asked about has key 0.
func nearTie(a, b, c, d int64) bool {
	for {
		switch top := max(a, b, c, d); {
		case top < 4:
			return false
		case top&3 != 0:
			return top&1 != 0
		case top == a:
			a = 0
		case top == b:
			b = 0
		case top == c:
			c = 0
		default:
			d = 0
		}
	}
}

// nearSphereTie is tie for a point o on a sphere that isExact, whose corners are so near
// that one float64 holds the three differences of a corner one behind the other.
func nearSphereTie(a, b, c, d, o *point) bool {
	ax, ay, az := a.x-o.x, a.y-o.y, a.z-o.z
	bx, by, bz := b.x-o.x, b.y-o.y, b.z-o.z
	cx, cy, cz := c.x-o.x, c.y-o.y, c.z-o.z
	dx, dy, dz := d.x-o.x, d.y-o.y, d.z-o.z
	const width = 1 << 17
	ka, kb := (ax*width+ay)*width+az, (bx*width+by)*width+bz
	kc, kd := (cx*width+cy)*width+cz, (dx*width+dy)*width+dz
	for {
		switch top := max(ka, kb, kc, kd); {
		case top <= 0:
			return false
		case top == ka:
			if s := bz*(cx*dy-cy*dx) - cz*(bx*dy-by*dx) + dz*(bx*cy-by*cx); s != 0 {
				return s > 0
			}
			ka = 0
		case top == kb:
			if s := az*(cx*dy-cy*dx) - cz*(ax*dy-ay*dx) + dz*(ax*cy-ay*cx); s != 0 {
				return s < 0
			}
			kb = 0
		case top == kc:
			if s := az*(bx*dy-by*dx) - bz*(ax*dy-ay*dx) + dz*(ax*by-ay*bx); s != 0 {
				return s > 0
			}
			kc = 0
		default:
			if s := az*(bx*cy-by*cx) - bz*(ax*cy-ay*cx) + cz*(ax*by-ay*bx); s != 0 {
				return s < 0
			}
			kd = 0
		}
	}
}

// tie decides for a point on the sphere.
func (m *mesh) tie(v [4]int32, e int32) bool {
	var gone [4]bool
	for range 4 {
		// r is the largest point that has not been tried; -1 stands for e.
		r := -1
		for k := range 4 {
			if !gone[k] && ((r < 0 && m.less(e, v[k])) || (r >= 0 && m.less(v[r], v[k]))) {
				r = k
			}
		}
		if r < 0 {
			return false
		}
		// Raising corner r tilts the sphere; e comes to lie inside when it is on
		// the same side of the opposite face as r.
		t := v
		t[r] = e
		if s := m.orient(t[0], t[1], t[2], t[3]); s != 0 {
			return s > 0
		}
		gone[r] = true
	}
	return false
}

func (m *limits) inSphereWhole(a, b, c, d, o *point, n float64) int {
	sure := n > filterFloor
	k := m.unit
	ox, oy, oz := int64(o.x*k), int64(o.y*k), int64(o.z*k)
	ax, ay, az := int64(a.x*k)-ox, int64(a.y*k)-oy, int64(a.z*k)-oz
	bx, by, bz := int64(b.x*k)-ox, int64(b.y*k)-oy, int64(b.z*k)-oz
	cx, cy, cz := int64(c.x*k)-ox, int64(c.y*k)-oy, int64(c.z*k)-oz
	dx, dy, dz := int64(d.x*k)-ox, int64(d.y*k)-oy, int64(d.z*k)-oz
	switch {
	case sure && n < m.inWrap64:
		ab, ac, ad := ax*by-ay*bx, ax*cy-ay*cx, ax*dy-ay*dx
		bc, bd, cd := bx*cy-by*cx, bx*dy-by*dx, cx*dy-cy*dx
		return signInt((ax*ax+ay*ay+az*az)*(bz*cd-cz*bd+dz*bc) -
			(bx*bx+by*by+bz*bz)*(az*cd-cz*ad+dz*ac) +
			(cx*cx+cy*cy+cz*cz)*(az*bd-bz*ad+dz*ab) -
			(dx*dx+dy*dy+dz*dz)*(az*bc-bz*ac+cz*ab))
	case sure && n < m.inWrap128:
		return inSphere128(int64s{ax, ay, az}, int64s{bx, by, bz}, int64s{cx, cy, cz}, int64s{dx, dy, dz})
	}
	return inSphere320(int64s{ax, ay, az}, int64s{bx, by, bz}, int64s{cx, cy, cz}, int64s{dx, dy, dz})
}

// int64s is a point seen from another, in units.
type int64s struct{ x, y, z int64 }

func (p int64s) minor(q int64s) int128 { return mul64(p.x, q.y).sub(mul64(p.y, q.x)) }

func (p int64s) norm() int128 { return mul64(p.x, p.x).add(mul64(p.y, p.y)).add(mul64(p.z, p.z)) }

// inSphere128 is right where the determinant is below 2^127.
func inSphere128(a, b, c, d int64s) int {
	ab, ac, ad := a.minor(b), a.minor(c), a.minor(d)
	bc, bd, cd := b.minor(c), b.minor(d), c.minor(d)
	w := func(x int64) int128 { return int128{uint64(x), uint64(x >> 63)} }
	az, bz, cz, dz := w(a.z), w(b.z), w(c.z), w(d.z)
	ta := bz.mulWrap(cd).sub(cz.mulWrap(bd)).add(dz.mulWrap(bc))
	tb := az.mulWrap(cd).sub(cz.mulWrap(ad)).add(dz.mulWrap(ac))
	tc := az.mulWrap(bd).sub(bz.mulWrap(ad)).add(dz.mulWrap(ab))
	td := az.mulWrap(bc).sub(bz.mulWrap(ac)).add(cz.mulWrap(ab))
	return a.norm().mulWrap(ta).sub(b.norm().mulWrap(tb)).
		add(c.norm().mulWrap(tc)).sub(d.norm().mulWrap(td)).sign()
}

// inSphere320 is right for coordinates up to 2^61.
func inSphere320(a, b, c, d int64s) int {
	ab, ac, ad := a.minor(b), a.minor(c), a.minor(d)
	bc, bd, cd := b.minor(c), b.minor(d), c.minor(d)
	ta := cd.times(b.z).sub(bd.times(c.z)).add(bc.times(d.z))
	tb := cd.times(a.z).sub(ad.times(c.z)).add(ac.times(d.z))
	tc := bd.times(a.z).sub(ad.times(b.z)).add(ab.times(d.z))
	td := bc.times(a.z).sub(ac.times(b.z)).add(ab.times(c.z))
	return signOfSum(ta, a.norm(), tb, b.norm(), tc, c.norm(), td, d.norm())
}
