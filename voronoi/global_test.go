package voronoi

import (
	"context"
	"fmt"
	"math"
	"testing"

	"pgregory.net/rapid"

	"nearcell/voronoi/delaunay"
)

// measureBoth measures all cells in both ways.
func measureBoth(t testing.TB, d *Diagram, want Measures) (single, whole *Cells) {
	t.Helper()
	ctx := context.Background()
	r, err := d.request(nil)
	if err != nil {
		t.Fatal(err)
	}
	g, err := d.dual(ctx)
	if err != nil {
		t.Fatal(err)
	}
	y, err := g.tally(ctx, want, d.threads, nil)
	if err != nil {
		t.Fatal(err)
	}
	single, whole = newCells(want, r.sites), newCells(want, r.sites)
	b := d.builder()
	defer d.free(b)
	for k, c := range r.cells {
		row := r.rows[r.start[k]]
		b.use(nil, nil)
		if err := b.measure(c, want, single, row); err != nil {
			t.Fatal(err)
		}
		b.use(g, y)
		if err := b.measure(c, want, whole, row); err != nil {
			t.Fatal(err)
		}
	}
	return single, whole
}

// Law 9: both ways make the same cells.
func TestLaw9BothWays(t *testing.T) {
	for name, sites := range sets(1000) {
		for _, o := range []Options{{Solid: unitBox}, {}} {
			d := diagram(t, sites, o)
			if d.facts.Dimension < 3 {
				continue
			}
			a, b := measureBoth(t, d, All)
			compareCells(t, fmt.Sprint(name, ", in a box: ", o.Solid != nil), d, a, b, leeway{})
		}
	}
}

// leeway is what two ways are allowed beyond the ordinary: so many times the
// difference, and other counts.
type leeway struct {
	times  float64
	counts bool
}

func compareCells(t *testing.T, name string, d *Diagram, a, b *Cells, allow leeway) {
	t.Helper()
	more := max(1, allow.times)
	worst := map[string]float64{}
	bad := 0
	for i := range a.Volume {
		if a.Volume[i] == 0 && b.Volume[i] == 0 {
			continue
		}
		same := func(what string, x, y, unit, tol float64) {
			if x == y {
				return
			}
			e := math.Abs(x-y) / unit
			worst[what] = max(worst[what], e)
			if !(e <= tol*more) {
				if bad++; bad < 10 {
					t.Errorf("%s: %s of %d is %.17g one by one, else %.17g", name, what, i, x, y)
				}
			}
		}
		same("volume", a.Volume[i], b.Volume[i], a.Volume[i], 1e-11)
		same("area", a.Area[i], b.Area[i], a.Area[i], 1e-11)
		same("wall area", a.WallArea[i], b.WallArea[i], a.Area[i], 1e-11)
		same("farthest", a.Farthest[i], b.Farthest[i], a.Farthest[i], 1e-9)
		same("nearest face", a.NearestFace[i], b.NearestFace[i], 1, 0)
		same("centroid", length(sub(a.Centroid[i], b.Centroid[i])), 0, a.Farthest[i], 1e-10)
		if allow.counts {
			continue
		}
		if a.Faces[i] != b.Faces[i] || a.Edges[i] != b.Edges[i] || a.Vertices[i] != b.Vertices[i] || a.Shaped[i] != b.Shaped[i] ||
			a.Neighbours[i] != b.Neighbours[i] || a.Bounded[i] != b.Bounded[i] || a.Clipped[i] != b.Clipped[i] || a.HasCentroid[i] != b.HasCentroid[i] {
			if bad++; bad < 10 {
				t.Errorf("%s: cell %d is %s one by one, else %s", name, i, cellText(a, i), cellText(b, i))
			}
		}
	}
	t.Log(name, len(a.Volume), worst)
}

