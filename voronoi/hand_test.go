package voronoi

import (
	"context"
	"errors"
	"math"
	"testing"
)

// cell is what hand calculation says of one cell; -1 where it is not looked at.
type cell struct {
	volume, area, wall, farthest, nearest float64
	faces, edges, vertices, neighbours    int32
	bounded                               bool
}

func (want cell) check(t *testing.T, name string, c *Cells, i int) {
	t.Helper()
	same := func(what string, got, want float64) {
		t.Helper()
		if got != want && !(math.Abs(got-want) <= 1e-12*math.Abs(want)) {
			t.Errorf("%s, cell %d: %s %v, want %v", name, i, what, got, want)
		}
	}
	same("volume", c.Volume[i], want.volume)
	same("area", c.Area[i], want.area)
	same("wall area", c.WallArea[i], want.wall)
	same("farthest", c.Farthest[i], want.farthest)
	same("nearest face", c.NearestFace[i], want.nearest)
	same("faces", float64(c.Faces[i]), float64(want.faces))
	same("edges", float64(c.Edges[i]), float64(want.edges))
	same("vertices", float64(c.Vertices[i]), float64(want.vertices))
	same("neighbours", float64(c.Neighbours[i]), float64(want.neighbours))
	if c.Bounded[i] != want.bounded || c.HasCentroid[i] != (want.bounded && want.volume > 0) {
		t.Errorf("%s, cell %d: bounded %v, has a centroid %v", name, i, c.Bounded[i], c.HasCentroid[i])
	}
	if c.Clipped[i] != (want.wall > 0) {
		t.Errorf("%s, cell %d: clipped %v", name, i, c.Clipped[i])
	}
}

var inf = math.Inf(1)

// open is an unbounded cell.
func open(nearest float64, faces, edges, vertices int32) cell {
	return cell{inf, inf, 0, inf, nearest, faces, edges, vertices, faces, false}
}

func TestFewSitesInABox(t *testing.T) {
	room := brick{v(0, 0, 0), v(10, 4, 3)}
	one := measure(t, diagram(t, []Vec{v(2, 1, 1)}, Options{Solid: room}), All)
	cell{120, 164, 164, math.Sqrt(64 + 9 + 4), inf, 6, 12, 8, 0, true}.check(t, "one site", one, 0)
	if one.Centroid[0] != v(5, 2, 1.5) {
		t.Errorf("centroid %v", one.Centroid[0])
	}
	d := diagram(t, []Vec{v(2, 2, 1.5), v(6, 2, 1.5)}, Options{Solid: room})
	two := measure(t, d, All)
	far := math.Sqrt(4 + 4 + 2.25)
	cell{48, 80 + 0, 68, far, 2, 6, 12, 8, 1, true}.check(t, "two sites", two, 0)
	cell{72, 108, 96, math.Sqrt(16 + 4 + 2.25), 2, 6, 12, 8, 1, true}.check(t, "two sites", two, 1)
	contacts := 0
	err := d.Contacts(context.Background(), nil, func(site int32, list []Contact) error {
		for _, c := range list {
			contacts++
			if c.Other != 1-site || c.Area != 12 || c.Distance != 4 || c.Middle != v(4, 2, 1.5) {
				t.Errorf("contact of %d: %+v", site, c)
			}
		}
		return nil
	})
	if err != nil || contacts != 2 {
		t.Errorf("%d contacts, %v", contacts, err)
	}
}

