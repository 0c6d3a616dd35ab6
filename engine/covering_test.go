package engine_test

import (
	"context"
	"math"
	"strings"
	"testing"
)

// roomL is an L of 10 x 8 without 4 x 3, 3 high, with a pillar of 1 x 1 in it: a floor of 67.
const roomL = "PRISM ((0,0), (10,0), (10,5), (6,5), (6,8), (0,8)) HOLE ((2,2), (3,2), (3,3), (2,3)) FROM 0 TO 3"

func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol*max(1, math.Abs(want))) {
		t.Errorf("%s: %.17g, want %.17g", what, got, want)
	}
}

// The share of a floor plan above a limit is one query; sections add up to the solid's.
func TestSections(t *testing.T) {
	a := newAsker(t, 2)
	a.text("CREATE SOLID air AS " + roomL + ";")
	a.text("CREATE CAMPAIGN hall AS (SELECT 'A' AS id, 1.0 AS x, 1.0 AS y, 1.0 AS z, 5.0 AS temp UNION ALL SELECT 'B', 9, 1, 1, 9) WITHIN air;")
	// The plane halfway between A and B at x = 5: 25 of the right, 40 - 1 of the left, and the arm x 5 to 6.
	a.is("SELECT id, area FROM SECTION OF hall AT z = 1.1;", "A 39; B 28")
	near(t, "share", a.number("SELECT SHARE(temp > 8) WEIGHTED BY area FROM SECTION OF hall AT z = 1.1;"), 28.0/67, 1e-14)
	a.is("SELECT outline FROM SECTION OF hall AT z = 1.1 WHERE id = 'A';",
		"POLYGON Z ((0 0 1.1, 5 0 1.1, 5 8 1.1, 0 8 1.1, 0 0 1.1), (2 2 1.1, 2 3 1.1, 3 3 1.1, 3 2 1.1, 2 2 1.1))")
	for plane, want := range map[string]float64{"AT z = 0": 67, "AT z = 3": 67, "AT Z = 1": 67, "AT x = 8": 15, "AT x = 6": 24, "AT y = 2.5": 27,
		"THROUGH (0, 0, 1) NORMAL (0, 0, -2)": 67, "THROUGH (0, 0, 0) NORMAL (0, 1, 1)": 0} {
		if plane == "THROUGH (0, 0, 0) NORMAL (0, 1, 1)" { // touches in an edge
			a.is("SELECT COUNT(*) FROM SECTION OF hall "+plane+";", "0")
			continue
		}
		near(t, plane, a.number("SELECT SUM(area) FROM SECTION OF hall "+plane+";"), want, 1e-12)
	}
	a.is("SELECT COUNT(*) FROM SECTION OF hall AT z = 3.5;", "0")
	a.says("the plane z = 3.5 does not meet air")
	a.is("SELECT SUM(area) FROM SECTION OF hall AT z = 0;", "67")
	a.says("the plane z = 0 lies in walls of air")
	a.is("SELECT id, area FROM SECTION OF hall AT x = 5;", "B 24")
	a.says("the plane x = 5 lies in faces between cells of hall")
	a.is("SELECT id, area, outline FROM SECTION OF hall UNCLIPPED AT z = 1;", "A Infinity ; B Infinity ")
	a.says("2 cells of hall are without end in the plane z = 1")
}

