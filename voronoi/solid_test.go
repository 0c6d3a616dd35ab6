package voronoi

import (
	"context"
	"math"
	"testing"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

func prism(t testing.TB, z0, z1 float64, rings ...[]solid.Vec2) solid.Solid {
	t.Helper()
	p, err := solid.NewPrism(rings[0], rings[1:], z0, z1)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

func ring(xy ...float64) []solid.Vec2 {
	var r []solid.Vec2
	for i := 0; i < len(xy); i += 2 {
		r = append(r, solid.Vec2{X: xy[i], Y: xy[i+1]})
	}
	return r
}

// rooms are solids of different kinds within the unit cube, but for the tilted one.
func rooms(t testing.TB) map[string]solid.Solid {
	t.Helper()
	cube, err := solid.NewBox(v(0, 0, 0), v(1, 1, 1))
	if err != nil {
		t.Fatal(err)
	}
	return map[string]solid.Solid{
		"box":       cube,
		"hexagon":   prism(t, 0, 1, ring(0.25, 0, 0.75, 0, 1, 0.5, 0.75, 1, 0.25, 1, 0, 0.5)),
		"L":         prism(t, 0, 1, ring(0, 0, 1, 0, 1, 0.5, 0.5, 0.5, 0.5, 1, 0, 1)),
		"holes":     prism(t, 0.1, 0.9, ring(0, 0, 1, 0, 1, 1, 0, 1), ring(0.2, 0.2, 0.4, 0.2, 0.4, 0.4, 0.2, 0.4), ring(0.6, 0.5, 0.9, 0.6, 0.7, 0.9)),
		"U, tilted": prism(t, 0, 1, ring(0.5, 0, 1, 0.5, 0.8, 0.7, 0.5, 0.4, 0.4, 0.5, 0.7, 0.8, 0.5, 1, 0, 0.5)),
	}
}

// Laws 1 and 2 in solids of every kind: volumes and walls add up, contacts are
// symmetric and close the surface.
func TestLawsInSolids(t *testing.T) {
	for name, room := range rooms(t) {
		for kind, sites := range map[string][]Vec{"uniform": random(300, 21), "lattice": grid(6), "walls": grid(4), "clustered": clustered(200, 22)} {
			d := diagram(t, sites, Options{Solid: room, Threads: 2})
			c := measure(t, d, All)
			what := name + ", " + kind
			volumes, walls := 0.0, 0.0
			surface := make([]float64, len(sites))
			for i := range sites {
				if !c.Inside[i] {
					if room.Side(sites[i], 0) != solid.Outside || c.Volume[i] != 0 {
						t.Errorf("%s: site %d has no cell", what, i)
					}
					continue
				}
				volumes += c.Volume[i] / float64(c.Multiplicity[i])
				walls += c.WallArea[i] / float64(c.Multiplicity[i])
				if c.Faces[i] < c.Neighbours[i] || c.Clipped[i] != (c.WallArea[i] > 0) || !c.Bounded[i] {
					t.Errorf("%s: %s", what, cellText(c, i))
				}
				if c.Shaped[i] && c.Vertices[i]-c.Edges[i]+c.Faces[i] != 2 {
					t.Errorf("%s: V-E+F of %s", what, cellText(c, i))
				}
			}
			near(t, what+": volumes", volumes, room.Volume(), 1e-12)
			near(t, what+": walls", walls, room.Area(), 1e-8)
			areas := map[[2]int32]Contact{}
			err := d.Contacts(context.Background(), nil, func(site int32, contacts []Contact) error {
				surface[site] = c.WallArea[site]
				for _, k := range contacts {
					surface[site] += k.Area
					areas[[2]int32{site, k.Other}] = k
				}
				return nil
			})
			if err != nil {
				t.Fatal(err)
			}
			for p, k := range areas {
				back, ok := areas[[2]int32{p[1], p[0]}]
				if c.Multiplicity[p[0]] == 1 && c.Multiplicity[p[1]] == 1 && (!ok || back.Area != k.Area || back.Middle != k.Middle) {
					t.Errorf("%s: contact %v is %v there and %v back", what, p, k, back)
				}
			}
			for i := range sites {
				near(t, what+": surface", surface[i], c.Area[i], 1e-8)
			}
		}
	}
}

// Sites outside within the tolerance take their space from the others; some have
// none inside. The volumes still add up.
func TestToleranceInSolids(t *testing.T) {
	for name, room := range rooms(t) {
		sites := random(200, 24)
		for i, p := range sites {
			sites[i] = v(1.6*p.X-0.3, 1.6*p.Y-0.3, 1.6*p.Z-0.3)
		}
		d := diagram(t, sites, Options{Solid: room, Tolerance: 0.25})
		c := measure(t, d, All)
		near(t, name+": volumes", Total(c.Volume), room.Volume(), 1e-12)
		near(t, name+": walls", Total(c.WallArea), room.Area(), 1e-8)
		without := 0
		for i := range sites {
			if c.Inside[i] && c.Volume[i] == 0 {
				without++
				if c.HasCentroid[i] || c.Area[i] != 0 || c.Faces[i] != 0 || c.Farthest[i] != 0 || c.Clipped[i] {
					t.Errorf("%s: a cell without space: %s", name, cellText(c, i))
				}
			}
			if outside := room.Side(sites[i], 0.25) == solid.Outside; outside == c.Inside[i] {
				t.Errorf("%s: site %d inside: %v", name, i, c.Inside[i])
			}
		}
		if without == 0 || len(d.Facts().Outside) == 0 || len(d.Facts().OnWall) == 0 {
			t.Errorf("%s: %d sites without space, facts %+v", name, without, d.Facts())
		}
		err := d.Contacts(context.Background(), nil, func(site int32, contacts []Contact) error {
			if c.Volume[site] == 0 && len(contacts) > 0 {
				t.Errorf("%s: site %d has no space and %d contacts", name, site, len(contacts))
			}
			return nil
		})
		if err != nil {
			t.Fatal(err)
		}
	}
}

// The middle of a face that a solid cuts, by hand: two sites in a room whose plan
// is an L share a face in the plane x = 1/4 or y = 1/4.
func TestMiddleOfACutFace(t *testing.T) {
	room := prism(t, 0, 2, ring(0, 0, 3, 0, 3, 1, 1, 1, 1, 2, 0, 2))
	for _, k := range []struct {
		a, b   Vec
		area   float64
		middle Vec
	}{
		{v(0.5, 0.5, 1), v(0.5, 1.5, 1), 2 * 3, v(1.5, 1, 1)}, // y = 1: the solid above the face is 1 wide
		{v(0.5, 0.5, 0.5), v(0.5, 0.5, 1.5), 4, v(0, 0, 1)},   // z = 1: the whole plan
		{v(0.25, 0.5, 1), v(0.75, 0.5, 1), 2 * 2, v(0.5, 1, 1)},
		{v(1.5, 0.5, 1), v(2.5, 0.5, 1), 2, v(2, 0.5, 1)},
	} {
		d := diagram(t, []Vec{k.a, k.b}, Options{Solid: room})
		err := d.Contacts(context.Background(), nil, func(_ int32, contacts []Contact) error {
			if len(contacts) != 1 {
				t.Fatalf("%v: %d contacts", k, len(contacts))
			}
			c := contacts[0]
			switch {
			case k.a.Y != k.b.Y: // a contact needs the solid on both sides
				k.area, k.middle = 2, v(0.5, 1, 1)
			case k.a.Z != k.b.Z: // the centroid of the L
				k.middle = v((3*1.5+1*0.5)/4, (3*0.5+1*1.5)/4, 1)
			}
			near(t, "area", c.Area, k.area, 1e-8)
			near(t, "middle", length(sub(c.Middle, k.middle)), 0, 1e-8)
			return nil
		})
		if err != nil {
			t.Fatal(err)
		}
	}
}

// A prism with a square plan and a box are the same room.
func TestPrismIsBox(t *testing.T) {
	sites := random(200, 23)
	box := measure(t, diagram(t, sites, Options{Solid: rooms(t)["box"]}), All)
	plain := measure(t, diagram(t, sites, Options{Solid: unitBox}), All)
	same := measure(t, diagram(t, sites, Options{Solid: prism(t, 0, 1, ring(0, 0, 1, 0, 1, 1, 0, 1))}), All)
	for i := range sites {
		if !sameCell(box, i, plain, i) || !sameCell(same, i, plain, i) {
			t.Errorf("site %d: %s, %s, %s", i, cellText(plain, i), cellText(box, i), cellText(same, i))
		}
	}
}

// The labels of an inserted cell are the solid's own walls.
func TestWallLabels(t *testing.T) {
	for name, room := range rooms(t) {
		planes := room.Planes()
		if planes == nil {
			continue
		}
		d := diagram(t, []Vec{v(0.5, 0.5, 0.5)}, Options{Solid: room})
		var c polyhedron.Cell
		if err := d.Insert(v(0.5, 0.5, 0.5), &c); err != nil {
			t.Fatal(err)
		}
		if got := c.Shape(); got.Walls != len(planes) || got.Contacts != 0 {
			t.Errorf("%s: %+v", name, got)
		}
		for i := range c.NumFaces() {
			label, _ := c.Face(i)
			wall, ok := polyhedron.WallNumber(label)
			if !c.Counts(i) {
				continue
			}
			if !ok || int(wall) >= len(planes) {
				t.Fatalf("%s: label %d", name, label)
			}
			a := c.FaceArea(i)
			for _, p := range planes {
				if p.Wall == wall && math.Abs(dot(a, p.N)-length(a)) > 1e-12 {
					t.Errorf("%s: wall %d looks along %v, its face along %v", name, wall, p.N, a)
				}
			}
		}
	}
}
