package relation

import (
	"math"
	"strconv"
	"strings"
	"testing"

	"nearcell/catalog/column"
	"nearcell/voronoi"
)

var simplexRelations = []*Definition{tetrahedra, triangles, vertices, hull}

// positions are the places of the sites by identifier.
func positions(sites []site) map[int64]voronoi.Vec {
	at := map[int64]voronoi.Vec{}
	for _, s := range sites {
		n, _ := strconv.ParseInt(s.id, 10, 64)
		at[n] = voronoi.Vec{X: s.x, Y: s.y, Z: s.z}
	}
	return at
}

// Counts and hull of the twenty sites: rational arithmetic and four programs that
// agree, see testdata/reference.
func TestTwentySimplices(t *testing.T) {
	input := table(twenty(t), false)
	get := func(d *Definition) *column.Table { return (&setup{def: d, input: input}).must(t) }
	tets, tris, verts, surface := get(tetrahedra), get(triangles), get(vertices), get(hull)
	if tets.N != 50 || verts.N != 50 || tris.N != 113 {
		t.Errorf("%d tetrahedra, %d vertices, %d triangles", tets.N, verts.N, tris.N)
	}
	if want := 2*15 - 4; surface.N != want { // 15 sites on the hull
		t.Errorf("%d triangles of the hull, want %d", surface.N, want)
	}
	near(t, "hull volume", sum(col(t, tets, "volume")), 75.087833333, 1e-9)
	near(t, "hull area", sum(col(t, surface, "area")), 113.292260517, 1e-9)

	// The best vertex strictly inside the box, by rational arithmetic.
	best, where := 0.0, voronoi.Vec{}
	for i := range verts.N {
		x, y, z, r := col(t, verts, "x").F[i], col(t, verts, "y").F[i], col(t, verts, "z").F[i], col(t, verts, "radius").F[i]
		if x > 0 && x < 10 && y > 0 && y < 8 && z > 0 && z < 4 && r > best {
			best, where = r, voronoi.Vec{X: x, Y: y, Z: z}
		}
	}
	near(t, "x", where.X, 2.354402516, 1e-9)
	near(t, "y", where.Y, 5.259433962, 1e-9)
	near(t, "z", where.Z, 0.370125786, 1e-9)
	near(t, "the largest empty sphere with its centre inside", best, 2.796509657, 1e-9)
}

