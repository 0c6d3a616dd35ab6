package delaunay

import (
	"encoding/csv"
	"math"
	"math/rand/v2"
	"os"
	"strconv"
	"testing"

	"gonum.org/v1/gonum/spatial/r3"
)

// readReference reads three columns of a file of testdata/reference, whose README
// names the sources.
func readReference(t *testing.T, name string, column int) []r3.Vec {
	t.Helper()
	f, err := os.Open("../../testdata/reference/" + name)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	var out []r3.Vec
	for _, row := range rows[1:] {
		var c [3]float64
		for k := range c {
			if c[k], err = strconv.ParseFloat(row[column+k], 64); err != nil {
				t.Fatal(err)
			}
		}
		out = append(out, r3.Vec{X: c[0], Y: c[1], Z: c[2]})
	}
	return out
}

func volumeOf(c [4]r3.Vec) float64 {
	return r3.Dot(r3.Sub(c[1], c[0]), r3.Cross(r3.Sub(c[2], c[0]), r3.Sub(c[3], c[0]))) / 6
}

type counts struct {
	tets, faces, edges, hull int
	volume                   float64
}

func count(d *T) (c counts) {
	c.tets = d.NumTets()
	c.faces = (4*d.NumTets() + d.NumGhosts()) / 2
	for s := range d.NumSites() {
		if d.Representative(s) != s {
			continue
		}
		for _, n := range d.Neighbours(s, nil) {
			switch {
			case n == Ghost:
				c.hull++
			case int(n) > s:
				c.edges++
			}
		}
	}
	for i := range d.NumTets() {
		c.volume += volumeOf(d.vectors(i))
	}
	return c
}

// The numbers come from Qhull 2020.2 and SciPy 1.10.1, run on the same files.
func TestReferenceSets(t *testing.T) {
	for _, test := range []struct {
		file   string
		column int
		want   counts
	}{
		{"twenty.csv", 1, counts{50, 113, 82, 15, 75.087833333}},
		{"usgs_california_km.csv", 0, counts{5930, 11896, 6978, 37, 10554363.2}},
	} {
		d := build(t, readReference(t, test.file, test.column), 0)
		if err := d.Validate(); err != nil {
			t.Error(err)
		}
		got := count(d)
		if math.Abs(got.volume/test.want.volume-1) > 1e-8 {
			t.Errorf("%s: volume %v, want %v", test.file, got.volume, test.want.volume)
		}
		got.volume = test.want.volume
		if test.file != "twenty.csv" { // no source gives the number of faces: Euler
			test.want.faces = got.tets + got.edges + 1 - d.NumVertices()
		}
		if got != test.want {
			t.Errorf("%s: %+v, want %+v", test.file, got, test.want)
		}
	}
}

// A Poisson process of intensity 1 has 24π²/35 tetrahedra a point; their circumradius R
// has (4π/3)R³ ~ Gamma(3,1); the mean volume is 35/(24π²) and the mean edge 1.23704
// (Miles 1974; Møller 1989). The share with a dihedral angle under 5° is 1.632 %
// (simulation of 2.5 million tetrahedra with SciPy 1.10.1).
func TestPoissonDelaunay(t *testing.T) {
	const side = 40.0
	r := rand.New(rand.NewPCG(11, 13))
	d := build(t, times(int(side*side*side), func(int) r3.Vec { return r3.Scale(side, random(r)) }), 0)
	inside := func(p r3.Vec) bool {
		in := func(x float64) bool { return x > 4 && x < side-4 }
		return in(p.X) && in(p.Y) && in(p.Z)
	}
	sites := 0.0
	for s := range d.NumSites() {
		if inside(d.Site(s)) {
			sites++
		}
	}
	var n, radius, cube, cube2, volume, edge, flat float64
	for i := range d.NumTets() {
		c, r2 := d.Circumsphere(i)
		if !inside(c) {
			continue
		}
		n++
		v := d.vectors(i)
		radius += math.Sqrt(r2)
		g := 4 * math.Pi / 3 * r2 * math.Sqrt(r2)
		cube += g
		cube2 += g * g
		volume += volumeOf(v)
		edge += meanEdge(v)
		if smallestDihedral(v) < 5 {
			flat++
		}
	}
	for _, c := range []struct {
		name            string
		got, want, band float64
	}{
		{"tetrahedra a site", n / sites, 24 * math.Pi * math.Pi / 35, 0.012},
		{"mean circumradius", radius / n, 0.8617159886, 0.006},
		{"mean of Gamma(3,1)", cube / n, 3, 0.02},
		{"variance of Gamma(3,1)", cube2/n - cube/n*cube/n, 3, 0.06},
		{"mean volume", volume / n, 35 / (24 * math.Pi * math.Pi), 0.02},
		{"mean edge", edge / n, 1.23704, 0.008},
		{"share under 5°", flat / n, 0.01632, 0.06},
	} {
		if math.Abs(c.got/c.want-1) > c.band {
			t.Errorf("%s: %v, want %v", c.name, c.got, c.want)
		}
	}
}

