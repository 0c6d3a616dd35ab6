package engine_test

import (
	"strings"
	"testing"
)

// TestCommonPartsKeepTheWarning: space that a join counts twice is told of behind
// a WITH that is used twice, too, and only where it happened.
func TestCommonPartsKeepTheWarning(t *testing.T) {
	a := newAsker(t, 2)
	a.text(twenty)
	for query, warned := range map[string]bool{
		`WITH k AS (SELECT id, volume FROM CELLS OF c) SELECT SUM(a.volume) FROM k a CROSS JOIN k b;`:                true,
		`WITH k AS (SELECT id, volume FROM CELLS OF c) SELECT SUM(a.volume) FROM k a JOIN k b ON a.id = b.id;`:       false,
		`WITH k AS (SELECT id, volume FROM CELLS OF c) SELECT SUM(a.volume), (SELECT SUM(volume) FROM k) FROM k a;`:  false,
		`WITH k AS (SELECT volume FROM CELLS OF c) SELECT SUM(a.volume), (SELECT SUM(volume) FROM k) AS s FROM k a;`: false,
	} {
		a.text(query)
		if got := strings.Contains(a.notes.String(), "counts more than once"); got != warned {
			t.Errorf("%s\nwarned: %v\n%s", query, got, a.notes.String())
		}
	}
}
