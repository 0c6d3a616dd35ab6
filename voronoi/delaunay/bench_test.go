package delaunay

import (
	"fmt"
	"math/rand/v2"
	"testing"
)

func BenchmarkBuild(b *testing.B) {
	for _, kind := range []string{"uniform", "sphere", "cubic lattice", "lattice of 0.1", "FCC of 0.1", "world in mm", "two far clusters", "nested clusters", "heavy repeats"} {
		for _, threads := range []int{1, 2} {
			b.Run(fmt.Sprintf("%s/%d", kind, threads), func(b *testing.B) {
				const n = 100_000
				sites := kinds[kind](rand.New(rand.NewPCG(1, 1)), n)
				for b.Loop() {
					build(b, sites, threads)
				}
				b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(len(sites)), "ns/site")
			})
		}
	}
}

func BenchmarkQueries(b *testing.B) {
	r := rand.New(rand.NewPCG(2, 2))
	d := build(b, kinds["uniform"](r, 100_000), 1)
	b.Run("locate", func(b *testing.B) {
		for b.Loop() {
			d.Locate(random(r))
		}
	})
	b.Run("nearest", func(b *testing.B) {
		for b.Loop() {
			d.NearestSite(random(r))
		}
	})
	b.Run("insert and remove", func(b *testing.B) {
		for b.Loop() {
			s, err := d.Insert(random(r))
			if err != nil {
				b.Fatal(err)
			}
			if err := d.Remove(s); err != nil {
				b.Fatal(err)
			}
		}
	})
}

func BenchmarkOrder(b *testing.B) {
	sites := kinds["uniform"](rand.New(rand.NewPCG(1, 1)), 1_000_000)
	flat := make([]float64, 0, 3*len(sites))
	for _, s := range sites {
		flat = append(flat, s.X, s.Y, s.Z)
	}
	f, _ := newFrame(flat, 1)
	for b.Loop() {
		insertionOrder(f, flat, 1)
	}
}
