package bind_test

import (
	"context"
	"errors"
	"strings"
	"testing"
	"time"

	"nearcell/catalog"
	"nearcell/engine/bind"
	"nearcell/engine/exec"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

const thousand = `(WITH d (n) AS (VALUES (0), (1), (2), (3), (4), (5), (6), (7), (8), (9))
	SELECT a.n + 10 * b.n + 100 * c.n AS n FROM d a, d b, d c)`

// A query that is computed for very many rows ends soon after the statement is
// cancelled.
func TestQueriesAreCancelled(t *testing.T) {
	text := "SELECT SUM((SELECT COUNT(*) FROM " + thousand + " y, " + thousand + " z WHERE y.n * z.n < x.n)) FROM " + thousand + " x"
	q, err := lang.ParseQuery(text)
	if err != nil {
		t.Fatal(err)
	}
	n, err := bind.Query(&bind.Env{Catalog: catalog.Memory(), Source: &problem.Source{Name: "query", Text: text}, Notes: &note.Notes{}}, q)
	if err == nil {
		n, err = plan.Optimise(n)
	}
	if err != nil {
		t.Fatal(problem.Render(err))
	}
	ctx, cancel := context.WithTimeout(context.Background(), 50*time.Millisecond)
	defer cancel()
	start := time.Now()
	_, err = exec.Collect(ctx, &exec.Env{Env: relation.Env{Notes: &note.Notes{}, Threads: 2}}, n)
	if !errors.Is(err, context.DeadlineExceeded) {
		t.Errorf("a cancelled query ends with %v", err)
	}
	if took := time.Since(start); took > 2*time.Second {
		t.Errorf("it took %v to end", took)
	}
}

// A value that is several is an error that names the row; what a row never asks
// for does not fail.
func TestQueriesFail(t *testing.T) {
	p := start(t)
	for _, c := range []struct{ query, want string }{
		{"SELECT id, (SELECT column1 FROM (VALUES (1), (2), (3)) v WHERE column1 < h.n) FROM (SELECT column1 AS id, column2 AS n FROM (VALUES ('L1', 1), ('L2', 2), ('L3', 3)) v) h",
			"more than one row in the row with id 'L3'"},
		{"SELECT (SELECT 1 / (h.n - 1) FROM (VALUES (1)) v) FROM (VALUES (1), (2)) h (n)", "has no value"},
	} {
		if _, err := p.run(c.query); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%s\nfails with %v, want %s", c.query, err, c.want)
		}
	}
	for _, query := range []string{
		"SELECT CASE WHEN n > 1 THEN (SELECT 1 / (h.n - 1)) END FROM (VALUES (1), (2)) h (n)",
		"SELECT n FROM (VALUES (0), (1)) h (n) WHERE n > 5 AND EXISTS (SELECT * FROM (VALUES (1)) v WHERE column1 = 1 / h.n)",
		"SELECT n FROM (VALUES (0), (1)) h (n) WHERE EXISTS (SELECT * FROM (SELECT 1 AS k WHERE FALSE) v WHERE k = 1 / h.n)",
	} {
		if _, err := p.run(query); err != nil {
			t.Errorf("%s\nfails with %s", query, problem.Render(err))
		}
	}
}
