package field

import (
	"context"
	"math"
	"slices"
	"testing"

	"nearcell/voronoi/polyhedron"
)

// Exact rational coordinates, worked out by hand in rational arithmetic; linear
// precision of each was verified exactly.

var cubeCorners = []Vec{v(0, 0, 0), v(0, 0, 1), v(0, 1, 0), v(0, 1, 1), v(1, 0, 0), v(1, 0, 1), v(1, 1, 0), v(1, 1, 1)}

func both(t *testing.T, do func(t *testing.T, m Method)) {
	for _, m := range []Method{Sibson, Laplace} {
		t.Run(m.String(), func(t *testing.T) { do(t, m) })
	}
}

func list(x ...float64) map[int32]float64 {
	m := map[int32]float64{}
	for i, w := range x {
		if w > 0 {
			m[int32(i)] = w
		}
	}
	return m
}

// Where the new cell takes from sites on one sphere alone, both coordinates are the
// same: trilinear in a box, barycentric in a tetrahedron.
func TestOneSphere(t *testing.T) {
	both(t, func(t *testing.T, m Method) {
		f := fieldOf(t, cubeCorners, nil, Options{Method: m})
		same(t, "the middle of a cube", at(t, f, v(0.5, 0.5, 0.5)), list(.125, .125, .125, .125, .125, .125, .125, .125), 1e-14)
		same(t, "trilinear", at(t, f, v(0.25, 1.0/3, 0.4)),
			list(3./10, 1./5, 3./20, 1./10, 1./10, 1./15, 1./20, 1./30), 1e-14)
		f = fieldOf(t, []Vec{v(0, 0, 0), v(1, 0, 0), v(0, 1, 0), v(0, 0, 1)}, nil, Options{Method: m})
		same(t, "barycentric", at(t, f, v(0.1, 0.2, 0.3)), list(2./5, 1./10, 1./5, 3./10), 1e-13)
	})
}

func TestOctahedron(t *testing.T) {
	sites := []Vec{v(1, 0, 0), v(-1, 0, 0), v(0, 1, 0), v(0, -1, 0), v(0, 0, 1), v(0, 0, -1)}
	both(t, func(t *testing.T, m Method) {
		f := fieldOf(t, sites, nil, Options{Method: m})
		s := 1. / 6
		same(t, "middle", at(t, f, v(0, 0, 0)), list(s, s, s, s, s, s), 1e-14)
		same(t, "above", at(t, f, v(0, 0, 0.5)), list(3./26, 3./26, 3./26, 3./26, 27./52, 1./52), 1e-14)
		same(t, "aside", at(t, f, v(0.25, 0.125, 0.125)), list(5./16, 1./16, 7./32, 3./32, 7./32, 3./32), 1e-14)
	})
}

// A cube with its middle: the first place where the two differ.
func TestCubeWithMiddle(t *testing.T) {
	sites := append(slices.Clone(cubeCorners), v(0.5, 0.5, 0.5))
	s := fieldOf(t, sites, nil, Options{})
	l := fieldOf(t, sites, nil, Options{Method: Laplace})
	p := v(0.25, 0.25, 0.25)
	same(t, "Sibson", at(t, s, p), list(19./44, 13./176, 13./176, 1./176, 13./176, 1./176, 1./176, 0, 29./88), 1e-14)
	same(t, "Laplace", at(t, l, p), list(9./22, 9./88, 9./88, 1./88, 9./88, 1./88, 1./88, 0, 1./4), 1e-14)
	for _, f := range []*Field{s, l} {
		same(t, "top", at(t, f, v(0.5, 0.5, 0.75)), list(0, .125, 0, .125, 0, .125, 0, .125, .5), 1e-14)
	}
	var c polyhedron.Cell
	if err := s.d.Insert(p, &c); err != nil || math.Abs(c.Volume()-99./256) > 1e-15 {
		t.Errorf("the new cell has the volume %v (%v)", c.Volume(), err)
	}
}

