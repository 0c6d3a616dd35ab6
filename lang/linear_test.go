package lang

import (
	"fmt"
	"strings"
	"testing"
	"time"
)

// scriptOf is a script of n statements of several kinds.
func scriptOf(n int) string {
	kinds := []string{
		"SELECT id, AVG(temp) WEIGHTED BY volume FROM CELLS OF hall WITHIN air WHERE temp > %d GROUP BY id;",
		"LET limit = %d; -- of the contract", "CREATE OR REPLACE TABLE log FROM 'log%d.csv' UNITS (temp '°C');",
		"SELECT 'it''s %d', CASE WHEN x > 1 THEN 2 ELSE 3 END /* as said */ FROM log l JOIN hall h ON h.id = l.logger;",
	}
	var b strings.Builder
	for i := range n {
		fmt.Fprintf(&b, kinds[i%len(kinds)]+"\n", i)
	}
	return b.String()
}

// parsePieces reads a script as a session does: piece by piece.
func parsePieces(t testing.TB, text string, n int) {
	read := 0
	for _, p := range Split(text) {
		tree, err := ParseStatement(text, p)
		if err != nil {
			t.Fatal(err)
		}
		if tree != nil {
			read++
		}
	}
	if read != n {
		t.Fatalf("%d statements, want %d", read, n)
	}
}

// Ten times the statements take about ten times as long; a step that looks at all
// that went before would take a hundred times. The least of several runs is taken, so
// that a busy machine disturbs little, and the bound lies far from either.
func TestScriptsParseInLinearTime(t *testing.T) {
	least := func(n int) time.Duration {
		text := scriptOf(n)
		best := time.Hour
		for range 3 {
			start := time.Now()
			parsePieces(t, text, n)
			best = min(best, time.Since(start))
		}
		return best
	}
	// the work that can be counted: what is allocated
	work := func(n int) float64 {
		text := scriptOf(n)
		return testing.AllocsPerRun(1, func() { parsePieces(t, text, n) })
	}
	if few, many := work(1000), work(10_000); many > 11*few {
		t.Errorf("1,000 statements make %.0f allocations, 10,000 make %.0f", few, many)
	}
	few, many := least(1000), least(10_000)
	t.Logf("1,000 statements in %v, 10,000 in %v", few, many)
	if many > 40*few {
		t.Errorf("1,000 statements take %v, 10,000 take %v", few, many)
	}
}

// BenchmarkParse10000 reads a script of 10,000 statements.
func BenchmarkParse10000(b *testing.B) {
	for _, n := range []int{1000, 10_000} {
		text := scriptOf(n)
		b.Run(fmt.Sprint(n), func(b *testing.B) {
			b.SetBytes(int64(len(text)))
			for b.Loop() {
				parsePieces(b, text, n)
			}
		})
	}
}
