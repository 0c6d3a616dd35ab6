package exec

import (
	"context"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/plan/plantest"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
)

func testEnv(chunk, batch int) *Env {
	return &Env{Env: relation.Env{Notes: &note.Notes{}}, chunk: chunk, batch: batch}
}

// run is the rows of a plan. It checks on the way what every batch must keep.
func run(t interface{ Fatalf(string, ...any) }, env *Env, n plan.Node) ([]row, error) {
	var rows []row
	schema := n.Schema()
	err := Run(context.Background(), env, n, func(b *column.Batch) error {
		if b.On != nil || b.N == 0 || len(b.Cols) != len(schema) {
			t.Fatalf("a batch of %d rows, %d columns for %d fields, mask %v", b.N, len(b.Cols), len(schema), b.On != nil)
		}
		for i := range b.Cols {
			if v := &b.Cols[i]; v.N != b.N || v.Type != schema[i].Type && v.Type != column.Null {
				t.Fatalf("column %d is a %s of %d values, want %d of %s", i, v.Type, v.N, b.N, schema[i].Type)
			}
		}
		rows = append(rows, rowsOf(b)...)
		return nil
	})
	return rows, err
}

// cleanNulls checks that NULL slots of a table hold 0.
func cleanNulls(t *column.Table) error {
	for c := range t.Cols {
		v := &t.Cols[c]
		for i := range v.N {
			if v.Type == column.Null || !v.IsNull(i) {
				continue
			}
			if v.Type.Counted() && v.I[i] != 0 || v.Type == column.Real && math.Float64bits(v.F[i]) != 0 ||
				v.Type == column.Text && v.C[i] != 0 || v.Type == column.Boolean && column.Bit(v.Bits, i) {
				return fmt.Errorf("column %d, row %d: a NULL with a value behind it", c, i)
			}
		}
	}
	return nil
}

// sameRows compares rows bit by bit, but for the sign of a zero that went
// through an aggregate: of -0 and 0 in one group either may stand for both.
func sameRows(n plan.Node, got, want []row) error {
	bits := math.Float64bits
	if aggregates(n) {
		bits = func(f float64) uint64 { return math.Float64bits(f + 0) }
	}
	if len(got) != len(want) {
		return fmt.Errorf("%d rows, want %d", len(got), len(want))
	}
	for i := range got {
		for c := range want[i] {
			g, w := got[i][c], want[i][c]
			if w.Type == column.Null || g.Type == column.Null {
				if g.Null != w.Null {
					return fmt.Errorf("row %d, column %d: %+v, want %+v", i, c, g, w)
				}
				continue
			}
			same := g.Null == w.Null && g.I == w.I && g.S == w.S && bits(g.F) == bits(w.F)
			for k := range g.P {
				same = same && bits(g.P[k]) == bits(w.P[k])
			}
			if !same {
				return fmt.Errorf("row %d, column %d: %+v, want %+v", i, c, g, w)
			}
		}
	}
	return nil
}

func aggregates(n plan.Node) bool {
	_, is := n.(*plan.Aggregate)
	for _, in := range n.Inputs() {
		is = is || aggregates(in)
	}
	return is
}

// Every random plan gives the rows of the naive computation, in their order,
// for any size of chunks and batches and any number of workers, as it is written
// and with the rules. Where that one fails, so may this one (it computes fewer
// rows under a LIMIT).
func TestPlansAgainstNaive(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		seed := rapid.Uint64().Draw(t, "seed")
		depth := rapid.IntRange(1, 4).Draw(t, "depth")
		for k := range uint64(10) {
			rows, steps := 30, depth
			if k%5 == 0 {
				rows, steps = 250, min(depth, 2) // several chunks
			}
			n := plantest.Plan(rand.New(rand.NewPCG(seed, k)), steps, rows)
			want, err := naive(n)
			if err != nil || len(want) > 20000 {
				continue
			}
			better, err := plan.Optimise(n)
			if err != nil {
				t.Fatal(err)
			}
			checkPlan(t, n, want)
			checkPlan(t, better, want)
		}
	})
}

