package solid

import (
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/predicate"
)

// windingOf counts how often a ring winds around q, which lies on none of its sides.
func windingOf(ring []Vec2, q Vec2) int {
	w := 0
	for i, a := range ring {
		b := ring[(i+1)%len(ring)]
		switch turn := predicate.Orient2D(a, b, q); {
		case a.Y <= q.Y && b.Y > q.Y && turn > 0:
			w++
		case b.Y <= q.Y && a.Y > q.Y && turn < 0:
			w--
		}
	}
	return w
}

// gridPlan draws an outline and holes with corners on a 6 x 6 grid.
func gridPlan(r *rand.Rand) (outer []Vec2, holes [][]Vec2) {
	ring := func(n int) []Vec2 {
		var out []Vec2
		for range n {
			out = append(out, Vec2{X: float64(r.IntN(6)), Y: float64(r.IntN(6))})
		}
		return out
	}
	outer = ring(3 + r.IntN(5))
	switch r.IntN(3) { // plans with room for holes
	case 0:
		outer = rect(0, 0, 5, 5)
	case 1:
		outer = v2(0, 0, 5, 0, 5, 5, 3, 5, 3, 2, 0, 4)
	}
	for range r.IntN(4) {
		if a := ring(2); r.IntN(2) == 0 {
			holes = append(holes, rect(a[0].X, a[0].Y, a[1].X, a[1].Y))
		} else {
			holes = append(holes, ring(3))
		}
	}
	return outer, holes
}

// TestGridPartitions checks laws 1 to 5 on such plans, turned by odd angles, with
// a lattice of sites inside and outside whose cells have the grid's lines as faces or
// the grid's points as corners.
func TestGridPartitions(t *testing.T) {
	r := rand.New(rand.NewPCG(13, 1))
	for n := 0; n < 60; {
		e := example{}
		e.outer, e.holes = gridPlan(r)
		if _, err := NewPrism(e.outer, e.holes, 0, 1); err != nil {
			continue
		}
		n++
		m := motion{}
		if n%3 != 0 {
			m = motion{angle: 2 * math.Pi * r.Float64(), shift: Vec2{X: 9 * r.Float64(), Y: 9 * r.Float64()}}
		}
		e = e.moved(m)
		e.name = fmt.Sprintf("%v, %v, %v", e.outer, e.holes, m)
		s := e.prism(t)
		step := 1 + float64(r.IntN(2)) // faces on every line, or on every second one
		var sites []Vec
		for x := step / 2; x < 5+step/2; x += step {
			for y := step / 2; y < 5+step/2; y += step {
				p := m.plan(Vec2{X: x, Y: y})
				sites = append(sites, Vec{X: p.X, Y: p.Y, Z: 1})
			}
		}
		checkLaws(t, e, s, sites)
	}
}

// checkLaws checks the laws that need no decomposition.
func checkLaws(t *testing.T, e example, s *Prism, sites []Vec) {
	t.Helper()
	var w Work
	var volume, walls sum
	contacts := map[[2]int]float64{}
	for i, p := range sites {
		c := cellOf(sites, i, s)
		var m Measures
		if err := s.Measure(c, p, everything, &w, &m); err != nil {
			t.Fatal(err)
		}
		if v, _ := bySlabs(c, p, e); !near(m.Volume, v, 1e-11) {
			t.Errorf("%s: cell %d: volume %v, the slabs have %v", e.name, i, m.Volume, v)
		}
		if d := divergence(&w, c, &m); !m.Empty && !near(d, m.Volume, 1e-8) {
			t.Errorf("%s: cell %d: the divergence theorem gives %v, the volume is %v", e.name, i, d, m.Volume)
		}
		volume.add(m.Volume)
		walls.add(m.Walls)
		for j := range c.NumFaces() {
			if label, _ := c.Face(j); label >= 0 {
				contacts[[2]int{i, int(label)}] += m.Contacts[j]
			}
		}
	}
	if !near(volume.value(), s.Volume(), 1e-12*s.Volume()) {
		t.Errorf("%s: volumes add up to %v of %v", e.name, volume.value(), s.Volume())
	}
	if !near(walls.value(), s.Area(), 1e-8*s.Area()) {
		t.Errorf("%s: walls add up to %v of %v", e.name, walls.value(), s.Area())
	}
	for ij, a := range contacts {
		if b := contacts[[2]int{ij[1], ij[0]}]; !near(a, b, 1e-8) {
			t.Errorf("%s: contact %v is %v and %v", e.name, ij, a, b)
		}
	}
}

