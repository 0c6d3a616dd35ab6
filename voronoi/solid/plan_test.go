package solid

import (
	"errors"
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

func TestFacts(t *testing.T) {
	const h = testCeiling - testFloor
	for _, e := range examples {
		s := e.prism(t)
		f := s.Facts()
		if !near(s.Volume(), e.area*h, 1e-12*e.area) || !near(s.Area(), 2*e.area+e.length*h, 1e-12*e.area) {
			t.Errorf("%s: volume %v, area %v; want %v, %v", e.name, s.Volume(), s.Area(), e.area*h, 2*e.area+e.length*h)
		}
		if f.Walls != e.walls+2 || f.Pieces != e.parts || f.Holes != e.inner || s.Pieces() != e.parts {
			t.Errorf("%s: %+v; want %d walls, %d pieces, %d holes", e.name, f, e.walls+2, e.parts, e.inner)
		}
		corners := map[string]int{"rectangle": 8, "L": 12, "L with a hole in the corner": 16, "frame": 16,
			"hole touches a side in a corner": 14, "hole touches a corner of the outline": 12, "bow of two rooms through a corner": 14}
		if n, ok := corners[e.name]; ok && f.Corners != n {
			t.Errorf("%s: %d corners, want %d", e.name, f.Corners, n)
		}
		if convex := len(e.convex) == 1; f.Convex != convex || (s.Planes() != nil) != convex {
			t.Errorf("%s: convex %v, planes %v", e.name, f.Convex, s.Planes())
		}
	}
}

// TestRotatedFacts: holes that run along sides stay there when a rotation has rounded
// their corners off the sides.
func TestRotatedFacts(t *testing.T) {
	r := rand.New(rand.NewPCG(4, 4))
	for _, plain := range examples {
		for k := range 200 {
			m := motion{angle: 2 * math.Pi * r.Float64(), shift: Vec2{X: 100 * r.Float64(), Y: 100 * r.Float64()}}
			if k%4 == 0 {
				m.shift = Vec2{X: 5e5 + r.Float64(), Y: 5e6 + r.Float64()}
			}
			s := plain.moved(m).prism(t)
			tol := 1e-12
			if k%4 == 0 {
				tol = 1e-8
			}
			f := s.Facts()
			if f.Walls != plain.walls+2 || f.Pieces != plain.parts || f.Holes != plain.inner || f.Convex != (len(plain.convex) == 1) ||
				!near(s.plan.area, plain.area, tol*plain.area) || !near(s.plan.length, plain.length, 10*tol*plain.length) {
				t.Fatalf("%s under %v: %+v, area %v, length %v", plain.name, m, f, s.plan.area, s.plan.length)
			}
		}
	}
}

// TestKey: the same region has the same key however its rings are written.
func TestKey(t *testing.T) {
	base, err := NewPrism(hall, [][]Vec2{rect(1, 1, 2, 2), rect(5, 5, 6, 7)}, 0, 7.5)
	if err != nil {
		t.Fatal(err)
	}
	turned := append(slices.Clone(hall[2:]), hall[:2]...)
	slices.Reverse(turned)
	closed := append(slices.Clone(turned), turned[0])
	midway := append([]Vec2{hall[0], {X: 15, Y: 0}}, hall[1:]...)
	for name, outer := range map[string][]Vec2{"turned": turned, "closed": closed, "corner on a side": midway, "minus zero": append([]Vec2{{X: math.Copysign(0, -1), Y: 0}}, hall[1:]...)} {
		s, err := NewPrism(outer, [][]Vec2{rect(5, 5, 6, 7), rect(1, 1, 2, 2)}, 7.5, 0)
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		if s.Key() != base.Key() {
			t.Errorf("%s: another key", name)
		}
	}
	for name, f := range map[string]func() (*Prism, error){
		"height": func() (*Prism, error) { return NewPrism(hall, [][]Vec2{rect(1, 1, 2, 2), rect(5, 5, 6, 7)}, 0, 7.25) },
		"hole":   func() (*Prism, error) { return NewPrism(hall, [][]Vec2{rect(1, 1, 2, 2)}, 0, 7.5) },
		"corner": func() (*Prism, error) { return NewPrism(hall, [][]Vec2{rect(1, 1, 2, 2), rect(5, 5, 6, 6)}, 0, 7.5) },
	} {
		s, err := f()
		if err != nil {
			t.Fatal(err)
		}
		if s.Key() == base.Key() {
			t.Errorf("another %s, but the same key", name)
		}
	}
	box, err := NewBox(Vec{X: 1, Y: 2, Z: 3}, Vec{})
	if err != nil {
		t.Fatal(err)
	}
	prism, err := NewPrism(rect(0, 0, 1, 2), nil, 0, 3)
	if err != nil {
		t.Fatal(err)
	}
	if box.Key() != prism.Key() {
		t.Error("a box and the prism that is the same box have different keys")
	}
}

func TestPlanFaults(t *testing.T) {
	inf, nan := math.Inf(1), math.NaN()
	hole := func(h ...[]Vec2) [][]Vec2 { return h }
	tests := []struct {
		name  string
		outer []Vec2
		holes [][]Vec2
		want  Error
	}{
		{"nothing", nil, nil, Error{Fault: FewCorners, Corner: -1, Side: -1, OtherRing: -1, OtherSide: -1, Axis: -1}},
		{"two corners, repeated", v2(0, 0, 1, 0, 1, 0, 0, 0), nil, Error{Fault: FewCorners, Corner: -1, Side: -1, OtherRing: -1, OtherSide: -1, Axis: -1, Count: 2}},
		{"hole of two corners", rect(0, 0, 9, 9), hole(v2(1, 1, 2, 2)), Error{Fault: FewCorners, Ring: 1, Corner: -1, Side: -1, OtherRing: -1, OtherSide: -1, Axis: -1, Count: 2}},
		{"collinear", v2(0, 0, 1, 1, 2, 2), nil, Error{Fault: NoArea, Corner: -1, Side: -1, OtherRing: -1, OtherSide: -1, Axis: -1}},
		{"NaN", v2(0, 0, 1, nan, 1, 1), nil, Error{Fault: NotFinite, Corner: 1, Side: -1, OtherRing: -1, OtherSide: -1, Axis: -1}},
		{"infinite corner of a hole", rect(0, 0, 9, 9), hole(v2(1, 1, 2, 1, inf, 2)), Error{Fault: NotFinite, Ring: 1, Corner: 2, Side: -1, OtherRing: -1, OtherSide: -1, Axis: -1}},
		{"bow tie", v2(0, 0, 2, 2, 2, 0, 0, 2), nil, Error{Fault: NoArea, Corner: -1, Side: -1, OtherRing: -1, OtherSide: -1, Axis: -1}},
		{"lopsided bow tie", v2(0, 0, 4, 4, 4, 0, 0, 3), nil, Error{Fault: Crossing, Corner: -1, Side: 0, OtherRing: 0, OtherSide: 2, Axis: -1, At: Vec2{X: 12. / 7, Y: 12. / 7}}},
		{"spike", v2(0, 0, 4, 0, 4, 3, 4, 6, 4, 3, 0, 3), nil, Error{Fault: Spike, Corner: 3, Side: -1, OtherRing: -1, OtherSide: -1, Axis: -1, At: Vec2{X: 4, Y: 6}}},
		{"spike inwards", v2(0, 0, 4, 0, 2, 0, 2, 2), nil, Error{Fault: Spike, Corner: 1, Side: -1, OtherRing: -1, OtherSide: -1, Axis: -1, At: Vec2{X: 4, Y: 0}}},
		{"keyhole", v2(0, 0, 9, 0, 9, 9, 4, 9, 4, 6, 6, 6, 6, 3, 3, 3, 3, 6, 4, 6, 4, 9, 0, 9), nil, Error{Fault: Overlap, Corner: -1, Side: 3, OtherRing: 0, OtherSide: 9, Axis: -1, At: Vec2{X: 4, Y: 7.5}}},
		{"wound twice", v2(0, 0, 4, 0, 4, 4, 0, 4, 0, 0, 1, -1, 5, -1, 5, 5, -1, 5, -1, -2), nil, Error{Fault: Overlap, Corner: -1, Side: 0, OtherRing: 0, OtherSide: 0, Axis: -1}},
		{"hole outside", rect(0, 0, 4, 4), hole(rect(6, 6, 7, 7)), Error{Fault: HoleOutside, Ring: 1, Corner: -1, Side: -1, OtherRing: -1, OtherSide: -1, Axis: -1}},
		{"second hole outside", rect(0, 0, 4, 4), hole(rect(1, 1, 2, 2), rect(6, 6, 7, 7)), Error{Fault: HoleOutside, Ring: 2, Corner: -1, Side: -1, OtherRing: -1, OtherSide: -1, Axis: -1}},
		{"hole in the notch", hall, hole(rect(20, 13, 22, 14)), Error{Fault: HoleOutside, Ring: 1, Corner: -1, Side: -1, OtherRing: -1, OtherSide: -1, Axis: -1}},
		{"hole against the outside of a wall", rect(0, 0, 4, 4), hole(rect(4, 1, 5, 2)), Error{Fault: HoleOutside, Ring: 1, Corner: -1, Side: -1, OtherRing: -1, OtherSide: -1, Axis: -1}},
		{"hole across a wall", rect(0, 0, 4, 4), hole(rect(3, 1, 5, 2)), Error{Fault: Crossing, Corner: -1, Side: 1, OtherRing: 1, OtherSide: 0, Axis: -1, At: Vec2{X: 4, Y: 1}}},
		{"holes cross", rect(0, 0, 9, 9), hole(rect(1, 1, 4, 4), rect(3, 2, 6, 3)), Error{Fault: Crossing, Ring: 1, Corner: -1, Side: 1, OtherRing: 2, OtherSide: 0, Axis: -1, At: Vec2{X: 4, Y: 2}}},
		{"hole in a hole", rect(0, 0, 9, 9), hole(rect(1, 1, 5, 5), rect(2, 2, 3, 3)), Error{Fault: HolesOverlap, Ring: 1, Corner: -1, Side: -1, OtherRing: 2, OtherSide: -1, Axis: -1}},
		{"the same hole twice", rect(0, 0, 9, 9), hole(rect(1, 1, 5, 5), rect(1, 1, 5, 5)), Error{Fault: HolesOverlap, Ring: 1, Corner: -1, Side: -1, OtherRing: 2, OtherSide: -1, Axis: -1}},
		{"holes overlap along a side", rect(0, 0, 9, 9), hole(rect(1, 1, 5, 5), rect(1, 2, 2, 3)), Error{Fault: HolesOverlap, Ring: 1, Corner: -1, Side: -1, OtherRing: 2, OtherSide: -1, Axis: -1}},
		{"nothing left", rect(0, 0, 4, 4), hole(rect(0, 0, 4, 4)), Error{Fault: NothingLeft, Corner: -1, Side: -1, OtherRing: -1, OtherSide: -1, Axis: -1}},
		{"two holes leave nothing", rect(0, 0, 4, 4), hole(rect(0, 0, 2, 4), rect(2, 0, 4, 4)), Error{Fault: NothingLeft, Corner: -1, Side: -1, OtherRing: -1, OtherSide: -1, Axis: -1}},
	}
	for _, tt := range tests {
		_, err := NewPrism(tt.outer, tt.holes, 0, 1)
		var got *Error
		if !errors.As(err, &got) {
			t.Errorf("%s: %v, want an *Error", tt.name, err)
			continue
		}
		g := *got
		if tt.want.At == (Vec2{}) || distance2(g.At, tt.want.At) < 1e-12 {
			g.At = tt.want.At
		}
		if g != tt.want {
			t.Errorf("%s: %+v, want %+v", tt.name, g, tt.want)
		}
		if g.Error() == "" || g.Fault.String() == "" {
			t.Errorf("%s: no words", tt.name)
		}
	}
}

func TestHeightsAndBoxes(t *testing.T) {
	inf, nan := math.Inf(1), math.NaN()
	for _, z := range [][2]float64{{1, 1}, {0, nan}, {inf, 0}, {-inf, inf}, {1, 1 + 1e-16}, {1e300, 0}} {
		if s, err := NewPrism(hall, nil, z[0], z[1]); err == nil {
			t.Errorf("heights %v make a prism of volume %v", z, s.Volume())
		}
	}
	tests := []struct {
		a, b Vec
		want Fault
		axis int
	}{
		{Vec{}, Vec{X: 1, Y: 1}, NoExtent, 2},
		{Vec{X: 1}, Vec{X: 1, Y: 1, Z: 1}, NoExtent, 0},
		{Vec{X: nan}, Vec{X: 1, Y: 1, Z: 1}, NotFinite, 0},
		{Vec{}, Vec{X: 1, Y: inf, Z: 1}, NotFinite, 1},
		{Vec{X: 5e6}, Vec{X: 5e6 + 1e-9, Y: 1, Z: 1}, NoExtent, 0},
		{Vec{}, Vec{X: 1e-200, Y: 1e-200, Z: 1e-200}, NoExtent, 2},
	}
	for _, tt := range tests {
		_, err := NewBox(tt.a, tt.b)
		var got *Error
		if !errors.As(err, &got) {
			t.Errorf("box %v %v: no error", tt.a, tt.b)
		} else if got.Fault != tt.want || got.Axis != tt.axis {
			t.Errorf("box %v %v: %v on axis %d, want %v on %d", tt.a, tt.b, got.Fault, got.Axis, tt.want, tt.axis)
		}
	}
	a, err1 := NewBox(Vec{X: 3, Y: 0, Z: 7}, Vec{X: 0, Y: 2, Z: 1})
	b, err2 := NewBox(Vec{Z: 1}, Vec{X: 3, Y: 2, Z: 7})
	if err1 != nil || err2 != nil || a.Key() != b.Key() || a.Volume() != 36 || a.Area() != 72 {
		t.Errorf("opposite corners in another order: %v %v", err1, err2)
	}
	tiny, err := NewBox(Vec{X: 1e-9}, Vec{X: 3e-9, Y: 1e-9, Z: 1e-9})
	if err != nil || !near(tiny.Volume(), 2e-27, 1e-42) {
		t.Errorf("a small box: %v", err)
	}
}

// TestSide compares the exact side with the decomposition and looks at corners, sides
// and places one step beside them.
func TestSide(t *testing.T) {
	for _, e := range examples {
		s := e.prism(t)
		r := rand.New(rand.NewPCG(2, 6))
		lo, hi := s.Bounds()
		for range 400 {
			p := Vec{X: lo.X - 1 + r.Float64()*(hi.X-lo.X+2), Y: lo.Y - 1 + r.Float64()*(hi.Y-lo.Y+2), Z: lo.Z + r.Float64()*(hi.Z-lo.Z)}
			in := false
			for _, ring := range e.convex {
				left := true
				for i, a := range ring {
					b := ring[(i+1)%len(ring)]
					left = left && cross2(sub2(b, a), sub2(Vec2{X: p.X, Y: p.Y}, a)) >= 0
				}
				in = in || left
			}
			if want := map[bool]Side{true: Inside, false: Outside}[in]; s.Side(p, 0) != want {
				t.Errorf("%s: %v is %v, want %v", e.name, p, s.Side(p, 0), want)
			}
			d := s.Distance(p)
			if s.Side(p, d*1.000001) != On || s.Side(p, d*0.999999) == On {
				t.Errorf("%s: %v at the distance %v is not on the surface for just this tolerance", e.name, p, d)
			}
		}
		for _, edge := range s.plan.edges {
			for _, q := range []Vec2{edge.a, edge.b} {
				if got := s.Side(Vec{X: q.X, Y: q.Y, Z: 1}, 0); got != On {
					t.Errorf("%s: corner %v is %v", e.name, q, got)
				}
			}
		}
	}
	s := example{outer: hall, holes: [][]Vec2{rect(0, 0, 4, 3)}}.prism(t)
	for _, tt := range []struct {
		p    Vec
		tol  float64
		want Side
		dist float64
	}{
		{Vec{X: 2, Y: 0, Z: 1}, 0, Outside, 2}, // the outline under the plant room is no wall any more
		{Vec{X: 0, Y: 0, Z: 1}, 0, Outside, 3},
		{Vec{X: 4, Y: 0, Z: 1}, 0, On, 0},
		{Vec{X: 4, Y: 1.5, Z: 1}, 0, On, 0},
		{Vec{X: math.Nextafter(4, 5), Y: 1.5, Z: 1}, 0, Inside, math.Nextafter(4, 5) - 4},
		{Vec{X: math.Nextafter(4, 3), Y: 1.5, Z: 1}, 0, Outside, 4 - math.Nextafter(4, 3)},
		{Vec{X: 10, Y: 5, Z: testFloor}, 0, On, 0},
		{Vec{X: 10, Y: 5, Z: testCeiling}, 0, On, 0},
		{Vec{X: 10, Y: 5, Z: testCeiling + 0.25}, 0, Outside, 0.25},
		{Vec{X: 10, Y: 5, Z: testCeiling + 0.25}, 0.25, On, 0.25},
		{Vec{X: 10, Y: 5, Z: testCeiling - 0.25}, 0.3, On, 0.25},
		{Vec{X: 33, Y: 5, Z: testCeiling + 4}, 4.9, Outside, 5},
		{Vec{X: 33, Y: 5, Z: testCeiling + 4}, 5, On, 5},
		{Vec{X: 24, Y: 15, Z: 1}, 0, Outside, 3},
		{Vec{X: math.NaN(), Y: 15, Z: 1}, 0, Outside, math.NaN()},
	} {
		if got := s.Side(tt.p, tt.tol); got != tt.want {
			t.Errorf("%v within %v: %v, want %v", tt.p, tt.tol, got, tt.want)
		}
		if got := s.Distance(tt.p); math.IsNaN(got) != math.IsNaN(tt.dist) || math.Abs(got-tt.dist) > 1e-12 {
			t.Errorf("distance of %v: %v, want %v", tt.p, got, tt.dist)
		}
	}
}

func TestPlanesAreTheSolid(t *testing.T) {
	s := examples[1].prism(t)
	r := rand.New(rand.NewPCG(1, 1))
	lo, hi := s.Bounds()
	for range 500 {
		p := Vec{X: lo.X + r.Float64()*(hi.X-lo.X), Y: lo.Y + r.Float64()*(hi.Y-lo.Y), Z: lo.Z - 1 + r.Float64()*(hi.Z-lo.Z+2)}
		in := true
		for _, w := range s.Planes() {
			in = in && w.N.X*p.X+w.N.Y*p.Y+w.N.Z*p.Z <= w.D
			if !near(norm3(w.N), 1, 1e-15) {
				t.Fatalf("the normal %v is not a unit vector", w.N)
			}
		}
		if in != (s.Side(p, 0) == Inside) {
			t.Errorf("%v: behind all planes %v, but %v", p, in, s.Side(p, 0))
		}
	}
}

// TestPieces: pieces reach from edge to edge, not only from corner to corner.
func TestPieces(t *testing.T) {
	want := map[string]int{"rectangle": 1, "L": 2, "L with a hole in the corner": 3, "frame": 4, "triangle and square holes": 8}
	for _, e := range examples {
		s := e.prism(t)
		if n, ok := want[e.name]; ok && len(s.plan.pieces) != n {
			t.Errorf("%s: %d pieces, want %d", e.name, len(s.plan.pieces), n)
		}
		var area sum
		for _, q := range s.plan.pieces {
			top, bottom := &s.plan.edges[q.top], &s.plan.edges[q.bottom]
			area.add((q.x1 - q.x0) * (top.at(q.x0) - bottom.at(q.x0) + top.at(q.x1) - bottom.at(q.x1)) / 2)
		}
		if !near(area.value(), e.area, 1e-12*e.area) {
			t.Errorf("%s: the pieces have the area %v, want %v", e.name, area.value(), e.area)
		}
	}
}

// TestOffset: a wall's plane goes through both of its ends, seen from either.
func TestOffset(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 9))
	for range 100 {
		m := motion{angle: 2 * math.Pi * r.Float64(), shift: Vec2{X: 5e5, Y: 5e6}}
		s := examples[2].moved(m).prism(t)
		for i := range s.plan.edges {
			e := &s.plan.edges[i]
			for _, p := range []Vec2{e.a, e.b} {
				if d := e.offset(Vec{X: p.X, Y: p.Y}); d != 0 {
					t.Fatalf("the wall %v %v is %v away from its end", e.a, e.b, d)
				}
			}
		}
	}
}
