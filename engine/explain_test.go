package engine

import (
	"bytes"
	"context"
	"encoding/csv"
	"fmt"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"github.com/cockroachdb/datadriven"

	"nearcell/catalog"
	"nearcell/engine/present"
)

// demoSetting is what the demo script makes before its first question.
const demoSetting = `
LET upper = 8; LET step = INTERVAL '15' MINUTE;
CREATE SOLID air AS PRISM ((0, 0), (30, 0), (30, 12), (18, 12), (18, 18), (0, 18))
  HOLE ((0, 0), (4, 0), (4, 3), (0, 3)) FROM 0 TO 7.5;
CREATE CAMPAIGN hall FROM 'sites.csv' ID id POSITION (x, y, z) WITHIN air TOLERANCE 0.05;
CREATE TABLE log FROM 'log.csv' UNITS (temp '°C');
CREATE VIEW placed AS (
  SELECT id, CASE WHEN id = 'L17' THEN 13.20 ELSE x END AS x, y, z, level, place FROM hall);
CREATE VIEW readings AS (
  SELECT p.id, p.x, p.y, p.z, p.level, p.place, l.t, l.temp
  FROM placed p JOIN log l ON l.logger = p.id WHERE l.temp IS NOT NULL);
CREATE VIEW loggers AS (
  SELECT id, COUNT(*) AS got, AVG(temp) AS mean, SHARE(temp > :upper) AS over_limit FROM readings GROUP BY id);
`

// explainer is a session of one worker in the setting of the demo.
type explainer struct {
	*Session
	out, notes bytes.Buffer
}

func newExplainer(t *testing.T, format present.Format, width int) *explainer {
	t.Helper()
	e := &explainer{}
	e.Session = New(catalog.Memory(), Options{
		Out: &e.out, Err: &e.notes, Format: format, Threads: 1, Quiet: true,
		Screen: func() (int, int) { return width, 0 },
	})
	e.run(t, demoSetting)
	return e
}

func (e *explainer) run(t *testing.T, text string) string {
	t.Helper()
	e.out.Reset()
	e.notes.Reset()
	if err := e.Run(context.Background(), "input", text, filepath.Join("..", "testdata", "demo")); err != nil {
		return e.notes.String()
	}
	return strings.TrimLeft(e.out.String(), "\n")
}

// What is no fact of the query but of the machine is masked.
var masks = []struct {
	is   *regexp.Regexp
	mask string
}{
	{regexp.MustCompile(`(about|under) [0-9.]+ s\b`), "TIME"},
	{regexp.MustCompile(`\b[0-9]+\.[0-9]{4}\b`), "?.????"},
	{regexp.MustCompile(`  +[0-9]+\.[0-9]{3}  `), "  ?.???  "},
}

func masked(text string) string {
	for _, m := range masks {
		text = m.is.ReplaceAllString(text, m.mask)
	}
	return text
}

// TestExplainStories holds plans against what was printed; -rewrite prints anew.
// Lines are wide, so that no line breaks with the time in it. One, two and four threads
// print the same.
func TestExplainStories(t *testing.T) {
	for _, threads := range []int{1, 2, 4} {
		t.Run(fmt.Sprintf("%d threads", threads), func(t *testing.T) { explainStories(t, threads) })
	}
}

func explainStories(t *testing.T, threads int) {
	datadriven.Walk(t, filepath.Join("testdata", "explain"), func(t *testing.T, path string) {
		e := newExplainer(t, present.AsTable, 200)
		e.o.Threads = threads
		datadriven.RunTest(t, path, func(t *testing.T, d *datadriven.TestData) string {
			if d.Cmd != "ask" {
				d.Fatalf(t, "no such command: %s", d.Cmd)
			}
			return masked(e.run(t, d.Input))
		})
	})
}

