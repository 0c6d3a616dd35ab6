package mesh

import (
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/solid"
)

// torus is a frame: a box with a shaft through it, as one surface.
func torus() *soup {
	s := &soup{}
	at := func(x, y, z float64) Vec { return Vec{X: x, Y: y, Z: z} }
	outer := [4][2]float64{{0, 0}, {6, 0}, {6, 6}, {0, 6}}
	inner := [4][2]float64{{2, 2}, {4, 2}, {4, 4}, {2, 4}}
	for i := range 4 {
		a, b, c, d := outer[i], outer[(i+1)%4], inner[(i+1)%4], inner[i]
		s.polygon(at(a[0], a[1], 0), at(b[0], b[1], 0), at(b[0], b[1], 2), at(a[0], a[1], 2))
		s.polygon(at(c[0], c[1], 0), at(d[0], d[1], 0), at(d[0], d[1], 2), at(c[0], c[1], 2))
		s.polygon(at(a[0], a[1], 2), at(b[0], b[1], 2), at(c[0], c[1], 2), at(d[0], d[1], 2))
		s.polygon(at(d[0], d[1], 0), at(c[0], c[1], 0), at(b[0], b[1], 0), at(a[0], a[1], 0))
	}
	return s
}

// schoenhardt is the prism over a triangle, twisted by 30°, that has no tetrahedralisation
// of its own corners (Schönhardt 1928).
func schoenhardt() *soup {
	s := &soup{}
	var low, high [3]Vec
	for k := range 3 {
		a := 2 * math.Pi * float64(k) / 3
		low[k] = Vec{X: math.Cos(a), Y: math.Sin(a)}
		high[k] = Vec{X: math.Cos(a + math.Pi/6), Y: math.Sin(a + math.Pi/6), Z: 1}
	}
	s.polygon(low[2], low[1], low[0])
	s.polygon(high[0], high[1], high[2])
	for k := range 3 {
		j := (k + 1) % 3
		s.polygon(low[k], low[j], high[k])
		s.polygon(low[j], high[j], high[k])
	}
	return s
}

// Solids of all kinds, as they are, rotated, refined and far away.
func TestLaws(t *testing.T) {
	void := block(Vec{}, Vec{X: 4, Y: 4, Z: 4}).plus(block(Vec{X: 1, Y: 1, Z: 1}, Vec{X: 3, Y: 3, Z: 3}).turned())
	for _, c := range []struct {
		name          string
		s             *soup
		volume        float64
		pieces, voids int
	}{
		{"frame", torus(), 64, 1, 0},
		{"void", void, 56, 1, 1},
		{"a solid in the void", void.plus(block(Vec{X: 1.5, Y: 1.5, Z: 1.5}, Vec{X: 2.5, Y: 2.5, Z: 2.5})), 57, 2, 1},
		{"touching in an edge", block(Vec{}, Vec{X: 2, Y: 2, Z: 2}).plus(block(Vec{X: 2, Y: 2}, Vec{X: 4, Y: 4, Z: 2})), 16, 2, 0},
		{"touching in a corner", block(Vec{}, Vec{X: 2, Y: 2, Z: 2}).plus(block(Vec{X: 2, Y: 2, Z: 2}, Vec{X: 4, Y: 4, Z: 4})), 16, 2, 0},
		{"touching in a face", block(Vec{}, Vec{X: 2, Y: 2, Z: 2}).plus(block(Vec{X: 2}, Vec{X: 4, Y: 2, Z: 2})), 16, 1, 0},
		{"touching in a part of a face", block(Vec{}, Vec{X: 2, Y: 2, Z: 2}).plus(block(Vec{X: 2, Y: 0.5, Z: 0.5}, Vec{X: 4, Y: 1.5, Z: 1.5})), 10, 1, 0},
		{"Schönhardt", schoenhardt(), 0, 1, 0},
	} {
		m := c.s.mesh(t)
		if c.volume > 0 {
			near(t, c.name+": volume", m.Volume(), c.volume, 1e-12*c.volume)
		}
		if m.Pieces() != c.pieces || m.Facts().Voids != c.voids {
			t.Errorf("%s: %d pieces, %d voids", c.name, m.Pieces(), m.Facts().Voids)
		}
		r := rand.New(rand.NewPCG(2, 2))
		sites := sitesIn(r, m, 16)
		plain := laws(t, c.name, m, sites)
		laws(t, c.name+", lattice", m, lattice(Vec{X: 1, Y: 1, Z: 0.5}, Vec{X: 2, Y: 2, Z: 1}, 2, 2, 2))
		if c.name != "touching in a part of a face" { // refined, its rim no longer is one of the other face
			same(t, c.name+", refined", c.s.split().mesh(t), m, sites)
		}
		move := rotation(r, Vec{X: 30, Y: -20, Z: 5})
		var turned []Vec
		for _, p := range sites {
			turned = append(turned, move(p))
		}
		if c.name == "touching in a part of a face" || c.name == "touching in a face" {
			continue // their faces coincide no longer
		}
		for i, x := range laws(t, c.name+", rotated", c.s.moved(move).mesh(t), turned) {
			near(t, c.name+", rotated: a cell", x.Volume, plain[i].Volume, 1e-11*m.Volume())
			near(t, c.name+", rotated: its walls", x.Walls, plain[i].Walls, 1e-8*m.Area())
			near(t, c.name+", rotated: its farthest point", x.Farthest, plain[i].Farthest, 1e-8)
		}
		laws(t, c.name+", far away", c.s.moved(func(v Vec) Vec { return add(v, Vec{X: 5e5, Y: 4e5, Z: 100}) }).mesh(t), afar(sites))
	}
}