// Zones, parts, groups, stretch, sites in one place: the clauses are those of CELLS.
func TestSectionClauses(t *testing.T) {
	a := newAsker(t, 2)
	a.text("CREATE SOLID air AS " + roomL + "; CREATE SOLID west AS BOX (0,0,0) TO (4,8,3); CREATE SOLID east AS BOX (6,0,0) TO (10,5,3);")
	a.text("CREATE CAMPAIGN hall AS (SELECT 'A' AS id, 1.0 AS x, 1.0 AS y, 1.0 AS z, 5.0 AS temp, 1 AS pass UNION ALL SELECT 'B', 9, 1, 1, 9, 1 " +
		"UNION ALL SELECT 'C', 9, 1, 1, 7, 2 UNION ALL SELECT 'D', 9, 1, 1, 7, 2) WITHIN air;")
	a.is("SELECT pass, id, area FROM SECTION OF hall FOR EACH pass AT z = 1.1;", "1 A 39; 1 B 28; 2 C 33.5; 2 D 33.5")
	a.is("SELECT zone, id, area FROM SECTION OF (SELECT * FROM hall WHERE pass = 1) WITHIN (west, east) AT z = 1;", "west A 32; east B 20")
	a.is("SELECT part, id, area FROM SECTION OF (SELECT * FROM hall WHERE pass = 1) WITHIN air MEASURED IN (west, east) AT z = 1 ORDER BY part, id;", "east B 20; west A 31")
	a.is("SELECT id, area FROM SECTION OF (SELECT * FROM hall WHERE pass = 1) WITHIN air STRETCHED (1, 1, 5) AT z = 1;", "A 39; B 28")
	a.text("CREATE SOLID slab AS BOX (4,1,1) TO (5.5,7,2); CREATE SOLID hollow AS air MINUS slab;")
	near(t, "hollow", a.number("SELECT SUM(area) FROM SECTION OF (SELECT * FROM hall WHERE pass = 1) WITHIN hollow AT z = 1.5;"), 58, 1e-12)
}

// Further sites fill the largest gaps; the twenty sites' first gap is known in rational numbers.
func TestPlacements(t *testing.T) {
	a := newAsker(t, 2)
	a.text("CREATE CAMPAIGN hall FROM 'twenty.csv' WITHIN BOX (0,0,0) TO (10,8,4);")
	a.is("SELECT rank, x, y, z, ROUND(radius, 9), rank = 2 OR ABS(radius_after - 3.661966685) < 1e-9 FROM PLACEMENTS OF hall NUMBER 2;",
		"1 10 8 0 4.102438299 TRUE; 2 0 8 4 3.661966685 TRUE")
	near(t, "radius after two", a.number("SELECT radius_after FROM PLACEMENTS OF hall NUMBER 2 WHERE rank = 2;"),
		a.number("SELECT MAX(radius) FROM GAPS OF (SELECT id, x, y, z FROM hall UNION ALL SELECT 20 + rank, x, y, z FROM (SELECT * FROM PLACEMENTS OF hall NUMBER 2) AS p) WITHIN BOX (0,0,0) TO (10,8,4);"), 1e-12)
	a.is("SELECT COUNT(*), MIN(x), MAX(y) FROM PLACEMENTS OF hall NUMBER 9 CLEARANCE 0.5;", "9 0.5 7.5")
	a.says("no other place is farther from the sites by more than 0.01 %")
	a.is("SELECT rank, x FROM PLACEMENTS OF hall NUMBER 5 AMONG (SELECT 9.5 AS x, 7.5 AS y, 0.5 AS z UNION ALL SELECT 20, 1, 1 UNION ALL SELECT NULL, 1, 1 UNION ALL SELECT 0.25, 7.5, 3.5);", "1 9.5; 2 0.25")
	a.says("1 place of AMONG lies outside")
	a.says("1 place of AMONG has no position")
	a.says("only 2 places could be proposed")
	a.is("SELECT COUNT(*) FROM PLACEMENTS OF (SELECT * FROM hall WHERE FALSE) NUMBER 3;", "0")
	a.is("SELECT COUNT(*) FROM PLACEMENTS OF (SELECT * FROM hall WHERE id = 1) WITHIN BOX (0,0,0) TO (10,8,4) NUMBER 3;", "3")
	a.is("SELECT COUNT(*) FROM PLACEMENTS OF hall UNCLIPPED NUMBER 2;", "2")
	a.says("without a solid, only places among the sites of hall can be told")
}

