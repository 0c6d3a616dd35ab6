package section

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"reflect"
	"testing"

	"nearcell/voronoi"
	"nearcell/voronoi/solid"
	"nearcell/voronoi/solid/mesh"
)

func made[T any](x T, err error) T {
	if err != nil {
		panic(err)
	}
	return x
}

func box(x0, y0, z0, x1, y1, z1 float64) *solid.Box {
	return made(solid.NewBox(Vec{X: x0, Y: y0, Z: z0}, Vec{X: x1, Y: y1, Z: z1}))
}

// hall is an L of 10 x 8 without 4 x 3, with a pillar of 1 x 1 in it, 3 high.
func hall() *solid.Prism {
	return made(solid.NewPrism([]Vec2{{X: 0, Y: 0}, {X: 10, Y: 0}, {X: 10, Y: 5}, {X: 6, Y: 5}, {X: 6, Y: 8}, {X: 0, Y: 8}},
		[][]Vec2{{{X: 2, Y: 2}, {X: 3, Y: 2}, {X: 3, Y: 3}, {X: 2, Y: 3}}}, 0, 3))
}

// hollow is the hall without a slab that hangs in it.
func hollow(t testing.TB) solid.Solid {
	t.Helper()
	s, err := mesh.Combine(mesh.Minus, hall(), box(4, 1, 1, 5.5, 7, 2))
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func diagram(t testing.TB, sites []Vec, o voronoi.Options) *voronoi.Diagram {
	t.Helper()
	d, err := voronoi.New(sites, o)
	if err != nil {
		t.Fatal(err)
	}
	return d
}

func cut(t testing.TB, d *voronoi.Diagram, p Plane, o Options) *Section {
	t.Helper()
	o.Outlines = true
	s, err := Cut(context.Background(), d, p, nil, o)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func randomIn(body solid.Solid, r *rand.Rand, n int) []Vec {
	lo, hi := body.Bounds()
	var out []Vec
	for len(out) < n {
		p := Vec{X: lo.X + r.Float64()*(hi.X-lo.X), Y: lo.Y + r.Float64()*(hi.Y-lo.Y), Z: lo.Z + r.Float64()*(hi.Z-lo.Z)}
		if body.Side(p, 0) == solid.Inside {
			out = append(out, p)
		}
	}
	return out
}

func total(s *Section) float64 {
	var sum voronoi.Sum
	for _, p := range s.Pieces {
		sum.Add(p.Area)
	}
	return sum.Value()
}

// outlined is the area of polygons, holes taken off, from their corners in space.
func outlined(s *Section, list []Polygon) float64 {
	sum := 0.0
	for _, p := range list {
		for _, ring := range p {
			flat := make([]Vec2, len(ring))
			for i, c := range ring {
				flat[i] = s.Flat(c)
			}
			sum += area(flat)
		}
	}
	return sum
}

// planes are level, upright and leaning ones, in walls and off them.
func planes(r *rand.Rand) []Plane {
	list := []Plane{Across(2, 0), Across(2, 3), Across(2, 1), Across(2, 2), Across(2, 1.1), Across(0, 6), Across(0, 0), Across(0, 10), Across(1, 5), Across(1, 3),
		Across(0, 4), Across(1, 8), {At: Vec{Z: 1}, Normal: Vec{Y: 1, Z: 4}}, {At: Vec{X: 6, Y: 5}, Normal: Vec{X: 1, Y: 1}}, {At: Vec{Z: 1.5}, Normal: Vec{Z: -2}}}
	for range 6 {
		list = append(list, Plane{At: Vec{X: 5 * r.Float64(), Y: 4 * r.Float64(), Z: 3 * r.Float64()}, Normal: Vec{X: r.NormFloat64(), Y: r.NormFloat64(), Z: r.NormFloat64()}})
	}
	return list
}

// Laws 1, 3 and 4 in solids of every kind.
func TestSumsOutlinesAndPlaces(t *testing.T) {
	r := rand.New(rand.NewPCG(8, 1))
	for name, body := range map[string]solid.Solid{"box": box(0, 0, 0, 10, 8, 3), "hall": hall(), "hollow": hollow(t)} {
		for _, n := range []int{1, 2, 40} {
			sites := randomIn(body, r, n)
			for _, stretch := range []Vec{{}, {X: 1, Y: 1, Z: 4}} {
				if stretch != (Vec{}) && name == "hollow" {
					continue
				}
				d := diagram(t, sites, voronoi.Options{Solid: body, Stretch: stretch})
				for i, p := range planes(r) {
					s := cut(t, d, p, Options{})
					at := fmt.Sprintf("%s, %d sites, stretch %v, plane %d %+v", name, n, stretch, i, p)
					if math.Abs(total(s)-s.Area) > 1e-12*max(s.Area, 1) {
						t.Fatalf("%s: the cells have %.17g of %.17g", at, total(s), s.Area)
					}
					if math.Abs(outlined(s, s.Space)-s.Area) > 1e-9 {
						t.Fatalf("%s: the outline of the solid has %.17g of %.17g", at, outlined(s, s.Space), s.Area)
					}
					for _, c := range s.Pieces {
						if math.Abs(outlined(s, c.Polygons)-c.Area) > 1e-9 {
							t.Fatalf("%s: the outline of site %d has %.17g of %.17g", at, c.Site, outlined(s, c.Polygons), c.Area)
						}
					}
					checkPlaces(t, at, s, d, body, sites, r)
				}
			}
		}
	}
}

// checkPlaces tries places of the plane: law 4.
func checkPlaces(t *testing.T, at string, s *Section, d *voronoi.Diagram, body solid.Solid, sites []Vec, r *rand.Rand) {
	t.Helper()
	k := d.Stretch()
	far := func(a, b Vec) float64 {
		v := sub(a, b)
		return length(Vec{X: v.X * k.X, Y: v.Y * k.Y, Z: v.Z * k.Z})
	}
	for range 30 {
		q := add(s.Foot, add(scale(12*(r.Float64()-0.2), s.U), scale(12*(r.Float64()-0.2), s.V)))
		if body.Side(q, 1e-3) == solid.On {
			continue
		}
		best, second := -1, math.Inf(1)
		least := math.Inf(1)
		for i, p := range sites {
			switch l := far(p, q); {
			case l < least:
				second, least, best = least, l, i
			case l < second:
				second = l
			}
		}
		if second-least < 1e-3 {
			continue
		}
		if body.Side(q, 0) == solid.Outside {
			best = -1
		}
		for _, c := range s.Pieces {
			in := false
			for _, p := range c.Polygons {
				odd := false
				for _, ring := range p {
					flat := make([]Vec2, len(ring))
					for i, x := range ring {
						flat[i] = s.Flat(x)
					}
					odd = odd != holds(flat, s.Flat(q))
				}
				in = in || odd
			}
			if in != (int(c.Site) == best) {
				t.Fatalf("%s: %v is nearest to %d; in the outline of %d: %t", at, q, best, c.Site, in)
			}
		}
		if best >= 0 {
			found := false
			for _, c := range s.Pieces {
				found = found || int(c.Site) == best
			}
			if !found {
				t.Fatalf("%s: %v is nearest to %d, which has no polygon", at, q, best)
			}
		}
	}
}

// The cubes of a lattice: at a level of faces the layer above is cut, at the ceiling the
// last one.
func TestLattice(t *testing.T) {
	var sites []Vec
	for z := range 3 {
		for y := range 4 {
			for x := range 5 {
				sites = append(sites, Vec{X: 0.5 + float64(x), Y: 0.5 + float64(y), Z: 0.5 + float64(z)})
			}
		}
	}
	pillar := made(solid.NewPrism([]Vec2{{}, {X: 5}, {X: 5, Y: 4}, {Y: 4}}, [][]Vec2{{{X: 1, Y: 1}, {X: 2, Y: 1}, {X: 2, Y: 2}, {X: 1, Y: 2}}}, 0, 3))
	for _, body := range []solid.Solid{box(0, 0, 0, 5, 4, 3), pillar} {
		o := voronoi.Options{Solid: body}
		if body == solid.Solid(pillar) {
			o.Tolerance = 0
		}
		d := diagram(t, sites, o)
		for _, c := range []struct {
			axis  int
			at    float64
			layer float64 // of the sites that are cut
			area  float64
			faces bool
			walls bool
		}{
			{2, 0, 0.5, 20, false, true}, {2, 1, 1.5, 20, true, false}, {2, 2, 2.5, 20, true, false}, {2, 3, 2.5, 20, false, true}, {2, 1.25, 1.5, 20, false, false},
			{0, 0, 0.5, 12, false, true}, {0, 3, 3.5, 12, true, false}, {0, 5, 4.5, 12, false, true}, {1, 3, 3.5, 15, true, false},
		} {
			s := cut(t, d, Across(c.axis, c.at), Options{})
			want := c.area
			if body == solid.Solid(pillar) && c.axis == 2 {
				want--
			}
			if math.Abs(total(s)-want) > 1e-12 || s.InFaces != c.faces || s.InWalls != c.walls {
				t.Errorf("axis %d at %g: %.17g of %g, in faces %t, in walls %t", c.axis, c.at, total(s), want, s.InFaces, s.InWalls)
			}
			for _, p := range s.Pieces {
				x := sites[p.Site]
				if at := [3]float64{x.X, x.Y, x.Z}[c.axis]; at != c.layer || math.Abs(p.Area-1) > 1e-12 || len(p.Polygons) != 1 || len(p.Polygons[0][0]) != 4 {
					t.Errorf("axis %d at %g: site at %v has %.17g, %v", c.axis, c.at, x, p.Area, p.Polygons)
				}
				for _, corner := range p.Polygons[0][0] {
					if [3]float64{corner.X, corner.Y, corner.Z}[c.axis] != c.at {
						t.Errorf("axis %d at %g: the corner %v is off the plane", c.axis, c.at, corner)
					}
				}
			}
		}
	}
}

// A hall by hand: one site has all of it, pillar and corner taken off.
func TestOneSiteHasTheOutline(t *testing.T) {
	d := diagram(t, []Vec{{X: 1, Y: 1, Z: 1}}, voronoi.Options{Solid: hall()})
	s := cut(t, d, Across(2, 1.1), Options{})
	if len(s.Pieces) != 1 || math.Abs(s.Pieces[0].Area-67) > 1e-12 || s.Area != s.Pieces[0].Area {
		t.Fatalf("%+v, area %g", s.Pieces, s.Area)
	}
	p := s.Pieces[0].Polygons
	if len(p) != 1 || len(p[0]) != 2 || len(p[0][0]) != 6 || len(p[0][1]) != 4 {
		t.Errorf("outline %v, want six corners and a hole of four", p)
	}
	if !reflect.DeepEqual(p, s.Space) {
		t.Errorf("the outline %v is not that of the solid %v", p, s.Space)
	}
	// Where the corner is missing: x = 8 leaves 5 x 3; in the wall x = 6 the deeper part goes on
	// above, and the wall itself is what is left below.
	for at, want := range map[float64]float64{8: 15, 6: 24, 2.5: 21, 10: 15} {
		if got := total(cut(t, d, Across(0, at), Options{})); math.Abs(got-want) > 1e-12 {
			t.Errorf("x = %g: %.17g, want %g", at, got, want)
		}
	}
}

// A slab that hangs in the hall: its upper face is floor, its lower face ceiling.
func TestHollow(t *testing.T) {
	d := diagram(t, []Vec{{X: 1, Y: 1, Z: 1}, {X: 8, Y: 2, Z: 2.5}}, voronoi.Options{Solid: hollow(t)})
	for at, want := range map[float64]float64{0.5: 67, 1: 67, 1.5: 58, 2: 67, 2.5: 67} {
		if got := total(cut(t, d, Across(2, at), Options{})); math.Abs(got-want) > 1e-12*67 {
			t.Errorf("z = %g: %.17g, want %g", at, got, want)
		}
	}
}

// Law 2: areas over all heights are volumes (the midpoint rule, whose error falls with the
// square of the step).
func TestIntegral(t *testing.T) {
	r := rand.New(rand.NewPCG(8, 2))
	body := hall()
	sites := randomIn(body, r, 12)
	d := diagram(t, sites, voronoi.Options{Solid: body})
	m, err := d.Measure(context.Background(), voronoi.Volume, nil)
	if err != nil {
		t.Fatal(err)
	}
	const steps = 400
	got := make([]float64, len(sites))
	for i := range steps {
		s, err := Cut(context.Background(), d, Across(2, 3*(float64(i)+0.5)/steps), nil, Options{})
		if err != nil {
			t.Fatal(err)
		}
		for _, p := range s.Pieces {
			got[p.Site] += p.Area * 3 / steps
		}
	}
	for i, v := range m.Volume {
		if math.Abs(got[i]-v) > 2e-4*v+1e-4 {
			t.Errorf("site %d: %g, volume %g", i, got[i], v)
		}
	}
}

// Parts of the hall add up to it, and a plane in the side of one counts to the one above.
func TestWithin(t *testing.T) {
	r := rand.New(rand.NewPCG(8, 3))
	body := hall()
	d := diagram(t, randomIn(body, r, 20), voronoi.Options{Solid: body})
	lower, upper := box(0, 0, 0, 10, 8, 1.5), box(0, 0, 1.5, 10, 8, 3)
	for z, want := range map[float64][2]float64{0: {67, 0}, 1: {67, 0}, 1.5: {0, 67}, 3: {0, 67}} {
		s := cut(t, d, Across(2, z), Options{Within: []solid.Solid{lower, upper}})
		var got [2]float64
		for _, p := range s.Pieces {
			got[p.Part] += p.Area
		}
		if math.Abs(got[0]-want[0]) > 1e-11 || math.Abs(got[1]-want[1]) > 1e-11 {
			t.Errorf("z = %g: %v, want %v", z, got, want)
		}
	}
}

func TestOpen(t *testing.T) {
	sites := []Vec{{X: 0}, {X: 4}, {X: 2, Y: 4}, {X: 2, Y: 1.5, Z: 3}, {X: 2, Y: 1.5, Z: -3}, {X: 2, Y: 1.5}, {X: 2, Y: -2}}
	d := diagram(t, sites, voronoi.Options{})
	s := cut(t, d, Across(2, 0), Options{})
	if !math.IsInf(s.Area, 1) || s.Space != nil {
		t.Errorf("area %g, space %v", s.Area, s.Space)
	}
	open := map[int32]bool{}
	for _, p := range s.Pieces {
		open[p.Site] = p.Open
		if p.Open != math.IsInf(p.Area, 1) || p.Open == (p.Polygons != nil) {
			t.Errorf("%+v", p)
		}
	}
	if want := map[int32]bool{0: true, 1: true, 2: true, 5: false, 6: true}; !reflect.DeepEqual(open, want) {
		t.Errorf("open %v, want %v", open, want)
	}
}

// Far from the origin, and turned over, a section is the same; so are threads.
func TestFarAndThreads(t *testing.T) {
	r := rand.New(rand.NewPCG(8, 4))
	near := hall()
	sites := randomIn(near, r, 200)
	for i := range sites { // a shift is exact then
		sites[i] = Vec{X: math.Round(sites[i].X*1024) / 1024, Y: math.Round(sites[i].Y*1024) / 1024, Z: math.Round(sites[i].Z*1024) / 1024}
	}
	by := Vec{X: 524288, Y: 5767168, Z: 128}
	far := made(solid.NewPrism([]Vec2{{X: by.X, Y: by.Y}, {X: by.X + 10, Y: by.Y}, {X: by.X + 10, Y: by.Y + 5}, {X: by.X + 6, Y: by.Y + 5}, {X: by.X + 6, Y: by.Y + 8}, {X: by.X, Y: by.Y + 8}},
		[][]Vec2{{{X: by.X + 2, Y: by.Y + 2}, {X: by.X + 3, Y: by.Y + 2}, {X: by.X + 3, Y: by.Y + 3}, {X: by.X + 2, Y: by.Y + 3}}}, by.Z, by.Z+3))
	moved := make([]Vec, len(sites))
	for i, p := range sites {
		moved[i] = add(p, by)
	}
	a, b := diagram(t, sites, voronoi.Options{Solid: near}), diagram(t, moved, voronoi.Options{Solid: far})
	for _, normal := range []Vec{{Z: 1}, {Z: -1}, {X: 1, Y: 2, Z: 3}} {
		at := Vec{X: 5, Y: 4, Z: 1.25}
		one := cut(t, a, Plane{At: at, Normal: normal}, Options{Threads: 1})
		if two := cut(t, a, Plane{At: at, Normal: normal}, Options{Threads: 3}); !reflect.DeepEqual(one, two) {
			t.Errorf("three threads give another section across %v", normal)
		}
		over := cut(t, a, Plane{At: at, Normal: scale(-2, normal)}, Options{})
		there := cut(t, b, Plane{At: add(at, by), Normal: normal}, Options{})
		for name, other := range map[string]*Section{"turned over": over, "far away": there} {
			if len(other.Pieces) != len(one.Pieces) {
				t.Fatalf("%s: %d pieces, not %d", name, len(other.Pieces), len(one.Pieces))
			}
			for i := range one.Pieces {
				if x, y := one.Pieces[i], other.Pieces[i]; x.Site != y.Site || math.Abs(x.Area-y.Area) > 1e-7*max(1, x.Area) {
					t.Errorf("%s: %v and %v", name, x, y)
				}
			}
		}
	}
}

func TestErrors(t *testing.T) {
	d := diagram(t, []Vec{{}}, voronoi.Options{})
	for _, p := range []Plane{{}, {Normal: Vec{X: math.NaN()}}, {At: Vec{X: math.Inf(1)}, Normal: Vec{X: 1}}, {Normal: Vec{X: math.Inf(1)}}} {
		if _, err := Cut(context.Background(), d, p, nil, Options{}); err != ErrPlane {
			t.Errorf("%v: %v", p, err)
		}
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := Cut(ctx, d, Across(0, 0), nil, Options{}); err != context.Canceled {
		t.Errorf("cancelled: %v", err)
	}
}

func BenchmarkCut(b *testing.B) {
	r := rand.New(rand.NewPCG(8, 5))
	body := hall()
	d := diagram(b, randomIn(body, r, 10_000), voronoi.Options{Solid: body})
	for b.Loop() {
		if _, err := Cut(context.Background(), d, Across(2, 1.1), nil, Options{}); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(b.Elapsed().Microseconds())/float64(b.N)/10_000, "µs/site")
}
