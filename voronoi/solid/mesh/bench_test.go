package mesh_test

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi"
	"nearcell/voronoi/solid"
	"nearcell/voronoi/solid/mesh"
)

// pebble is a closed surface of about n triangles, wrinkled and not convex.
func pebble(n int) ([]solid.Vec, [][3]int32) {
	rows := max(4, int(math.Sqrt(float64(n)/4)))
	cols := 2 * rows
	v := []solid.Vec{{Z: 10}}
	for i := 1; i < rows; i++ {
		for j := range cols {
			a, b := math.Pi*float64(i)/float64(rows), 2*math.Pi*float64(j)/float64(cols)
			r := 10 + math.Sin(5*a)*math.Cos(4*b)
			v = append(v, solid.Vec{X: r * math.Sin(a) * math.Cos(b), Y: r * math.Sin(a) * math.Sin(b), Z: r * math.Cos(a)})
		}
	}
	last := int32(len(v))
	v = append(v, solid.Vec{Z: -10})
	at := func(i, j int) int32 { return int32(1 + (i-1)*cols + j%cols) }
	var t [][3]int32
	for j := range cols {
		t = append(t, [3]int32{0, at(1, j), at(1, j+1)}, [3]int32{last, at(rows-1, j+1), at(rows-1, j)})
		for i := 1; i < rows-1; i++ {
			t = append(t, [3]int32{at(i, j), at(i+1, j), at(i+1, j+1)}, [3]int32{at(i, j), at(i+1, j+1), at(i, j+1)})
		}
	}
	return v, t
}

// BenchmarkCells measures all cells of n sites in a mesh of about t triangles, all
// measures of them.
func BenchmarkCells(b *testing.B) {
	for _, c := range [][2]int{
		{1000, 1000}, {10000, 1000}, {100000, 1000}, {1000, 10000}, {10000, 10000}, {100000, 10000}, {1000, 100000}, {10000, 100000}, {100000, 100000},
	} {
		v, t := pebble(c[0])
		m, err := mesh.Restore(v, t, 0)
		if err != nil {
			b.Fatal(err)
		}
		r := rand.New(rand.NewPCG(1, 1))
		var sites []solid.Vec
		for len(sites) < c[1] {
			p := solid.Vec{X: r.Float64()*22 - 11, Y: r.Float64()*22 - 11, Z: r.Float64()*22 - 11}
			if m.Side(p, 0) == solid.Inside {
				sites = append(sites, p)
			}
		}
		b.Run(fmt.Sprintf("triangles=%d/sites=%d", len(t), c[1]), func(b *testing.B) {
			for range b.N {
				d, err := voronoi.New(sites, voronoi.Options{Solid: m})
				if err != nil {
					b.Fatal(err)
				}
				cells, err := d.Measure(context.Background(), voronoi.All, nil)
				if err != nil {
					b.Fatal(err)
				}
				total := 0.0
				for _, x := range cells.Volume {
					total += x
				}
				if math.Abs(total-m.Volume()) > 1e-10*m.Volume() {
					b.Fatalf("the cells have %v of %v", total, m.Volume())
				}
			}
		})
	}
}

// BenchmarkNew tests a mesh of t triangles: edges, components, overlaps.
func BenchmarkNew(b *testing.B) {
	for _, n := range []int{10000, 100000} {
		v, t := pebble(n)
		b.Run(fmt.Sprintf("triangles=%d", len(t)), func(b *testing.B) {
			for range b.N {
				if _, _, err := mesh.New(v, t, mesh.Options{}); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

// BenchmarkMinus takes a box out of a mesh of t triangles.
func BenchmarkMinus(b *testing.B) {
	for _, n := range []int{10000, 100000} {
		v, t := pebble(n)
		m, err := mesh.Restore(v, t, 0)
		if err != nil {
			b.Fatal(err)
		}
		box, err := solid.NewBox(solid.Vec{X: 2, Y: 2, Z: 2}, solid.Vec{X: 20, Y: 20, Z: 20})
		if err != nil {
			b.Fatal(err)
		}
		b.Run(fmt.Sprintf("triangles=%d", len(t)), func(b *testing.B) {
			for range b.N {
				if _, err := mesh.Combine(mesh.Minus, m, box); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
