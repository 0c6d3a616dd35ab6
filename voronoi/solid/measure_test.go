package solid

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/polyhedron"
)

// TestPartition checks the laws of a partition on every plan, turned and shifted:
//
//  1. each cell's volume and first moment equal those of a convex decomposition and of
//     the signed slabs;
//  2. volumes and first moments add up to the solid;
//  3. contacts are symmetric;
//  4. wall areas add up to the surface;
//  5. the divergence theorem gives the volume back from contacts and walls;
//  6. the farthest point is that of the decomposition.
func TestPartition(t *testing.T) {
	motions := []motion{
		{}, {angle: 0.3}, {angle: 2, shift: Vec2{X: -40, Y: 17}}, {angle: math.Pi / 2}, {angle: -1e-9, shift: Vec2{X: 3, Y: 8}},
		{angle: 1e-15}, {angle: 4.438653572728827, shift: Vec2{X: 12, Y: 6.6}}, {angle: 1.1, shift: Vec2{X: 5e5, Y: 5e6}},
	}
	for _, plain := range examples {
		for k, m := range motions {
			e := plain.moved(m)
			e.name = fmt.Sprintf("%s, %v", e.name, m)
			s := e.prism(t)
			// Far away, the corners of the plan and of the oracles' decompositions
			// are rounded to about 1e-9, each in its own way.
			e.slack = 1e-13
			if m.shift.Y > 1e6 || m.angle == -1e-9 {
				e.slack = 1e-9
			}
			checkPartition(t, e, s, sitesIn(rand.New(rand.NewPCG(uint64(k), 11)), s, 40))
		}
	}
}

func checkPartition(t *testing.T, e example, s *Prism, sites []Vec) {
	t.Helper()
	lo, hi := s.Bounds()
	size := norm3(sub3(hi, lo))
	tol := e.slack * s.Area() // of volumes
	var w Work
	var volume, walls sum
	var first [3]sum
	contacts := map[[2]int]float64{}
	for i, p := range sites {
		c := cellOf(sites, i, s)
		var m Measures
		if err := s.Measure(c, p, everything, &w, &m); err != nil {
			t.Fatal(err)
		}
		v, f, far := byDecomposition(c, p, e)
		if !near(m.Volume, v, tol) || norm3(sub3(m.First, f)) > tol*size {
			t.Errorf("%s: cell %d: volume %v, first %v; the decomposition has %v, %v", e.name, i, m.Volume, m.First, v, f)
		}
		if sv, sf := bySlabs(c, p, e); !near(m.Volume, sv, 10*tol) || norm3(sub3(m.First, sf)) > 10*tol*size {
			t.Errorf("%s: cell %d: volume %v, first %v; the slabs have %v, %v", e.name, i, m.Volume, m.First, sv, sf)
		}
		if !near(m.Farthest, far, 1e-9*size) {
			t.Errorf("%s: cell %d: farthest %v, the decomposition has %v", e.name, i, m.Farthest, far)
		}
		if d := divergence(&w, c, &m); !m.Empty && !near(d, m.Volume, 10*tol*size) {
			t.Errorf("%s: cell %d: the divergence theorem gives %v, the volume is %v", e.name, i, d, m.Volume)
		}
		volume.add(m.Volume)
		walls.add(m.Walls)
		for a, x := range [3]float64{m.First.X + m.Volume*(p.X-lo.X), m.First.Y + m.Volume*(p.Y-lo.Y), m.First.Z + m.Volume*(p.Z-lo.Z)} {
			first[a].add(x)
		}
		for j := range c.NumFaces() {
			label, _ := c.Face(j)
			if label < 0 && m.Contacts[j] != 0 {
				t.Errorf("%s: cell %d: a contact of %v with a wall", e.name, i, m.Contacts[j])
			} else if label >= 0 {
				contacts[[2]int{i, int(label)}] += m.Contacts[j]
			}
		}
		checkShape(t, e, c, p, s, &m)
	}
	if !near(volume.value(), s.Volume(), 1e-12*s.Volume()) {
		t.Errorf("%s: volumes add up to %v of %v", e.name, volume.value(), s.Volume())
	}
	if !near(walls.value(), s.Area(), 1e-8*s.Area()) {
		t.Errorf("%s: walls add up to %v of %v", e.name, walls.value(), s.Area())
	}
	centre := planCentroid(e, Vec2{X: lo.X, Y: lo.Y})
	want := [3]float64{centre.X * s.Volume(), centre.Y * s.Volume(), (testCeiling - testFloor) / 2. * s.Volume()}
	for a := range first {
		if !near(first[a].value(), want[a], 10*tol*size) {
			t.Errorf("%s: first moments about the lower corner add up to %v, want %v", e.name, first[a].value(), want[a])
		}
	}
	for ij, a := range contacts {
		if b := contacts[[2]int{ij[1], ij[0]}]; !near(a, b, 1e-9*size*size) {
			t.Errorf("%s: contact %v is %v and %v", e.name, ij, a, b)
		}
	}
}

// planCentroid is the centroid of the convex decomposition, from o.
func planCentroid(e example, o Vec2) Vec2 {
	var area float64
	var c Vec2
	for _, ring := range e.convex {
		for i := 1; i+1 < len(ring); i++ {
			a, b, d := sub2(ring[0], o), sub2(ring[i], o), sub2(ring[i+1], o)
			w := cross2(sub2(b, a), sub2(d, a)) / 2
			area += w
			c = add2(c, scale2(w/3, add2(a, add2(b, d))))
		}
	}
	return scale2(1/area, c)
}

