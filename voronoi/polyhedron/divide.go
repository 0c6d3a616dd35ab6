package polyhedron

import "math"

// Divide divides x, y and z of the cell by the three factors of s, which are finite and
// greater than 0: it takes a cell that was made in stretched space back to true units.
// Labels stay. Cuts after it are those of the space that it leads to.
func (c *Cell) Divide(s Vec) {
	for i := range c.v {
		v := &c.v[i]
		if c.fine {
			v.X, c.low[i].X = quotient(v.X, c.low[i].X, s.X)
			v.Y, c.low[i].Y = quotient(v.Y, c.low[i].Y, s.Y)
			v.Z, c.low[i].Z = quotient(v.Z, c.low[i].Z, s.Z)
			continue
		}
		v.X, v.Y, v.Z = v.X/s.X, v.Y/s.Y, v.Z/s.Z
	}
	for i := range c.cuts {
		p := &c.cuts[i]
		if c.fine {
			p.n.X, p.low.X = product(p.n.X, p.low.X, s.X)
			p.n.Y, p.low.Y = product(p.n.Y, p.low.Y, s.Y)
			p.n.Z, p.low.Z = product(p.n.Z, p.low.Z, s.Z)
			continue
		}
		p.n = Vec{X: float64(p.n.X * s.X), Y: float64(p.n.Y * s.Y), Z: float64(p.n.Z * s.Z)}
	}
	c.walked, c.surveyed = false, false
}

// quotient is (high + low) / by in two words.
func quotient(high, low, by float64) (float64, float64) {
	q := high / by
	return twoWords(q, (math.FMA(-q, by, high)+low)/by)
}

// product is (high + low) · by in two words.
func product(high, low, by float64) (float64, float64) {
	p := float64(high * by)
	return twoWords(p, math.FMA(high, by, -p)+float64(low*by))
}

// twoWords rounds a sum whose second term is small once more.
func twoWords(high, low float64) (float64, float64) {
	sum := high + low
	return sum, low - (sum - high)
}
