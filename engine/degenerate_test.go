package engine_test

import (
	"context"
	"flag"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"nearcell/engine"
	"nearcell/engine/present"
	"nearcell/engine/relation"

	"nearcell/catalog"
)

// degenerateSetup has six sites in a box of 4 x 4 x 4 that two zones and two parts of it
// divide, and what can be wrong with them.
const degenerateSetup = `
CREATE SOLID air AS BOX (0,0,0) TO (4,4,4);
CREATE SOLID west AS BOX (0,0,0) TO (2,4,4);
CREATE SOLID east AS BOX (2,0,0) TO (4,4,4);
CREATE SOLID low AS BOX (0,0,0) TO (4,4,1);
CREATE TABLE base AS (SELECT * FROM (VALUES ('A', 1.0, 1.0, 1.0, 4.0, 1), ('B', 3.0, 1.0, 0.5, 9.0, 1), ('C', 1.0, 3.0, 2.0, 5.0, 1), ('D', 3.0, 3.5, 3.0, 8.0, 1), ('E', 2.5, 1.5, 2.5, 6.0, 1), ('F', 0.5, 2.0, 3.5, 7.0, 2))
  AS v (id, x, y, z, temp, pass));
CREATE VIEW usual AS (SELECT id, x, y, z, temp FROM base);
CREATE VIEW empty AS (SELECT * FROM usual WHERE FALSE);
CREATE VIEW one AS (SELECT * FROM usual WHERE id = 'A');
CREATE VIEW two AS (SELECT * FROM usual WHERE id IN ('A', 'D'));
CREATE VIEW equal AS (SELECT id, 1.0 AS x, 2.0 AS y, 3.0 AS z, temp FROM base WHERE id IN ('A', 'B', 'C'));
CREATE VIEW beyond AS (SELECT * FROM usual UNION ALL SELECT 'Z', 9.0, 9.0, 9.0, 99.0);
CREATE VIEW without AS (SELECT id, x, y, z, CASE WHEN id <> 'C' THEN temp END AS temp FROM base);
CREATE VIEW silent AS (SELECT id, x, y, z, CASE WHEN x > 100 THEN temp END AS temp FROM base);
CREATE VIEW constant AS (SELECT id, x, y, z, 5.0 AS temp FROM base);
CREATE VIEW flat AS (SELECT id, x, y, 1.0 AS z, temp FROM base);
CREATE VIEW places AS (SELECT * FROM (VALUES ('p', 2.0, 2.0, 2.0), ('q', 1.0, 1.0, 1.0), ('r', 9.0, 9.0, 9.0)) AS v (place, x, y, z));
`

