package predicate

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/spatial/r2"
	"gonum.org/v1/gonum/spatial/r3"
)

// The oracle: the same polynomials in whole multiples of 2^-1074, of which every
// float64 is one, as determinants by Laplace expansion, without any of the package's
// arithmetic. (Rational numbers would do the same ten times as slowly.)

func whole(x float64) *big.Int {
	i, accuracy := new(big.Float).SetMantExp(big.NewFloat(x), 1074).Int(nil)
	if accuracy != big.Exact {
		panic("a float64 is no multiple of 2^-1074")
	}
	return i
}

func exactRow(p, o r3.Vec) []*big.Int {
	return []*big.Int{
		new(big.Int).Sub(whole(p.X), whole(o.X)),
		new(big.Int).Sub(whole(p.Y), whole(o.Y)),
		new(big.Int).Sub(whole(p.Z), whole(o.Z)),
	}
}

func exactNorm2(r []*big.Int) *big.Int {
	sum := new(big.Int)
	for _, x := range r {
		sum.Add(sum, new(big.Int).Mul(x, x))
	}
	return sum
}

func exactDet(m [][]*big.Int) *big.Int {
	if len(m) == 1 {
		return m[0][0]
	}
	sum := new(big.Int)
	for j, x := range m[0] {
		if x.Sign() == 0 {
			continue
		}
		var sub [][]*big.Int
		for _, row := range m[1:] {
			sub = append(sub, append(append([]*big.Int{}, row[:j]...), row[j+1:]...))
		}
		t := new(big.Int).Mul(x, exactDet(sub))
		if j%2 == 1 {
			t.Neg(t)
		}
		sum.Add(sum, t)
	}
	return sum
}

func exactOrient2D(a, b, c r2.Vec) int {
	lift := func(v r2.Vec) r3.Vec { return r3.Vec{X: v.X, Y: v.Y} }
	u, v := exactRow(lift(b), lift(a)), exactRow(lift(c), lift(a))
	return exactDet([][]*big.Int{u[:2], v[:2]}).Sign()
}

func exactOrient3D(a, b, c, d r3.Vec) int {
	return exactDet([][]*big.Int{exactRow(b, a), exactRow(c, a), exactRow(d, a)}).Sign()
}

// exactInSphere is the 4x4 determinant with rows (|i|², i): expanded along its first
// column it is the formula of InSphere.
func exactInSphere(a, b, c, d, e r3.Vec) int {
	var m [][]*big.Int
	for _, p := range []r3.Vec{a, b, c, d} {
		r := exactRow(p, e)
		m = append(m, append([]*big.Int{exactNorm2(r)}, r...))
	}
	return exactDet(m).Sign()
}

func exactBisector(p, q, x r3.Vec) int {
	return exactNorm2(exactRow(x, p)).Cmp(exactNorm2(exactRow(x, q)))
}

// family makes sets of five points of one kind.
type family struct {
	name string
	n    int
	make func(*rand.Rand) [5]r3.Vec
}

func each(r *rand.Rand, f func(i int) r3.Vec) (p [5]r3.Vec) {
	for i := range p {
		p[i] = f(i)
	}
	return p
}

func cube(r *rand.Rand, size float64) r3.Vec {
	return r3.Vec{X: size * (r.Float64() - 0.5), Y: size * (r.Float64() - 0.5), Z: size * (r.Float64() - 0.5)}
}

func lattice(r *rand.Rand, step float64) r3.Vec {
	return r3.Vec{X: step * float64(r.IntN(4)), Y: step * float64(r.IntN(4)), Z: step * float64(r.IntN(4))}
}

// nearSphere makes points within rounding of a sphere and of a plane at once for
// some members, far from the origin for others.
func nearSphere(r *rand.Rand) [5]r3.Vec {
	centre := cube(r, math.Pow(10, 4*r.Float64()))
	radius := math.Pow(10, 3*r.Float64()-1)
	return each(r, func(int) r3.Vec {
		u := r3.Vec{X: r.NormFloat64(), Y: r.NormFloat64(), Z: r.NormFloat64()}
		return r3.Add(centre, r3.Scale(radius/r3.Norm(u), u))
	})
}

func nearPlane(r *rand.Rand) [5]r3.Vec {
	o, u, v := cube(r, 1e4*r.Float64()), cube(r, 1), cube(r, 1)
	return each(r, func(int) r3.Vec {
		return r3.Add(o, r3.Add(r3.Scale(r.NormFloat64(), u), r3.Scale(r.NormFloat64(), v)))
	})
}

func nearLine(r *rand.Rand) [5]r3.Vec {
	o, u := cube(r, 1e4*r.Float64()), cube(r, 1)
	return each(r, func(int) r3.Vec { return r3.Add(o, r3.Scale(r.NormFloat64(), u)) })
}

func scaled(s float64, f func(*rand.Rand) [5]r3.Vec) func(*rand.Rand) [5]r3.Vec {
	return func(r *rand.Rand) [5]r3.Vec {
		p := f(r)
		for i := range p {
			p[i] = r3.Scale(s, p[i])
		}
		return p
	}
}

