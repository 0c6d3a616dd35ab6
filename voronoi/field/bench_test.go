package field

import (
	"context"
	"fmt"
	"testing"
)

// A hundred thousand random sites in the unit cube; one estimate, or one site left out,
// a round.
func BenchmarkAt(b *testing.B) {
	sites, places := random(100000, 1), random(10000, 2)
	body := box(b, v(0, 0, 0), v(1, 1, 1))
	for _, c := range []struct {
		name string
		o    Options
		open bool
	}{
		{"sibson", Options{}, false}, {"sibson/open", Options{}, true},
		{"laplace", Options{Method: Laplace}, false}, {"laplace/open", Options{Method: Laplace}, true},
		{"linear", Options{Method: Linear}, false},
		{"nearest", Options{Method: Nearest}, false},
		{"idw", Options{Method: Distance, Power: 2}, false},
	} {
		b.Run(c.name, func(b *testing.B) {
			f := fieldOf(b, sites, body, c.o)
			if c.open {
				f = fieldOf(b, sites, nil, c.o)
			}
			if err := f.Prepare(context.Background(), 100000); err != nil {
				b.Fatal(err)
			}
			var w Work
			for i := 0; b.Loop(); i++ {
				if _, _, err := f.At(context.Background(), places[i%len(places)], &w); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}

func BenchmarkWithout(b *testing.B) {
	f := fieldOf(b, random(100000, 1), box(b, v(0, 0, 0), v(1, 1, 1)), Options{})
	if err := f.Prepare(context.Background(), 100000); err != nil {
		b.Fatal(err)
	}
	var w Work
	for i := 0; b.Loop(); i++ {
		if _, _, err := f.Without(context.Background(), int32(i%100000), &w); err != nil {
			b.Fatal(err)
		}
	}
}

// A hundred thousand estimates at random places as they are asked for together, on all
// processors; the tetrahedralisation is at hand.
func BenchmarkEachAt(b *testing.B) {
	sites, places := random(100000, 1), random(100000, 2)
	body := box(b, v(0, 0, 0), v(1, 1, 1))
	for _, m := range []Method{Sibson, Laplace, Linear} {
		for _, threads := range []int{1, 2} {
			b.Run(fmt.Sprintf("%v/%d", m, threads), func(b *testing.B) {
				f := fieldOf(b, sites, body, Options{Method: m})
				if err := f.Prepare(context.Background(), len(places)); err != nil {
					b.Fatal(err)
				}
				for b.Loop() {
					err := f.EachAt(context.Background(), places, Run{Threads: threads}, func(int, Place, []Weight) error { return nil })
					if err != nil {
						b.Fatal(err)
					}
				}
				b.ReportMetric(float64(b.Elapsed().Nanoseconds())/1e3/float64(b.N)/float64(len(places)), "µs/place")
			})
		}
	}
}
