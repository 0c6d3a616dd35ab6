package field

import (
	"context"
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
		{"laplace", Options{Method: Laplace}, false},
		{"linear", Options{Method: Linear}, false},
		{"nearest", Options{Method: Nearest}, false},
		{"idw", Options{Method: Distance, Power: 2}, false},
	} {
		b.Run(c.name, func(b *testing.B) {
			f := fieldOf(b, sites, body, c.o)
			if c.open {
				f = fieldOf(b, sites, nil, c.o)
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
	var w Work
	for i := 0; b.Loop(); i++ {
		if _, _, err := f.Without(context.Background(), int32(i%100000), &w); err != nil {
			b.Fatal(err)
		}
	}
}
