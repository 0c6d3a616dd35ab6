package polyhedron

import "math"

// What counts as a face and as a vertex. Planes that meet by the dozen in one
// point leave faces and edges behind whose size is rounding; these are the
// limits below which they are artefacts.
const (
	// crumbShare of the surface: a smaller face is none.
	crumbShare = 1e-12
	// crumbRound times the square of the distance to a face's farthest vertex: what
	// rounding alone makes of the area of a face along a long edge. It matters for
	// needle-shaped cells only.
	crumbRound = 0x1p-48
	// openRound times the square of the rim: the same for a face that reaches an
	// Open face, whose corners are rounded at the size of that far box.
	openRound = 0x1p-46
	// edgeShare of the distance to an edge: a shorter edge has one vertex, not two.
	edgeShare = 1e-9
	// crumbEdge times the root of the least area that counts: the same for the edges
	// of a face that does not.
	crumbEdge = 2
)

// Shape is how many faces, edges and vertices a cell has, artefacts of rounding
// left out.
type Shape struct {
	Contacts int // faces shared with neighbours
	Walls    int // faces on walls
	Edges    int // edges, those that run to infinity included
	Vertices int // finite vertices
}

// Faces is the number of faces, contacts and walls together.
func (s Shape) Faces() int { return s.Contacts + s.Walls }

// survey measures every face once and sets the limit for crumbs.
func (c *Cell) survey() {
	c.walk()
	if c.surveyed {
		return
	}
	c.surveyed = true
	c.markOpen()
	c.area = c.area[:0]
	c.surface, c.rim = 0, 0
	for i := range c.of {
		a := length(c.FaceArea(i))
		c.area = append(c.area, a)
		if !c.open || !c.touches[i] {
			c.surface += a
		}
	}
	for i, p := range c.v {
		if c.open && c.onOpen[i] {
			c.rim = max(c.rim, largest(p))
		}
	}
	c.setLeast()
}

// setLeast sets the area that each face must exceed to count.
func (c *Cell) setLeast() {
	c.least = c.least[:0]
	for i := range c.of {
		if c.open && c.touches[i] {
			c.least = append(c.least, openRound*c.rim*c.rim)
			continue
		}
		far2 := 0.0
		for _, j := range c.loop[c.start[i]:c.start[i+1]] {
			far2 = max(far2, dot(c.v[j], c.v[j]))
		}
		c.least = append(c.least, max(crumbShare*c.surface, crumbRound*far2))
	}
}

// markOpen finds the vertices on Open faces and the faces that have such a
// vertex.
func (c *Cell) markOpen() {
	c.open = false
	for _, f := range c.of {
		c.open = c.open || c.cuts[f].label == Open
	}
	if !c.open {
		return
	}
	c.onOpen = zeroed(c.onOpen, len(c.v))
	for h, f := range c.face {
		if c.cuts[f].label == Open {
			c.onOpen[h/3] = true
		}
	}
	c.touches = zeroed(c.touches, len(c.of))
	for i := range c.of {
		for _, v := range c.loop[c.start[i]:c.start[i+1]] {
			c.touches[i] = c.touches[i] || c.onOpen[v]
		}
	}
}

func zeroed[T any](s []T, n int) []T {
	if cap(s) < n {
		s = make([]T, 2*n)
	}
	s = s[:n]
	clear(s)
	return s
}

// IsOpen tells whether an Open face is left: the cell reaches the artificial
// box.
func (c *Cell) IsOpen() bool {
	c.survey()
	return c.open
}

// Reaches tells whether face i is an Open face or shares a vertex with one, so
// that its area stands for an infinite one.
func (c *Cell) Reaches(i int) bool {
	c.survey()
	return c.open && c.touches[i]
}

// Counts tells whether face i is more than an artefact of rounding: its area is
// at least 1e-12 of the surface (and 2^-48 of the square of the distance to its
// farthest vertex, which matters for needles only). A face that reaches an Open
// face needs 2^-46 of the square of that box's size. Open faces count for nothing.
func (c *Cell) Counts(i int) bool {
	c.survey()
	return c.cuts[c.of[i]].label != Open && c.area[i] > c.least[i]
}

