package solid

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/polyhedron"
)

// lattice is a layout with one site in the middle of every unit square of the plan's
// bounding box, inside the solid or not, in two layers: every side of a plan with whole
// coordinates lies in faces of cells. What each cell measures is counted on squares.
type lattice struct {
	nx, ny int
	inside func(i, j int) bool
	sites  []Vec
}

const layerHeight = (testCeiling - testFloor) / 2.

func newLattice(e example) *lattice {
	l := &lattice{}
	for _, p := range e.outer {
		l.nx, l.ny = max(l.nx, int(p.X)), max(l.ny, int(p.Y))
	}
	l.inside = func(i, j int) bool {
		for _, r := range e.convex { // rectangles, all of them
			if x, y := float64(i)+0.5, float64(j)+0.5; x > r[0].X && x < r[2].X && y > r[0].Y && y < r[2].Y {
				return true
			}
		}
		return false
	}
	for k := range 2 {
		for j := range l.ny {
			for i := range l.nx {
				l.sites = append(l.sites, Vec{X: float64(i) + 0.5, Y: float64(j) + 0.5, Z: testFloor + layerHeight*(float64(k)+0.5)})
			}
		}
	}
	return l
}

func (l *lattice) at(site int) (i, j, k int) {
	return site % l.nx, site / l.nx % l.ny, site / l.nx / l.ny
}

// neighbours are the sites around a site, itself left out, as a lattice numbers them.
func (l *lattice) neighbours(site int) []int {
	i, j, _ := l.at(site)
	var out []int
	for n := range l.sites {
		a, b, _ := l.at(n)
		if n != site && a >= i-1 && a <= i+1 && b >= j-1 && b <= j+1 {
			out = append(out, n)
		}
	}
	return out
}

// expected is what the squares say about a cell.
func (l *lattice) expected(site int) (volume, walls, farthest float64, faces int, contact map[int]float64) {
	i, j, k := l.at(site)
	contact = map[int]float64{}
	if !l.inside(i, j) {
		return 0, 0, 0, 0, contact
	}
	upright := func(a, b int) {
		if l.inside(a, b) {
			contact[k*l.nx*l.ny+b*l.nx+a] = layerHeight
		} else {
			walls += layerHeight
			faces++
		}
	}
	upright(i-1, j)
	upright(i+1, j)
	upright(i, j-1)
	upright(i, j+1)
	contact[(1-k)*l.nx*l.ny+j*l.nx+i] = 1
	return layerHeight, walls + 1, math.Sqrt(0.5 + layerHeight*layerHeight/4), faces + 1, contact
}

func rectilinear(e example) bool {
	for _, r := range e.convex {
		if len(r) != 4 || r[0].Y != r[1].Y || r[1].X != r[2].X || r[2].Y != r[3].Y || r[3].X != r[0].X {
			return false
		}
	}
	return true
}

// TestLatticeInWallPlanes: law 7, faces in the planes of walls are contacts only where
// the solid is on both sides, and walls belong to the cell inside, whatever the
// rounding of a rotation does to the planes.
func TestLatticeInWallPlanes(t *testing.T) {
	for _, plain := range examples {
		if !rectilinear(plain) {
			continue
		}
		motions := []motion{{}, {angle: math.Pi / 2}, {angle: 0.7, shift: Vec2{X: 3, Y: -8}}, {angle: 1e-15}, {shift: Vec2{X: 5e5, Y: 5e6}}, {angle: 0.4, shift: Vec2{X: 5e5, Y: 5e6}}}
		if plain.name == "two holes share a side" {
			// Faces in the planes by which the plan is cut into pieces, two of them a
			// unit in the last place apart.
			motions = append(motions, motion{angle: 4.71238898038469, shift: Vec2{X: 14.375579992882086, Y: 6.417906929244939}})
		}
		if len(newLattice(plain).sites) > 300 {
			motions = motions[2:4]
		}
		for _, m := range motions {
			checkLattice(t, plain, m)
		}
	}
}

var smallL = example{name: "small L", outer: v2(0, 0, 4, 0, 4, 2, 2, 2, 2, 4, 0, 4),
	convex: [][]Vec2{rect(0, 0, 4, 2), rect(0, 2, 2, 4)}, area: 12, length: 16}

// TestRotatedLattices turns a layout by 300 odd angles: each makes another pattern of
// planes that coincide but for rounding.
func TestRotatedLattices(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	for range 300 {
		checkLattice(t, smallL, motion{angle: 2 * math.Pi * r.Float64(), shift: Vec2{X: 20 * r.Float64(), Y: 20 * r.Float64()}})
		if t.Failed() {
			return
		}
	}
}

