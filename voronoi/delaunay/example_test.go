package delaunay_test

import (
	"context"
	"fmt"

	"gonum.org/v1/gonum/spatial/r3"

	"nearcell/voronoi/delaunay"
)

// The corners of a cube and its centre: twelve tetrahedra around the centre, two at
// each side of the cube.
func ExampleBuild() {
	sites := []r3.Vec{{X: 1, Y: 1, Z: 1}}
	for i := range 8 {
		sites = append(sites, r3.Vec{X: float64(i & 1 * 2), Y: float64(i & 2), Z: float64(i & 4 / 2)})
	}
	t, err := delaunay.Build(context.Background(), sites, delaunay.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Println(t.NumTets(), "tetrahedra,", t.NumGhosts(), "facets of the hull")
	fmt.Println("neighbours of the centre:", t.Neighbours(0, nil))
	// Output:
	// 12 tetrahedra, 12 facets of the hull
	// neighbours of the centre: [1 2 3 4 5 6 7 8]
}

// Sites in a plane are a value, not a failure.
func ExampleT_Dimension() {
	sites := []r3.Vec{{X: 0}, {X: 1}, {Y: 1}, {X: 1, Y: 1}}
	t, _ := delaunay.Build(context.Background(), sites, delaunay.Options{})
	fmt.Println(t.Dimension(), t.NumTets(), t.NearestSite(r3.Vec{X: .9, Y: .2, Z: 7}))
	// Output: 2 0 1
}

func ExampleT_NearestSite() {
	sites := []r3.Vec{{X: 1}, {X: 3}, {Y: 2}, {Z: 2}, {X: 1, Y: 1, Z: 1}}
	t, _ := delaunay.Build(context.Background(), sites, delaunay.Options{})
	fmt.Println(t.NearestSite(r3.Vec{X: 2.5, Y: 1}))
	// 2, 0, 0 lies between sites 0 and 1: the lower one.
	fmt.Println(t.NearestSite(r3.Vec{X: 2}))
	// Output:
	// 1
	// 0
}

// A site goes and comes back: the same tetrahedra.
func ExampleT_Remove() {
	var sites []r3.Vec
	for i := range 27 {
		sites = append(sites, r3.Vec{X: float64(i % 3), Y: float64(i / 3 % 3), Z: float64(i / 9)})
	}
	t, _ := delaunay.Build(context.Background(), sites, delaunay.Options{})
	before := t.Fingerprint()
	_ = t.Remove(13)
	fmt.Println(t.NumTets(), t.Fingerprint() == before)
	again, _ := t.Insert(sites[13])
	fmt.Println(t.NumTets(), again, t.Fingerprint() == before)
	// Output:
	// 44 false
	// 48 27 true
}

func ExampleEstimate() {
	fmt.Println(delaunay.Estimate(1_000_000)/1_000_000, "MB for a million sites")
	_, err := delaunay.Build(context.Background(), make([]r3.Vec, 1000), delaunay.Options{Memory: 100_000})
	fmt.Println(err)
	// Output:
	// 518 MB for a million sites
	// delaunay: the tetrahedralisation needs 779943 bytes, more than the limit of 100000
}
