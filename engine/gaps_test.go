package engine_test

import (
	"math"
	"strings"
	"testing"
)

// The way of someone who asks where the next logger should hang: the largest gaps, how
// many on what part of the room, whose cell, and what one more logger would do.
func TestGapsStory(t *testing.T) {
	a := newAsker(t, 2)
	a.text("CREATE CAMPAIGN hall FROM 'twenty.csv' WITHIN BOX (0,0,0) TO (10,8,4);")
	// These four were found in rational numbers by an independent program.
	a.is("SELECT x, y, z, ROUND(radius, 9), a, place FROM GAPS OF hall ORDER BY radius DESC LIMIT 2;",
		"10 8 0 4.102438299 17 corner; 0 8 4 3.661966685 11 corner")
	a.is("SELECT ROUND(y, 9), ROUND(radius, 9), a FROM GAPS OF hall WHERE place = 'edge' AND x = 0 AND z = 4 ORDER BY radius DESC LIMIT 1;",
		"7.411290323 3.644943256 11")
	a.is("SELECT SUM(CASE WHEN place = 'corner' THEN 1 ELSE 0 END), SUM(CASE WHEN place NOT IN ('inside', 'wall', 'edge', 'corner') THEN 1 ELSE 0 END) FROM GAPS OF hall;", "8 0")
	a.is("SELECT COUNT(*) FROM GAPS OF hall WHERE a = 17 AND radius > 3.5;", "2")
	// The largest gap is the farthest point of its site's cell.
	a.is("SELECT c.id FROM CELLS OF hall AS c JOIN GAPS OF hall AS g ON g.a = c.id AND ABS(g.radius - c.farthest) < 1e-12 WHERE c.id = 17;", "17")
	if got, want := a.number("SELECT MAX(radius) FROM GAPS OF hall;"), a.number("SELECT MAX(farthest) FROM CELLS OF hall;"); math.Abs(got-want) > 1e-14*want {
		t.Errorf("the largest gap is %v, the farthest point %v", got, want)
	}
	// One more logger there makes it go.
	a.text("CREATE CAMPAIGN more AS (SELECT id, x, y, z FROM hall UNION ALL SELECT 21, x, y, z FROM (SELECT x, y, z FROM GAPS OF hall ORDER BY radius DESC LIMIT 1) AS g) WITHIN BOX (0,0,0) TO (10,8,4);")
	a.is("SELECT x, y, z, ROUND(radius, 9) FROM GAPS OF more ORDER BY radius DESC LIMIT 1;", "0 8 4 3.661966685")
	a.is("SELECT COUNT(*) FROM GAPS OF more WHERE x = 10 AND y = 8 AND z = 0;", "0")
}

// The clauses are those of CELLS.
func TestGapsClauses(t *testing.T) {
	a := newAsker(t, 2)
	a.text("CREATE CAMPAIGN hall FROM 'twenty.csv' WITHIN BOX (0,0,0) TO (10,8,4);")
	a.is("SELECT COUNT(*), MIN(place), MAX(place) FROM GAPS OF hall UNCLIPPED;", "7 inside inside")
	a.says("without a solid, only places among the sites of hall can be told")
	a.is("SELECT x, y, z, a FROM GAPS OF hall OMITTING ('17') BECAUSE 'drift' ORDER BY radius DESC LIMIT 1;", "10 8 0 10")
	a.says("'17' was left out before the partition (OMITTING: drift)")
	// The sites lie between 0.5 and 9.5, 0.3 and 7.7, 0.4 and 3.6 or so: the envelope
	// widens their own box.
	a.is("SELECT COUNT(*) FROM GAPS OF hall WITHIN ENVELOPE OF hall MARGIN 1 WHERE place = 'corner';", "8")
	low := a.records("SELECT MIN(x) - 1, MIN(y) - 1, MIN(z) - 1, MAX(x) + 1, MAX(y) + 1, MAX(z) + 1 FROM hall;")[0]
	got := a.records("SELECT MIN(x), MIN(y), MIN(z), MAX(x), MAX(y), MAX(z) FROM GAPS OF hall WITHIN ENVELOPE OF hall MARGIN 1;")[0]
	if strings.Join(low, " ") != strings.Join(got, " ") {
		t.Errorf("the gaps of the envelope reach from and to %v, want %v", got, low)
	}
	a.text("CREATE SOLID l AS PRISM ((0,0), (10,0), (10,4), (6,4), (6,8), (0,8)) HOLE ((2,1), (3,1), (3,2), (2,2)) FROM 0 TO 4;")
	if n := a.number("SELECT COUNT(*) FROM GAPS OF hall WITHIN l WHERE place <> 'inside';"); n < 10 {
		t.Errorf("%v gaps on the walls of the L", n)
	}
	a.is("SELECT COUNT(*) FROM GAPS OF hall WITHIN l WHERE x > 6 AND y > 4 OR x > 2 AND x < 3 AND y > 1 AND y < 2;", "0")
	a.is("SELECT COUNT(*) FROM GAPS OF (SELECT id, x, y, z FROM hall WHERE id = 1) WITHIN BOX (0,0,0) TO (10,8,4);", "8")
}