// Law 9 in solids of every kind, and where it is hard: lattices turned and jittered,
// sites on walls and outside within the tolerance, world coordinates, needles, far
// clusters, cells that reach far.
func TestLaw9InSolids(t *testing.T) {
	for name, room := range rooms(t) {
		for kind, sites := range map[string][]Vec{"uniform": random(800, 21), "lattice": grid(9), "clustered": clustered(600, 22), "sheet": sheet(600, 23)} {
			d := diagram(t, sites, Options{Solid: room})
			a, b := measureBoth(t, d, All)
			compareCells(t, name+", "+kind, d, a, b, leeway{})
			if !d.convex && kind == "uniform" {
				g, _ := d.dual(context.Background())
				w, whole := newWalker(g), 0
				u := d.builder()
				u.use(g, nil)
				for p := range g.cell[1:] {
					w = u.walker
					w.star(int32(p + 1))
					if w.sound() && u.inSolid(add(w.own, d.origin)) {
						whole++
					}
				}
				if whole < 30 {
					t.Errorf("%s: only %d cells are taken whole", name, whole)
				}
			}
		}
	}
}

func TestLaw9HardSets(t *testing.T) {
	for name, k := range hardSets() {
		for _, o := range []Options{{Solid: k.room, Tolerance: k.tolerance}, {}} {
			if k.closed && o.Solid == nil {
				continue
			}
			d := diagram(t, k.sites, o)
			a, b := measureBoth(t, d, All)
			compareCells(t, fmt.Sprint(name, ", in a box: ", o.Solid != nil), d, a, b, k.allow)
		}
	}
}

type hardSet struct {
	sites     []Vec
	room      brick
	tolerance float64
	allow     leeway
	// closed sets are compared in the box only.
	closed bool
}

func hardSets() map[string]hardSet {
	const n = 600
	jittered := grid(8)
	for i, p := range random(len(jittered), 61) {
		jittered[i] = add(jittered[i], v(1e-9*p.X, 1e-9*p.Y, 1e-9*p.Z))
	}
	onWalls := random(n, 62)
	for i := range onWalls {
		p := &onWalls[i]
		switch i % 5 {
		case 0:
			p.X = 0
		case 1:
			p.Y = 1
		case 2:
			p.X, p.Z = 1, 0
		}
	}
	outside := random(n, 63)
	for i := range outside {
		if i%7 == 0 {
			outside[i].Z = 1.01
		}
	}
	world := random(n, 64)
	for i, p := range world {
		world[i] = v(math.Round(p.X*1e3)/1e3+512345, math.Round(p.Y*1e3)/1e3+5312345, math.Round(p.Z*1e3)/1e3+412)
	}
	thin := random(n, 65)
	for i := range thin {
		thin[i].Y, thin[i].Z = 0.5+float64(1e-3*thin[i].Y), 0.5+float64(1e-3*thin[i].Z)
	}
	far := random(n, 66)
	for i := range far {
		p := far[i]
		far[i] = v(0.05+float64(1e-4*p.X), 0.05+float64(1e-4*p.Y), 0.05+float64(1e-4*p.Z))
		if i%2 == 0 {
			far[i] = add(far[i], v(0.9, 0.9, 0.9))
		}
	}
	// Two sites 10^-23 apart make tetrahedra whose centres two words do not hold.
	twins := append(random(n, 68), v(1.0/3, 0, 2.0/3), v(1.0/3, 0x1p-76, 2.0/3), v(0.25, 0.5, 0.5), v(0.25+0x1p-52, 0.5, 0.5))
	return map[string]hardSet{
		// Which of two such sites a face belongs to is rounding.
		"twins":            {sites: twins, room: unitBox, allow: leeway{counts: true}, closed: true},
		"jittered lattice": {sites: jittered, room: unitBox},
		"on walls":         {sites: onWalls, room: unitBox},
		"outside":          {sites: outside, room: unitBox, tolerance: 0.02},
		"world":            {sites: world, room: brick{v(512345, 5312345, 412), v(512346, 5312346, 413)}},
		"thin":             {sites: thin, room: unitBox},
		// One by one, cells of 1e-5 are cut out of a box of 1 and lose five digits.
		"far clusters": {sites: far, room: unitBox, allow: leeway{times: 10}},
		// Without a box, strips without width between unbounded cells of mirrored sites
		// are told from faces by rounding in both ways.
		"diagonal planes": {sites: fillUnit(n), room: unitBox, closed: true},
	}
}

// fillUnit are sites and their mirror images in the plane x = y, so that a face passes
// through two corners and two edges of the unit cube.
func fillUnit(n int) []Vec {
	var sites []Vec
	for _, p := range random(n/2, 67) {
		sites = append(sites, p, v(p.Y, p.X, p.Z))
	}
	return sites
}

