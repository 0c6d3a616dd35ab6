package polyhedron

import (
	"math"
	"slices"
)

// Moments are the integrals of 1, x and x xᵀ over a cell, about the origin of
// its local coordinates.
type Moments struct {
	Volume float64
	First  Vec
	// Second holds the integrals of xx, yy, zz, xy, xz and yz.
	Second [6]float64
}

// walk lists the faces: the cycles of "next half-edge with the face on the
// left".
func (c *Cell) walk() {
	if c.walked {
		return
	}
	c.walked = true
	n := len(c.twin)
	if cap(c.seen) < n {
		c.seen = make([]bool, 2*n)
	}
	c.seen = c.seen[:n]
	clear(c.seen)
	c.start, c.loop, c.of = append(c.start[:0], 0), c.loop[:0], c.of[:0]
	for h := range c.twin {
		if c.seen[h] {
			continue
		}
		g := int32(h)
		for !c.seen[g] {
			c.seen[g] = true
			c.loop = append(c.loop, g/3)
			g = before(c.twin[g])
		}
		c.start = append(c.start, int32(len(c.loop)))
		c.of = append(c.of, c.face[h])
	}
	if c.far {
		c.nearestFirst()
	}
}

// nearestFirst turns the loops of a far cell so that each begins at its vertex
// nearest to the site. Fans of triangles from a vertex far away would lose the
// digits of a slender face.
func (c *Cell) nearestFirst() {
	for i := range c.of {
		loop := c.loop[c.start[i]:c.start[i+1]]
		first := 0
		for k, j := range loop {
			if dot(c.v[j], c.v[j]) < dot(c.v[loop[first]], c.v[loop[first]]) {
				first = k
			}
		}
		slices.Reverse(loop[:first])
		slices.Reverse(loop[first:])
		slices.Reverse(loop)
	}
}

// NumFaces is the number of faces, those of area zero included.
func (c *Cell) NumFaces() int {
	c.walk()
	return len(c.of)
}

// Face is face i: its label and the numbers of its vertices, counter-clockwise
// seen from outside. The loop is a view that the next cut overwrites. Through
// rounding a label can have more than one face; at most one of them is more than
// a crumb.
func (c *Cell) Face(i int) (label int32, loop []int32) {
	c.walk()
	return c.cuts[c.of[i]].label, c.loop[c.start[i]:c.start[i+1]]
}

// FacePlane is the half-space n·x <= d behind face i, as it was given to Clip.
func (c *Cell) FacePlane(i int) (n Vec, d float64) {
	c.walk()
	p := &c.cuts[c.of[i]]
	return p.n, p.d
}

// FaceArea is the area vector of face i: its length is the area, its direction
// points out of the cell.
func (c *Cell) FaceArea(i int) Vec {
	c.walk()
	return c.areaOf(c.loop[c.start[i]:c.start[i+1]])
}

func (c *Cell) areaOf(loop []int32) Vec {
	var a Vec
	if len(loop) < 3 {
		return a
	}
	p := c.v[loop[0]]
	e := sub(c.v[loop[1]], p)
	for _, j := range loop[2:] {
		f := sub(c.v[j], p)
		a.X += float64(e.Y*f.Z) - float64(e.Z*f.Y)
		a.Y += float64(e.Z*f.X) - float64(e.X*f.Z)
		a.Z += float64(e.X*f.Y) - float64(e.Y*f.X)
		e = f
	}
	return Vec{X: a.X / 2, Y: a.Y / 2, Z: a.Z / 2}
}

// FaceMiddle is the area of face i and its centroid; the mean of its vertices
// where the area is zero.
func (c *Cell) FaceMiddle(i int) (area float64, middle Vec) {
	_, loop := c.Face(i)
	p := c.v[loop[0]]
	normal := c.areaOf(loop)
	area = length(normal)
	var weight float64
	var sum Vec
	for k := 2; k < len(loop); k++ {
		e, f := sub(c.v[loop[k-1]], p), sub(c.v[loop[k]], p)
		w := dot(cross(e, f), normal)
		weight += w
		sum = add(sum, scale(w, add(e, f)))
	}
	if weight > 0 && !math.IsInf(weight, 0) {
		return area, add(p, scale(1/(3*weight), sum))
	}
	for _, j := range loop[1:] {
		middle = add(middle, sub(c.v[j], p))
	}
	return area, add(p, scale(1/float64(len(loop)), middle))
}

