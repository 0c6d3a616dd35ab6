package field

import (
	"context"
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi"
	"nearcell/voronoi/solid"
)

// prepared is a field that goes by the tetrahedralisation.
func prepared(t testing.TB, sites []Vec, body solid.Solid, k Vec, o Options) *Field {
	t.Helper()
	f := stretchedField(t, sites, body, k, o)
	if err := f.Prepare(context.Background(), 1<<20); err != nil {
		t.Fatal(err)
	}
	return f
}

// The parts between the centres of tetrahedra are those that bisectors cut out of the
// cell: both ways give the same weights, of scattered sites, of crowded ones, of lattices
// (where most spheres hold eight sites or more), in solids, without one and by stretched
// distances; at places of any kind.
func TestZoneIsCutting(t *testing.T) {
	r := rand.New(rand.NewPCG(20, 5))
	crowd := random(300, 4)
	for i := range crowd[:200] {
		crowd[i] = add(v(0.3, 0.6, 0.2), scale(math.Pow(10, -4*r.Float64()), sub(crowd[i], v(0.5, 0.5, 0.5))))
	}
	var lattice, centred []Vec
	for i := range 216 {
		lattice = append(lattice, v(float64(i%6)/5, float64(i/6%6)/5, float64(i/36)/5))
		centred = append(centred, v(float64(i%6)/6, float64(i/6%6)/6, float64(i/36)/6), v((float64(i%6)+0.5)/6, (float64(i/6%6)+0.5)/6, (float64(i/36)+0.5)/6))
	}
	ball := random(60, 6)
	for i, p := range ball {
		p = sub(p, v(0.5, 0.5, 0.5))
		ball[i] = add(v(0.5, 0.5, 0.5), scale(0.5/length(p), p))
	}
	room, cube := lshape(t), box(t, v(0, 0, 0), v(1, 1, 1))
	for _, c := range []struct {
		name  string
		sites []Vec
		tol   float64
		// The last: places nearer to a site of the crowd than stretched coordinates can tell well.
	}{{"random", random(400, 1), 1e-13}, {"crowd", crowd, 1e-11}, {"lattice", lattice, 1e-13}, {"centred lattice", centred, 1e-13}, {"sphere", ball, 1e-12}, {"few", random(6, 9), 1e-12}} {
		places := append(random(60, 2), v(0.5, 0.5, 0.5), v(0.1, 0.2, 0.3), v(0.5, 0.2, 0.4), v(0.25, 0.25, 0.25))
		for range 12 { // on faces and edges, and close to sites
			a, b, d := c.sites[r.IntN(len(c.sites))], c.sites[r.IntN(len(c.sites))], c.sites[r.IntN(len(c.sites))]
			places = append(places, scale(0.5, add(a, b)), scale(1.0/3, add(a, add(b, d))), add(a, scale(1e-9, sub(b, a))), add(a, scale(1e-4, sub(b, a))))
		}
		for _, s := range []struct {
			name string
			body solid.Solid
			k    Vec
		}{{"open", nil, Vec{}}, {"box", cube, Vec{}}, {"room", room, Vec{}}, {"stretched", cube, v(1, 1, 5)}} {
			for _, m := range []Method{Sibson, Laplace} {
				sites := c.sites
				if s.body != nil {
					sites = in(s.body, sites)
				}
				if len(sites) < 5 {
					continue
				}
				f, g := stretchedField(t, sites, s.body, s.k, Options{Method: m}), prepared(t, sites, s.body, s.k, Options{Method: m})
				var w, u Work
				whole := 0
				for _, p := range places {
					want, x, err := f.At(context.Background(), p, &w)
					if err != nil {
						t.Fatal(err)
					}
					got, y, err := g.At(context.Background(), p, &u)
					if err != nil || got != want {
						t.Fatalf("%s, %s, %v at %v: place %v, wanted %v (%v)", c.name, s.name, m, p, got, want, err)
					}
					if near, d := g.d.Nearest(p); want == Between && d > 0 && g.ready {
						if _, ok := g.byZone(p, near, &u); ok {
							whole++
						}
						got, y, _ = g.At(context.Background(), p, &u)
					}
					a, b := map[int32]float64{}, map[int32]float64{}
					for _, q := range x {
						a[q.Site] = q.Weight
					}
					for _, q := range y {
						b[q.Site] = q.Weight
					}
					same(t, c.name+" "+s.name+" "+m.String(), b, a, c.tol)
					m, err1 := f.Neighbours(p, &w)
					n, err2 := g.Neighbours(p, &u)
					if err1 != nil || err2 != nil || m != n {
						t.Errorf("%s, %s at %v: %d neighbours, wanted %d (%v, %v)", c.name, s.name, p, n, m, err1, err2)
					}
				}
				t.Logf("%s, %s, %v: %d of %d places by the zone", c.name, s.name, m, whole, len(places))
				if s.body == nil && c.name != "few" && whole < len(places)/4 {
					t.Errorf("%s, %s: only %d of %d places went by the zone", c.name, s.name, whole, len(places))
				}
			}
		}
	}
}

// Law 7: the weights do not depend on how the tetrahedralisation was built.
func TestZoneBits(t *testing.T) {
	sites := random(3000, 21)
	var fields []*Field
	for _, threads := range []int{1, 2} {
		d, err := voronoi.New(sites, voronoi.Options{Threads: threads})
		if err != nil {
			t.Fatal(err)
		}
		f, err := New(context.Background(), d, 0, Options{})
		if err != nil {
			t.Fatal(err)
		}
		if err := f.Prepare(context.Background(), 1000); err != nil || !f.ready {
			t.Fatal(err)
		}
		fields = append(fields, f)
	}
	var w, u Work
	for _, p := range random(500, 22) {
		_, x, _ := fields[0].At(context.Background(), p, &w)
		_, y, _ := fields[1].At(context.Background(), p, &u)
		if len(x) != len(y) {
			t.Fatalf("at %v: %v and %v", p, x, y)
		}
		for i := range x {
			if x[i] != y[i] {
				t.Fatalf("at %v: %v and %v", p, x[i], y[i])
			}
		}
	}
}

// Law 3 for prepared fields: the neighbours' own tetrahedralisation gives what cutting the
// cell of the site does.
func TestWithoutByZone(t *testing.T) {
	var lattice []Vec
	for i := range 343 {
		lattice = append(lattice, v(float64(i%7)/6, float64(i/7%7)/6, float64(i/49)/6))
	}
	for _, sites := range [][]Vec{random(500, 31), lattice} {
		for _, body := range []solid.Solid{nil, box(t, v(0, 0, 0), v(1, 1, 1))} {
			f, g := stretchedField(t, sites, body, Vec{}, Options{}), prepared(t, sites, body, Vec{}, Options{})
			var w, u Work
			by := 0
			for i := range int32(len(sites)) {
				if _, ok, err := g.withoutByZone(context.Background(), sites[i], i, &u); err != nil {
					t.Fatal(err)
				} else if ok {
					by++
				}
				at, x, err1 := f.Without(context.Background(), i, &w)
				where, y, err2 := g.Without(context.Background(), i, &u)
				if at != where || err1 != nil || err2 != nil {
					t.Fatalf("site %d: %v and %v (%v, %v)", i, at, where, err1, err2)
				}
				a, b := map[int32]float64{}, map[int32]float64{}
				for _, q := range x {
					a[q.Site] = q.Weight
				}
				for _, q := range y {
					b[q.Site] = q.Weight
				}
				same(t, "without", b, a, 1e-13)
			}
			if by < 100 {
				t.Errorf("%d sites by the zone", by)
			}
		}
	}
}