func afar(sites []Vec) []Vec {
	var out []Vec
	for _, p := range sites {
		out = append(out, add(p, Vec{X: 5e5, Y: 4e5, Z: 100}))
	}
	return out
}

func TestFaults(t *testing.T) {
	b := block(Vec{}, Vec{X: 2, Y: 2, Z: 2})
	refused := func(name string, s *soup, want Fault) *Error {
		t.Helper()
		var e *Error
		if _, _, err := New(s.v, s.t, Options{}); !errors.As(err, &e) || e.Fault != want {
			t.Errorf("%s: %v", name, err)
			return &Error{}
		}
		return e
	}
	for i := range b.t {
		open := &soup{v: b.v, t: append(append([][3]int32{}, b.t[:i]...), b.t[i+1:]...)}
		e := refused("without a triangle", open, Leak)
		if e.Count != 3 || len(e.Edges) != 3 || math.Abs(e.Length-(4+math.Sqrt(8))) > 1e-12 || e.Junctions != 0 {
			t.Errorf("without triangle %d: %+v", i, e)
		}
	}
	one := &soup{v: b.v, t: append([][3]int32{}, b.t...)}
	one.t[3] = [3]int32{one.t[3][0], one.t[3][2], one.t[3][1]}
	if e := refused("a triangle turned over", one, Leak); e.Turned != 3 {
		t.Errorf("a triangle turned over: %+v", e)
	}
	junction := &soup{v: b.v, t: append([][3]int32{}, b.t[1:]...)}
	p, q, r := b.v[b.t[0][0]], b.v[b.t[0][1]], b.v[b.t[0][2]]
	middle := scale(0.5, add(p, q))
	junction.polygon(p, middle, r)
	junction.polygon(middle, q, r)
	if e := refused("a side divided on one side", junction, Leak); e.Junctions == 0 || e.At != middle {
		t.Errorf("a side divided on one side: %+v", e)
	}
	refused("crossing", b.plus(block(Vec{X: 1, Y: 1, Z: 1}, Vec{X: 3, Y: 3, Z: 3})), Overlap)
	refused("crossing in line", b.plus(block(Vec{X: 1}, Vec{X: 3, Y: 2, Z: 2})), Overlap)
	refused("twice", b.plus(b), Overlap)
	refused("one in the other", b.plus(block(Vec{X: 0.5, Y: 0.5, Z: 0.5}, Vec{X: 1, Y: 1, Z: 1})), Nested)
	refused("nothing", &soup{v: b.v}, Empty)
	refused("nowhere", &soup{v: []Vec{{X: math.NaN()}, {}, {}}, t: [][3]int32{{0, 1, 2}}}, NotFinite)
	refused("no corner", &soup{v: []Vec{{}}, t: [][3]int32{{0, 1, 2}}}, NoCorner)
}

// What is inside out is turned, and what is apart by less than WELD joined, and both are
// told.
func TestRepairs(t *testing.T) {
	b := block(Vec{}, Vec{X: 2, Y: 2, Z: 2})
	m, report, err := New(b.turned().v, b.turned().t, Options{})
	if err != nil || m.Volume() != 8 || !report.InsideOut {
		t.Errorf("inside out: %v %+v", err, report)
	}
	both := b.plus(block(Vec{X: 5}, Vec{X: 6, Y: 1, Z: 1}).turned())
	if m, report, err = New(both.v, both.t, Options{}); err != nil || m.Volume() != 9 || report.InsideOut || report.Flipped != 1 || m.Pieces() != 2 {
		t.Errorf("one of two inside out: %v %+v", err, report)
	}
	r := rand.New(rand.NewPCG(1, 9))
	rough := &soup{t: b.t}
	for _, p := range b.v {
		rough.v = append(rough.v, add(p, scale(1e-5, Vec{X: r.Float64(), Y: r.Float64(), Z: r.Float64()})))
	}
	if _, _, err := New(rough.v, rough.t, Options{}); err == nil {
		t.Error("corners apart are taken for one without being asked")
	}
	m, report, err = New(rough.v, rough.t, Options{Weld: 1e-4})
	if err != nil || math.Abs(m.Volume()-8) > 1e-3 || report.Welded != 16 || !(report.Farthest > 0 && report.Farthest < 2e-5) {
		t.Errorf("welded: %v %+v", err, report)
	}
	s, err := solid.Stretch(torus().mesh(t), Vec{X: 1, Y: 1, Z: 5})
	if err != nil || math.Abs(s.Volume()-5*64) > 1e-9 {
		t.Errorf("stretched: %v", err)
	}
}