func checkPlan(t *rapid.T, n plan.Node, want []row) {
	for _, sizes := range [][2]int{{0, 0}, {128, 64}, {64, 64}, {256, 128}} {
		env := testEnv(sizes[0], sizes[1])
		env.Threads = 1 + sizes[0]/64%4
		got, err := run(t, env, n)
		if err != nil {
			t.Fatalf("chunks of %d: %v\n%s", sizes[0], err, plan.Format(n))
		}
		if err := sameRows(n, got, want); err != nil {
			t.Fatalf("chunks of %d: %v\n%s", sizes[0], err, plan.Format(n))
		}
		table, err := Collect(context.Background(), testEnv(sizes[0], sizes[1]), n)
		if err == nil {
			err = cleanNulls(table)
		}
		if err == nil {
			err = sameRows(n, rowsOf(&column.Batch{N: table.N, Cols: table.Cols}), want)
		}
		if err != nil {
			t.Fatalf("collected in chunks of %d: %v\n%s", sizes[0], err, plan.Format(n))
		}
	}
}

// The operators agree with the naive computation around the borders of batches
// and chunks, where masks end and parts are merged.
func TestBorders(t *testing.T) {
	few := map[string]bool{"group": true, "limit": true, "distinct": true}
	for _, rows := range []int{0, 1, 63, 64, 65, 2047, 2048, 2049, 4095, 4096, 4097, 65535, 65536, 65537} {
		env := testEnv(0, 0)
		if rows < ChunkRows/2 {
			env = testEnv(2*BatchRows, 0) // as if chunks were small
		}
		rng := rand.New(rand.NewPCG(uint64(rows), 7))
		table := plantest.Table(rng, rows)
		small := plantest.Table(rng, 5)
		scan, schema := plantest.Scan(table), plantest.Schema
		half := &plan.Filter{Input: scan, Cond: compare("<", schema, 1, 0), Clause: "WHERE"}
		plans := map[string]plan.Node{
			"scan":     scan,
			"filter":   half,
			"group":    &plan.Aggregate{Input: half, Keys: columns(schema, 3, 2), Calls: calls(schema, "COUNT", 1, "SUM", 2), Fields: fields(schema, 3, 2, 1, 2)},
			"whole":    &plan.Aggregate{Input: half, Calls: calls(schema, "SUM", 1, "MAX", 3), Fields: fields(schema, 1, 3)},
			"sort":     &plan.Sort{Input: half, Keys: []plan.SortKey{{Expr: plantest.Column(schema, 3)}, {Expr: plantest.Column(schema, 2), Descending: true}}},
			"top":      &plan.Sort{Input: scan, Keys: []plan.SortKey{{Expr: plantest.Column(schema, 6), NullsFirst: true}}, Top: 2048},
			"limit":    &plan.Limit{Input: half, Count: 2048, Offset: int64(max(0, rows/2-1000))},
			"distinct": &plan.Distinct{Input: &plan.Project{Input: half, Exprs: columns(schema, 2, 3, 5), Fields: fields(schema, 2, 3, 5)}},
			"join":     &plan.Join{Left: half, Right: plantest.Scan(small), LeftKeys: columns(schema, 1), RightKeys: columns(schema, 2), Kind: plan.Left},
			"union":    &plan.Union{Parts: []plan.Node{half, scan, plantest.Scan(small)}, Fields: schema},
		}
		for name, n := range plans {
			if rows > ChunkRows/2 && !few[name] {
				continue // computing rows one by one takes its time
			}
			want, err := naive(n)
			if err != nil {
				t.Fatal(err)
			}
			got, err := run(t, env, n)
			if err != nil {
				t.Fatalf("%s of %d rows: %v", name, rows, err)
			}
			if err := sameRows(n, got, want); err != nil {
				t.Errorf("%s of %d rows: %v", name, rows, err)
			}
		}
	}
}

// ctx is looked at in the middle of a batch that a join multiplies.
func TestCancelled(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 1))
	n := &plan.Join{Left: plantest.Scan(plantest.Table(rng, 2000)), Right: plantest.Scan(plantest.Table(rng, 2000))}
	ctx, cancel := context.WithCancel(context.Background())
	batches := 0
	err := Run(ctx, testEnv(0, 0), n, func(*column.Batch) error {
		batches++
		cancel()
		return nil
	})
	if !errors.Is(err, context.Canceled) || batches != 1 {
		t.Errorf("%d batches after the cancellation, error %v", batches, err)
	}
	_, err = Collect(ctx, testEnv(0, 0), &plan.Sort{Input: n.Left, Keys: []plan.SortKey{{Expr: plantest.Column(plantest.Schema, 1)}}})
	if !errors.Is(err, context.Canceled) {
		t.Errorf("a cancelled sort: %v", err)
	}
}

