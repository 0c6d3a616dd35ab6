package polyhedron

import (
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"
)

// TestCutsThroughOldVertices: planes that pass within rounding of vertices, along
// edges and in faces. Taking one exit and one entry a face, and merging new
// vertices with old ones, leaves such cells open.
func TestCutsThroughOldVertices(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	for range 2000 {
		c := unit()
		for range 12 {
			// A plane through three vertices, moved by a few ulps or not at all.
			a, b, d := c.v[r.IntN(len(c.v))], c.v[r.IntN(len(c.v))], c.v[r.IntN(len(c.v))]
			n := cross(sub(b, a), sub(d, a))
			if length(n) == 0 {
				continue
			}
			level := dot(n, a)
			if r.IntN(2) == 0 {
				level = math.Nextafter(level, math.Inf(r.IntN(2)*2-1))
			}
			if level < 0 { // keep the origin
				n, level = scale(-1, n), -level
			}
			before := c.Volume()
			result := c.Clip(n, level, 1)
			valid(t, c)
			if v := c.Volume(); v > before+1e-14 || v < -1e-14 {
				t.Fatalf("volume %v after %v", v, before)
			}
			if (result == Empty) != c.Empty() {
				t.Fatalf("%v with %d vertices", result, c.NumVertices())
			}
			if c.Empty() {
				break
			}
		}
	}
}

// TestMirroredSites: the cell of a site on the mirror plane of a mirrored set. Cut
// planes come in mirrored pairs that meet in the plane, within rounding of the
// vertices of earlier ones.
func TestMirroredSites(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	for range 500 {
		c := unit()
		turn := r.Float64()
		cos, sin := math.Cos(turn), math.Sin(turn)
		var planes []Vec
		for range 10 {
			p := Vec{X: r.NormFloat64(), Y: r.NormFloat64(), Z: r.NormFloat64()}
			for _, x := range []float64{p.X, -p.X} {
				planes = append(planes, Vec{X: cos*x - sin*p.Y, Y: sin*x + cos*p.Y, Z: p.Z})
			}
		}
		for i, n := range planes {
			c.Clip(n, dot(n, n)/2, int32(i))
			valid(t, c)
		}
		// The two halves of the mirror have the same volume.
		left, right := &Cell{}, &Cell{}
		left.CopyFrom(c)
		right.CopyFrom(c)
		mirror := Vec{X: cos, Y: sin}
		left.SetHalf(mirror)
		right.SetHalf(scale(-1, mirror))
		total := c.Volume()
		near(t, "sum of the halves", left.Volume()+right.Volume(), total, 1e-13)
		if len(planes) == 20 && math.Abs(left.Volume()-right.Volume()) > 0.5*total {
			t.Errorf("halves %v and %v", left.Volume(), right.Volume())
		}
	}
}

// SetHalf keeps the half behind a plane through the origin.
func (c *Cell) SetHalf(n Vec) { c.Clip(n, 0, 99) }

// TestEverySignPattern cuts a box and a cell with many faces with vertices
// declared inside or outside at random, as only a wild rounding could: the surface
// stays closed, made of spheres.
func TestEverySignPattern(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	for trial := range 3000 {
		c := unit()
		for range trial % 8 {
			n := Vec{X: r.NormFloat64(), Y: r.NormFloat64(), Z: r.NormFloat64()}
			c.Clip(n, 0.7*length(n), 2)
		}
		for range 3 {
			c.s, c.gone = c.s[:0], c.gone[:0]
			for i := range c.v {
				x := r.Float64() - 0.5
				c.s = append(c.s, x)
				if x > 0 {
					c.gone = append(c.gone, int32(i))
				}
			}
			if len(c.gone) == 0 || len(c.gone) == len(c.v) {
				continue
			}
			c.cuts = append(c.cuts, plane{label: 3})
			c.walked, c.surveyed = false, false
			c.cross()
			c.join(int32(len(c.cuts)) - 1)
			c.pack()
			valid(t, c)
		}
	}
}

