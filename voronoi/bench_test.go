package voronoi

import (
	"context"
	"testing"

	"nearcell/voronoi/polyhedron"
)

// benchmarkCells measures the volumes of all cells in the unit box and reports the
// time a cell.
func benchmarkCells(b *testing.B, sites []Vec, threads int) {
	b.Helper()
	d := diagram(b, sites, Options{Solid: unitBox, Threads: threads})
	b.ReportAllocs()
	for b.Loop() {
		measure(b, d, Volume)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(sites))/1000, "µs/cell")
}

func BenchmarkCellsUniform100k(b *testing.B)        { benchmarkCells(b, random(100000, 1), 1) }
func BenchmarkCellsUniform100kThreads(b *testing.B) { benchmarkCells(b, random(100000, 1), 0) }
func BenchmarkCellsClustered100k(b *testing.B)      { benchmarkCells(b, clustered(100000, 1), 1) }
func BenchmarkCellsLattice(b *testing.B)            { benchmarkCells(b, grid(46), 1) }
func BenchmarkCellsSheet10k(b *testing.B)           { benchmarkCells(b, sheet(10000, 1), 1) }

func BenchmarkNew100k(b *testing.B) {
	sites := random(100000, 1)
	for b.Loop() {
		diagram(b, sites, Options{Solid: unitBox})
	}
}

func BenchmarkOneCellOf100k(b *testing.B) {
	d := diagram(b, random(100000, 1), Options{Solid: unitBox, Threads: 1})
	want := []int32{4711}
	for b.Loop() {
		if _, err := d.Measure(context.Background(), All, want); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkInsert(b *testing.B) {
	d := diagram(b, random(100000, 1), Options{Solid: unitBox})
	places := random(1000, 2)
	var c polyhedron.Cell
	b.ReportAllocs()
	for i := 0; b.Loop(); i++ {
		if err := d.Insert(places[i%len(places)], &c); err != nil {
			b.Fatal(err)
		}
	}
}
