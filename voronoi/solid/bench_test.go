package solid

import (
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/polyhedron"
)

func benchMeasure(b *testing.B, s Solid, want Want) {
	sites := sitesIn(rand.New(rand.NewPCG(1, 1)), s, 200)
	cells := make([]*polyhedron.Cell, len(sites))
	for i := range sites {
		cells[i] = cellOf(sites, i, s)
	}
	var w Work
	var m Measures
	b.ReportAllocs()
	for i := 0; b.Loop(); i++ {
		k := i % len(cells)
		if err := s.Measure(cells[k], sites[k], want, &w, &m); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkMeasure(b *testing.B) {
	for _, e := range []example{examples[0], examples[3], examples[7]} {
		s := e.prism(b)
		b.Run(e.name+"/volume", func(b *testing.B) { benchMeasure(b, s, WantVolume) })
		b.Run(e.name+"/everything", func(b *testing.B) { benchMeasure(b, s, everything) })
	}
	var ring []Vec2
	for i := range 256 {
		s, c := math.Sincos(2 * math.Pi * float64(i) / 256)
		ring = append(ring, Vec2{X: 10 * c, Y: 10 * s})
	}
	round, err := NewPrism(ring, nil, 0, 3)
	if err != nil {
		b.Fatal(err)
	}
	b.Run("round hall of 256 sides/everything", func(b *testing.B) { benchMeasure(b, round, everything) })
}

func BenchmarkClipConvex(b *testing.B) {
	s, err := NewBox(Vec{}, Vec{X: 10, Y: 8, Z: 3})
	if err != nil {
		b.Fatal(err)
	}
	sites := sitesIn(rand.New(rand.NewPCG(1, 1)), s, 200)
	cells := make([]*polyhedron.Cell, len(sites))
	for i := range sites {
		cells[i] = cellOf(sites, i, s)
	}
	var c polyhedron.Cell
	b.ReportAllocs()
	for i := 0; b.Loop(); i++ {
		k := i % len(cells)
		c.CopyFrom(cells[k])
		s.ClipConvex(&c, sites[k])
	}
}

func BenchmarkSide(b *testing.B) {
	s := examples[3].prism(b)
	r := rand.New(rand.NewPCG(1, 1))
	pts := make([]Vec, 1024)
	for i := range pts {
		pts[i] = Vec{X: 30 * r.Float64(), Y: 18 * r.Float64(), Z: 1}
	}
	n := 0
	for i := 0; b.Loop(); i++ {
		n += int(s.Side(pts[i&1023], 0))
	}
	_ = n
}

func BenchmarkNewPrism(b *testing.B) {
	b.ReportAllocs()
	for b.Loop() {
		if _, err := NewPrism(hall, [][]Vec2{rect(0, 0, 4, 3)}, 0, 7.5); err != nil {
			b.Fatal(err)
		}
	}
}
