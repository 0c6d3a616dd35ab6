package delaunay

import (
	"context"
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/spatial/r3"
	"pgregory.net/rapid"

	"nearcell/voronoi/predicate"
)

// Law 1: whatever the sites, the result passes Validate, and equal sites are named.
func TestEveryKindIsValid(t *testing.T) {
	for _, kind := range kindNames() {
		t.Run(kind, func(t *testing.T) {
			for _, n := range []int{0, 1, 2, 3, 4, 5, 6, 9, 60, 300, 2000} {
				for seed := range uint64(3) {
					sites := kinds[kind](rand.New(rand.NewPCG(seed, 7)), n)
					d := build(t, sites, 1)
					if err := d.Validate(); err != nil {
						t.Fatalf("n %d, seed %d: %v", n, seed, err)
					}
					checkPlaces(t, d, sites)
				}
			}
		})
	}
}

// checkPlaces compares representatives and dimension with a map and elimination.
func checkPlaces(t testing.TB, d *T, sites []r3.Vec) {
	t.Helper()
	first := map[r3.Vec]int{}
	repeats := 0
	for i, s := range sites {
		s = r3.Vec{X: s.X + 0, Y: s.Y + 0, Z: s.Z + 0}
		if _, ok := first[s]; !ok {
			first[s] = i
		} else {
			repeats++
		}
		if got := d.Representative(i); got != first[s] {
			t.Fatalf("site %d stands for %d, want %d", i, got, first[s])
		}
	}
	if len(d.Repeats()) != repeats || d.NumVertices() != len(first) {
		t.Fatalf("%d repeats and %d vertices, want %d and %d", len(d.Repeats()), d.NumVertices(), repeats, len(first))
	}
	want := -1
	var base [4]r3.Vec
	for _, s := range sites {
		switch want {
		case -1:
		case 0:
			if s == base[0] {
				continue
			}
		case 1:
			if flat(base[0], base[1], s) {
				continue
			}
		case 2:
			if predicate.Orient3D(base[0], base[1], base[2], s) == 0 {
				continue
			}
		case 3:
			continue
		}
		want++
		base[want] = s
	}
	if d.Dimension() != want {
		t.Fatalf("dimension %d, want %d", d.Dimension(), want)
	}
}

// flat reports whether three points are collinear: coplanar with any fourth.
func flat(a, b, c r3.Vec) bool {
	m := 1.0
	for _, x := range []float64{a.X, a.Y, a.Z} {
		m = max(m, math.Abs(x))
	}
	for _, e := range []r3.Vec{{X: 1}, {Y: 1}, {Z: 1}} {
		o := r3.Add(a, r3.Scale(math.Copysign(m, -1), e))
		if predicate.Orient3D(a, b, c, o) != 0 {
			return false
		}
	}
	return true
}

// Law 2: no site lies inside any sphere, by brute force, and the set of tetrahedra
// does not depend on the order of the sites, the number of threads or the way there.
func TestProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		sites := drawSites(t, 120)
		d, err := Build(context.Background(), sites, Options{Threads: 1})
		if err != nil {
			t.Fatal(err)
		}
		if err := d.Validate(); err != nil {
			t.Fatal(err)
		}
		for i := range d.NumTets() {
			c := d.vectors(i)
			for _, e := range sites {
				if predicate.InSpherePerturbed(c[0], c[1], c[2], c[3], e) > 0 {
					t.Fatalf("tetrahedron %v has %v inside", c, e)
				}
			}
		}
		seed := rapid.Uint64().Draw(t, "shuffle")
		other, err := Build(context.Background(), shuffled(rand.New(rand.NewPCG(seed, 2)), append([]r3.Vec(nil), sites...)), Options{Threads: 2})
		if err != nil {
			t.Fatal(err)
		}
		if d.Fingerprint() != other.Fingerprint() || d.NumTets() != other.NumTets() {
			t.Fatalf("another order gives %d tetrahedra for %d", other.NumTets(), d.NumTets())
		}
	})
}

