package engine

import (
	"strings"
	"testing"

	"nearcell/engine/present"
)

// What weighted answers rest on is told of windows, frame by frame, and of sites that
// are weighed in several partitions at once. The figures are (Σw)² / Σw² of the weights
// written here: 4 of four equal ones, 16/10 of 1 and 3, 36/12 of 1, 1, 1 and 3.
func TestWeightNotesOfWindowsAndPartitions(t *testing.T) {
	for _, c := range []struct{ query, note string }{
		{"SELECT AVG(x) WEIGHTED BY w OVER (PARTITION BY g) AS m FROM v;",
			"note: AVG(x) WEIGHTED BY w OVER (PARTITION BY g): over 2 frames n_eff 1.6 to 4.0 of 2 to 4 values, largest weight 25.0 to 75.0 %"},
		{"SELECT AVG(x) WEIGHTED BY w OVER (ORDER BY x ROWS BETWEEN 2 PRECEDING AND CURRENT ROW) AS m FROM v WHERE x < 4;",
			"over 3 frames n_eff 1.0 to 3.0 of 1 to 3 values, largest weight 33.3 to 100 %"},
		{"SELECT AVG(y) WEIGHTED BY w OVER () AS m FROM v;",
			"n_eff 3.0 of 4 values, largest weight 50.0 %"},
		{"SELECT AVG(y) WEIGHTED BY w OVER () AS m FROM v;",
			"in 1 of 1 frames weight was left out, its values are NULL: space nobody spoke for, 25.0 % of the frame's"},
		{"SELECT AVG(temp) WEIGHTED BY volume AS m FROM CELLS OF twice FOR EACH t WITHIN box;",
			"n_eff 4.0 of 4 values (2.0 in each of 2 partitions on average: what one site reads in several is not independent), largest weight 25.0 %"},
		{"SELECT t, AVG(temp) WEIGHTED BY volume AS m FROM CELLS OF twice FOR EACH t WITHIN box GROUP BY t;",
			"over 2 groups n_eff 2.0 of 2 values, largest weight 50.0 %"},
	} {
		out := printed(t, 2, present.AsCSV, `
CREATE TABLE v AS (SELECT * FROM (VALUES ('a', 1, 1, 1), ('a', 2, 1, NULL), ('a', 3, 1, 3), ('a', 4, 1, NULL), ('b', 5, 1, 5), ('b', 6, 3, 6)) AS r(g, x, w, y));
CREATE SOLID box AS BOX (0, 0, 0) TO (2, 1, 1);
CREATE TABLE twice AS (SELECT * FROM (VALUES ('A', 0.5, 0.5, 0.5, 1, 4.0), ('B', 1.5, 0.5, 0.5, 1, 5.0), ('A', 0.5, 0.5, 0.5, 2, 6.0), ('B', 1.5, 0.5, 0.5, 2, 7.0)) AS r(id, x, y, z, t, temp));
`+c.query)
		if !strings.Contains(out, c.note) {
			t.Errorf("%s prints\n%s\nwithout %s", c.query, out, c.note)
		}
	}
}
