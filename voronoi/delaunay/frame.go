package delaunay

import (
	"math"
	"math/bits"
	"sync"
)

// frame maps the sites' coordinates to the internal ones: moved by an origin and
// scaled by a power of two, so that they lie within 1 of zero and squared bounds
// neither underflow nor overflow. Both steps are exact for nearly every input; where
// they are not, rounded says so and the exact stage takes the sites as they came.
type frame struct {
	x0, y0, z0 float64
	// The scale is applied in two factors, since one alone may overflow.
	scale, scale2 float64
	box           bounds // of the internal coordinates
	rounded       bool
	// Internal coordinates are multiples of 2^-bits; bits > maxBits: they are not.
	bits int
	// The sites lie as on a lattice.
	lattice bool
}

// maxBits is the most that in-sphere in five words allows for coordinates within
// 2^-headroom of zero: they are below 2^60 units, differences below 2^61, minors need
// twice that and one bit, and so on up to 5*61+7 bits.
const maxBits = 60 + headroom

// headroom is how many binary places are left free, so that sites can be inserted
// around the others without another frame.
const headroom = 2

type bounds struct{ lo, hi [3]float64 }

func emptyBounds() bounds {
	inf := math.Inf(1)
	return bounds{[3]float64{inf, inf, inf}, [3]float64{-inf, -inf, -inf}}
}

func (b *bounds) add(x, y, z float64) {
	b.lo[0], b.hi[0] = min(b.lo[0], x), max(b.hi[0], x)
	b.lo[1], b.hi[1] = min(b.lo[1], y), max(b.hi[1], y)
	b.lo[2], b.hi[2] = min(b.lo[2], z), max(b.hi[2], z)
}

// within reports whether nothing in the bounds is farther than limit from zero along an
// axis.
func (b *bounds) within(limit float64) bool {
	return min(b.lo[0], b.lo[1], b.lo[2]) >= -limit && max(b.hi[0], b.hi[1], b.hi[2]) <= limit
}

func (b *bounds) extent() float64 {
	return max(b.hi[0]-b.lo[0], b.hi[1]-b.lo[1], b.hi[2]-b.lo[2])
}

// grid covers the bounds; it fails when they are a point or too small to divide.
func (b *bounds) grid() (grid, bool) {
	factor := (1 << hilbertBits) / b.extent()
	return grid{x: b.lo[0], y: b.lo[1], z: b.lo[2], factor: factor}, factor < 1e290
}

func (f *frame) cells() grid {
	g, _ := f.box.grid()
	if !(g.factor < 1e290) {
		g.factor = 0
	}
	g.lattice = f.lattice
	return g
}

// newFrame looks at all sites; bad is the first with a coordinate that is not finite,
// or -1.
func newFrame(sites []float64, threads int) (f *frame, bad int) {
	b := emptyBounds()
	bad = -1
	var lock sync.Mutex
	inChunks(len(sites)/3, threads, func(lo, hi int) {
		mine := emptyBounds()
		fault := -1
		for i := lo; i < hi; i++ {
			x, y, z := sites[3*i], sites[3*i+1], sites[3*i+2]
			if s := (x - x) + (y - y) + (z - z); s != 0 { // NaN for NaN and infinities
				fault = i
				break
			}
			mine.add(x, y, z)
		}
		lock.Lock()
		defer lock.Unlock()
		if fault >= 0 && (bad < 0 || fault < bad) {
			bad = fault
		}
		if lo < hi {
			b.add(mine.lo[0], mine.lo[1], mine.lo[2])
			b.add(mine.hi[0], mine.hi[1], mine.hi[2])
		}
	})
	f = &frame{scale: 1, scale2: 1}
	if bad >= 0 || len(sites) == 0 {
		return f, bad
	}
	f.place(b, true)
	if !f.survey(sites, threads) {
		f.place(b, false)
		f.survey(sites, threads)
	}
	return f, -1
}

