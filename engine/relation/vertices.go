package relation

import (
	"math"
	"strconv"

	"gonum.org/v1/gonum/spatial/r3"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/voronoi"
	"nearcell/voronoi/delaunay"
	"nearcell/voronoi/solid"
)

// vertices is VERTICES OF c: one row for each Voronoi vertex.
var vertices = &Definition{
	Noun:    "VERTICES",
	RowIs:   "Voronoi vertex",
	Meaning: "the places as far from four sites as from no other: centres of the spheres of TETRAHEDRA, with the same a, b, c, d",
	Clauses: []string{"WITHIN", "UNCLIPPED", "FOR EACH", "OMITTING", "STRETCHED"},
	Zoned:   true,
	Open:    openSimplices(&vertexKind),
	layout:  simplexLayout(&vertexKind),
}

// The computed columns of VERTICES, in their order.
const (
	vertexX = iota
	vertexY
	vertexZ
	vertexRadius
	vertexA
	vertexB
	vertexC
	vertexD
	vertexInSolid
)

var vertexKind = simplexKind{corners: 4, ids: vertexA, list: allTetrahedra, fill: fillVertex, said: saidVertices}

func init() {
	vertices.Computed = []Column{
		vertexX:       measure("x", column.Real, 1, 0, "the place, x"),
		vertexY:       measure("y", column.Real, 1, 0, "the place, y"),
		vertexZ:       measure("z", column.Real, 1, 0, "the place, z"),
		vertexRadius:  measure("radius", column.Real, 1, 0, "its distance to each of the four sites; STRETCHED: the true one to the nearest of them"),
		vertexA:       measure("a", column.Text, 0, 0, "identifier of the first site"),
		vertexB:       measure("b", column.Text, 0, 0, "identifier of the second site"),
		vertexC:       measure("c", column.Text, 0, 0, "identifier of the third site"),
		vertexD:       measure("d", column.Text, 0, 0, "identifier of the fourth site; a < b < c < d"),
		vertexInSolid: measure("in_solid", column.Boolean, 0, 0, "it lies in the solid or on its surface; NULL without a solid"),
	}
}

func fillVertex(r *simplexRows, p *Part, t *delaunay.T, s *simplex, out []column.Vector, row int) {
	centre, radius := r.vertex(p, s)
	number(&out[vertexX], row, centre.X)
	number(&out[vertexY], row, centre.Y)
	number(&out[vertexZ], row, centre.Z)
	number(&out[vertexRadius], row, radius)
	if v := &out[vertexInSolid]; v.Type != column.Null {
		if p.Solid == nil {
			v.SetNull(row)
		} else if p.Solid.Side(centre, 0) != solid.Outside {
			column.SetBit(v.Bits, row)
		}
	}
	if r.coincides(p, t, s) {
		r.coincident++
	}
}

// vertex is the place as far from the four sites as from one another, and the distance:
// of stretched distances the true one to the nearest of the four.
func (r *simplexRows) vertex(p *Part, s *simplex) (centre voronoi.Vec, radius float64) {
	if !r.stretched() {
		m := p.tetrahedron(s)
		return m.Centre, m.Radius
	}
	c := &s.corner
	centre = voronoi.StretchedCentre(p.Sites[c[0]], p.Sites[c[1]], p.Sites[c[2]], p.Sites[c[3]], r.b.Clauses.Stretch)
	radius = math.Inf(1)
	for _, site := range c {
		at := p.Sites[site]
		radius = min(radius, r3.Norm(r3.Sub(centre, at)))
	}
	return centre, radius
}

// dualLength is the true length of the edge that the cells of a, b and c share, from the
// vertex that they have with d to that with e.
func (r *simplexRows) dualLength(a, b, c, d, e voronoi.Vec) float64 {
	if r.stretched() {
		return voronoi.StretchedDualLength(a, b, c, d, e, r.b.Clauses.Stretch)
	}
	return voronoi.DualLength(a, b, c, d, e)
}

// samePlace is the share of its radius by which two vertices may be apart and count as
// one.
const samePlace = 1e-9

// coincides tells whether a vertex lies where that over one of its faces does that
// comes before it in the order of rows: five or more sites lie on one sphere.
func (r *simplexRows) coincides(p *Part, t *delaunay.T, s *simplex) bool {
	for k := range 4 {
		other, _ := t.Neighbor(int(s.tet), k)
		if t.IsGhost(other) {
			continue
		}
		o := simplex{corner: t.Tet(other)}
		r.place(&o)
		if !before(&o, s) {
			continue
		}
		// The face's three corners first: both centres seen from the same one.
		own := t.Tet(int(s.tet))
		a, b, c := own[(k+1)%4], own[(k+2)%4], own[(k+3)%4]
		at := func(i int32) voronoi.Vec { return p.Sites[r.site(i)] }
		theirs := opposite(t.Tet(other), a, b, c)
		if _, radius := r.vertex(p, s); r.dualLength(at(a), at(b), at(c), at(own[k]), at(theirs)) <= samePlace*radius {
			return true
		}
	}
	return false
}

func before(a, b *simplex) bool {
	for k := range 4 {
		if a.corner[k] != b.corner[k] {
			return a.corner[k] < b.corner[k]
		}
	}
	return false
}

// opposite is the corner that is none of the three.
func opposite(v [4]int32, a, b, c int32) int32 {
	for _, x := range v {
		if x != a && x != b && x != c {
			return x
		}
	}
	return delaunay.Ghost
}

func saidVertices(r *simplexRows) {
	if r.coincident > 0 {
		r.env.Notes.Add(note.Note, note.Cells, "%d of %s of %s %s where another does: five or more sites lie on one sphere there, "+
			"and each of their tetrahedra has its row", r.coincident, plural(r.rows), r.b.Name, verb(r.coincident, "lies", "lie"))
	}
}

func plural(n int) string {
	if n == 1 {
		return "1 vertex"
	}
	return strconv.Itoa(n) + " vertices"
}