// TestGridPlans draws rings on a small grid, where corners on sides, shared sides,
// spikes and touching rings are the rule, and compares what NewPrism makes of them with
// winding numbers at places that lie on no line through grid points.
func TestGridPlans(t *testing.T) {
	r := rand.New(rand.NewPCG(12, 1))
	// No three grid points of a 6 x 6 grid are in line with such a place.
	var places []Vec2
	for range 60 {
		places = append(places, Vec2{X: 5 * r.Float64(), Y: 5 * r.Float64()})
	}
	faults := map[Fault]int{}
	accepted, holed := 0, 0
	for range 12000 {
		outer, holes := gridPlan(r)
		s, err := NewPrism(outer, holes, 0, 1)
		bad := validByWinding(outer, holes, places)
		if err != nil {
			var f *Error
			if !errors.As(err, &f) {
				t.Fatalf("%v, %v: %v", outer, holes, err)
			}
			faults[f.Fault]++
			if f.Fault == Crossing && !crossIn(append([][]Vec2{outer}, holes...), f) {
				t.Fatalf("%v, %v: %v, but they do not", outer, holes, f)
			}
			continue
		}
		accepted++
		if len(holes) > 0 {
			holed++
		}
		if bad {
			t.Fatalf("%v, %v: accepted, but a ring winds more than once or a hole is outside or overlaps", outer, holes)
		}
		var pieces sum
		for _, q := range s.plan.pieces {
			top, bottom := &s.plan.edges[q.top], &s.plan.edges[q.bottom]
			pieces.add((q.x1 - q.x0) * (top.at(q.x0) - bottom.at(q.x0) + top.at(q.x1) - bottom.at(q.x1)) / 2)
		}
		want := math.Abs(shoelace(outer))
		for _, h := range holes {
			want -= math.Abs(shoelace(h))
		}
		if !near(s.plan.area, want, 1e-13*25) || !near(pieces.value(), want, 1e-13*25) {
			t.Fatalf("%v, %v: area %v, of the pieces %v, want %v", outer, holes, s.plan.area, pieces.value(), want)
		}
		for _, q := range places {
			in := windingOf(outer, q) != 0
			for _, h := range holes {
				in = in && windingOf(h, q) == 0
			}
			if got := s.Side(Vec{X: q.X, Y: q.Y, Z: 0.5}, 0); (got == Inside) != in || got == On {
				t.Fatalf("%v, %v: %v is %v, by winding numbers inside: %v", outer, holes, q, got, in)
			}
		}
		checkReversed(t, s, outer, holes)
	}
	t.Logf("accepted %d, %d of them with holes; refused %v", accepted, holed, faults)
	if accepted < 1000 || holed < 1000 || len(faults) < 7 {
		t.Errorf("accepted %d, %d with holes, refused %v: the draw tests too little", accepted, holed, faults)
	}
}

// crossIn tells whether the two sides that an error names cross, be it at a corner.
func crossIn(rings [][]Vec2, f *Error) bool {
	side := func(k, i int) (a, b Vec2) { return rings[k][i], rings[k][(i+1)%len(rings[k])] }
	a, b := side(f.Ring, f.Side)
	c, d := side(f.OtherRing, f.OtherSide)
	return predicate.Orient2D(a, b, c)*predicate.Orient2D(a, b, d) <= 0 && predicate.Orient2D(c, d, a)*predicate.Orient2D(c, d, b) <= 0
}

