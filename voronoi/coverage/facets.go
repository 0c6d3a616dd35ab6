package coverage

import (
	"math"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// facetCell looks at the corners of what the cell of p has of a solid that is known by its
// surface: corners of the walls in the cell, and vertices of the cell in the solid.
func (k *seeker) facetCell(p Vec) {
	before := len(k.found)
	touching := k.faceted.WallsIn(&k.cell, p, &k.work, func(w *polyhedron.Polygon) {
		n := w.Len()
		for i := range n {
			v := w.Corner(i)
			if !leadsAway(v, w.Corner((i+1)%n)) && !leadsAway(v, w.Corner((i+n-1)%n)) && !k.isKnown(add(p, v), k.found[before:]) {
				k.try(v, p)
			}
		}
	})
	if touching == 0 && k.faceted.Side(p, 0) == solid.Outside {
		return // the whole cell is: its site lies on a wall, or is let in by the tolerance
	}
	k.lower = append(k.lower[:0], make([]bool, k.cell.NumVertices())...)
	for f := range k.cell.NumFaces() {
		_, loop := k.cell.Face(f)
		for i, a := range loop {
			if leadsAway(k.cell.Vertex(int(a)), k.cell.Vertex(int(loop[(i+1)%len(loop)]))) {
				k.lower[a] = true
			}
		}
	}
	for i, lower := range k.lower {
		v := k.cell.Vertex(i)
		if !lower && k.faceted.Side(add(p, v), 0) == solid.Inside && !k.isKnown(add(p, v), k.found[before:]) {
			k.try(v, p)
		}
	}
}

// cutAround cuts the cell of p by a box around the part, clear of its surface, so that the
// cell is not so large that facets of the part are nothing beside it. It tells whether
// anything is left.
func (k *seeker) cutAround(p Vec) bool {
	lo, hi := k.faceted.Bounds()
	margin := 0.0625 * length(sub(hi, lo))
	lo, hi = sub(lo, p), sub(hi, p)
	for _, w := range [6]solid.Plane{
		{N: Vec{X: 1}, D: hi.X + margin}, {N: Vec{X: -1}, D: margin - lo.X}, {N: Vec{Y: 1}, D: hi.Y + margin},
		{N: Vec{Y: -1}, D: margin - lo.Y}, {N: Vec{Z: 1}, D: hi.Z + margin}, {N: Vec{Z: -1}, D: margin - lo.Z},
	} {
		if k.cell.Clip(w.N, w.D, polyhedron.Wall(0)) == polyhedron.Empty {
			return false
		}
	}
	return true
}

// leadsAway tells that the way from v to w leads clearly farther away from the origin.
func leadsAway(v, w Vec) bool {
	e := sub(w, v)
	r, l := length(v), length(e)
	return l > longEdge*r && dot(v, e) > clearly*r*l
}

// facetPeak tells whether the distance falls off in all directions that lead into the
// solid at the place, whose sites and slack the cone holds. If some direction in which it
// does not fall off leads into the solid, then some such direction lies in the surface,
// or all of them lead into the solid: they hang together.
func (k *seeker) facetPeak(tol, slack float64) bool {
	k.sectors = k.faceted.SectorsAt(k.at0, tol, k.sectors[:0])
	if len(k.sectors) == 0 && k.faceted.Side(k.at0, 0) == solid.Outside {
		return false
	}
	u, open := k.cone.escape(slack)
	if !open {
		return true
	}
	if len(k.sectors) == 0 {
		return false
	}
	for _, s := range k.sectors {
		if k.cone.meets(s, slack) {
			return false
		}
	}
	step := max(1e3*tol, 1e-6*k.reach0)
	return k.faceted.Side(add(k.at0, scale(step, u)), 0) == solid.Outside
}

// escape is a direction that no constraint forbids, if there is one.
func (k *cone) escape(slack float64) (u Vec, ok bool) {
	if len(k.c) == 0 {
		return Vec{X: 1}, true
	}
	k.work = append(k.work[:0], 0)
	for {
		u, ok := k.direction(slack)
		if !ok {
			return Vec{}, false
		}
		worst, most := -1, slack
		for i, c := range k.c {
			if s := dot(c, u); s > most {
				worst, most = i, s
			}
		}
		if worst < 0 {
			return u, true
		}
		k.work = append(k.work, worst)
	}
}

// meets tells whether a sector holds a direction that no constraint forbids: if any, then
// one of its sides or one that a constraint just allows.
func (k *cone) meets(s solid.Sector, slack float64) bool {
	across := sub(s.B, scale(dot(s.A, s.B), s.A))
	l := length(across)
	if !(l > parallel) {
		return k.allowsAll(s.A, slack)
	}
	across = scale(1/l, across)
	width := math.Atan2(l, dot(s.A, s.B))
	at := func(t float64) Vec {
		sin, cos := math.Sincos(t)
		return add(scale(cos, s.A), scale(sin, across))
	}
	if k.allowsAll(s.A, slack) || k.allowsAll(s.B, slack) {
		return true
	}
	for _, c := range k.c {
		x, y := dot(c, s.A), dot(c, across)
		r := math.Hypot(x, y)
		if !(r > slack) {
			continue
		}
		middle, half := math.Atan2(y, x), math.Acos(slack/r)
		for _, t := range [2]float64{middle - half, middle + half} {
			for _, turn := range [3]float64{0, -2 * math.Pi, 2 * math.Pi} {
				if t := t + turn; t > 0 && t < width && k.allowsAll(at(t), slack*(1+1e-9)+1e-15) {
					return true
				}
			}
		}
	}
	return false
}

func (k *cone) allowsAll(u Vec, slack float64) bool {
	for _, c := range k.c {
		if dot(c, u) > slack {
			return false
		}
	}
	return true
}
