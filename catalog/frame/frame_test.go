package frame

import (
	"errors"
	"math"
	"testing"

	"pgregory.net/rapid"
)

func close3(t interface{ Errorf(string, ...any) }, what string, got, want Point, tol float64) {
	for k := range 3 {
		if !(math.Abs(got[k]-want[k]) <= tol) {
			t.Errorf("%s: %v, want %v", what, got, want)
			return
		}
	}
}

// Exact pairs give the similarity back: scale, turn, mirror, in plan and in space, for
// drawings in millimetres with another origin.
func TestFitFindsTheSimilarity(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		angle := rapid.Float64Range(-3, 3).Draw(r, "angle")
		scale := rapid.SampledFrom([]float64{0.001, 0.0254, 1, 25}).Draw(r, "scale")
		mirror := rapid.Bool().Draw(r, "mirror")
		kind := rapid.SampledFrom([]string{"plan", "space", "level"}).Draw(r, "kind")
		want := func(p Point) Point {
			y := p[1]
			if mirror {
				y = -y
			}
			s, c := math.Sincos(angle)
			q := Point{scale*(c*p[0]-s*y) + 1000, scale*(s*p[0]+c*y) - 70, scale*p[2] + 3}
			if kind == "plan" {
				q[2] = p[2]
			}
			return q
		}
		from := []Point{{0, 0, 0}, {30 / scale, 0, 0}, {30 / scale, 18 / scale, 0}, {2 / scale, 15 / scale, 0}}
		if kind == "space" {
			from = append(from, Point{4 / scale, 5 / scale, 7 / scale})
		}
		var to []Point
		for _, p := range from {
			to = append(to, want(p))
		}
		s, residuals, err := Fit(from, to, kind == "plan")
		if err != nil {
			r.Fatal(err)
		}
		if math.Abs(s.Scale-scale) > 1e-12*scale || s.Mirrored != mirror || s.Upright != (kind != "space") {
			r.Fatalf("%+v", s)
		}
		for _, res := range residuals {
			close3(r, "residual", res, Point{}, 1e-9)
		}
		p := Point{11 / scale, 7 / scale, 2 / scale}
		close3(r, "another place", s.Apply(p), want(p), 1e-9)
	})
}

// Three points and their mirror image: the mirror is taken where the data ask for it.
func TestMirrorIsChosenByTheData(t *testing.T) {
	from := []Point{{0, 0}, {1, 0}, {0, 2}}
	to := []Point{{0, 0}, {-1, 0}, {0, 2}}
	s, residuals, err := Fit(from, to, true)
	if err != nil || !s.Mirrored || math.Abs(s.Scale-1) > 1e-12 {
		t.Fatal(s, err)
	}
	for _, r := range residuals {
		close3(t, "residual", r, Point{}, 1e-12)
	}
}

// A pair that is off is seen in the residuals, and least squares are least: any other
// similarity near it has a larger sum.
func TestResidualsAreLeast(t *testing.T) {
	from := []Point{{0, 0}, {30, 0}, {30, 18}, {0, 18}, {15, 9}}
	to := []Point{{0, 0}, {0, 30}, {-18, 30}, {-18, 0}, {-9.2, 15}}
	s, residuals, err := Fit(from, to, true)
	if err != nil {
		t.Fatal(err)
	}
	sum := func(s *Similarity) float64 {
		total := 0.0
		for i, p := range from {
			q := s.Apply(p)
			total += math.Pow(q[0]-to[i][0], 2) + math.Pow(q[1]-to[i][1], 2)
		}
		return total
	}
	worst := 0
	for i, r := range residuals {
		if math.Hypot(r[0], r[1]) > math.Hypot(residuals[worst][0], residuals[worst][1]) {
			worst = i
		}
	}
	if worst != 4 {
		t.Errorf("pair %d is said to be the worst", worst)
	}
	best := sum(s)
	for _, e := range []float64{-1e-4, 1e-4} {
		other := *s
		other.Scale *= 1 + e
		moved := *s
		moved.To[0] += e
		turned := *s
		for k := range 2 {
			turned.Turn[0][k], turned.Turn[1][k] = s.Turn[0][k]-e*s.Turn[1][k], s.Turn[1][k]+e*s.Turn[0][k]
		}
		if sum(&other) <= best || sum(&moved) <= best || sum(&turned) <= best {
			t.Error("another similarity fits better")
		}
	}
}