func checkLattice(t *testing.T, plain example, m motion) {
	t.Helper()
	l := newLattice(plain)
	e := plain.moved(m)
	name := fmt.Sprintf("%s, %v", e.name, m)
	s := e.prism(t)
	tol := 1e-12
	if m.shift.Y > 1e6 {
		tol = 1e-8
	}
	moved := make([]Vec, len(l.sites))
	for i, p := range l.sites {
		moved[i] = m.point(p)
	}
	var w Work
	var total sum
	for i, p := range moved {
		near := []Vec{p}
		ids := []int{i}
		for _, j := range l.neighbours(i) {
			near, ids = append(near, moved[j]), append(ids, j)
		}
		c := cellOf(near, 0, s)
		var got Measures
		if err := s.Measure(c, p, everything, &w, &got); err != nil {
			t.Fatal(err)
		}
		volume, walls, farthest, faces, contact := l.expected(i)
		total.add(got.Walls)
		if !near1(got.Volume, volume, tol) || !near1(got.Walls, walls, tol) || !near1(got.Farthest, farthest, tol) ||
			got.WallFaces != faces || got.Empty != (volume == 0) || got.Reentrant || (got.Shape == nil) != got.Empty {
			t.Errorf("%s: site %v: volume %v, walls %v in %d, farthest %v, empty %v, re-entrant %v; want %v, %v in %d, %v",
				name, l.sites[i], got.Volume, got.Walls, got.WallFaces, got.Farthest, got.Empty, got.Reentrant, volume, walls, faces, farthest)
		}
		if got.Shape != nil && m.shift.Y < 1e6 {
			if n := got.Shape.Shape(); n.Faces() != 6 || n.Edges != 12 || n.Vertices != 8 {
				t.Errorf("%s: site %v: the shape has %d faces, %d edges, %d vertices", name, l.sites[i], n.Faces(), n.Edges, n.Vertices)
			}
		}
		sum := map[int]float64{}
		for f := range c.NumFaces() {
			if label, _ := c.Face(f); label >= 0 {
				sum[ids[label]] += got.Contacts[f]
			}
		}
		for j, a := range sum {
			if !near1(a, contact[j], tol) {
				t.Errorf("%s: contact of %v and %v is %v, want %v", name, l.sites[i], l.sites[j], a, contact[j])
			}
		}
		for j, a := range contact {
			if sum[j] == 0 {
				t.Errorf("%s: contact of %v and %v is missing, want %v", name, l.sites[i], l.sites[j], a)
			}
		}
	}
	if !near1(total.value(), s.Area(), tol*1000) {
		t.Errorf("%s: walls add up to %v of %v", name, total.value(), s.Area())
	}
}

func near1(a, b, tol float64) bool { return math.Abs(a-b) <= tol*max(1, math.Abs(b)) }

// TestPartlyOnWall: faces that are contact along one stretch of a line and wall along
// another, also with the solid on the left in one place and on the right in another.
func TestPartlyOnWall(t *testing.T) {
	z := v2(0, 0, 2, 0, 2, 1, 4, 1, 4, 4, 2, 4, 2, 3, 0, 3)
	tests := []struct {
		name           string
		outer          []Vec2
		sites          []Vec
		contact        float64
		walls, volumes [2]float64
	}{
		// Rooms x 0…2, y 0…3 and x 2…4, y 1…4: they share y 1…3 of the line x = 2.
		{"Z", z, []Vec{{X: 1, Y: 2, Z: 1}, {X: 3, Y: 2, Z: 1}}, 4, [2]float64{2*6 + 8*2, 2*6 + 8*2}, [2]float64{12, 12}},
		// In the small L the line x = 2 is a wall from y = 2 on.
		{"L", smallL.outer, []Vec{{X: 1, Y: 2, Z: 1}, {X: 3, Y: 2, Z: 1}}, 4, [2]float64{2*8 + 2*(4+2+2+2), 2*4 + 2*6}, [2]float64{16, 8}},
	}
	r := rand.New(rand.NewPCG(9, 9))
	for _, tt := range tests {
		for k := range 100 {
			m := motion{}
			if k > 0 {
				m = motion{angle: 2 * math.Pi * r.Float64(), shift: Vec2{X: r.Float64(), Y: -30 * r.Float64()}}
			}
			s, err := NewPrism(m.ring(tt.outer), nil, 0, 2)
			if err != nil {
				t.Fatal(err)
			}
			sites := []Vec{m.point(tt.sites[0]), m.point(tt.sites[1])}
			var w Work
			for i := range sites {
				c := cellOf(sites, i, s)
				var got Measures
				if err := s.Measure(c, sites[i], everything, &w, &got); err != nil {
					t.Fatal(err)
				}
				contact := 0.0
				for f := range c.NumFaces() {
					contact += got.Contacts[f]
				}
				// A face that is part contact, part wall has no simple counts.
				if mixed := tt.name == "Z" || i == 0; got.Reentrant != mixed || (got.Shape == nil) != mixed {
					t.Errorf("%s, %v, cell %d: re-entrant %v", tt.name, m, i, got.Reentrant)
				}
				if !near1(contact, tt.contact, 1e-9) || !near1(got.Walls, tt.walls[i], 1e-9) || !near1(got.Volume, tt.volumes[i], 1e-12) {
					t.Errorf("%s, %v, cell %d: contact %v, walls %v, volume %v; want %v, %v, %v",
						tt.name, m, i, contact, got.Walls, got.Volume, tt.contact, tt.walls[i], tt.volumes[i])
				}
			}
		}
	}
}