// Surface is the sum of the areas of all faces.
func (c *Cell) Surface() float64 {
	if c.Empty() {
		return 0
	}
	c.survey()
	total := 0.0
	for _, a := range c.area {
		total += a
	}
	return total
}

// Volume is the volume. Every face contributes a cone to the origin, all of
// them positive where the site lies in the cell.
func (c *Cell) Volume() float64 {
	c.walk()
	total := 0.0
	for i := range c.of {
		loop := c.loop[c.start[i]:c.start[i+1]]
		total += c.coneOver(i, c.areaOf(loop))
	}
	return total / 3
}

// coneOver is three times the volume of the cone from the origin over face i. A far
// cell takes the height from the plane, since its vertices may be so far away that
// their product with the area vector cancels.
func (c *Cell) coneOver(i int, area Vec) float64 {
	if c.far {
		p := &c.cuts[c.of[i]]
		return float64(p.d / length(p.n) * length(area))
	}
	return dot(c.v[c.loop[c.start[i]]], area)
}

// Moments are the volume and the first and second moments about the origin:
// every face is fanned into triangles, every triangle coned to the origin. With
// corners 0, a, b, c, S = a+b+c and volume w a tetrahedron has the moments w, wS/4
// and w/20 (aaᵀ+bbᵀ+ccᵀ+SSᵀ).
func (c *Cell) Moments() Moments {
	c.walk()
	var m Moments
	for i := range c.of {
		loop := c.loop[c.start[i]:c.start[i+1]]
		p := c.v[loop[0]]
		for k := 2; k < len(loop); k++ {
			m.cone(p, c.v[loop[k-1]], c.v[loop[k]])
		}
	}
	m.Volume /= 6
	m.First = scale(1.0/24, m.First)
	for k := range m.Second {
		m.Second[k] /= 120
	}
	return m
}

// cone adds the tetrahedron 0, a, b, c with its weights left out.
func (m *Moments) cone(a, b, c Vec) {
	w := dot(a, cross(b, c))
	s := add(a, add(b, c))
	m.Volume += w
	m.First.X += float64(w * s.X)
	m.First.Y += float64(w * s.Y)
	m.First.Z += float64(w * s.Z)
	both := func(a0, b0, c0, s0, a1, b1, c1, s1 float64) float64 {
		return float64(w * (float64(a0*a1) + float64(b0*b1) + float64(c0*c1) + float64(s0*s1)))
	}
	m.Second[0] += both(a.X, b.X, c.X, s.X, a.X, b.X, c.X, s.X)
	m.Second[1] += both(a.Y, b.Y, c.Y, s.Y, a.Y, b.Y, c.Y, s.Y)
	m.Second[2] += both(a.Z, b.Z, c.Z, s.Z, a.Z, b.Z, c.Z, s.Z)
	m.Second[3] += both(a.X, b.X, c.X, s.X, a.Y, b.Y, c.Y, s.Y)
	m.Second[4] += both(a.X, b.X, c.X, s.X, a.Z, b.Z, c.Z, s.Z)
	m.Second[5] += both(a.Y, b.Y, c.Y, s.Y, a.Z, b.Z, c.Z, s.Z)
}

// VolumeAndFirst is the volume and the first moment about the origin, without
// the price of the second moments.
func (c *Cell) VolumeAndFirst() (volume float64, first Vec) {
	c.walk()
	for i := range c.of {
		loop := c.loop[c.start[i]:c.start[i+1]]
		if c.far { // a cone's centroid is at 3/4 of the way to its base's
			area, middle := c.FaceMiddle(i)
			w := c.coneOver(i, Vec{X: area})
			volume += 2 * w
			first = add(first, scale(6*w, middle))
			continue
		}
		a := c.v[loop[0]]
		for k := 2; k < len(loop); k++ {
			b, d := c.v[loop[k-1]], c.v[loop[k]]
			w := dot(a, cross(b, d))
			volume += w
			first = add(first, scale(w, add(a, add(b, d))))
		}
	}
	return volume / 6, scale(1.0/24, first)
}