// Area is the area of face i, a plain number.
func (c *Cell) Area(i int) float64 {
	c.survey()
	return c.area[i]
}

// Shape counts faces, edges and vertices. Vertices joined by an edge shorter
// than 1e-9 of its distance from the site are one vertex; so are vertices of an
// uncounted face no farther apart than twice the root of the area that a face needs
// to count; and a vertex counts if at least three counted faces meet in it. The edges then follow from Euler's relation, in
// which the Open faces take part with their own characteristic, so that a
// half-space has no edge, a wedge one, and a slab none.
func (c *Cell) Shape() Shape {
	var s Shape
	if c.Empty() {
		return s
	}
	c.survey()
	for i, f := range c.of {
		if !c.Counts(i) {
			continue
		}
		if c.cuts[f].label >= 0 {
			s.Contacts++
		} else {
			s.Walls++
		}
	}
	c.merge()
	s.Vertices = c.corners()
	s.Edges = max(0, s.Vertices+s.Faces()+c.openEuler()-2)
	return s
}

// merge unites the vertices that count as one: the ends of short edges, and those
// of an uncounted face that lie together, neighbours on it or not (a face without
// width can run round a corner and pass it twice).
func (c *Cell) merge() {
	c.class = zeroed(c.class, len(c.v))
	for i := range c.class {
		c.class[i] = int32(i)
	}
	for i := range c.of {
		loop := c.loop[c.start[i]:c.start[i+1]]
		if c.Counts(i) {
			a := loop[len(loop)-1]
			for _, b := range loop {
				c.uniteWithin(a, b, 0)
				a = b
			}
			continue
		}
		limit := crumbEdge * math.Sqrt(c.least[i])
		if c.open && c.touches[i] { // a strip as long as the far box
			limit = crumbEdge * openRound * c.rim
		}
		for k, a := range loop {
			for _, b := range loop[:k] {
				c.uniteWithin(a, b, limit)
			}
		}
	}
}

// uniteWithin unites two vertices that are no farther apart than the limit, or than
// edgeShare of their distance from the site.
func (c *Cell) uniteWithin(a, b int32, limit float64) {
	p, q := c.v[a], c.v[b]
	if largest(sub(p, q)) <= max(limit, edgeShare*max(largest(p), largest(q))) {
		c.unite(a, b)
	}
}

func (c *Cell) unite(a, b int32) {
	a, b = c.root(a), c.root(b)
	if a < b {
		c.class[b] = a
	} else {
		c.class[a] = b
	}
}

func (c *Cell) root(a int32) int32 {
	for c.class[a] != a {
		c.class[a] = c.class[c.class[a]]
		a = c.class[a]
	}
	return a
}

// corners counts the classes of vertices off the Open faces in which at least
// three counted faces meet.
func (c *Cell) corners() int {
	// mark[2v] is the last face counted at v, plus one; mark[2v+1] how many.
	c.mark = zeroed(c.mark, 2*len(c.v))
	n := 0
	for i := range c.of {
		if !c.Counts(i) {
			continue
		}
		for _, v := range c.loop[c.start[i]:c.start[i+1]] {
			if c.open && c.onOpen[v] {
				continue
			}
			r := c.root(v)
			if c.mark[2*r] == int32(i)+1 {
				continue
			}
			c.mark[2*r] = int32(i) + 1
			c.mark[2*r+1]++
			if c.mark[2*r+1] == 3 {
				n++
			}
		}
	}
	return n
}

// openEuler is V - E + F of the union of the Open faces: 0 without any, 1 for a
// disc, 2 for two discs or a whole sphere, 0 for a ring.
func (c *Cell) openEuler() int {
	if !c.open {
		return 0
	}
	n := 0
	for _, on := range c.onOpen {
		if on {
			n++
		}
	}
	for h, t := range c.twin {
		if int32(h) < t && (c.cuts[c.face[h]].label == Open || c.cuts[c.face[t]].label == Open) {
			n--
		}
	}
	for _, f := range c.of {
		if c.cuts[f].label == Open {
			n++
		}
	}
	return n
}
