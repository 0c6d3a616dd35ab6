package polyhedron

import "math"

// Clip keeps the part of the cell with n·x <= d; the face it makes carries the
// label. A NaN anywhere in the plane panics: a sign would be missing, and the
// volume would be wrong in silence.
func (c *Cell) Clip(n Vec, d float64, label int32) Result {
	if len(c.v) == 0 {
		return Empty
	}
	p := plane{n: n, d: d, label: label}
	if c.fine {
		return c.clipFine(p)
	}
	return c.cutBy(p, c.signs(n, d))
}

// cutBy cuts the cell by a plane for which s and the list of outer vertices are
// known, and the number of vertices strictly below it.
func (c *Cell) cutBy(p plane, below int) Result {
	if len(c.gone) == 0 {
		return Unchanged
	}
	if below == 0 {
		c.reset()
		return Empty
	}
	cut := int32(len(c.cuts))
	c.cuts = append(c.cuts, p)
	c.walked, c.surveyed = false, false
	c.cross()
	c.join(cut)
	c.pack()
	return Cut
}

// signs fills s and the list of outer vertices, and counts the vertices strictly
// below the plane.
func (c *Cell) signs(n Vec, d float64) (below int) {
	if cap(c.s) < len(c.v) {
		c.s = make([]float64, 2*len(c.v)+16)
	}
	s := c.s[:len(c.v)]
	gone := c.gone[:0]
	for i := range c.v {
		p := &c.v[i]
		x := float64(n.X*p.X) + float64(n.Y*p.Y) + float64(n.Z*p.Z) - d
		s[i] = x
		if x > 0 {
			gone = append(gone, int32(i))
		} else if x < 0 {
			below++
		} else if x != x {
			panic("polyhedron: a NaN in a plane or a vertex")
		}
	}
	c.s, c.gone = s, gone
	return below
}

// cross gives every edge between an inner and an outer vertex its own new
// vertex, whose half-edge 0 takes the outer half-edge's place at the inner end.
// The outer vertices keep their twins, which join still needs.
func (c *Cell) cross() {
	if cap(c.fresh) < 3*len(c.v) {
		c.fresh = make([]int32, 6*len(c.v)+48)
	}
	c.fresh = c.fresh[:3*len(c.v)]
	for _, o := range c.gone {
		for h := 3 * o; h < 3*o+3; h++ {
			t := c.twin[h]
			a := t / 3
			if c.s[a] > 0 {
				c.fresh[h] = -1
				continue
			}
			w := int32(len(c.v))
			c.fresh[h] = w
			c.v = append(c.v, c.between(a, o, c.face[t], c.face[h]))
			if c.fine {
				c.low = append(c.low, c.lowOfNew)
			}
			c.sure = append(c.sure, false)
			c.twin = append(c.twin, t, -1, -1)
			c.face = append(c.face, c.face[h], -1, -1)
			c.twin[t] = 3 * w
		}
	}
}

// between is the place of the new vertex on the edge from inner vertex a to
// outer vertex o, which the faces of the cuts f and g share.
func (c *Cell) between(a, o, f, g int32) Vec {
	if a > o { // the same place whichever end is outside
		a, o = o, a
	}
	if c.fine {
		var v Vec
		v, c.lowOfNew = c.placeFine(a, o, f, g)
		return v
	}
	sa, so := c.s[a], c.s[o]
	va, vo := c.v[a], c.v[o]
	p := along(va, vo, sa/(sa-so))
	if c.far {
		return c.refine(p, va, vo, f, g)
	}
	return p
}

// refine sets p, which was interpolated between va and vo, from the three
// planes that meet there if that is the more accurate place. Interpolation on an
// edge of length L leaves an error of about ulp(L); solving leaves one of about
// ulp(size) divided by the volume that the three unit normals span, where size is
// the distance of the planes and of the place. A solution farther from p than p can
// be wrong belongs to planes that depend on each other.
func (c *Cell) refine(p, va, vo Vec, f, g int32) Vec {
	long, near := largest(sub(va, vo)), largest(p)
	if long <= 16*near {
		return p
	}
	a, b, e := &c.cuts[f], &c.cuts[g], &c.cuts[len(c.cuts)-1]
	bc, ca, ab := cross(b.n, e.n), cross(e.n, a.n), cross(a.n, b.n)
	det := dot(a.n, bc)
	if det == 0 {
		return p
	}
	q := Vec{
		X: (float64(a.d*bc.X) + float64(b.d*ca.X) + float64(e.d*ab.X)) / det,
		Y: (float64(a.d*bc.Y) + float64(b.d*ca.Y) + float64(e.d*ab.Y)) / det,
		Z: (float64(a.d*bc.Z) + float64(b.d*ca.Z) + float64(e.d*ab.Z)) / det,
	}
	la, lb, le := length(a.n), length(b.n), length(e.n)
	spread := math.Abs(det) / (la * lb * le)
	size := max(largest(q), near, math.Abs(a.d)/la, math.Abs(b.d)/lb, math.Abs(e.d)/le)
	if size < float64(spread*long) && largest(sub(q, p)) <= 0x1p-40*long {
		return q
	}
	return p
}

// join links the new vertices along the outside run of every face: a face that
// is left at new vertex w (the exit) and entered again at x (the entry) keeps the
// half-edge w -> x, and the new face gets x -> w.
func (c *Cell) join(cut int32) {
	for _, o := range c.gone {
		for h := 3 * o; h < 3*o+3; h++ {
			w := c.fresh[h]
			if w < 0 {
				continue
			}
			// Follow the face on the left of inner -> outer to where it comes back.
			g := before(h)
			for c.fresh[g] < 0 {
				g = before(c.twin[g])
			}
			x := c.fresh[g]
			out, back := 3*w+2, 3*x+1
			c.twin[out], c.twin[back] = back, out
			c.face[out], c.face[back] = c.face[g], cut
		}
	}
}

// before is the half-edge clockwise of h at the same vertex: arriving along the
// twin of h, the face on the left goes on along before(h).
func before(h int32) int32 {
	if h%3 == 0 {
		return h + 2
	}
	return h - 1
}

// pack fills the places of the outer vertices from the end of the list.
func (c *Cell) pack() {
	last := int32(len(c.v)) - 1
	hole := 0
	for hi := len(c.gone) - 1; hole <= hi; {
		for hi >= hole && c.gone[hi] == last { // the end itself is a hole
			hi--
			last--
		}
		if hole > hi {
			break
		}
		o := c.gone[hole]
		hole++
		c.v[o], c.sure[o] = c.v[last], c.sure[last]
		if c.fine {
			c.low[o] = c.low[last]
		}
		for k := int32(0); k < 3; k++ {
			t := c.twin[3*last+k]
			if t/3 == last { // an edge of a vertex to itself cannot be
				panic("polyhedron: a loop at a vertex")
			}
			c.twin[3*o+k], c.face[3*o+k] = t, c.face[3*last+k]
			c.twin[t] = 3*o + k
		}
		last--
	}
	n := int(last) + 1
	c.v, c.sure, c.twin, c.face = c.v[:n], c.sure[:n], c.twin[:3*n], c.face[:3*n]
	if c.fine {
		c.low = c.low[:n]
	}
}
