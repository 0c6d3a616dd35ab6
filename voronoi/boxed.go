package voronoi

import "nearcell/voronoi/polyhedron"

// Cells that leave a box, face by face. Every face of the cell is a polygon of Voronoi
// vertices; what the box leaves of it is found by cutting the polygon (Sutherland &
// Hodgman 1974). The cuts leave segments on the walls, which bound the wall's part of
// the cell; and where two segments meet, an end of what the cell has of an edge of the
// box. The wall's area follows from these by the divergence theorem in the plane, as
// the volume follows from the areas in space: no polyhedron is made.
//
// Segments enter as they are, with signs, so that nothing has to be put in order. What
// an end of an edge is, upper or lower, follows from which wall's segment comes first
// around the face. The corners of the box that lie in the cell are the remaining ends;
// for these the nearest site is asked. A cell in which the ends do not match, or whose
// area vectors do not add up to zero, is cut plane by plane instead; so are the cells
// at corners that two sites are equally near to.

// rim is a polygon; side[i] is the wall that the edge from corner i lies in, -1 none.
type rim struct {
	v    []Vec
	side []int8
	s    []float64
}

// wall is what a cell has of a side of the box.
type wall struct {
	twice float64 // area, doubled
	six   Vec     // first moment in the plane, six times, the foot of the site being the origin
	far2  float64
	met   bool
}

func component(p Vec, axis int) float64 {
	switch axis {
	case 0:
		return p.X
	case 1:
		return p.Y
	}
	return p.Z
}

func setComponent(p *Vec, axis int, x float64) {
	switch axis {
	case 0:
		p.X = x
	case 1:
		p.Y = x
	default:
		p.Z = x
	}
}

// height is the distance from the site to side k, positive inside.
func (w *walker) height(k int) float64 {
	if k&1 == 0 {
		return -component(w.lo, k>>1)
	}
	return component(w.hi, k>>1)
}

// closure is the most that the area vectors of a closed surface may add up to, as a
// share of the surface.
const closure = 1e-11

// inBox adds up what the box leaves of the star at hand. It reports false if the
// result cannot be trusted.
func (w *walker) inBox(k wants) bool {
	g, s := w.g, &w.sums
	w.lo, w.hi = g.localBox(w.p)
	s.reset()
	w.walls, w.ends = [6]wall{}, [12]int8{}
	for i := range w.faces {
		f := &w.faces[i]
		all, some := uint8(0xff), uint8(0)
		for _, o := range w.out[f.from:f.to] {
			all &= o
			some |= o
		}
		if all != 0 {
			continue
		}
		if some == 0 {
			s.addFace(f.q, f.n, w.loop[f.from:f.to], k)
			s.threes += int(f.to - f.from)
			continue
		}
		w.cutFace(f, some)
		if len(w.polygon.v) >= 3 {
			s.addFace(f.q, f.n, w.polygon.v, k)
			w.alongWalls(k)
		}
	}
	for _, x := range g.corners[w.p] {
		w.addCorner(sub(x, add(w.own, g.origin)), k)
	}
	for _, e := range w.ends {
		if e != 0 {
			return false
		}
	}
	w.addWalls(k)
	return largest(s.vector2) <= closure*s.surface
}

// cutFace leaves in w.polygon what the sides of the box leave of a face.
func (w *walker) cutFace(f *face, sides uint8) {
	r := &w.polygon
	r.v = append(r.v[:0], w.loop[f.from:f.to]...)
	r.side = r.side[:0]
	for range r.v {
		r.side = append(r.side, -1)
	}
	for k := range 6 {
		if sides>>k&1 != 0 && !w.cutBy(k) {
			return
		}
	}
}

// cutBy cuts w.polygon by side k and reports whether anything is left.
func (w *walker) cutBy(k int) bool {
	r, to := &w.polygon, &w.spare
	axis := k >> 1
	limit := component(w.hi, axis)
	if k&1 == 0 {
		limit = component(w.lo, axis)
	}
	r.s = r.s[:0]
	above, below := 0, 0
	for i := range r.v {
		d := component(r.v[i], axis) - limit
		if k&1 == 0 {
			d = -d
		}
		if d > 0 {
			above++
		} else if d < 0 {
			below++
		}
		r.s = append(r.s, d)
	}
	if above == 0 {
		return true
	}
	to.v, to.side = to.v[:0], to.side[:0]
	if below == 0 {
		r.v, r.side = r.v[:0], r.side[:0]
		return false
	}
	for i, j := len(r.v)-1, 0; j < len(r.v); i, j = j, j+1 {
		si, sj := r.s[i], r.s[j]
		switch {
		case si <= 0 && sj > 0: // out: the new edge lies in the wall
			v := along(r.v[i], r.v[j], si/(si-sj))
			setComponent(&v, axis, limit)
			to.v, to.side = append(to.v, v), append(to.side, int8(k))
		case si > 0 && sj <= 0: // in again
			v := along(r.v[j], r.v[i], sj/(sj-si))
			setComponent(&v, axis, limit)
			to.v, to.side = append(to.v, v), append(to.side, r.side[i])
		}
		if sj <= 0 {
			to.v, to.side = append(to.v, r.v[j]), append(to.side, r.side[j])
		}
	}
	w.polygon, w.spare = w.spare, w.polygon
	return true
}

