package engine_test

import (
	"strings"
	"testing"
)

// TestUncertainty: two cells of 3 and 1 m³ of 4: own errors of 0.1 shrink to
// 0.1·√10/4 = 0.0791, and with 0.2 shared that makes √(0.0791² + 0.2²) = 0.215.
func TestUncertainty(t *testing.T) {
	a := newAsker(t, 2)
	a.text(`CREATE SOLID room AS BOX (0,0,0) TO (4,1,1);
		CREATE CAMPAIGN c AS (SELECT * FROM (VALUES ('A', 2.5, 0.5, 0.5, 5.0), ('B', 3.5, 0.5, 0.5, 6.0)) AS v (id, x, y, z, temp)) WITHIN room;`)
	const part = "the instruments' part of its standard uncertainty is "
	for query, says := range map[string]string{
		"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp 0.10 EACH, 0.20 COMMON);":                                                                                  part + "0.215: 0.0791 of each one's own errors, 0.2 shared by all",
		"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp 0.06 EACH, 0.08 EACH);":                                                                                    part + "0.0791: 0.0791 of each one's own errors, 0 shared by all",
		"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp 0.3 COMMON) WHERE id = 'A';":                                                                               part + "0.3:",
		"SELECT AVG(c.temp) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp 0.1 EACH) AS c CROSS JOIN c d;":                                                                          "an instrument is in it more than once",
		"SELECT AVG(temp) WEIGHTED BY volume FROM CELLS OF (SELECT *, 1 AS t FROM c UNION ALL SELECT *, 2 AS t FROM c) FOR EACH t WITHIN room UNCERTAINTY (temp 0.1 EACH);":               "an instrument is in it more than once",
		"SELECT t, AVG(temp) WEIGHTED BY volume FROM CELLS OF (SELECT *, 1 AS t FROM c UNION ALL SELECT *, 2 AS t FROM c) FOR EACH t WITHIN room UNCERTAINTY (temp 0.1 EACH) GROUP BY t;": part + "0.0791",
	} {
		a.text(query)
		if !strings.Contains(a.notes.String(), says) {
			t.Errorf("%s\nsays\n%s\nand not\n%s", query, a.notes.String(), says)
		}
	}
	for _, query := range []string{ // another column, no weight: nothing to be said
		"SELECT AVG(x) WEIGHTED BY volume FROM CELLS OF c UNCERTAINTY (temp 0.1 EACH);",
		"SELECT AVG(temp) FROM CELLS OF c UNCERTAINTY (temp 0.1 EACH);",
	} {
		if a.text(query); strings.Contains(a.notes.String(), "instruments") {
			t.Errorf("%s\nsays\n%s", query, a.notes.String())
		}
	}
}
