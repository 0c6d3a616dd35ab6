package relation

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"nearcell/catalog/column"
	"nearcell/voronoi/solid"
)

func boxFrom(t testing.TB, lo, hi solid.Vec) solid.Solid {
	t.Helper()
	b, err := solid.NewBox(lo, hi)
	if err != nil {
		t.Fatal(err)
	}
	return b
}

// hallAndOffice are two rooms with a wall of 20 cm between them.
func hallAndOffice(t testing.TB) []Region {
	return []Region{
		{"hall", boxFrom(t, solid.Vec{}, solid.Vec{X: 5, Y: 6, Z: 3})},
		{"office", boxFrom(t, solid.Vec{X: 5.2}, solid.Vec{X: 8, Y: 6, Z: 3})},
	}
}

// Each zone is divided among its own sites: the volumes of a zone's rows add up to the
// zone, contacts stay inside, and the answer is that of the zones one by one.
func TestZonesAreSpacesOfTheirOwn(t *testing.T) {
	zones := hallAndOffice(t)
	rapid.Check(t, func(r *rapid.T) {
		n := rapid.IntRange(4, 30).Draw(r, "sites")
		seed := rapid.Uint64().Draw(r, "seed")
		var in []site
		inZone := map[string]int{}
		for i, s := range randomSites(n, seed) {
			s.x, s.y, s.z = s.x*0.8, s.y*0.75, s.z*0.75
			if s.x > 5 && s.x < 5.2 {
				s.x = 5.2 // mounted on the wall of the office
			}
			s.id = "s" + string(rune('A'+i))
			in = append(in, s)
			if s.x <= 5 {
				inZone["hall"]++
			} else {
				inZone["office"]++
			}
		}
		got := (&setup{def: cells, input: table(in, true), c: Clauses{Zones: zones, SolidName: "the zones hall, office"}}).must(t)
		zone, volume := col(t, got, "zone"), col(t, got, "volume")
		sums := map[string]float64{}
		for i := range got.N {
			sums[zone.Text(i)] += volume.F[i]
		}
		for _, z := range zones {
			if inZone[z.Name] > 0 {
				near(t, "the volume of "+z.Name, sums[z.Name], z.Solid.Volume(), 1e-12*z.Solid.Volume())
			}
			var own []site
			for _, s := range in {
				if (s.x <= 5) == (z.Name == "hall") {
					own = append(own, s)
				}
			}
			if len(own) == 0 {
				continue
			}
			alone := (&setup{def: cells, input: table(own, true), c: Clauses{Solid: z.Solid}}).must(t)
			ids, alones := col(t, got, "id"), col(t, alone, "id")
			k := 0
			for i := range got.N {
				if zone.Text(i) != z.Name {
					continue
				}
				if ids.Text(i) != alones.Text(k) || math.Float64bits(volume.F[i]) != math.Float64bits(col(t, alone, "volume").F[k]) {
					t.Fatalf("%s in the zone %s has another cell than in that zone alone", ids.Text(i), z.Name)
				}
				k++
			}
		}
		touching := (&setup{def: contacts, input: table(in, true), c: Clauses{Zones: zones}}).must(t)
		side := map[string]string{}
		for i := range got.N {
			side[col(t, got, "id").Text(i)] = zone.Text(i)
		}
		for i := range touching.N {
			a, b := col(t, touching, "a").Text(i), col(t, touching, "b").Text(i)
			if side[a] != side[b] || side[a] != col(t, touching, "zone").Text(i) {
				t.Fatalf("%s and %s touch through the wall", a, b)
			}
		}
	})
}