// Laws of cutting: what a plane keeps and what its opposite keeps add up; the order
// of two cuts does not matter; a cut twice is a cut once.
func TestCutLaws(t *testing.T) {
	number := rapid.Float64Range(-1, 1)
	vector := rapid.Custom(func(t *rapid.T) Vec {
		return Vec{X: number.Draw(t, "x"), Y: number.Draw(t, "y"), Z: number.Draw(t, "z")}
	})
	rapid.Check(t, func(t *rapid.T) {
		start := unit()
		for i, n := range rapid.SliceOfN(vector, 0, 8).Draw(t, "cuts") {
			if length(n) > 1e-3 {
				start.Clip(n, dot(n, n)/2, int32(i))
			}
		}
		n, m := vector.Draw(t, "n"), vector.Draw(t, "m")
		if length(n) < 1e-3 || length(m) < 1e-3 || start.Empty() {
			return
		}
		d, e := number.Draw(t, "d"), number.Draw(t, "e")
		var a, b, ab, ba Cell
		a.CopyFrom(start)
		b.CopyFrom(start)
		a.Clip(n, d, 9)
		b.Clip(scale(-1, n), -d, 9)
		agree := func(what string, got, want float64) {
			if math.Abs(got-want) > 1e-13 {
				t.Fatalf("%s: %v, want %v", what, got, want)
			}
		}
		agree("halves", a.Volume()+b.Volume(), start.Volume())
		ma, mb, m0 := a.Moments(), b.Moments(), start.Moments()
		agree("first moments", ma.First.X+mb.First.X, m0.First.X)
		for k := range m0.Second {
			agree("second moments", ma.Second[k]+mb.Second[k], m0.Second[k])
		}
		ab.CopyFrom(&a)
		ab.Clip(m, e, 10)
		ba.CopyFrom(start)
		ba.Clip(m, e, 10)
		ba.Clip(n, d, 9)
		agree("two orders", ab.Volume(), ba.Volume())
		once := a.Volume()
		a.Clip(n, d, 9)
		agree("twice", a.Volume(), once)
		for _, c := range []*Cell{&a, &b, &ab, &ba} {
			if err := c.Validate(); err != nil {
				t.Fatal(err)
			}
			volume, first := c.VolumeAndFirst()
			agree("volume", volume, c.Volume())
			agree("first", first.Z, c.Moments().First.Z)
		}
	})
}

func TestResults(t *testing.T) {
	c := unit()
	if r := c.Clip(Vec{X: 1}, 1, 5); r != Unchanged {
		t.Errorf("a plane in a face: %v", r)
	}
	if r := c.Clip(Vec{X: 1, Y: 1, Z: 1}, 3, 5); r != Unchanged {
		t.Errorf("a plane at a corner: %v", r)
	}
	if r := c.Clip(Vec{X: 1}, -1, 5); r != Empty || !c.Empty() || c.Volume() != 0 || c.NumFaces() != 0 {
		t.Errorf("all but a face: %v", r)
	}
	if r := c.Clip(Vec{X: 1}, 5, 5); r != Empty {
		t.Errorf("cutting nothing: %v", r)
	}
	if s := c.Shape(); s != (Shape{}) || c.Validate() != nil || c.Contains(Vec{}) || c.Farthest() != 0 {
		t.Errorf("nothing has the shape %+v", s)
	}
	if lo, hi := c.Bounds(); lo.X < hi.X {
		t.Errorf("nothing has the bounds %v %v", lo, hi)
	}
	flat := box(Vec{X: -1, Y: -1, Z: 0}, Vec{X: 1, Y: 1, Z: 0})
	if !flat.Empty() {
		t.Error("a flat box is not empty")
	}
	defer func() {
		if recover() == nil {
			t.Error("a NaN passed")
		}
	}()
	unit().Clip(Vec{X: math.NaN()}, 1, 0)
}

// A cell that begins in a huge box is as accurate as one that begins in a small
// one.
func TestFarBox(t *testing.T) {
	r := rand.New(rand.NewPCG(7, 8))
	for range 100 {
		var small, huge, fine Cell
		small.SetBox(Vec{X: -9, Y: -9, Z: -9}, Vec{X: 9, Y: 9, Z: 9}, walls)
		const far = 0x1p40
		huge.SetFarBox(far, Wall(0), false)
		fine.SetFarBox(far, Wall(0), true)
		for i := range 40 {
			n := Vec{X: r.NormFloat64(), Y: r.NormFloat64(), Z: r.NormFloat64()}
			small.Clip(n, dot(n, n)/2, int32(i))
			huge.Bisect(n, Vec{}, int32(i))
			fine.Bisect(n, Vec{}, int32(i))
		}
		for _, c := range []*Cell{&huge, &fine} {
			valid(t, c)
			near(t, "volume", c.Volume(), small.Volume(), 1e-13)
			volume, first := c.VolumeAndFirst()
			_, want := small.VolumeAndFirst()
			near(t, "volume again", volume, small.Volume(), 1e-13)
			near(t, "first moment", length(sub(first, want)), 0, 1e-13)
			if c.Shape() != small.Shape() {
				t.Errorf("shape %+v, want %+v", c.Shape(), small.Shape())
			}
		}
	}
}

