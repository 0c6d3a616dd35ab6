package draw

// ringArea is the signed area of a ring, positive where it runs counter-clockwise with
// y up.
func ringArea(ring []Point) float64 {
	sum := 0.0
	for i, p := range ring {
		q, o := ring[(i+1)%len(ring)], ring[0]
		sum += float64((p.X-o.X)*(q.Y-o.Y)) - float64((q.X-o.X)*(p.Y-o.Y))
	}
	return sum / 2
}

// Area is the area of a polygon without its holes.
func (p Polygon) Area() float64 {
	sum := 0.0
	for _, ring := range p {
		sum += ringArea(ring)
	}
	return sum
}

// Middle is the centroid of a polygon.
func (p Polygon) Middle() Point {
	var sx, sy, area float64
	o := p[0][0]
	for _, ring := range p {
		for i, a := range ring {
			b := ring[(i+1)%len(ring)]
			w := float64((a.X-o.X)*(b.Y-o.Y)) - float64((b.X-o.X)*(a.Y-o.Y))
			sx += float64(w * (a.X + b.X - 2*o.X))
			sy += float64(w * (a.Y + b.Y - 2*o.Y))
			area += w
		}
	}
	if area == 0 {
		return o
	}
	return Point{o.X + sx/(3*area), o.Y + sy/(3*area)}
}

// Within is the part of a polygon in a box with sides along the axes (Sutherland and
// Hodgman, 1974). Where the part falls apart, its pieces hang together by lines without
// area along the sides of the box.
func (p Polygon) Within(lo, hi Point) Polygon {
	var out Polygon
	for _, ring := range p {
		ring = halved(ring, func(q Point) float64 { return q.X - lo.X })
		ring = halved(ring, func(q Point) float64 { return hi.X - q.X })
		ring = halved(ring, func(q Point) float64 { return q.Y - lo.Y })
		ring = halved(ring, func(q Point) float64 { return hi.Y - q.Y })
		if len(ring) > 2 {
			out = append(out, ring)
		}
	}
	return out
}

// halved keeps what of a ring has a depth of at least 0.
func halved(ring []Point, depth func(Point) float64) []Point {
	var out []Point
	for i, a := range ring {
		b := ring[(i+1)%len(ring)]
		da, db := depth(a), depth(b)
		if da >= 0 {
			out = append(out, a)
		}
		if da > 0 && db < 0 || da < 0 && db > 0 {
			s := da / (da - db)
			out = append(out, Point{a.X + float64((b.X-a.X)*s), a.Y + float64((b.Y-a.Y)*s)})
		}
	}
	return out
}

// Holds tells whether a place lies in the polygon.
func (p Polygon) Holds(q Point) bool {
	in := false
	for _, ring := range p {
		for i, a := range ring {
			b := ring[(i+1)%len(ring)]
			if (a.Y > q.Y) != (b.Y > q.Y) && q.X < a.X+(b.X-a.X)*((q.Y-a.Y)/(b.Y-a.Y)) {
				in = !in
			}
		}
	}
	return in
}
