package solid

import (
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/polyhedron"
)

// The parts cover the solid and are apart: cut out of a box they have its volume, and a
// place is in the solid if and only if it is in a part, in no more than one unless it is
// on a seam.
func TestParts(t *testing.T) {
	for _, e := range examples {
		t.Run(e.name, func(t *testing.T) {
			s, err := NewPrism(e.outer, e.holes, -1, 2)
			if err != nil {
				t.Fatal(err)
			}
			if convex := s.NumParts() == 1; s.Facts().Convex && !convex {
				t.Errorf("a convex solid has %d parts", s.NumParts())
			}
			lo, hi := s.Bounds()
			site := Vec{X: lo.X + 0.3*(hi.X-lo.X), Y: lo.Y + 0.6*(hi.Y-lo.Y), Z: 0.1}
			var volume sum
			for i := range s.NumParts() {
				var c polyhedron.Cell
				c.SetBox(sub3(sub3(lo, site), Vec{X: 1, Y: 1, Z: 1}), add3(sub3(hi, site), Vec{X: 1, Y: 1, Z: 1}), [6]int32{})
				for _, p := range s.PartPlanes(i, site, nil) {
					c.Clip(p.N, p.D, 0)
				}
				volume.add(c.Volume())
				a, b := s.PartBounds(i)
				for _, v := range c.Vertices() {
					if v = add3(v, site); v.X < a.X-1e-12 || v.X > b.X+1e-12 || v.Y < a.Y-1e-12 || v.Y > b.Y+1e-12 || v.Z < a.Z-1e-12 || v.Z > b.Z+1e-12 {
						t.Errorf("part %d reaches %v, beyond its box %v to %v", i, v, a, b)
					}
				}
			}
			if math.Abs(volume.value()-s.Volume()) > 1e-13*s.Volume() {
				t.Errorf("the parts have the volume %v, the solid %v", volume.value(), s.Volume())
			}
			partsAgainstSides(t, s)
		})
	}
}

func partsAgainstSides(t *testing.T, s *Prism) {
	r := rand.New(rand.NewPCG(1, 9))
	lo, hi := s.Bounds()
	for range 500 {
		p := Vec{X: lo.X + r.Float64()*(hi.X-lo.X), Y: lo.Y + r.Float64()*(hi.Y-lo.Y), Z: lo.Z + r.Float64()*(hi.Z-lo.Z)}
		in := 0
		for i := range s.NumParts() {
			all := true
			for _, q := range s.PartPlanes(i, p, nil) {
				all = all && q.D >= 0
			}
			if all {
				in++
			}
		}
		if inside := s.Side(p, 0) == Inside; inside != (in > 0) || in > 1 {
			t.Fatalf("%v is in %d parts, inside: %v", p, in, inside)
		}
	}
}

// Corners lie on three walls or more, and walls where WallsAt says so: it agrees with
// the distance to the surface, and with the planes' equations.
func TestWallsAt(t *testing.T) {
	for _, e := range examples {
		t.Run(e.name, func(t *testing.T) {
			s, err := NewPrism(e.outer, e.holes, -1, 2)
			if err != nil {
				t.Fatal(err)
			}
			corners := s.Corners()
			if len(corners) != s.Facts().Corners {
				t.Errorf("%d corners, want %d", len(corners), s.Facts().Corners)
			}
			for i, c := range corners {
				if s.Side(c, 0) != On {
					t.Errorf("the corner %v is %v", c, s.Side(c, 0))
				}
				if walls := s.WallsAt(c, 1e-12, nil); len(walls) < 2 {
					t.Errorf("the corner %v is on %d walls", c, len(walls))
				}
				if i > 0 && compare2(Vec2{X: corners[i-1].X, Y: corners[i-1].Y}, Vec2{X: c.X, Y: c.Y}) > 0 {
					t.Errorf("corner %d is out of order", i)
				}
			}
			r := rand.New(rand.NewPCG(2, 9))
			lo, hi := s.Bounds()
			for range 400 {
				p := Vec{X: lo.X + r.Float64()*(hi.X-lo.X), Y: lo.Y + r.Float64()*(hi.Y-lo.Y), Z: lo.Z + r.Float64()*(hi.Z-lo.Z)}
				if s.Side(p, 0) != Inside {
					continue
				}
				d := s.Distance(p)
				if w := s.WallsAt(p, d*0.999, nil); len(w) != 0 {
					t.Fatalf("%v, at %v from the surface, is on %v", p, d, w)
				}
				walls := s.WallsAt(p, d*1.001, nil)
				if len(walls) == 0 {
					t.Fatalf("%v, at %v from the surface, is on no wall", p, d)
				}
				for k, w := range walls {
					// The wall may end before its plane is reached: then the distance
					// to the plane is less.
					if gap := w.D - (w.N.X*p.X + w.N.Y*p.Y + w.N.Z*p.Z); gap > d*1.001+1e-12 {
						t.Fatalf("%v is %v from the plane of %+v, want at most %v", p, gap, w, d)
					}
					if k > 0 && walls[k-1].Wall >= w.Wall {
						t.Fatalf("walls out of order or repeated: %v", walls)
					}
				}
			}
			if w := s.WallsAt(Vec{X: lo.X - 1, Y: lo.Y, Z: 0}, 0.5, nil); len(w) != 0 {
				t.Errorf("a place outside is on %v", w)
			}
		})
	}
}
