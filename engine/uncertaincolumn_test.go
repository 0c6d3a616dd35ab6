package engine_test

import (
	"context"
	"os"
	"path/filepath"
	"strings"
	"testing"
)

// threeCells are cells of 1, 2 and 3 m³ with uncertainties of their own (u) and shared
// ones (drift).
const threeCells = `CREATE SOLID room AS BOX (0,0,0) TO (6,1,1);
	CREATE CAMPAIGN c AS (SELECT * FROM (VALUES
		('A', 0.5, 0.5, 0.5, 5.0, 0.6, 0.6, 0.1, 1, NULL, -0.1, 'x', 0.6, 'low'),
		('B', 1.5, 0.5, 0.5, 6.0, 0.3, 0.0, 0.1, 0, 0.3, 0.3, 'y', NULL, 'low'),
		('C', 4.5, 0.5, 0.5, 7.0, 0.1, 0.2, 0.1, 0, 0.1, 0.1, 'z', 7.0, 'high'))
		AS v (id, x, y, z, temp, u, drift, same, n, some, wrong, word, gappy, height)) WITHIN room;`

const instrumentsPart = "the instruments' part of its standard uncertainty is "

// TestUncertaintyByColumn, worked by hand: w = 1, 2, 3 of Σw = 6.
//
//	own errors:  Σw²u² = 0.6² + (2·0.3)² + (3·0.1)² = 0.36 + 0.36 + 0.09 = 0.81, √0.81 / 6 = 0.15
//	shared ones: Σw·drift = 0.6 + 0 + 0.6 = 1.2, / 6 = 0.2; together √(0.15² + 0.2²) = 0.25
//	A and B:     √(0.36 + 0.36) / 3 = 0.283; C alone: 0.1
//	A and C:     √(0.36 + 0.09) / 4 = 0.168
//	n, whole:    Σw²n² = 1, √1 / 6 = 0.167
//	two of own errors, u and a number of 0.1 for all: √(0.81 + 0.01·14) / 6 = 0.162
//	two shared ones, independent of each other: √(0.2² + 0.15²) = 0.25
func TestUncertaintyByColumn(t *testing.T) {
	a := newAsker(t, 2)
	a.text(threeCells)
	const untold = "the instruments' part of its uncertainty is not told: "
	for _, c := range []struct{ query, says string }{
		{"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp (u) EACH)", instrumentsPart + "0.15: 0.15 of each one's own errors, 0 shared by all"},
		{"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp (drift) COMMON)", instrumentsPart + "0.2: 0 of each one's own errors, 0.2 shared by all"},
		{"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp (u) EACH, (drift) COMMON)", instrumentsPart + "0.25: 0.15 of each one's own errors, 0.2 shared by all"},
		{"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp (u) EACH, 0.2 COMMON)", instrumentsPart + "0.25: 0.15 of each one's own errors, 0.2 shared by all"},
		{"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp (u) EACH, 0.1 EACH)", instrumentsPart + "0.162: 0.162 of each"},
		{"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp (drift) COMMON, 0.15 COMMON)", instrumentsPart + "0.25: 0 of each one's own errors, 0.25 shared"},
		{"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp (n) EACH)", instrumentsPart + "0.167: "},
		{"SELECT AVG(n) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (n (u) EACH)", instrumentsPart + "0.15: "}, // of whole numbers, too
		{"SELECT AVG(n) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (n 0.3 COMMON)", instrumentsPart + "0.3: "},
		{"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp (u) EACH) WHERE id <> 'C'", instrumentsPart + "0.283: "},
		{"SELECT AVG(temp) WEIGHTED BY volume FILTER (WHERE id <> 'C') FROM CELLS OF c UNCERTAINTY (temp (u) EACH)", instrumentsPart + "0.283: "},
		{"SELECT height, AVG(temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp (u) EACH) GROUP BY height", instrumentsPart + "0.1 to 0.283: "},
		{"SELECT AVG(t) WEIGHTED BY v FROM (SELECT volume AS v, u AS w, temp AS t FROM CELLS OF c UNCERTAINTY (temp (u) EACH)) AS q", instrumentsPart + "0.15: "},
		{"WITH k AS (SELECT * FROM CELLS OF c UNCERTAINTY (temp (u) EACH)) SELECT AVG(temp) WEIGHTED BY volume FROM k", instrumentsPart + "0.15: "},
		// a row without a reading counts on neither side, whatever its uncertainty is
		{"SELECT AVG(gappy) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (gappy (u) EACH)", instrumentsPart + "0.168: "},
		{"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp (some) EACH) WHERE id <> 'A'", instrumentsPart + "0.134: "}, // √0.45 / 5
		{"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp (wrong) EACH) WHERE id <> 'A'", instrumentsPart + "0.134: "},
		// told, and not taken for 0
		{"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp (some) EACH)", untold + "1 of 3 values with a weight has no uncertainty, NULL"},
		{"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp (some) COMMON, 0.1 EACH)", untold + "1 of 3 values"},
		{"SELECT AVG(temp) WEIGHTED BY volume FROM (SELECT temp, volume FROM CELLS OF c UNCERTAINTY (temp (u) EACH)) AS q", untold + "the column u does not reach the mean"},
		{"SELECT AVG(c.temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp (u) EACH) AS c CROSS JOIN c d", untold + "an instrument is in it more than once"},
		{"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF (SELECT *, 1 AS t FROM c UNION ALL SELECT *, 2 AS t FROM c) FOR EACH t WITHIN room UNCERTAINTY (temp (u) EACH)", untold + "an instrument is in it more than once"},
		// what all share is the same however often an instrument comes
		{"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF (SELECT *, 1 AS t FROM c UNION ALL SELECT *, 2 AS t FROM c) FOR EACH t WITHIN room UNCERTAINTY (temp (drift) COMMON)", instrumentsPart + "0.2: "},
		{"SELECT t, AVG(temp) WEIGHTED BY volume FROM CELLS OF (SELECT *, 1 AS t FROM c UNION ALL SELECT *, 2 AS t FROM c) FOR EACH t WITHIN room UNCERTAINTY (temp (u) EACH) GROUP BY t", instrumentsPart + "0.15: "},
		{"SELECT AVG(temp) WEIGHTED BY (volume * 1E200) FROM CELLS OF c UNCERTAINTY (temp (u) EACH)", untold + "weights and uncertainties multiply"},
	} {
		a.text(c.query + ";")
		if !strings.Contains(a.notes.String(), c.says) {
			t.Errorf("%s\nsays\n%s\nand not\n%s", c.query, a.notes.String(), c.says)
		}
	}
}

