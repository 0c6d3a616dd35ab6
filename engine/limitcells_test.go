package engine

import (
	"fmt"
	"strings"
	"testing"

	"nearcell/engine/present"
)

// The first rows of CELLS are the first of all rows, one by one and for each instant,
// with and without a condition, and say so in the same numbers.
func TestLimitOverCells(t *testing.T) {
	e := newExplainer(t, present.AsCSV, 200)
	for _, from := range []string{"CELLS OF placed WITHIN air", "CELLS OF placed WITHIN air WHERE level = 'floor'",
		"CELLS OF (SELECT * FROM readings WHERE t < TIMESTAMP '2031-04-07 02:00:00') FOR EACH t WITHIN air"} {
		all := strings.Split(strings.TrimSpace(e.run(t, "SELECT id, volume, faces FROM "+from+";")), "\n")
		if len(all) < 10 {
			t.Fatalf("%s: %v", from, all)
		}
		for _, k := range []int{1, 3, len(all) / 2, 10 * len(all)} {
			got := e.run(t, fmt.Sprintf("SELECT id, volume, faces FROM %s LIMIT %d OFFSET 1;", from, k))
			want := strings.Join(append([]string{all[0]}, all[2:min(2+k, len(all))]...), "\n")
			if strings.TrimSpace(got) != want {
				t.Errorf("%s, first %d:\n%s\nwant\n%s", from, k, got, want)
			}
		}
	}
}
