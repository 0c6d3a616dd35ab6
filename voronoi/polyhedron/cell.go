package polyhedron

import "math"

// Labels say what a face is made of. A label >= 0 is the index of the
// neighbouring site; negative labels are walls.
const (
	// Open marks an artificial face that stands for infinity: it bounds the
	// numbers, not the cell.
	Open int32 = math.MinInt32
)

// Wall is the label of wall number w >= 0 of a solid: -1-w.
func Wall(w int32) int32 { return -1 - w }

// WallNumber is the number of the wall with this label, and whether the label
// is that of a wall at all.
func WallNumber(label int32) (int32, bool) {
	return -1 - label, label < 0 && label != Open
}

// Result tells what a cut did.
type Result int8

const (
	Unchanged Result = iota // nothing lay beyond the plane
	Cut                     // something was cut away and something is left
	Empty                   // nothing with a volume is left
)

func (r Result) String() string {
	switch r {
	case Unchanged:
		return "unchanged"
	case Cut:
		return "cut"
	default:
		return "empty"
	}
}

// plane is the half-space n·x <= d behind a face.
type plane struct {
	n     Vec
	d     float64
	label int32

	low  Vec // what rounding lost of n and d; fine cells only
	dLow float64
}

// Cell is a bounded convex polyhedron in coordinates local to its site. The
// zero value is empty; SetBox makes it a box. See the package's text for the
// representation.
type Cell struct {
	v    []Vec   // vertices
	twin []int32 // of half-edge 3v+k; twin/3 is the vertex at its far end
	face []int32 // cut behind the face on the left of half-edge 3v+k
	cuts []plane // all cuts since SetBox, whether a face of them is left or not
	sure []bool  // Settle's mark of vertex i
	far  bool    // began in a box far larger than the cell: see SetFarBox
	fine bool    // vertices and planes have two words a coordinate
	low  []Vec   // the second words of the vertices; fine cells only

	lowOfNew Vec // scratch of cross: the second words of the vertex just made

	s     []float64 // scratch of Clip: n·v-d of every vertex
	fresh []int32   // scratch of Clip: new vertex on a half-edge that leaves an outer vertex
	gone  []int32   // scratch of Clip: outer vertices, ascending

	walked bool    // start, loop and of describe the present surface
	start  []int32 // loop[start[i]:start[i+1]] are the vertices of face i
	loop   []int32
	of     []int32 // cut behind face i
	seen   []bool  // scratch, by half-edge

	surveyed bool      // area, least, surface, rim and open describe the present surface
	area     []float64 // of face i
	least    []float64 // face i counts only with more area than this
	surface  float64   // of the faces that do not reach an Open face
	rim      float64   // greatest absolute coordinate of a vertex on an Open face
	open     bool      // there is an Open face
	onOpen   []bool    // vertex i lies on an Open face
	touches  []bool    // face i is Open or reaches one

	class []int32 // scratch of Shape: representative of the vertices merged with this one
	mark  []int32 // scratch of Shape: kept faces seen at a representative
}

// SetBox makes the cell the box from lo to hi. The labels belong to the sides
// -x, +x, -y, +y, -z, +z. A box without volume (or with a NaN) is empty.
func (c *Cell) SetBox(lo, hi Vec, labels [6]int32) {
	c.reset()
	if !(lo.X < hi.X && lo.Y < hi.Y && lo.Z < hi.Z) {
		return
	}
	c.cuts = append(c.cuts,
		plane{n: Vec{X: -1}, d: -lo.X, label: labels[0]}, plane{n: Vec{X: 1}, d: hi.X, label: labels[1]},
		plane{n: Vec{Y: -1}, d: -lo.Y, label: labels[2]}, plane{n: Vec{Y: 1}, d: hi.Y, label: labels[3]},
		plane{n: Vec{Z: -1}, d: -lo.Z, label: labels[4]}, plane{n: Vec{Z: 1}, d: hi.Z, label: labels[5]})
	c.v = append(c.v,
		Vec{X: lo.X, Y: lo.Y, Z: lo.Z}, Vec{X: hi.X, Y: lo.Y, Z: lo.Z},
		Vec{X: lo.X, Y: hi.Y, Z: lo.Z}, Vec{X: hi.X, Y: hi.Y, Z: lo.Z},
		Vec{X: lo.X, Y: lo.Y, Z: hi.Z}, Vec{X: hi.X, Y: lo.Y, Z: hi.Z},
		Vec{X: lo.X, Y: hi.Y, Z: hi.Z}, Vec{X: hi.X, Y: hi.Y, Z: hi.Z})
	c.sure = append(c.sure, make([]bool, 8)...)
	c.twin = append(c.twin, boxTwin[:]...)
	c.face = append(c.face, boxFace[:]...)
}