// along is the place a + t (b - a).
func along(a, b Vec, t float64) Vec {
	return Vec{X: a.X + float64(t*(b.X-a.X)), Y: a.Y + float64(t*(b.Y-a.Y)), Z: a.Z + float64(t*(b.Z-a.Z))}
}

// alongWalls adds the segments of w.polygon that lie in walls, and its corners on edges
// of the box.
func (w *walker) alongWalls(k wants) {
	r, s := &w.polygon, &w.sums
	last := r.side[len(r.side)-1]
	for i, side := range r.side {
		before := last
		last = side
		switch {
		case before < 0 && side < 0:
			s.threes++
		case before >= 0 && side >= 0 && before != side:
			s.ones++
			w.addEnd(int(before), int(side), r.v[i], 0, k)
		case before != side:
			s.twos++
		default: // a corner in the middle of a segment: rounding
			s.generic = false
		}
		if side < 0 {
			continue
		}
		j := i + 1
		if j == len(r.v) {
			j = 0
		}
		w.addSegment(int(side), r.v[i], r.v[j], k)
	}
}

// addSegment adds the triangle from the foot of the site over a segment of the wall's
// boundary: the face runs from x to y, the wall from y to x.
func (w *walker) addSegment(side int, x, y Vec, k wants) {
	t := &w.walls[side]
	t.met = true
	axis := side >> 1
	i, j := (axis+1)%3, (axis+2)%3
	xi, xj, yi, yj := component(x, i), component(x, j), component(y, i), component(y, j)
	twice := float64(yi*xj) - float64(yj*xi)
	if side&1 == 0 {
		twice = -twice
	}
	t.twice += twice
	t.far2 = max(t.far2, dot(x, x), dot(y, y))
	if k.moments {
		setComponent(&t.six, i, component(t.six, i)+float64(twice*(xi+yi)))
		setComponent(&t.six, j, component(t.six, j)+float64(twice*(xj+yj)))
	}
}

// addEnd adds an end at x of what the cell has of the edge between two walls. upper is
// +1 or -1; 0: it follows from the order in which a face meets the walls.
func (w *walker) addEnd(a, b int, x Vec, upper float64, k wants) {
	if a>>1 == b>>1 {
		w.sums.generic = false // opposite walls: rounding
		return
	}
	axis := 3 - a>>1 - b>>1
	if upper == 0 {
		// The sign of the walls' normals' cross product along the axis.
		upper = 1
		if (b>>1-a>>1+3)%3 == 2 {
			upper = -upper
		}
		if a&1 == 0 {
			upper = -upper
		}
		if b&1 == 0 {
			upper = -upper
		}
	}
	w.ends[axis*4+(a&1)<<boolBit(a > b)+(b&1)<<boolBit(b > a)] += int8(upper)
	at := component(x, axis)
	for range 2 {
		// In the plane of a the line of b has the distance of b from the site.
		t := &w.walls[a]
		t.met = true
		h := w.height(b)
		twice := float64(upper * h * at)
		t.twice += twice
		t.far2 = max(t.far2, dot(x, x))
		if k.moments {
			setComponent(&t.six, axis, component(t.six, axis)+float64(twice*at))
			outward := h
			if b&1 == 0 {
				outward = -h
			}
			setComponent(&t.six, b>>1, component(t.six, b>>1)+float64(2*twice*outward))
		}
		a, b = b, a
	}
}

func boolBit(b bool) int {
	if b {
		return 1
	}
	return 0
}

// addCorner adds a corner of the box, which ends three of its edges.
func (w *walker) addCorner(x Vec, k wants) {
	w.sums.ones++
	w.sums.far2 = max(w.sums.far2, dot(x, x))
	var sides [3]int
	for axis := range 3 {
		sides[axis] = 2 * axis
		if component(x, axis) == component(w.hi, axis) {
			sides[axis]++
		}
	}
	for axis := range 3 {
		upper := float64(2*(sides[axis]&1) - 1)
		w.addEnd(sides[(axis+1)%3], sides[(axis+2)%3], x, upper, k)
	}
}

// addWalls turns what was added to the walls into faces.
func (w *walker) addWalls(k wants) {
	s := &w.sums
	for side := range w.walls {
		t := &w.walls[side]
		if !t.met {
			continue
		}
		area, h := t.twice/2, w.height(side)
		s.surface += area
		vector := t.twice
		foot := h
		if side&1 == 0 {
			vector, foot = -vector, -h
		}
		axis := side >> 1
		setComponent(&s.vector2, axis, component(s.vector2, axis)+vector)
		s.volume12 += float64(4 * h * area)
		if k.moments {
			// The first moment of the cone is h/4 times that of its base.
			m := t.six
			m = Vec{X: m.X / 6, Y: m.Y / 6, Z: m.Z / 6}
			setComponent(&m, axis, float64(foot*area))
			s.first48 = add(s.first48, Vec{X: float64(12 * h * m.X), Y: float64(12 * h * m.Y), Z: float64(12 * h * m.Z)})
		}
		s.parts = append(s.parts, part{q: polyhedron.Wall(int32(side)), area: area, far2: t.far2, isWall: true})
	}
}
