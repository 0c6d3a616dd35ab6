package coverage

import (
	"context"
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi"
	"nearcell/voronoi/solid"
)

// Gaps of stretched distances are local maxima of these, told with the true distance to
// the truly nearest site.
func TestStretchedGaps(t *testing.T) {
	hall, err := solid.NewPrism([]solid.Vec2{{}, {X: 30}, {X: 30, Y: 12}, {X: 18, Y: 12}, {X: 18, Y: 18}, {Y: 18}}, nil, 0, 7.5)
	if err != nil {
		t.Fatal(err)
	}
	r := rand.New(rand.NewPCG(1, 2))
	var sites []Vec
	for len(sites) < 40 {
		p := Vec{X: 30 * r.Float64(), Y: 18 * r.Float64(), Z: 7.5 * r.Float64()}
		if hall.Side(p, 0) == solid.Inside {
			sites = append(sites, p)
		}
	}
	sites = append(sites, Vec{X: -5, Y: 3, Z: 1}) // outside: takes no part
	k := Vec{X: 1, Y: 1, Z: 5}
	d, err := voronoi.New(sites, voronoi.Options{Solid: hall, Stretch: k})
	if err != nil {
		t.Fatal(err)
	}
	found, err := Gaps(context.Background(), d, sites, Options{Threads: 2})
	if err != nil || len(found) == 0 {
		t.Fatal(found, err)
	}
	distance := func(at Vec, k Vec) float64 {
		least := math.Inf(1)
		for _, p := range sites[:40] {
			least = min(least, length(times(sub(at, p), k)))
		}
		return least
	}
	for i, g := range found {
		if hall.Side(g.At, 1e-9) == solid.Outside {
			t.Errorf("gap %v is outside", g)
		}
		if want := distance(g.At, Vec{X: 1, Y: 1, Z: 1}); math.Abs(g.Radius-want) > 1e-12 || math.Abs(length(sub(sites[g.Site], g.At))-want) > 1e-8 {
			t.Errorf("the radius of %v is %v, want %v", g.At, g.Radius, want)
		}
		if i > 0 && g.Radius > found[i-1].Radius {
			t.Error("gaps do not come largest first")
		}
		here := distance(g.At, k)
		for range 300 {
			step := Vec{X: r.NormFloat64(), Y: r.NormFloat64(), Z: r.NormFloat64()}
			at := add(g.At, times(scale(1e-3/length(step), step), Vec{X: 1 / k.X, Y: 1 / k.Y, Z: 1 / k.Z}))
			if hall.Side(at, 0) != solid.Outside && distance(at, k) > here+1e-7 {
				t.Errorf("gap %v is no peak", g.At)
				break
			}
		}
	}
	// The highest of a fine grid is no higher than the highest gap.
	highest, grid := 0.0, 0.0
	for _, g := range found {
		highest = max(highest, distance(g.At, k))
	}
	for x := 0.0; x <= 30; x += 0.5 {
		for y := 0.0; y <= 18; y += 0.5 {
			for z := 0.0; z <= 7.5; z += 0.25 {
				if at := (Vec{X: x, Y: y, Z: z}); hall.Side(at, 0) != solid.Outside {
					grid = max(grid, distance(at, k))
				}
			}
		}
	}
	if grid > highest+1e-9 || grid < highest-1 {
		t.Errorf("the highest gap is %v, of a grid %v", highest, grid)
	}
}

// In a part of the solid the gaps are the peaks of that part, in what of it lies inside.
func TestGapsWithin(t *testing.T) {
	hall, err := solid.NewPrism([]solid.Vec2{{}, {X: 30}, {X: 30, Y: 12}, {X: 18, Y: 12}, {X: 18, Y: 18}, {Y: 18}}, nil, 0, 7.5)
	if err != nil {
		t.Fatal(err)
	}
	part, err := solid.NewBox(Vec{X: 12, Y: 8, Z: 1}, Vec{X: 26, Y: 25, Z: 3}) // partly outside
	if err != nil {
		t.Fatal(err)
	}
	r := rand.New(rand.NewPCG(5, 6))
	var sites []Vec
	for len(sites) < 30 {
		p := Vec{X: 30 * r.Float64(), Y: 18 * r.Float64(), Z: 7.5 * r.Float64()}
		if hall.Side(p, 0) == solid.Inside {
			sites = append(sites, p)
		}
	}
	for _, body := range []solid.Solid{hall, nil} {
		for _, k := range []Vec{{}, {X: 1, Y: 1, Z: 3}} {
			d, err := voronoi.New(sites, voronoi.Options{Solid: body, Stretch: k})
			if err != nil {
				t.Fatal(err)
			}
			found, err := Gaps(context.Background(), d, sites, Options{Within: part})
			if err != nil || len(found) == 0 {
				t.Fatal(found, err)
			}
			highest, grid := 0.0, 0.0
			distance := func(at Vec) float64 {
				least := math.Inf(1)
				for _, p := range sites {
					least = min(least, length(times(sub(at, p), d.Stretch())))
				}
				return least
			}
			for _, g := range found {
				if part.Side(g.At, 1e-9) == solid.Outside || body != nil && body.Side(g.At, 1e-9) == solid.Outside {
					t.Errorf("gap %v lies outside", g.At)
				}
				highest = max(highest, distance(g.At))
			}
			for x := 12.0; x <= 26; x += 0.25 {
				for y := 8.0; y <= 25; y += 0.25 {
					for z := 1.0; z <= 3; z += 0.25 {
						if at := (Vec{X: x, Y: y, Z: z}); body == nil || body.Side(at, 0) != solid.Outside {
							grid = max(grid, distance(at))
						}
					}
				}
			}
			if grid > highest+1e-9 || grid < highest-0.5 {
				t.Errorf("the highest gap is %v, of a grid %v", highest, grid)
			}
		}
	}
}
