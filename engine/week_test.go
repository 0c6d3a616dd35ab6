package engine

import (
	"bytes"
	"context"
	"path/filepath"
	"strings"
	"testing"

	"nearcell/catalog"
	"nearcell/engine/present"
)

const weekly = `SELECT t, AVG(temp) WEIGHTED BY volume AS mean, SHARE(temp > 8) WEIGHTED BY volume AS over_limit
FROM CELLS OF (SELECT s.id, s.x, s.y, s.z, l.t, l.temp FROM placed s JOIN log l ON l.logger = s.id WHERE l.temp IS NOT NULL) FOR EACH t WITHIN air
GROUP BY t ORDER BY t;`

// BenchmarkWeek is the weekly course of the demo: 54 loggers, a week of quarters of an
// hour (672 partitions, with drop-outs, so that 33 of them differ), in the L-shaped hall.
// Each round begins without a diagram; reading the files is not counted.
func BenchmarkWeek(b *testing.B) {
	for _, threads := range []int{1, 2} {
		b.Run("threads="+string(rune('0'+threads)), func(b *testing.B) {
			for b.Loop() {
				b.StopTimer()
				var out, notes bytes.Buffer
				s := New(catalog.Memory(), Options{Out: &out, Err: &notes, Format: present.AsCSV, Threads: threads})
				folder := filepath.Join("..", "testdata", "demo")
				if err := s.Run(context.Background(), "script", demoSetting, folder); err != nil {
					b.Fatal(err)
				}
				out.Reset()
				b.StartTimer()
				if err := s.Run(context.Background(), "script", weekly, folder); err != nil {
					b.Fatal(err)
				}
				if lines := strings.Count(out.String(), "\n"); lines < 673 {
					b.Fatalf("%d lines, want one for each of 672 instants", lines)
				}
			}
		})
	}
}