// What goes with a site is what is found without it.
func TestRedundancy(t *testing.T) {
	a := newAsker(t, 2)
	a.text("CREATE CAMPAIGN hall FROM 'twenty.csv' WITHIN BOX (0,0,0) TO (10,8,4);")
	a.is("SELECT COUNT(*), MIN(rank), MAX(rank) FROM REDUNDANCY OF hall FOR temp;", "20 1 20")
	mean := a.number("SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF hall;")
	for _, id := range []string{"1", "8", "17"} {
		got := a.number("SELECT mean_change FROM REDUNDANCY OF hall FOR temp WHERE id = " + id + ";")
		without := " OMITTING ('" + id + "') BECAUSE 'tried'"
		near(t, "change without "+id, got, a.number("SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF hall"+without+";")-mean, 1e-12)
		near(t, "radius without "+id, a.number("SELECT radius_after FROM REDUNDANCY OF hall FOR temp WHERE id = "+id+";"),
			a.number("SELECT MAX(farthest) FROM CELLS OF hall"+without+";"), 1e-12)
	}
	a.is("SELECT COUNT(*) FROM REDUNDANCY OF hall FOR temp AS r JOIN REDUNDANCY OF hall FOR temp AS s ON s.rank = r.rank + 1 WHERE ABS(s.mean_change) < ABS(r.mean_change);", "0")
	// One, equal ones, none, and sites without a reading.
	a.text("CREATE SOLID box AS BOX (0,0,0) TO (4,1,1); CREATE TABLE some AS (SELECT 'A' AS id, 1 AS x, 0.5 AS y, 0.5 AS z, 4.0 AS temp, 3 AS same UNION ALL SELECT 'B', 3, 0.5, 0.5, 8, 3 UNION ALL SELECT 'C', 3, 0.5, 0.5, 6, 3);")
	a.is("SELECT id, mean_change, ROUND(radius_after, 6) FROM REDUNDANCY OF some FOR temp WITHIN box;", "B -0.5 1.224745; C 0.5 1.224745; A 1.5 3.082207")
	a.is("SELECT id, mean_change FROM REDUNDANCY OF some FOR same WITHIN box;", "B 0; C 0; A 0")
	a.is("SELECT id, mean_change, radius_after FROM REDUNDANCY OF (SELECT * FROM some WHERE id = 'A') FOR temp WITHIN box;", "A  Infinity")
	a.is("SELECT id, mean_change FROM REDUNDANCY OF (SELECT id, x, y, z, CASE WHEN id = 'A' THEN temp END AS temp FROM some WHERE id <> 'C') FOR temp WITHIN box;", "B 0; A ")
	a.says("temp is missing at 1 site")
}

// How densely the sites lie, by hand and against the other relations.
func TestSpacing(t *testing.T) {
	a := newAsker(t, 2)
	a.text("CREATE SOLID cube AS BOX (0,0,0) TO (1,1,1); CREATE TABLE one AS (SELECT 'A' AS id, 0.5 AS x, 0.5 AS y, 0.5 AS z);")
	a.is("SELECT ROUND(covering_radius, 12), separation, mesh_ratio, mean_square_distance, n_eff, largest_share FROM SPACING OF one WITHIN cube;", "0.866025403784   0.25 1 1")
	a.says("has one place only")
	near(t, "outside a ball", a.number("SELECT beyond_2 FROM SPACING OF one WITHIN cube DISTANCES (2, 0.5);"), 1-math.Pi/6, 1e-13)
	near(t, "outside an ellipsoid", a.number("SELECT beyond_1 FROM SPACING OF one WITHIN cube ACROSS 0.5 UP 0.25;"), 1-math.Pi/12, 1e-13)
	a.is("SELECT mean_square_distance, n_eff, covering_radius FROM SPACING OF one;", "  Infinity")
	a.says("without a solid the space around one has no end")
	a.text("CREATE CAMPAIGN hall FROM 'twenty.csv' WITHIN BOX (0,0,0) TO (10,8,4);")
	near(t, "covering radius", a.number("SELECT covering_radius FROM SPACING OF hall;"), a.number("SELECT MAX(radius) FROM GAPS OF hall;"), 1e-14)
	near(t, "separation", a.number("SELECT separation FROM SPACING OF hall;"), a.number("SELECT MIN(nearest_face) FROM CELLS OF hall;"), 0)
	near(t, "n_eff", a.number("SELECT n_eff FROM SPACING OF hall;"), a.number("SELECT SUM(volume) ^ 2 / SUM(volume ^ 2) FROM CELLS OF hall;"), 1e-13)
	near(t, "largest", a.number("SELECT largest_share FROM SPACING OF hall;"), a.number("SELECT MAX(volume) / SUM(volume) FROM CELLS OF hall;"), 1e-13)
	a.is("SELECT COUNT(*) FROM SPACING OF (SELECT * FROM hall WHERE FALSE);", "0")
	// The ledger beside a weighted answer.
	a.text("SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF hall DISTANCES (2);")
	a.says("lies farther than 2 m from every site")
	a.text("SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF hall DISTANCES (5) ACROSS 5 UP 2;")
	a.says("lies farther than 5 m across and 2 m up from every site")
}

