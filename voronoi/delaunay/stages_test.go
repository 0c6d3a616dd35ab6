package delaunay

import (
	"math/big"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/spatial/r3"
	"pgregory.net/rapid"

	"nearcell/voronoi/predicate"
)

// A curve that is one goes through every cell once and steps to a face neighbour.
func TestHilbertCurve(t *testing.T) {
	// The first three levels of the fifteen: cells of 2^12.
	const levels, n = 3, 8
	at := map[uint64][3]int{}
	for x := range n {
		for y := range n {
			for z := range n {
				const shift = hilbertBits - levels
				code := hilbertCode(uint32(x)<<shift, uint32(y)<<shift, uint32(z)<<shift) >> (3 * shift)
				if _, twice := at[code]; twice || code >= n*n*n {
					t.Fatalf("cell %d %d %d: code %d", x, y, z, code)
				}
				at[code] = [3]int{x, y, z}
			}
		}
	}
	for code := uint64(1); code < n*n*n; code++ {
		a, b := at[code-1], at[code]
		d := 0
		for k := range 3 {
			d += (a[k] - b[k]) * (a[k] - b[k])
		}
		if d != 1 {
			t.Fatalf("step %d goes from %v to %v", code, a, b)
		}
	}
}

func bigOf(words ...uint64) *big.Int {
	x := new(big.Int)
	for i := len(words) - 1; i >= 0; i-- {
		x.Lsh(x, 64).Or(x, new(big.Int).SetUint64(words[i]))
	}
	if words[len(words)-1]>>63 == 1 {
		x.Sub(x, new(big.Int).Lsh(big.NewInt(1), uint(64*len(words))))
	}
	return x
}

// Wide integers agree with math/big.
func TestWideIntegers(t *testing.T) {
	word := rapid.OneOf(rapid.Uint64(), rapid.SampledFrom([]uint64{0, 1, 1<<63 - 1, 1 << 63, 1<<64 - 1}))
	two := func(a int128) *big.Int { return bigOf(a.l, a.h) }
	three := func(a int192) *big.Int { return bigOf(a.l, a.m, a.h) }
	rapid.Check(t, func(t *rapid.T) {
		a, b := int64(word.Draw(t, "a")), int64(word.Draw(t, "b"))
		m := mul64(a, b)
		want := new(big.Int).Mul(big.NewInt(a), big.NewInt(b))
		if two(m).Cmp(want) != 0 || m.sign() != want.Sign() {
			t.Fatalf("%d * %d = %v", a, b, two(m))
		}
		x := int128{word.Draw(t, "x0"), word.Draw(t, "x1")}
		p := x.times(a)
		want = wrap(new(big.Int).Mul(two(x), big.NewInt(a)), 192)
		if three(p).Cmp(want) != 0 || p.sign() != want.Sign() {
			t.Fatalf("%v * %d = %v", two(x), a, three(p))
		}
		q := int128{word.Draw(t, "q0"), word.Draw(t, "q1") >> 1}
		y := int192{word.Draw(t, "y0"), word.Draw(t, "y1"), word.Draw(t, "y2")}
		w0, w1, w2, w3, w4 := y.times(q)
		want = new(big.Int).Mul(three(y), two(q))
		if got := bigOf(w0, w1, w2, w3, w4); got.Cmp(want) != 0 {
			t.Fatalf("%v * %v = %v", three(y), two(q), got)
		}
		if v, u := x.mulWrap(q), wrap(new(big.Int).Mul(two(x), two(q)), 128); two(v).Cmp(u) != 0 {
			t.Fatal("product modulo 2^128")
		}
		// Keep the sum of four products inside five words.
		short := func(i int192) int192 { i.h = uint64(int64(i.h) >> 3); return i }
		c, d := short(int192{word.Draw(t, "c0"), word.Draw(t, "c1"), word.Draw(t, "c2")}), short(p)
		e, f := short(y), short(int192{l: uint64(a)})
		r := int128{word.Draw(t, "r0"), word.Draw(t, "r1") >> 2}
		q.h >>= 1
		sum := new(big.Int)
		for i, term := range [4]*big.Int{
			new(big.Int).Mul(three(c), two(q)), new(big.Int).Mul(three(d), two(r)),
			new(big.Int).Mul(three(e), two(r)), new(big.Int).Mul(three(f), two(q)),
		} {
			if i%2 == 0 {
				sum.Add(sum, term)
			} else {
				sum.Sub(sum, term)
			}
		}
		if got := signOfSum(c, q, d, r, e, r, f, q); got != sum.Sign() {
			t.Fatalf("sum of four products: sign %d of %v", got, sum)
		}
		if signOfSum(c, q, c, q, e, r, e, r) != 0 {
			t.Fatal("equal products do not cancel")
		}
	})
}

