package relation

import (
	"fmt"
	"math/rand/v2"
	"testing"

	"nearcell/catalog/column"
	"nearcell/voronoi"
)

// A forecast says the rows and the cells that running takes, computes none, and
// knows afterwards what is there: over sites at one place, outside the solid, in
// several partitions of which some are alike, and with few of them shown.
func TestForecast(t *testing.T) {
	for seed := range uint64(60) {
		rng := rand.New(rand.NewPCG(seed, 5))
		places := make([]site, 12)
		for i := range places {
			places[i] = site{x: rng.Float64() * 11, y: rng.Float64() * 10, z: rng.Float64() * 10} // some outside
			if i > 0 && rng.IntN(6) == 0 {
				places[i] = places[i-1]
			}
		}
		var list []site
		for instant := range int64(1 + seed%5) {
			for i, p := range places {
				if instant%2 == 1 && i == 3 {
					continue // another partition
				}
				p.id, p.t = fmt.Sprint(i+1), instant*60e6
				list = append(list, p)
			}
		}
		def := []*Definition{cells, contacts}[seed%2]
		s := &setup{def: def, input: table(list, false), c: Clauses{Solid: box(t, 10, 10, 10), Each: []int{4}}, env: newEnv()}
		r := Request{}
		if rng.IntN(2) == 0 {
			r.Wanted = make([]uint64, column.Words(len(list)))
			for i := range list {
				if rng.IntN(3) == 0 {
					column.SetBit(r.Wanted, i)
				}
			}
		}
		b := s.bound()
		open := func() Rows {
			rows, err := def.Open(b, s.env, s.input, r)
			if err != nil {
				t.Fatal(err)
			}
			return rows
		}
		before, err := ForecastOf(t.Context(), b, open(), nil)
		if err != nil {
			t.Fatal(err)
		}
		if stats := s.env.Diagrams.Stats(); stats.Cells+stats.Contacts != 0 {
			t.Fatalf("seed %d: a forecast computed %d cells, %d contacts", seed, stats.Cells, stats.Contacts)
		}
		rows := 0
		if err := open().Run(t.Context(), func(b *column.Batch) error { rows += b.N; return nil }); err != nil {
			t.Fatal(err)
		}
		stats := s.env.Diagrams.Stats()
		done := int(stats.Cells + stats.Contacts)
		if !before.Counted || before.Cost.Cells != done || before.Known != 0 || int(before.Diagrams) != stats.Built {
			t.Errorf("seed %d: %+v, but %d cells in %d diagrams were computed", seed, before, done, stats.Built)
		}
		if before.RowsExact != (def == cells) || before.RowsExact && int(before.Rows) != rows {
			t.Errorf("seed %d: %v rows (exact: %v), but %d came", seed, before.Rows, before.RowsExact, rows)
		}
		after, err := ForecastOf(t.Context(), b, open(), nil)
		if err != nil {
			t.Fatal(err)
		}
		if after.Known != done || after.Cost.Cells != 0 || after.Cost.Seconds != 0 {
			t.Errorf("seed %d: %+v after %d cells were computed", seed, after, done)
		}
	}
}

// Of more sites than are looked at the others are taken to be alike.
func TestForecastSample(t *testing.T) {
	groups := make([]*alike, 100)
	for i := range groups {
		groups[i] = &alike{parts: []*Part{{Sites: make([]voronoi.Vec, 10_000)}}}
	}
	if step := stepOver(groups); step != 4 { // a million sites, 262,144 are looked at
		t.Errorf("every %dth diagram is looked at", step)
	}
	if step := stepOver(groups[:1]); step != 1 {
		t.Errorf("of one diagram every %dth is looked at", step)
	}
}