// A site on the wall that two zones share belongs to the first; within the tolerance it
// belongs to where it lies; both are told, and the order of the rows does not matter.
func TestSiteOnTheWallBetweenZones(t *testing.T) {
	zones := []Region{
		{"left", boxFrom(t, solid.Vec{}, solid.Vec{X: 4, Y: 4, Z: 3})},
		{"right", boxFrom(t, solid.Vec{X: 4}, solid.Vec{X: 8, Y: 4, Z: 3})},
	}
	in := []site{{id: "a", x: 1, y: 1, z: 1}, {id: "b", x: 4, y: 2, z: 1}, {id: "c", x: 4.03, y: 1, z: 1}, {id: "d", x: 7, y: 1, z: 1}, {id: "e", x: 8.04, y: 3, z: 1}}
	for seed := range uint64(4) {
		s := &setup{def: cells, input: table(shuffled(in, seed), true), c: Clauses{Zones: zones, Tolerance: 0.05, SolidName: "the zones left, right"}}
		got := s.must(t)
		want := map[string]string{"a": "left", "b": "left", "c": "right", "d": "right", "e": "right"}
		if got.N != len(want) {
			t.Fatalf("%d rows, want %d", got.N, len(want))
		}
		for i := range got.N {
			if id := col(t, got, "id").Text(i); col(t, got, "zone").Text(i) != want[id] {
				t.Errorf("%s is in %s, want %s", id, col(t, got, "zone").Text(i), want[id])
			}
		}
		said := notes(s.env)
		if !strings.Contains(said, "2 sites of hall stand on a wall between zones or within the tolerance 0.05 m of it: 'b' to left, not right, 'c' to right, not left") {
			t.Errorf("the notes are\n%s", said)
		}
	}
}

// A zone without a site and a site without a zone are named.
func TestVacantZones(t *testing.T) {
	s := &setup{def: cells, c: Clauses{Zones: hallAndOffice(t), SolidName: "the zones hall, office"},
		input: table([]site{{id: "a", x: 1, y: 1, z: 1}, {id: "b", x: 2, y: 2, z: 2}, {id: "w", x: 5.1, y: 3, z: 1}}, true)}
	got := s.must(t)
	if got.N != 2 {
		t.Errorf("%d rows, want 2", got.N)
	}
	said := notes(s.env)
	for _, want := range []string{"the zone office has no site of hall: its 50.4 m³ belong to nobody", "1 site of hall lies outside the zones hall, office and is left out of the partition: 'w' (0.1 m)"} {
		if !strings.Contains(said, want) {
			t.Errorf("the notes say nothing of %q:\n%s", want, said)
		}
	}
	s.input = table([]site{{id: "w", x: 5.1, y: 3, z: 1}}, true)
	if _, err := s.run(); err == nil || !strings.Contains(err.Error(), "no site of hall lies in the zones hall, office") {
		t.Errorf("sites in no zone: %v", err)
	}
}

// With FOR EACH every instant has its zones; instants with equal sites share diagrams.
func TestZonesForEach(t *testing.T) {
	var in []site
	for pass := range int64(3) {
		for _, s := range []site{{id: "a", x: 1, y: 1, z: 1}, {id: "b", x: 3, y: 5, z: 2}, {id: "c", x: 6, y: 1, z: 1}, {id: "d", x: 7, y: 5, z: 2}} {
			if pass == 2 && s.x > 5 {
				continue
			}
			s.t = pass
			in = append(in, s)
		}
	}
	s := &setup{def: cells, input: table(in, true), c: Clauses{Zones: hallAndOffice(t), Each: []int{4}, SolidName: "the zones hall, office"}}
	got := s.must(t)
	if got.N != 10 {
		t.Errorf("%d rows, want 10", got.N)
	}
	near(t, "the volume of three instants", sum(col(t, got, "volume")), 3*90+2*50.4, 1e-11)
	if built := s.env.Diagrams.Stats().Built; built != 2 {
		t.Errorf("%d diagrams built, want 2", built)
	}
	if said := notes(s.env); !strings.Contains(said, "the zone office has no site in 1 of 3 partitions") {
		t.Errorf("the notes are\n%s", said)
	}
	only := &setup{def: cells, input: table(in, true), c: s.c, need: []string{"zone"}}
	if one := only.must(t); one.N != 10 || col(t, one, "zone").Text(2) != "office" || col(t, one, "zone").Type != column.Text {
		t.Errorf("zone alone: %v", one)
	}
	for _, d := range []*Definition{gaps, tetrahedra, triangles, vertices, hull} {
		rows := (&setup{def: d, input: table(in, true), c: s.c}).must(t)
		col(t, rows, "zone")
	}
}
