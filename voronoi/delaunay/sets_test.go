package delaunay

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"gonum.org/v1/gonum/spatial/r3"
	"pgregory.net/rapid"
)

// Kinds of sites that break programs, made from a seed. n is a wish.
var kinds = map[string]func(r *rand.Rand, n int) []r3.Vec{
	"uniform": func(r *rand.Rand, n int) []r3.Vec {
		return times(n, func(int) r3.Vec { return random(r) })
	},
	"three values": func(r *rand.Rand, n int) []r3.Vec { // many repeats too
		return times(n, func(int) r3.Vec {
			return r3.Vec{X: float64(r.IntN(3)), Y: float64(r.IntN(3)), Z: float64(r.IntN(3))}
		})
	},
	"cubic lattice": func(r *rand.Rand, n int) []r3.Vec { return shuffled(r, lattice(side(n), 1, nil)) },
	"lattice of 0.1": func(r *rand.Rand, n int) []r3.Vec {
		return shuffled(r, lattice(side(n), 0.1, nil))
	},
	"BCC of 0.1": func(r *rand.Rand, n int) []r3.Vec {
		return shuffled(r, lattice(side(n/2), 0.1, []r3.Vec{{X: .5, Y: .5, Z: .5}}))
	},
	"FCC": func(r *rand.Rand, n int) []r3.Vec {
		return shuffled(r, lattice(side(n/4), 2, []r3.Vec{{X: .5, Y: .5}, {X: .5, Z: .5}, {Y: .5, Z: .5}}))
	},
	"FCC of 0.1": func(r *rand.Rand, n int) []r3.Vec {
		return shuffled(r, lattice(side(n/4), 0.1, []r3.Vec{{X: .5, Y: .5}, {X: .5, Z: .5}, {Y: .5, Z: .5}}))
	},
	"integer sphere": func(r *rand.Rand, n int) []r3.Vec {
		// x²+y²+z² = 1105²: many ways by integers
		var out []r3.Vec
		for len(out) < n {
			a, b := []float64{1105, 0}, [][2]float64{{47, 1104}, {105, 1100}, {169, 1092}, {264, 1073}, {272, 1071}, {425, 1020}, {468, 1001}, {520, 975}, {561, 952}, {576, 943}, {663, 884}, {700, 855}, {744, 817}}
			p := b[r.IntN(len(b))]
			c := []float64{p[0] * sign(r), p[1] * sign(r), 0}
			if r.IntN(8) == 0 {
				c = []float64{a[0] * sign(r), 0, 0}
			}
			r.Shuffle(3, func(i, j int) { c[i], c[j] = c[j], c[i] })
			out = append(out, r3.Vec{X: c[0], Y: c[1], Z: c[2]})
		}
		return out
	},
	"sphere": func(r *rand.Rand, n int) []r3.Vec {
		return times(n, func(int) r3.Vec {
			return r3.Unit(r3.Vec{X: r.NormFloat64(), Y: r.NormFloat64(), Z: r.NormFloat64()})
		})
	},
	"cylinder": func(r *rand.Rand, n int) []r3.Vec {
		return times(n, func(i int) r3.Vec {
			s, c := circle(2 * math.Pi * float64(i%24) / 24)
			return r3.Vec{X: c, Y: s, Z: float64(i / 24)}
		})
	},
	"ring and axis": func(r *rand.Rand, n int) []r3.Vec {
		return times(min(n, 200), func(i int) r3.Vec { // n²/4 tetrahedra
			if i%2 == 0 {
				return r3.Vec{Z: float64(i)}
			}
			s, c := circle(float64(i))
			return r3.Vec{X: 10 * c, Y: 10 * s, Z: 0}
		})
	},
	"one line": func(r *rand.Rand, n int) []r3.Vec {
		return times(n, func(int) r3.Vec { return r3.Scale(float64(r.IntN(1000)), r3.Vec{X: 1, Y: -2, Z: 3}) })
	},
	"one plane": func(r *rand.Rand, n int) []r3.Vec {
		return times(n, func(int) r3.Vec {
			x, y := float64(r.IntN(1000)), float64(r.IntN(1000))
			return r3.Vec{X: x, Y: y, Z: x - 2*y}
		})
	},
	"plane and one": func(r *rand.Rand, n int) []r3.Vec {
		return append(times(n, func(int) r3.Vec {
			return r3.Vec{X: r.Float64(), Y: r.Float64(), Z: 0.1}
		}), r3.Vec{X: .3, Y: .4, Z: .5})
	},
	"two layers": func(r *rand.Rand, n int) []r3.Vec {
		return times(n, func(i int) r3.Vec {
			return r3.Vec{X: float64(r.IntN(40)), Y: float64(r.IntN(40)), Z: float64(i % 2)}
		})
	},
	"two far clusters": func(r *rand.Rand, n int) []r3.Vec {
		return times(n, func(i int) r3.Vec { return r3.Add(random(r), r3.Vec{X: 1e7 * float64(i%2)}) })
	},
	"nested clusters": func(r *rand.Rand, n int) []r3.Vec {
		return times(n, func(i int) r3.Vec { return r3.Scale(math.Pow(10, -float64(r.IntN(12))), random(r)) })
	},
	"one place": func(r *rand.Rand, n int) []r3.Vec {
		return times(n, func(int) r3.Vec { return r3.Vec{X: 0.1, Y: 0.2, Z: 0.3} })
	},
	"heavy repeats": func(r *rand.Rand, n int) []r3.Vec {
		few := times(12, func(int) r3.Vec { return random(r) })
		return times(n, func(int) r3.Vec { return few[r.IntN(len(few))] })
	},
	"denormals": func(r *rand.Rand, n int) []r3.Vec {
		return times(n, func(int) r3.Vec {
			return r3.Scale(math.SmallestNonzeroFloat64, r3.Vec{X: float64(r.IntN(9)), Y: float64(r.IntN(9)), Z: float64(r.IntN(1000))})
		})
	},
	"huge": func(r *rand.Rand, n int) []r3.Vec {
		return times(n, func(int) r3.Vec { return r3.Scale(1.7e308, r3.Sub(random(r), random(r))) })
	},
	"all magnitudes": func(r *rand.Rand, n int) []r3.Vec {
		f := func() float64 { return sign(r) * math.Ldexp(r.Float64(), r.IntN(2090)-1070) }
		// Nearly every decision needs math/big.
		return times(min(n, 80), func(int) r3.Vec { return r3.Vec{X: f(), Y: f(), Z: f()} })
	},
	"tiny extent": func(r *rand.Rand, n int) []r3.Vec {
		return times(n, func(int) r3.Vec { return r3.Add(r3.Scale(1e-9, random(r)), r3.Vec{X: 1, Y: 1, Z: 1}) })
	},
	"world in mm": func(r *rand.Rand, n int) []r3.Vec {
		return times(n, func(int) r3.Vec {
			return r3.Vec{X: 1e6 + float64(r.IntN(100))*0.001, Y: 2e6 + float64(r.IntN(100))*0.001, Z: float64(r.IntN(10)) * 0.001}
		})
	},
	"walk": func(r *rand.Rand, n int) []r3.Vec {
		return times(n, func(i int) r3.Vec {
			a := float64(i) * 0.01
			s, _ := circle(a)
			_, c := circle(1.3 * a)
			return r3.Vec{X: 155000 + float64(20*s), Y: 463000 + float64(20*c), Z: 1.1 + float64(i%3)}
		})
	},
	"integers and one odd": func(r *rand.Rand, n int) []r3.Vec {
		return append(times(n, func(int) r3.Vec {
			return r3.Vec{X: float64(r.IntN(12)), Y: float64(r.IntN(12)), Z: float64(r.IntN(12))}
		}), r3.Vec{X: 1e-300, Y: 3, Z: 3})
	},
	"zeros of both signs": func(r *rand.Rand, n int) []r3.Vec {
		z := func() float64 {
			return [4]float64{0, math.Copysign(0, -1), 1, -1}[r.IntN(4)]
		}
		return times(n, func(int) r3.Vec { return r3.Vec{X: z(), Y: z(), Z: z()} })
	},
}