func ulps(f func(*rand.Rand) [5]r3.Vec) func(*rand.Rand) [5]r3.Vec {
	nudge := func(r *rand.Rand, x float64) float64 {
		switch r.IntN(4) {
		case 0:
			return math.Nextafter(x, math.Inf(1))
		case 1:
			return math.Nextafter(x, math.Inf(-1))
		}
		return x
	}
	return func(r *rand.Rand) [5]r3.Vec {
		p := f(r)
		for i := range p {
			p[i] = r3.Vec{X: nudge(r, p[i].X), Y: nudge(r, p[i].Y), Z: nudge(r, p[i].Z)}
		}
		return p
	}
}

func random(r *rand.Rand) [5]r3.Vec { return each(r, func(int) r3.Vec { return cube(r, 20) }) }

func unitLattice(r *rand.Rand) [5]r3.Vec { return each(r, func(int) r3.Vec { return lattice(r, 1) }) }

func decimalLattice(r *rand.Rand) [5]r3.Vec {
	return each(r, func(int) r3.Vec { return lattice(r, 0.1) })
}

// mixed has coordinates whose binary exponents spread over the whole range.
func mixed(r *rand.Rand) [5]r3.Vec {
	any := func() float64 {
		if r.IntN(6) == 0 {
			return 0
		}
		return math.Ldexp(r.Float64()-0.5, r.IntN(2040)-1040)
	}
	return each(r, func(int) r3.Vec { return r3.Vec{X: any(), Y: any(), Z: any()} })
}

// spread stays inside the range of the expansions but needs many components.
func spread(r *rand.Rand) [5]r3.Vec {
	any := func() float64 { return math.Ldexp(r.Float64()-0.5, r.IntN(300)-130) }
	return each(r, func(int) r3.Vec { return r3.Vec{X: any(), Y: any(), Z: any()} })
}

var families = []family{
	{"random", 2000, random},
	{"near a sphere", 8000, nearSphere},
	{"near a plane", 8000, nearPlane},
	{"near a line", 4000, nearLine},
	{"lattice", 2000, unitLattice},
	{"decimal lattice", 3000, decimalLattice},
	{"lattice and ulps", 4000, ulps(decimalLattice)},
	{"world coordinates", 1000, func(r *rand.Rand) [5]r3.Vec {
		return each(r, func(int) r3.Vec { return r3.Add(r3.Vec{X: 5e5, Y: 5e6, Z: 100}, lattice(r, 0.1)) })
	}},
	{"tiny 1e-200", 500, scaled(1e-200, random)},
	{"tiny 1e-200 lattice", 500, scaled(1e-200, decimalLattice)},
	{"tiny 1e-60", 500, scaled(1e-60, nearSphere)},
	{"subnormal", 300, scaled(5e-324, unitLattice)},
	{"huge 1e150", 500, scaled(1e150, random)},
	{"huge 1e150 lattice", 500, scaled(1e150, ulps(unitLattice))},
	{"largest", 300, scaled(4e307, func(r *rand.Rand) [5]r3.Vec { return each(r, func(int) r3.Vec { return lattice(r, 1) }) })},
	{"mixed exponents", 1000, mixed},
	{"spread exponents", 500, spread},
}

// TestSignsAgainstIntegers: law 1, the sign is that of the exact polynomial.
func TestSignsAgainstIntegers(t *testing.T) {
	total := 0
	for k, f := range families {
		r := rand.New(rand.NewPCG(uint64(k), 1))
		zeros := 0
		for range f.n {
			p := f.make(r)
			total++
			a, b, c, d, e := p[0], p[1], p[2], p[3], p[4]
			if got, want := Orient3D(a, b, c, d), exactOrient3D(a, b, c, d); got != want {
				t.Fatalf("%s: Orient3D%v = %d, want %d", f.name, p, got, want)
			}
			got, want := InSphere(a, b, c, d, e), exactInSphere(a, b, c, d, e)
			if got != want {
				t.Fatalf("%s: InSphere%v = %d, want %d", f.name, p, got, want)
			}
			if want == 0 {
				zeros++
			}
			if got, want := SideOfBisector(a, b, c), exactBisector(a, b, c); got != want {
				t.Fatalf("%s: SideOfBisector%v = %d, want %d", f.name, p, got, want)
			}
			u, v, w := r2.Vec{X: a.X, Y: a.Y}, r2.Vec{X: b.X, Y: b.Y}, r2.Vec{X: c.X, Y: c.Y}
			if got, want := Orient2D(u, v, w), exactOrient2D(u, v, w); got != want {
				t.Fatalf("%s: Orient2D(%v %v %v) = %d, want %d", f.name, u, v, w, got, want)
			}
		}
		if f.name == "lattice" && (zeros < 100 || zeros > f.n-100) {
			t.Errorf("%d of %d lattice in-spheres are ties: the family tests nothing", zeros, f.n)
		}
	}
	if total < 20000 {
		t.Errorf("only %d point sets", total)
	}
}