// Law 9: contacts, too.
func TestLaw9Contacts(t *testing.T) {
	ctx := context.Background()
	for name, room := range rooms(t) {
		sites := append(random(500, 71), grid(5)...)
		d := diagram(t, sites, Options{Solid: room})
		g, err := d.dual(ctx)
		if err != nil {
			t.Fatal(err)
		}
		b := d.builder()
		for c := range int32(d.tree.Len()) {
			b.use(nil, nil)
			one, err := b.shares(c)
			if err != nil {
				t.Fatal(err)
			}
			want := map[int32]share{}
			for _, s := range one {
				want[s.other] = s
			}
			b.use(g, nil)
			other, err := b.shares(c)
			if err != nil {
				t.Fatal(err)
			}
			if len(other) != len(want) {
				t.Fatalf("%s: cell %d has %d contacts one by one, else %d", name, c, len(want), len(other))
			}
			for _, s := range other {
				w, ok := want[s.other]
				if !ok || math.Abs(s.area-w.area) > 1e-11 || length(sub(s.middle, w.middle)) > 2e-8 {
					t.Errorf("%s: %d and %d touch with %v one by one, else %v", name, c, s.other, w, s)
				}
			}
		}
	}
}

// Law 5 for the tetrahedralisation: its numbering differs with the number of threads,
// the cells do not. The build inserts by several threads from some thousand sites.
func TestLaw5WholeThreads(t *testing.T) {
	for name, sites := range map[string][]Vec{"uniform": random(12000, 81), "sheet": sheet(12000, 82), "lattice": grid(22)} {
		for _, o := range []Options{{Solid: unitBox}, {}} {
			o.Threads = 1
			one := diagram(t, sites, o)
			if one.Cost(All, -1).OneByOne {
				t.Fatalf("%s: one by one", name)
			}
			want := measure(t, one, All)
			o.Threads = 4
			d := diagram(t, sites, o)
			got := measure(t, d, All)
			for i := range sites {
				if !sameCell(got, i, want, i) {
					t.Fatalf("%s: site %d with four threads is %s, with one %s", name, i, cellText(got, i), cellText(want, i))
				}
			}
		}
	}
}

// CellsInBox is Measure without the search.
func TestCellsInBox(t *testing.T) {
	sites := append(random(3000, 91), random(3000, 91)[:10]...)
	tets, err := delaunay.Build(context.Background(), sites, delaunay.Options{})
	if err != nil {
		t.Fatal(err)
	}
	d := diagram(t, sites, Options{Solid: unitBox})
	want := measure(t, d, All)
	for _, threads := range []int{1, 3} {
		got, err := CellsInBox(context.Background(), tets, unitBox.lo, unitBox.hi, All, threads)
		if err != nil {
			t.Fatal(err)
		}
		if got.Faces != nil {
			t.Error("faces are counted")
		}
		for i := range sites {
			if i >= 3000 {
				if got.Inside[i] || got.Volume[i] != 0 {
					t.Errorf("site %d repeats another and has a cell", i)
				}
				continue
			}
			near(t, "volume", got.Volume[i]/want.Volume[i], 1, 1e-11)
			near(t, "area", got.Area[i]/want.Area[i], 1, 1e-11)
			near(t, "walls", got.WallArea[i], want.WallArea[i], 1e-12)
			near(t, "centroid", length(sub(got.Centroid[i], want.Centroid[i])), 0, 1e-12)
			if got.Neighbours[i] != want.Neighbours[i] || got.Clipped[i] != want.Clipped[i] || got.NearestFace[i] != want.NearestFace[i] {
				t.Errorf("site %d: %d neighbours, clipped %v", i, got.Neighbours[i], got.Clipped[i])
			}
		}
	}
	stopped, stop := context.WithCancel(context.Background())
	stop()
	if _, err := CellsInBox(stopped, tets, unitBox.lo, unitBox.hi, Volume, 2); err == nil {
		t.Error("a context that has ended stops nothing")
	}
}

