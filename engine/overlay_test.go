package engine_test

import (
	"bytes"
	"context"
	"math"
	"strings"
	"testing"

	"nearcell/catalog"
	"nearcell/engine"
	"nearcell/engine/present"
)

const twoCampaigns = `CREATE SOLID air AS PRISM ((0,0), (6,0), (6,2), (3,2), (3,4), (0,4)) FROM 0 TO 2;
CREATE SOLID west AS BOX (0,0,0) TO (3,4,2);
CREATE SOLID east AS BOX (3,0,0) TO (6,2,2);
CREATE SOLID tall AS BOX (0,0,0) TO (6,4,3);
CREATE CAMPAIGN before AS (SELECT * FROM (VALUES ('A', 1.0, 1.0, 1.0, 5.0), ('B', 2.0, 3.0, 1.0, 6.0), ('C', 5.0, 1.0, 0.5, 8.0), ('D', 5.0, 1.0, 0.5, 9.0)) AS v (id, x, y, z, temp)) WITHIN air;
CREATE CAMPAIGN after AS (SELECT * FROM (VALUES (1, 2.0, 1.0, 1.0, 6.0), (2, 4.0, 1.5, 1.5, NULL), (3, 1.0, 3.5, 0.2, 7.0)) AS v (id, x, y, z, temp)) WITHIN air;
`

// TestOverlaySums: rows and columns of an overlay add up to the cells, duplicates share
// theirs, and a campaign over itself is its own cells.
func TestOverlaySums(t *testing.T) {
	a := newAsker(t, 2)
	a.text(twoCampaigns)
	for _, query := range []string{
		`SELECT MAX(ABS(o.v - c.volume)) FROM (SELECT a, SUM(volume) AS v FROM OVERLAY OF before AGAINST after GROUP BY a) AS o JOIN CELLS OF before AS c ON c.id = o.a;`,
		`SELECT MAX(ABS(o.v - c.volume)) FROM (SELECT b, SUM(volume) AS v FROM OVERLAY OF before AGAINST after GROUP BY b) AS o JOIN CELLS OF after AS c ON c.id = o.b;`,
		`SELECT MAX(ABS(o.v - c.volume)) FROM (SELECT a, SUM(volume) AS v FROM OVERLAY OF before AGAINST after STRETCHED (1, 1, 4) GROUP BY a) AS o JOIN CELLS OF before STRETCHED (1, 1, 4) AS c ON c.id = o.a;`,
		`SELECT MAX(ABS(o.v - c.volume)) FROM (SELECT zone, b, SUM(volume) AS v FROM OVERLAY OF before AGAINST after WITHIN (west, east) GROUP BY zone, b) AS o JOIN CELLS OF after WITHIN (west, east) AS c ON c.id = o.b;`,
		`SELECT MAX(ABS(o.v - c.volume)) FROM (SELECT part, a, SUM(volume) AS v FROM OVERLAY OF before AGAINST after MEASURED IN (west, east) GROUP BY part, a) AS o JOIN CELLS OF before MEASURED IN (west, east) AS c ON c.id = o.a AND c.part = o.part;`,
		`SELECT MAX(ABS(o.volume - w.volume)) FROM OVERLAY OF before AGAINST after AS o JOIN OVERLAY OF after AGAINST before AS w ON w.a = o.b AND w.b = o.a;`,
	} {
		if off := a.number(query); !(off < 1e-13) {
			t.Errorf("%s\noff by %g", query, off)
		}
	}
	// C and D share a place: 4 pairs for their cell, one for A and for B.
	rows := a.records("SELECT a, b, volume FROM OVERLAY OF before AGAINST before;")
	if len(rows) != 6 {
		t.Fatalf("a campaign over itself: %v", rows)
	}
	share := map[string]float64{}
	for _, r := range rows {
		share[r[0]+r[1]] = real(t, r[2])
	}
	if share["CC"] != share["CD"] || share["CC"] != share["DC"] || math.Abs(share["AA"]+share["BB"]+4*share["CC"]-36) > 1e-12 {
		t.Errorf("%v", share)
	}
}