// wrap takes x modulo 2^n to -2^(n-1) .. 2^(n-1)-1.
func wrap(x *big.Int, n uint) *big.Int {
	m := new(big.Int).Lsh(big.NewInt(1), n)
	x.Mod(x, m)
	if x.Bit(int(n-1)) == 1 {
		x.Sub(x, m)
	}
	return x
}

// Every stage gives the sign of package predicate, which has other stages: sites of
// each kind, five at a time, near each other or not, in the frame of the whole set.
func TestStagesAgreeWithPredicate(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		sites := drawSites(t, 60)
		if len(sites) < 5 {
			return
		}
		flat := make([]float64, 0, 3*len(sites))
		for _, s := range sites {
			flat = append(flat, s.X, s.Y, s.Z)
		}
		f, _ := newFrame(flat, 1)
		m := &mesh{frame: f, sites: flat, pts: make([]point, 1)}
		m.setLimits()
		for i := range sites {
			x, y, z := f.internal(flat, i)
			m.order = append(m.order, uint32(i))
			m.pts = append(m.pts, point{x: x, y: y, z: z})
		}
		r := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "fives"), 4))
		for range 60 {
			var v [5]int32
			for k := range v {
				v[k] = int32(r.IntN(len(sites)) + 1)
			}
			at := func(k int) r3.Vec { return sites[v[k]-1] }
			want := predicate.Orient3D(at(0), at(1), at(2), at(3))
			if got := m.orient(v[0], v[1], v[2], v[3]); got != want {
				t.Fatalf("orient of %v: %d, want %d", v, got, want)
			}
			if want <= 0 {
				v[0], v[1] = v[1], v[0]
			}
			if want == 0 {
				continue
			}
			in := predicate.InSpherePerturbed(at(0), at(1), at(2), at(3), at(4)) > 0
			tet := [4]int32{v[0], v[1], v[2], v[3]}
			if got := m.inSphere(tet[0], tet[1], tet[2], tet[3], v[4]); got != in {
				t.Fatalf("in-sphere of %v: %v, want %v", v, got, in)
			}
			checkWhole(t, m, tet, v[4], predicate.InSphere(at(0), at(1), at(2), at(3), at(4)))
			checkSphere(t, m, tet, v[4], in)
		}
	})
}

// checkWhole asks the integer stages, whether or not the filter would have.
func checkWhole(t *rapid.T, m *mesh, v [4]int32, e int32, want int) {
	l, ok := commonUnit(&m.pts[v[0]], &m.pts[v[1]], &m.pts[v[2]], &m.pts[v[3]], &m.pts[e])
	if !ok || m.frame.rounded {
		return
	}
	var r [4]int64s
	whole := func(x, o float64) int64 { return int64(x*l.unit) - int64(o*l.unit) }
	o := m.pts[e]
	small := true
	for k := range r {
		q := m.pts[v[k]]
		r[k] = int64s{whole(q.x, o.x), whole(q.y, o.y), whole(q.z, o.z)}
		for _, x := range [3]int64{r[k].x, r[k].y, r[k].z} {
			small = small && x < 1<<23 && x > -1<<23
		}
	}
	if got := inSphere320(r[0], r[1], r[2], r[3]); got != want {
		t.Fatalf("five words: %d, want %d", got, want)
	}
	if small { // 5*23 + 7 bits
		if got := inSphere128(r[0], r[1], r[2], r[3]); got != want {
			t.Fatalf("two words: %d, want %d", got, want)
		}
	}
	if in, ok := m.oneBox(&m.pts[v[0]], &m.pts[v[1]], &m.pts[v[2]], &m.pts[v[3]], &o); ok {
		if want != 0 {
			t.Fatalf("corners %v and %d of a box with sign %d", v, e, want)
		}
		if tie := m.tie(v, e); in != tie {
			t.Fatalf("corners %v and %d of a box: by table %v, by the points %v", v, e, in, tie)
		}
	}
}

// checkSphere asks the stored sphere; an exact one knows what lies on it.
func checkSphere(t *rapid.T, m *mesh, v [4]int32, e int32, in bool) {
	q := tet{v: v}
	m.setSphere(&q)
	o := m.pts[e]
	x, y, z := q.c[0]-o.x, q.c[1]-o.y, q.c[2]-o.z
	d := x*x + y*y + z*z
	if d < float64(q.lo) && !in || d > float64(q.hi) && in {
		t.Fatalf("stored sphere of %v: distance² %v, bounds %v %v, inside %v", v, d, q.lo, q.hi, in)
	}
	if q.lo == q.hi && d == float64(q.lo) {
		if got := nearSphereTie(&m.pts[v[0]], &m.pts[v[1]], &m.pts[v[2]], &m.pts[v[3]], &o); got != in {
			t.Fatalf("%d on the exact sphere of %v: inside %v, want %v", e, v, got, in)
		}
	}
}
