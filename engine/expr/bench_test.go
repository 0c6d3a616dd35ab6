package expr

import (
	"math/rand/v2"
	"testing"

	"nearcell/catalog/column"
)

// BenchmarkFilter computes conditions over a million rows with 1 % NULL, in
// batches of 2,048.
func BenchmarkFilter(b *testing.B) {
	const rows, batch = 1 << 20, 2048
	schema := column.Schema{{Name: "temp", Type: column.Real}, {Name: "n", Type: column.Integer}, {Name: "id", Type: column.Text}}
	rng := rand.New(rand.NewPCG(1, 2))
	table := column.Table{Schema: schema, N: rows, Cols: []column.Vector{
		column.New(column.Real, nil, rows), column.New(column.Integer, nil, rows), column.New(column.Text, nil, rows)}}
	for i := range 54 {
		table.Cols[2].Dict.Texts = append(table.Cols[2].Dict.Texts, "L"+string(rune('A'+i)))
	}
	for i := range rows {
		table.Cols[0].F[i], table.Cols[1].I[i], table.Cols[2].C[i] = rng.Float64()*10, rng.Int64N(100), uint32(rng.IntN(54))
	}
	for range rows / 100 {
		table.Cols[0].SetNull(rng.IntN(rows))
	}
	for _, text := range []string{"temp > 8", "temp > 2 AND temp < 8", "n = 17", "id = 'LC'", "id LIKE 'L_'", "temp * 1.8 + 32 > 46", "CASE WHEN temp > 8 THEN 'warm' ELSE 'fine' END = 'warm'", "n IN (3, 5, 7)"} {
		e := mustRead(b, text, schema)
		b.Run(text, func(b *testing.B) {
			var w Work
			for b.Loop() {
				count := 0
				for lo := 0; lo < rows; lo += batch {
					part := table.Batch(lo, lo+batch)
					v, err := e.Eval(&w, &part, nil)
					if err != nil {
						b.Fatal(err)
					}
					count += column.Count(w.True(&v, nil))
					w.Reset()
				}
				if count == 0 {
					b.Fatal("no row")
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/rows, "ns/row")
		})
	}
}