func TestSitesOnTheWalls(t *testing.T) {
	// Two sites in opposite corners and one on a face: all take part.
	room := brick{v(0, 0, 0), v(2, 2, 2)}
	d := diagram(t, []Vec{v(0, 0, 0), v(2, 2, 2)}, Options{Solid: room})
	c := measure(t, d, Volume|Clipped)
	near(t, "corner", c.Volume[0], 4, 1e-15)
	near(t, "other corner", c.Volume[1], 4, 1e-15)
	if len(d.Facts().OnWall) != 2 {
		t.Errorf("on the wall: %v", d.Facts().OnWall)
	}
	d = diagram(t, []Vec{v(1, 1, 0), v(1, 1, 2), v(1, 1, -0.5), v(1, 1, 2.05)}, Options{Solid: room, Tolerance: 0.1})
	c = measure(t, d, All)
	if f := d.Facts(); len(f.Outside) != 1 || f.Outside[0] != 2 || f.OutsideDistance[0] != 0.5 || f.Inside != 3 {
		t.Errorf("facts %+v", f)
	}
	if c.Inside[2] || c.Volume[2] != 0 || c.Multiplicity[2] != 0 {
		t.Errorf("the site outside has a cell: %v", c.Volume[2])
	}
	// The site at 2.05 is within the tolerance; its bisector with the one at 2
	// stands at 2.025, outside the room: it has no space in it.
	near(t, "first", c.Volume[0], 4, 1e-14)
	near(t, "second", c.Volume[1], 4, 1e-14)
	if c.Volume[3] != 0 || !c.Inside[3] || c.HasCentroid[3] || c.Faces[3] != 0 {
		t.Errorf("a site behind the wall: volume %v, faces %d", c.Volume[3], c.Faces[3])
	}
}

func TestGridOfBricks(t *testing.T) {
	room := brick{v(0, 0, 0), v(4, 6, 5)}
	var sites []Vec
	for i := range 4 {
		for j := range 3 {
			for k := range 5 {
				sites = append(sites, v(float64(i)+0.5, 2*float64(j)+1, float64(k)+0.5))
			}
		}
	}
	c := measure(t, diagram(t, sites, Options{Solid: room}), All)
	pairs := int32(0)
	for i := range sites {
		near(t, "brick", c.Volume[i], 2, 1e-14)
		if c.Faces[i] != 6 || c.Edges[i] != 12 || c.Vertices[i] != 8 {
			t.Errorf("brick %d: %d faces, %d edges, %d vertices", i, c.Faces[i], c.Edges[i], c.Vertices[i])
		}
		pairs += c.Neighbours[i]
	}
	if want := int32(2 * (3*4*3*5 - 4*3 - 3*5 - 4*5)); pairs != want {
		t.Errorf("%d ordered contacts, want %d", pairs, want)
	}
}

func TestFewSitesWithoutASolid(t *testing.T) {
	check := func(name string, sites []Vec, dimension int, want ...cell) {
		t.Helper()
		d := diagram(t, sites, Options{})
		if got := d.Facts().Dimension; got != dimension {
			t.Errorf("%s: dimension %d, want %d", name, got, dimension)
		}
		c := measure(t, d, All)
		for i, w := range want {
			w.check(t, name, c, i)
		}
	}
	check("one site", []Vec{v(3, 4, 5)}, 0, open(inf, 0, 0, 0))
	half := open(0.5, 1, 0, 0)
	check("two sites", []Vec{v(3, 4, 5), v(4, 4, 5)}, 1, half, half)
	slab := open(0.5, 2, 0, 0)
	check("three on a line", []Vec{v(0, 0, 0), v(1, 0, 0), v(2, 0, 0)}, 1, half, slab, half)
	check("four on a slant", []Vec{v(0, 0, 0), v(1, 1, 1), v(3, 3, 3), v(2, 2, 2)}, 1,
		open(math.Sqrt(3)/2, 1, 0, 0), open(math.Sqrt(3)/2, 2, 0, 0), open(math.Sqrt(3)/2, 1, 0, 0), open(math.Sqrt(3)/2, 2, 0, 0))
	wedge := open(1, 2, 1, 0)
	check("a triangle", []Vec{v(0, 0, 0), v(2, 0, 0), v(1, 2, 0)}, 2, wedge, wedge)
	// In a plane the cell in the middle is an endless square prism.
	check("a cross", []Vec{v(0, 0, 0), v(1, 0, 0), v(-1, 0, 0), v(0, 1, 0), v(0, -1, 0)}, 2,
		open(0.5, 4, 4, 0), open(0.5, 3, 2, 0))
	// A coplanar square grid: diagonal neighbours touch along lines only.
	var square []Vec
	for i := range 3 {
		for j := range 3 {
			square = append(square, v(float64(i), float64(j), 7))
		}
	}
	check("a square grid", square, 2, open(0.5, 2, 1, 0), open(0.5, 3, 2, 0), open(0.5, 2, 1, 0), open(0.5, 3, 2, 0), open(0.5, 4, 4, 0))
	corner := open(math.Sqrt2/2, 3, 3, 1)
	check("a tetrahedron", []Vec{v(0, 0, 0), v(1, 1, 0), v(1, 0, 1), v(0, 1, 1)}, 3, corner, corner, corner, corner)
	// The corners of a cube meet in one point, in threes along rays.
	check("a cube", fillCube(), 3, open(0.5, 3, 3, 1), open(0.5, 3, 3, 1))
	check("a cube and its centre", append(fillCube(), v(0.5, 0.5, 0.5)), 3)
}