// TestUncertaintyOfMergedSites: where DUPLICATES MEAN may have made one reading of two
// instruments, a column of theirs is not taken for that of the mean.
func TestUncertaintyOfMergedSites(t *testing.T) {
	a := newAsker(t, 1)
	a.text(`CREATE SOLID room AS BOX (0,0,0) TO (6,1,1);
		CREATE CAMPAIGN c AS (SELECT * FROM (VALUES ('A', 2.5, 0.5, 0.5, 5.0, 0.1), ('B', 2.5, 0.5, 0.5, 6.0, NULL)) AS v (id, x, y, z, temp, u)) WITHIN room DUPLICATES MEAN;`)
	a.text("SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp (u) EACH);")
	if !strings.Contains(a.notes.String(), "with DUPLICATES MEAN a value may be that of several instruments") || strings.Contains(a.notes.String(), instrumentsPart) {
		t.Error(a.notes.String())
	}
}

// TestUncertaintyColumnAsNumber: a column of one value says what the number says.
func TestUncertaintyColumnAsNumber(t *testing.T) {
	a := newAsker(t, 2)
	a.text(threeCells)
	for _, tail := range []string{"", " WHERE id > 'A'", " GROUP BY height"} {
		for _, kind := range []string{"EACH", "COMMON"} {
			ask := func(value string) string {
				a.text("SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp " + value + " " + kind + ")" + tail + ";")
				return a.notes.String()
			}
			number, column := ask("0.1"), ask("(same)")
			if !strings.Contains(number, instrumentsPart) || number != column {
				t.Errorf("%s%s: the number says\n%s\nthe column\n%s", kind, tail, number, column)
			}
		}
	}
}

// failing runs a query that is to fail and gives what is said.
func failing(t *testing.T, a *asker, query string) string {
	t.Helper()
	a.notes.Reset()
	if a.session.Run(context.Background(), "input", query, ".") == nil {
		t.Errorf("%s is answered", query)
	}
	return a.notes.String()
}

