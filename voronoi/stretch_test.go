package voronoi

import (
	"context"
	"errors"
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// bruteCell cuts the cell of site i in true space by the planes as far from both sites
// in the metric of the squared factors: another way to stretched distances than
// stretching the space (local form: n·x <= n·(q-p)/2 with n = M(q-p)).
func bruteCell(sites []Vec, i int, s, lo, hi Vec) *polyhedron.Cell {
	p := sites[i]
	c := &polyhedron.Cell{}
	var labels [6]int32
	for k := range labels {
		labels[k] = polyhedron.Wall(int32(k))
	}
	c.SetBox(sub(lo, p), sub(hi, p), labels)
	for j, q := range sites {
		if j != i {
			e := sub(q, p)
			n := Vec{X: s.X * s.X * e.X, Y: s.Y * s.Y * e.Y, Z: s.Z * s.Z * e.Z}
			c.Clip(n, dot(n, e)/2, int32(j))
		}
	}
	return c
}

func stretchedSites(n int, seed uint64) []Vec {
	r := rand.New(rand.NewPCG(seed, 17))
	out := make([]Vec, n)
	for i := range out {
		out[i] = Vec{X: 500000 + 30*r.Float64(), Y: 18 * r.Float64(), Z: 7 * r.Float64()}
	}
	return out
}

// Stretched cells are those of the metric, measured in true units: every measure, both
// ways of making cells, and contacts with area, middle and true distance.
func TestStretchedCellsAreThoseOfTheMetric(t *testing.T) {
	lo, hi := Vec{X: 500000}, Vec{X: 500030, Y: 18, Z: 7.5}
	body, err := solid.NewBox(lo, hi)
	if err != nil {
		t.Fatal(err)
	}
	for _, n := range []int{1, 2, 7, 60, 700} {
		for _, s := range []Vec{{X: 1, Y: 1, Z: 5}, {X: 0.3, Y: 2, Z: 0.7}, {X: 1, Y: 1, Z: 4}} {
			sites := stretchedSites(n, uint64(n))
			d, err := New(sites, Options{Solid: body, Stretch: s, Threads: 2})
			if err != nil {
				t.Fatal(err)
			}
			m, err := d.Measure(context.Background(), All, nil)
			if err != nil {
				t.Fatal(err)
			}
			var total Sum
			walls := 0.0
			for i := range sites {
				c := bruteCell(sites, i, s, lo, hi)
				v, first := c.VolumeAndFirst()
				closeTo(t, "volume", m.Volume[i], v, 1e-11*v+1e-13)
				want := Vec{X: sites[i].X + first.X/v, Y: sites[i].Y + first.Y/v, Z: sites[i].Z + first.Z/v}
				closeTo(t, "centroid", length(sub(m.Centroid[i], want)), 0, 1e-8)
				closeTo(t, "farthest", m.Farthest[i], c.Farthest(), 1e-9)
				area, wall := 0.0, 0.0
				for f := range c.NumFaces() {
					if label, _ := c.Face(f); label < 0 {
						wall += c.Area(f)
					}
					area += c.Area(f)
				}
				closeTo(t, "area", m.Area[i], area, 1e-9*area)
				closeTo(t, "wall area", m.WallArea[i], wall, 1e-9*area)
				nearest := math.Inf(1)
				for j := range sites {
					if j != i {
						nearest = min(nearest, length(sub(sites[i], sites[j]))/2)
					}
				}
				closeTo(t, "nearest face", m.NearestFace[i], nearest, 1e-13)
				total.Add(m.Volume[i])
				walls += m.WallArea[i]
			}
			closeTo(t, "sum of the volumes", total.Value(), body.Volume(), 1e-12*body.Volume())
			closeTo(t, "sum of the wall areas", walls, body.Area(), 1e-8*body.Area())
			stretchedContacts(t, d, sites, s, lo, hi)
		}
	}
}

func stretchedContacts(t *testing.T, d *Diagram, sites []Vec, s, lo, hi Vec) {
	t.Helper()
	areas := map[[2]int32]float64{}
	err := d.Contacts(context.Background(), nil, func(site int32, list []Contact) error {
		for _, c := range list {
			areas[[2]int32{site, c.Other}] = c.Area
			if c.Distance != length(sub(sites[site], sites[c.Other])) {
				t.Errorf("the distance of %d and %d is %v", site, c.Other, c.Distance)
			}
			away := func(i int32) float64 { return length(stretch(sub(c.Middle, sites[i]), s)) }
			if a, b := away(site), away(c.Other); math.Abs(a-b) > 1e-8*(a+b) {
				t.Errorf("the middle of the contact of %d and %d is not as far from both: %v, %v", site, c.Other, a, b)
			}
		}
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	for pair, a := range areas {
		if areas[[2]int32{pair[1], pair[0]}] != a {
			t.Fatalf("contact %v is not symmetric", pair)
		}
	}
	for i := range min(len(sites), 60) {
		c := bruteCell(sites, i, s, lo, hi)
		for f := range c.NumFaces() {
			if label, _ := c.Face(f); label >= 0 && c.Area(f) > 1e-6 {
				closeTo(t, "contact area", areas[[2]int32{int32(i), label}], c.Area(f), 1e-9)
			}
		}
	}
}

func closeTo(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol || got == want) {
		t.Errorf("%s: %.15g, want %.15g", what, got, want)
	}
}

// In a solid that is not convex the stretched cells add up to it, too; without a solid
// bounded cells are those of the metric.
func TestStretchedInAnyRoom(t *testing.T) {
	plan := []solid.Vec2{{X: 500000}, {X: 500030}, {X: 500030, Y: 12}, {X: 500018, Y: 12}, {X: 500018, Y: 18}, {X: 500000, Y: 18}}
	hall, err := solid.NewPrism(plan, nil, 0, 7.5)
	if err != nil {
		t.Fatal(err)
	}
	sites := stretchedSites(600, 5)
	s := Vec{X: 1, Y: 2, Z: 5}
	for _, body := range []solid.Solid{hall, nil} {
		d, err := New(sites, Options{Solid: body, Stretch: s})
		if err != nil {
			t.Fatal(err)
		}
		all, err := d.Measure(context.Background(), All, nil)
		if err != nil {
			t.Fatal(err)
		}
		var total, walls Sum
		few, err := d.Measure(context.Background(), All, []int32{1, 5, 77, 333})
		if err != nil {
			t.Fatal(err)
		}
		for k, i := range few.Sites { // one by one
			closeTo(t, "volume", few.Volume[k], all.Volume[i], 1e-9*all.Volume[i])
			closeTo(t, "area", few.Area[k], all.Area[i], 1e-9*all.Area[i])
			if few.Neighbours[k] != all.Neighbours[i] || few.Faces[k] != all.Faces[i] {
				t.Errorf("cell %d has other counts made one by one", i)
			}
		}
		for i := range sites {
			total.Add(all.Volume[i])
			walls.Add(all.WallArea[i])
			if body == nil && all.Bounded[i] {
				c := bruteCell(sites, i, s, Vec{X: -1e7, Y: -1e7, Z: -1e7}, Vec{X: 1e7, Y: 1e7, Z: 1e7})
				if c.Farthest() < 1000 {
					closeTo(t, "bounded volume", all.Volume[i], c.Volume(), 1e-6*c.Volume())
				}
			}
		}
		if body != nil {
			closeTo(t, "sum of the volumes", total.Value(), hall.Volume(), 1e-12*hall.Volume())
			closeTo(t, "sum of the wall areas", walls.Value(), hall.Area(), 1e-8*hall.Area())
		}
	}
}

// Factors of 1 change nothing, to the last bit; equal factors nothing but last bits; a
// column of sites in the solid's axis has slabs whatever the factor.
func TestStretchThatChangesNothing(t *testing.T) {
	body, err := solid.NewBox(Vec{X: 500000}, Vec{X: 500030, Y: 18, Z: 7.5})
	if err != nil {
		t.Fatal(err)
	}
	sites := stretchedSites(80, 9)
	measure := func(s Vec) *Cells {
		d, err := New(sites, Options{Solid: body, Stretch: s})
		if err != nil {
			t.Fatal(err)
		}
		m, err := d.Measure(context.Background(), All, nil)
		if err != nil {
			t.Fatal(err)
		}
		return m
	}
	plain, one, ten := measure(Vec{}), measure(Vec{X: 1, Y: 1, Z: 1}), measure(Vec{X: 10, Y: 10, Z: 10})
	for i := range sites {
		if plain.Volume[i] != one.Volume[i] || plain.Farthest[i] != one.Farthest[i] {
			t.Errorf("factors of 1 change cell %d", i)
		}
		closeTo(t, "volume", ten.Volume[i], plain.Volume[i], 1e-12*plain.Volume[i])
		closeTo(t, "area", ten.Area[i], plain.Area[i], 1e-11*plain.Area[i])
		if ten.Neighbours[i] != plain.Neighbours[i] {
			t.Errorf("equal factors change the neighbours of cell %d", i)
		}
	}
	a, _ := New(sites, Options{Solid: body})
	b, _ := New(sites, Options{Solid: body, Stretch: Vec{X: 1, Y: 1, Z: 5}})
	if a.Key() == b.Key() || a.Stretch() != (Vec{X: 1, Y: 1, Z: 1}) || b.Stretch() != (Vec{X: 1, Y: 1, Z: 5}) {
		t.Error("the key or the factors do not tell stretched distances from plain ones")
	}
}

func TestStretchErrors(t *testing.T) {
	sites := []Vec{{X: 1}, {X: 2}}
	for _, s := range []Vec{{X: 0, Y: 1, Z: 1}, {X: 1, Y: -1, Z: 1}, {X: 1, Y: 1, Z: math.NaN()}, {X: 1, Y: math.Inf(1), Z: 1}} {
		var e *StretchError
		if _, err := New(sites, Options{Stretch: s}); !errors.As(err, &e) || e.A >= 0 {
			t.Errorf("stretched by %v: %v", s, err)
		}
	}
	// Two neighbouring numbers whose products round to one; the other sites keep the
	// coordinates where they are.
	x := 1.9
	for x*1.1 != math.Nextafter(x, 2)*1.1 {
		x = math.Nextafter(x, 2)
	}
	near := []Vec{{X: x, Y: 4}, {X: -8, Y: 4}, {X: math.Nextafter(x, 2), Y: 4}, {X: 9, Y: -4}}
	var e *StretchError
	if _, err := New(near, Options{Stretch: Vec{X: 1.1, Y: 1, Z: 1}}); !errors.As(err, &e) || e.A != 0 || e.B != 2 {
		t.Errorf("sites that the stretch makes one: %v", err)
	}
}

// Insert gives the cell in true units, and Nearest the site that is nearest in stretched
// distance, at its true one.
func TestStretchedInsertAndNearest(t *testing.T) {
	lo, hi := Vec{X: 500000}, Vec{X: 500030, Y: 18, Z: 7.5}
	body, _ := solid.NewBox(lo, hi)
	sites := stretchedSites(50, 3)
	s := Vec{X: 1, Y: 1, Z: 5}
	d, err := New(sites, Options{Solid: body, Stretch: s})
	if err != nil {
		t.Fatal(err)
	}
	p := Vec{X: 500011, Y: 7, Z: 3}
	var c polyhedron.Cell
	if err := d.Insert(p, &c); err != nil {
		t.Fatal(err)
	}
	want := bruteCell(append([]Vec{p}, sites...), 0, s, lo, hi)
	closeTo(t, "volume of the cell of a new site", c.Volume(), want.Volume(), 1e-11)
	at, far := d.Nearest(p)
	for i := range sites {
		if length(stretch(sub(sites[i], p), s)) < length(stretch(sub(sites[at], p), s)) {
			t.Errorf("site %d is nearer than %d", i, at)
		}
	}
	closeTo(t, "true distance", far, length(sub(sites[at], p)), 1e-12)
}
