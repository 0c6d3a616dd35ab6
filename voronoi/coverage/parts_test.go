package coverage

import (
	"context"
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi"
	"nearcell/voronoi/solid"
	"nearcell/voronoi/solid/mesh"
)

// hallAndSites is an L-shaped hall with sites in it.
func hallAndSites(t testing.TB, n int) (solid.Solid, []Vec) {
	t.Helper()
	hall, err := solid.NewPrism([]solid.Vec2{{}, {X: 30}, {X: 30, Y: 12}, {X: 18, Y: 12}, {X: 18, Y: 18}, {Y: 18}}, nil, 0, 7.5)
	if err != nil {
		t.Fatal(err)
	}
	r := rand.New(rand.NewPCG(3, 8))
	var sites []Vec
	for len(sites) < n {
		p := Vec{X: 30 * r.Float64(), Y: 18 * r.Float64(), Z: 7.5 * r.Float64()}
		if hall.Side(p, 0) == solid.Inside {
			sites = append(sites, p)
		}
	}
	return hall, sites
}

func regionOf(t testing.TB, body, part solid.Solid) solid.Solid {
	t.Helper()
	r, err := mesh.NewRegion(body, part)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func near(t testing.TB, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s is %.15g, want %.15g", what, got, want)
	}
}

// Two parts that make up the hall have together what the hall has, by balls and by
// ellipsoids, and by stretched distances too; so have the parts of all of space.
func TestSpacingOfParts(t *testing.T) {
	hall, sites := hallAndSites(t, 25)
	ctx := context.Background()
	cut := []solid.Solid{box(t, Vec{X: -1, Y: -1, Z: -1}, Vec{X: 11, Y: 19, Z: 9}), box(t, Vec{X: 11, Y: -1, Z: -1}, Vec{X: 31, Y: 19, Z: 9})}
	for _, c := range []struct {
		k          Vec
		across, up float64
	}{{}, {across: 5, up: 2}, {k: Vec{X: 1, Y: 1, Z: 4}}} {
		d := stretchedDiagram(t, sites, hall, c.k)
		whole, err := Spacing(ctx, d, []float64{2, 4}, c.across, c.up, Options{})
		if err != nil {
			t.Fatal(err)
		}
		near(t, "the hall", whole.Volume, 30*18*7.5-12*6*7.5, 1e-8)
		var volume, square float64
		beyond := [2]float64{}
		for _, part := range cut {
			s, err := Spacing(ctx, d, []float64{2, 4}, c.across, c.up, Options{Within: regionOf(t, hall, part)})
			if err != nil {
				t.Fatal(err)
			}
			volume, square = volume+s.Volume, square+s.Volume*s.MeanSquare
			for i, x := range s.Beyond {
				beyond[i] += x
			}
		}
		near(t, "the volume of the parts", volume, whole.Volume, 1e-7)
		near(t, "their mean square", square/volume, whole.MeanSquare, 1e-9)
		for i, x := range beyond {
			near(t, "what is beyond", x, whole.Beyond[i], 1e-7)
		}
	}
	open, err := Spacing(ctx, stretchedDiagram(t, sites, nil, Vec{}), nil, 0, 0, Options{Within: cut[0]})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "a part of all space", open.Volume, 12*20*10, 1e-7)
	if _, err := Spacing(ctx, stretchedDiagram(t, sites, hall, Vec{X: 1, Y: 1, Z: 2}), []float64{2}, 5, 2, Options{}); err != ErrStretched {
		t.Errorf("ellipsoids by stretched distances: %v", err)
	}
}

// What goes to whom in a part is what the cells of a diagram without the site gain in it.
func TestRedundancyOfParts(t *testing.T) {
	hall, sites := hallAndSites(t, 14)
	region := regionOf(t, hall, box(t, Vec{X: 9, Y: 5, Z: 1}, Vec{X: 22, Y: 20, Z: 5}))
	for _, k := range []Vec{{}, {X: 1, Y: 1, Z: 3}} {
		for _, within := range []solid.Solid{region, nil} {
			if within == nil && k == (Vec{}) {
				continue // that is another test's
			}
			in := func(d *voronoi.Diagram) []voronoi.PartMeasures {
				body := within
				if body == nil {
					body = hall
				}
				list, err := d.MeasureIn(context.Background(), voronoi.Volume|voronoi.Farthest, nil, []solid.Solid{body})
				if err != nil {
					t.Fatal(err)
				}
				all := make([]voronoi.PartMeasures, len(list))
				for i, x := range list {
					if len(x) > 0 {
						all[i] = x[0]
					}
				}
				return all
			}
			d := stretchedDiagram(t, sites, hall, k)
			before := in(d)
			losses, err := Redundancy(context.Background(), d, Options{Within: within})
			if err != nil {
				t.Fatal(err)
			}
			for i, l := range losses {
				others := append(append([]Vec{}, sites[:i]...), sites[i+1:]...)
				after := in(stretchedDiagram(t, others, hall, k))
				radius := 0.0
				gained := map[int32]float64{}
				for j, m := range after {
					s := int32(j)
					if j >= i {
						s++
					}
					radius = max(radius, m.Farthest)
					if by := m.Volume - before[s].Volume; by > 1e-9 {
						gained[s] = by
					}
				}
				near(t, "the radius", l.Radius, radius, 1e-8)
				near(t, "the volume", l.Volume, before[i].Volume, 1e-8)
				for _, x := range l.Takers {
					near(t, "a taker's volume", x.Volume, gained[x.Site], 1e-8)
					delete(gained, x.Site)
				}
				if len(gained) > 0 {
					t.Errorf("without %d these gain and are not named: %v", i, gained)
				}
			}
		}
	}
}

