package relation

import (
	"math"

	"nearcell/catalog/column"
	"nearcell/voronoi"
	"nearcell/voronoi/delaunay"
)

// tetrahedra is TETRAHEDRA OF c: one row for each Delaunay tetrahedron.
var tetrahedra = &Definition{
	Noun:    "TETRAHEDRA",
	RowIs:   "Delaunay tetrahedron",
	Meaning: "the tetrahedra between sites whose spheres hold no other site",
	Clauses: []string{"UNCLIPPED", "FOR EACH", "OMITTING", "STRETCHED"},
	Zoned:   true,
	Open:    openSimplices(&tetrahedronKind),
	layout:  simplexLayout(&tetrahedronKind),
}

// The computed columns of TETRAHEDRA, in their order.
const (
	tetA = iota
	tetB
	tetC
	tetD
	tetVolume
	tetRadius
	tetX
	tetY
	tetZ
	tetShortest
	tetLongest
	tetMinDihedral
	tetMaxDihedral
	tetRadiusEdge
	tetSliver
)

var tetrahedronKind = simplexKind{corners: 4, ids: tetA, list: allTetrahedra, fill: fillTetrahedron}

func init() {
	degrees := column.Symbol("°")
	tetrahedra.Computed = []Column{
		tetA:           measure("a", column.Text, 0, 0, "identifier of the first corner"),
		tetB:           measure("b", column.Text, 0, 0, "identifier of the second corner"),
		tetC:           measure("c", column.Text, 0, 0, "identifier of the third corner"),
		tetD:           measure("d", column.Text, 0, 0, "identifier of the fourth corner; a < b < c < d"),
		tetVolume:      measure("volume", column.Real, 3, 0, "volume of the tetrahedron"),
		tetRadius:      measure("radius", column.Real, 1, 0, "radius of the sphere through its corners"),
		tetX:           measure("cx", column.Real, 1, 0, "centre of that sphere, x"),
		tetY:           measure("cy", column.Real, 1, 0, "centre of that sphere, y"),
		tetZ:           measure("cz", column.Real, 1, 0, "centre of that sphere, z"),
		tetShortest:    measure("shortest", column.Real, 1, 0, "length of its shortest edge"),
		tetLongest:     measure("longest", column.Real, 1, 0, "length of its longest edge"),
		tetMinDihedral: measure("min_dihedral", column.Real, 0, 0, "sharpest angle between two faces, in degrees"),
		tetMaxDihedral: measure("max_dihedral", column.Real, 0, 0, "bluntest angle between two faces, in degrees"),
		tetRadiusEdge:  measure("radius_edge", column.Real, 0, 0, "radius of the sphere over the shortest edge"),
		tetSliver:      measure("sliver", column.Boolean, 0, 0, "flat, though its edges are of like length: radius_edge <= 2 and min_dihedral < 5°"),
	}
	tetrahedra.Computed[tetMinDihedral].Unit = degrees
	tetrahedra.Computed[tetMaxDihedral].Unit = degrees
	tetrahedra.Computed[tetVolume].Extensive = true
}

// A tetrahedron with a radius of at most sliverRatio shortest edges and an angle below
// sliverAngle degrees is a sliver.
const (
	sliverRatio = 2
	sliverAngle = 5
)

func allTetrahedra(t *delaunay.T) []simplex {
	list := make([]simplex, t.NumTets())
	for i := range list {
		list[i] = simplex{corner: t.Tet(i), tet: int32(i)}
	}
	return list
}

func (p *Part) tetrahedron(s *simplex) voronoi.Tetrahedron {
	c := &s.corner
	return voronoi.MeasureTetrahedron(p.Sites[c[0]], p.Sites[c[1]], p.Sites[c[2]], p.Sites[c[3]])
}

func fillTetrahedron(r *simplexRows, p *Part, t *delaunay.T, s *simplex, out []column.Vector, row int) {
	m := p.tetrahedron(s)
	const degree = 180 / math.Pi
	ratio, sharpest := m.Radius/m.Shortest, m.MinDihedral*degree
	number(&out[tetVolume], row, m.Volume)
	number(&out[tetRadius], row, m.Radius)
	number(&out[tetX], row, m.Centre.X)
	number(&out[tetY], row, m.Centre.Y)
	number(&out[tetZ], row, m.Centre.Z)
	number(&out[tetShortest], row, m.Shortest)
	number(&out[tetLongest], row, m.Longest)
	number(&out[tetMinDihedral], row, sharpest)
	number(&out[tetMaxDihedral], row, m.MaxDihedral*degree)
	number(&out[tetRadiusEdge], row, ratio)
	flag(&out[tetSliver], row, ratio <= sliverRatio && sharpest < sliverAngle)
}