// place chooses origin and scale.
func (f *frame) place(b bounds, move bool) {
	f.x0, f.y0, f.z0 = 0, 0, 0
	if extent := b.extent(); move && extent > 0 && extent < math.MaxFloat64/16 {
		step := math.Ldexp(1, exponentAbove(extent))
		origin := func(k int) float64 {
			if max(math.Abs(b.lo[k]), math.Abs(b.hi[k])) <= 4*extent {
				return 0
			}
			return math.Floor(b.lo[k]/step) * step
		}
		f.x0, f.y0, f.z0 = origin(0), origin(1), origin(2)
	}
	o := [3]float64{f.x0, f.y0, f.z0}
	largest := 0.0
	for k := range 3 {
		largest = max(largest, math.Abs(b.lo[k]-o[k]), math.Abs(b.hi[k]-o[k]))
	}
	e := 0
	if largest > 0 {
		e = -headroom - exponentAbove(largest)
	}
	f.scale, f.scale2 = math.Ldexp(1, e/2), math.Ldexp(1, e-e/2)
}

// exponentAbove returns e with x < 2^e <= 2x, for x > 0.
func exponentAbove(x float64) int {
	_, e := math.Frexp(x)
	return e
}

// survey checks that the frame is exact for all sites, and finds the bounds and the
// common last binary place of the internal coordinates. It returns false when the
// origin has to be given up.
func (f *frame) survey(sites []float64, threads int) bool {
	all := surveyed{box: emptyBounds(), exact: true, whole: true}
	var lock sync.Mutex
	inChunks(len(sites)/3, threads, func(lo, hi int) {
		one := f.surveyPart(sites[3*lo : 3*hi])
		lock.Lock()
		defer lock.Unlock()
		all.exact = all.exact && one.exact
		all.whole = all.whole && one.whole
		all.rounded = all.rounded || one.rounded
		all.union |= one.union
		if lo < hi {
			all.box.add(one.box.lo[0], one.box.lo[1], one.box.lo[2])
			all.box.add(one.box.hi[0], one.box.hi[1], one.box.hi[2])
		}
	})
	f.box, f.rounded = all.box, all.rounded
	f.bits = maxBits + 1
	if all.whole && !f.rounded {
		f.bits = maxBits - min(bits.TrailingZeros64(uint64(all.union)), maxBits)
	}
	return all.exact
}

// surveyed is what survey finds out about some sites.
type surveyed struct {
	box                   bounds
	exact, whole, rounded bool
	union                 int64 // the bits that occur in units of 2^-maxBits
}

func (f *frame) surveyPart(sites []float64) surveyed {
	s := surveyed{box: emptyBounds(), exact: true, whole: true}
	for i := 0; i+2 < len(sites); i += 3 {
		x, y, z := sites[i]-f.x0, sites[i+1]-f.y0, sites[i+2]-f.z0
		if roundedDifference(sites[i], f.x0, x) || roundedDifference(sites[i+1], f.y0, y) ||
			roundedDifference(sites[i+2], f.z0, z) {
			s.exact = false
			return s
		}
		sx, sy, sz := float64(x*f.scale)*f.scale2, float64(y*f.scale)*f.scale2, float64(z*f.scale)*f.scale2
		if tooSmall(x, sx) || tooSmall(y, sy) || tooSmall(z, sz) {
			s.rounded = true
		}
		s.box.add(sx, sy, sz)
		const unit = 1 << maxBits // a site beyond the box can be up to 2^63 units away
		a, b, c := sx*unit, sy*unit, sz*unit
		ia, ib, ic := int64(a), int64(b), int64(c)
		if float64(ia) != a || float64(ib) != b || float64(ic) != c {
			s.whole = false
		}
		s.union |= ia | ib | ic
	}
	return s
}

// tooSmall reports whether scaling x to s may have lost bits.
func tooSmall(x, s float64) bool { return x != 0 && math.Abs(s) < 0x1p-960 }

// roundedDifference reports whether d = fl(a-b) is not a-b (the error of Knuth's
// two-sum).
func roundedDifference(a, b, d float64) bool {
	bb := d - a
	return (a-(d-bb))-(b+bb) != 0
}

// internal returns the internal coordinates of site i, zeros positive.
func (f *frame) internal(sites []float64, i int) (x, y, z float64) {
	s := sites[3*i : 3*i+3 : 3*i+3]
	x, y, z = s[0]-f.x0, s[1]-f.y0, s[2]-f.z0
	return float64(x*f.scale)*f.scale2 + 0, float64(y*f.scale)*f.scale2 + 0, float64(z*f.scale)*f.scale2 + 0
}