// Law 3: the result is one triangulation for every order of insertion, cospherical
// sites included: all orders of the corners of a cube and its centre, one by one.
func TestAllOrders(t *testing.T) {
	cube := append(lattice(2, 1, nil), r3.Vec{X: .5, Y: .5, Z: .5})[:8]
	want := build(t, cube, 1).Fingerprint()
	orders := 0
	var permute func(k int)
	permute = func(k int) {
		if k == len(cube) {
			orders++
			if orders%37 != 0 { // a sample that meets every first site
				return
			}
			d := build(t, cube[:0:0], 1)
			for _, s := range cube {
				if _, err := d.Insert(s); err != nil {
					t.Fatal(err)
				}
			}
			if err := d.Validate(); err != nil {
				t.Fatal(err)
			}
			if d.Fingerprint() != want {
				t.Fatalf("order %v: another triangulation", cube)
			}
			return
		}
		for i := k; i < len(cube); i++ {
			cube[k], cube[i] = cube[i], cube[k]
			permute(k + 1)
			cube[k], cube[i] = cube[i], cube[k]
		}
	}
	permute(0)
}

// Law 4: inserting and removing sites leads to the same set as building.
func TestEdits(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		sites := drawSites(t, 60)
		begin := rapid.IntRange(0, len(sites)).Draw(t, "begin")
		d, err := Build(context.Background(), sites[:begin], Options{Threads: 1})
		if err != nil {
			t.Fatal(err)
		}
		live := map[int]bool{}
		for i := range begin {
			live[i] = true
		}
		check := func(did string) {
			if err := d.Validate(); err != nil {
				t.Fatalf("%s: %v", did, err)
			}
			var left []r3.Vec
			for i := range d.NumSites() {
				if live[i] {
					left = append(left, sites[i])
				}
			}
			want, err := Build(context.Background(), left, Options{Threads: 1})
			if err != nil {
				t.Fatal(err)
			}
			if d.Fingerprint() != want.Fingerprint() || d.NumTets() != want.NumTets() ||
				d.NumVertices() != want.NumVertices() || d.Dimension() != want.Dimension() {
				t.Fatalf("%s: %d tetrahedra, %d vertices, dimension %d; built anew %d, %d, %d", did,
					d.NumTets(), d.NumVertices(), d.Dimension(), want.NumTets(), want.NumVertices(), want.Dimension())
			}
		}
		for step := range 30 {
			if d.NumSites() < len(sites) && rapid.Bool().Draw(t, "insert") {
				s, err := d.Insert(sites[d.NumSites()])
				if err != nil {
					t.Fatal(err)
				}
				live[s] = true
				check("insert")
			} else if d.NumSites() > 0 {
				s := rapid.IntRange(0, d.NumSites()-1).Draw(t, "remove")
				err := d.Remove(s)
				if live[s] != (err == nil) {
					t.Fatalf("step %d: removing %d: %v", step, s, err)
				}
				if live[s] {
					live[s] = false
					check("remove")
				}
			}
		}
	})
}

// Law 5: arrays and back is the same, canonical, and damage is noticed.
func TestArrays(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		sites := drawSites(t, 100)
		d, err := Build(context.Background(), sites, Options{Threads: 1})
		if err != nil {
			t.Fatal(err)
		}
		if n := len(sites); n > 0 && rapid.Bool().Draw(t, "remove") {
			if err := d.Remove(n / 2); err != nil {
				t.Fatal(err)
			}
		}
		a := d.Arrays()
		e, err := FromArrays(a)
		if err != nil {
			t.Fatal(err)
		}
		if e.Fingerprint() != d.Fingerprint() || e.NumVertices() != d.NumVertices() {
			t.Fatal("not the same")
		}
		d.Renumber()
		if err := d.Validate(); err != nil {
			t.Fatal(err)
		}
		for i := range d.NumTets() + d.NumGhosts() {
			c := d.Tet(i)
			for k := range 4 {
				tet, corner := d.Neighbor(i, k)
				if a.Corners[4*i+k] != c[k] || a.Neighbours[4*i+k] != uint32(4*tet+corner) {
					t.Fatalf("Renumber and Arrays differ at %d", i)
				}
			}
		}
		if d.NumTets() < 2 {
			return
		}
		at := rapid.IntRange(0, len(a.Corners)-1).Draw(t, "at")
		if rapid.Bool().Draw(t, "corner") {
			a.Corners[at] = (a.Corners[at]+2)%int32(len(sites)+1) - 1
		} else {
			a.Neighbours[at] = (a.Neighbours[at] + 1) % uint32(len(a.Neighbours))
		}
		if _, err := FromArrays(a); err == nil {
			t.Fatalf("damage at %d not noticed", at)
		}
	})
}

