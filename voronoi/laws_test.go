package voronoi

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"nearcell/voronoi/polyhedron"
)

// sets are the kinds of campaigns that the laws are held against.
func sets(n int) map[string][]Vec {
	k := int(math.Cbrt(float64(n)))
	walk := sheet(n, 4)
	line := random(n/4, 5)
	for i := range line {
		line[i] = v(line[i].X, 0.25, 0.75)
	}
	coarse := random(n, 6)
	for i, p := range coarse {
		coarse[i] = v(math.Round(p.X*6)/6, math.Round(p.Y*6)/6, math.Round(p.Z*6)/6)
	}
	sphere := random(n, 7)
	for i, p := range sphere {
		r := sub(p, v(0.5, 0.5, 0.5))
		l := 0.4 / length(r)
		sphere[i] = v(0.5+l*r.X, 0.5+l*r.Y, 0.5+l*r.Z)
	}
	mirrored := random(n/2, 8)
	for _, p := range mirrored[:n/2] {
		mirrored = append(mirrored, v(1-p.X, p.Y, p.Z))
	}
	return map[string][]Vec{
		"uniform": random(n, 1), "clustered": clustered(n, 2), "lattice": grid(k), "sheet": walk,
		"line": line, "coarse": coarse, "sphere": sphere, "mirrored": mirrored,
	}
}

// bruteForce cuts the cell of site i by the bisectors with all sites elsewhere, in
// the order of the input. (The same plane twice would split a face by rounding.)
func bruteForce(sites []Vec, i int, start func(*polyhedron.Cell, Vec)) *polyhedron.Cell {
	var c polyhedron.Cell
	p := sites[i]
	start(&c, p)
	done := map[Vec]bool{p: true}
	for j, q := range sites {
		if !done[q] {
			done[q] = true
			n := sub(q, p)
			c.Bisect(n, lostBySub(q, p, n), int32(j))
		}
	}
	return &c
}

func startInBox(c *polyhedron.Cell, p Vec) {
	c.SetBox(sub(unitBox.lo, p), sub(unitBox.hi, p), [6]int32{-1, -2, -3, -4, -5, -6})
}

// Law 1: the volumes add up to the solid, the wall areas to its surface.
func TestLaw1Sums(t *testing.T) {
	for name, sites := range sets(2000) {
		d := diagram(t, sites, Options{Solid: unitBox})
		c := measure(t, d, Volume|WallArea|Area|Faces|Neighbours)
		for i := range c.Volume { // equal sites share one cell
			c.Volume[i] /= float64(c.Multiplicity[i])
			c.WallArea[i] /= float64(c.Multiplicity[i])
		}
		near(t, name+": volumes", Total(c.Volume), 1, 1e-12)
		near(t, name+": walls", Total(c.WallArea), 6, 6e-12)
	}
}

// Law 2: contacts are symmetric to the last bit, whichever sites are asked for,
// and are what the cells say: their areas and those of the walls are the surface.
func TestLaw2Contacts(t *testing.T) {
	ctx := context.Background()
	for name, sites := range sets(300) {
		d := diagram(t, sites, Options{Solid: unitBox})
		c := measure(t, d, Area|WallArea|Neighbours)
		type pair struct{ a, b int32 }
		all := map[pair]Contact{}
		rank := int32(-1)
		err := d.Contacts(ctx, nil, func(site int32, contacts []Contact) error {
			if site != rank+1 {
				t.Fatalf("%s: site %d after %d", name, site, rank)
			}
			rank = site
			sum := c.WallArea[site]
			for _, k := range contacts {
				all[pair{site, k.Other}] = k
				sum += k.Area
			}
			near(t, name+": surface", sum, c.Area[site], 1e-11)
			if len(contacts) != int(c.Neighbours[site]) {
				t.Errorf("%s: site %d has %d contacts and %d neighbours", name, site, len(contacts), c.Neighbours[site])
			}
			return nil
		})
		if err != nil {
			t.Fatal(err)
		}
		for p, k := range all {
			if d.facts.Dimension == 3 && len(d.facts.Groups) == 0 {
				back, ok := all[pair{p.b, p.a}]
				if !ok || back.Area != k.Area || back.Distance != k.Distance || back.Middle != k.Middle {
					t.Errorf("%s: %v is %v there and %v back", name, p, k, back)
				}
			}
		}
		some := []int32{17, 3, 3, 40}
		i := 0
		err = d.Contacts(ctx, some, func(site int32, contacts []Contact) error {
			if site != some[i] {
				t.Errorf("%s: site %d in place of %d", name, site, some[i])
			}
			i++
			for _, k := range contacts {
				if all[pair{site, k.Other}] != k {
					t.Errorf("%s: %d-%d asked for alone is %v, else %v", name, site, k.Other, k, all[pair{site, k.Other}])
				}
			}
			if len(contacts) != int(c.Neighbours[site]) {
				t.Errorf("%s: %d contacts, %d neighbours", name, len(contacts), c.Neighbours[site])
			}
			return nil
		})
		if err != nil || i != len(some) {
			t.Errorf("%s: %d calls, %v", name, i, err)
		}
	}
}