// TestUncertaintyColumnRefused: what is no standard uncertainty is refused, and a row is
// named.
func TestUncertaintyColumnRefused(t *testing.T) {
	a := newAsker(t, 2)
	a.text(threeCells)
	for clause, want := range map[string]string{
		"UNCERTAINTY (temp (wrong) EACH)":             "a standard uncertainty is a finite number of 0 or more, and 'wrong' is -0.1 in the row with id 'A'",
		"UNCERTAINTY (temp 0.1 EACH, (wrong) COMMON)": "'wrong' is -0.1",
		"UNCERTAINTY (temp (word) EACH)":              "the uncertainty 'word' of c is TEXT",
		"UNCERTAINTY (temp (id) EACH)":                "is the identifier",
		"UNCERTAINTY (temp (nothing) EACH)":           "there is no column 'nothing' in c",
		"UNCERTAINTY (temp (u * 2) EACH)":             "computed as a column of the sites",
		"UNCERTAINTY ((u) EACH)":                      "UNCERTAINTY names the reading first",
		"UNCERTAINTY u":                               "UNCERTAINTY (temp (u) EACH)",
		"UNCERTAINTY (temp u EACH)":                   "a column in parentheses",
	} {
		if words := failing(t, a, "SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF c "+clause+";"); !strings.Contains(words, want) {
			t.Errorf("%s says %s, want %s", clause, words, want)
		}
	}
	infinite := "SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF (SELECT *, CAST('Infinity' AS REAL) AS v FROM c) WITHIN room UNCERTAINTY (temp (v) COMMON);"
	if words := failing(t, a, infinite); !strings.Contains(words, "'v' is Infinity") {
		t.Error(words)
	}
}

// TestUncertaintyUnits: a column in the unit of the reading, or without one, is taken;
// kelvins go with degrees Celsius; others are not converted but refused.
func TestUncertaintyUnits(t *testing.T) {
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, "w.csv"), []byte("id,x,y,z,temp [°C],bare,own [°C],k [K],mk [mK]\nA,1,1,1,5,0.1,0.1,0.1,100\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	a := newAsker(t, 1)
	if err := a.session.Run(context.Background(), "setting", "CREATE SOLID room AS BOX (0,0,0) TO (2,2,2); CREATE CAMPAIGN w FROM 'w.csv' WITHIN room;", dir); err != nil {
		t.Fatal(a.notes.String())
	}
	for _, u := range []string{"bare", "own", "k"} {
		a.text("SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF w UNCERTAINTY (temp (" + u + ") EACH);")
		if !strings.Contains(a.notes.String(), instrumentsPart+"0.1 °C: 0.1 of each") {
			t.Errorf("%s: %s", u, a.notes.String())
		}
	}
	words := failing(t, a, "SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF w UNCERTAINTY (temp (mk) EACH);")
	if !strings.Contains(words, "the uncertainty 'mk' of w is in mK, and 'temp' is in °C") || !strings.Contains(words, "CAST drops the unit") {
		t.Error(words)
	}
}

// TestUncertaintyThreads: shared errors of many chunks of rows are put together to the
// same words for any number of workers, and to those of the cells alone: each is there
// equally often.
func TestUncertaintyThreads(t *testing.T) {
	first := ""
	for _, threads := range []int{1, 2} {
		a := newAsker(t, threads)
		a.text(threeCells + "CREATE SOLID cube AS BOX (0,0,0) TO (41,41,41); CREATE TABLE many AS (SELECT x AS at, MOD(CAST(z - 0.5 AS INTEGER), 2) AS k FROM GRID OF cube STEP 1);")
		a.text("SELECT k, AVG(temp) WEIGHTED BY volume FROM many CROSS JOIN CELLS OF c UNCERTAINTY (temp (drift) COMMON) GROUP BY k;")
		if !strings.Contains(a.notes.String(), instrumentsPart+"0.2: 0 of each") {
			t.Error(a.notes.String())
		}
		if first == "" {
			first = a.notes.String()
		} else if first != a.notes.String() {
			t.Errorf("%d threads say\n%s\nand one\n%s", threads, a.notes.String(), first)
		}
	}
}