// Law 6: NearestSite agrees with a search of all sites, Locate with the planes.
func TestNearestAndLocate(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		sites := drawSites(t, 150)
		d, err := Build(context.Background(), sites, Options{Threads: 1})
		if err != nil {
			t.Fatal(err)
		}
		seed := rapid.Uint64().Draw(t, "queries")
		r := rand.New(rand.NewPCG(seed, 3))
		for range 20 {
			q := random(r)
			if len(sites) > 1 {
				a, b := sites[r.IntN(len(sites))], sites[r.IntN(len(sites))]
				switch r.IntN(3) {
				case 0:
					q = a
				case 1:
					q = r3.Add(r3.Scale(.5, a), r3.Scale(.5, b))
				}
			}
			best := -1
			for i, s := range sites {
				if best < 0 || predicate.SideOfBisector(s, sites[best], q) < 0 {
					best = i
				}
			}
			if got := d.NearestSite(q); got != best {
				t.Fatalf("nearest to %v: %d, want %d", q, got, best)
			}
			checkLocation(t, d, q)
		}
	})
}

func checkLocation(t *rapid.T, d *T, q r3.Vec) {
	at := d.Locate(q)
	if d.Dimension() < 3 {
		if at.Tet != -1 {
			t.Fatal("located without tetrahedra")
		}
		return
	}
	c := d.vectors(at.Tet)
	if d.IsGhost(at.Tet) {
		c[ghostIn(&d.tets[at.Tet].v)] = q
		if predicate.Orient3D(c[0], c[1], c[2], c[3]) <= 0 {
			t.Fatalf("%v is not beyond ghost %d", q, at.Tet)
		}
		return
	}
	for k := range 4 {
		p := c
		p[k] = q
		o := predicate.Orient3D(p[0], p[1], p[2], p[3])
		if o < 0 || (o == 0) != (at.On>>k&1 == 1) {
			t.Fatalf("%v: face %d of %v: %d, on %04b", q, k, c, o, at.On)
		}
	}
}

func TestErrors(t *testing.T) {
	for _, bad := range []float64{math.NaN(), math.Inf(1), math.Inf(-1)} {
		_, err := Build(t.Context(), []r3.Vec{{}, {Y: bad}}, Options{})
		var c *CoordinateError
		if !errors.As(err, &c) || c.Site != 1 {
			t.Errorf("%v: %v", bad, err)
		}
	}
	if _, err := BuildFlat(t.Context(), make([]float64, 4), Options{}); !errors.Is(err, ErrShape) {
		t.Error(err)
	}
	sites := kinds["uniform"](rand.New(rand.NewPCG(1, 1)), 20000)
	var m *MemoryError
	if _, err := Build(t.Context(), sites, Options{Memory: 1 << 20}); !errors.As(err, &m) || m.Need <= 1<<20 {
		t.Error(err)
	}
	if _, err := Build(t.Context(), sites, Options{Memory: Estimate(len(sites))}); err != nil {
		t.Error(err)
	}
	for _, threads := range []int{1, 2} {
		ctx, cancel := context.WithCancel(t.Context())
		calls := 0
		_, err := Build(ctx, sites, Options{Threads: threads, Progress: func(done, total int) {
			if calls++; calls == 2 {
				cancel()
			}
			if done > total || total != len(sites) {
				t.Errorf("progress %d of %d", done, total)
			}
		}})
		if !errors.Is(err, context.Canceled) {
			t.Errorf("%d threads: %v after %d calls", threads, err, calls)
		}
		cancel()
	}
}