// Law 3: every cell is a closed polyhedron.
func TestLaw3Closed(t *testing.T) {
	for name, sites := range sets(400) {
		for _, o := range []Options{{Solid: unitBox}, {}} {
			d := diagram(t, sites, o)
			b := d.builder()
			for i := range int32(d.tree.Len()) {
				p := d.tree.Point(i)
				b.build(&b.cell, p, add(p, d.origin), i)
				if err := b.cell.Validate(); err != nil {
					t.Fatalf("%s, in a solid: %v, cell %d: %v", name, o.Solid != nil, i, err)
				}
			}
		}
	}
}

// Law 4: the cell is the one that the half-spaces of all other sites leave.
func TestLaw4BruteForce(t *testing.T) {
	for name, sites := range sets(300) {
		d := diagram(t, sites, Options{Solid: unitBox})
		c := measure(t, d, All)
		for i := 0; i < len(sites); i += 3 {
			want := bruteForce(sites, i, startInBox)
			near(t, fmt.Sprintf("%s: volume of %d", name, i), c.Volume[i], want.Volume(), 1e-13)
			near(t, fmt.Sprintf("%s: farthest of %d", name, i), c.Farthest[i], want.Farthest(), 1e-12)
			s := want.Shape()
			if int(c.Faces[i]) != s.Faces() || int(c.Edges[i]) != s.Edges || int(c.Vertices[i]) != s.Vertices {
				t.Errorf("%s: cell %d has %d faces, %d edges, %d vertices, by brute force %+v", name, i, c.Faces[i], c.Edges[i], c.Vertices[i], s)
			}
		}
	}
}

// Law 4 without a solid: bounded cells are those that brute force closes, unbounded
// ones have the same faces, edges and vertices.
func TestLaw4BruteForceOpen(t *testing.T) {
	start := func(c *polyhedron.Cell, _ Vec) { c.SetFarBox(0x1p24, polyhedron.Open, true) }
	for name, sites := range sets(200) {
		d := diagram(t, sites, Options{})
		c := measure(t, d, All)
		unbounded := 0
		for i := range sites {
			want := bruteForce(sites, i, start)
			if !c.Bounded[i] {
				unbounded++
			}
			if c.Farthest[i] > 1e6 && c.Bounded[i] {
				continue // too far for this brute force
			}
			if c.Bounded[i] == want.IsOpen() {
				t.Errorf("%s: cell %d bounded: %v, by brute force open: %v", name, i, c.Bounded[i], want.IsOpen())
				continue
			}
			if c.Bounded[i] {
				near(t, fmt.Sprintf("%s: volume of %d", name, i), c.Volume[i]/want.Volume(), 1, 1e-11)
			}
			s := want.Shape()
			if int(c.Faces[i]) != s.Faces() || int(c.Edges[i]) != s.Edges || int(c.Vertices[i]) != s.Vertices {
				t.Errorf("%s: cell %d has %d faces, %d edges, %d vertices, by brute force %+v", name, i, c.Faces[i], c.Edges[i], c.Vertices[i], s)
			}
		}
		if unbounded < 4 {
			t.Errorf("%s: %d unbounded cells", name, unbounded)
		}
	}
}

