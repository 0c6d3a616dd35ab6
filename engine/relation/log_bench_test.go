package relation

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"runtime"
	"testing"

	"nearcell/catalog/column"
	"nearcell/engine/note"
)

// bigLog is n readings of 54 loggers, as a recorder writes them: by time, every second
// within a second of each other.
func bigLog(n int) *column.Table {
	const loggers = 54
	d := &column.Dict{}
	for i := range loggers {
		d.Texts = append(d.Texts, fmt.Sprintf("L%02d", i+1))
	}
	id, t, temp := column.New(column.Text, nil, n), column.New(column.Timestamp, nil, n), column.New(column.Real, nil, n)
	id.Dict = d
	rng := rand.New(rand.NewPCG(1, 54))
	var late [loggers]int64
	for i := range late {
		late[i] = rng.Int64N(1e6)
	}
	for i := range n {
		k, pass := i%loggers, i/loggers
		id.C[i] = uint32(k)
		t.I[i] = int64(pass)*1e6 + late[k]
		temp.F[i] = math.Round(100*(5.5+2.7*math.Sin(float64(pass)/3600+float64(k))+0.1*rng.Float64())) / 100
	}
	return &column.Table{Schema: column.Schema{{Name: "logger", Type: column.Text}, {Name: "t", Type: column.Timestamp}, {Name: "temp", Type: column.Real}},
		Cols: []column.Vector{id, t, temp}, N: n}
}

func logBound(d *Definition, in *column.Table, c LogClauses) *Bound {
	b := &Bound{Def: d, Name: "log", Input: in.Schema, ID: -1, X: -1, Y: -1, Z: -1, Log: c}
	b.Clauses.By, b.Clauses.On = []int{0}, []int{1}
	if d == episodes {
		b.Clauses.For = []int{2}
	}
	if d == audit {
		b.Log.Readings = []int{2}
	}
	b.Layout()
	return b
}

// BenchmarkLog takes ten million rows through each relation, on one core and on two.
func BenchmarkLog(b *testing.B) {
	in := bigLog(10_000_000)
	for name, bound := range map[string]*Bound{
		"series":   logBound(seriesOf, in, LogClauses{Every: 1e6, Method: "LINEAR", Stamp: "INSTANT"}),
		"mean":     logBound(seriesOf, in, LogClauses{Every: 60e6, Method: "MEAN", Stamp: "START"}),
		"audit":    logBound(audit, in, LogClauses{Every: 1e6}),
		"episodes": logBound(episodes, in, LogClauses{Limit: 8}),
	} {
		for _, threads := range []int{1, 2} {
			b.Run(fmt.Sprintf("%s/threads=%d", name, threads), func(b *testing.B) {
				rows := 0
				for b.Loop() {
					rows = 0
					r, err := bound.Def.Open(bound, &Env{Notes: &note.Notes{}, Threads: threads}, in, Request{})
					if err != nil {
						b.Fatal(err)
					}
					if err := r.Run(context.Background(), func(x *column.Batch) error { rows += x.N; return nil }); err != nil {
						b.Fatal(err)
					}
				}
				var m runtime.MemStats
				runtime.ReadMemStats(&m)
				b.ReportMetric(float64(rows), "rows")
				b.ReportMetric(float64(m.HeapSys)/1e6, "heap-MB")
			})
		}
	}
}
