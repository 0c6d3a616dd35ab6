package engine_test

import (
	"bytes"
	"context"
	"encoding/csv"
	"math"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"testing"

	"nearcell/catalog"
	"nearcell/engine"
	"nearcell/engine/present"
)

// reference is the folder of values from outside; its README names their sources.
const reference = "../testdata/reference"

// asker is a session whose answers a test reads as records.
type asker struct {
	t       *testing.T
	session *engine.Session
	out     bytes.Buffer
	notes   bytes.Buffer
}

func newAsker(t *testing.T, threads int) *asker {
	a := &asker{t: t}
	a.session = engine.New(catalog.Memory(), engine.Options{
		Out: &a.out, Err: &a.notes, Format: present.AsCSV, Threads: threads, Quiet: true,
	})
	return a
}

// text runs statements and gives what they printed.
func (a *asker) text(script string) string {
	a.t.Helper()
	a.out.Reset()
	a.notes.Reset()
	if err := a.session.Run(context.Background(), a.t.Name(), script, reference); err != nil {
		a.t.Fatalf("%v\n%s", err, a.notes.String())
	}
	return a.out.String()
}

// records runs one query and gives its rows without the heading.
func (a *asker) records(script string) [][]string {
	a.t.Helper()
	rows, err := csv.NewReader(strings.NewReader(a.text(script))).ReadAll()
	if err != nil {
		a.t.Fatal(err)
	}
	return rows[1:]
}

// number is the single value of a query.
func (a *asker) number(script string) float64 {
	a.t.Helper()
	rows := a.records(script)
	if len(rows) != 1 || len(rows[0]) != 1 {
		a.t.Fatalf("%s: %d rows, wanted one value", script, len(rows))
	}
	return real(a.t, rows[0][0])
}

func real(t *testing.T, text string) float64 {
	t.Helper()
	f, err := strconv.ParseFloat(text, 64)
	if err != nil {
		t.Fatal(err)
	}
	return f
}

// answer is a value from outside and the worth of its last printed digit, by which
// it may be off: some were computed from rounded volumes.
type answer struct{ value, lastDigit float64 }

// answers reads a file of name,value. A value without a decimal point is exact.
func answers(t *testing.T, file string) map[string]answer {
	t.Helper()
	f, err := os.Open(filepath.Join(reference, file))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	values := map[string]answer{}
	for _, r := range rows[1:] {
		a := answer{value: real(t, r[1]), lastDigit: 1e-9}
		if point := strings.IndexByte(r[1], '.'); point >= 0 {
			a.lastDigit = math.Pow(10, -float64(len(r[1])-point-1))
		}
		values[r[0]] = a
	}
	return values
}

const twenty = `CREATE CAMPAIGN c FROM 'twenty.csv' UNITS (temp '°C') WITHIN BOX (0,0,0) TO (10,8,4);`

// TestTwentySitesCells holds every cell of the twenty sites against exact values
// (rational arithmetic, checked with Qhull, SciPy, CGAL and R; see the README of
// the reference folder), by a join in the language itself.
func TestTwentySitesCells(t *testing.T) {
	a := newAsker(t, 2)
	a.text(twenty + ` CREATE TABLE want FROM 'twenty_cells.csv';`)
	rows := a.records(`SELECT c.id, ABS(c.volume - w.volume), c.faces - w.faces, c.edges - w.edges,
		c.vertices - w.vertices, ABS(c.area - w.surface), c.neighbours, c.bounded
		FROM CELLS OF c AS c JOIN want w ON w.id = c.id;`)
	if len(rows) != 20 {
		t.Fatalf("%d cells, wanted 20", len(rows))
	}
	neighbours := 0.0
	for _, r := range rows {
		if real(t, r[1]) > 5e-10 || real(t, r[5]) > 5e-7 {
			t.Errorf("site %s: volume off by %s, surface by %s", r[0], r[1], r[5])
		}
		if r[2] != "0" || r[3] != "0" || r[4] != "0" || r[7] != "TRUE" {
			t.Errorf("site %s: faces, edges, vertices off by %s %s %s, bounded %s", r[0], r[2], r[3], r[4], r[7])
		}
		neighbours += real(t, r[6])
	}
	if neighbours != 2*69 {
		t.Errorf("%v neighbours in all, wanted 138", neighbours)
	}
}