// TestTouchingFromOutside: a cell that lies against a wall, the floor or a corner from
// outside is empty and has no walls.
func TestTouchingFromOutside(t *testing.T) {
	s, err := NewPrism(smallL.outer, nil, 0, 2)
	if err != nil {
		t.Fatal(err)
	}
	tests := []struct {
		name   string
		site   Vec
		lo, hi Vec // local
	}{
		{"in the missing corner", Vec{X: 3, Y: 3, Z: 1}, Vec{X: -1, Y: -1, Z: -1}, Vec{X: 1, Y: 1, Z: 1}},
		{"against one wall", Vec{X: 3, Y: 3, Z: 1}, Vec{X: -1, Y: -0.5, Z: -1}, Vec{X: 1, Y: 1, Z: 1}},
		{"against the corner's edge", Vec{X: 3, Y: 3, Z: 1}, Vec{X: -0.5, Y: -0.5, Z: -1}, Vec{X: 1, Y: 1, Z: 1}},
		{"under the floor", Vec{X: 1, Y: 1, Z: -1}, Vec{X: -1, Y: -1, Z: -1}, Vec{X: 1, Y: 1, Z: 1}},
		{"above the ceiling", Vec{X: 1, Y: 1, Z: 3}, Vec{X: -1, Y: -1, Z: -1}, Vec{X: 1, Y: 1, Z: 1}},
		{"beside the outline", Vec{X: -1, Y: 1, Z: 1}, Vec{X: -1, Y: -1, Z: -1}, Vec{X: 1, Y: 1, Z: 1}},
		{"within rounding of a wall", Vec{X: 3, Y: 3, Z: 1}, Vec{X: -1, Y: -1 - 1e-15, Z: -1}, Vec{X: 1, Y: 1, Z: 1}},
	}
	for _, tt := range tests {
		var c polyhedron.Cell
		c.SetBox(tt.lo, tt.hi, [6]int32{0, 1, 2, 3, 4, 5})
		var w Work
		var m Measures
		if err := s.Measure(&c, tt.site, everything, &w, &m); err != nil {
			t.Fatal(err)
		}
		contact := 0.0
		for _, a := range m.Contacts {
			contact += a
		}
		if !m.Empty || m.Volume > 1e-14 || m.Walls != 0 || m.WallFaces != 0 || contact != 0 || m.Farthest != 0 || m.Shape != nil {
			t.Errorf("%s: %+v", tt.name, m)
		}
	}
}

// TestOnWallsFromInside: faces towards neighbours that lie in the floor, the ceiling
// or walls are walls, not contacts.
func TestOnWallsFromInside(t *testing.T) {
	s, err := NewPrism(smallL.outer, nil, 0, 2)
	if err != nil {
		t.Fatal(err)
	}
	for _, nudge := range []float64{0, 1e-15, -1e-15} {
		var c polyhedron.Cell
		c.SetBox(Vec{X: -1, Y: -1, Z: -1 + nudge}, Vec{X: 3, Y: 1, Z: 1 + nudge}, [6]int32{0, 1, 2, 3, 4, 5})
		var w Work
		var m Measures
		if err := s.Measure(&c, Vec{X: 1, Y: 1, Z: 1}, everything, &w, &m); err != nil {
			t.Fatal(err)
		}
		// The lower bar 4 x 2 of the L: all walls but the 2 x 2 towards its upper bar.
		// The face on that side is part contact, part wall.
		contact := 0.0
		for _, a := range m.Contacts {
			contact += a
		}
		if !near(contact, 4, 1e-12) || !near(m.Walls, 8+8+8+4+4+4, 1e-12) || m.WallFaces != 6 || m.Empty || !m.Reentrant || !near(m.Volume, 16, 1e-12) {
			t.Errorf("nudged by %v: contact %v, %+v", nudge, contact, m)
		}
	}
}