// The laws that hold for any sites: rows ascend, keys are shared, faces count twice, the
// hull is closed and holds the volume.
func TestSimplexLaws(t *testing.T) {
	for name, sites := range map[string][]site{"twenty": twenty(t), "random": scatter(300, 3), "lattice": latticeSites(5)} {
		input := table(sites, false)
		at := positions(sites)
		tets := (&setup{def: tetrahedra, input: input}).must(t)
		tris := (&setup{def: triangles, input: input}).must(t)
		verts := (&setup{def: vertices, input: input}).must(t)
		surface := (&setup{def: hull, input: input}).must(t)
		key := func(tab *column.Table, i int, names string) string {
			k := ""
			last := int64(math.MinInt64)
			for _, n := range strings.Split(names, "") {
				id := col(t, tab, n).I[i]
				if id <= last {
					t.Fatalf("%s: corners of row %d do not ascend", name, i)
				}
				last = id
				k += strconv.Itoa(int(id)+1000) + " " // of one length: texts compare as numbers do
			}
			return k
		}
		for i := range tets.N {
			k := key(tets, i, "abcd")
			if i > 0 && k <= key(tets, i-1, "abcd") {
				t.Fatalf("%s: row %d comes before the one before it", name, i)
			}
			if k != key(verts, i, "abcd") || col(t, tets, "cx").F[i] != col(t, verts, "x").F[i] || col(t, tets, "radius").F[i] != col(t, verts, "radius").F[i] {
				t.Fatalf("%s: vertex %d is another than its tetrahedron", name, i)
			}
			checkTetrahedron(t, name, tets, i, at)
		}
		onHull := 0
		for i := range tris.N {
			flag, dual := column.Bit(col(t, tris, "on_hull").Bits, i), col(t, tris, "dual_length").F[i]
			if flag != math.IsInf(dual, 1) || dual < 0 {
				t.Errorf("%s: triangle %d on the hull: %v, dual length %v", name, i, flag, dual)
			}
			if flag {
				if key(tris, i, "abc") != key(surface, onHull, "abc") || math.Abs(col(t, tris, "area").F[i]-col(t, surface, "area").F[onHull]) > 0 {
					t.Fatalf("%s: triangle %d is not that of the hull", name, i)
				}
				onHull++
			}
		}
		if onHull != surface.N || 2*tris.N != 4*tets.N+surface.N {
			t.Errorf("%s: %d triangles, %d on the hull, %d of the hull, %d tetrahedra", name, tris.N, onHull, surface.N, tets.N)
		}
		var closed voronoi.Vec
		volume := 0.0
		for i := range surface.N {
			key(surface, i, "abc")
			area := col(t, surface, "area").F[i]
			n := voronoi.Vec{X: col(t, surface, "nx").F[i], Y: col(t, surface, "ny").F[i], Z: col(t, surface, "nz").F[i]}
			p := at[col(t, surface, "a").I[i]]
			closed.X, closed.Y, closed.Z = closed.X+area*n.X, closed.Y+area*n.Y, closed.Z+area*n.Z
			volume += area * (p.X*n.X + p.Y*n.Y + p.Z*n.Z) / 3
			near(t, name+": length of a normal", n.X*n.X+n.Y*n.Y+n.Z*n.Z, 1, 1e-14)
			for _, q := range at {
				if beyond := n.X*(q.X-p.X) + n.Y*(q.Y-p.Y) + n.Z*(q.Z-p.Z); beyond > 1e-12 {
					t.Fatalf("%s: a site lies %g outside triangle %d of the hull", name, beyond, i)
				}
			}
		}
		near(t, name+": normals", math.Abs(closed.X)+math.Abs(closed.Y)+math.Abs(closed.Z), 0, 1e-9)
		near(t, name+": volume within the hull", volume, sum(col(t, tets, "volume")), 1e-9)
	}
}

// checkTetrahedron holds a row against its corners: they lie on the sphere, no site is
// in it, lengths and angles are those of the corners.
func checkTetrahedron(t *testing.T, name string, tab *column.Table, i int, at map[int64]voronoi.Vec) {
	t.Helper()
	f := func(n string) float64 { return col(t, tab, n).F[i] }
	dist := func(p, q voronoi.Vec) float64 { return math.Hypot(math.Hypot(p.X-q.X, p.Y-q.Y), p.Z-q.Z) }
	centre, r := voronoi.Vec{X: f("cx"), Y: f("cy"), Z: f("cz")}, f("radius")
	var p [4]voronoi.Vec
	for k, n := range []string{"a", "b", "c", "d"} {
		p[k] = at[col(t, tab, n).I[i]]
		near(t, name+": distance of a corner", dist(p[k], centre), r, 1e-9*r)
	}
	for _, q := range at {
		if dist(q, centre) < r*(1-1e-9) {
			t.Fatalf("%s: a site in the sphere of row %d", name, i)
		}
	}
	shortest, longest := math.Inf(1), 0.0
	for k := range p {
		for l := range k {
			shortest, longest = min(shortest, dist(p[k], p[l])), max(longest, dist(p[k], p[l]))
		}
	}
	near(t, name+": shortest", f("shortest"), shortest, 1e-12)
	near(t, name+": longest", f("longest"), longest, 1e-12)
	near(t, name+": radius_edge", f("radius_edge"), r/shortest, 1e-9*r/shortest)
	// The sharpest angle from the heights: sin of the angle at an edge is 3V|e| / (2 A B).
	if lo, hi := f("min_dihedral"), f("max_dihedral"); !(lo > 0 && lo < 70.6 && hi > 70.5 && hi < 180) {
		t.Errorf("%s: angles of %v to %v in row %d", name, lo, hi, i)
	}
	if sliver := column.Bit(col(t, tab, "sliver").Bits, i); sliver != (f("radius_edge") <= 2 && f("min_dihedral") < 5) {
		t.Errorf("%s: row %d is a sliver: %v", name, i, sliver)
	}
}

