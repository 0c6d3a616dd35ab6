package polyhedron

// Polygon is a plane convex polygon in space that half-spaces cut down. It
// keeps its buffers; the zero value is empty.
type Polygon struct {
	v, next []Vec
	s       []float64
}

// Set makes the polygon the one with these corners, in order.
func (p *Polygon) Set(corners ...Vec) { p.v = append(p.v[:0], corners...) }

// SetFace makes the polygon face i of a cell.
func (p *Polygon) SetFace(c *Cell, i int) {
	_, loop := c.Face(i)
	p.v = p.v[:0]
	for _, j := range loop {
		p.v = append(p.v, c.v[j])
	}
}

// CopyFrom makes the polygon equal to o, in its own buffers.
func (p *Polygon) CopyFrom(o *Polygon) { p.v = append(p.v[:0], o.v...) }

// Move shifts the polygon by a vector.
func (p *Polygon) Move(by Vec) {
	for i := range p.v {
		p.v[i] = add(p.v[i], by)
	}
}

// Len is the number of corners; 0 if nothing is left.
func (p *Polygon) Len() int { return len(p.v) }

// Corner is corner i.
func (p *Polygon) Corner(i int) Vec { return p.v[i] }

// Empty tells whether nothing is left.
func (p *Polygon) Empty() bool { return len(p.v) == 0 }

// Clip keeps the part with n·x <= d (Sutherland & Hodgman 1974). A polygon that
// lies in the plane is kept whole.
func (p *Polygon) Clip(n Vec, d float64) Result {
	if len(p.v) == 0 {
		return Empty
	}
	p.s = p.s[:0]
	below, above := 0, 0
	for _, q := range p.v {
		x := dot(n, q) - d
		if x > 0 {
			above++
		} else if x < 0 {
			below++
		} else if x != x {
			panic("polyhedron: a NaN in a plane or a corner")
		}
		p.s = append(p.s, x)
	}
	if above == 0 {
		return Unchanged
	}
	if below == 0 {
		p.v = p.v[:0]
		return Empty
	}
	p.next = p.next[:0]
	for i, q := range p.v {
		j := i + 1
		if j == len(p.v) {
			j = 0
		}
		if p.s[i] <= 0 {
			p.next = append(p.next, q)
		}
		// The place is computed from the inner end, so that an edge that two
		// polygons share is cut in the same place in both.
		if p.s[i] <= 0 && p.s[j] > 0 {
			p.next = append(p.next, along(q, p.v[j], p.s[i]/(p.s[i]-p.s[j])))
		} else if p.s[i] > 0 && p.s[j] <= 0 {
			p.next = append(p.next, along(p.v[j], q, p.s[j]/(p.s[j]-p.s[i])))
		}
	}
	p.v, p.next = p.next, p.v
	return Cut
}

// Area is the area vector: its length is the area, its direction that from
// which the corners run counter-clockwise.
func (p *Polygon) Area() Vec {
	var a Vec
	for k := 2; k < len(p.v); k++ {
		a = add(a, cross(sub(p.v[k-1], p.v[0]), sub(p.v[k], p.v[0])))
	}
	return scale(0.5, a)
}