// Any number of workers gives the same bits, of sums too, and the same error:
// that of the first row at fault.
func TestWorkers(t *testing.T) {
	rng := rand.New(rand.NewPCG(6, 6))
	table := plantest.Table(rng, 20000)
	for i := range table.N {
		table.Cols[2].F[i] = rng.NormFloat64() * math.Exp(20*rng.NormFloat64())
	}
	scan, schema := plantest.Scan(table), plantest.Schema
	text := &plan.Aggregate{Input: scan, Keys: columns(schema, 3), Calls: calls(schema, "SUM", 2, "AVG", 2, "MEDIAN", 2, "VAR_SAMP", 2),
		Fields: fields(schema, 3, 2, 2, 2, 2)}
	whole := &plan.Aggregate{Input: scan, Calls: text.Calls, Fields: text.Fields[1:]}
	failing := &plan.Aggregate{Input: scan, Calls: []plan.Call{{Fn: function.LookupAggregate("SUM"), Text: "SUM",
		Args: []expr.Expr{arith("/", plantest.Column(schema, 2), plantest.Column(schema, 1))}}}, Fields: fields(schema, 2)}
	sorted := &plan.Sort{Input: scan, Keys: []plan.SortKey{{Expr: plantest.Column(schema, 3)}}, Top: 3000}
	unique := &plan.Distinct{Input: &plan.Project{Input: scan, Exprs: columns(schema, 6, 3, 1), Fields: fields(schema, 6, 3, 1)}}
	join := &plan.Join{Left: scan, Right: plantest.Scan(plantest.Table(rng, 50)), LeftKeys: columns(schema, 3), RightKeys: columns(schema, 3)}
	counted := &plan.Aggregate{Input: join, Keys: columns(schema, 6), Calls: calls(schema, "COUNT", 1, "SUM", 2), Fields: fields(schema, 6, 1, 2)}
	for i, n := range []plan.Node{text, whole, failing, sorted, unique, counted} {
		var want []row
		wantErr := ""
		for _, threads := range []int{1, 2, 3, 8, 100} {
			env := testEnv(640, 128)
			env.Threads = threads
			got, err := run(t, env, n)
			text := fmt.Sprint(err)
			if threads == 1 {
				want, wantErr = got, text
				if (err != nil) != (n == failing) {
					t.Fatalf("plan %d: %v", i, err)
				}
				continue
			}
			if text != wantErr {
				t.Errorf("plan %d, %d workers: error %s, want %s", i, threads, text, wantErr)
			}
			if err := sameRows(scan, got, want); err != nil {
				t.Errorf("plan %d, %d workers: %v", i, threads, err)
			}
		}
	}
}

// A panic in a worker reaches the caller, and the others leave.
func TestWorkerPanics(t *testing.T) {
	rng := rand.New(rand.NewPCG(7, 6))
	scan := plantest.Scan(plantest.Table(rng, 20000))
	env := testEnv(64, 64)
	env.Threads = 4
	defer func() {
		if recover() == nil {
			t.Error("the panic was lost")
		}
	}()
	broken := plantest.Column(column.Schema{{Name: "x", Type: column.Real}}, 0) // column 0 is a text
	n := &plan.Sort{Input: scan, Keys: []plan.SortKey{{Expr: must(expr.NewNeg(broken, plantest.Nowhere))}}}
	_, _ = Collect(context.Background(), env, n)
}

// LIMIT and OFFSET count rows over the borders of chunks and behind masks.
func TestLimitAcrossChunks(t *testing.T) {
	rng := rand.New(rand.NewPCG(8, 8))
	half := &plan.Filter{Input: plantest.Scan(plantest.Table(rng, 300)), Cond: compare("<", plantest.Schema, 1, 1), Clause: "WHERE"}
	for _, count := range []int64{-1, 0, 1, 40, 64, 130, 1000} {
		for _, offset := range []int64{0, 1, 39, 64, 65, 129, 1000} {
			n := &plan.Limit{Input: half, Count: count, Offset: offset}
			want, err := naive(n)
			if err != nil {
				t.Fatal(err)
			}
			got, err := run(t, testEnv(64, 64), n)
			if err != nil {
				t.Fatal(err)
			}
			if err := sameRows(n, got, want); err != nil {
				t.Errorf("LIMIT %d OFFSET %d: %v", count, offset, err)
			}
		}
	}
}