// Parts and stretched distances in relations that say how the sites lie. Two parts of a cube
// with a site in its middle are halves: all by symmetry, and what lies outside a ball is
// halved too. By distances that count a metre up as two nothing else belongs to anyone.
func TestCoveringClauses(t *testing.T) {
	a := newAsker(t, 2)
	a.text("CREATE SOLID cube AS BOX (0,0,0) TO (1,1,1); CREATE SOLID low AS BOX (0,0,0) TO (1,1,0.5); CREATE SOLID high AS BOX (0,0,0.5) TO (1,1,1); " +
		"CREATE TABLE one AS (SELECT 'A' AS id, 0.5 AS x, 0.5 AS y, 0.5 AS z, 4.0 AS temp);")
	a.is("SELECT part, ROUND(covering_radius, 12), mean_square_distance, n_eff FROM SPACING OF one WITHIN cube MEASURED IN (low, high);",
		"low 0.866025403784 0.25 1; high 0.866025403784 0.25 1")
	near(t, "outside a ball", a.number("SELECT SUM(beyond_1) FROM SPACING OF one WITHIN cube DISTANCES (0.5) MEASURED IN (low, high);"), 2-math.Pi/3, 1e-12)
	a.is("SELECT ROUND(covering_radius, 12), mean_square_distance FROM SPACING OF one WITHIN cube STRETCHED (1,1,2);", "0.866025403784 0.25")
	a.says("1 m up counts as 2 m")
	a.text("SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF one WITHIN cube MEASURED IN (low) DISTANCES (0.5);")
	a.says("of 0.5 m³ of low, 0.2382 (47.6 %) lies farther than 0.5 m from every site")
	a.is("SELECT part, rank, x, y, z, ROUND(radius, 9) FROM PLACEMENTS OF one WITHIN cube NUMBER 1 MEASURED IN (low, high);",
		"low 1 0 0 0 0.866025404; high 1 0 0 1 0.866025404")
	a.says("each part has proposals of its own")
	a.text("CREATE CAMPAIGN hall FROM 'twenty.csv' WITHIN BOX (0,0,0) TO (10,8,4); CREATE SOLID left AS BOX (0,0,0) TO (4,8,4); CREATE SOLID right AS BOX (4,0,0) TO (10,8,4);")
	// What is above a limit in two parts is what is above it in the whole; so is the change of a mean.
	for _, m := range []string{"NEAREST", "LINEAR"} {
		near(t, m, a.number("SELECT SUM(volume) FROM EXCEEDANCE OF hall FOR temp ABOVE 20 METHOD "+m+" MEASURED IN (left, right);"),
			a.number("SELECT volume FROM EXCEEDANCE OF hall FOR temp ABOVE 20 METHOD "+m+";"), 1e-9)
		near(t, m+" unreached", a.number("SELECT SUM(unreached) FROM EXCEEDANCE OF hall FOR temp ABOVE 20 METHOD "+m+" MEASURED IN (left, right);"),
			a.number("SELECT unreached FROM EXCEEDANCE OF hall FOR temp ABOVE 20 METHOD "+m+";"), 1e-9)
	}
	if n := a.number("SELECT COUNT(*) FROM EXCEEDANCE OF hall FOR temp ABOVE 20 METHOD SIBSON MEASURED IN (left, right) WHERE lower <= volume AND volume <= upper;"); n != 2 {
		t.Errorf("%v parts by SIBSON within their bounds", n)
	}
	near(t, "mean changes", a.number("SELECT SUM(mean_change * CASE WHEN part = 'left' THEN 0.4 ELSE 0.6 END) FROM REDUNDANCY OF hall FOR temp MEASURED IN (left, right) WHERE id = 7;"),
		a.number("SELECT mean_change FROM REDUNDANCY OF hall FOR temp WHERE id = 7;"), 1e-9)
	// An evenly stretched space is the same space.
	for _, q := range []string{"SELECT SUM(radius + radius_after) FROM PLACEMENTS OF hall NUMBER 4%s;", "SELECT SUM(mean_change) + SUM(radius_after) FROM REDUNDANCY OF hall FOR temp%s;",
		"SELECT mesh_ratio + n_eff + beyond_1 FROM SPACING OF hall DISTANCES (2)%s;"} {
		near(t, q, a.number(strings.Replace(q, "%s", " STRETCHED (3,3,3)", 1)), a.number(strings.Replace(q, "%s", "", 1)), 1e-9)
	}
}