// degenerateQueries ask each relation that rests on sites; %s stands for the campaign and
// what is to follow it.
var degenerateQueries = []struct {
	noun, query string
	parts       bool // it takes MEASURED IN
}{
	{"CELLS", "SELECT COUNT(*) AS n, ROUND(SUM(volume), 6) AS volume, ROUND(AVG(temp) WEIGHTED BY volume, 6) AS mean FROM CELLS OF %s;", true},
	{"CONTACTS", "SELECT COUNT(*) AS n, ROUND(SUM(area), 6) AS area FROM CONTACTS OF %s;", true},
	{"GAPS", "SELECT COUNT(*) AS n, ROUND(MAX(radius), 6) AS radius FROM GAPS OF %s;", true},
	{"PLACEMENTS", "SELECT rank, ROUND(x, 6) AS x, ROUND(y, 6) AS y, ROUND(z, 6) AS z, ROUND(radius, 6) AS radius, ROUND(radius_after, 6) AS after FROM PLACEMENTS OF %s NUMBER 2;", true},
	{"REDUNDANCY", "SELECT rank, id, ROUND(mean_change, 6) AS mean_change, ROUND(radius_after, 6) AS after FROM REDUNDANCY OF %s FOR temp;", true},
	{"SPACING", "SELECT ROUND(covering_radius, 6) AS radius, ROUND(separation, 6) AS separation, ROUND(mesh_ratio, 6) AS ratio, ROUND(mean_square_distance, 6) AS square, ROUND(n_eff, 6) AS n_eff, ROUND(beyond_1, 6) AS beyond_1 FROM SPACING OF %s DISTANCES (2);", true},
	{"SECTION", "SELECT id, ROUND(area, 6) AS area FROM SECTION OF %s AT z = 0.5;", true},
	{"ESTIMATES", "SELECT place, ROUND(temp, 6) AS temp, nearest, ROUND(distance, 6) AS distance, neighbours, in_hull FROM ESTIMATES OF %s AT places;", false},
	{"WEIGHTS", "SELECT place, neighbour, ROUND(weight, 6) AS weight FROM WEIGHTS OF %s AT places METHOD LAPLACE;", false},
	{"RESIDUALS", "SELECT id, ROUND(estimate, 6) AS estimate, ROUND(residual, 6) AS residual, ROUND(robust_z, 6) AS robust_z, on_hull FROM RESIDUALS OF %s FOR temp;", false},
	{"EXCEEDANCE", "SELECT ROUND(volume, 6) AS volume, ROUND(share, 6) AS share, ROUND(unreached, 6) AS unreached, ROUND(lower, 6) AS lower, ROUND(upper, 6) AS upper FROM EXCEEDANCE OF %s FOR temp ABOVE 6.5 METHOD NEAREST;", true},
	{"EXCEEDANCE", "SELECT ROUND(volume, 6) AS volume, ROUND(share, 6) AS share, ROUND(unreached, 6) AS unreached, ROUND(lower, 6) AS lower, ROUND(upper, 6) AS upper FROM EXCEEDANCE OF %s FOR temp ABOVE 6.5 METHOD LINEAR;", true},
	{"EXCEEDANCE", "SELECT ROUND(share, 1) AS share, ROUND(unreached, 6) AS unreached, lower <= volume AND volume <= upper AS bounded FROM EXCEEDANCE OF %s FOR temp ABOVE 6.5 METHOD SIBSON;", true},
	{"OVERLAY", "SELECT COUNT(*) AS n, ROUND(SUM(volume), 6) AS volume, ROUND(SUM(ABS(other_temp - temp) * volume), 6) AS change FROM OVERLAY OF %s AGAINST usual;", true},
	{"OVERLAY", "SELECT COUNT(*) AS n, ROUND(SUM(volume), 6) AS volume FROM OVERLAY OF usual AGAINST %s;", false},
	{"AUTOCORRELATION", "SELECT ROUND(moran_i, 6) AS moran_i, ROUND(expected, 6) AS expected, ROUND(z_score, 6) AS z_score, p_value, ROUND(geary_c, 6) AS geary_c FROM AUTOCORRELATION OF %s FOR temp;", false},
	{"CLUSTERS", "SELECT id, ROUND(getis_g, 6) AS getis_g, ROUND(local_moran, 6) AS local_moran, p_value FROM CLUSTERS OF %s FOR temp;", false},
}