// Law 5: neither the order of the sites nor the number of threads changes a bit.
func TestLaw5OrderAndThreads(t *testing.T) {
	for name, sites := range sets(500) {
		for _, o := range []Options{{Solid: unitBox}, {}} {
			o.Threads = 1
			want := measure(t, diagram(t, sites, o), All)
			order := rand.New(rand.NewPCG(9, 9)).Perm(len(sites))
			shuffled := make([]Vec, len(sites))
			for i, j := range order {
				shuffled[i] = sites[j]
			}
			o.Threads = 3
			d := diagram(t, shuffled, o)
			got := measure(t, d, All)
			for i, j := range order {
				if !sameCell(got, i, want, j) {
					t.Fatalf("%s: site %d differs after shuffling: %s against %s", name, j, cellText(got, i), cellText(want, j))
				}
			}
			back := make([]int32, 0, len(sites)/2)
			for i := len(sites) - 1; i >= 0; i -= 2 {
				back = append(back, int32(i))
			}
			some := measure(t, d, All, back...)
			for row, site := range back {
				if !sameCell(some, row, got, int(site)) {
					t.Fatalf("%s: site %d differs when asked for with others", name, site)
				}
			}
		}
	}
}

func cellText(c *Cells, i int) string {
	return fmt.Sprint(c.Volume[i], c.Area[i], c.WallArea[i], c.Farthest[i], c.NearestFace[i], c.Centroid[i], c.HasCentroid[i],
		c.Faces[i], c.Edges[i], c.Vertices[i], c.Shaped[i], c.Neighbours[i], c.Bounded[i], c.Clipped[i], c.Inside[i], c.Multiplicity[i])
}

func sameCell(a *Cells, i int, b *Cells, j int) bool { return cellText(a, i) == cellText(b, j) }

// Law 6: a shift of the coordinates that loses nothing shifts the centroids and
// changes nothing else; powers of two scale exactly.
func TestLaw6ShiftAndScale(t *testing.T) {
	for name, sites := range sets(300) {
		for i, p := range sites { // 20 bits, so that shifts by up to 2^32 are exact
			on := func(x float64) float64 { return math.Round(x*0x1p20) / 0x1p20 }
			sites[i] = v(on(p.X), on(p.Y), on(p.Z))
		}
		want := measure(t, diagram(t, sites, Options{Solid: unitBox}), All)
		for _, by := range []Vec{v(5e5, 5e6, 250), v(-5e6, 5e5, 5e5)} {
			moved := make([]Vec, len(sites))
			for i, p := range sites {
				moved[i] = add(p, by)
			}
			got := measure(t, diagram(t, moved, Options{Solid: brick{add(unitBox.lo, by), add(unitBox.hi, by)}}), All)
			for i := range sites {
				if got.Volume[i] != want.Volume[i] || got.Area[i] != want.Area[i] || got.Faces[i] != want.Faces[i] || got.Vertices[i] != want.Vertices[i] {
					t.Fatalf("%s: site %d moved by %v: volume %v, was %v", name, i, by, got.Volume[i], want.Volume[i])
				}
				if e := length(sub(sub(got.Centroid[i], by), want.Centroid[i])); e > 2e-9 {
					t.Fatalf("%s: centroid off by %g", name, e)
				}
			}
		}
		for _, f := range []float64{0x1p-20, 0x1p20} {
			scaled := make([]Vec, len(sites))
			for i, p := range sites {
				scaled[i] = v(f*p.X, f*p.Y, f*p.Z)
			}
			got := measure(t, diagram(t, scaled, Options{Solid: brick{v(0, 0, 0), v(f, f, f)}}), All)
			for i := range sites {
				if got.Volume[i] != f*f*f*want.Volume[i] || got.Area[i] != f*f*want.Area[i] || got.Edges[i] != want.Edges[i] {
					t.Fatalf("%s: site %d scaled by %g: volume %v, was %v", name, i, f, got.Volume[i], want.Volume[i])
				}
			}
		}
	}
}

