package voronoi

import (
	"context"
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/solid"
	"nearcell/voronoi/solid/mesh"
)

func boxOf(t testing.TB, lo, hi Vec) solid.Solid {
	t.Helper()
	b, err := solid.NewBox(lo, hi)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

func lShape(t testing.TB) *solid.Prism {
	t.Helper()
	p, err := solid.NewPrism([]solid.Vec2{{}, {X: 30}, {X: 30, Y: 12}, {X: 18, Y: 12}, {X: 18, Y: 18}, {Y: 18}}, nil, 0, 7.5)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// siteSets are scattered sites and a lattice whose cells have faces in the planes of parts
// and of the solid's re-entrant walls.
func siteSets(body solid.Solid) map[string][]Vec {
	sets := map[string][]Vec{}
	r := rand.New(rand.NewPCG(3, 4))
	for len(sets["scattered"]) < 40 {
		p := Vec{X: 30 * r.Float64(), Y: 18 * r.Float64(), Z: 7.5 * r.Float64()}
		if body.Side(p, 0) == solid.Inside {
			sets["scattered"] = append(sets["scattered"], p)
		}
	}
	for x := 1.5; x < 30; x += 3 {
		for y := 1.5; y < 18; y += 3 {
			for _, z := range []float64{1.25, 3.75, 6.25} {
				if p := (Vec{X: x, Y: y, Z: z}); body.Side(p, 0) == solid.Inside {
					sets["lattice"] = append(sets["lattice"], p)
				}
			}
		}
	}
	for len(sets["many"]) < 600 {
		p := Vec{X: 30 * r.Float64(), Y: 18 * r.Float64(), Z: 7.5 * r.Float64()}
		if body.Side(p, 0) == solid.Inside {
			sets["many"] = append(sets["many"], p)
		}
	}
	return sets
}

// The measures of parts that fill the solid add up to the whole cell's: volume, first
// moment, surface, walls and contacts, pair by pair, in any room, stretched or not, with
// faces of cells in the planes of parts. Parts may reach out of the solid.
func TestPartsAddUp(t *testing.T) {
	hall := lShape(t)
	low, err := solid.NewPrism([]solid.Vec2{{X: -2, Y: -2}, {X: 18, Y: -2}, {X: 18, Y: 6}, {X: 9, Y: 6}, {X: 9, Y: 30}, {X: -2, Y: 30}}, nil, -1, 2.5)
	if err != nil {
		t.Fatal(err)
	}
	rest, err := solid.NewPrism([]solid.Vec2{{X: 18, Y: -2}, {X: 40, Y: -2}, {X: 40, Y: 30}, {X: 9, Y: 30}, {X: 9, Y: 6}, {X: 18, Y: 6}}, nil, -1, 2.5)
	if err != nil {
		t.Fatal(err)
	}
	parts := []solid.Solid{low, rest, boxOf(t, Vec{X: -2, Y: -2, Z: 2.5}, Vec{X: 15, Y: 30, Z: 9}), boxOf(t, Vec{X: 15, Y: -2, Z: 2.5}, Vec{X: 40, Y: 30, Z: 9})}
	for _, body := range []solid.Solid{hall, boxOf(t, Vec{}, Vec{X: 30, Y: 18, Z: 7.5})} {
		for name, sites := range siteSets(body) {
			for _, k := range []Vec{{}, {X: 1, Y: 1, Z: 2}} {
				d, err := New(sites, Options{Solid: body, Stretch: k, Threads: 2})
				if err != nil {
					t.Fatal(err)
				}
				t.Run(name, func(t *testing.T) { partsAddUp(t, d, sites, parts) })
			}
		}
	}
}

func partsAddUp(t *testing.T, d *Diagram, sites []Vec, parts []solid.Solid) {
	whole, err := d.Measure(context.Background(), All, nil)
	if err != nil {
		t.Fatal(err)
	}
	in, err := d.MeasureIn(context.Background(), All, nil, parts)
	if err != nil {
		t.Fatal(err)
	}
	for i, list := range in {
		var volume, area, walls, far float64
		var first Vec
		for _, m := range list {
			volume += m.Volume
			area += m.Area
			walls += m.WallArea
			far = max(far, m.Farthest)
			first = add(first, Vec{X: m.Volume * m.Centroid.X, Y: m.Volume * m.Centroid.Y, Z: m.Volume * m.Centroid.Z})
			if m.NearestFace != whole.NearestFace[i] || m.Clipped != (m.WallArea > 0) {
				t.Errorf("cell %d: %+v", i, m)
			}
		}
		closeTo(t, "volume", volume, whole.Volume[i], 1e-12*(1+whole.Volume[i]))
		closeTo(t, "area", area, whole.Area[i], 1e-7*whole.Area[i])
		closeTo(t, "wall area", walls, whole.WallArea[i], 1e-7*whole.Area[i])
		closeTo(t, "farthest", far, whole.Farthest[i], 1e-9)
		c := whole.Centroid[i]
		closeTo(t, "centroid", length(sub(first, Vec{X: volume * c.X, Y: volume * c.Y, Z: volume * c.Z})), 0, 1e-9*volume)
	}
	type pair struct{ a, b int32 }
	areas, inParts := map[pair]float64{}, map[pair]float64{}
	middles, inMiddles := map[pair]Vec{}, map[pair]Vec{}
	byPart := map[[3]int32]float64{}
	if err := d.Contacts(context.Background(), nil, func(site int32, list []Contact) error {
		for _, c := range list {
			areas[pair{site, c.Other}], middles[pair{site, c.Other}] = c.Area, c.Middle
		}
		return nil
	}); err != nil {
		t.Fatal(err)
	}
	if err := d.ContactsIn(context.Background(), nil, parts, func(site int32, list []Contact) error {
		for _, c := range list {
			p := pair{site, c.Other}
			inParts[p] += c.Area
			inMiddles[p] = add(inMiddles[p], Vec{X: c.Area * c.Middle.X, Y: c.Area * c.Middle.Y, Z: c.Area * c.Middle.Z})
			byPart[[3]int32{site, c.Other, c.Part}] = c.Area
		}
		return nil
	}); err != nil {
		t.Fatal(err)
	}
	for p, a := range areas {
		closeTo(t, "contact", inParts[p], a, 1e-7*(1e-3+a))
		m := middles[p]
		if a > 1e-3 {
			closeTo(t, "middle", length(sub(inMiddles[p], Vec{X: a * m.X, Y: a * m.Y, Z: a * m.Z})), 0, 1e-6*(1+a))
		}
	}
	for p, a := range inParts {
		if a > 1e-6 && areas[p] == 0 {
			t.Errorf("%v touch in a part and not in the whole, by %v", p, a)
		}
	}
	for k, a := range byPart {
		if byPart[[3]int32{k[1], k[0], k[2]}] != a {
			t.Errorf("the contact %v is not symmetric", k)
		}
	}
}

// A part alone, smaller than the solid: what is measured in it is the cell cut by it, and
// sites far from it have no row unless their cell reaches in.
func TestPartAlone(t *testing.T) {
	hall := lShape(t)
	sites := siteSets(hall)["scattered"]
	rack := boxOf(t, Vec{X: 12, Y: 8, Z: 0}, Vec{X: 26, Y: 25, Z: 3}) // partly outside
	for _, body := range []solid.Solid{hall, nil} {
		d, err := New(sites, Options{Solid: body})
		if err != nil {
			t.Fatal(err)
		}
		in, err := d.MeasureIn(context.Background(), Volume|Farthest, nil, []solid.Solid{rack})
		if err != nil {
			t.Fatal(err)
		}
		total, with := 0.0, 0
		for i, list := range in {
			for _, m := range list {
				total += m.Volume
				with++
				nearest := math.Inf(1)
				for j, p := range sites {
					if j != i {
						nearest = min(nearest, length(sub(m.Centroid, p)))
					}
				}
				if body != nil && rack.Side(m.Centroid, 1e-9) == solid.Outside {
					t.Errorf("cell %d has its centroid in the rack at %v", i, m.Centroid)
				}
				if nearest < length(sub(m.Centroid, sites[i]))-1e-9 && body == nil {
					t.Errorf("the centroid of cell %d is not its own", i)
				}
			}
		}
		want := 14.0 * 17 * 3
		if body != nil {
			want = (14*4 + 6*6) * 3 // 12…26 by 8…12, and 12…18 by 12…18
		}
		closeTo(t, "volume of the rack inside", total, want, 1e-11*want)
		if with == 0 || with == len(sites) {
			t.Errorf("%d of %d cells reach into the rack", with, len(sites))
		}
	}
}

// The same holds of parts that have no convex pieces: meshes and what is left of one solid
// without another, in a convex room, an L-shaped one and one that is a mesh itself, with
// walls of parts that continue walls of the room, and with faces of cells in them.
func TestMeshPartsAddUp(t *testing.T) {
	hall := lShape(t)
	box := boxOf(t, Vec{}, Vec{X: 30, Y: 18, Z: 7.5})
	racks, err := mesh.Combine(mesh.Plus, boxOf(t, Vec{X: 3, Y: 3, Z: 0}, Vec{X: 6, Y: 12, Z: 5}), boxOf(t, Vec{X: 10.5, Y: 0, Z: 0}, Vec{X: 12, Y: 15, Z: 2.5}))
	if err != nil {
		t.Fatal(err)
	}
	pillar := boxOf(t, Vec{X: 12, Y: 6, Z: -1}, Vec{X: 13, Y: 7, Z: 9})
	less := func(a, b solid.Solid) solid.Solid {
		m, err := mesh.Combine(mesh.Minus, a, b)
		if err != nil {
			t.Fatal(err)
		}
		return m
	}
	low := boxOf(t, Vec{X: -1, Y: -1, Z: -1}, Vec{X: 40, Y: 40, Z: 2.5})
	for bodyName, body := range map[string]solid.Solid{"box": box, "prism": hall, "mesh": less(hall, pillar)} {
		var parts []solid.Solid
		for _, p := range []solid.Solid{racks, less(low, racks), less(less(box, low), racks)} {
			r, err := mesh.NewRegion(body, p)
			if err != nil {
				t.Fatal(err)
			}
			parts = append(parts, r)
		}
		if m := less(hall, pillar).(*mesh.Mesh); bodyName == "mesh" {
			sum := 0.0
			for _, p := range parts {
				sum += p.Volume()
			}
			closeTo(t, "volume", sum, m.Volume(), 1e-12*sum)
		}
		for name, sites := range siteSets(hall) {
			for _, k := range []Vec{{}, {X: 1, Y: 1, Z: 2}} {
				if name == "many" && (k != Vec{} || testing.Short()) {
					continue
				}
				d, err := New(sites, Options{Solid: body, Stretch: k, Threads: 2})
				if err != nil {
					t.Fatal(err)
				}
				t.Run(bodyName+" "+name, func(t *testing.T) { partsAddUp(t, d, sites, parts) })
			}
		}
	}
}

// What is measured in a mesh is what is measured in the box or the prism that it is, in
// rooms of all kinds and without any.
func TestMeshPartIsPart(t *testing.T) {
	hall := lShape(t)
	rack := boxOf(t, Vec{X: 12, Y: 7.5, Z: -1}, Vec{X: 26, Y: 25, Z: 3})
	for name, body := range map[string]solid.Solid{"box": boxOf(t, Vec{}, Vec{X: 30, Y: 18, Z: 7.5}), "prism": hall, "none": nil} {
		region, err := mesh.NewRegion(body, rack)
		if err != nil {
			t.Fatal(err)
		}
		for kind, sites := range siteSets(hall) {
			if kind == "many" {
				continue
			}
			t.Run(name+" "+kind, func(t *testing.T) {
				d, err := New(sites, Options{Solid: body})
				if err != nil {
					t.Fatal(err)
				}
				got, err := d.MeasureIn(context.Background(), All, nil, []solid.Solid{nil, region})
				if err != nil {
					t.Fatal(err)
				}
				want, err := d.MeasureIn(context.Background(), All, nil, []solid.Solid{nil, rack})
				if err != nil {
					t.Fatal(err)
				}
				rows := 0
				for i := range want {
					if len(got[i]) != len(want[i]) {
						t.Fatalf("cell %d: %+v, the box has %+v", i, got[i], want[i])
					}
					for k, w := range want[i] {
						g := got[i][k]
						rows++
						closeTo(t, "volume", g.Volume, w.Volume, 1e-11*(1+w.Volume))
						closeTo(t, "area", g.Area, w.Area, 1e-7*(1+w.Area))
						closeTo(t, "walls", g.WallArea, w.WallArea, 1e-7*(1+w.Area))
						closeTo(t, "farthest", g.Farthest, w.Farthest, 1e-7)
						if g.Neighbours != w.Neighbours || g.Faces != w.Faces || g.Part != 1 {
							t.Errorf("cell %d: %+v, the box has %+v", i, g, w)
						}
					}
				}
				if rows < 5 {
					t.Errorf("%d rows", rows)
				}
			})
		}
	}
}