// TestTwentySitesContacts holds the 69 contacts against their exact areas.
func TestTwentySitesContacts(t *testing.T) {
	a := newAsker(t, 2)
	a.text(twenty + ` CREATE TABLE want FROM 'twenty_contacts.csv';`)
	rows := a.records(`SELECT COUNT(*), COUNT(w.area), MAX(ABS(k.area - w.area))
		FROM CONTACTS OF c AS k LEFT JOIN want w ON (w.a = k.a AND w.b = k.b) WHERE k.a < k.b;`)
	if rows[0][0] != "69" || rows[0][1] != "69" || real(t, rows[0][2]) > 5e-7 {
		t.Errorf("contacts, of them known, largest difference: %v", rows[0])
	}
	if n := a.number(`SELECT COUNT(*) FROM CONTACTS OF c;`); n != 138 {
		t.Errorf("%v ordered pairs, wanted 138", n)
	}
}

// TestTwentySitesStatistics holds the weighted statistics against values computed
// from the exact volumes; the quantiles also stand in the Hmisc package of R.
func TestTwentySitesStatistics(t *testing.T) {
	a := newAsker(t, 1)
	a.text(twenty)
	want := answers(t, "twenty_answers.csv")
	queries := map[string]string{
		"volume":          "SUM(volume)",
		"plain_mean":      "AVG(temp)",
		"plain_variance":  "VAR_SAMP(temp)",
		"plain_mkt":       "MKT(temp)",
		"mean":            "AVG(temp) WEIGHTED BY volume",
		"variance":        "VAR_POP(temp) WEIGHTED BY volume",
		"deviation":       "STDDEV_POP(temp) WEIGHTED BY volume",
		"sample_variance": "VAR_SAMP(temp) WEIGHTED BY volume",
		"volume_above_19": "SUM(volume) FILTER (WHERE temp > 19)",
		"volume_from_19":  "SUM(volume) FILTER (WHERE temp >= 19)",
		"volume_above_20": "SUM(volume) FILTER (WHERE temp > 20)",
		"volume_above_21": "SUM(volume) FILTER (WHERE temp > 21)",
		"quantile_0.05":   "QUANTILE(temp, 0.05) WEIGHTED BY volume",
		"quantile_0.25":   "QUANTILE(temp, 0.25) WEIGHTED BY volume",
		"quantile_0.5":    "MEDIAN(temp) WEIGHTED BY volume",
		"quantile_0.75":   "QUANTILE(temp, 0.75) WEIGHTED BY volume",
		"quantile_0.95":   "QUANTILE(temp, 0.95) WEIGHTED BY volume",
		"mkt":             "MKT(temp) WEIGHTED BY volume",
		"farthest":        "MAX(farthest)",
		"n_eff":           "SUM(volume) * SUM(volume) / SUM(volume * volume)",
	}
	for name, expression := range queries {
		w, known := want[name]
		if !known {
			t.Errorf("no reference value %s", name)
			continue
		}
		if got := a.number("SELECT " + expression + " FROM CELLS OF c;"); math.Abs(got-w.value) > w.lastDigit {
			t.Errorf("%s = %.12g, wanted %.12g", expression, got, w.value)
		}
		delete(want, name)
	}
	for name := range want {
		t.Errorf("the reference value %s is not tested", name)
	}
}

// TestTwentySitesOpen counts the open diagram of the same sites: 82 Delaunay
// edges, and only five cells are bounded.
func TestTwentySitesOpen(t *testing.T) {
	a := newAsker(t, 2)
	a.text(twenty)
	if n := a.number(`SELECT COUNT(*) FROM CONTACTS OF c UNCLIPPED WHERE a < b;`); n != 82 {
		t.Errorf("%v contacts, wanted 82", n)
	}
	rows := a.records(`SELECT id FROM CELLS OF c UNCLIPPED WHERE bounded;`)
	var ids []string
	for _, r := range rows {
		ids = append(ids, r[0])
	}
	if got := strings.Join(ids, " "); got != "7 8 14 19 20" {
		t.Errorf("bounded cells %s, wanted 7 8 14 19 20", got)
	}
}

