package mesh

import (
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

const everything = solid.WantVolume | solid.WantCentroid | solid.WantContacts | solid.WantWalls | solid.WantFarthest | solid.WantShape

// soup is triangles under construction.
type soup struct {
	v []Vec
	t [][3]int32
}

func (s *soup) polygon(corners ...Vec) {
	k := int32(len(s.v))
	s.v = append(s.v, corners...)
	for i := 2; i < len(corners); i++ {
		s.t = append(s.t, [3]int32{k, k + int32(i) - 1, k + int32(i)})
	}
}

// block adds the faces of a box.
func (s *soup) block(lo, hi Vec) {
	p := func(i int) Vec {
		v := lo
		if i&1 != 0 {
			v.X = hi.X
		}
		if i&2 != 0 {
			v.Y = hi.Y
		}
		if i&4 != 0 {
			v.Z = hi.Z
		}
		return v
	}
	for _, f := range [][4]int{{0, 2, 3, 1}, {4, 5, 7, 6}, {0, 1, 5, 4}, {2, 6, 7, 3}, {0, 4, 6, 2}, {1, 3, 7, 5}} {
		s.polygon(p(f[0]), p(f[1]), p(f[2]), p(f[3]))
	}
}

func (s *soup) turned() *soup {
	out := &soup{v: s.v}
	for _, t := range s.t {
		out.t = append(out.t, [3]int32{t[0], t[2], t[1]})
	}
	return out
}

func (s *soup) plus(o *soup) *soup {
	out := &soup{v: append(append([]Vec{}, s.v...), o.v...), t: append([][3]int32{}, s.t...)}
	for _, t := range o.t {
		k := int32(len(s.v))
		out.t = append(out.t, [3]int32{t[0] + k, t[1] + k, t[2] + k})
	}
	return out
}

// split divides every triangle into four.
func (s *soup) split() *soup {
	out := &soup{}
	for _, t := range s.t {
		a, b, c := s.v[t[0]], s.v[t[1]], s.v[t[2]]
		x, y, z := scale(0.5, add(a, b)), scale(0.5, add(b, c)), scale(0.5, add(c, a))
		out.polygon(a, x, z)
		out.polygon(x, b, y)
		out.polygon(z, y, c)
		out.polygon(x, y, z)
	}
	return out
}

func (s *soup) moved(f func(Vec) Vec) *soup {
	out := &soup{t: s.t}
	for _, p := range s.v {
		out.v = append(out.v, f(p))
	}
	return out
}

func (s *soup) mesh(t testing.TB) *Mesh {
	t.Helper()
	m, _, err := New(s.v, s.t, Options{})
	if err != nil {
		t.Fatal(err)
	}
	return m
}

func block(lo, hi Vec) *soup {
	s := &soup{}
	s.block(lo, hi)
	return s
}

// rotation about an axis through the origin, and a shift.
func rotation(r *rand.Rand, shift Vec) func(Vec) Vec {
	q := [4]float64{r.NormFloat64(), r.NormFloat64(), r.NormFloat64(), r.NormFloat64()}
	l := math.Sqrt(q[0]*q[0] + q[1]*q[1] + q[2]*q[2] + q[3]*q[3])
	w, x, y, z := q[0]/l, q[1]/l, q[2]/l, q[3]/l
	return func(v Vec) Vec {
		return add(shift, Vec{
			X: (1-2*(y*y+z*z))*v.X + 2*(x*y-w*z)*v.Y + 2*(x*z+w*y)*v.Z,
			Y: 2*(x*y+w*z)*v.X + (1-2*(x*x+z*z))*v.Y + 2*(y*z-w*x)*v.Z,
			Z: 2*(x*z-w*y)*v.X + 2*(y*z+w*x)*v.Y + (1-2*(x*x+y*y))*v.Z,
		})
	}
}

// cellOf is the cell of sites[i], by all half-spaces, in the solid's bounds.
func cellOf(sites []Vec, i int, s solid.Solid) *polyhedron.Cell {
	lo, hi := s.Bounds()
	p := sites[i]
	c := &polyhedron.Cell{}
	c.SetBox(sub(lo, p), sub(hi, p), [6]int32{-1, -1, -1, -1, -1, -1})
	for j, q := range sites {
		if j != i {
			n := sub(q, p)
			c.Clip(n, dot(n, n)/2, int32(j))
		}
	}
	return c
}

func sitesIn(r *rand.Rand, s solid.Solid, n int) []Vec {
	lo, hi := s.Bounds()
	var out []Vec
	for len(out) < n {
		p := Vec{X: lo.X + r.Float64()*(hi.X-lo.X), Y: lo.Y + r.Float64()*(hi.Y-lo.Y), Z: lo.Z + r.Float64()*(hi.Z-lo.Z)}
		if s.Side(p, 0) == solid.Inside {
			out = append(out, p)
		}
	}
	return out
}

func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s is %.17g, want %.17g (off by %.3g)", what, got, want, got-want)
	}
}