// The integer lattice: 18 neighbours of a place on an edge of its cubes, of which eight
// touch the new cell in small faces.
func TestLattice(t *testing.T) {
	var sites []Vec
	number := map[Vec]int32{}
	for x := -2; x <= 3; x++ {
		for y := -2; y <= 3; y++ {
			for z := -2; z <= 3; z++ {
				p := v(float64(x), float64(y), float64(z))
				number[p] = int32(len(sites))
				sites = append(sites, p)
			}
		}
	}
	weights := func(of func(p Vec) float64) map[int32]float64 {
		m := map[int32]float64{}
		for _, p := range sites {
			if x := of(p); x > 0 {
				m[number[p]] = x
			}
		}
		return m
	}
	// kinds gives the weight by how far y and z are away, and x.
	kinds := func(at0, at1 [3]float64) func(p Vec) float64 {
		return func(p Vec) float64 {
			k := int(math.Abs(p.Y) + math.Abs(p.Z))
			if math.Abs(p.Y) > 1 || math.Abs(p.Z) > 1 {
				return 0
			}
			switch p.X {
			case 0:
				return at0[k]
			case 1:
				return at1[k]
			}
			return 0
		}
	}
	s := fieldOf(t, sites, nil, Options{})
	l := fieldOf(t, sites, nil, Options{Method: Laplace})
	edge := v(0.5, 0, 0)
	same(t, "Sibson on an edge", at(t, s, edge), weights(kinds([3]float64{48. / 121, 3. / 121, 1. / 968}, [3]float64{48. / 121, 3. / 121, 1. / 968})), 1e-14)
	same(t, "Laplace on an edge", at(t, l, edge), weights(kinds([3]float64{16. / 49, 2. / 49, 1. / 392}, [3]float64{16. / 49, 2. / 49, 1. / 392})), 1e-14)
	var w Work
	if n, err := s.Neighbours(edge, &w); n != 18 || err != nil {
		t.Errorf("%d neighbours (%v), want 18", n, err)
	}
	quarter := v(0.25, 0, 0)
	same(t, "Sibson on a quarter", at(t, s, quarter), weights(kinds([3]float64{384. / 611, 18. / 611, 9. / 9776}, [3]float64{128. / 611, 6. / 611, 3. / 9776})), 1e-14)
	same(t, "Laplace on a quarter", at(t, l, quarter), weights(kinds([3]float64{384. / 713, 36. / 713, 27. / 11408}, [3]float64{128. / 713, 12. / 713, 9. / 11408})), 1e-14)
	face := func(corner, beside float64) func(p Vec) float64 {
		return func(p Vec) float64 {
			in := (p.X == 0 || p.X == 1) && (p.Y == 0 || p.Y == 1)
			switch {
			case in && p.Z == 0:
				return corner
			case in && math.Abs(p.Z) == 1:
				return beside
			}
			return 0
		}
	}
	same(t, "Sibson on a face", at(t, s, v(0.5, 0.5, 0)), weights(face(3./14, 1./56)), 1e-14)
	same(t, "Laplace on a face", at(t, l, v(0.5, 0.5, 0)), weights(face(1./5, 1./40)), 1e-14)
}

