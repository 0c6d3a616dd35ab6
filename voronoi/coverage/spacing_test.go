package coverage

import (
	"context"
	"math"
	"math/rand/v2"
	"reflect"
	"testing"

	"nearcell/voronoi"
	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
	"nearcell/voronoi/solid/mesh"
)

func diagramOf(t testing.TB, sites []Vec, body solid.Solid) *voronoi.Diagram {
	t.Helper()
	d, err := voronoi.New(sites, voronoi.Options{Solid: body, Tolerance: 1e-9})
	if err != nil {
		t.Fatal(err)
	}
	return d
}

func spacingOf(t testing.TB, d *voronoi.Diagram, distances []float64, across, up float64) *Spread {
	t.Helper()
	s, err := Spacing(context.Background(), d, distances, across, up, Options{})
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// asMesh is a prism as a mesh of its own surface, one triangle cut off and put back so that it stays one.
func asMesh(t testing.TB, body solid.Solid) solid.Solid {
	t.Helper()
	lo, hi := body.Bounds()
	whole := box(t, sub(lo, Vec{X: 1, Y: 1, Z: 1}), add(hi, Vec{X: 1, Y: 1, Z: 1}))
	m, err := mesh.Combine(mesh.Both, whole, body)
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// A ball in a cube about its middle: the whole ball, then with six caps off, then the cube.
func TestBallInCube(t *testing.T) {
	var c polyhedron.Cell
	c.SetBox(Vec{X: -1, Y: -1, Z: -1}, Vec{X: 1, Y: 1, Z: 1}, [6]int32{})
	caps := func(r float64) float64 { // six caps of height r-1 (Archimedes), as long as they do not meet
		h := r - 1
		return 4*math.Pi/3*r*r*r - 6*math.Pi*h*h*(3*r-h)/3
	}
	for r, want := range map[float64]float64{0.5: math.Pi / 6, 1: 4 * math.Pi / 3, 1.2: caps(1.2), 1.4: caps(1.4), 1.7321: 8, 3: 8} {
		if got := inBall(&c, r); math.Abs(got-want) > 1e-12 {
			t.Errorf("r = %g: %.15g, want %.15g", r, got, want)
		}
	}
	// An eighth of it, whose corner is the middle.
	c.SetBox(Vec{}, Vec{X: 1, Y: 1, Z: 1}, [6]int32{})
	if got, want := inBall(&c, 1.3), caps(1.3)/8; math.Abs(got-want) > 1e-12 {
		t.Errorf("an eighth: %.15g, want %.15g", got, want)
	}
	// Outside the polyhedron: a cap of height 0.5 of the unit ball, cut off by a far box.
	c.SetBox(Vec{X: 0.5, Y: -3, Z: -3}, Vec{X: 4, Y: 3, Z: 3}, [6]int32{})
	if got, want := inBall(&c, 1), math.Pi*0.25*(3-0.5)/3; math.Abs(got-want) > 1e-12 {
		t.Errorf("a cap: %.15g, want %.15g", got, want)
	}
}

// What a ball has of a polyhedron is the sum of what it has of the halves, however it is cut,
// and grows with the radius as the area of its surface in it.
func TestBallAddsUp(t *testing.T) {
	r := rand.New(rand.NewPCG(6, 1))
	for range 300 {
		var c, a, b polyhedron.Cell
		c.SetBox(Vec{X: -r.Float64() - 0.1, Y: r.Float64() - 1, Z: r.Float64() - 0.5}, Vec{X: 1 + r.Float64(), Y: 1 + r.Float64(), Z: 1 + r.Float64()}, [6]int32{})
		for range 5 {
			c.Clip(direction(r), 0.3+r.Float64(), 1)
		}
		if c.Empty() {
			continue
		}
		n, d, radius := direction(r), r.Float64()-0.5, 0.2+1.5*r.Float64()
		a.CopyFrom(&c)
		b.CopyFrom(&c)
		a.Clip(n, d, 1)
		b.Clip(scale(-1, n), -d, 1)
		part := func(c *polyhedron.Cell) float64 {
			if c.Empty() {
				return 0
			}
			return inBall(c, radius)
		}
		whole := inBall(&c, radius)
		if got := part(&a) + part(&b); math.Abs(got-whole) > 1e-12 {
			t.Fatalf("halves have %.15g, the whole %.15g", got, whole)
		}
		if whole > c.Volume()*(1+1e-12) || whole > 4*math.Pi/3*radius*radius*radius*(1+1e-12) || whole < -1e-13 {
			t.Fatalf("%g of a volume of %g and a ball of %g", whole, c.Volume(), radius)
		}
	}
}

// One site in the middle of a unit cube, by hand.
func TestSpacingOfACube(t *testing.T) {
	d := diagramOf(t, []Vec{{X: 0.5, Y: 0.5, Z: 0.5}}, box(t, Vec{}, Vec{X: 1, Y: 1, Z: 1}))
	s := spacingOf(t, d, []float64{0.25, 0.5, 0.9}, 0, 0)
	if math.Abs(s.Volume-1) > 1e-14 || math.Abs(s.MeanSquare-0.25) > 1e-14 {
		t.Errorf("%+v", s)
	}
	for i, want := range []float64{1 - math.Pi/48, 1 - math.Pi/6, 0} {
		if math.Abs(s.Beyond[i]-want) > 1e-13 {
			t.Errorf("beyond %d: %.15g, want %.15g", i, s.Beyond[i], want)
		}
	}
	// Half as far up as across: an ellipsoid of half the ball.
	s = spacingOf(t, d, []float64{0.5}, 5, 2.5)
	if want := 1 - math.Pi/12; math.Abs(s.Beyond[0]-want) > 1e-13 || math.Abs(s.MeanSquare-0.25) > 1e-14 {
		t.Errorf("ellipsoid: %+v, want %.15g beyond", s, want)
	}
}

// The parts of a room and the columns of its triangles measure alike, and both as a great
// many places do.
func TestSpacingOfRooms(t *testing.T) {
	r := rand.New(rand.NewPCG(6, 2))
	for k := range 4 {
		m := newRoom(t, r, k > 1)
		sites := m.places(r, 1+5*k)
		distances := []float64{0.7, 1.5, 2.5}
		across, up := 0.0, 0.0
		if k == 2 {
			across, up = 3, 2
		}
		a := spacingOf(t, diagramOf(t, sites, m.solid), distances, across, up)
		b := spacingOf(t, diagramOf(t, sites, asMesh(t, m.solid)), distances, across, up)
		if math.Abs(a.MeanSquare-b.MeanSquare) > 1e-11*a.MeanSquare || math.Abs(a.Volume-m.solid.Volume()) > 1e-11*a.Volume {
			t.Errorf("parts %+v, columns %+v, solid %g", a, b, m.solid.Volume())
		}
		const n = 40000
		square, beyond := 0.0, make([]float64, len(distances))
		factor := 1.0
		if across > 0 {
			factor = across / up
		}
		lifted := make([]Vec, len(sites))
		for i, p := range sites {
			lifted[i] = Vec{X: p.X, Y: p.Y, Z: p.Z * factor}
		}
		for range n {
			p := m.place(r)
			far := toNearest(sites, p)
			square += far * far / n
			far = toNearest(lifted, Vec{X: p.X, Y: p.Y, Z: p.Z * factor})
			for i, x := range distances {
				if far > x {
					beyond[i] += a.Volume / n
				}
			}
		}
		if math.Abs(square-a.MeanSquare) > 0.03*a.MeanSquare {
			t.Errorf("mean square %g, by places %g", a.MeanSquare, square)
		}
		for i := range distances {
			if math.Abs(a.Beyond[i]-b.Beyond[i]) > 1e-10*a.Volume {
				t.Errorf("beyond %g: parts %.15g, columns %.15g", distances[i], a.Beyond[i], b.Beyond[i])
			}
			if share := a.Beyond[i] / a.Volume; math.Abs(beyond[i]-a.Beyond[i]) > 5*a.Volume*math.Sqrt((share*(1-share)+1e-3)/n) {
				t.Errorf("beyond %g: %g, by places %g of %g", distances[i], a.Beyond[i], beyond[i], a.Volume)
			}
		}
	}
}

// What is told of a site that goes is what the others are without it.
func TestRedundancyIsRebuilding(t *testing.T) {
	r := rand.New(rand.NewPCG(6, 3))
	for k := range 4 {
		var body solid.Solid = box(t, Vec{}, Vec{X: 10, Y: 8, Z: 4})
		sites := twenty(t)
		if k > 0 {
			m := newRoom(t, r, k > 1)
			body, sites = m.solid, m.places(r, 4+4*k)
		}
		if k == 3 {
			body = asMesh(t, body)
		}
		d := diagramOf(t, sites, body)
		losses, err := Redundancy(context.Background(), d, Options{Threads: 1})
		if err != nil {
			t.Fatal(err)
		}
		if other, err := Redundancy(context.Background(), d, Options{Threads: 3}); err != nil || !reflect.DeepEqual(losses, other) {
			t.Errorf("three threads give something else (%v)", err)
		}
		whole, err := d.Measure(context.Background(), voronoi.Volume, nil)
		if err != nil {
			t.Fatal(err)
		}
		for i, l := range losses {
			rest := append(append([]Vec{}, sites[:i]...), sites[i+1:]...)
			got, err := diagramOf(t, rest, body).Measure(context.Background(), voronoi.Volume|voronoi.Farthest, nil)
			if err != nil {
				t.Fatal(err)
			}
			radius := 0.0
			gain := map[int32]float64{}
			for _, x := range l.Takers {
				gain[x.Site] = x.Volume
			}
			for j := range rest {
				radius = max(radius, got.Farthest[j])
				old := j
				if j >= i {
					old++
				}
				if want := got.Volume[j] - whole.Volume[old]; math.Abs(gain[int32(old)]-want) > 1e-10*body.Volume() {
					t.Fatalf("room %d without %d: %d gains %.15g, by rebuilding %.15g", k, i, old, gain[int32(old)], want)
				}
			}
			if math.Abs(radius-l.Radius) > 1e-9*radius {
				t.Errorf("room %d without %d: radius %.15g, by rebuilding %.15g", k, i, l.Radius, radius)
			}
			if math.Abs(l.Volume-whole.Volume[i]) > 1e-10*body.Volume() {
				t.Errorf("room %d without %d: %.15g is shared out of %.15g", k, i, l.Volume, whole.Volume[i])
			}
		}
	}
}

func TestWithoutASolid(t *testing.T) {
	d := diagramOf(t, twenty(t), nil)
	if _, err := Spacing(context.Background(), d, nil, 0, 0, Options{}); err != ErrNoSolid {
		t.Error(err)
	}
	if _, err := Redundancy(context.Background(), d, Options{}); err != ErrNoSolid {
		t.Error(err)
	}
	one := diagramOf(t, []Vec{{X: 0.5, Y: 0.5, Z: 0.5}}, box(t, Vec{}, Vec{X: 1, Y: 1, Z: 1}))
	if l, err := Redundancy(context.Background(), one, Options{}); err != nil || len(l) != 1 || !math.IsInf(l[0].Radius, 1) || l[0].Takers != nil || l[0].Volume != 1 {
		t.Errorf("%+v, %v", l, err)
	}
}