func TestOpenShapes(t *testing.T) {
	space := func(normals ...Vec) *Cell {
		var c Cell
		c.SetFarBox(0x1p20, Open, false)
		for i, n := range normals {
			c.Bisect(n, Vec{}, int32(i))
		}
		return &c
	}
	x, y, z := Vec{X: 1}, Vec{Y: 1}, Vec{Z: 1}
	minus := func(a Vec) Vec { return scale(-1, a) }
	for _, k := range []struct {
		name string
		c    *Cell
		want Shape
	}{
		{"all space", space(), Shape{}},
		{"half-space", space(x), Shape{Contacts: 1}},
		{"slab", space(x, minus(x)), Shape{Contacts: 2}},
		{"wedge", space(x, y), Shape{Contacts: 2, Edges: 1}},
		{"trough", space(x, y, minus(x)), Shape{Contacts: 3, Edges: 2}},
		{"prism", space(x, y, minus(x), minus(y)), Shape{Contacts: 4, Edges: 4}},
		{"octant", space(x, y, z), Shape{Contacts: 3, Edges: 3, Vertices: 1}},
		{"half a prism", space(x, y, minus(x), minus(y), z), Shape{Contacts: 5, Edges: 8, Vertices: 4}},
		{"octant, touched", space(x, y, z, add(x, y), add(y, z), add(x, add(y, z))), Shape{Contacts: 3, Edges: 3, Vertices: 1}},
	} {
		if got := k.c.Shape(); got != k.want {
			t.Errorf("%s: %+v, want %+v", k.name, got, k.want)
		}
		valid(t, k.c)
	}
	closed := space(x, y, z, minus(x), minus(y), minus(z))
	if closed.IsOpen() || closed.Shape() != (Shape{Contacts: 6, Edges: 12, Vertices: 8}) || closed.Volume() != 1 {
		t.Errorf("a cube: %+v, volume %v", closed.Shape(), closed.Volume())
	}
}

func TestFaces(t *testing.T) {
	c := unit()
	c.Clip(Vec{X: 1, Y: 1, Z: 1}, 2, 7)
	found := 0
	for i := range c.NumFaces() {
		label, loop := c.Face(i)
		n, d := c.FacePlane(i)
		for _, j := range loop {
			near(t, "distance to the plane", dot(n, c.Vertex(int(j))), d, 1e-15)
		}
		if a := c.FaceArea(i); dot(a, n) < 0 || math.Abs(length(a)-c.Area(i)) > 1e-15 {
			t.Errorf("face %d looks inwards", label)
		}
		if label == 7 {
			found++
			area, middle := c.FaceMiddle(i)
			near(t, "area", area, math.Sqrt(3)/2, 1e-15)
			near(t, "middle", length(sub(middle, Vec{X: 2.0 / 3, Y: 2.0 / 3, Z: 2.0 / 3})), 0, 1e-15)
		}
	}
	if found != 1 {
		t.Errorf("%d faces with the label", found)
	}
	near(t, "surface", c.Surface(), 24-1.5+math.Sqrt(3)/2, 1e-15)
	if !c.Contains(Vec{}) || c.Contains(Vec{X: 0.9, Y: 0.9, Z: 0.9}) || c.Contains(Vec{Z: -1.01}) || !c.Contains(Vec{Z: -1}) {
		t.Error("Contains is wrong")
	}
	c.Relabel(make([]int32, 8))
	for i := range c.NumFaces() {
		if label, _ := c.Face(i); label > 0 {
			t.Errorf("label %d", label)
		}
	}
	if n, is := WallNumber(Wall(3)); n != 3 || !is {
		t.Error("walls do not survive their labels")
	}
	if _, is := WallNumber(Open); is {
		t.Error("Open is a wall")
	}
}