// TestDegenerate asks every relation of sites about campaigns that are empty, of one or two
// sites, of sites in one place or in one plane, with one outside, without one or all of the
// readings, and with equal ones; without a solid, by groups, zones and parts. What they
// answer, notes and errors included, stands in a golden file that was read line by line. It
// is the same for one thread, two and four.
func TestDegenerate(t *testing.T) {
	ask := func(threads int) string {
		var out, all strings.Builder
		s := engine.New(catalog.Memory(), engine.Options{Out: &out, Err: &out, Format: present.AsCSV, Threads: threads, Quiet: true})
		if err := s.Run(context.Background(), "setup", degenerateSetup, "."); err != nil {
			t.Fatal(err, out.String())
		}
		for _, q := range degenerateQueries {
			asked := map[string]string{}
			for _, c := range []string{"usual", "empty", "one", "two", "equal", "beyond", "without", "silent", "constant", "flat"} {
				asked[c] = c + " WITHIN air"
			}
			asked["open"] = "usual"
			asked["groups"] = "base WITHIN air FOR EACH pass"
			asked["zones"] = "usual WITHIN (west, east)"
			asked["stretched"] = "usual WITHIN air STRETCHED (1, 1, 3)"
			names := []string{"usual", "empty", "one", "two", "equal", "beyond", "without", "silent", "constant", "flat", "open", "groups", "zones", "stretched"}
			if q.parts {
				asked["parts"] = "usual WITHIN air MEASURED IN (low, east)"
				names = append(names, "parts")
			}
			for _, name := range names {
				text := fmt.Sprintf(q.query, asked[name])
				if q.noun == "OVERLAY" && strings.Contains(text, "AGAINST "+asked[name]) {
					if name != "empty" && name != "one" && name != "equal" && name != "beyond" {
						continue
					}
					text = strings.Replace(text, "AGAINST "+asked[name], "AGAINST "+name+" WITHIN air", 1)
				}
				out.Reset()
				err := s.Run(context.Background(), name, text, ".")
				answer := out.String()
				if strings.Contains(answer, "NaN") || strings.Contains(answer, "panic") || strings.Contains(answer, "internal") {
					t.Errorf("%s\n%s", text, answer)
				}
				if err != nil && !strings.Contains(answer, name+":1: ") {
					t.Errorf("an error without its place: %s\n%s", text, answer)
				}
				fmt.Fprintf(&all, "%s, %s: %s\n%s\n", q.noun, name, text, answer)
			}
		}
		return all.String()
	}
	got := ask(2)
	for _, threads := range []int{1, 4} {
		if again := ask(threads); again != got {
			t.Errorf("%d threads give other bytes than two", threads)
		}
	}
	file := filepath.Join("testdata", "degenerate.txt")
	if f := flag.Lookup("rewrite"); f != nil && f.Value.String() == "true" {
		if err := os.WriteFile(file, []byte(got), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	want, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	if string(want) != got {
		a, b := strings.Split(string(want), "\n"), strings.Split(got, "\n")
		for i := range min(len(a), len(b)) {
			if a[i] != b[i] {
				t.Fatalf("line %d is\n%s\nwant\n%s", i+1, b[i], a[i])
			}
		}
		t.Fatalf("%d lines, want %d", len(b), len(a))
	}
	known := map[string]bool{"TETRAHEDRA": true, "TRIANGLES": true, "VERTICES": true, "HULL": true, "REPRESENTATIVES": true} // have tests of their own
	for _, q := range degenerateQueries {
		known[q.noun] = true
	}
	for _, d := range relation.All() {
		if d.Zoned && !known[d.Noun] {
			t.Errorf("%s is not asked", d.Noun)
		}
	}
}

// Two rooms known by their surfaces alone: what they share is counted, and what each has
// alone is told. A box of 1 is taken out of the one, half of the room out of the other.
func TestOverlayOfMeshes(t *testing.T) {
	a := newAsker(t, 2)
	a.text(`CREATE SOLID drawn AS BOX (0,0,0) TO (4,4,4) MINUS BOX (1.5,1.5,1.5) TO (2.5,2.5,2.5); CREATE SOLID half AS drawn MINUS BOX (0,0,2) TO (4,4,4);
		CREATE SOLID pierced AS drawn MINUS BOX (0,0,0) TO (1,1,1);
		CREATE CAMPAIGN one AS (SELECT * FROM (VALUES ('A', 1.2, 1.0, 1.5, 4.0), ('B', 3.0, 3.0, 3.0, 5.0)) AS v (id, x, y, z, temp)) WITHIN pierced;
		CREATE CAMPAIGN two AS (SELECT * FROM (VALUES ('A', 3.0, 1.0, 1.0, 4.0), ('B', 1.0, 3.0, 1.0, 5.0)) AS v (id, x, y, z, temp)) WITHIN half;`)
	near(t, "shared", a.number("SELECT SUM(volume) FROM OVERLAY OF one AGAINST two;"), 32-0.5-1, 1e-9)
	a.says("pierced and half share 30.5 m³: 31.5 m³ of pierced and 1 m³ of half belong to one campaign alone")
}
