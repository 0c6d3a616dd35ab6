package field

import (
	"context"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"nearcell/voronoi"
	"nearcell/voronoi/solid"
)

// lshape is a room with a re-entrant corner.
func lshape(t testing.TB) solid.Solid {
	t.Helper()
	p, err := solid.NewPrism([]solid.Vec2{{}, {X: 1}, {X: 1, Y: 0.5}, {X: 0.6, Y: 0.5}, {X: 0.6, Y: 1}, {Y: 1}}, nil, 0, 0.8)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// in keeps the places that lie in a solid.
func in(body solid.Solid, places []Vec) []Vec {
	return slices.DeleteFunc(places, func(p Vec) bool { return body.Side(p, 0) == solid.Outside })
}

// Law 2: without a solid the places of the sites, by their weights, are the place.
func TestLinearPrecision(t *testing.T) {
	sites := random(150, 1)
	for _, shift := range []float64{0, 4e5} {
		moved := make([]Vec, len(sites))
		for i, p := range sites {
			moved[i] = v(p.X+shift, p.Y+2*shift, p.Z)
		}
		for _, m := range []Method{Sibson, Laplace, Linear} {
			f := fieldOf(t, moved, nil, Options{Method: m})
			var w Work
			asked := 0
			for _, p := range random(200, 2) {
				q := v(p.X+shift, p.Y+2*shift, p.Z)
				place, weights, err := f.At(context.Background(), q, &w)
				if err != nil {
					t.Fatal(err)
				}
				inside, err := f.InHull(context.Background(), q)
				if err != nil || inside != (place == Between) {
					t.Fatalf("%v at %v: place %v, in the hull %v (%v)", m, q, place, inside, err)
				}
				if !inside {
					continue
				}
				asked++
				var at Vec
				sum := 0.0
				for _, x := range weights {
					at = add(at, scale(x.Weight, sub(moved[x.Site], q)))
					sum += x.Weight
				}
				if off := length(at); off > 1e-10 || math.Abs(sum-1) > 1e-14 {
					t.Errorf("%v at %v: off by %g, sum %v", m, q, off, sum)
				}
			}
			if asked < 100 {
				t.Errorf("%d places in the hull", asked)
			}
		}
	}
}

// Law 3: what the others say in the place of a site is what they say without it, for
// every method, in a room, in a box and without a solid, by stretched distances too.
func TestWithoutIsRebuilding(t *testing.T) {
	room, cube := lshape(t), box(t, v(0, 0, 0), v(1, 1, 1))
	for _, c := range []struct {
		name string
		body solid.Solid
		k    Vec
	}{{"room", room, Vec{}}, {"box", cube, Vec{}}, {"open", nil, Vec{}}, {"stretched", room, v(1, 1, 4)}, {"stretched open", nil, v(2, 1, 0.5)}} {
		for _, m := range []Method{Sibson, Laplace, Linear, Nearest, Distance} {
			sites := in(room, random(60, 3))
			o := Options{Method: m, Power: 2}
			f := stretchedField(t, sites, c.body, c.k, o)
			for i := range sites {
				var w, u Work
				others := slices.Delete(slices.Clone(sites), i, i+1)
				g := stretchedField(t, others, c.body, c.k, o)
				place, got, err := f.Without(context.Background(), int32(i), &w)
				if err != nil {
					t.Fatal(err)
				}
				anew, want, err := g.At(context.Background(), sites[i], &u)
				if err != nil {
					t.Fatal(err)
				}
				if place != anew {
					t.Fatalf("%s, %v without %d: place %v, built anew %v", c.name, m, i, place, anew)
				}
				expect := map[int32]float64{}
				for _, x := range want {
					s := x.Site
					if s >= int32(i) {
						s++
					}
					expect[s] = x.Weight
				}
				have := map[int32]float64{}
				for _, x := range got {
					have[x.Site] = x.Weight
				}
				same(t, c.name+" "+m.String(), have, expect, 1e-11)
			}
		}
	}
}

func stretchedField(t testing.TB, sites []Vec, body solid.Solid, k Vec, o Options) *Field {
	t.Helper()
	d, err := voronoi.New(sites, voronoi.Options{Solid: body, Stretch: k})
	if err != nil {
		t.Fatal(err)
	}
	f, err := New(context.Background(), d, 0, o)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// Law 4: Sibson's weights are what the neighbours' cells lose.
func TestWeightsAreWhatCellsLose(t *testing.T) {
	room := lshape(t)
	sites := in(room, random(40, 5))
	f := fieldOf(t, sites, room, Options{})
	before := volumes(t, sites, room)
	for _, p := range in(room, random(15, 6)) {
		after := volumes(t, append(slices.Clone(sites), p), room)
		want := map[int32]float64{}
		for i := range sites {
			if lost := (before[i] - after[i]) / after[len(sites)]; lost > 1e-9 {
				want[int32(i)] = lost
			}
		}
		same(t, "what is lost", at(t, f, p), want, 1e-9)
	}
}

func volumes(t testing.TB, sites []Vec, body solid.Solid) []float64 {
	t.Helper()
	d, err := voronoi.New(sites, voronoi.Options{Solid: body})
	if err != nil {
		t.Fatal(err)
	}
	m, err := d.Measure(context.Background(), voronoi.Volume, nil)
	if err != nil {
		t.Fatal(err)
	}
	return m.Volume
}

// On the hull's faces and edges the weights are the limit from within; among sites in one
// plane they are those of the plane.
func TestRimIsTheLimitFromWithin(t *testing.T) {
	sites := append(slices.Clone(cubeCorners), v(0.5, 0.5, 0), v(0.5, 0, 0), v(0.3, 0.6, 0.4))
	for _, m := range []Method{Sibson, Laplace} {
		f := fieldOf(t, sites, nil, Options{Method: m})
		for _, p := range []Vec{v(0.3, 0.2, 0), v(0.7, 0.6, 0), v(0.25, 0, 0), v(1, 0.5, 0.25), v(1, 1, 0.125)} {
			const e = 1e-6
			inwards := add(p, scale(e, sub(v(0.5, 0.5, 0.5), p)))
			same(t, m.String(), at(t, f, p), at(t, f, inwards), 1e-4)
		}
		flat := []Vec{v(0, 0, 2), v(1, 0, 2), v(0, 1, 2), v(1, 1, 2)}
		f = fieldOf(t, flat, nil, Options{Method: m})
		same(t, "in a plane", at(t, f, v(0.25, 0.5, 2)), list(.375, .125, .375, .125), 1e-14)
		var w Work
		if place, _, err := f.At(context.Background(), v(0.25, 0.5, 2.1), &w); place != OutsideHull || err != nil {
			t.Errorf("off the plane: %v, %v", place, err)
		}
	}
}

// Law 5, and the closed form against cutting: a field that is linear everywhere.
func TestLinearAboveAgainstThePolytope(t *testing.T) {
	room, cube := lshape(t), box(t, v(0, 0, 0), v(1, 1, 1))
	slope := func(p Vec) float64 { return p.X + 0.5*p.Y - 0.25*p.Z }
	sites := append(slices.Clone(cubeCorners), random(60, 7)...)
	f := fieldOf(t, sites, cube, Options{Method: Linear})
	var thresholds []float64
	for i := range 401 {
		thresholds = append(thresholds, -0.3+2*float64(i)/400)
	}
	a, err := f.LinearAbove(context.Background(), nil, func(s int32) float64 { return slope(sites[s]) }, thresholds, Run{})
	if err != nil {
		t.Fatal(err)
	}
	if math.Abs(a.Reached-1) > 1e-12 || a.Space != 1 {
		t.Fatalf("reached %v of %v", a.Reached, a.Space)
	}
	mean := -0.3
	for i, x := range a.Volume {
		var w Work
		w.piece.SetBox(v(0, 0, 0), v(1, 1, 1), [6]int32{})
		w.piece.Clip(v(-1, -0.5, 0.25), -thresholds[i], 0)
		if want := w.piece.Volume(); math.Abs(x-want) > 1e-12 {
			t.Fatalf("above %v is %v, want %v", thresholds[i], x, want)
		}
		weight := 1.0
		if i == 0 || i == len(a.Volume)-1 {
			weight = 0.5
		}
		mean += weight * x * 2 / 400
	}
	if want := 0.5 + 0.25 - 0.125; math.Abs(mean-want) > 1e-4 {
		t.Errorf("the integral over the thresholds is %v, want the mean %v", mean, want)
	}
	// Part of the room is outside the hull; what is inside and reached fits together.
	some := in(room, random(80, 9))
	g := fieldOf(t, some, room, Options{Method: Linear})
	b, err := g.LinearAbove(context.Background(), nil, func(s int32) float64 { return slope(some[s]) }, []float64{-9, 0.4, 9}, Run{Threads: 2})
	if err != nil {
		t.Fatal(err)
	}
	if b.Volume[0] != b.Reached || b.Volume[2] != 0 || !(b.Reached < b.Space) || !(b.Volume[1] > 0 && b.Volume[1] < b.Reached) {
		t.Errorf("%+v", b)
	}
	once, err := g.LinearAbove(context.Background(), nil, func(s int32) float64 { return slope(some[s]) }, []float64{-9, 0.4, 9}, Run{Threads: 1})
	if err != nil || !slices.Equal(once.Volume, b.Volume) || once.Reached != b.Reached {
		t.Errorf("one thread gives %+v, two %+v (%v)", once, b, err)
	}
}

// Corner values that are equal, or nearly: the closed form stays a share, falls with the
// threshold, and its integral is the mean of the corners.
func TestShareAbove(t *testing.T) {
	for _, c := range []struct {
		v    [4]float64
		t    float64
		want float64
	}{
		{[4]float64{0, 0, 1, 1}, 0.5, 0.5}, {[4]float64{0, 1, 1, 1}, 0.5, 0.875}, {[4]float64{0, 0, 0, 1}, 0.5, 0.125},
		{[4]float64{2, 2, 2, 2}, 2, 0}, {[4]float64{2, 2, 2, 2}, 1.9, 1}, {[4]float64{3, 0, 1, 2}, 1.5, 0.5}, {[4]float64{0, 0, 0, 1}, 0, 1},
	} {
		if got := ShareAbove(c.v, c.t); math.Abs(got-c.want) > 1e-15 {
			t.Errorf("%v above %v is %v, want %v", c.v, c.t, got, c.want)
		}
	}
	r := rand.New(rand.NewPCG(1, 1))
	for range 2000 {
		var z [4]float64
		for i := range z {
			z[i] = math.Round(3 * r.Float64())
			if r.IntN(3) == 0 {
				z[i] += 1e-13 * r.Float64()
			}
		}
		lo, hi := slices.Min(z[:])-0.01, slices.Max(z[:])+0.01
		const n = 600
		last, integral := 1.0, lo
		for i := range n {
			s := ShareAbove(z, lo+(hi-lo)*(float64(i)+0.5)/n)
			if !(s >= 0 && s <= last) {
				t.Fatalf("%v: %v after %v", z, s, last)
			}
			last = s
			integral += s * (hi - lo) / n
		}
		if mean := (z[0] + z[1] + z[2] + z[3]) / 4; math.Abs(integral-mean) > 0.02 {
			t.Fatalf("%v: the integral is %v, the mean %v", z, integral, mean)
		}
	}
}

// Law 6: samples of the field never break the bounds, and the bounds close in where the
// field is known.
func TestBoundsHold(t *testing.T) {
	room := lshape(t)
	sites := in(room, random(150, 11))
	value := func(s int32) float64 { return sites[s].X }
	f := fieldOf(t, sites, room, Options{})
	limits := []float64{-1, 0.3, 0.55, 2}
	a, err := f.SibsonAbove(context.Background(), nil, value, limits, Run{})
	if err != nil {
		t.Fatal(err)
	}
	if a.Lower[0] < a.Space*(1-1e-9) || a.Upper[3] != 0 {
		t.Errorf("beyond all values: %+v", a)
	}
	places := in(room, random(1500, 12))
	for i, limit := range limits {
		if !(a.Lower[i] <= a.Volume[i] && a.Volume[i] <= a.Upper[i]) {
			t.Errorf("above %v: %v not between %v and %v", limit, a.Volume[i], a.Lower[i], a.Upper[i])
		}
		over := 0.0
		var w Work
		for _, p := range places {
			_, weights, err := f.At(context.Background(), p, &w)
			if err != nil {
				t.Fatal(err)
			}
			if Estimate(weights, value) > limit {
				over++
			}
		}
		share := over / float64(len(places)) * a.Space
		slack := 4 * a.Space * 0.5 / math.Sqrt(float64(len(places)))
		if share < a.Lower[i]-slack || share > a.Upper[i]+slack || math.Abs(share-a.Volume[i]) > slack+4*a.Doubt[i] {
			t.Errorf("above %v: %v by random places, %v (%v to %v)", limit, share, a.Volume[i], a.Lower[i], a.Upper[i])
		}
	}
}

// Law 7.
func TestThreadsDoNotShow(t *testing.T) {
	room := lshape(t)
	sites := in(room, random(400, 13))
	f := fieldOf(t, sites, room, Options{})
	places := in(room, random(300, 14))
	var runs [2][][]Weight
	for k := range runs {
		runs[k] = make([][]Weight, len(places))
		err := f.EachAt(context.Background(), places, Run{Threads: 1 + 3*k}, func(i int, _ Place, w []Weight) error {
			runs[k][i] = slices.Clone(w)
			return nil
		})
		if err != nil {
			t.Fatal(err)
		}
	}
	for i := range places {
		if !slices.Equal(runs[0][i], runs[1][i]) {
			t.Fatalf("place %d: %v and %v", i, runs[0][i], runs[1][i])
		}
	}
}

func TestPlaces(t *testing.T) {
	cube := box(t, v(0, 0, 0), v(1, 1, 1))
	var w Work
	ask := func(f *Field, p Vec, want Place) {
		t.Helper()
		if got, _, err := f.At(context.Background(), p, &w); got != want || err != nil {
			t.Errorf("%v: %v (%v), want %v", p, got, err, want)
		}
	}
	one := fieldOf(t, []Vec{v(0.2, 0.2, 0.2)}, cube, Options{})
	ask(one, v(0.9, 0.9, 0.9), Between)
	ask(one, v(0.2, 0.2, 0.2), AtSite)
	ask(one, v(1.1, 0, 0), OutsideSolid)
	if got, _, err := one.Without(context.Background(), 0, &w); got != Alone || err != nil {
		t.Errorf("alone: %v, %v", got, err)
	}
	same(t, "one", at(t, one, v(0.9, 0.9, 0.9)), list(1), 0)
	ask(fieldOf(t, []Vec{v(0, 0, 0), v(1, 0, 0)}, nil, Options{}), v(2, 0, 0), OutsideHull)
	ask(fieldOf(t, []Vec{v(0, 0, 0), v(1, 0, 0)}, nil, Options{Method: Linear}), v(0.5, 0, 0), Flat)
	if _, err := New(context.Background(), one.d, 0, Options{Method: Distance}); err != ErrPower {
		t.Errorf("no power: %v", err)
	}
}

// Without a solid the space of SibsonAbove is the hull; in parts the bounds hold too. The
// corners of a cube have Sibson coordinates that are trilinear weights (their values are x
// here, so that the field is x): above 0.4 lies 0.6 of the cube.
func TestAboveInParts(t *testing.T) {
	value := func(s int32) float64 { return cubeCorners[s].X }
	ctx := context.Background()
	for _, c := range []struct {
		name                   string
		within                 solid.Solid
		space, reached, volume float64
	}{
		{"hull", nil, 1, 1, 0.6},
		{"a part in it", box(t, v(0.2, 0.25, 0.25), v(0.8, 0.75, 0.75)), 0.15, 0.15, 0.1},
		{"a part that reaches out", box(t, v(0.5, 0, 0), v(2, 1, 1)), 1.5, 0.5, 0.5},
		{"a part outside", box(t, v(3, 0, 0), v(4, 1, 1)), 1, 0, 0},
	} {
		for _, m := range []Method{Sibson, Linear} {
			f := fieldOf(t, cubeCorners, nil, Options{Method: m})
			ask := f.SibsonAbove
			if m == Linear {
				ask = f.LinearAbove
			}
			a, err := ask(ctx, c.within, value, []float64{0.4}, Run{})
			if err != nil {
				t.Fatal(err)
			}
			if math.Abs(a.Space-c.space) > 1e-9 || math.Abs(a.Reached-c.reached) > 1e-9 {
				t.Errorf("%s, %v: space %v, reached %v", c.name, m, a.Space, a.Reached)
			}
			if !(a.Lower[0] <= c.volume+1e-9 && a.Volume[0] >= a.Lower[0] && a.Upper[0] >= c.volume+c.space-c.reached-1e-9) || math.Abs(a.Volume[0]-c.volume) > 5*a.Doubt[0]+1e-9 {
				t.Errorf("%s, %v: %v (%v to %v, ±%v), want %v", c.name, m, a.Volume[0], a.Lower[0], a.Upper[0], a.Doubt[0], c.volume)
			}
		}
	}
	flat, err := fieldOf(t, []Vec{v(0, 0, 0), v(1, 0, 0), v(0, 1, 0), v(1, 1, 0)}, nil, Options{}).SibsonAbove(ctx, nil, value, []float64{0.4}, Run{})
	if err != nil || flat.Space != 0 || flat.Reached != 0 {
		t.Errorf("sites in one plane: %v, %v", flat, err)
	}
}