// divergence is the volume by law 5, from the contacts that were reported and the
// wall areas behind Measures.Walls, each with its distance from the site.
func divergence(w *Work, c *polyhedron.Cell, m *Measures) float64 {
	var total sum
	for j := range c.NumFaces() {
		n, d := c.FacePlane(j)
		total.add(m.Contacts[j] * d / norm3(n))
	}
	for _, e := range w.near {
		total.add(e.area * e.at.d)
	}
	for _, f := range w.faces {
		if f.flush == flat || (f.flush == notFlush && f.label < 0 && !w.cut) {
			total.add(f.area * f.d / norm3(f.n))
		}
	}
	return total.value() / 3
}

// checkShape compares the convex shape, where there is one, with the other measures.
func checkShape(t *testing.T, e example, c *polyhedron.Cell, p Vec, s *Prism, m *Measures) {
	t.Helper()
	if m.Empty || m.Volume < 1e-9 {
		return
	}
	if m.Reentrant != (m.Shape == nil) {
		t.Fatalf("%s: re-entrant %v, but the shape is nil: %v", e.name, m.Reentrant, m.Shape == nil)
	}
	if m.Shape == nil {
		if parts := convexParts(c, p, e); parts < 2 {
			t.Errorf("%s: the part of the cell at %v is one piece of the decomposition, but called re-entrant", e.name, p)
		}
		return
	}
	if err := m.Shape.Validate(); err != nil {
		t.Errorf("%s: shape: %v", e.name, err)
	}
	// The shape leaves out walls that are too small to count or lean into the cell by
	// less than s.near.
	tol := 1e-11*c.Volume() + s.near*c.Surface()
	if !near(m.Shape.Volume(), m.Volume, tol) || !near(m.Shape.Farthest(), m.Farthest, 1e-4*m.Farthest) {
		t.Errorf("%s: shape has volume %v and farthest %v, measured %v and %v", e.name, m.Shape.Volume(), m.Shape.Farthest(), m.Volume, m.Farthest)
	}
	walls := 0.0
	for j := range m.Shape.NumFaces() {
		if label, _ := m.Shape.Face(j); label < 0 {
			walls += norm3(m.Shape.FaceArea(j))
		}
	}
	if !near(walls, m.Walls, 1e-6*(1+walls)) {
		t.Errorf("%s: the shape's walls are %v, measured %v", e.name, walls, m.Walls)
	}
}

// convexParts counts the pieces of the decomposition that the cell reaches.
func convexParts(c *polyhedron.Cell, site Vec, e example) int {
	n := 0
	for _, ring := range e.convex {
		var d polyhedron.Cell
		d.CopyFrom(c)
		clipTo(&d, site, ring, testFloor, testCeiling)
		if d.Volume() > 1e-18*c.Volume() {
			n++
		}
	}
	return n
}

// TestBoxIsClip: measuring in a box equals clipping by its planes.
func TestBoxIsClip(t *testing.T) {
	s, err := NewBox(Vec{X: -1, Y: 2, Z: 0.5}, Vec{X: 4, Y: 7, Z: 3})
	if err != nil {
		t.Fatal(err)
	}
	sites := sitesIn(rand.New(rand.NewPCG(1, 2)), s, 60)
	var w Work
	for i, p := range sites {
		whole := &polyhedron.Cell{} // a cell that the box has not cut yet
		whole.SetBox(Vec{X: -50, Y: -50, Z: -50}, Vec{X: 50, Y: 50, Z: 50}, [6]int32{})
		for j, q := range sites {
			if n := sub3(q, p); j != i {
				whole.Clip(n, (n.X*n.X+n.Y*n.Y+n.Z*n.Z)/2, int32(j))
			}
		}
		var cut polyhedron.Cell
		cut.CopyFrom(whole)
		s.ClipConvex(&cut, p)
		c := cellOf(sites, i, s)
		var m Measures
		if err := s.Measure(c, p, everything, &w, &m); err != nil {
			t.Fatal(err)
		}
		v, f := cut.VolumeAndFirst()
		if !near(m.Volume, v, 1e-13) || norm3(sub3(m.First, f)) > 1e-12 || !near(m.Farthest, cut.Farthest(), 1e-12) {
			t.Errorf("cell %d: %v %v %v, clipped %v %v %v", i, m.Volume, m.First, m.Farthest, v, f, cut.Farthest())
		}
		walls, faces := 0.0, 0
		for j := range cut.NumFaces() {
			label, _ := cut.Face(j)
			a := norm3(cut.FaceArea(j))
			if _, wall := polyhedron.WallNumber(label); wall {
				walls += a
				faces++
				continue
			}
			for k := range c.NumFaces() {
				if l, _ := c.Face(k); l == label && !near(m.Contacts[k], a, 1e-12) {
					t.Errorf("cell %d: contact %v, clipped %v", i, m.Contacts[k], a)
				}
			}
		}
		if !near(m.Walls, walls, 1e-12) || m.WallFaces != faces || m.Reentrant || m.Shape == nil || m.Clipped != (faces > 0) {
			t.Errorf("cell %d: walls %v in %d faces, clipped %v in %d; %+v", i, m.Walls, m.WallFaces, walls, faces, m)
		}
	}
}
