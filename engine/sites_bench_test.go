package engine_test

import (
	"context"
	"fmt"
	"io"
	"math/rand/v2"
	"os"
	"path/filepath"
	"testing"

	"nearcell/catalog"
	"nearcell/engine"
	"nearcell/engine/present"
)

// BenchmarkSites asks the program what is expected of large campaigns, the sites imported
// before: random ones in a box of 100 x 100 x 100, in an L-shaped hall for "l" and with
// twice as much of a value in one corner. Diagrams are made anew for each round.
func BenchmarkSites(b *testing.B) {
	folder := b.TempDir()
	write := func(name string, n int, seed uint64, l bool) {
		f, err := os.Create(filepath.Join(folder, name))
		if err != nil {
			b.Fatal(err)
		}
		defer f.Close()
		r := rand.New(rand.NewPCG(seed, 8))
		fmt.Fprintln(f, "id,x,y,z,v")
		for i := 0; i < n; {
			x, y, z := 100*r.Float64(), 100*r.Float64(), 100*r.Float64()
			if l && x > 60 && y > 50 {
				continue
			}
			fmt.Fprintf(f, "%d,%.9g,%.9g,%.9g,%.4f\n", i, x, y, z, 5+x/50+0.3*r.NormFloat64())
			i++
		}
	}
	write("a.csv", 100000, 1, false)
	write("b.csv", 100000, 2, false)
	write("c.csv", 10000, 3, false)
	write("l.csv", 10000, 4, true)
	setup := `CREATE SOLID cube AS BOX (0,0,0) TO (100,100,100); CREATE SOLID hall AS PRISM ((0,0), (100,0), (100,50), (60,50), (60,100), (0,100)) FROM 0 TO 100;
CREATE CAMPAIGN a FROM 'a.csv' WITHIN cube; CREATE CAMPAIGN b FROM 'b.csv' WITHIN cube; CREATE CAMPAIGN c FROM 'c.csv' WITHIN cube; CREATE CAMPAIGN l FROM 'l.csv' WITHIN hall;`
	for _, q := range []struct {
		name, query string
		items       int
	}{
		{"sibson100k", "SELECT AVG(v) FROM ESTIMATES OF a AT b;", 100000},
		{"residuals100k", "SELECT MAX(residual) FROM RESIDUALS OF a FOR v;", 100000},
		{"overlay100k", "SELECT SUM(volume) FROM OVERLAY OF a AGAINST b;", 100000},
		{"placements50in10k", "SELECT MAX(radius) FROM PLACEMENTS OF l NUMBER 50;", 10000},
		{"grid1M", "SELECT AVG(v) FROM ESTIMATES OF a AT (GRID OF cube STEP 1) METHOD NEAREST;", 1000000},
		{"autocorrelation100k", "SELECT z_score FROM AUTOCORRELATION OF a FOR v;", 100000},
		{"clusters10k", "SELECT MAX(getis_g) FROM CLUSTERS OF c FOR v;", 10000},
		{"exceedance100k", "SELECT share FROM EXCEEDANCE OF a FOR v ABOVE 6 METHOD LINEAR;", 100000},
	} {
		b.Run(q.name, func(b *testing.B) {
			for b.Loop() {
				b.StopTimer()
				s := engine.New(catalog.Memory(), engine.Options{Out: io.Discard, Err: io.Discard, Format: present.AsCSV, Threads: 2, Quiet: true})
				if err := s.Run(context.Background(), "setup", setup, folder); err != nil {
					b.Fatal(err)
				}
				b.StartTimer()
				if err := s.Run(context.Background(), q.name, q.query, folder); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/1e3/float64(b.N)/float64(q.items), "µs/item")
		})
	}
}
