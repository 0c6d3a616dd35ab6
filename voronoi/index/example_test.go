package index_test

import (
	"fmt"

	"nearcell/voronoi/index"
)

func Example() {
	tree := index.New([]index.Vec{{X: 3}, {X: 1}, {X: 2}, {X: 8}})
	for _, n := range tree.KNearest(index.Vec{X: 2.2}, 2, nil, nil) {
		fmt.Printf("input %d at %.2f\n", tree.Original(n.Point), n.Dist2)
	}
	// Output:
	// input 2 at 0.04
	// input 0 at 0.64
}