// DESCRIBE and LIST know the relation from the registry.
func TestGapsDescribed(t *testing.T) {
	a := newAsker(t, 2)
	if got := a.text("DESCRIBE GAPS;"); !strings.Contains(got, "radius") || !strings.Contains(got, "place") {
		t.Errorf("DESCRIBE GAPS gives %q", got)
	}
	if got := a.text("LIST GEOMETRY;"); !strings.Contains(got, "GAPS") {
		t.Errorf("LIST GEOMETRY gives %q", got)
	}
}

// An envelope closes what was open: the volume is that of the widened box, and its
// weights are finite.
func TestEnvelope(t *testing.T) {
	a := newAsker(t, 2)
	a.text("CREATE CAMPAIGN hall FROM 'twenty.csv';")
	box := a.number("SELECT (MAX(x) - MIN(x) + 3) * (MAX(y) - MIN(y) + 3) * (MAX(z) - MIN(z) + 3) FROM hall;")
	if got := a.number("SELECT SUM(volume) FROM CELLS OF hall WITHIN ENVELOPE OF hall MARGIN 1.5;"); math.Abs(got-box) > 1e-12*box {
		t.Errorf("the envelope holds %v, want %v", got, box)
	}
	a.text("CREATE CAMPAIGN \"Hall 5\" FROM 'twenty.csv';")
	// Whoever weighs open cells is offered it, by the campaign's own name; what is offered
	// works.
	for of, offer := range map[string]string{
		"hall": "such as ENVELOPE OF hall MARGIN 1, or",
		"(SELECT h.id, h.x, h.y, h.z, h.temp FROM hall h)":                                     "such as ENVELOPE OF hall MARGIN 1, or",
		"(SELECT id, x, y, z, 1 AS temp FROM plain)":                                           "put the campaign WITHIN a solid, or",
		"(SELECT h.id, h.x, h.y, h.z, 1 AS temp FROM hall h JOIN \"Hall 5\" f ON f.id = h.id)": "put the campaign WITHIN a solid, or",
		"\"Hall 5\"": "such as ENVELOPE OF \"Hall 5\" MARGIN 1, or",
	} {
		a.text("CREATE OR REPLACE TABLE plain FROM 'twenty.csv';")
		a.notes.Reset()
		err := a.session.Run(t.Context(), "test", "SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF "+of+";", reference)
		if err == nil || a.session.LastCode() != "weight" {
			t.Errorf("%s: %v", of, err)
		}
		a.says(offer)
	}
	a.is("SELECT AVG(temp) WEIGHTED BY volume BETWEEN MIN(temp) AND MAX(temp) FROM CELLS OF hall WITHIN ENVELOPE OF hall MARGIN 1;", "TRUE")
	a.text("CREATE SOLID around AS ENVELOPE OF hall MARGIN 1.5;")
	a.is("SELECT COUNT(*) FROM CELLS OF hall WITHIN around WHERE NOT bounded;", "0")
}
