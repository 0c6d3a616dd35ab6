package relation

import (
	"math"

	"nearcell/catalog/column"
	"nearcell/voronoi"
	"nearcell/voronoi/delaunay"
)

// triangles is TRIANGLES OF c: one row for each Delaunay triangle.
var triangles = &Definition{
	Noun:    "TRIANGLES",
	RowIs:   "Delaunay triangle",
	Meaning: "the faces of the Delaunay tetrahedra; each crosses one edge of the cells",
	Clauses: []string{"UNCLIPPED", "FOR EACH", "OMITTING", "STRETCHED"},
	Zoned:   true,
	Open:    openSimplices(&triangleKind),
	layout:  simplexLayout(&triangleKind),
}

// The computed columns of TRIANGLES, in their order.
const (
	triangleA = iota
	triangleB
	triangleC
	triangleArea
	triangleRadius
	triangleOnHull
	triangleDual
)

var triangleKind = simplexKind{corners: 3, ids: triangleA, list: allTriangles, fill: fillTriangle}

func init() {
	triangles.Computed = []Column{
		triangleA:      measure("a", column.Text, 0, 0, "identifier of the first corner"),
		triangleB:      measure("b", column.Text, 0, 0, "identifier of the second corner"),
		triangleC:      measure("c", column.Text, 0, 0, "identifier of the third corner; a < b < c"),
		triangleArea:   measure("area", column.Real, 2, 0, "area of the triangle"),
		triangleRadius: measure("radius", column.Real, 1, 0, "radius of the circle through its corners"),
		triangleOnHull: measure("on_hull", column.Boolean, 0, 0, "it bounds the convex hull of the sites"),
		triangleDual: measure("dual_length", column.Real, 1, 0,
			"length of the edge that the three cells share, before any solid ends it; Infinity on the hull"),
	}
}

// allTriangles lists every face once: from the tetrahedron with the lower number, or
// the only one.
func allTriangles(t *delaunay.T) []simplex {
	list := make([]simplex, 0, 2*t.NumTets()+t.NumGhosts()/2)
	for i := range t.NumTets() {
		v := t.Tet(i)
		for k := range 4 {
			if other, _ := t.Neighbor(i, k); other > i {
				list = append(list, simplex{corner: triangleOf(v, k), tet: int32(i), face: int8(k)})
			}
		}
	}
	return list
}

func fillTriangle(r *simplexRows, p *Part, t *delaunay.T, s *simplex, out []column.Vector, row int) {
	a, b, c := p.Sites[s.corner[0]], p.Sites[s.corner[1]], p.Sites[s.corner[2]]
	area, radius, _ := voronoi.MeasureTriangle(a, b, c)
	number(&out[triangleArea], row, area)
	number(&out[triangleRadius], row, radius)
	other, corner := t.Neighbor(int(s.tet), int(s.face))
	onHull := t.IsGhost(other)
	flag(&out[triangleOnHull], row, onHull)
	if out[triangleDual].Type == column.Null {
		return
	}
	dual := math.Inf(1)
	if !onHull {
		// The two opposite corners in an order of their own: no numbering shows.
		d, e := r.site(t.Tet(int(s.tet))[s.face]), r.site(t.Tet(other)[corner])
		dual = r.dualLength(a, b, c, p.Sites[min(d, e)], p.Sites[max(d, e)])
	}
	number(&out[triangleDual], row, dual)
}