// TestEarthquakes runs real, clustered data (U.S. Geological Survey, week to
// 2018-02-07) against Qhull's answers.
func TestEarthquakes(t *testing.T) {
	a := newAsker(t, 2)
	want := answers(t, "usgs_answers.csv")
	a.text(`CREATE TABLE raw FROM 'usgs_california_km.csv';`)
	box := a.records(`SELECT MIN(x_km) - 10, MIN(y_km) - 10, MIN(z_km) - 2, MAX(x_km) + 10, MAX(y_km) + 10, MAX(z_km) + 2 FROM raw;`)[0]
	a.text(`CREATE CAMPAIGN quakes FROM 'usgs_california_km.csv' POSITION (x_km, y_km, z_km) COORDINATES IN km
		WITHIN BOX (` + strings.Join(box[:3], ",") + `) TO (` + strings.Join(box[3:], ",") + `);`)
	queries := map[string]string{
		"sites":         "COUNT(*)",
		"plain_mean":    "AVG(mag)",
		"box_volume":    "SUM(volume)",
		"mean":          "AVG(mag) WEIGHTED BY volume",
		"n_eff":         "SUM(volume) * SUM(volume) / SUM(volume * volume)",
		"largest_share": "MAX(volume) / SUM(volume)",
	}
	for name, expression := range queries {
		w, known := want[name]
		if !known {
			t.Errorf("no reference value %s", name)
			continue
		}
		got := a.number("SELECT " + expression + " FROM CELLS OF quakes;")
		if math.Abs(got-w.value) > math.Max(w.lastDigit, 1e-12*math.Abs(w.value)) {
			t.Errorf("%s = %.12g, wanted %.12g", expression, got, w.value)
		}
	}
}

// TestSameBytes runs one script over shuffled rows of a campaign and with
// different numbers of threads: every byte of the results is the same.
func TestSameBytes(t *testing.T) {
	data, err := os.ReadFile(filepath.Join(reference, "usgs_california_km.csv"))
	if err != nil {
		t.Fatal(err)
	}
	lines := strings.Split(strings.TrimSpace(string(data)), "\n")
	random := rand.New(rand.NewPCG(3, 1))
	folder := t.TempDir()
	first := ""
	for turn, threads := range []int{1, 2, 3, 1} {
		var b strings.Builder
		b.WriteString("name," + lines[0] + "\n")
		for _, k := range random.Perm(len(lines) - 1) {
			b.WriteString("Q" + strconv.Itoa(k) + "," + lines[k+1] + "\n")
		}
		if err := os.WriteFile(filepath.Join(folder, "q.csv"), []byte(b.String()), 0o600); err != nil {
			t.Fatal(err)
		}
		a := newAsker(t, threads)
		got := a.text(`CREATE CAMPAIGN q FROM '` + filepath.ToSlash(folder) + `/q.csv' ID name POSITION (x_km, y_km, z_km)
			WITHIN PRISM ((-700,-600), (700,-600), (700,0), (100,50), (100,600), (-700,600)) FROM -60 TO 10;
			SELECT * FROM CELLS OF q;
			SELECT a, b, area, distance, mx FROM CONTACTS OF q;
			SELECT faces, SUM(volume), AVG(mag) WEIGHTED BY volume, STDDEV_SAMP(rms) FROM CELLS OF q GROUP BY faces;`)
		if turn == 0 {
			first = got
			if strings.Count(first, "\n") < 5000 {
				t.Fatalf("only %d lines of results", strings.Count(first, "\n"))
			}
		} else if got != first {
			t.Errorf("turn %d with %d threads prints other bytes", turn, threads)
		}
	}
}
