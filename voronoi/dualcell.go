package voronoi

import "math"

// cellSums is what the faces of a cell add up to. Heights and areas come from the
// faces one by one (divergence theorem): with the site as the origin, a face towards
// the neighbour at n has the height |n|/2, the cone over it a third of height times
// area, and its centre of gravity lies at 3/4 of the way to that of the face.
type cellSums struct {
	volume12 float64 // 12 times the volume
	first48  Vec     // 48 times the first moment
	vector2  Vec     // twice the sum of the area vectors: zero for a closed surface
	surface  float64
	far2     float64
	parts    []part

	// Of the vertices: those of three faces of the cell, of two, and of one, each as
	// often as they were met. generic: no edge is short.
	threes, twos, ones int
	generic            bool
}

// part is a face of the finished cell.
type part struct {
	q      int32 // point, or a wall's label
	area   float64
	far2   float64
	middle Vec // where wanted
	isWall bool
}

func (s *cellSums) reset() {
	parts := s.parts[:0]
	*s = cellSums{parts: parts, generic: true}
}

// wants is what of the sums is needed.
type wants struct{ moments, middles, shape bool }

// addFace adds the polygon of a face towards the neighbour at n.
func (s *cellSums) addFace(q int32, n Vec, loop []Vec, k wants) {
	if len(loop) < 3 {
		return
	}
	a := loop[0]
	var area, first Vec
	ex, ey, ez := loop[1].X-a.X, loop[1].Y-a.Y, loop[1].Z-a.Z
	for _, b := range loop[2:] {
		fx, fy, fz := b.X-a.X, b.Y-a.Y, b.Z-a.Z
		cx := float64(ey*fz) - float64(ez*fy)
		cy := float64(ez*fx) - float64(ex*fz)
		cz := float64(ex*fy) - float64(ey*fx)
		area.X += cx
		area.Y += cy
		area.Z += cz
		if k.moments {
			t := float64(n.X*cx) + float64(n.Y*cy) + float64(n.Z*cz)
			first.X += float64(t * (ex + fx))
			first.Y += float64(t * (ey + fy))
			first.Z += float64(t * (ez + fz))
		}
		ex, ey, ez = fx, fy, fz
	}
	double := length(area)
	volume := dot(n, area)
	s.volume12 += volume
	if k.moments {
		s.first48.X += first.X + float64(3*volume*a.X)
		s.first48.Y += first.Y + float64(3*volume*a.Y)
		s.first48.Z += first.Z + float64(3*volume*a.Z)
	}
	s.vector2 = add(s.vector2, area)
	s.surface += double / 2
	p := part{q: q, area: double / 2}
	if k.middles {
		p.middle = a
		if volume > 0 {
			p.middle = Vec{X: a.X + first.X/(3*volume), Y: a.Y + first.Y/(3*volume), Z: a.Z + first.Z/(3*volume)}
		}
	}
	for i := range loop {
		b := &loop[i]
		if d := float64(b.X*b.X) + float64(b.Y*b.Y) + float64(b.Z*b.Z); d > p.far2 {
			p.far2 = d
		}
	}
	if p.far2 > s.far2 {
		s.far2 = p.far2
	}
	s.parts = append(s.parts, p)
	if k.shape {
		s.generic = s.generic && noShortEdge(loop)
	}
}

// shortEdge is the share of the distance to an edge from which it has two ends:
// polyhedron.Cell.Shape, with a little to spare.
const shortEdge = 2e-9

func noShortEdge(loop []Vec) bool {
	a := loop[len(loop)-1]
	for _, b := range loop {
		if largest(sub(a, b)) <= shortEdge*max(largest(a), largest(b)) {
			return false
		}
		a = b
	}
	return true
}

func largest(a Vec) float64 { return max(math.Abs(a.X), math.Abs(a.Y), math.Abs(a.Z)) }

// crumbRound is that of polyhedron.Cell.Counts.
const crumbRound = 0x1p-48

// counts tells whether a face is more than an artefact of rounding, by the rule of
// polyhedron.Cell.Counts.
func (s *cellSums) counts(p *part) bool {
	return p.area > max(crumbShare*s.surface, crumbRound*p.far2)
}

// whole adds up all faces of the star at hand, none of which ends at a wall.
func (w *walker) whole(k wants) {
	s := &w.sums
	s.reset()
	for i := range w.faces {
		f := &w.faces[i]
		s.addFace(f.q, f.n, w.loop[f.from:f.to], k)
	}
	s.threes = w.vertices
}

// shape is the number of faces, edges and vertices, if every face counts and no edge
// is short; the count of a cell with artefacts of rounding is polyhedron's.
func (s *cellSums) shape() (faces, edges, vertices int32, ok bool) {
	if !s.generic || s.threes%3 != 0 || s.twos%2 != 0 {
		return 0, 0, 0, false
	}
	for i := range s.parts {
		if p := &s.parts[i]; !s.counts(p) {
			return 0, 0, 0, false
		}
	}
	faces = int32(len(s.parts))
	vertices = int32(s.threes/3 + s.twos/2 + s.ones)
	return faces, vertices + faces - 2, vertices, vertices >= 4
}

// volume and first are the moments.
func (s *cellSums) volume() float64 { return max(0, s.volume12/12) }

func (s *cellSums) centroid() (Vec, bool) {
	if !(s.volume12 > 0) {
		return Vec{}, false
	}
	t := 4 * s.volume12
	return Vec{X: s.first48.X / t, Y: s.first48.Y / t, Z: s.first48.Z / t}, true
}