// Known bodies: the regular tetrahedron, the corner of a cube, and a sliver.
func TestTetrahedronMeasures(t *testing.T) {
	for _, k := range []struct {
		name                   string
		sites                  []site
		volume, radius, lo, hi float64
		sliver                 bool
	}{
		{"regular", []site{{id: "1", x: 1, y: 1, z: 1}, {id: "2", x: 1, y: -1, z: -1}, {id: "3", x: -1, y: 1, z: -1}, {id: "4", x: -1, y: -1, z: 1}},
			8.0 / 3, math.Sqrt(3), math.Acos(1.0/3) * 180 / math.Pi, math.Acos(1.0/3) * 180 / math.Pi, false},
		{"corner", []site{{id: "1"}, {id: "2", x: 1}, {id: "3", y: 1}, {id: "4", z: 1}},
			1.0 / 6, math.Sqrt(3) / 2, math.Acos(1/math.Sqrt(3)) * 180 / math.Pi, 90, false},
		// Four corners of a square, two of them lifted by 1e-9: volume 1e-9 / 3.
		{"sliver", []site{{id: "1"}, {id: "2", x: 1, z: 1e-9}, {id: "3", x: 1, y: 1}, {id: "4", y: 1, z: 1e-9}},
			1e-9 / 3, math.Sqrt2 / 2, math.Atan(2e-9) * 180 / math.Pi, 180, true},
	} {
		tab := (&setup{def: tetrahedra, input: table(k.sites, false)}).must(t)
		if tab.N != 1 {
			t.Fatalf("%s: %d rows", k.name, tab.N)
		}
		f := func(n string) float64 { return col(t, tab, n).F[0] }
		near(t, k.name+": volume", f("volume"), k.volume, 1e-14*k.volume)
		near(t, k.name+": radius", f("radius"), k.radius, 1e-14)
		near(t, k.name+": sharpest", f("min_dihedral"), k.lo, 1e-6*k.lo)
		near(t, k.name+": bluntest", f("max_dihedral"), k.hi, 1e-6)
		if column.Bit(col(t, tab, "sliver").Bits, 0) != k.sliver {
			t.Errorf("%s: sliver", k.name)
		}
	}
}

// A cube has one vertex and several tetrahedra with it; a square's triangles share one
// edge of length zero.
func TestCosphericalVertices(t *testing.T) {
	sites := latticeSites(2)
	s := &setup{def: vertices, input: table(sites, false), c: Clauses{Solid: box(t, 2, 2, 2)}}
	tab := s.must(t)
	for i := range tab.N {
		for _, n := range []string{"x", "y", "z"} {
			near(t, n, col(t, tab, n).F[i], 0.5, 1e-15)
		}
		near(t, "radius", col(t, tab, "radius").F[i], math.Sqrt(3)/2, 1e-15)
		if !column.Bit(col(t, tab, "in_solid").Bits, i) || col(t, tab, "in_solid").IsNull(i) {
			t.Errorf("vertex %d is not in the solid", i)
		}
	}
	if want := strconv.Itoa(tab.N-1) + " of " + strconv.Itoa(tab.N) + " vertices"; tab.N < 5 || !strings.Contains(notes(s.env), want) {
		t.Errorf("%d vertices with the notes %q", tab.N, notes(s.env))
	}
	open := (&setup{def: vertices, input: table(sites, false)}).must(t)
	if !col(t, open, "in_solid").IsNull(0) {
		t.Error("in_solid without a solid is a value")
	}
	small := (&setup{def: vertices, input: table(twenty(t), false), c: Clauses{Solid: box(t, 10, 8, 4)}}).must(t)
	in := 0
	for i := range small.N {
		x, y, z := col(t, small, "x").F[i], col(t, small, "y").F[i], col(t, small, "z").F[i]
		inside := x >= 0 && x <= 10 && y >= 0 && y <= 8 && z >= 0 && z <= 4
		if inside != column.Bit(col(t, small, "in_solid").Bits, i) {
			t.Errorf("vertex %d at %v %v %v", i, x, y, z)
		}
		if inside {
			in++
		}
	}
	if in == 0 || in == small.N {
		t.Errorf("%d of %d vertices in the box", in, small.N)
	}
}

