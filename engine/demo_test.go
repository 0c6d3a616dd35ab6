package engine_test

import (
	"context"
	"math"
	"os"
	"path/filepath"
	"testing"
)

const demo = "../testdata/demo"

// demoAsker is a session in which the whole demo script has run, in a copy of
// its folder, since it saves a file there.
func demoAsker(t *testing.T) *asker {
	t.Helper()
	folder := t.TempDir()
	if err := os.CopyFS(folder, os.DirFS(demo)); err != nil {
		t.Fatal(err)
	}
	a := newAsker(t, 2)
	for turn := range 2 { // an engineer runs it again
		if err := a.session.RunFile(context.Background(), filepath.Join(folder, "mapping.ncell")); err != nil {
			t.Fatalf("turn %d: %v\n%s", turn, err, a.notes.String())
		}
	}
	return a
}

// TestDemoHall holds the L-shaped hall, its plant room a hole in the corner, against
// cells and contacts that another program computed in exact rational numbers.
func TestDemoHall(t *testing.T) {
	a := demoAsker(t)
	a.text(`CREATE TABLE want FROM 'hall_cells.csv'; CREATE TABLE pairs FROM 'hall_contacts.csv';`)
	r := a.records(`SELECT COUNT(*), MAX(ABS(c.volume - w.volume)), MAX(ABS(c.wall_area - w.wall_area)),
		MAX(ABS(c.area - w.area)), SUM(c.neighbours - w.contacts), SUM(c.volume), SUM(c.wall_area)
		FROM CELLS OF placed WITHIN air AS c JOIN want w ON w.id = c.id;`)[0]
	if r[0] != "54" || real(t, r[1]) > 1e-9 || real(t, r[2]) > 2e-6 || real(t, r[3]) > 2e-6 || r[4] != "0" {
		t.Errorf("cells, largest differences of volume, wall area, area, contacts: %v", r)
	}
	if math.Abs(real(t, r[5])-3420) > 3420e-12 || math.Abs(real(t, r[6])-1632) > 1e-5 {
		t.Errorf("the hall has %s m³ and %s m² of walls, wanted 3420 and 1632", r[5], r[6])
	}
	r = a.records(`SELECT COUNT(*), COUNT(p.area), MAX(ABS(k.area - p.area)) FROM CONTACTS OF placed WITHIN air AS k
		LEFT JOIN pairs p ON p.a = k.a AND p.b = k.b WHERE k.a < k.b;`)[0]
	if r[0] != "240" || r[1] != "240" || real(t, r[2]) > 2e-6 {
		t.Errorf("contacts, of them known, largest difference of area: %v", r)
	}
	if got, want := a.number(`SELECT MAX(volume) FROM CELLS OF hall;`), answers(t, "hall_answers.csv")["keyed_in_largest"]; math.Abs(got-want.value) > 1e-9 {
		t.Errorf("largest cell with L17 outside: %v, wanted %v", got, want.value)
	}
}

// TestDemoWeek holds the week's numbers against the same outside program's.
func TestDemoWeek(t *testing.T) {
	a := demoAsker(t)
	want := answers(t, "hall_answers.csv")
	check := func(name string, got float64) {
		t.Helper()
		w, known := want[name]
		if !known {
			t.Errorf("no reference value %s", name)
		} else if math.Abs(got-w.value) > math.Max(w.lastDigit, 1e-12*math.Abs(w.value)) {
			t.Errorf("%s is %.12g, wanted %.12g", name, got, w.value)
		}
	}
	for prefix, omitting := range map[string]string{"week_": `OMITTING ('L23') BECAUSE 'drifts'`, "week_with_L23_": ""} {
		r := a.records(`SELECT COUNT(*), AVG(temp), AVG(temp) WEIGHTED BY volume, SHARE(temp > 8), SHARE(temp > 8) WEIGHTED BY volume,
			SHARE(temp < 2) WEIGHTED BY volume, SUM(volume * 0.25) FILTER (WHERE temp > 8)
			FROM CELLS OF readings FOR EACH t WITHIN air ` + omitting + `;`)[0]
		for i, name := range []string{"rows", "plain_mean", "mean", "plain_over", "over", "under", "m3h_over"} {
			check(prefix+name, real(t, r[i]))
		}
	}
	check("drift_L23", a.number(`SELECT last_night - first_night FROM parting WHERE id = 'L23';`))

	a.text(`CREATE TABLE course FROM 'hall_course.csv';`)
	r := a.records(`WITH ours AS (SELECT FLOOR_TO(t, INTERVAL '6' HOUR) AS since, COUNT(DISTINCT id) AS loggers,
			AVG(temp) WEIGHTED BY volume AS mean, MAX(temp) AS highest, SHARE(temp > 8) WEIGHTED BY volume AS over_limit,
			COALESCE(SUM(volume * 0.25) FILTER (WHERE temp > 8), 0) AS m3h_over
			FROM CELLS OF readings FOR EACH t WITHIN air OMITTING ('L23') BECAUSE 'drifts' GROUP BY FLOOR_TO(t, INTERVAL '6' HOUR))
		SELECT COUNT(*), MAX(ABS(o.loggers - w.loggers)), MAX(ABS(o.mean - w.mean)), MAX(ABS(o.highest - w.highest)),
			MAX(ABS(o.over_limit - w.over_limit)), MAX(ABS(o.m3h_over - w.m3h_over))
		FROM ours o JOIN course w ON w.since = o.since;`)[0]
	if r[0] != "28" || r[1] != "0" || real(t, r[2]) > 1e-9 || real(t, r[3]) > 0 || real(t, r[4]) > 1e-9 || real(t, r[5]) > 1e-6 {
		t.Errorf("steps, largest differences of loggers, mean, highest, over, m³h: %v", r)
	}
}