// Twenty sites, four places: exact rational arithmetic, and CGAL 5.5.1's natural
// neighbour coordinates agree to nine digits.
func TestTwentySites(t *testing.T) {
	sites, temp := twenty(t)
	value := func(s int32) float64 { return temp[s] }
	s := fieldOf(t, sites, nil, Options{})
	l := fieldOf(t, sites, nil, Options{Method: Laplace})
	for _, c := range []struct {
		p                        Vec
		near                     int32
		distance, sibson, laplac float64
		volume                   float64
	}{
		{v(5, 4, 2), 8, .948683298, 19.372229457, 19.354783624, 6.876019726},
		{v(4, 3, 2), 14, .469041576, 19.283325852, 19.296853605, 8.510620282},
		{v(6.5, 3, 1.5), 7, 1.004987562, 20.756056842, 20.736059787, 7.483500019},
		{v(8.5, 3, 2), 13, 1.1, 21.110025124, 21.093631593, 6.139839970},
	} {
		if i, d := s.d.Nearest(c.p); i != c.near-1 || math.Abs(d-c.distance) > 1e-9 {
			t.Errorf("at %v the nearest is %d at %v", c.p, i+1, d)
		}
		if got := estimate(at(t, s, c.p), value); math.Abs(got-c.sibson) > 1e-9 {
			t.Errorf("Sibson at %v is %.10f, want %.9f", c.p, got, c.sibson)
		}
		if got := estimate(at(t, l, c.p), value); math.Abs(got-c.laplac) > 1e-9 {
			t.Errorf("Laplace at %v is %.10f, want %.9f", c.p, got, c.laplac)
		}
		var cell polyhedron.Cell
		if err := s.d.Insert(c.p, &cell); err != nil || math.Abs(cell.Volume()-c.volume) > 1e-9 {
			t.Errorf("the new cell at %v has the volume %v (%v)", c.p, cell.Volume(), err)
		}
	}
	same(t, "Sibson", at(t, s, v(5, 4, 2)), map[int32]float64{3: .068571373, 6: .257652912, 7: .483249918, 8: .005963195,
		9: .039171583, 13: .056292212, 16: .020154165, 18: .068944642}, 1e-9)
	same(t, "Laplace", at(t, l, v(5, 4, 2)), map[int32]float64{3: .087230801, 6: .210416715, 7: .443460605, 8: .014179506,
		9: .037343519, 13: .100146702, 16: .027657944, 18: .079564209}, 1e-9)
	inBox := fieldOf(t, sites, box(t, v(0, 0, 0), v(10, 8, 4)), Options{})
	if got := estimate(at(t, inBox, v(4, 3, 2)), value); math.Abs(got-19.265318) > 1e-6 {
		t.Errorf("clipped Sibson at (4, 3, 2) is %.7f, want 19.265318", got)
	}
}

// Leave-one-out errors of the twenty sites (exact rational arithmetic).
func TestTwentyWithout(t *testing.T) {
	sites, temp := twenty(t)
	body := box(t, v(0, 0, 0), v(10, 8, 4))
	value := func(s int32) float64 { return temp[s] }
	for _, c := range []struct {
		o             Options
		me, mae, rmse float64
	}{
		{Options{Method: Nearest}, -.125, .635, .739256383},
		{Options{Method: Sibson}, -.038732184, .392589311, .503623486},
		{Options{Method: Laplace}, -.014020523, .391681762, .496499547},
	} {
		f := fieldOf(t, sites, body, c.o)
		var me, mae, rms float64
		var w Work
		for i := range int32(20) {
			place, weights, err := f.Without(context.Background(), i, &w)
			if err != nil || place != Between {
				t.Fatal(place, err)
			}
			e := Estimate(weights, value) - temp[i]
			me, mae, rms = me+e/20, mae+math.Abs(e)/20, rms+e*e/20
		}
		if math.Abs(me-c.me) > 1e-9 || math.Abs(mae-c.mae) > 1e-9 || math.Abs(math.Sqrt(rms)-c.rmse) > 1e-9 {
			t.Errorf("%v: %.10f %.10f %.10f, want %v", c.o.Method, me, mae, math.Sqrt(rms), c)
		}
	}
	open := map[Method][]float64{
		Sibson:  {20.089817430, 19.268820965, 18.903546022, 20.550010002, 18.515433208},
		Laplace: {20.043542187, 19.260055495, 18.928926422, 20.593429034, 18.513930742},
	}
	for m, want := range open {
		f := fieldOf(t, sites, nil, Options{Method: m})
		k := 0
		var w Work
		for i := range int32(20) {
			place, weights, err := f.Without(context.Background(), i, &w)
			if err != nil {
				t.Fatal(err)
			}
			if !slices.Contains([]int32{6, 7, 13, 18, 19}, i) {
				if place != OutsideHull {
					t.Errorf("%v: site %d on the hull has an estimate without itself", m, i+1)
				}
				continue
			}
			if got := Estimate(weights, value); math.Abs(got-want[k]) > 1e-9 {
				t.Errorf("%v without site %d: %.10f, want %.9f", m, i+1, got, want[k])
			}
			k++
		}
	}
}