// What a user gets wrong is said with the way out.
func TestCoveringMistakes(t *testing.T) {
	a := newAsker(t, 2)
	a.text("CREATE CAMPAIGN hall FROM 'twenty.csv' WITHIN BOX (0,0,0) TO (10,8,4);")
	for query, want := range map[string]string{
		"SELECT * FROM SECTION OF hall;":                                             "SECTION needs the plane",
		"SELECT * FROM SECTION OF hall AT q = 1;":                                    "a plane stands across x, y or z",
		"SELECT * FROM SECTION OF hall AT hall;":                                     "SECTION is cut by a plane",
		"SELECT * FROM SECTION OF hall AT z = 1 THROUGH (0,0,0) NORMAL (0,0,1);":     "a SECTION has one plane",
		"SELECT * FROM SECTION OF hall THROUGH (0,0,0) NORMAL (0,0,0);":              "has no direction",
		"SELECT * FROM PLACEMENTS OF hall;":                                          "PLACEMENTS needs NUMBER",
		"SELECT * FROM PLACEMENTS OF hall NUMBER 0;":                                 "NUMBER is a whole number of 1 or more",
		"SELECT * FROM PLACEMENTS OF hall NUMBER 2 CLEARANCE -1;":                    "CLEARANCE is a length of 0 or more",
		"SELECT * FROM PLACEMENTS OF hall UNCLIPPED NUMBER 2 CLEARANCE 1;":           "CLEARANCE needs a solid",
		"SELECT * FROM PLACEMENTS OF hall NUMBER 2 AMONG (SELECT x FROM hall);":      "AMONG needs points with the columns x, y, z",
		"SELECT * FROM REDUNDANCY OF hall;":                                          "REDUNDANCY needs the reading",
		"SELECT * FROM REDUNDANCY OF hall UNCLIPPED FOR temp;":                       "REDUNDANCY needs a solid",
		"SELECT * FROM SPACING OF hall DISTANCES (0);":                               "is a length of more than 0",
		"SELECT * FROM SPACING OF hall DISTANCES (2, 2);":                            "DISTANCES names 2 twice",
		"SELECT beyond_2 FROM SPACING OF hall DISTANCES (2);":                        "there is no column 'beyond_2'",
		"SELECT id FROM CELLS OF hall ACROSS 5 UP 2;":                                "CELLS needs DISTANCES",
		"SELECT * FROM SPACING OF hall STRETCHED (1,1,2) ACROSS 2 UP 1;":             "are two ways to say",
		"SELECT * FROM PLACEMENTS OF hall NUMBER 2 STRETCHED (1,1,2) CLEARANCE 0.2;": "no place can be found that keeps a CLEARANCE",
	} {
		a.notes.Reset()
		err := a.session.Run(context.Background(), "mistake", query, reference)
		if err == nil || !strings.Contains(a.notes.String(), want) {
			t.Errorf("%s\n%s\nwant %q", query, a.notes.String(), want)
		}
	}
}
