package relation

import (
	"slices"

	"nearcell/catalog/column"
	"nearcell/voronoi"
	"nearcell/voronoi/delaunay"
)

// hull is HULL OF c: one row for each triangle of the convex hull.
var hull = &Definition{
	Noun:    "HULL",
	RowIs:   "triangle of the convex hull",
	Meaning: "the surface of the smallest convex body that holds the sites",
	Clauses: []string{"UNCLIPPED", "FOR EACH", "OMITTING", "STRETCHED"},
	Zoned:   true,
	Open:    openSimplices(&hullKind),
	layout:  simplexLayout(&hullKind),
}

// The computed columns of HULL, in their order.
const (
	hullA = iota
	hullB
	hullC
	hullArea
	hullX
	hullY
	hullZ
)

var hullKind = simplexKind{corners: 3, ids: hullA, list: hullTriangles, fill: fillHull}

func init() {
	hull.Computed = []Column{
		hullA:    measure("a", column.Text, 0, 0, "identifier of the first corner"),
		hullB:    measure("b", column.Text, 0, 0, "identifier of the second corner"),
		hullC:    measure("c", column.Text, 0, 0, "identifier of the third corner; a < b < c"),
		hullArea: measure("area", column.Real, 2, 0, "area of the triangle"),
		hullX:    measure("nx", column.Real, 0, 0, "unit vector that points outward, x"),
		hullY:    measure("ny", column.Real, 0, 0, "unit vector that points outward, y"),
		hullZ:    measure("nz", column.Real, 0, 0, "unit vector that points outward, z"),
	}
	hull.Computed[hullArea].Extensive = true
}

func hullTriangles(t *delaunay.T) []simplex {
	list := make([]simplex, 0, t.NumGhosts())
	for ghost, v := range t.Hull() {
		list = append(list, simplex{corner: [4]int32{v[0], v[1], v[2], -1}, tet: int32(ghost)})
	}
	return list
}

func fillHull(r *simplexRows, p *Part, t *delaunay.T, s *simplex, out []column.Vector, row int) {
	area, _, n := voronoi.MeasureTriangle(p.Sites[s.corner[0]], p.Sites[s.corner[1]], p.Sites[s.corner[2]])
	if r.turned(t, s) {
		n = voronoi.Vec{X: 0 - n.X, Y: 0 - n.Y, Z: 0 - n.Z}
	}
	number(&out[hullArea], row, area)
	number(&out[hullX], row, n.X+0)
	number(&out[hullY], row, n.Y+0)
	number(&out[hullZ], row, n.Z+0)
}

// turned tells whether the corners in their order run clockwise seen from outside: the
// ghost in place of an outer point is positive, and every exchange of two corners turns
// that round.
func (r *simplexRows) turned(t *delaunay.T, s *simplex) bool {
	v := t.Tet(int(s.tet))
	at := slices.Index(v[:], delaunay.Ghost)
	var order [4]int // the ghost, then the corners as they stand in the tetrahedron
	order[0] = at
	for k, i := 1, 0; i < 4; i++ {
		if i != at {
			order[k] = slices.Index(s.corner[:3], r.site(v[i])) + 10
			k++
		}
	}
	odd := at%2 != 0 // moving the ghost to the front
	for i := 1; i < 4; i++ {
		for j := 1; j < i; j++ {
			odd = odd != (order[j] > order[i])
		}
	}
	// (x, a, b, c) positive for x outside: a, b, c run clockwise seen from x.
	return !odd
}
