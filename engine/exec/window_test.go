package exec

import (
	"context"
	"errors"
	"fmt"
	"math/rand/v2"
	"testing"
	"time"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
)

// windowOver is a plan with calls over a table of a key g, an order t and values x.
func windowOver(rows, partitions int, frame plan.Frame, names ...string) *plan.Window {
	rng := rand.New(rand.NewPCG(uint64(rows), 5))
	t := &column.Table{N: rows, Schema: column.Schema{{Name: "g", Type: column.Integer}, {Name: "t", Type: column.Integer}, {Name: "x", Type: column.Real}}}
	g, at, x := column.New(column.Integer, nil, rows), column.New(column.Integer, nil, rows), column.New(column.Real, nil, rows)
	for i := range rows {
		g.I[i], at.I[i], x.F[i] = int64(rng.IntN(partitions)), int64(rng.IntN(rows)), rng.NormFloat64()
		if rng.IntN(20) == 0 {
			x.SetNull(i)
		}
	}
	t.Cols = []column.Vector{g, at, x}
	scan := &plan.Scan{Name: "log", Kind: "table", Table: t, Use: []int{0, 1, 2}, Fields: t.Schema}
	col := func(i int) expr.Expr { return expr.NewColumn(i, t.Schema[i], problem.Place{}) }
	w := &plan.Window{Input: scan, Partition: []expr.Expr{col(0)}, OrderBy: []plan.SortKey{{Expr: col(1)}}, Fields: t.Schema}
	for _, name := range names {
		c := plan.WindowCall{Frame: frame}
		field := column.Field{Name: name, Type: column.Real}
		if c.Fn = function.LookupWindow(name); c.Fn != nil {
			field.Type = column.Integer
		} else {
			c.Call = plan.Call{Fn: function.LookupAggregate(name), Args: []expr.Expr{col(2)}}
		}
		w.Calls, w.Fields = append(w.Calls, c), append(w.Fields, field)
	}
	return w
}

func rowsBefore(n int64) plan.Frame {
	return plan.Frame{Start: plan.FrameBound{Kind: plan.Preceding, Offset: column.Int(n)}, End: plan.FrameBound{Kind: plan.CurrentRow}}
}

// Any number of workers and any sizes of chunks give the same bits.
func TestWindowsOfManyWorkers(t *testing.T) {
	w := windowOver(30_000, 9, rowsBefore(30), "ROW_NUMBER", "SUM", "STDDEV_SAMP", "MAX", "MEDIAN")
	var first string
	for _, env := range []*Env{{}, {Env: relation.Env{Threads: 1}}, {Env: relation.Env{Threads: 4}}, {chunk: 640, batch: 64}} {
		got, err := Collect(context.Background(), env, w)
		if err != nil {
			t.Fatal(err)
		}
		sums := ""
		for c := range got.Cols {
			for i := range got.N {
				v := got.Cols[c].Value(i)
				if i%97 == 0 || v.Null {
					sums += fmt.Sprintf("%d %v %x ", v.I, v.Null, v.F)
				}
			}
		}
		if first == "" {
			first = sums
		}
		if sums != first {
			t.Errorf("threads %d, chunk %d: other values", env.Threads, env.chunk)
		}
	}
}

// A window that is cancelled in its midst ends soon.
func TestWindowIsCancelled(t *testing.T) {
	w := windowOver(1_000_000, 1, rowsBefore(500_000), "STDDEV_SAMP", "MEDIAN")
	ctx, cancel := context.WithCancel(context.Background())
	time.AfterFunc(150*time.Millisecond, cancel)
	if _, err := Collect(ctx, &Env{}, w); !errors.Is(err, context.Canceled) {
		t.Errorf("a cancelled window ends with %v", err)
	}
}

// A window that needs more memory than there is says so.
func TestWindowRespectsMemory(t *testing.T) {
	var p *problem.Problem
	_, err := Collect(context.Background(), &Env{Memory: 1 << 20}, windowOver(100_000, 3, rowsBefore(3), "SUM"))
	if !errors.As(err, &p) || p.Code != "memory" {
		t.Errorf("a window within 1 MiB: %v", err)
	}
}

func BenchmarkWindow(b *testing.B) {
	const rows = 1 << 20
	for _, c := range []struct {
		name       string
		partitions int
		frame      plan.Frame
	}{{"AVG", 1000, rowsBefore(100)}, {"AVG", 1000, plan.Frame{Range: true, End: plan.FrameBound{Kind: plan.CurrentRow}}},
		{"ROW_NUMBER", 1000, plan.Frame{}}, {"AVG", 1, rowsBefore(100)}} {
		w := windowOver(rows, c.partitions, c.frame, c.name)
		for _, threads := range []int{1, 2} {
			b.Run(fmt.Sprintf("%s/%d partitions/%v/%d threads", c.name, c.partitions, c.frame.Range, threads), func(b *testing.B) {
				for b.Loop() {
					if _, err := Collect(context.Background(), &Env{Env: relation.Env{Threads: threads}}, w); err != nil {
						b.Fatal(err)
					}
				}
				b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/rows, "ns/row")
			})
		}
	}
}