// TestOverlayAnswers: what changed, by hand. Two halves of a box against two thirds of it.
func TestOverlayAnswers(t *testing.T) {
	a := newAsker(t, 2)
	a.text(`CREATE SOLID room AS BOX (0,0,0) TO (6,1,1);
		CREATE CAMPAIGN one AS (SELECT * FROM (VALUES ('A', 2.0, 0.5, 0.5, 5.0, 1.0), ('B', 4.0, 0.5, 0.5, 6.0, 2.0)) AS v (id, x, y, z, temp, volume)) WITHIN room;
		CREATE CAMPAIGN two AS (SELECT * FROM (VALUES ('A', 1.0, 0.5, 0.5, 5.0), ('B', 3.0, 0.5, 0.5, NULL)) AS v (id, x, y, z, temp)) WITHIN room;`)
	got := strings.TrimSpace(a.text("SELECT a, b, volume, own_volume, temp, other_temp FROM OVERLAY OF one AGAINST two;"))
	if want := "a,b,volume,own_volume,temp,other_temp\nA,A,2,1,5,5\nA,B,1,1,5,\nB,B,3,2,6,"; strings.ReplaceAll(got, "\r", "") != want {
		t.Errorf("%s\nwanted\n%s", got, want)
	}
	a.text("CREATE OR REPLACE CAMPAIGN two AS (SELECT id, x, y, z, COALESCE(temp, 5.25) AS temp FROM two) WITHIN room;")
	// |5-5|·2 + |5.25-5|·1 + |5.25-6|·3 = 2.5 of 6; warmer by more than 0.2: 1 of 6.
	r := a.records("SELECT SUM(ABS(other_temp - temp) * volume) / SUM(volume), SHARE(other_temp > temp + 0.2) WEIGHTED BY volume FROM OVERLAY OF one AGAINST two;")
	if math.Abs(real(t, r[0][0])-2.5/6) > 1e-15 || math.Abs(real(t, r[0][1])-1./6) > 1e-15 {
		t.Errorf("%v", r)
	}
	if !strings.Contains(a.notes.String(), "of 6 m³ of room all is answered for") {
		t.Errorf("no ledger in\n%s", a.notes.String())
	}
	// The means need no overlay: their difference is that of the campaigns.
	if off := a.number(`SELECT ABS((SELECT AVG(other_temp - temp) WEIGHTED BY volume FROM OVERLAY OF one AGAINST two)
		- ((SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF two) - (SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF one)));`); off > 1e-15 {
		t.Errorf("the means differ by %g", off)
	}
	if v := a.number("SELECT SUM(volume) FROM OVERLAY OF one AGAINST two WHERE a = 'A' AND b = 'B';"); math.Abs(v-1) > 1e-15 {
		t.Errorf("%g", v)
	}
}

// TestOverlayTold: both remainders, partitions without a counterpart, sides without a
// solid, and what cannot be laid over one another.
func TestOverlayTold(t *testing.T) {
	for _, c := range []struct{ query, says string }{
		{"SELECT SUM(volume) FROM OVERLAY OF before AGAINST (SELECT * FROM after);", "(query) has no solid of its own: its cells end at that of before, air"},
		{"SELECT SUM(volume) FROM OVERLAY OF (SELECT * FROM before) AGAINST after;", "(query) has no solid of its own: its cells end at that of after, air"},
		{"CREATE CAMPAIGN high AS (SELECT * FROM after) WITHIN tall; SELECT SUM(volume) FROM OVERLAY OF before AGAINST high;",
			"air and tall share 36 m³: nothing of air and 36 m³ of tall belong to one campaign alone and are in no row"},
		{"CREATE CAMPAIGN half AS (SELECT * FROM after WHERE id <> 2) WITHIN west; SELECT SUM(volume) FROM OVERLAY OF before AGAINST half;",
			"air and west share 24 m³: 12 m³ of air and nothing of west belong to one campaign alone and are in no row"},
		{"SELECT * FROM OVERLAY OF (SELECT *, 1 AS pass FROM before UNION ALL SELECT *, 2 AS pass FROM before) AGAINST (SELECT *, 2 AS pass FROM after) FOR EACH pass WITHIN air;",
			"1 partition of (query) has no counterpart in (query) with the same pass and is in no row"},
		{"SELECT * FROM OVERLAY OF (SELECT *, 1 AS pass FROM before) AGAINST after FOR EACH pass WITHIN air;", "after has no pass: every partition of (query) is held against the one of after"},
		{"SELECT * FROM OVERLAY OF before;", "OVERLAY needs the other campaign: AGAINST"},
		{"SELECT * FROM OVERLAY OF (SELECT * FROM before) AGAINST (SELECT * FROM after);", "have no solid"},
		{"SELECT * FROM OVERLAY OF before AGAINST (SELECT * FROM after WHERE id > 9);", "there is no site in (query)"},
		{"SELECT * FROM OVERLAY OF (SELECT *, 'x' AS pass FROM before) AGAINST (SELECT *, 2 AS pass FROM after) FOR EACH pass WITHIN air;", "'pass' is TEXT in (query) and INTEGER in (query)"},
		{"SELECT * FROM OVERLAY OF before AGAINST after UNCLIPPED;", "OVERLAY takes no UNCLIPPED"},
	} {
		var said bytes.Buffer
		s := engine.New(catalog.Memory(), engine.Options{Out: &bytes.Buffer{}, Err: &said, Format: present.AsCSV, Quiet: true})
		if err := s.Run(context.Background(), "setting", twoCampaigns, t.TempDir()); err != nil {
			t.Fatal(said.String())
		}
		said.Reset()
		_ = s.Run(context.Background(), "input", c.query, ".")
		if !strings.Contains(said.String(), c.says) {
			t.Errorf("%s\nsays\n%s\nand not\n%s", c.query, said.String(), c.says)
		}
	}
}