// laws checks what must hold for the cells of any sites in any solid.
func laws(t *testing.T, name string, s solid.Solid, sites []Vec) []solid.Measures {
	t.Helper()
	var w solid.Work
	all := make([]solid.Measures, len(sites))
	contacts := map[[2]int]float64{}
	volume, walls := sum{}, sum{}
	for i, p := range sites {
		c := cellOf(sites, i, s)
		if err := s.Measure(c, p, everything, &w, &all[i]); err != nil {
			t.Fatal(err)
		}
		m := &all[i]
		volume.add(m.Volume)
		walls.add(m.Walls)
		if m.Volume < -1e-13*s.Volume() || m.Volume > c.Volume()*(1+1e-12) {
			t.Errorf("%s: cell %d has %v of %v", name, i, m.Volume, c.Volume())
		}
		for f := range c.NumFaces() {
			if label, _ := c.Face(f); label >= 0 {
				contacts[[2]int{i, int(label)}] += m.Contacts[f]
			}
		}
		m.Shape = nil
	}
	near(t, name+": the sum of the volumes", volume.value(), s.Volume(), 1e-12*s.Volume())
	near(t, name+": the sum of the walls", walls.value(), s.Area(), 1e-8*s.Area())
	for k, a := range contacts {
		if b := contacts[[2]int{k[1], k[0]}]; math.Abs(a-b) > 1e-8*s.Area() {
			t.Errorf("%s: contact %v is %v one way and %v the other", name, k, a, b)
		}
	}
	return all
}

// same checks that two solids measure alike.
func same(t *testing.T, name string, a, b solid.Solid, sites []Vec) {
	t.Helper()
	near(t, name+": volume", a.Volume(), b.Volume(), 1e-12*b.Volume())
	near(t, name+": area", a.Area(), b.Area(), 1e-12*b.Area())
	size := math.Cbrt(b.Volume())
	var w solid.Work
	for i, p := range sites {
		var x, y solid.Measures
		c := cellOf(sites, i, b)
		if a.Side(p, 0) != b.Side(p, 0) {
			t.Errorf("%s: site %v is %v and %v", name, p, a.Side(p, 0), b.Side(p, 0))
		}
		near(t, name+": distance", a.Distance(p), b.Distance(p), 1e-12*size)
		if err := a.Measure(c, p, everything, &w, &x); err != nil {
			t.Fatal(err)
		}
		shape := x.Shape != nil
		if err := b.Measure(c, p, everything, &w, &y); err != nil {
			t.Fatal(err)
		}
		near(t, name+": volume of a cell", x.Volume, y.Volume, 1e-12*b.Volume())
		near(t, name+": moment", length(sub(x.First, y.First)), 0, 1e-12*b.Volume()*size)
		near(t, name+": walls", x.Walls, y.Walls, 1e-8*b.Area())
		near(t, name+": farthest", x.Farthest, y.Farthest, 1e-9*size)
		if b.Pieces() == 1 && x.WallFaces != y.WallFaces || x.Empty != y.Empty || x.Clipped != y.Clipped || x.Reentrant != y.Reentrant || shape != (y.Shape != nil) {
			t.Errorf("%s: cell %d: %d walls, empty %v, clipped %v, re-entrant %v; want %d, %v, %v, %v", name, i,
				x.WallFaces, x.Empty, x.Clipped, x.Reentrant, y.WallFaces, y.Empty, y.Clipped, y.Reentrant)
		}
		for f := range x.Contacts {
			near(t, name+": contact", x.Contacts[f], y.Contacts[f], 1e-8*b.Area())
		}
	}
}
