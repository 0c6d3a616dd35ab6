package voronoi_test

import (
	"context"
	"fmt"
	"slices"

	"nearcell/voronoi"
	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// Three loggers in a room of 6 m by 4 m by 3 m: how much of its air is nearest to
// each?
func Example() {
	room, err := solid.NewBox(voronoi.Vec{}, voronoi.Vec{X: 6, Y: 4, Z: 3})
	if err != nil {
		fmt.Println(err)
		return
	}
	loggers := []voronoi.Vec{{X: 1, Y: 2, Z: 1.5}, {X: 3, Y: 2, Z: 1.5}, {X: 4, Y: 2, Z: 1.5}}
	d, err := voronoi.New(loggers, voronoi.Options{Solid: room})
	if err != nil {
		fmt.Println(err)
		return
	}
	cells, err := d.Measure(context.Background(), voronoi.Volume|voronoi.Neighbours|voronoi.WallArea, nil)
	if err != nil {
		fmt.Println(err)
		return
	}
	for i := range loggers {
		fmt.Printf("%.1f m³, %d neighbours, %.1f m² of wall\n", cells.Volume[i], cells.Neighbours[i], cells.WallArea[i])
	}
	fmt.Printf("%.1f m³ in all\n", voronoi.Total(cells.Volume))
	// Output:
	// 24.0 m³, 1 neighbours, 40.0 m² of wall
	// 18.0 m³, 2 neighbours, 21.0 m² of wall
	// 30.0 m³, 1 neighbours, 47.0 m² of wall
	// 72.0 m³ in all
}

func ExampleDiagram_Contacts() {
	sites := []voronoi.Vec{{X: 0}, {X: 1}, {X: 3}}
	room, err := solid.NewBox(voronoi.Vec{X: -1, Y: -1, Z: -1}, voronoi.Vec{X: 4, Y: 1, Z: 1})
	if err != nil {
		fmt.Println(err)
		return
	}
	d, err := voronoi.New(sites, voronoi.Options{Solid: room})
	if err != nil {
		fmt.Println(err)
		return
	}
	err = d.Contacts(context.Background(), nil, func(site int32, contacts []voronoi.Contact) error {
		for _, c := range contacts {
			fmt.Printf("%d-%d: area %g, distance %g, middle at x = %g\n", site, c.Other, c.Area, c.Distance, c.Middle.X)
		}
		return nil
	})
	if err != nil {
		fmt.Println(err)
	}
	// Output:
	// 0-1: area 4, distance 1, middle at x = 0.5
	// 1-0: area 4, distance 1, middle at x = 0.5
	// 1-2: area 4, distance 2, middle at x = 2
	// 2-1: area 4, distance 2, middle at x = 2
}

// The space that one more site would take from its neighbours.
func ExampleDiagram_Insert() {
	var sites []voronoi.Vec
	for i := range 8 {
		sites = append(sites, voronoi.Vec{X: float64(i & 1), Y: float64(i >> 1 & 1), Z: float64(i >> 2)})
	}
	d, err := voronoi.New(sites, voronoi.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	var cell polyhedron.Cell
	if err := d.Insert(voronoi.Vec{X: 0.5, Y: 0.5, Z: 0.5}, &cell); err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("an octahedron of volume %.4f with %d faces\n", cell.Volume(), cell.Shape().Faces())
	// Output: an octahedron of volume 0.5625 with 8 faces
}

// Without a solid the outer cells have no end.
func ExampleDiagram_Facts() {
	d, err := voronoi.New([]voronoi.Vec{{X: 5e6}, {X: 5e6 + 1}, {X: 5e6 + 2}, {X: 5e6 + 1}}, voronoi.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	f := d.Facts()
	fmt.Printf("%d sites at %d places, dimension %d, computed about x = %g\n", f.Sites, f.Distinct, f.Dimension, f.Origin.X)
	for _, g := range f.Groups {
		fmt.Println("at one place:", g.Members)
	}
	// Output:
	// 4 sites at 3 places, dimension 1, computed about x = 5.000001e+06
	// at one place: [1 3]
}

// The tetrahedralisation is the dual of the cells: three sites at the corner of a cube
// and one at its far corner make one tetrahedron.
func ExampleDiagram_Tetrahedra() {
	sites := []voronoi.Vec{{X: 10}, {X: 11}, {X: 10, Y: 1}, {X: 10, Z: 1}, {X: 10}}
	d, err := voronoi.New(sites, voronoi.Options{})
	if err != nil {
		fmt.Println(err)
		return
	}
	t, site, err := d.Tetrahedra(context.Background())
	if err != nil {
		fmt.Println(err)
		return
	}
	for i := range t.NumTets() {
		corners := t.Tet(i)
		for k, c := range corners {
			corners[k] = site(c)
		}
		slices.Sort(corners[:])
		p := func(k int) voronoi.Vec { return sites[corners[k]] }
		m := voronoi.MeasureTetrahedron(p(0), p(1), p(2), p(3))
		fmt.Printf("%d: volume %.4f, sphere of %.4f about %v\n", corners, m.Volume, m.Radius, m.Centre)
	}
	// Output:
	// [0 1 2 3]: volume 0.1667, sphere of 0.8660 about {10.5 0.5 0.5}
}
