package engine_test

import (
	"context"
	"math"
	"os"
	"path/filepath"
	"testing"
)

// TestDemoRoom: the hall as a mesh, as a plan with a hole and as a plan MINUS a box are one
// room: every measure of every cell, every contact and every gap agrees.
func TestDemoRoom(t *testing.T) {
	folder := t.TempDir()
	if err := os.CopyFS(folder, os.DirFS(demo)); err != nil {
		t.Fatal(err)
	}
	a := newAsker(t, 2)
	if err := a.session.RunFile(context.Background(), filepath.Join(folder, "room.ncell")); err != nil {
		t.Fatalf("%v\n%s", err, a.notes.String())
	}
	a.text(`CREATE SOLID planned AS PRISM ((0, 0), (30, 0), (30, 12), (18, 12), (18, 18), (0, 18)) HOLE ((0, 0), (4, 0), (4, 3), (0, 3)) FROM 0 TO 7.5;`)
	for _, form := range []string{"drawn", "built"} {
		r := a.records(`SELECT COUNT(*), MAX(ABS(c.volume - w.volume)), MAX(ABS(c.wall_area - w.wall_area)), MAX(ABS(c.area - w.area)),
			MAX(ABS(c.farthest - w.farthest)), SUM(ABS(c.faces - w.faces)), SUM(ABS(c.neighbours - w.neighbours)), SUM(ABS(c.edges - w.edges)), COUNT(c.edges) - COUNT(w.edges),
			MAX(ABS(c.cx - w.cx) + ABS(c.cy - w.cy) + ABS(c.cz - w.cz)), SUM(c.volume), SUM(c.wall_area)
			FROM CELLS OF measured WITHIN ` + form + ` AS c JOIN (SELECT * FROM CELLS OF measured WITHIN planned) AS w ON w.id = c.id;`)[0]
		for i, tol := range []float64{0, 1e-10, 1e-7, 1e-7, 1e-9, 0, 0, 0, 0, 1e-10} {
			if i > 0 && !(math.Abs(real(t, r[i])) <= tol) {
				t.Errorf("%s: column %d is %s", form, i, r[i])
			}
		}
		if r[0] != "53" || math.Abs(real(t, r[10])-3420) > 1e-8 || math.Abs(real(t, r[11])-1632) > 1e-5 {
			t.Errorf("%s: %v", form, r)
		}
		r = a.records(`SELECT COUNT(*), COUNT(w.area), MAX(ABS(k.area - w.area)), MAX(ABS(k.mx - w.mx) + ABS(k.my - w.my) + ABS(k.mz - w.mz)) FROM CONTACTS OF measured WITHIN ` + form + ` AS k
			LEFT JOIN (SELECT * FROM CONTACTS OF measured WITHIN planned) AS w ON w.a = k.a AND w.b = k.b;`)[0]
		if r[0] != r[1] || real(t, r[2]) > 1e-7 || real(t, r[3]) > 1e-5 {
			t.Errorf("%s: contacts, of them known, largest differences: %v", form, r)
		}
		r = a.records(`SELECT COUNT(*), COUNT(w.radius) FROM GAPS OF measured WITHIN ` + form + ` AS g
			LEFT JOIN (SELECT * FROM GAPS OF measured WITHIN planned) AS w
			ON ABS(w.x - g.x) + ABS(w.y - g.y) + ABS(w.z - g.z) < 0.00000001 AND w.place = g.place AND ABS(w.radius - g.radius) < 0.00000001;`)[0]
		if r[0] != r[1] || real(t, r[0]) < 20 {
			t.Errorf("%s: gaps, of them known: %v", form, r)
		}
	}
	// The aisles and the racks are the rooms; so are their cells.
	if got := a.number(`SELECT SUM(volume) FROM CELLS OF measured WITHIN aisles;`); math.Abs(got-3182.4) > 1e-8 {
		t.Errorf("the aisles have %v m³", got)
	}
}
