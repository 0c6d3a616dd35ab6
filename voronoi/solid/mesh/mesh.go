package mesh

import (
	"encoding/binary"
	"hash/fnv"
	"math"
	"slices"

	"gonum.org/v1/gonum/spatial/r3"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// Vec is a point or a vector in space.
type Vec = r3.Vec

// Options say how triangles become a solid. The zero value is good.
type Options struct {
	// Weld is the distance within which corners are one; 0: only equal corners are.
	Weld float64
	// Precision is the relative rounding of the coordinates: 0x1p-23 for those that were
	// kept in 32 bits, 0 for 64. Triangles that lie in one plane but for it are one wall.
	Precision float64
	// Kind is what Facts calls the solid; "": "mesh".
	Kind string
}

// Report tells what was made of the triangles that were given.
type Report struct {
	Corners    int     // different ones, welding left aside
	Welded     int     // corners that WELD moved onto another
	Farthest   float64 // how far, at most
	Dropped    int     // triangles with two equal corners, or twice there with opposite sides
	Flipped    int     // components that were inside out
	InsideOut  bool    // all of them were, voids included
	Shells     int     // components with the solid inside
	Voids      int     // components with the solid outside
	Touching   bool    // faces lay on one another and went
	Components int
}

// Mesh is a solid bounded by triangles.
type Mesh struct {
	*surface
	kind   string
	n      []Vec // unit normals; zero for triangles without area
	size   []float64
	wall   []int32 // wall of each triangle, -1 without area
	plane  []plane // of each wall
	seam   []bool  // triangles that bound a region and no wall of the solid; nil: none
	corner []Vec   // where three walls meet, by x, y, z

	volume, area  float64
	pieces, voids int
	near          float64
	key           [16]byte
	precision     float64
	made          *assembly // nil: not combined
	folded        []bool    // of a triangle: it looks the wrong way, in a fold as thin as rounding; nil: none
	films         float64   // area of what was no wall for being as thin as rounding
}

// plane passes through at; n has length 1 and points out of the solid.
type plane struct{ n, at Vec }

const (
	// largestSize is that of coordinates.
	largestSize = 1e50
	// smallest is the least volume of a component.
	smallest = 1e-250
	// nearFactor times the size of the solid, and 64 units in the last place of its
	// largest coordinate, is the distance below which a face lies in a wall.
	nearFactor = 1e-10
)

// builder makes a mesh out of triangles.
type builder struct {
	v      []Vec
	t      [][3]int32
	from   []int32 // the triangle that was given; nil: the same
	lo, hi Vec
	tree   *tree
	report Report
}

func (b *builder) origin(i int32) int32 {
	if b.from == nil {
		return i
	}
	return b.from[i]
}

// New makes the solid that triangles bound. Each gives the numbers of three corners,
// counter-clockwise seen from outside. The error is an *[Error].
func New(corners []Vec, triangles [][3]int32, o Options) (*Mesh, *Report, error) {
	b := &builder{}
	if err := b.take(corners, triangles, o.Weld); err != nil {
		return nil, nil, err
	}
	list := uses(b.t)
	if err := balance(b.v, list); err != nil {
		return nil, &b.report, err
	}
	of, n := components(b.v, b.t, list)
	b.report.Components = n
	b.index()
	faced, err := b.overlaps()
	if err != nil {
		return nil, &b.report, err
	}
	if err := b.orient(of, n); err != nil {
		return nil, &b.report, err
	}
	kind := o.Kind
	if kind == "" {
		kind = "mesh"
	}
	if faced {
		b.report.Touching = true
		m, err := combine([]*leaf{{surface: newSurface(b.v, b.t), faced: true}}, only(0), nil, kind, o.Precision)
		return m, &b.report, err
	}
	m := finish(b.v, b.t, nil, list, kind, o.Precision)
	m.pieces, m.voids = b.report.Shells, b.report.Voids
	return m, &b.report, nil
}

// take reads and welds the corners and drops triangles that are none.
func (b *builder) take(corners []Vec, triangles [][3]int32, weld float64) error {
	number := make([]int32, len(corners))
	byPlace := make(map[Vec]int32, len(corners))
	for i, p := range corners {
		if !(largest(p) <= largestSize) {
			return &Error{Fault: NotFinite, Corner: i}
		}
		p = add(p, Vec{}) // -0 + 0 is 0
		k, known := byPlace[p]
		if !known {
			k = int32(len(b.v))
			byPlace[p] = k
			b.v = append(b.v, p)
		}
		number[i] = k
	}
	b.report.Corners = len(b.v)
	if weld > 0 {
		to := b.weld(weld)
		for i, k := range number {
			number[i] = to[k]
		}
	}
	twin := make(map[[3]int32][]int32)
	gone := make([]bool, 0, len(triangles))
	for i, t := range triangles {
		for _, x := range t {
			if x < 0 || int(x) >= len(corners) {
				return &Error{Fault: NoCorner, Triangles: [2]int32{int32(i), -1}, Corner: int(x)}
			}
		}
		c := [3]int32{number[t[0]], number[t[1]], number[t[2]]}
		if c[0] == c[1] || c[1] == c[2] || c[2] == c[0] {
			b.report.Dropped++
			continue
		}
		for c[0] > c[1] || c[0] > c[2] {
			c = [3]int32{c[1], c[2], c[0]}
		}
		back := [3]int32{c[0], c[2], c[1]}
		if open := twin[back]; len(open) > 0 {
			k := open[len(open)-1]
			twin[back] = open[:len(open)-1]
			gone[k] = true
			gone = append(gone, true)
			b.report.Dropped += 2
		} else {
			twin[c] = append(twin[c], int32(len(gone)))
			gone = append(gone, false)
		}
		b.t = append(b.t, c)
		b.from = append(b.from, int32(i))
	}
	k := 0
	for i := range b.t {
		if !gone[i] {
			b.t[k], b.from[k] = b.t[i], b.from[i]
			k++
		}
	}
	b.t, b.from = b.t[:k], b.from[:k]
	if k == 0 {
		return &Error{Fault: Empty}
	}
	return nil
}

func (b *builder) index() {
	s := newSurface(b.v, b.t)
	b.lo, b.hi, b.tree = s.lo, s.hi, s.tree
}

// weld moves corners within the distance of one another onto the first of them.
func (b *builder) weld(within float64) []int32 {
	to := make([]int32, len(b.v))
	for i := range to {
		to[i] = int32(i)
	}
	root := func(i int32) int32 {
		for to[i] != i {
			to[i] = to[to[i]]
			i = to[i]
		}
		return i
	}
	t := newTree(len(b.v), func(i int32) (lo, hi Vec) { return b.v[i], b.v[i] })
	r := Vec{X: within, Y: within, Z: within}
	for i, p := range b.v {
		t.inBox(sub(p, r), add(p, r), func(j int32) bool {
			if length(sub(b.v[j], p)) <= within {
				x, y := root(int32(i)), root(j)
				to[max(x, y)] = min(x, y)
			}
			return true
		})
	}
	for i := range to {
		if to[i] = root(int32(i)); int(to[i]) != i {
			b.report.Welded++
			b.report.Farthest = max(b.report.Farthest, length(sub(b.v[i], b.v[to[i]])))
		}
	}
	return to
}

// finish makes the mesh of a closed surface; seam may be nil.
func finish(v []Vec, t [][3]int32, seam []bool, list []use, kind string, precision float64) *Mesh {
	m := &Mesh{surface: newSurface(v, t), kind: kind, precision: precision, seam: seam}
	m.n, m.size = make([]Vec, len(t)), make([]float64, len(t))
	var area, volume sum
	middle := add(scale(0.5, m.lo), scale(0.5, m.hi))
	for i := range t {
		a, b, c := m.corners(int32(i))
		n := cross(sub(b, a), sub(c, a))
		l := length(n)
		m.size[i] = l / 2
		area.add(l / 2)
		if l > 0 {
			m.n[i] = scale(1/l, n)
		}
		volume.add(dot(sub(a, middle), cross(sub(b, middle), sub(c, middle))) / 6)
	}
	m.area, m.volume = area.value(), volume.value()
	size := max(largest(m.lo), largest(m.hi))
	m.near = nearFactor*length(sub(m.hi, m.lo)) + 64*(math.Nextafter(size, inf)-size)
	m.findWalls(list)
	m.findCorners()
	m.makeKey()
	return m
}

// makeKey hashes the triangles in an order that does not depend on how they came.
func (m *Mesh) makeKey() {
	all := make([][9]float64, len(m.t))
	for i := range m.t {
		a, b, c := m.corners(int32(i))
		for compare(a, b) > 0 || compare(a, c) > 0 {
			a, b, c = b, c, a
		}
		all[i] = [9]float64{a.X, a.Y, a.Z, b.X, b.Y, b.Z, c.X, c.Y, c.Z}
	}
	slices.SortFunc(all, func(a, b [9]float64) int { return slices.Compare(a[:], b[:]) })
	h := fnv.New128a()
	h.Write([]byte("triangles 1"))
	buf := make([]byte, 0, 72)
	for _, t := range all {
		buf = buf[:0]
		for _, x := range t {
			buf = binary.LittleEndian.AppendUint64(buf, math.Float64bits(x+0))
		}
		h.Write(buf)
	}
	h.Sum(m.key[:0])
}

func (m *Mesh) Bounds() (lo, hi Vec) { return m.lo, m.hi }
func (m *Mesh) Volume() float64      { return m.volume }
func (m *Mesh) Area() float64        { return m.area }
func (m *Mesh) Key() [16]byte        { return m.key }
func (m *Mesh) Pieces() int          { return m.pieces }

func (m *Mesh) Facts() solid.Facts {
	return solid.Facts{Kind: m.kind, Walls: len(m.plane), Corners: len(m.corner), Pieces: m.pieces, Voids: m.voids}
}

// Planes is nil: a mesh is never taken for convex.
func (m *Mesh) Planes() []solid.Plane { return nil }

// ClipConvex panics.
func (m *Mesh) ClipConvex(*polyhedron.Cell, Vec) polyhedron.Result {
	panic("mesh: ClipConvex of a mesh")
}

// Side tells where p lies, exactly if tol is 0.
func (m *Mesh) Side(p Vec, tol float64) solid.Side {
	if p != p || !(largest(p) <= math.MaxFloat64) {
		return solid.Outside
	}
	side := m.side(p)
	if tol > 0 && side != solid.On && m.surface.distance(p, tol) <= tol {
		return solid.On
	}
	return side
}

// Distance is the distance from p to the surface.
func (m *Mesh) Distance(p Vec) float64 { return m.surface.distance(p, inf) }

// Triangles are the triangles of the surface: corners, and numbers of three of them for
// each, counter-clockwise from outside. They are views.
func (m *Mesh) Triangles() ([]Vec, [][3]int32) { return m.v, m.t }

// Films is the area of what is no wall for being as thin as rounding: of films of the solid
// and of gaps in it.
func (m *Mesh) Films() float64 { return m.films }

// Stretched is the mesh with its coordinates multiplied.
func (m *Mesh) Stretched(k Vec) (solid.Solid, error) {
	v := make([]Vec, len(m.v))
	for i, p := range m.v {
		v[i] = Vec{X: p.X * k.X, Y: p.Y * k.Y, Z: p.Z * k.Z}
	}
	out := finish(v, m.t, m.seam, uses(m.t), m.kind, m.precision)
	out.pieces, out.voids = m.pieces, m.voids
	if m.films > 0 {
		out.skipFilms()
	}
	return out, nil
}