// TestTwentySitesAutocorrelation holds statistics on the contacts of the twenty sites
// against those of spdep 1.2-7 of R with the same weights.
func TestTwentySitesAutocorrelation(t *testing.T) {
	a := newAsker(t, 2)
	a.text(twenty)
	for query, want := range map[string][]float64{
		"SELECT moran_i, geary_c, variance, z_score FROM AUTOCORRELATION OF c FOR temp WEIGHTS CONTACT;": {.551732128, .405729355, .008991744, 6.373476831},
		"SELECT moran_i, geary_c, z_score FROM AUTOCORRELATION OF c FOR temp WEIGHTS AREA;":              {.614989027, .285732490, 5.092747379},
	} {
		for i, x := range a.records(query)[0] {
			if math.Abs(real(t, x)-want[i]) > 5e-9 {
				t.Errorf("%s: %s, wanted %.9f", query, x, want[i])
			}
		}
		if !strings.Contains(a.notes.String(), "any field that varies smoothly clusters") {
			t.Errorf("a smooth field is not told of:\n%s", a.notes.String())
		}
	}
	// Conductance is the rule, and the local I add up to the sum of weights times I.
	if off := a.number(`SELECT ABS((SELECT SUM(local_moran) FROM CLUSTERS OF c FOR temp) - (SELECT SUM(area / distance) FROM CONTACTS OF c) * (SELECT moran_i FROM AUTOCORRELATION OF c FOR temp));`); off > 1e-10 {
		t.Errorf("the local I are off by %g", off)
	}
	for _, c := range []struct{ query, want, says string }{
		{"SELECT moran_i, z_score, p_value, geary_c FROM AUTOCORRELATION OF (SELECT id, x, y, z, 5 AS temp FROM c) FOR temp WITHIN BOX (0,0,0) TO (10,8,4)", ",,,", "all readings of temp are equal"},
		{"SELECT moran_i, z_score FROM AUTOCORRELATION OF (SELECT * FROM c ORDER BY id LIMIT 1) FOR temp WITHIN BOX (0,0,0) TO (10,8,4)", ",", "1 site of (query) touches no other"},
		{"SELECT moran_i, z_score FROM AUTOCORRELATION OF (SELECT * FROM c ORDER BY id LIMIT 2) FOR temp WITHIN BOX (0,0,0) TO (10,8,4)", "-1,", "fewer than four sites"},
		{"SELECT COUNT(getis_g) FROM CLUSTERS OF (SELECT id, x, y, z, CASE WHEN id > 5 THEN temp END AS temp FROM c) FOR temp WITHIN BOX (0,0,0) TO (10,8,4)", "15", "temp is missing at 5 sites"},
		{"SELECT COUNT(*) FROM CLUSTERS OF (SELECT * FROM c LIMIT 0) FOR temp", "0", "there is no site in (query)"},
		{"SELECT COUNT(p_value) FROM CLUSTERS OF (SELECT id, x, y, z, temp FROM c UNION ALL SELECT 99, x, y, z, 40 FROM c WHERE id = 1) FOR temp WITHIN BOX (0,0,0) TO (10,8,4)", "21", "2 sites of (query) share a place"},
	} {
		out := strings.Split(strings.TrimSpace(strings.ReplaceAll(a.text(c.query+";"), "\r", "")), "\n")
		if got := out[len(out)-1]; got != c.want || !strings.Contains(a.notes.String(), c.says) {
			t.Errorf("%s\ngives %q, says\n%s", c.query, got, a.notes.String())
		}
	}
}

// TestOverlayThreads: one and several threads print the same bytes.
func TestOverlayThreads(t *testing.T) {
	first := ""
	for threads := 1; threads <= 3; threads++ {
		a := newAsker(t, threads)
		a.text(twoCampaigns + twenty)
		got := a.text("SELECT * FROM OVERLAY OF before AGAINST after; SELECT * FROM CLUSTERS OF c FOR temp; SELECT * FROM AUTOCORRELATION OF c FOR temp;") + a.notes.String()
		if first == "" {
			first = got
		}
		if got != first {
			t.Errorf("%d threads print\n%s\nand one\n%s", threads, got, first)
		}
	}
}