func TestPolygon(t *testing.T) {
	var p Polygon
	p.Set(Vec{}, Vec{X: 2}, Vec{X: 2, Y: 2}, Vec{Y: 2})
	if p.Area() != (Vec{Z: 4}) {
		t.Errorf("area %v", p.Area())
	}
	if r := p.Clip(Vec{Z: 1}, 0); r != Unchanged {
		t.Errorf("its own plane: %v", r)
	}
	if r := p.Clip(Vec{X: 1, Y: 1}, 3); r != Cut || p.Len() != 5 {
		t.Errorf("a corner: %v", r)
	}
	near(t, "area", p.Area().Z, 3.5, 1e-15)
	var q Polygon
	q.CopyFrom(&p)
	q.Move(Vec{Z: 1})
	if q.Corner(0) != (Vec{Z: 1}) || p.Corner(0) != (Vec{}) {
		t.Error("Move moves the wrong one")
	}
	if r := p.Clip(Vec{X: -1}, -5); r != Empty || !p.Empty() || p.Area() != (Vec{}) {
		t.Errorf("all of it: %v", r)
	}
	c := unit()
	for i := range c.NumFaces() {
		p.SetFace(c, i)
		if p.Area() != c.FaceArea(i) {
			t.Errorf("face %d: %v", i, p.Area())
		}
	}
}

// The two parts of a polygon on either side of a plane add up.
func TestPolygonParts(t *testing.T) {
	r := rand.New(rand.NewPCG(9, 10))
	var p, a, b Polygon
	for range 1000 {
		c := unit()
		n := Vec{X: r.NormFloat64(), Y: r.NormFloat64(), Z: r.NormFloat64()}
		c.Clip(n, 0.1*r.Float64(), 0)
		p.SetFace(c, r.IntN(c.NumFaces()))
		m, d := Vec{X: r.NormFloat64(), Y: r.NormFloat64(), Z: r.NormFloat64()}, r.NormFloat64()
		a.CopyFrom(&p)
		b.CopyFrom(&p)
		a.Clip(m, d)
		b.Clip(scale(-1, m), -d)
		near(t, "parts", length(sub(p.Area(), add(a.Area(), b.Area()))), 0, 1e-14)
	}
}

// FuzzClip cuts with planes whose coefficients are small multiples of 1/4: many of
// them pass exactly through vertices and along edges.
func FuzzClip(f *testing.F) {
	f.Add([]byte{1, 2, 3, 4, 250, 7, 9, 1})
	f.Add([]byte{4, 0, 0, 4, 0, 4, 0, 4, 4, 4, 0, 8, 4, 4, 4, 12})
	f.Fuzz(func(t *testing.T, data []byte) {
		c := unit()
		for i := 0; i+4 <= len(data) && i < 400 && !c.Empty(); i += 4 {
			at := func(k int) float64 { return float64(int8(data[i+k])) / 4 }
			before := c.Volume()
			c.Clip(Vec{X: at(0), Y: at(1), Z: at(2)}, at(3), int32(i))
			valid(t, c)
			if v := c.Volume(); v > before+1e-12 {
				t.Fatalf("volume %v after %v", v, before)
			}
			c.Shape()
		}
	})
}

func BenchmarkClip(b *testing.B) {
	r := rand.New(rand.NewPCG(11, 12))
	var normals []Vec
	for range 20 {
		normals = append(normals, Vec{X: r.NormFloat64(), Y: r.NormFloat64(), Z: r.NormFloat64()})
	}
	var c Cell
	b.ReportAllocs()
	for b.Loop() {
		c.SetBox(Vec{X: -9, Y: -9, Z: -9}, Vec{X: 9, Y: 9, Z: 9}, walls)
		for i, n := range normals {
			c.Clip(n, dot(n, n)/2, int32(i))
		}
		c.Volume()
	}
}

// Once warm, cutting and measuring allocate nothing.
func TestNoAllocation(t *testing.T) {
	c := unit()
	work := func() {
		c.SetBox(Vec{X: -1, Y: -1, Z: -1}, Vec{X: 1, Y: 1, Z: 1}, walls)
		c.Clip(Vec{X: 1, Y: 1, Z: 1}, 2, 0)
		c.Clip(Vec{X: 1, Y: -1, Z: 1}, 1, 1)
		c.Volume()
		c.Moments()
		c.Shape()
	}
	work()
	if n := testing.AllocsPerRun(100, work); n != 0 {
		t.Errorf("%v allocations", n)
	}
}