// LIMIT stops a relation as soon as it has its rows.
func TestLimitStopsTheSource(t *testing.T) {
	rng := rand.New(rand.NewPCG(2, 1))
	b := plantest.Bound(plantest.Schema, 0, 2, -1)
	emitted := 0
	def := *b.Def
	def.Open = func(b *relation.Bound, env *relation.Env, in *column.Table, r relation.Request) (relation.Rows, error) {
		rows, err := plantest.Crowd.Open(b, env, in, r)
		return counting{rows, &emitted}, err
	}
	b.Def = &def
	n := &plan.Limit{Count: 5, Input: &plan.Relation{Bound: b, Input: plantest.Scan(plantest.Table(rng, 5000))}}
	got, err := run(t, testEnv(0, 0), n)
	if err != nil || len(got) != 5 || emitted != 100 {
		t.Errorf("%d rows, %d computed, %v; want 5 of the first 100", len(got), emitted, err)
	}
}

type counting struct {
	relation.Rows
	n *int
}

func (c counting) Run(ctx context.Context, emit func(*column.Batch) error) error {
	return c.Rows.Run(ctx, func(b *column.Batch) error {
		*c.n += b.N
		return emit(b)
	})
}

// A fault names its row by the column id, else by its number in the input.
func TestFaultsNameTheRow(t *testing.T) {
	bad := column.NewBuilder(column.Real, nil)
	ids := column.NewBuilder(column.Text, nil)
	for i := range 3000 {
		bad.AppendFloat(float64(i - 2500))
		ids.AppendText(fmt.Sprintf("L%d", i))
	}
	schema := column.Schema{{Name: "v", Type: column.Real}, {Name: "ID", Type: column.Text}}
	table := &column.Table{Schema: schema, N: 3000, Cols: []column.Vector{bad.Finish(), ids.Finish()}}
	one := expr.NewConst(column.Float(1), plantest.Nowhere)
	divide := arith("/", one, plantest.Column(schema, 0))
	for _, c := range []struct {
		use  []int
		want string
	}{
		{[]int{0, 1}, "in the row with id 'L2500'"},
		{[]int{0}, "in row 2501"},
	} {
		scan := &plan.Scan{Table: table, Use: c.use}
		for _, u := range c.use {
			scan.Fields = append(scan.Fields, schema[u])
		}
		n := &plan.Project{Input: scan, Exprs: []expr.Expr{divide}, Fields: column.Schema{{Name: "x", Type: column.Real}}}
		_, err := run(t, testEnv(0, 0), n)
		var p *problem.Problem
		if !errors.As(err, &p) || !contains(p.Message, c.want) || p.Code != "no-value" {
			t.Errorf("error %#v, want one %s", err, c.want)
		}
	}
}

// Results that need more memory than allowed are refused.
func TestMemory(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 1))
	env := testEnv(0, 0)
	env.Memory = 1 << 20
	n := &plan.Sort{Input: plantest.Scan(plantest.Table(rng, 50000)), Keys: []plan.SortKey{{Expr: plantest.Column(plantest.Schema, 1)}}}
	_, err := run(t, env, n)
	var p *problem.Problem
	if !errors.As(err, &p) || p.Code != "memory" {
		t.Errorf("error %v, want one of memory", err)
	}
	env = testEnv(0, 0)
	env.Memory = 1 << 20
	if got, err := run(t, env, &plan.Limit{Input: n.Input, Count: 100}); err != nil || len(got) != 100 {
		t.Errorf("%d rows, %v: a small result must fit", len(got), err)
	}
	n.Top = 10
	n.Input = plantest.Scan(plantest.Table(rng, 200000))
	env = testEnv(1024, 0)
	env.Memory, env.Threads = 1<<20, 1
	if _, err := run(t, env, n); err != nil {
		t.Errorf("what a sort has forgotten still counts: %v", err)
	}
	few := &plan.Aggregate{Input: n.Input, Keys: columns(plantest.Schema, 3, 2), Calls: calls(plantest.Schema, "COUNT", 1), Fields: fields(plantest.Schema, 3, 2, 1)}
	if _, err := run(t, env, few); err != nil {
		t.Errorf("groups of merged chunks still count: %v", err)
	}
}