// demoQueries are the questions of the demo script.
func demoQueries(t *testing.T) []string {
	t.Helper()
	text, err := os.ReadFile(filepath.Join("..", "testdata", "demo", "mapping.ncell"))
	if err != nil {
		t.Fatal(err)
	}
	code := regexp.MustCompile(`(?m)--.*$`).ReplaceAllString(string(text), "")
	var list []string
	for _, s := range strings.Split(code, ";") {
		if s = strings.TrimSpace(s); strings.HasPrefix(s, "SELECT") {
			list = append(list, s)
		}
	}
	if len(list) < 8 {
		t.Fatalf("only %d queries found in the demo", len(list))
	}
	return list
}

// setDemo makes the rest of what the demo's queries ask.
const setDemo = `
LET lower = 2; LET first_night = TIMESTAMP '2031-04-07 00:00:00'; LET last_night = TIMESTAMP '2031-04-13 00:00:00';
CREATE VIEW nights AS (SELECT id, FLOOR_TO(t, INTERVAL '1' DAY) AS night, AVG(temp) AS temp
  FROM readings WHERE EXTRACT(HOUR FROM t) < 5 GROUP BY id, FLOOR_TO(t, INTERVAL '1' DAY));
CREATE VIEW parting AS (SELECT k.a AS id,
    AVG(own.temp - other.temp) FILTER (WHERE own.night = :first_night) WEIGHTED BY k.area AS first_night,
    AVG(own.temp - other.temp) FILTER (WHERE own.night = :last_night) WEIGHTED BY k.area AS last_night
  FROM CONTACTS OF placed WITHIN air AS k JOIN nights own ON own.id = k.a
    JOIN nights other ON other.id = k.b AND other.night = own.night GROUP BY k.a);
CREATE OR REPLACE VIEW loggers AS (
  SELECT id, COUNT(*) AS got, MIN(temp) AS lowest, AVG(temp) AS mean, MAX(temp) AS highest,
    MKT(temp) AS mkt, SHARE(temp > :upper) AS over_limit, MAX(t) AS until FROM readings GROUP BY id);
`

// explainedStep is a line of the plan as --as csv gives it.
type explainedStep struct {
	step                  string
	depth                 int
	estimated, rows       int64
	measured              bool
	seconds, bytes, works string
}

func (e *explainer) steps(t *testing.T, query string) []explainedStep {
	t.Helper()
	text := e.run(t, query)
	records, err := csv.NewReader(strings.NewReader(text)).ReadAll()
	if err != nil || len(records) < 2 || strings.Join(records[0], " ") != "step depth rows_estimated rows seconds bytes geometry" {
		t.Fatalf("%s\n%v\n%s", query, err, text)
	}
	number := func(s string) int64 {
		n, err := strconv.ParseInt(s, 10, 64)
		if err != nil {
			t.Fatal(err)
		}
		return n
	}
	var list []explainedStep
	for _, r := range records[1:] {
		s := explainedStep{step: r[0], depth: int(number(r[1])), estimated: number(r[2]), seconds: r[4], bytes: r[5], works: r[6]}
		if r[3] != "" {
			s.measured, s.rows = true, number(r[3])
		}
		list = append(list, s)
	}
	return list
}

// To explain a query computes no cell and no contact of it, whatever it asks.
func TestExplainComputesNoGeometry(t *testing.T) {
	e := newExplainer(t, present.AsCSV, 0)
	e.run(t, setDemo)
	relations := 0
	for _, q := range demoQueries(t) {
		for _, s := range e.steps(t, "EXPLAIN "+q+";") {
			if s.measured || s.seconds != "" || s.bytes != "" {
				t.Fatalf("measured without being asked: %+v", s)
			}
			if s.works != "" {
				relations++
			}
		}
	}
	if stats := e.diagrams.Stats(); stats.Cells != 0 || stats.Contacts != 0 {
		t.Errorf("cells of %d sites and contacts of %d were computed", stats.Cells, stats.Contacts)
	}
	if relations < 8 {
		t.Errorf("only %d relations were explained", relations)
	}
	if said := e.notes.String(); said != "" {
		t.Errorf("an explained query says %s", said)
	}
}