func shoelace(ring []Vec2) float64 {
	a := 0.0
	for i, p := range ring {
		a += cross2(p, ring[(i+1)%len(ring)]) / 2
	}
	return a
}

// validByWinding reports places that show a plan to be wrong.
func validByWinding(outer []Vec2, holes [][]Vec2, places []Vec2) (bad bool) {
	for _, q := range places {
		w := windingOf(outer, q)
		bad = bad || w > 1 || w < -1
		inside := 0
		for _, h := range holes {
			v := windingOf(h, q)
			bad = bad || v > 1 || v < -1 || (v != 0 && w == 0)
			if v != 0 {
				inside++
			}
		}
		bad = bad || inside > 1
	}
	return bad
}

// checkReversed: the plan does not depend on the direction or the start of a ring.
func checkReversed(t *testing.T, s *Prism, outer []Vec2, holes [][]Vec2) {
	t.Helper()
	back := slices.Clone(outer)
	slices.Reverse(back)
	back = append(back[1:], back[0])
	var turned [][]Vec2
	for _, h := range holes {
		h = slices.Clone(h)
		slices.Reverse(h)
		turned = append(turned, h)
	}
	o, err := NewPrism(back, turned, 1, 0)
	if err != nil {
		t.Fatalf("%v, %v: refused when reversed: %v", outer, holes, err)
	}
	if o.Key() != s.Key() || o.Facts() != s.Facts() {
		t.Fatalf("%v, %v: reversed it has %+v, not %+v", outer, holes, o.Facts(), s.Facts())
	}
}

// TestOddNumbers: coordinates at the ends of the range are refused or give a solid with
// a finite volume, and never a panic.
func TestOddNumbers(t *testing.T) {
	odd := []float64{0, math.Copysign(0, -1), 5e-324, -5e-324, 1e-300, 1e-150, 1e-30, 1, math.Nextafter(1, 2), -1, 1e16, 1e30, 1e50, -1e50, 1.1e50, math.MaxFloat64, math.Inf(1), math.NaN()}
	r := rand.New(rand.NewPCG(14, 1))
	accepted := 0
	for range 20000 {
		limit := len(odd)
		if r.IntN(4) != 0 {
			limit -= 4
		}
		draw := func() float64 { return odd[r.IntN(limit)] }
		var ring, hole []Vec2
		for range 3 + r.IntN(4) {
			ring = append(ring, Vec2{X: draw(), Y: draw()})
		}
		var holes [][]Vec2
		if r.IntN(2) == 0 {
			for range 3 + r.IntN(2) {
				hole = append(hole, Vec2{X: draw(), Y: draw()})
			}
			holes = append(holes, hole)
		}
		s, err := NewPrism(ring, holes, draw(), draw())
		if err != nil {
			var f *Error
			if !errors.As(err, &f) {
				t.Fatalf("%v, %v: %v", ring, holes, err)
			}
			continue
		}
		accepted++
		if v, a := s.Volume(), s.Area(); !(v > 0 && a > 0) || math.IsInf(v, 0) || math.IsInf(a, 0) {
			t.Fatalf("%v, %v: volume %v, area %v", ring, holes, v, a)
		}
		lo, hi := s.Bounds()
		p := Vec{X: lo.X/2 + hi.X/2, Y: lo.Y/2 + hi.Y/2, Z: lo.Z/2 + hi.Z/2}
		var c polyhedron.Cell
		c.SetBox(sub3(lo, p), sub3(hi, p), [6]int32{-1, -1, -1, -1, -1, -1})
		var w Work
		var m Measures
		if err := s.Measure(&c, p, everything, &w, &m); err != nil {
			t.Fatal(err)
		}
		if !near(m.Volume, s.Volume(), 1e-9*s.Volume()) || !near(m.Walls, s.Area(), 1e-6*s.Area()) {
			t.Fatalf("%v, %v: the solid measures itself as %v and %v, not %v and %v", ring, holes, m.Volume, m.Walls, s.Volume(), s.Area())
		}
	}
	if accepted < 200 {
		t.Errorf("only %d accepted", accepted)
	}
}
