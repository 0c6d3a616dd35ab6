package voronoi

import (
	"math"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/predicate"
)

// bounded decides exactly whether the cell of p is bounded. It is not if and only
// if p lies on the convex hull of the sites: if some plane through p has no site
// strictly on one of its sides. Such a plane can be turned about p until it holds
// two more sites that are not on a line with p, provided that the sites span
// space; if they do not, every cell is unbounded.
//
// Candidates are the sites whose planes shaped c so far. A plane through p and two
// of them that has all candidates on one side is held against all sites; if there
// is one beyond it, it becomes a candidate. Every step adds one, so there is an
// end.
func (b *builder) bounded(c *polyhedron.Cell, p Vec, self int32) bool {
	if b.d.spanWith(p, self) < 3 {
		return false
	}
	b.support = b.support[:0]
	for i := range c.NumFaces() {
		if label, _ := c.Face(i); label >= 0 && !b.isCandidate(label) {
			b.support = append(b.support, label)
		}
	}
	for {
		before := len(b.support)
		if b.supportingPlane(p, self) {
			return false
		}
		if len(b.support) == before && !b.offLine(p) {
			return true
		}
	}
}

func (b *builder) isCandidate(i int32) bool {
	for _, j := range b.support {
		if i == j {
			return true
		}
	}
	return false
}

// supportingPlane looks for a plane through p and two candidates with no site
// strictly on one side. It returns early, with a new candidate, when a site
// refutes a plane.
func (b *builder) supportingPlane(p Vec, self int32) bool {
	tree := b.d.tree
	for i, s := range b.support {
		for _, t := range b.support[:i] {
			u, w := tree.Point(s), tree.Point(t)
			above, below := b.sides(p, u, w)
			if above && below || !above && !below && collinear(p, u, w) {
				continue
			}
			found := len(b.support)
			if !above && !b.addBeyond(p, u, w, +1, self) {
				return true
			}
			if !below && !b.addBeyond(p, u, w, -1, self) {
				return true
			}
			if len(b.support) > found {
				return false
			}
		}
	}
	return false
}

// sides tells on which sides of the plane p, u, w there are candidates.
func (b *builder) sides(p, u, w Vec) (above, below bool) {
	for _, k := range b.support {
		switch predicate.Orient3D(p, u, w, b.d.tree.Point(k)) {
		case 1:
			above = true
		case -1:
			below = true
		}
		if above && below {
			break
		}
	}
	return above, below
}

// addBeyond adds a site strictly on the given side of the plane p, u, w to the
// candidates; false if there is none.
func (b *builder) addBeyond(p, u, w Vec, side int, self int32) bool {
	tree := b.d.tree
	e, f := sub(u, p), sub(w, p)
	n := cross(e, f)
	if side < 0 {
		n = Vec{X: -n.X, Y: -n.Y, Z: -n.Z}
	}
	// What rounding can make of n·q - n·p for a site q.
	lo, hi := tree.Bounds()
	far := max(math.Abs(lo.X), math.Abs(lo.Y), math.Abs(lo.Z), math.Abs(hi.X), math.Abs(hi.Y), math.Abs(hi.Z),
		math.Abs(p.X), math.Abs(p.Y), math.Abs(p.Z))
	slack := 0x1p-44 * length(e) * length(f) * far
	added := false
	tree.Beyond(n, dot(n, p), slack, func(q int32) bool {
		if q == self || predicate.Orient3D(p, u, w, tree.Point(q)) != side || b.isCandidate(q) {
			return true
		}
		b.support = append(b.support, q)
		added = true
		return false
	})
	return added
}

// offLine adds a site off the line through p and the candidates, if they are all
// on one line and there is such a site; it tells whether it did.
func (b *builder) offLine(p Vec) bool {
	tree := b.d.tree
	var a Vec
	if len(b.support) > 0 {
		a = tree.Point(b.support[0])
		for _, k := range b.support[1:] {
			if !collinear(p, a, tree.Point(k)) {
				return false
			}
		}
	}
	for q := range int32(tree.Len()) {
		at := tree.Point(q)
		if at == p || b.isCandidate(q) || len(b.support) > 0 && collinear(p, a, at) {
			continue
		}
		b.support = append(b.support, q)
		return true
	}
	return false
}

// spanWith is the dimension of the sites together with p. A cell's own site adds
// nothing.
func (d *Diagram) spanWith(p Vec, self int32) int {
	if self >= 0 || d.facts.Dimension == 3 {
		return d.facts.Dimension
	}
	points := make([]Vec, 0, d.tree.Len()+1)
	return dimension(append(append(points, d.tree.Points()...), p))
}
