package polyhedron

import "math"

// SetFarBox makes the cell a cube about the site, far larger than the cell is
// expected to be, whose sides carry the label. The cell is then cut by Bisect.
//
// Interpolating on edges that long loses digits. A plain far cell sets its vertices
// from their three planes wherever that is the more accurate place. A fine one
// keeps vertices and planes in two words a coordinate: cells that reach 10^15 times
// farther than their neighbours are apart come out right.
func (c *Cell) SetFarBox(size float64, label int32, fine bool) {
	at := Vec{X: size, Y: size, Z: size}
	c.SetBox(scale(-1, at), at, [6]int32{label, label, label, label, label, label})
	c.far, c.fine = true, fine
	if fine {
		c.low = append(c.low[:0], make([]Vec, len(c.v))...)
	}
}

// Bisect keeps the part of the cell nearer to the origin than to the place n + low
// (low is what rounding lost of n, zero if nothing).
func (c *Cell) Bisect(n, low Vec, label int32) Result {
	d := dot(n, n) / 2
	if !c.fine || len(c.v) == 0 {
		return c.Clip(n, d, label)
	}
	twice := doubleDot(n, low, n, low)
	p := plane{n: n, d: twice.high / 2, label: label, low: low, dLow: twice.low / 2}
	return c.clipFine(p)
}

// clipFine is Clip in two words a coordinate.
func (c *Cell) clipFine(p plane) Result {
	if c.clearlyBelow(&p) {
		return Unchanged
	}
	below := 0
	c.s, c.gone = c.s[:0], c.gone[:0]
	for i := range c.v {
		s := c.side(&p, c.v[i], c.low[i])
		c.s = append(c.s, s)
		if s > 0 {
			c.gone = append(c.gone, int32(i))
		} else if s < 0 {
			below++
		} else if s != s {
			panic("polyhedron: a NaN in a plane or a vertex")
		}
	}
	return c.cutBy(p, below)
}

// clearlyBelow tells whether no vertex is beyond the plane, without a doubt that
// rounding could raise.
func (c *Cell) clearlyBelow(p *plane) bool {
	for i := range c.v {
		v := &c.v[i]
		x, y, z := float64(p.n.X*v.X), float64(p.n.Y*v.Y), float64(p.n.Z*v.Z)
		if x+y+z-p.d > -0x1p-48*(math.Abs(x)+math.Abs(y)+math.Abs(z)+math.Abs(p.d)) {
			return false
		}
	}
	return true
}

// side is n·v - d, computed in two words and rounded once.
func (c *Cell) side(p *plane, v, low Vec) float64 {
	return doubleDot(p.n, p.low, v, low).sub(double{p.d, p.dLow}).high
}

// placeFine is the place in two words where the edge from vertex a to vertex o
// meets the last cut. The first guess is as good as its one-word parameter; every
// correction along the edge adds that many digits again. f and g are the other two
// planes of the vertex.
func (c *Cell) placeFine(a, o, f, g int32) (v, low Vec) {
	e := &c.cuts[len(c.cuts)-1]
	sa, so := c.s[a], c.s[o]
	dx := double{c.v[o].X, c.low[o].X}.sub(double{c.v[a].X, c.low[a].X})
	dy := double{c.v[o].Y, c.low[o].Y}.sub(double{c.v[a].Y, c.low[a].Y})
	dz := double{c.v[o].Z, c.low[o].Z}.sub(double{c.v[a].Z, c.low[a].Z})
	t := double{sa / (sa - so), 0}
	for range 2 {
		v, low = moved(c.v[a], c.low[a], dx.mul(t), dy.mul(t), dz.mul(t))
		more := c.side(e, v, low) / (sa - so)
		if !(math.Abs(more) < 0x1p-40) {
			break // the edge lies in the plane, as far as can be told
		}
		t = t.add(double{more, 0})
		if t.high < 0 || t.high > 1 {
			break
		}
	}
	return c.settleFine(v, low, &c.cuts[f], &c.cuts[g], e, largest(sub(c.v[a], c.v[o])))
}

func moved(v, low Vec, x, y, z double) (Vec, Vec) {
	x = double{v.X, low.X}.add(x)
	y = double{v.Y, low.Y}.add(y)
	z = double{v.Z, low.Z}.add(z)
	return Vec{X: x.high, Y: y.high, Z: z.high}, Vec{X: x.low, Y: y.low, Z: z.low}
}

// settleFine moves a place by Newton's method onto its three planes, where these
// are not so nearly dependent that the place on the edge is the better one.
func (c *Cell) settleFine(v, low Vec, a, b, e *plane, long float64) (Vec, Vec) {
	bc, ca, ab := cross(b.n, e.n), cross(e.n, a.n), cross(a.n, b.n)
	det := dot(a.n, bc)
	if !(math.Abs(det) > 1e-12*length(a.n)*length(b.n)*length(e.n)) {
		return v, low
	}
	for range 2 {
		r, s, t := c.side(a, v, low), c.side(b, v, low), c.side(e, v, low)
		x := -(float64(r*bc.X) + float64(s*ca.X) + float64(t*ab.X)) / det
		y := -(float64(r*bc.Y) + float64(s*ca.Y) + float64(t*ab.Y)) / det
		z := -(float64(r*bc.Z) + float64(s*ca.Z) + float64(t*ab.Z)) / det
		if !(max(math.Abs(x), math.Abs(y), math.Abs(z)) <= 0x1p-60*long) {
			return v, low // more than rounding can have moved it
		}
		v, low = moved(v, low, double{x, 0}, double{y, 0}, double{z, 0})
	}
	return v, low
}