// Law 9 on small sets of every kind: a few steps of a lattice, so that sites meet,
// lie in the walls and on common spheres.
func TestLaw9Small(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		steps := rapid.IntRange(1, 6).Draw(r, "steps")
		at := func() float64 { return float64(rapid.IntRange(0, steps).Draw(r, "at")) / float64(steps) }
		sites := make([]Vec, rapid.IntRange(5, 40).Draw(r, "n"))
		jitter := rapid.SampledFrom([]float64{0, 1e-3, 1e-6, 1e-9}).Draw(r, "jitter")
		for i := range sites {
			sites[i] = v(at(), at(), at())
			if jitter > 0 {
				move := func(x float64) float64 {
					return min(1, max(0, x+float64(jitter*rapid.Float64Range(-1, 1).Draw(r, "move"))))
				}
				sites[i] = v(move(sites[i].X), move(sites[i].Y), move(sites[i].Z))
			}
		}
		d := diagram(t, sites, Options{Solid: unitBox})
		if d.facts.Dimension < 3 {
			return
		}
		a, b := measureBoth(t, d, All&^Faces)
		var sum Sum
		for i := range sites {
			sum.Add(b.Volume[i])
			// One by one, cells begin as the box, whose rounding stays.
			if e := math.Abs(a.Volume[i] - b.Volume[i]); e > 1e-11*a.Volume[i]+1e-14 {
				r.Fatalf("volume of %d is %v one by one, else %v; sites %v", i, a.Volume[i], b.Volume[i], sites)
			}
			if e := math.Abs(a.Area[i] - b.Area[i]); e > 1e-10*a.Area[i]+1e-14 {
				r.Fatalf("area of %d is %v one by one, else %v; sites %v", i, a.Area[i], b.Area[i], sites)
			}
			if e := math.Abs(a.WallArea[i] - b.WallArea[i]); e > 1e-10*a.Area[i]+1e-14 {
				r.Fatalf("walls of %d are %v one by one, else %v; sites %v", i, a.WallArea[i], b.WallArea[i], sites)
			}
		}
		near(t, "all volumes", sum.Value(), 1, 1e-11)
	})
}

// The sums over the triangles are the same to the last bit for any number of goroutines
// with tallies of their own, and in any order of the sites.
func TestTalliesHaveNoOrder(t *testing.T) {
	sites := append(random(4000, 95), clustered(2000, 96)...)
	wants := Volume | Area | WallArea | Centroid | Farthest | NearestFace
	for _, o := range []Options{{Solid: unitBox}, {}} {
		o.Threads = 1
		first := measure(t, diagram(t, sites, o), wants)
		turned := make([]Vec, len(sites))
		for i, s := range sites {
			turned[len(sites)-1-i] = s
		}
		for _, threads := range []int{1, 2, 3, 8} {
			o.Threads = threads
			d := diagram(t, turned, o)
			if g, err := d.choose(context.Background(), wants, len(sites)); err != nil || g == nil {
				t.Fatalf("cells are made one by one, %v", err)
			}
			c := measure(t, d, wants)
			for i := range sites {
				j := len(sites) - 1 - i
				if first.Volume[i] != c.Volume[j] || first.Area[i] != c.Area[j] || first.WallArea[i] != c.WallArea[j] ||
					first.Centroid[i] != c.Centroid[j] || first.Farthest[i] != c.Farthest[j] || first.NearestFace[i] != c.NearestFace[j] {
					t.Fatalf("%d threads, in a box: %v: site %d has another volume, %v, than %v, or another measure",
						threads, o.Solid != nil, i, c.Volume[j], first.Volume[i])
				}
			}
		}
	}
}

// Nearly all cells of ordinary sets are had from the triangles, in a box and without.
func TestTalliesServeNearlyAll(t *testing.T) {
	for name, sites := range map[string][]Vec{"uniform": random(3000, 97), "clustered": clustered(3000, 98), "lattice": grid(12), "sheet": sheet(3000, 99)} {
		d := diagram(t, sites, Options{Solid: unitBox})
		g, err := d.dual(context.Background())
		if err != nil {
			t.Fatal(err)
		}
		s, err := g.tally(context.Background(), Volume, 2, nil)
		if err != nil {
			t.Fatal(err)
		}
		left := 0
		for _, p := range g.point {
			if !s.good(p) {
				left++
			}
		}
		t.Logf("%s: %d of %d cells are left to their faces", name, left, len(g.point))
		if left > len(g.point)/20 {
			t.Errorf("%s: %d of %d cells are left to their faces", name, left, len(g.point))
		}
	}
}
