package relation

import (
	"math"
	"strings"
	"testing"

	"nearcell/voronoi"
)

var upFive = voronoi.Vec{X: 1, Y: 1, Z: 5}

func stretchedAway(a, b, k voronoi.Vec) float64 {
	return math.Sqrt(math.Pow(k.X*(a.X-b.X), 2) + math.Pow(k.Y*(a.Y-b.Y), 2) + math.Pow(k.Z*(a.Z-b.Z), 2))
}

// With stretched distances the cells add up to the solid, and the note says what counts
// as how much; without them it says nothing, and the same store keeps both apart.
func TestStretchedCells(t *testing.T) {
	in := table(randomSites(40, 7), false)
	env := newEnv()
	plain := (&setup{def: cells, input: in, c: Clauses{Solid: box(t, 10, 8, 4)}, env: env}).must(t)
	if strings.Contains(notes(env), "stretched") {
		t.Error("plain distances are called stretched")
	}
	got := (&setup{def: cells, input: in, c: Clauses{Solid: box(t, 10, 8, 4), Stretch: upFive}, env: env}).must(t)
	near(t, "the sum", sum(col(t, got, "volume")), 320, 3e-10)
	if same(plain, got) {
		t.Error("the stretch changes nothing")
	}
	if said := notes(env); !strings.Contains(said, "1 m up counts as 5 m; all results are in true units") || strings.Contains(said, "along x") {
		t.Errorf("the notes are\n%s", said)
	}
}

// VERTICES are as far from their four sites in stretched distance and tell the true
// distance to the nearest; TRIANGLES tell the true length between two such vertices.
func TestStretchedVertices(t *testing.T) {
	sites := randomSites(60, 11)
	at := func(id int64) voronoi.Vec {
		s := sites[id-1]
		return voronoi.Vec{X: s.x, Y: s.y, Z: s.z}
	}
	s := &setup{def: vertices, input: table(sites, false), c: Clauses{Stretch: upFive}}
	got := s.must(t)
	places := map[[4]int64]voronoi.Vec{}
	for i := range got.N {
		v := voronoi.Vec{X: col(t, got, "x").F[i], Y: col(t, got, "y").F[i], Z: col(t, got, "z").F[i]}
		var key [4]int64
		least := math.Inf(1)
		for k, name := range []string{"a", "b", "c", "d"} {
			key[k] = col(t, got, name).I[i]
			p := at(key[k])
			near(t, "stretched distance", stretchedAway(v, p, upFive), stretchedAway(v, at(key[0]), upFive), 1e-7*stretchedAway(v, p, upFive))
			least = min(least, stretchedAway(v, p, voronoi.Vec{X: 1, Y: 1, Z: 1}))
		}
		near(t, "radius", col(t, got, "radius").F[i], least, 1e-9*least)
		places[key] = v
	}
	tets := (&setup{def: tetrahedra, input: table(sites, false), c: Clauses{Stretch: upFive}}).must(t)
	if tets.N != got.N {
		t.Errorf("%d tetrahedra and %d vertices", tets.N, got.N)
	}
	triangle := (&setup{def: triangles, input: table(sites, false), c: Clauses{Stretch: upFive}}).must(t)
	edges := 0
	for i := range triangle.N {
		a, b, c := col(t, triangle, "a").I[i], col(t, triangle, "b").I[i], col(t, triangle, "c").I[i]
		var ends []voronoi.Vec
		for key, v := range places {
			has := 0
			for _, k := range key {
				if k == a || k == b || k == c {
					has++
				}
			}
			if has == 3 {
				ends = append(ends, v)
			}
		}
		if dual := col(t, triangle, "dual_length").F[i]; len(ends) == 2 {
			edges++
			want := stretchedAway(ends[0], ends[1], voronoi.Vec{X: 1, Y: 1, Z: 1})
			near(t, "dual length", dual, want, 1e-7*(1+want))
		} else if !math.IsInf(dual, 1) {
			t.Errorf("a triangle with %d vertices has an edge of the length %v", len(ends), dual)
		}
	}
	if edges < 100 {
		t.Errorf("only %d inner triangles", edges)
	}
}
