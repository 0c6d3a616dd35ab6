package coverage

import (
	"context"
	"fmt"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi"
	"nearcell/voronoi/solid"
)

func BenchmarkGaps(b *testing.B) {
	r := rand.New(rand.NewPCG(1, 2))
	rooms := []struct {
		name string
		body solid.Solid
	}{
		{"box", box(b, Vec{}, Vec{X: 10, Y: 8, Z: 4})},
		{"L", newRoom(b, r, true).solid},
	}
	for _, room := range rooms {
		for _, n := range []int{54, 1000, 20000} {
			sites := make([]Vec, n)
			for i := range sites {
				sites[i] = placeIn(room.body, r)
			}
			d, err := voronoi.New(sites, voronoi.Options{Solid: room.body})
			if err != nil {
				b.Fatal(err)
			}
			b.Run(fmt.Sprintf("%s/%d", room.name, n), func(b *testing.B) {
				found := 0
				for b.Loop() {
					g, err := Gaps(context.Background(), d, sites, Options{Threads: 1})
					if err != nil {
						b.Fatal(err)
					}
					found = len(g)
				}
				b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*n)/1000, "µs/site")
				b.ReportMetric(float64(found), "gaps")
			})
		}
	}
}