func fillCube() []Vec {
	var c []Vec
	for i := range 8 {
		c = append(c, v(float64(i&1), float64(i>>1&1), float64(i>>2&1)))
	}
	return c
}

// The cell of the centre of a cube is the octahedron |x|+|y|+|z| <= 3/4, of volume
// 4/3 (3/4)³ = 9/16.
func TestCentreOfACube(t *testing.T) {
	d := diagram(t, append(fillCube(), v(0.5, 0.5, 0.5)), Options{})
	c := measure(t, d, All)
	cell{9.0 / 16, 8 * math.Sqrt(3) / 4 * 9 / 8, 0, 0.75, math.Sqrt(3) / 4, 8, 12, 6, 8, true}.check(t, "octahedron", c, 8)
	for i := range 8 {
		if c.Bounded[i] || c.Neighbours[i] != 4 {
			t.Errorf("corner %d: bounded %v, %d neighbours", i, c.Bounded[i], c.Neighbours[i])
		}
	}
}

// A site a hair inside a face of the hull has a bounded cell that reaches very
// far. The tetrahedron under it is flat: its circumcentre stands about L²/(2h)
// away.
func TestFarReachingCells(t *testing.T) {
	for _, h := range []float64{1e-3, 1e-6, 1e-9, 1e-12, 1e-15} {
		sites := []Vec{v(1, 0, 0), v(-0.5, 0.75, 0), v(-0.5, -0.75, 0), v(0, 0, -1), v(0, 0, -h)}
		d := diagram(t, sites, Options{})
		c := measure(t, d, All)
		if !c.Bounded[4] {
			t.Fatalf("h = %g: unbounded", h)
		}
		// At 10^15 the face at the foot is less than 1e-12 of the surface.
		if h > 1e-14 && (c.Faces[4] != 4 || c.Vertices[4] != 4 || c.Edges[4] != 6) {
			t.Errorf("h = %g: %d faces, %d edges, %d vertices", h, c.Faces[4], c.Edges[4], c.Vertices[4])
		}
		apex := farApex(sites)
		near(t, "apex", c.Farthest[4]/apex, 1, 1e-14)
		// The cell is a pyramid on the horizontal triangle x <= p, -x/2 ± 3y/4 <= q
		// at its foot.
		foot := (1 - h) / 2 // below the site
		p, q := (1+h*h)/2+h*foot, (13.0/16+h*h)/2+h*foot
		height := math.Sqrt(apex*apex-1.0/256) + foot
		near(t, "volume", c.Volume[4]/((p+2*q)*(p+2*q)/1.5*height/3), 1, 1e-13)
		// On the plane of the hull, h = 0, it is unbounded.
		sites[4].Z = 0
		if c := measure(t, diagram(t, sites, Options{}), Bounded, 4); c.Bounded[0] {
			t.Error("bounded in the plane of the hull")
		}
	}
}