// boxTwin and boxFace are the graph of a box whose corner number has bit 0 set
// at the upper x, bit 1 at the upper y and bit 2 at the upper z.
var boxTwin, boxFace = boxGraph()

func boxGraph() (twin, face [24]int32) {
	// The axes that leave a corner, counter-clockwise seen from outside: the
	// order turns round with every coordinate that moves to its upper end.
	order := [2][3]int32{{0, 2, 1}, {0, 1, 2}}
	slot := [2][3]int32{{0, 2, 1}, {0, 1, 2}} // its inverse: both orders are involutions
	for v := int32(0); v < 8; v++ {
		odd := (v ^ v>>1 ^ v>>2) & 1
		for k := int32(0); k < 3; k++ {
			axis := order[odd][k]
			w := v ^ 1<<axis
			twin[3*v+k] = 3*w + slot[1-odd][axis]
			third := order[odd][(k+2)%3] // the face holds the edges k and k+1
			face[3*v+k] = 2*third + v>>third&1
		}
	}
	return twin, face
}

func (c *Cell) reset() {
	c.v, c.twin, c.face, c.cuts, c.sure = c.v[:0], c.twin[:0], c.face[:0], c.cuts[:0], c.sure[:0]
	c.walked, c.surveyed, c.far, c.fine = false, false, false, false
}

// CopyFrom makes the cell equal to o, in its own buffers.
func (c *Cell) CopyFrom(o *Cell) {
	if c == o {
		return
	}
	c.v = append(c.v[:0], o.v...)
	c.twin = append(c.twin[:0], o.twin...)
	c.face = append(c.face[:0], o.face...)
	c.cuts = append(c.cuts[:0], o.cuts...)
	c.sure = append(c.sure[:0], o.sure...)
	c.low = append(c.low[:0], o.low...)
	c.walked, c.surveyed, c.far, c.fine = false, false, o.far, o.fine
}

// Empty tells whether nothing is left.
func (c *Cell) Empty() bool { return len(c.v) == 0 }

// NumVertices is the number of vertices, coinciding ones counted apart.
func (c *Cell) NumVertices() int { return len(c.v) }

// Vertex is vertex i.
func (c *Cell) Vertex(i int) Vec { return c.v[i] }

// Vertices are all vertices: a view that the next cut overwrites.
func (c *Cell) Vertices() []Vec { return c.v }

// Settle marks vertex i as final in its user's eyes. The mark stays with the
// vertex through later cuts; new vertices come without it.
func (c *Cell) Settle(i int) { c.sure[i] = true }

// Unsettled is the first vertex from i on without the mark of Settle; -1 if
// there is none.
func (c *Cell) Unsettled(i int) int {
	for ; i < len(c.sure); i++ {
		if !c.sure[i] {
			return i
		}
	}
	return -1
}

// Bounds is the smallest box that holds the cell. An empty cell has bounds the
// wrong way round: +Inf to -Inf.
func (c *Cell) Bounds() (lo, hi Vec) {
	inf := math.Inf(1)
	lo, hi = Vec{X: inf, Y: inf, Z: inf}, Vec{X: -inf, Y: -inf, Z: -inf}
	for _, p := range c.v {
		lo = Vec{X: min(lo.X, p.X), Y: min(lo.Y, p.Y), Z: min(lo.Z, p.Z)}
		hi = Vec{X: max(hi.X, p.X), Y: max(hi.Y, p.Y), Z: max(hi.Z, p.Z)}
	}
	return lo, hi
}

// Contains tells whether p lies in the cell, its surface included, as far as
// rounding tells: on or behind the plane of every face.
func (c *Cell) Contains(p Vec) bool {
	if c.Empty() {
		return false
	}
	c.walk()
	for _, f := range c.of {
		if dot(c.cuts[f].n, p) > c.cuts[f].d {
			return false
		}
	}
	return true
}

// Farthest is the greatest distance from the origin, the site, to a point of
// the cell; 0 if it is empty.
func (c *Cell) Farthest() float64 {
	far := 0.0
	for _, p := range c.v {
		far = max(far, dot(p, p))
	}
	return math.Sqrt(far)
}
