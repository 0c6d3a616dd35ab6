package bind_test

import (
	"context"
	"errors"
	"math/rand/v2"
	"strings"
	"testing"
	"time"

	"nearcell/catalog"
	"nearcell/engine/exec"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
)

// heavy are queries over a table t0 of many rows and t1 of some, with what each of
// them keeps.
var heavy = []struct{ name, text, keeps string }{
	{"median", "SELECT MEDIAN(b) FROM t0", "the values that the aggregates keep"},
	{"quantile of groups", "SELECT c, QUANTILE(b, 0.9) FROM t0 GROUP BY c", "the groups"},
	{"weighted median", "SELECT MEDIAN(b) WEIGHTED BY n FROM t0", "the values that the aggregates keep"},
	{"distinct count", "SELECT COUNT(DISTINCT n) FROM t0", "the values that the aggregates keep"},
	{"distinct sum", "SELECT SUM(DISTINCT n) FROM t0", "the values that the aggregates keep"},
	{"many groups", "SELECT n, COUNT(*) FROM t0 GROUP BY n ORDER BY n LIMIT 1", "the groups"},
	{"distinct rows", "SELECT DISTINCT n, b FROM t0", "the different rows"},
	{"sort", "SELECT n, b FROM t0 ORDER BY b, n", "the rows to be put in order"},
	{"join", "SELECT t1.b FROM t1 LEFT JOIN t0 ON t0.n = t1.n", "right side of the join"},
	{"window", "SELECT n, SUM(b) OVER (PARTITION BY c ORDER BY n) FROM t0", "the rows of the windows"},
	{"intersect", "SELECT n, b FROM t0 INTERSECT SELECT n, b FROM t0", "the rows"},
	{"limit far away", "SELECT n, b FROM t0 LIMIT 150000", "the rows up to the LIMIT"},
	{"query in an expression", "SELECT COUNT(*) FROM t0 WHERE n IN (SELECT a.n + 1 FROM t0 a)", ""},
	{"nested loop", "SELECT COUNT(*) FROM t0 a JOIN t0 b ON a.n < b.b * 4 AND a.b > b.n", ""},
	{"large product", "SELECT MAX(a.b + b.b) FROM t0 a, t0 b", ""},
	{"correlated", "SELECT COUNT(*) FROM t0 a WHERE a.b > (SELECT AVG(x.b) FROM t0 x WHERE x.n < a.n)", ""},
}

func ask(t *testing.T, c *catalog.Catalog, ctx context.Context, text string, memory int64) error {
	n, err := plan.Optimise(bound(t, c, text))
	if err != nil {
		t.Fatal(err)
	}
	_, err = exec.Collect(ctx, &exec.Env{Memory: memory, Env: relation.Env{Notes: &note.Notes{}, Threads: 2}}, n)
	return err
}

// Whatever keeps more than the limit is refused with a word of what it is.
func TestMemoryIsRespected(t *testing.T) {
	c := tablesToJoin(t, rand.New(rand.NewPCG(12, 1)), []int{200_000, 100}, 100)
	for _, h := range heavy {
		if h.keeps == "" {
			continue
		}
		err := ask(t, c, context.Background(), h.text, 1<<20)
		var p *problem.Problem
		if !errors.As(err, &p) || p.Code != "memory" || !strings.Contains(p.Message, h.keeps) || !strings.Contains(p.Message, "1 MiB") {
			t.Errorf("%s: %v, want an error of memory about %q", h.name, err, h.keeps)
		}
		if err := ask(t, c, context.Background(), h.text, 1<<30); err != nil {
			t.Errorf("%s: %v with enough memory", h.name, err)
		}
	}
}

// A query that is cancelled while it runs returns soon, whatever it is about. The
// bound is generous: a machine that does other things, too, is no fault.
func TestCancelled(t *testing.T) {
	c := tablesToJoin(t, rand.New(rand.NewPCG(12, 2)), []int{200_000, 100}, 100)
	for _, h := range heavy {
		ctx, cancel := context.WithCancel(context.Background())
		done := make(chan error, 1)
		go func() { done <- ask(t, c, ctx, h.text, 0) }()
		select {
		case <-time.After(5 * time.Millisecond):
		case err := <-done: // faster than we are
			if err != nil {
				t.Errorf("%s: %v", h.name, err)
			}
			cancel()
			continue
		}
		cancel()
		start := time.Now()
		select {
		case err := <-done:
			t.Logf("%s: %v after the word", h.name, time.Since(start).Round(time.Millisecond))
			if err != nil && !errors.Is(err, context.Canceled) {
				t.Errorf("%s: %v, want that of the context", h.name, err)
			}
		case <-time.After(20 * time.Second):
			t.Fatalf("%s: it goes on", h.name)
		}
	}
}

// What a log's relations hold for one logger while they work on it is counted, too, and
// given up when it is done: 200,000 readings of one logger take 3.2 MB in their order and
// at least 4.8 MB (stamp, value and step of each) while they are looked at. As readings of
// 100 loggers they need little more than their order.
func TestMemoryOfALog(t *testing.T) {
	c := tablesToJoin(t, rand.New(rand.NewPCG(12, 3)), []int{200_000, 100}, 100)
	const log = "(SELECT %s AS logger, TIMESTAMP '2031-04-07 00:00:00' + n * INTERVAL '1' SECOND AS t, 1.0 * n AS temp FROM t0)"
	for _, query := range []string{
		"SELECT COUNT(*), SUM(temp) FROM SERIES OF LOG BY logger ON t EVERY INTERVAL '1' HOUR",
		"SELECT SUM(frozen) FROM AUDIT OF LOG BY logger ON t",
		"SELECT COUNT(*) FROM EPISODES OF LOG BY logger ON t FOR temp ABOVE 8",
	} {
		for one, logger := range map[bool]string{true: "1", false: "n % 100"} {
			text := strings.ReplaceAll(query, "LOG", strings.ReplaceAll(log, "%s", logger))
			err := ask(t, c, context.Background(), text, 12<<20)
			var p *problem.Problem
			if refused := errors.As(err, &p) && p.Code == "memory"; refused != one || !refused && err != nil {
				t.Errorf("%s: %v", text, err)
			}
		}
	}
}