func TestFitRefuses(t *testing.T) {
	line := []Point{{0, 0, 0}, {1, 1, 0}, {2, 2.0001, 0}, {5, 5, 0}}
	slope := []Point{{0, 0, 0}, {1, 0, 1}, {0, 1, 0}, {1, 1, 1}}
	for _, c := range []struct {
		points []Point
		want   error
	}{{line[:2], ErrFew}, {line, ErrLine}, {slope, ErrPlane}, {[]Point{{}, {}, {}}, ErrLine}, {[]Point{{1}, {0, 1}, {math.NaN()}}, ErrNotFinite}} {
		if _, _, err := Fit(c.points, c.points, false); !errors.Is(err, c.want) {
			t.Errorf("%v: %v, want %v", c.points, err, c.want)
		}
	}
}

// Local metres: a minute of latitude at the equator is 1842.905 m and a degree of
// longitude 111319.491 m (common values of WGS 84, from memory); going up goes up; a
// point at equal height 1.4 km away lies D²/2R lower; the rotation keeps lengths.
func TestEastNorthUp(t *testing.T) {
	at := Origin{0, 0}
	close3(t, "north", at.East(1.0/60, 0, 0), Point{0, 1842.905, 0}, 0.3)
	east := at.East(0, 1, 0)
	if d := axis * math.Sin(math.Pi/180); math.Abs(east[0]-d) > 1e-6 {
		t.Errorf("a degree east is %v, want %v", east[0], d)
	}
	close3(t, "up", Origin{53.55, 10.01}.East(53.55, 10.01, 40), Point{0, 0, 40}, 1e-8)
	far := Origin{47, 8}.East(47+1400.0/111170, 8, 0)
	if math.Abs(far[2]+0.1540) > 0.003 || math.Abs(far[1]-1400) > 2 {
		t.Errorf("1.4 km north at equal height: %v", far)
	}
	for _, o := range []Origin{{0, 0}, {90, 0}, {-90, 77}, {51.5, 179.99}, {-33.9, -179.99}} {
		p, q := Point{51.2, -179.9, 12}, Point{51.3, 179.8, 900}
		a, b := o.East(p[0], p[1], p[2]), o.East(q[0], q[1], q[2])
		u, v := earth(p[0], p[1], p[2]), earth(q[0], q[1], q[2])
		got, want := dist(a, b), dist(u, v)
		if math.Abs(got-want) > 1e-7 {
			t.Errorf("the distance seen from %v is %v, want %v", o, got, want)
		}
	}
}

func dist(a, b Point) float64 {
	return math.Sqrt(math.Pow(a[0]-b[0], 2) + math.Pow(a[1]-b[1], 2) + math.Pow(a[2]-b[2], 2))
}

// Origins do not hang on the order of places, hold at the date line, and surveys of one
// place have one.
func TestOrigin(t *testing.T) {
	o, err := OriginOf([]float64{53.5511, 53.5523}, []float64{9.9937, 9.9951})
	p, _ := OriginOf([]float64{53.5523, 53.5511}, []float64{9.9951, 9.9937})
	if err != nil || o != p || o != (Origin{53.55, 9.99}) {
		t.Error(o, p, err)
	}
	if o, err := OriginOf([]float64{-16.8, -16.8}, []float64{179.96, -179.98}); err != nil || o.Longitude != 179.99 {
		t.Error(o, err)
	}
	for _, c := range []struct {
		lat, lon []float64
		row      int
		fault    GeographicFault
	}{
		{[]float64{53, 139.7}, []float64{10, 35.7}, 1, Swapped},
		{[]float64{53, math.NaN()}, []float64{10, 5}, 1, Latitude},
		{[]float64{53, 200}, []float64{10, 5}, 1, Latitude},
		{[]float64{53}, []float64{400}, 0, Longitude},
		{[]float64{53.1, 53.2, 10.1, 53.3}, []float64{10, 10.1, 53.2, 10.2}, 2, RowSwapped},
		{[]float64{0, 53.2, 53.1, 53.3}, []float64{0, 10.1, 10.2, 10.2}, 0, NoFix},
		{[]float64{53, 53.2, 53.1, 5.3}, []float64{10, 10.1, 10.2, 10.2}, 3, TooFar},
	} {
		var e *GeographicError
		if _, err := OriginOf(c.lat, c.lon); !errors.As(err, &e) || e.Row != c.row || e.Fault != c.fault {
			t.Errorf("%v %v: %v", c.lat, c.lon, err)
		}
	}
	// Far, but of one survey: said elsewhere, and no fault. So is one on the equator.
	for _, lat := range [][]float64{{53, 55}, {0, 0.1, 0.2}} {
		if _, err := OriginOf(lat, []float64{0, 0.1, 0}[:len(lat)]); err != nil {
			t.Error(err)
		}
	}
}