// Places in a part lie in it and are the farthest there, by plain or stretched distances:
// a dense search finds none that is farther. Radii do not increase by plain ones.
func TestPlacesInParts(t *testing.T) {
	hall, sites := hallAndSites(t, 20)
	part := box(t, Vec{X: 9, Y: 5, Z: 1}, Vec{X: 22, Y: 20, Z: 5})
	region := regionOf(t, hall, part)
	r := rand.New(rand.NewPCG(6, 6))
	var dense []Vec
	for len(dense) < 4000 {
		p := Vec{X: 9 + 13*r.Float64(), Y: 5 + 15*r.Float64(), Z: 1 + 4*r.Float64()}
		if hall.Side(p, 0) == solid.Inside {
			dense = append(dense, p)
		}
	}
	for _, c := range []struct {
		k     Vec
		clear float64
		among []Vec
	}{{}, {clear: 0.4}, {among: dense[:200]}, {k: Vec{X: 1, Y: 1, Z: 4}}, {k: Vec{X: 1, Y: 1, Z: 4}, among: dense[:200], clear: 0.2}} {
		d := stretchedDiagram(t, sites, hall, c.k)
		placed, err := Places(context.Background(), d, sites, 5, PlaceOptions{Options: Options{Within: region}, Clearance: c.clear, Among: c.among})
		if err != nil || len(placed) != 5 {
			t.Fatal(placed, err)
		}
		stretch := d.Stretch()
		all := append([]Vec{}, sites...)
		distance := func(p, k Vec) float64 {
			least := math.Inf(1)
			for _, q := range all {
				least = min(least, length(times(sub(p, q), k)))
			}
			return least
		}
		choice := dense
		if c.among != nil {
			choice = c.among
		}
		for i, p := range placed {
			if region.Side(p.At, 1e-9) == solid.Outside || c.clear > 0 && region.Distance(p.At) < c.clear*(1-1e-9) {
				t.Errorf("%v is not in the part, or too near to its walls", p.At)
			}
			near(t, "the radius", p.Radius, distance(p.At, Vec{X: 1, Y: 1, Z: 1}), 1e-9)
			here := distance(p.At, stretch)
			for _, q := range choice {
				if region.Distance(q) >= c.clear && distance(q, stretch) > here*(1+1e-9) {
					t.Fatalf("%v is farther than %v", q, p.At)
				}
			}
			if c.among != nil && (p.Index < 0 || c.among[p.Index] != p.At) {
				t.Errorf("%v has the index %d", p.At, p.Index)
			}
			if i > 0 && c.k == (Vec{}) && p.Radius > placed[i-1].Radius*(1+ClearanceWithin) {
				t.Errorf("radii increase: %v after %v", p.Radius, placed[i-1].Radius)
			}
			all = append(all, p.At)
			farthest := 0.0
			for _, q := range dense {
				farthest = max(farthest, distance(q, Vec{X: 1, Y: 1, Z: 1}))
			}
			if c.k == (Vec{}) && p.After < farthest {
				t.Errorf("radius after %v, but a place is %v away", p.After, farthest)
			}
		}
	}
	if _, err := Places(context.Background(), stretchedDiagram(t, sites, hall, Vec{X: 1, Y: 1, Z: 4}), sites, 1, PlaceOptions{Clearance: 0.3}); err != ErrStretched {
		t.Errorf("clearance by stretched distances: %v", err)
	}
}

func stretchedDiagram(t testing.TB, sites []Vec, body solid.Solid, k Vec) *voronoi.Diagram {
	t.Helper()
	d, err := voronoi.New(sites, voronoi.Options{Solid: body, Stretch: k})
	if err != nil {
		t.Fatal(err)
	}
	return d
}
