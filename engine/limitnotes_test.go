package engine

import (
	"strings"
	"testing"

	"nearcell/engine/present"
)

// A LIMIT that stops a relation early does not keep it from saying what it knows
// of the cells that it computed.
func TestLimitKeepsNotes(t *testing.T) {
	e := newExplainer(t, present.AsCSV, 0)
	for _, c := range []struct{ query, note string }{
		{"SELECT id, volume FROM CELLS OF hall UNCLIPPED LIMIT 1;", "1 of 1 computed cell of hall is unbounded"},
		{"SELECT id, volume FROM CELLS OF hall LIMIT 1;", "1 site of hall lies outside air"},
		{"SELECT a, area FROM CONTACTS OF hall LIMIT 2;", "1 site of hall lies outside air"},
		{"SELECT t, id, volume FROM CELLS OF readings FOR EACH t UNCLIPPED LIMIT 1;", "1 of 1 computed cell of readings is unbounded"},
	} {
		rows := strings.Count(e.run(t, c.query), "\n") - 1
		if want := int(c.query[len(c.query)-2] - '0'); rows != want {
			t.Errorf("%s\n%d rows", c.query, rows)
		}
		if said := e.notes.String(); !strings.Contains(said, c.note) {
			t.Errorf("%s\nsays %q, not %q", c.query, said, c.note)
		}
	}
}