// farApex is the distance from the last site to the point equally far from the
// first three and from it: it stands on the line through the circumcentre of the
// triangle (here on the x axis), at height z.
func farApex(s []Vec) float64 {
	// |c-(1,0)|² = |c-(-1/2,3/4)|² with c = (x,0): 1-2x = 1/4+x+9/16, x = 1/16.
	x, h := 1.0/16, -s[4].Z
	// (x-1)²+z² = x²+(z+h)²: 1-2x = 2zh+h².
	z := (1 - 2*x - h*h) / (2 * h)
	return math.Hypot(x, z+h)
}

func TestDuplicates(t *testing.T) {
	sites := random(50, 3)
	plain := measure(t, diagram(t, sites, Options{Solid: unitBox}), All)
	twice := append(append([]Vec{}, sites...), sites[7], sites[7], sites[20])
	twice[20].Z = 0
	twice[52].Z = math.Copysign(0, -1) // -0 is 0
	sites[20].Z = 0
	plain = measure(t, diagram(t, sites, Options{Solid: unitBox}), All)
	d := diagram(t, twice, Options{Solid: unitBox})
	c := measure(t, d, All)
	if f := d.Facts(); f.Distinct != 50 || f.Inside != 53 || len(f.Groups) != 2 ||
		f.Groups[0].Representative != 7 || len(f.Groups[0].Members) != 3 || f.Groups[1].Members[1] != 52 {
		t.Errorf("facts %+v", f)
	}
	for i := range sites {
		if c.Volume[i] != plain.Volume[i] || c.Neighbours[i] != plain.Neighbours[i] {
			t.Errorf("site %d changed through duplicates", i)
		}
	}
	for _, pair := range [][2]int{{50, 7}, {51, 7}, {52, 20}} {
		if c.Volume[pair[0]] != plain.Volume[pair[1]] || c.Multiplicity[pair[0]] < 2 {
			t.Errorf("duplicate %d differs from %d", pair[0], pair[1])
		}
	}
}

func TestRefusals(t *testing.T) {
	as := func(err error, target any) {
		t.Helper()
		if !errors.As(err, target) {
			t.Errorf("%v", err)
		}
	}
	_, err := New(nil, Options{})
	if !errors.Is(err, ErrNoSites) {
		t.Errorf("no sites: %v", err)
	}
	var notFinite *NotFiniteError
	_, err = New([]Vec{{}, v(1, math.NaN(), 2)}, Options{})
	as(err, &notFinite)
	if notFinite.Site != 1 || notFinite.Axis != 1 {
		t.Errorf("%+v", notFinite)
	}
	_, err = New([]Vec{v(0, 0, inf)}, Options{})
	as(err, &notFinite)
	_, err = New([]Vec{{}}, Options{Solid: brick{v(0, 0, 0), v(1, 1, 0)}})
	as(err, new(*NoVolumeError))
	_, err = New([]Vec{{}}, Options{Solid: unitBox, Tolerance: -1})
	as(err, new(*ToleranceError))
	d := diagram(t, []Vec{v(0, 0, 0)}, Options{})
	_, err = d.Measure(context.Background(), Volume, []int32{1})
	as(err, new(*NoSuchSiteError))
	gone, cancel := context.WithCancel(context.Background())
	cancel()
	if _, err = d.Measure(gone, Volume, nil); !errors.Is(err, context.Canceled) {
		t.Errorf("cancelled: %v", err)
	}
	if _, err := diagram(t, []Vec{v(5, 5, 5)}, Options{Solid: unitBox}).Measure(context.Background(), All, nil); err != nil {
		t.Errorf("all sites outside: %v", err)
	}
}
