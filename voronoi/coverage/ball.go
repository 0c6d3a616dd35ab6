package coverage

import (
	"math"

	"nearcell/voronoi/polyhedron"
)

// inBall is the volume of what a convex polyhedron has of the ball of radius r about the
// origin: exact but for rounding.
//
// The polyhedron is the sum of the cones from the origin over its faces, with a sign where a
// face looks towards the origin. In the plane of a face, about the foot of the origin, each
// edge makes a triangle with the foot; over a direction in the plane the cone ends at the edge, and
// what the ball has of that ray's wedge can be integrated over the direction in closed form.
func inBall(c *polyhedron.Cell, r float64) float64 {
	if c.Farthest() <= r {
		return c.Volume()
	}
	sum := 0.0
	for i := range c.NumFaces() {
		n := c.FaceArea(i)
		l := length(n)
		if !(l > 0) {
			continue
		}
		n = scale(1/l, n)
		_, loop := c.Face(i)
		h := 0.0
		for _, v := range loop {
			h += dot(n, c.Vertex(int(v)))
		}
		h /= float64(len(loop))
		if h == 0 {
			continue
		}
		foot, face := scale(h, n), 0.0
		for k, v := range loop {
			a, b := sub(c.Vertex(int(v)), foot), sub(c.Vertex(int(loop[(k+1)%len(loop)])), foot)
			e := sub(b, a)
			l := length(e)
			if l == 0 {
				continue
			}
			e = scale(1/l, e)
			p := dot(n, cross(a, e)) // positive with the foot on the inner side of the edge
			w := wedge{h: math.Abs(h), p: math.Abs(p), r: r}
			if w.p == 0 {
				continue
			}
			face += math.Copysign(w.upTo(math.Atan2(dot(b, e), w.p))-w.upTo(math.Atan2(dot(a, e), w.p)), p)
		}
		if h < 0 {
			face = -face
		}
		sum += face
	}
	return sum
}

// wedge is the cone from the origin over a plane at the distance h, up to a line at the distance
// p from the foot, and a ball of radius r.
type wedge struct{ h, p, r float64 }

// upTo is the volume of what the ball has of the cone, from the direction at right angles to
// the line up to that at the angle t.
func (w *wedge) upTo(t float64) float64 {
	third := w.r * w.r * w.r / 3
	beyond := func(t float64) float64 { // the cosine at the line, integrated
		return math.Asin(w.h * math.Sin(t) / math.Hypot(w.h, w.p))
	}
	if w.r <= w.h { // the plane is out of reach
		return third * (t - beyond(t))
	}
	reach2 := (w.r - w.h) * (w.r + w.h)
	within := func(t float64) float64 { return w.h * w.p * w.p * math.Tan(t) / 6 }
	outside := func(t float64) float64 {
		return (w.h*reach2/6+third*(w.h/w.r))*t - third*beyond(t)
	}
	if w.p*w.p >= reach2 {
		return outside(t)
	}
	edge := math.Acos(w.p / math.Sqrt(reach2))
	if a := math.Abs(t); a > edge {
		return math.Copysign(within(edge)+(outside(a)-outside(edge)), t)
	}
	return within(t)
}