// Law 7: no site is nearer to a vertex of a cell than the cell's own.
func TestLaw7EmptyBalls(t *testing.T) {
	for name, sites := range sets(1000) {
		d := diagram(t, sites, Options{Solid: unitBox})
		b := d.builder()
		for i := range int32(d.tree.Len()) {
			p := d.tree.Point(i)
			b.build(&b.cell, p, add(p, d.origin), i)
			for _, x := range b.cell.Vertices() {
				_, d2 := d.tree.Nearest(add(p, x))
				if own := dot(x, x); d2 < own*(1-1e-10) {
					t.Fatalf("%s: cell %d has a vertex at %v, a site at %v", name, i, math.Sqrt(own), math.Sqrt(d2))
				}
			}
		}
	}
}

// Law 8: a site's cell is the one that Insert gives it among the others, and an
// inserted cell takes its space from its neighbours.
func TestLaw8Insert(t *testing.T) {
	for name, sites := range sets(200) {
		for _, o := range []Options{{Solid: unitBox}, {}} {
			p := v(0.37, 0.52, 0.41)
			with := diagram(t, append(slices.Clone(sites), p), o)
			want := measure(t, with, All, int32(len(sites)))
			without := diagram(t, sites, o)
			var c polyhedron.Cell
			if err := without.Insert(p, &c); err != nil {
				t.Fatal(err)
			}
			if c.IsOpen() == want.Bounded[0] {
				t.Errorf("%s: inserted cell open: %v, bounded %v", name, c.IsOpen(), want.Bounded[0])
			}
			if want.Bounded[0] {
				near(t, name+": volume", c.Volume()/want.Volume[0], 1, 1e-12)
			}
			if s := c.Shape(); s.Contacts != int(want.Neighbours[0]) || s.Vertices != int(want.Vertices[0]) || s.Edges != int(want.Edges[0]) {
				t.Errorf("%s: inserted cell %+v, want %s", name, s, cellText(want, 0))
			}
			if err := without.Insert(sites[5], &c); err != nil {
				t.Fatal(err)
			}
			if own := measure(t, without, Volume, 5); o.Solid != nil && c.Volume() != own.Volume[0] {
				t.Errorf("%s: at a site %v, its own cell %v", name, c.Volume(), own.Volume[0])
			}
			for i := range c.NumFaces() {
				if label, _ := c.Face(i); label == 5 || label >= int32(len(sites)) {
					t.Errorf("%s: label %d", name, label)
				}
			}
		}
	}
}

// Laws 1 to 5 on small sets of every shape: coordinates from {0, ½, 1} or free,
// few sites, duplicates, sites on walls, corners and edges.
func TestLawsOnSmallSets(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		coordinate := rapid.OneOf(rapid.SampledFrom([]float64{0, 0.5, 1}), rapid.Float64Range(0, 1),
			rapid.SampledFrom([]float64{0.5 + 1e-15, 1e-12, 1 - 1e-9, 1.0 / 3}))
		point := rapid.Custom(func(t *rapid.T) Vec {
			return v(coordinate.Draw(t, "x"), coordinate.Draw(t, "y"), coordinate.Draw(t, "z"))
		})
		sites := rapid.SliceOfN(point, 1, 12).Draw(t, "sites")
		d, err := New(sites, Options{Solid: unitBox, Threads: 1})
		if err != nil {
			t.Fatal(err)
		}
		c, err := d.Measure(context.Background(), All, nil)
		if err != nil {
			t.Fatal(err)
		}
		var volume, walls Sum
		for i := range sites {
			volume.Add(c.Volume[i] / float64(c.Multiplicity[i]))
			walls.Add(c.WallArea[i] / float64(c.Multiplicity[i]))
			want := bruteForce(sites, i, startInBox)
			if math.Abs(want.Volume()-c.Volume[i]) > 1e-12 {
				t.Fatalf("site %d: volume %v, by brute force %v", i, c.Volume[i], want.Volume())
			}
			if err := want.Validate(); err != nil {
				t.Fatal(err)
			}
		}
		if math.Abs(volume.Value()-1) > 1e-12 || math.Abs(walls.Value()-6) > 1e-10 {
			t.Fatalf("volumes add up to %v, walls to %v", volume.Value(), walls.Value())
		}
		open, err := New(sites, Options{Threads: 1})
		if err != nil {
			t.Fatal(err)
		}
		if _, err := open.Measure(context.Background(), All, nil); err != nil {
			t.Fatal(err)
		}
	})
}