func meanEdge(v [4]r3.Vec) float64 {
	sum := 0.0
	for i := range 4 {
		for j := range i {
			sum += r3.Norm(r3.Sub(v[i], v[j]))
		}
	}
	return sum / 6
}

func smallestDihedral(v [4]r3.Vec) float64 {
	var normal [4]r3.Vec
	for k := range 4 {
		f := faceOf[k]
		normal[k] = r3.Unit(r3.Cross(r3.Sub(v[f[1]], v[f[0]]), r3.Sub(v[f[2]], v[f[0]])))
	}
	least := 180.0
	for i := range 4 {
		for j := range i {
			a := math.Acos(max(-1, min(1, -r3.Dot(normal[i], normal[j])))) * 180 / math.Pi
			least = min(least, a)
		}
	}
	return least
}

// Lattices with constant 1: tetrahedra a cell of the lattice and their circumradii,
// which follow from the Voronoi cells (Conway and Sloane, Sphere Packings, Lattices and
// Groups, chapter 21): a cube falls into 6 here, BCC into 12 of radius √5/4, FCC into
// 4 octahedra of radius 1/2 (4 tetrahedra each) and 8 tetrahedra of radius √3/4.
func TestLatticeCounts(t *testing.T) {
	half := r3.Vec{X: .5, Y: .5, Z: .5}
	for _, test := range []struct {
		name    string
		offsets []r3.Vec
		want    map[float64]int // by radius
	}{
		{"cubic", nil, map[float64]int{math.Sqrt(3) / 2: 6}},
		{"BCC", []r3.Vec{half}, map[float64]int{math.Sqrt(5) / 4: 12}},
		{"FCC", []r3.Vec{{X: .5, Y: .5}, {X: .5, Z: .5}, {Y: .5, Z: .5}}, map[float64]int{0.5: 16, math.Sqrt(3) / 4: 8}},
	} {
		const k, cells = 8, 27
		d := build(t, lattice(k, 1, test.offsets), 0)
		in := func(x float64) bool { return x > 1.9 && x < 4.9 } // three cells, no centre on the border
		got := map[float64]int{}
		for i := range d.NumTets() {
			c, r2 := d.Circumsphere(i)
			if !in(c.X) || !in(c.Y) || !in(c.Z) {
				continue
			}
			for radius := range test.want {
				if math.Abs(math.Sqrt(r2)-radius) < 1e-12 {
					got[radius]++
				}
			}
			got[0]++
		}
		all := 0
		for radius, want := range test.want {
			all += want
			if got[radius] != want*cells {
				t.Errorf("%s: %d of radius %v in %d cells, want %d", test.name, got[radius], radius, cells, want*cells)
			}
		}
		if got[0] != all*cells {
			t.Errorf("%s: %d in %d cells, want %d", test.name, got[0], cells, all*cells)
		}
	}
}