// TestStagesAgree: every stage that claims to be sure is right by itself, whether or
// not an earlier one would have answered.
func TestStagesAgree(t *testing.T) {
	for k, f := range families {
		r := rand.New(rand.NewPCG(uint64(k), 2))
		for range min(f.n, 400) {
			p := f.make(r)
			a, b, c, d, e := p[0], p[1], p[2], p[3], p[4]
			o, s := exactOrient3D(a, b, c, d), exactInSphere(a, b, c, d, e)
			if got := orient3DBig(a, b, c, d); got != o {
				t.Fatalf("%s: orient3DBig%v = %d, want %d", f.name, p, got, o)
			}
			if got := inSphereBig(a, b, c, d, e); got != s {
				t.Fatalf("%s: inSphereBig%v = %d, want %d", f.name, p, got, s)
			}
			if got := bisectorBig(a, b, c); got != exactBisector(a, b, c) {
				t.Fatalf("%s: bisectorBig%v = %d", f.name, p, got)
			}
			in := func(low, high float64) bool {
				for _, v := range p {
					if !within3(v, low, high) {
						return false
					}
				}
				return true
			}
			if in(degree3Low, degree3High) {
				if got, ok := orient3DPermanent(a, b, c, d); ok && got != o {
					t.Fatalf("%s: orient3DPermanent%v = %d, want %d", f.name, p, got, o)
				}
				if got, ok := orient3DExpansion(a, b, c, d); ok && got != o {
					t.Fatalf("%s: orient3DExpansion%v = %d, want %d", f.name, p, got, o)
				}
			}
			if in(degree5Low, degree5High) {
				if got, ok := inSpherePermanent(a, b, c, d, e); ok && got != s {
					t.Fatalf("%s: inSpherePermanent%v = %d, want %d", f.name, p, got, s)
				}
				got, ok := inSphereExpansion(a, b, c, d, e)
				if ok && got != s {
					t.Fatalf("%s: inSphereExpansion%v = %d, want %d", f.name, p, got, s)
				}
				if !ok && f.name != "spread exponents" && f.name != "mixed exponents" {
					t.Errorf("%s: the expansions of %v do not fit their arrays", f.name, p)
				}
			}
		}
	}
}

// TestFilterFailureRate: most questions never reach the exact stages.
func TestFilterFailureRate(t *testing.T) {
	const n = 20000
	tests := []struct {
		name                     string
		make                     func(*rand.Rand) [5]r3.Vec
		orient, sphere, bisector float64 // largest share the filters may leave open
	}{
		{"random", random, 1e-4, 1e-4, 1e-4},
		{"world coordinates", func(r *rand.Rand) [5]r3.Vec {
			return each(r, func(int) r3.Vec { return r3.Add(r3.Vec{X: 5e5, Y: 5e6, Z: 100}, cube(r, 20)) })
		}, 1e-4, 1e-4, 1e-4},
		{"flat sheet", func(r *rand.Rand) [5]r3.Vec {
			return each(r, func(int) r3.Vec { p := cube(r, 20); p.Z *= 1e-6; return p })
		}, 2e-4, 2e-4, 1e-4},
	}
	for _, tt := range tests {
		r := rand.New(rand.NewPCG(7, 7))
		var orient, sphere, bisector int
		for range n {
			p := tt.make(r)
			a, b, c, d, e := p[0], p[1], p[2], p[3], p[4]
			if _, ok := orient3DPermanent(a, b, c, d); !ok {
				orient++
			}
			if _, ok := inSpherePermanent(a, b, c, d, e); !ok {
				sphere++
			}
			if _, ok := bisectorFilter(a, b, c); !ok {
				bisector++
			}
		}
		t.Logf("%s: open after the filters: orient %d, in-sphere %d, bisector %d of %d", tt.name, orient, sphere, bisector, n)
		if float64(orient) > tt.orient*n || float64(sphere) > tt.sphere*n || float64(bisector) > tt.bisector*n {
			t.Errorf("%s: too many questions left open: %d, %d, %d of %d", tt.name, orient, sphere, bisector, n)
		}
	}
}

// TestNormFilterFailureRate: on points in general position the first stage does
// nearly everything.
func TestNormFilterFailureRate(t *testing.T) {
	r := rand.New(rand.NewPCG(8, 8))
	open := 0
	const n = 20000
	for range n {
		p := random(r)
		u, v, w := r3.Sub(p[1], p[0]), r3.Sub(p[2], p[0]), r3.Sub(p[3], p[0])
		det := r3.Dot(u, r3.Cross(v, w))
		if !orient3DNormSure(det, r3.Norm2(u), r3.Norm2(v), r3.Norm2(w)) {
			open++
		}
	}
	if open > n/5000 {
		t.Errorf("the norm filter leaves %d of %d orientations open", open, n)
	}
}
