package exec

import (
	"context"
	"math/rand/v2"
	"testing"

	"nearcell/catalog/column"
	"nearcell/engine/plan"
	"nearcell/engine/plan/plantest"
)

// stopped are the nodes whose rows a LIMIT above them may cut off.
func stopped(n plan.Node, cut bool, into map[plan.Node]bool) {
	into[n] = cut
	l, limit := n.(*plan.Limit)
	for _, in := range n.Inputs() {
		stopped(in, cut || limit && l.Count >= 0, into)
	}
}

// Meters change no row, and count for each step the rows that it gives when it is
// run alone, whatever the chunks and however many workers.
func TestMeasuredRows(t *testing.T) {
	ctx := context.Background()
	met := 0
	for seed := range uint64(160) {
		rng := rand.New(rand.NewPCG(seed, 31))
		n := plan.Apart(plantest.Plan(rng, 4, 150))
		if better, err := plan.Optimise(n); err == nil && seed%2 == 0 {
			n = plan.Apart(better)
		}
		plain, plainErr := run(t, testEnv(64, 64), n)
		env := testEnv(64, 64)
		env.Threads = int(1 + seed%3)
		env.Measured = NewMeasured(n)
		metered, err := run(t, env, n)
		if (err == nil) != (plainErr == nil) {
			t.Fatalf("seed %d: %v with meters, %v without", seed, err, plainErr)
		}
		if err != nil {
			continue
		}
		if err := sameRows(n, plain, metered); err != nil {
			t.Fatalf("seed %d: %v", seed, err)
		}
		cut := map[plan.Node]bool{}
		stopped(n, false, cut)
		for node, may := range cut {
			c := env.Measured.Of(node)
			alone, err := Collect(ctx, testEnv(64, 64), node)
			switch {
			case c.Time < 0 || c.Bytes < 0:
				t.Fatalf("seed %d: %v, %d bytes: %s", seed, c.Time, c.Bytes, plan.Line(node))
			case err != nil && may:
				continue // a row that was not reached
			case err != nil:
				t.Fatal(err)
			case may && c.Rows <= int64(alone.N):
				continue
			case c.Rows != int64(alone.N) || !may && !c.Ran:
				t.Fatalf("seed %d: counted %d rows, gives %d: %s in\n%s", seed, c.Rows, alone.N, plan.Line(node), plan.Format(n))
			}
			met++
		}
	}
	if met < 400 {
		t.Errorf("only %d steps were compared", met)
	}
}

// An estimate that says that it is exact is, and none is below nothing.
func TestExactEstimates(t *testing.T) {
	ctx := context.Background()
	exact := 0
	for seed := range uint64(300) {
		rng := rand.New(rand.NewPCG(seed, 32))
		n := plantest.Plan(rng, 1+int(seed%4), 60)
		if seed%2 == 0 {
			if better, err := plan.Optimise(n); err == nil {
				n = better
			}
		}
		estimates, err := (&plan.Estimator{}).Estimates(n)
		if err != nil {
			t.Fatal(err)
		}
		for node, e := range estimates {
			if !(e.Rows >= 0) {
				t.Fatalf("seed %d: %v rows: %s", seed, e.Rows, plan.Line(node))
			}
			if !e.Exact {
				continue
			}
			got, err := Collect(ctx, testEnv(0, 0), node)
			if err != nil {
				continue
			}
			exact++
			if float64(got.N) != e.Rows {
				t.Fatalf("seed %d: %v rows foretold, %d given: %s in\n%s", seed, e.Rows, got.N, plan.Line(node), plan.Format(node))
			}
		}
	}
	if exact < 250 {
		t.Errorf("only %d exact estimates were met", exact)
	}
}

// Without anybody who asks there is no meter in the way.
func TestUnmeasured(t *testing.T) {
	n := where(sites(), plantest.Column(sites().Fields, siteTemp))
	r := &runner{env: testEnv(0, 0)}
	p, err := r.open(context.Background(), sites())
	if err != nil {
		t.Fatal(err)
	}
	if _, plain := p.source.(*tableSource); !plain {
		t.Errorf("the source is a %T", p.source)
	}
	if p, err = r.open(context.Background(), n); err != nil {
		t.Fatal(err)
	}
	if _, plain := p.steps[0].(*filterStep); !plain || len(p.steps) != 1 {
		t.Errorf("the step is a %T", p.steps[0])
	}
	if r.envOf(r.meter(n)) != r.env {
		t.Error("sinks keep in an environment of their own")
	}
}

// What sinks keep is told to their own meter and to the statement's, and what
// they give back is no longer kept.
func TestMeasuredBytes(t *testing.T) {
	table := &column.Table{Schema: column.Schema{{Name: "n", Type: column.Integer}}, N: 10_000}
	v := column.New(column.Integer, nil, table.N)
	for i := range v.I {
		v.I[i] = int64(i % 10)
	}
	table.Cols = []column.Vector{v}
	sort := &plan.Sort{Input: plantest.Scan(table), Keys: []plan.SortKey{{Expr: plantest.Column(table.Schema, 0)}}}
	n := aggregate(sort, columns(table.Schema, 0), calls(table.Schema, "COUNT", 0)[0])
	env := testEnv(0, 0)
	env.Measured = NewMeasured(n)
	if _, err := run(t, env, n); err != nil {
		t.Fatal(err)
	}
	sorted, groups := env.Measured.Of(sort), env.Measured.Of(n)
	if sorted.Bytes != 8*10_000 {
		t.Errorf("the sort kept %d bytes of 10,000 integers", sorted.Bytes)
	}
	// a group is a key of a word and eight words an aggregate, at a guess
	if groups.Bytes < 10*8 || groups.Bytes > 10*200 {
		t.Errorf("ten groups kept %d bytes", groups.Bytes)
	}
	if kept := env.kept.Load(); kept != sorted.Bytes+groups.Bytes {
		t.Errorf("the statement kept %d bytes, its steps %d and %d", kept, sorted.Bytes, groups.Bytes)
	}
	// the limit is that of the whole statement
	env = testEnv(0, 0)
	env.Memory = sorted.Bytes + 1
	env.Measured = NewMeasured(n)
	if _, err := run(t, env, n); err == nil {
		t.Error("more was kept than the statement may")
	}
}