// circle is math.Sincos to 30 binary places, the same at every instruction level.
func circle(a float64) (s, c float64) {
	s, c = math.Sincos(a)
	return math.Round(s*(1<<30)) / (1 << 30), math.Round(c*(1<<30)) / (1 << 30)
}

func kindNames() []string {
	var names []string
	for name := range kinds {
		names = append(names, name)
	}
	slices.Sort(names)
	return names
}

func times(n int, f func(i int) r3.Vec) []r3.Vec {
	out := make([]r3.Vec, n)
	for i := range out {
		out[i] = f(i)
	}
	return out
}

func random(r *rand.Rand) r3.Vec { return r3.Vec{X: r.Float64(), Y: r.Float64(), Z: r.Float64()} }

func sign(r *rand.Rand) float64 { return float64(1 - 2*r.IntN(2)) }

func side(n int) int { return max(1, int(math.Cbrt(float64(n)))) }

// lattice has k³ cells with a site at the origin of each and at the offsets.
func lattice(k int, step float64, offsets []r3.Vec) []r3.Vec {
	var out []r3.Vec
	for z := range k {
		for y := range k {
			for x := range k {
				p := r3.Vec{X: float64(x), Y: float64(y), Z: float64(z)}
				for _, o := range append([]r3.Vec{{}}, offsets...) {
					q := r3.Add(p, o)
					out = append(out, r3.Vec{X: q.X * step, Y: q.Y * step, Z: q.Z * step})
				}
			}
		}
	}
	return out
}

func shuffled(r *rand.Rand, s []r3.Vec) []r3.Vec {
	r.Shuffle(len(s), func(i, j int) { s[i], s[j] = s[j], s[i] })
	return s
}

// drawSites draws a kind, a size up to most and a seed.
func drawSites(t *rapid.T, most int) []r3.Vec {
	kind := rapid.SampledFrom(kindNames()).Draw(t, "kind")
	n := rapid.IntRange(0, most).Draw(t, "n")
	seed := rapid.Uint64().Draw(t, "seed")
	return kinds[kind](rand.New(rand.NewPCG(seed, 1)), n)
}

func build(t testing.TB, sites []r3.Vec, threads int) *T {
	t.Helper()
	d, err := Build(t.Context(), sites, Options{Threads: threads})
	if err != nil {
		t.Fatal(err)
	}
	return d
}
