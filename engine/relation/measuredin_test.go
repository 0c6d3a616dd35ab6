package relation

import (
	"math"
	"strings"
	"testing"

	"nearcell/voronoi/solid"
)

// racksAndAisle fill the lower two metres of the hall; the racks reach out of it.
func racksAndAisle(t testing.TB) []Region {
	return []Region{
		{"racks", boxFrom(t, solid.Vec{X: -1}, solid.Vec{X: 4, Y: 8, Z: 2})},
		{"aisle", boxFrom(t, solid.Vec{X: 4}, solid.Vec{X: 10, Y: 8, Z: 2})},
	}
}

// All sites divide the hall, and the volumes in a part add up to what of it lies inside,
// duplicates or not; the cells are those of the whole hall, not of the part.
func TestMeasuredIn(t *testing.T) {
	sites := append(randomSites(30, 3), site{id: "31", x: 5, y: 4, z: 1}, site{id: "32", x: 5, y: 4, z: 1}, site{id: "33", x: 11, y: 4, z: 1})
	c := Clauses{Solid: box(t, 10, 8, 4), Measured: racksAndAisle(t)}
	s := &setup{def: cells, input: table(sites, false), c: c}
	got := s.must(t)
	sums := map[string]float64{}
	high := false
	for i := range got.N {
		part := col(t, got, "part").Text(i)
		sums[part] += col(t, got, "volume").F[i]
		high = high || col(t, got, "z").F[i] > 2.2
		if !col(t, got, "edges").IsNull(i) || col(t, got, "cz").F[i] > 2 || col(t, got, "volume").F[i] <= 0 {
			t.Errorf("row %d is not what a part can have", i)
		}
		if part == "racks" && col(t, got, "cx").F[i] > 4 {
			t.Errorf("row %d counts in the wrong part", i)
		}
	}
	near(t, "the volume of the racks", sums["racks"], 64, 1e-11)
	near(t, "the volume of the aisle", sums["aisle"], 96, 1e-11)
	if !high {
		t.Error("no site outside the parts has a share in them")
	}
	if said := notes(s.env); !strings.Contains(said, "edges, vertices and hidden of CELLS OF hall are NULL") {
		t.Errorf("the notes are\n%s", said)
	}
	// Asked for one site or one column, the same numbers come.
	want := make([]uint64, 1)
	want[0] = 1 << 4
	few := (&setup{def: cells, input: table(sites, false), c: c, want: want, need: []string{"part", "volume", "id"}}).must(t)
	for i := range few.N {
		for k := range got.N {
			if col(t, got, "id").I[k] == col(t, few, "id").I[i] && col(t, got, "part").Text(k) == col(t, few, "part").Text(i) &&
				math.Float64bits(col(t, got, "volume").F[k]) != math.Float64bits(col(t, few, "volume").F[i]) {
				t.Error("asked for alone, a cell measures another volume")
			}
		}
	}
	only := (&setup{def: cells, input: table(sites, false), c: c, need: []string{"id"}}).must(t)
	if only.N != got.N {
		t.Errorf("%d rows with the identifier alone, %d with all columns", only.N, got.N)
	}
}

// Contacts count as far as they lie in a part, gaps are the places of the part.
func TestContactsAndGapsMeasuredIn(t *testing.T) {
	in := table(randomSites(30, 5), false)
	parts := []Region{
		{"low", boxFrom(t, solid.Vec{}, solid.Vec{X: 10, Y: 8, Z: 1.5})},
		{"high", boxFrom(t, solid.Vec{Z: 1.5}, solid.Vec{X: 10, Y: 8, Z: 9})},
	}
	c := Clauses{Solid: box(t, 10, 8, 4), Measured: parts}
	whole := (&setup{def: contacts, input: in, c: Clauses{Solid: c.Solid}}).must(t)
	got := (&setup{def: contacts, input: in, c: c}).must(t)
	near(t, "the area of all contacts", sum(col(t, got, "area")), sum(col(t, whole, "area")), 1e-9)
	areas := map[[3]string]float64{}
	key := func(i int, a, b string) [3]string {
		return [3]string{col(t, got, a).Value(i).String(), col(t, got, b).Value(i).String(), col(t, got, "part").Text(i)}
	}
	for i := range got.N {
		areas[key(i, "a", "b")] = col(t, got, "area").F[i]
	}
	for i := range got.N {
		if areas[key(i, "b", "a")] != col(t, got, "area").F[i] {
			t.Fatal("contacts in parts are not symmetric")
		}
	}
	places := (&setup{def: gaps, input: in, c: c}).must(t)
	seen := map[string]bool{}
	for i := range places.N {
		z, part := col(t, places, "z").F[i], col(t, places, "part").Text(i)
		seen[part] = true
		if part == "low" && z > 1.5 || part == "high" && (z < 1.5 || z > 4) {
			t.Errorf("the gap at z = %v is told in %s", z, part)
		}
	}
	if !seen["low"] || !seen["high"] {
		t.Error("a part has no gap")
	}
}

// Parts within zones, for each instant; equal sites share one computation.
func TestMeasuredInZonesForEach(t *testing.T) {
	var in []site
	for pass := range int64(2) {
		for _, s := range []site{{id: "a", x: 1, y: 1, z: 1}, {id: "b", x: 3, y: 5, z: 2}, {id: "c", x: 6, y: 1, z: 1}, {id: "d", x: 7, y: 5, z: 2}} {
			s.t = pass
			in = append(in, s)
		}
	}
	breathing := []Region{{"breathing", boxFrom(t, solid.Vec{Z: 1.2}, solid.Vec{X: 8, Y: 6, Z: 1.8})}}
	s := &setup{def: cells, input: table(in, true), c: Clauses{Zones: hallAndOffice(t), Measured: breathing, Each: []int{4}, SolidName: "the zones hall, office"}}
	got := s.must(t)
	near(t, "the breathing zone of both rooms, twice", sum(col(t, got, "volume")), 2*(5+2.8)*6*0.6, 1e-12)
	if built := s.env.Diagrams.Stats().Built; built != 2 {
		t.Errorf("%d diagrams built, want 2", built)
	}
	if n := s.env.Diagrams.Stats().Cells; n != 4 {
		t.Errorf("%d cells computed, want 4", n)
	}
}