// The rows of scans and of whole cells are foretold exactly, and every other
// step's within the bounds of what simple estimates do on the demo; what MEASURED
// counts is what the query gives.
func TestExplainMeasuredCounts(t *testing.T) {
	e := newExplainer(t, present.AsCSV, 0)
	e.run(t, setDemo)
	exact := 0
	for _, q := range demoQueries(t) {
		answer, err := csv.NewReader(strings.NewReader(e.run(t, q+";"))).ReadAll()
		if err != nil {
			t.Fatal(err)
		}
		steps := e.steps(t, "EXPLAIN MEASURED "+q+";")
		if got, want := steps[0].rows, int64(len(answer)-1); got != want {
			t.Errorf("%s\n%d rows measured, %d given", q, got, want)
		}
		for _, s := range steps {
			sure := strings.HasPrefix(s.step, "read ") || strings.HasPrefix(s.step, "cells ")
			if sure {
				exact++
			}
			switch {
			case !s.measured:
				t.Errorf("%s\nnot run: %s", q, s.step)
			case sure && s.rows != s.estimated:
				t.Errorf("%s\n%d rows of %d foretold: %s", q, s.rows, s.estimated, s.step)
			case s.rows > 20*s.estimated || s.estimated > 20*max(1, s.rows):
				t.Errorf("%s\n%d rows, %d thought: %s", q, s.rows, s.estimated, s.step)
			}
		}
	}
	if exact < 25 {
		t.Errorf("only %d scans and relations were met", exact)
	}
}

// Any number of workers counts the same rows, and a query that failed fails.
func TestExplainMeasuredWorkers(t *testing.T) {
	count := func(threads int) (rows []int64) {
		e := newExplainer(t, present.AsCSV, 0)
		e.o.Threads = threads
		// more rows than one chunk has
		q := `SELECT a.logger, COUNT(*) AS n FROM log a JOIN hall h ON h.id = a.logger JOIN hall o ON o.level = h.level
			WHERE a.temp > 4.5 GROUP BY a.logger ORDER BY n DESC LIMIT 7;`
		for _, s := range e.steps(t, "EXPLAIN MEASURED "+q) {
			rows = append(rows, s.rows)
			if seconds, err := strconv.ParseFloat(s.seconds, 64); err != nil || seconds < 0 || seconds > 60 {
				t.Errorf("%q seconds: %s", s.seconds, s.step)
			}
		}
		return rows
	}
	one, four := count(1), count(4)
	for i := range one {
		if one[i] != four[i] {
			t.Errorf("step %d has %d rows with one worker, %d with four", i, one[i], four[i])
		}
	}
	e := newExplainer(t, present.AsTable, 0)
	got := e.run(t, "EXPLAIN MEASURED SELECT 1 / (temp - temp) AS x FROM log;")
	if !strings.Contains(got, "row 1") || strings.Contains(got, "read table") {
		t.Errorf("a query that fails gives\n%s", got)
	}
}

// Long steps are broken at blanks, behind the numbers and their indentation.
func TestExplainWraps(t *testing.T) {
	e := newExplainer(t, present.AsTable, 80)
	text := e.run(t, "EXPLAIN SELECT id, ROUND(volume, 1) AS volume, ROUND(farthest, 2) AS farthest, ROUND(area, 2) AS surface FROM CELLS OF placed WITHIN air;")
	lines := strings.Split(strings.TrimRight(text, "\n"), "\n")
	if len(lines) < 8 {
		t.Errorf("nothing was broken:\n%s", text)
	}
	for _, l := range lines {
		if len([]rune(l)) > 80 {
			t.Errorf("%d characters: %s", len([]rune(l)), l)
		}
	}
	if words, want := strings.Join(strings.Fields(text), " "), "ROUND(farthest, 2) AS farthest, ROUND(area, 2) AS surface"; !strings.Contains(words, want) {
		t.Errorf("words are lost:\n%s", text)
	}
}
