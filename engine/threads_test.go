package engine

import (
	"bytes"
	"context"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"github.com/cockroachdb/datadriven"

	"nearcell/catalog"
	"nearcell/engine/present"
)

// elapsed is what differs from run to run.
var elapsed = regexp.MustCompile(`[0-9]+\.[0-9]{3} s\b`)

// printed is all that a script prints, results and notes, in the folder of the demo.
func printed(t *testing.T, threads int, format present.Format, script string) string {
	t.Helper()
	var out, notes bytes.Buffer
	s := New(catalog.Memory(), Options{Out: &out, Err: &notes, Format: format, Threads: threads, KeepGoing: true})
	_ = s.Run(context.Background(), "script", script, filepath.Join("..", "testdata", "demo")) // what failed is printed
	return out.String() + "\n" + elapsed.ReplaceAllString(notes.String(), "TIME")
}

// scripts are the demo, the questions of the explained plans and further ones over
// its tables; SAVE, which writes files, is left out.
func scripts(t *testing.T) map[string]string {
	t.Helper()
	demo, err := os.ReadFile(filepath.Join("..", "testdata", "demo", "mapping.ncell"))
	if err != nil {
		t.Fatal(err)
	}
	list := map[string]string{"demo": regexp.MustCompile(`(?m)^SAVE[^;]*;`).ReplaceAllString(string(demo), "")}
	explained := demoSetting
	datadriven.Walk(t, filepath.Join("testdata", "explain"), func(t *testing.T, path string) {
		datadriven.RunTest(t, path, func(_ *testing.T, d *datadriven.TestData) string {
			q := strings.TrimSpace(d.Input)
			q = strings.TrimPrefix(strings.TrimPrefix(q, "EXPLAIN "), "MEASURED ")
			if strings.Contains(q, "CROSS JOIN") || strings.Contains(q, "log a, log b") {
				return d.Expected // millions of rows say no more
			}
			explained += q + "\n"
			return d.Expected
		})
	})
	list["explained"] = explained
	list["further"] = demoSetting + `
SELECT logger, COUNT(*), AVG(temp), MEDIAN(temp), STDDEV_SAMP(temp), QUANTILE(temp, 0.9), SHARE(temp > 5), COUNT(DISTINCT temp) FROM log GROUP BY logger;
SELECT FLOOR_TO(t, INTERVAL '1' HOUR) AS h, AVG(temp), SUM(temp), MIN(temp), MAX(temp), VAR_POP(temp) FROM log GROUP BY FLOOR_TO(t, INTERVAL '1' HOUR) ORDER BY h;
SELECT DISTINCT temp FROM log ORDER BY temp DESC LIMIT 7 OFFSET 2;
SELECT logger, t, temp FROM log ORDER BY temp, t, logger LIMIT 12;
SELECT t, AVG(temp) WEIGHTED BY x FROM readings GROUP BY t ORDER BY t LIMIT 30;
SELECT l.logger, MAX(l.temp - m.mean) FROM log l JOIN (SELECT t, AVG(temp) AS mean FROM log GROUP BY t) m ON m.t = l.t GROUP BY l.logger;
SELECT id, (SELECT MAX(temp) FROM log l WHERE l.logger = h.id AND l.t > (SELECT MIN(t) FROM log)) AS warmest FROM hall h ORDER BY id;
SELECT logger, MAX(d) FROM (SELECT logger, temp - LAG(temp) OVER (PARTITION BY logger ORDER BY t) AS d FROM log) s GROUP BY logger;
SELECT t, AVG(temp) WEIGHTED BY volume, SHARE(temp > 8) WEIGHTED BY volume, MKT(temp) WEIGHTED BY volume FROM CELLS OF readings FOR EACH t WITHIN air GROUP BY t;
SELECT a, b, area FROM CONTACTS OF placed WITHIN air ORDER BY area DESC LIMIT 9;
SELECT id, 1 / (temp - temp) FROM readings;
`
	rooms, err := os.ReadFile(filepath.Join("..", "testdata", "demo", "room.ncell"))
	if err != nil {
		t.Fatal(err)
	}
	list["rooms"] = string(rooms) + `
CREATE SOLID west AS drawn MINUS BOX (18, 0, 0) TO (30, 18, 7.5);
CREATE SOLID east AS BOX (18, 0, 0) TO (30, 12, 7.5);
CREATE SOLID low AS BOX (0, 0, 0) TO (30, 18, 2) MINUS racks;
SELECT * FROM CELLS OF measured WITHIN aisles;
SELECT id, volume, hidden FROM CELLS OF measured WITHIN drawn;
SELECT zone, id, volume, wall_area, farthest FROM CELLS OF measured WITHIN (west, east) STRETCHED (1, 1, 3);
SELECT zone, a, b, area FROM CONTACTS OF measured WITHIN (west, east);
SELECT part, id, volume, area, cx, farthest FROM CELLS OF measured WITHIN drawn MEASURED IN (low, racks);
SELECT part, x, y, z, radius FROM GAPS OF measured WITHIN rooms MEASURED IN (low, racks);
SELECT id, area FROM SECTION OF measured WITHIN rooms AT z = 1.1;
SELECT x, y, z, radius FROM GAPS OF measured WITHIN aisles;
`
	return list
}

// One, two and four threads print the same bytes: tables, notes and errors, of every
// query of the demo and of the stories.
func TestThreadsPrintTheSame(t *testing.T) {
	for name, script := range scripts(t) {
		for _, format := range []present.Format{present.AsTable, present.AsCSV} {
			one := printed(t, 1, format, script)
			if len(one) < 2000 || !strings.Contains(one, "rows, TIME") {
				t.Fatalf("%s prints next to nothing: %q", name, one)
			}
			for _, threads := range []int{2, 4} {
				if many := printed(t, threads, format, script); many != one {
					t.Errorf("%s with %d threads: %s", name, threads, firstDifference(one, many))
				}
			}
		}
	}
}

func firstDifference(a, b string) string {
	x, y := strings.Split(a, "\n"), strings.Split(b, "\n")
	for i := range min(len(x), len(y)) {
		if x[i] != y[i] {
			return "one thread prints\n" + x[i] + "\nmany print\n" + y[i]
		}
	}
	return "one is longer than the other"
}
