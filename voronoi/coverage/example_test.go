package coverage_test

import (
	"context"
	"fmt"

	"nearcell/voronoi"
	"nearcell/voronoi/coverage"
	"nearcell/voronoi/solid"
)

func ExampleGaps() {
	room, err := solid.NewBox(solid.Vec{}, solid.Vec{X: 8, Y: 4, Z: 3})
	if err != nil {
		fmt.Println(err)
		return
	}
	sites := []voronoi.Vec{{X: 2, Y: 2, Z: 1.5}, {X: 5, Y: 2, Z: 1.5}}
	d, err := voronoi.New(sites, voronoi.Options{Solid: room})
	if err != nil {
		fmt.Println(err)
		return
	}
	gaps, err := coverage.Gaps(context.Background(), d, sites, coverage.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, g := range gaps[:5] {
		fmt.Printf("%v: %.3f from site %d (%v)\n", g.At, g.Radius, g.Site, g.Place)
	}
	// Output:
	// {8 0 0}: 3.905 from site 1 (corner)
	// {8 0 3}: 3.905 from site 1 (corner)
	// {8 4 0}: 3.905 from site 1 (corner)
	// {8 4 3}: 3.905 from site 1 (corner)
	// {0 0 0}: 3.202 from site 0 (corner)
}
