package overlay_test

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"nearcell/voronoi"
	"nearcell/voronoi/overlay"
	"nearcell/voronoi/solid"
	"nearcell/voronoi/solid/mesh"
)

type vec = voronoi.Vec

func random(seed uint64, n int, lo, hi vec) []vec {
	r := rand.New(rand.NewPCG(seed, 7))
	list := make([]vec, n)
	for i := range list {
		list[i] = vec{X: lo.X + (hi.X-lo.X)*r.Float64(), Y: lo.Y + (hi.Y-lo.Y)*r.Float64(), Z: lo.Z + (hi.Z-lo.Z)*r.Float64()}
	}
	return list
}

func box(t testing.TB, lo, hi vec) solid.Solid {
	t.Helper()
	s, err := solid.NewBox(lo, hi)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// lShape is 6 by 4 by 2 less its upper right quarter of 3 by 2: volume 36.
func lShape(t testing.TB) solid.Solid {
	t.Helper()
	s, err := solid.NewPrism([]solid.Vec2{{X: 0, Y: 0}, {X: 6, Y: 0}, {X: 6, Y: 2}, {X: 3, Y: 2}, {X: 3, Y: 4}, {X: 0, Y: 4}}, nil, 0, 2)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

func diagram(t testing.TB, sites []vec, o voronoi.Options) *voronoi.Diagram {
	t.Helper()
	d, err := voronoi.New(sites, o)
	if err != nil {
		t.Fatal(err)
	}
	return d
}

func pieces(t testing.TB, a, b *voronoi.Diagram, o overlay.Options) [][]overlay.Piece {
	t.Helper()
	list, err := overlay.Pieces(context.Background(), a, b, nil, o)
	if err != nil {
		t.Fatal(err)
	}
	return list
}

func volumes(t testing.TB, d *voronoi.Diagram) []float64 {
	t.Helper()
	c, err := d.Measure(context.Background(), voronoi.Volume, nil)
	if err != nil {
		t.Fatal(err)
	}
	return c.Volume
}

// checkSums asserts laws 1 and 2 for diagrams in one solid.
func checkSums(t *testing.T, a, b *voronoi.Diagram, list [][]overlay.Piece) {
	t.Helper()
	rows, columns := make([]voronoi.Sum, a.Len()), make([]voronoi.Sum, b.Len())
	for i, pieces := range list {
		if a.Representative(int32(i)) != int32(i) {
			continue // its list is that of the first at its place
		}
		for _, p := range pieces {
			rows[p.A].Add(p.Volume)
			columns[p.B].Add(p.Volume)
		}
	}
	whole := a.Facts().Volume
	compare := func(d *voronoi.Diagram, sums []voronoi.Sum, name string) {
		for i, v := range volumes(t, d) {
			if d.Representative(int32(i)) != int32(i) {
				continue
			}
			if got := sums[i].Value(); math.Abs(got-v) > 1e-12*(v+1e-3*whole) {
				t.Errorf("%s %d: the pieces add up to %.17g, the cell is %.17g", name, i, got, v)
			}
		}
	}
	compare(a, rows, "row")
	compare(b, columns, "column")
}

func TestSums(t *testing.T) {
	lo, hi := vec{}, vec{X: 6, Y: 4, Z: 2}
	for _, c := range []struct {
		name  string
		solid solid.Solid
		s     vec
	}{{"box", box(t, lo, hi), vec{}}, {"L", lShape(t), vec{}}, {"stretched box", box(t, lo, hi), vec{X: 1, Y: 1, Z: 5}},
		{"stretched L", lShape(t), vec{X: 1, Y: 2, Z: 4}}} {
		t.Run(c.name, func(t *testing.T) {
			for seed := range uint64(4) {
				o := voronoi.Options{Solid: c.solid, Stretch: c.s}
				from, to := random(seed, 60, lo, hi), random(seed+100, 75, lo, hi)
				copy(to, from[:10]) // ten sites that both have
				to[11] = to[12]     // two in one place
				a, b := diagram(t, from, o), diagram(t, to, o)
				list := pieces(t, a, b, overlay.Options{})
				checkSums(t, a, b, list)
				checkTransposed(t, a, list, pieces(t, b, a, overlay.Options{}))
			}
		})
	}
}

// checkTransposed asserts law 4.
func checkTransposed(t *testing.T, a *voronoi.Diagram, list, back [][]overlay.Piece) {
	t.Helper()
	found := map[[2]int32]float64{}
	n := 0
	for i, pieces := range back {
		for _, p := range pieces {
			if int32(i) == p.A {
				found[[2]int32{p.B, p.A}] = p.Volume
				n++
			}
		}
	}
	whole := a.Facts().Volume
	for _, pieces := range list {
		for _, p := range pieces {
			v, there := found[[2]int32{p.A, p.B}]
			if !there || math.Abs(v-p.Volume) > 1e-14*whole {
				t.Errorf("piece %d, %d is %g one way and %g (%v) the other", p.A, p.B, p.Volume, v, there)
			}
		}
	}
}

func TestOverItself(t *testing.T) {
	lo, hi := vec{}, vec{X: 6, Y: 4, Z: 2}
	var lattice []vec
	for i := range 5 {
		for j := range 3 {
			for k := range 2 {
				lattice = append(lattice, vec{X: 0.5 + float64(i), Y: 0.7 + float64(j), Z: 0.5 + float64(k)})
			}
		}
	}
	for name, sites := range map[string][]vec{"random": random(3, 200, lo, hi), "lattice": lattice, "one": {{X: 1, Y: 1, Z: 1}}, "two": {{X: 1, Y: 1, Z: 1}, {X: 2, Y: 1, Z: 1}}} {
		for _, s := range []solid.Solid{box(t, lo, hi), lShape(t)} {
			d := diagram(t, sites, voronoi.Options{Solid: s})
			v := volumes(t, d)
			for i, list := range pieces(t, d, d, overlay.Options{}) {
				if v[i] == 0 && len(list) == 0 { // outside the L
					continue
				}
				if len(list) != 1 || list[0].B != int32(i) || math.Abs(list[0].Volume-v[i]) > 1e-13*v[i] {
					t.Errorf("%s in a %s: cell %d over itself is %v, its volume %g", name, s.Facts().Kind, i, list, v[i])
				}
			}
		}
	}
}

// TestByHand: halves of a box across x against thirds of it across y.
func TestByHand(t *testing.T) {
	s := voronoi.Options{Solid: box(t, vec{}, vec{X: 6, Y: 6, Z: 1})}
	a := diagram(t, []vec{{X: 1.5, Y: 3, Z: 0.5}, {X: 2.5, Y: 3, Z: 0.5}}, s) // parted at x = 2
	b := diagram(t, []vec{{X: 3, Y: 1, Z: 0.5}, {X: 3, Y: 3, Z: 0.5}, {X: 3, Y: 5, Z: 0.5}}, s)
	want := [][]overlay.Piece{{{A: 0, B: 0, Volume: 4}, {A: 0, B: 1, Volume: 4}, {A: 0, B: 2, Volume: 4}},
		{{A: 1, B: 0, Volume: 8}, {A: 1, B: 1, Volume: 8}, {A: 1, B: 2, Volume: 8}}}
	got := pieces(t, a, b, overlay.Options{})
	for i := range want {
		if !slices.EqualFunc(got[i], want[i], func(p, q overlay.Piece) bool {
			return p.A == q.A && p.B == q.B && math.Abs(p.Volume-q.Volume) < 1e-14*q.Volume
		}) {
			t.Errorf("%v, not %v", got[i], want[i])
		}
	}
}

// TestDifferentSolids: the pieces fill what the solids share, whichever of them is convex.
func TestDifferentSolids(t *testing.T) {
	lo, hi := vec{}, vec{X: 6, Y: 4, Z: 2}
	moved, err := solid.NewPrism([]solid.Vec2{{X: 1, Y: 1}, {X: 7, Y: 1}, {X: 7, Y: 3}, {X: 5, Y: 3}, {X: 5, Y: 5}, {X: 1, Y: 5}}, nil, 0.5, 3)
	if err != nil {
		t.Fatal(err)
	}
	solids := []solid.Solid{lShape(t), moved, box(t, vec{X: -1, Y: -1, Z: -1}, vec{X: 4, Y: 3, Z: 1}), box(t, lo, hi), box(t, vec{X: 9}, vec{X: 10, Y: 1, Z: 1})}
	for i, sa := range solids {
		for j, sb := range solids {
			t.Run(fmt.Sprint(i, j), func(t *testing.T) {
				alo, ahi := sa.Bounds()
				blo, bhi := sb.Bounds()
				const far = 100 // no site is left out
				a := diagram(t, random(1, 40, alo, ahi), voronoi.Options{Solid: sa, Tolerance: far})
				b := diagram(t, random(2, 50, blo, bhi), voronoi.Options{Solid: sb, Tolerance: far})
				var sum voronoi.Sum
				for _, list := range pieces(t, a, b, overlay.Options{}) {
					for _, p := range list {
						sum.Add(p.Volume)
					}
				}
				want, ok, err := solid.CommonVolume(sa, sb)
				if err != nil || !ok {
					t.Fatal(ok, err)
				}
				if math.Abs(sum.Value()-want) > 1e-11*(1+want) {
					t.Errorf("pieces of %g in what the solids share, which is %g", sum.Value(), want)
				}
			})
		}
	}
}

// TestParts: what lies in parts that fill the solid adds up to the pieces.
func TestParts(t *testing.T) {
	lo, hi := vec{}, vec{X: 6, Y: 4, Z: 2}
	s := lShape(t)
	o := voronoi.Options{Solid: s, Tolerance: 9}
	a, b := diagram(t, random(1, 30, lo, hi), o), diagram(t, random(2, 40, lo, hi), o)
	whole := map[[2]int32]float64{}
	for _, list := range pieces(t, a, b, overlay.Options{}) {
		for _, p := range list {
			whole[[2]int32{p.A, p.B}] = p.Volume
		}
	}
	lower, upper := box(t, vec{X: -1, Y: -1, Z: -1}, vec{X: 7, Y: 5, Z: 0.7}), box(t, vec{X: -1, Y: -1, Z: 0.7}, vec{X: 7, Y: 5, Z: 3})
	parts := []solid.Divided{lower.(solid.Divided), upper.(solid.Divided)}
	found := map[[2]int32]float64{}
	var under voronoi.Sum
	for _, list := range pieces(t, a, b, overlay.Options{Parts: parts}) {
		for _, p := range list {
			found[[2]int32{p.A, p.B}] += p.Volume
			if p.Part == 0 {
				under.Add(p.Volume)
			}
		}
	}
	for k, v := range whole {
		if math.Abs(found[k]-v) > 1e-12 {
			t.Errorf("pieces of %v in the parts add up to %g, not %g", k, found[k], v)
		}
	}
	if got := under.Value(); math.Abs(got-18*0.7) > 1e-11 { // the L has 18 square units
		t.Errorf("the lower part has %g, not %g", got, 18*0.7)
	}
}

// TestFewAsked: asking for some cells gives the same bits as asking for all, as does any
// number of goroutines.
func TestFewAsked(t *testing.T) {
	lo, hi := vec{}, vec{X: 6, Y: 4, Z: 2}
	from, to := random(1, 300, lo, hi), random(2, 400, lo, hi)
	var first [][]overlay.Piece
	for threads := 1; threads <= 4; threads++ {
		o := voronoi.Options{Solid: lShape(t), Threads: threads, Tolerance: 9}
		a, b := diagram(t, from, o), diagram(t, to, o)
		all := pieces(t, a, b, overlay.Options{})
		if first == nil {
			first = all
		}
		for i := range all {
			if !slices.Equal(all[i], first[i]) {
				t.Fatalf("%d goroutines: %v, not %v", threads, all[i], first[i])
			}
		}
		few, err := overlay.Pieces(context.Background(), a, b, []int32{7, 200, 7}, overlay.Options{})
		if err != nil {
			t.Fatal(err)
		}
		for k, site := range []int{7, 200, 7} {
			if len(few[k]) != len(all[site]) {
				t.Fatalf("site %d: %v of few, %v of all", site, few[k], all[site])
			}
			for i, p := range few[k] {
				if q := all[site][i]; p.B != q.B || math.Abs(p.Volume-q.Volume) > 1e-15 {
					t.Errorf("site %d: %v of few, %v of all", site, p, q)
				}
			}
		}
	}
}

func TestRefused(t *testing.T) {
	lo, hi := vec{}, vec{X: 6, Y: 4, Z: 2}
	open := diagram(t, random(1, 5, lo, hi), voronoi.Options{})
	closed := diagram(t, random(1, 5, lo, hi), voronoi.Options{Solid: box(t, lo, hi)})
	for _, c := range [][2]*voronoi.Diagram{{open, closed}, {closed, open}, {open, open}} {
		if _, err := overlay.Pieces(context.Background(), c[0], c[1], nil, overlay.Options{}); !errors.Is(err, overlay.ErrOpen) {
			t.Errorf("%v", err)
		}
	}
	ctx, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err := overlay.Pieces(ctx, closed, closed, nil, overlay.Options{}); !errors.Is(err, context.Canceled) {
		t.Errorf("%v", err)
	}
}

// Two rooms that are known by their surfaces alone share what the same rooms share that are
// known by convex parts; and rooms apart share nothing.
func TestTwoMeshes(t *testing.T) {
	prism := func(h float64, at ...solid.Vec2) solid.Solid {
		p, err := solid.NewPrism(at, nil, 0, h)
		if err != nil {
			t.Fatal(err)
		}
		return p
	}
	bare := func(s solid.Solid) solid.Solid {
		r, err := mesh.NewRegion(nil, s)
		if err != nil {
			t.Fatal(err)
		}
		return r
	}
	p := prism(3, solid.Vec2{}, solid.Vec2{X: 10}, solid.Vec2{X: 10, Y: 4}, solid.Vec2{X: 4, Y: 4}, solid.Vec2{X: 4, Y: 8}, solid.Vec2{Y: 8})
	q := prism(2, solid.Vec2{X: 2, Y: 1}, solid.Vec2{X: 12, Y: 1}, solid.Vec2{X: 12, Y: 7}, solid.Vec2{X: 6, Y: 7}, solid.Vec2{X: 6, Y: 3}, solid.Vec2{X: 2, Y: 3})
	far := prism(2, solid.Vec2{X: 20}, solid.Vec2{X: 22}, solid.Vec2{X: 22, Y: 2}, solid.Vec2{X: 21, Y: 1}, solid.Vec2{X: 20, Y: 2})
	hi := vec{X: 12, Y: 8, Z: 3}
	from, to := random(1, 30, vec{}, hi), random(2, 30, vec{}, hi)
	o := func(s solid.Solid) voronoi.Options { return voronoi.Options{Solid: s} }
	want := pieces(t, diagram(t, from, o(p)), diagram(t, to, o(q)), overlay.Options{})
	got := pieces(t, diagram(t, from, o(bare(p))), diagram(t, to, o(bare(q))), overlay.Options{})
	total := 0.0
	for s := range want {
		if len(want[s]) != len(got[s]) {
			t.Fatalf("site %d: %v of meshes, %v of prisms", s, got[s], want[s])
		}
		for i, x := range want[s] {
			if y := got[s][i]; x.B != y.B || math.Abs(x.Volume-y.Volume) > 1e-9 {
				t.Errorf("site %d: %v of meshes, %v of prisms", s, y, x)
			}
			total += x.Volume
		}
	}
	// They share 8 x 2 less 0 and the strip of 1 that lies above it, from x = 6 to 10: 16 + 4, two high.
	if math.Abs(total-2*(8*2+4*1)) > 1e-9 {
		t.Errorf("together they share %v", total)
	}
	for _, list := range pieces(t, diagram(t, from, o(bare(p))), diagram(t, []vec{{X: 20.5, Y: 0.5, Z: 1}}, o(bare(far))), overlay.Options{}) {
		if len(list) > 0 {
			t.Errorf("rooms apart share %v", list)
		}
	}
}

// TestFarCoordinates: national coordinates lose no more than their last bits.
func TestFarCoordinates(t *testing.T) {
	at := vec{X: 2_600_000, Y: 1_200_000, Z: 400}
	lo, hi := at, vec{X: at.X + 30, Y: at.Y + 20, Z: at.Z + 8}
	o := voronoi.Options{Solid: box(t, lo, hi)}
	a, b := diagram(t, random(1, 60, lo, hi), o), diagram(t, random(2, 60, lo, hi), o)
	checkSums(t, a, b, pieces(t, a, b, overlay.Options{}))
}

func BenchmarkPieces(b *testing.B) {
	for _, n := range []int{10_000, 100_000} {
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			hi := vec{X: 30, Y: 20, Z: 8}
			o := voronoi.Options{Solid: box(b, vec{}, hi)}
			from, to := random(1, n, vec{}, hi), random(2, n, vec{}, hi)
			total := 0
			for b.Loop() {
				total = 0
				for _, list := range pieces(b, diagram(b, from, o), diagram(b, to, o), overlay.Options{}) {
					total += len(list)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Microseconds())/float64(b.N)/float64(n), "µs/cell")
			b.ReportMetric(float64(total)/float64(n), "pieces/cell")
		})
	}
}