// Neither the order of the input nor the number of threads changes a bit; asking for one
// corner's rows gives those rows; FOR EACH is one after the other.
func TestSimplexRows(t *testing.T) {
	sites := scatter(700, 5)
	for i := range sites {
		sites[i].t = int64(i % 2)
	}
	for _, d := range simplexRelations {
		base := &setup{def: d, input: table(sites, true), c: Clauses{Each: []int{4}}}
		want := base.must(t)
		other := &setup{def: d, input: table(shuffled(sites, 8), true), c: base.c, env: newEnv()}
		other.env.Threads = 1
		if !same(want, other.must(t)) {
			t.Errorf("%s depends on the order of its input", d.Noun)
		}
		var half [2]*column.Table
		for k := range half {
			var part []site
			for i := k; i < len(sites); i += 2 {
				part = append(part, sites[i])
			}
			half[k] = (&setup{def: d, input: table(part, true)}).must(t)
		}
		if want.N != half[0].N+half[1].N {
			t.Errorf("%s has %d rows, its halves %d and %d", d.Noun, want.N, half[0].N, half[1].N)
		}
		id := want.Cols[1+col0(want)].Text(0)
		wanted := make([]uint64, (len(sites)+63)/64)
		for i, s := range sites {
			if s.id == id {
				column.SetBit(wanted, i)
			}
		}
		some := (&setup{def: d, input: base.input, c: base.c, want: wanted}).must(t)
		n := 0
		for i := range want.N {
			if want.Cols[1+col0(want)].Text(i) == id {
				n++
			}
		}
		if some.N != n || n == 0 {
			t.Errorf("%s gives %d rows of %s, want %d", d.Noun, some.N, id, n)
		}
		few := (&setup{def: d, input: base.input, c: base.c, need: []string{"a"}}).must(t)
		if few.N != want.N {
			t.Errorf("%s has %d rows of a alone", d.Noun, few.N)
		}
	}
}

// col0 is how many columns stand between those of FOR EACH and a.
func col0(tab *column.Table) int {
	for i, f := range tab.Schema {
		if f.Name == "a" {
			return i - 1
		}
	}
	return -1
}

// Flat sets have no tetrahedra, and the note says why.
func TestFlatSimplices(t *testing.T) {
	plane := []site{{id: "1"}, {id: "2", x: 1}, {id: "3", y: 1}, {id: "4", x: 1, y: 1}, {id: "5", x: 3, y: 0.5}}
	line := []site{{id: "1"}, {id: "2", x: 1, y: 1}, {id: "3", x: 2, y: 2}}
	for text, sites := range map[string][]site{"lie in one plane": plane, "lie on one line": line, "stand in one place": {{id: "7", x: 2}}} {
		for _, d := range simplexRelations {
			s := &setup{def: d, input: table(sites, false)}
			if tab := s.must(t); tab.N != 0 || !strings.Contains(notes(s.env), text+": there are no tetrahedra, so "+d.Noun+" OF hall has no rows") {
				t.Errorf("%s: %d rows, %q", d.Noun, tab.N, notes(s.env))
			}
		}
	}
}

// Two sites in one place are one corner, named by the first.
func TestSimplexDuplicates(t *testing.T) {
	sites := append(twenty(t), site{id: "99", x: 5.5, y: 5.5, z: 0.7})
	tab := (&setup{def: tetrahedra, input: table(sites, false)}).must(t)
	if tab.N != 50 {
		t.Errorf("%d tetrahedra", tab.N)
	}
	for i := range tab.N {
		if col(t, tab, "d").I[i] == 99 {
			t.Error("a duplicate is a corner")
		}
	}
}

func scatter(n int, seed uint64) []site {
	out := make([]site, n)
	state := seed
	next := func() float64 {
		state = state*6364136223846793005 + 1442695040888963407
		return float64(state>>11) / (1 << 53)
	}
	for i := range out {
		out[i] = site{id: strconv.Itoa(i + 1), x: next(), y: next(), z: next()}
	}
	return out
}

func latticeSites(k int) []site {
	var out []site
	for x := range k {
		for y := range k {
			for z := range k {
				out = append(out, site{id: strconv.Itoa(len(out) + 1), x: float64(x), y: float64(y), z: float64(z)})
			}
		}
	}
	return out
}
