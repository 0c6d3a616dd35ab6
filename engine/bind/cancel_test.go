package bind

import (
	"context"
	"errors"
	"math/rand/v2"
	"testing"
	"time"

	"nearcell/catalog"
	"nearcell/catalog/column"
	"nearcell/engine/exec"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// long are queries whose longest stretches of work are no scans: merges of sorts and
// groups, final aggregates, windows, tables of joins.
var long = []struct{ name, query string }{
	{"sort", "SELECT id, temp, t FROM log ORDER BY temp, t DESC"},
	{"top of many", "SELECT id, temp, t FROM log ORDER BY temp, t LIMIT 1000000"},
	{"groups", "SELECT id, AVG(temp), MAX(t) FROM log GROUP BY id"},
	{"weighted median", "SELECT MEDIAN(temp) WEIGHTED BY w, MEDIAN(temp) FROM log"},
	{"distinct", "SELECT DISTINCT id, temp FROM log"},
	{"distinct count", "SELECT COUNT(DISTINCT id), SUM(DISTINCT w) FROM log"},
	{"window of all", "SELECT SUM(temp) OVER (ORDER BY t RANGE BETWEEN INTERVAL '1' SECOND PRECEDING AND CURRENT ROW) AS s, RANK() OVER (ORDER BY temp) AS r FROM log"},
	{"windows by site", "SELECT RANK() OVER (PARTITION BY site ORDER BY temp) AS r FROM log"},
	{"join", "SELECT COUNT(*), SUM(b.temp) FROM log a JOIN log b ON a.id = b.other"},
	{"difference", "SELECT id, temp FROM log EXCEPT SELECT other, temp FROM log"},
	{"member", "SELECT COUNT(*) FROM log WHERE id NOT IN (SELECT other FROM log WHERE w > 1)"},
}

// longLog is rows with numbers of their own in any order (id, other), an instant, one of
// 500 sites, a temperature with gaps and a weight.
func longLog(t testing.TB, rows int) *catalog.Catalog {
	rng := rand.New(rand.NewPCG(9, 9))
	log := &column.Table{N: rows}
	add := func(name string, ty column.Type, set func(v *column.Vector)) {
		v := column.New(ty, nil, rows)
		set(&v)
		log.Schema, log.Cols = append(log.Schema, column.Field{Name: name, Type: ty}), append(log.Cols, v)
	}
	number := func(of func(i int) int64) func(*column.Vector) {
		return func(v *column.Vector) {
			for i := range v.I {
				v.I[i] = of(i)
			}
		}
	}
	spread := uint64(rows)*7 + 1
	add("id", column.Integer, number(func(i int) int64 { return int64(uint64(i) * 2654435761 % spread) }))
	add("other", column.Integer, number(func(i int) int64 { return int64(uint64(i+1) * 2654435761 % spread) }))
	add("t", column.Timestamp, number(func(int) int64 { return rng.Int64N(int64(rows) * 1000) }))
	add("site", column.Integer, number(func(int) int64 { return rng.Int64N(500) }))
	add("temp", column.Real, func(v *column.Vector) {
		for i := range v.F {
			if v.F[i] = rng.Float64(); rng.IntN(100) == 0 {
				v.SetNull(i)
			}
		}
	})
	add("w", column.Real, func(v *column.Vector) {
		for i := range v.F {
			v.F[i] = 0.5 + rng.Float64()
		}
	})
	c := catalog.Memory()
	if err := c.Put(catalog.Object{Kind: catalog.Table, Key: "log", Name: "log", Table: log}, false); err != nil {
		t.Fatal(err)
	}
	return c
}

// cancelled runs a query, then again so that it is cancelled after parts of the time that
// it took, and gives the longest time that it went on.
func cancelled(t testing.TB, c *catalog.Catalog, text string, parts int) (whole, worst time.Duration) {
	q, err := lang.ParseQuery(text)
	if err != nil {
		t.Fatal(err)
	}
	n, err := Query(&Env{Catalog: c, Source: &problem.Source{Name: "query", Text: text}}, q)
	if err == nil {
		n, err = plan.Optimise(n)
	}
	if err != nil {
		t.Fatal(problem.Render(err))
	}
	run := func(ctx context.Context) error {
		_, err := exec.Collect(ctx, &exec.Env{Env: relation.Env{Threads: 2}}, n)
		return err
	}
	begin := time.Now()
	if err := run(context.Background()); err != nil {
		t.Fatal(problem.Render(err))
	}
	whole = time.Since(begin)
	for k := 1; k <= parts; k++ {
		ctx, cancel := context.WithCancel(context.Background())
		var at time.Time
		timer := time.AfterFunc(whole*time.Duration(k)/time.Duration(parts+1), func() {
			at = time.Now()
			cancel()
		})
		begun := time.Now()
		err := run(ctx)
		ended := time.Now()
		if timer.Stop() || err == nil { // it was quicker than the first time, which found its memory new
			cancel()
			if ended.Sub(begun) < whole {
				whole = ended.Sub(begun)
				k--
			}
			continue
		}
		<-ctx.Done()
		if !errors.Is(err, context.Canceled) {
			t.Fatalf("cancelled, it says %v", err)
		}
		worst = max(worst, ended.Sub(at))
	}
	return whole, worst
}

// A query that is cancelled ends soon, whatever it is at. The bound is one for machines
// that are busy with other things; BenchmarkCancelled says how long it takes.
func TestCancelledAnywhere(t *testing.T) {
	c := longLog(t, 1<<18)
	for _, q := range long {
		if whole, worst := cancelled(t, c, q.query, 2); worst > time.Second {
			t.Errorf("%s, of %v: cancelled, it went on for %v", q.name, whole, worst)
		}
	}
}

// How long queries of ten million rows go on after they are cancelled: the longest of
// seven times, in ms.
func BenchmarkCancelled(b *testing.B) {
	c := longLog(b, 10_000_000)
	for _, q := range long {
		b.Run(q.name, func(b *testing.B) {
			for b.Loop() {
				whole, worst := cancelled(b, c, q.query, 7)
				b.ReportMetric(worst.Seconds()*1e3, "ms-worst")
				b.ReportMetric(whole.Seconds()*1e3, "ms-whole")
			}
		})
	}
}
