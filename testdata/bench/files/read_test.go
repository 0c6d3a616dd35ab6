package files_test

import (
	"bufio"
	"bytes"
	"context"
	"database/sql"
	"fmt"
	"math/rand/v2"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	_ "github.com/duckdb/duckdb-go/v2"

	"nearcell/catalog"
	"nearcell/engine"
)

// writeLog writes a log of n readings of 54 loggers: a time, a name and two numbers.
func writeLog(b *testing.B, path string, n int) int64 {
	b.Helper()
	f, err := os.Create(path)
	if err != nil {
		b.Fatal(err)
	}
	w := bufio.NewWriterSize(f, 1<<20)
	r := rand.New(rand.NewPCG(1, 2))
	start := time.Date(2031, 7, 1, 0, 0, 0, 0, time.UTC)
	fmt.Fprintln(w, "t,logger,temp,rh")
	for i := range n {
		fmt.Fprintf(w, "%s,L%02d,%.2f,%.1f\n", start.Add(time.Duration(i/54)*time.Second).Format("2006-01-02 15:04:05"), i%54+1, 2+6*r.Float64(), 60+20*r.Float64())
	}
	if err := w.Flush(); err != nil {
		b.Fatal(err)
	}
	info, err := f.Stat()
	if err != nil {
		b.Fatal(err)
	}
	if err := f.Close(); err != nil {
		b.Fatal(err)
	}
	return info.Size()
}

// BenchmarkReading reads one log as CSV and as Parquet into a table in memory, here and
// with DuckDB, in turns. The counts and sums of both are compared first.
func BenchmarkReading(b *testing.B) {
	const rows = 3_000_000
	folder := b.TempDir()
	text, packed := filepath.Join(folder, "log.csv"), filepath.Join(folder, "log.parquet")
	bytesOf := map[string]int64{"csv": writeLog(b, text, rows)}
	run := func(script string) string {
		var out, said bytes.Buffer
		s := engine.New(catalog.Memory(), engine.Options{Out: &out, Err: &said, Threads: 2})
		if err := s.Run(context.Background(), "bench", script, folder); err != nil {
			b.Fatal(err, said.String())
		}
		return out.String()
	}
	run("CREATE TABLE log FROM 'log.csv'; SAVE SELECT * FROM log TO 'log.parquet';")
	info, err := os.Stat(packed)
	if err != nil {
		b.Fatal(err)
	}
	bytesOf["parquet"] = info.Size()
	db, err := sql.Open("duckdb", "?threads=2")
	if err != nil {
		b.Fatal(err)
	}
	defer db.Close()
	db.SetMaxOpenConns(1)
	peer := map[string]string{
		"csv":     fmt.Sprintf("CREATE OR REPLACE TABLE log AS SELECT * FROM read_csv('%s')", text),
		"parquet": fmt.Sprintf("CREATE OR REPLACE TABLE log AS SELECT * FROM read_parquet('%s')", packed),
	}
	for _, form := range []string{"csv", "parquet"} {
		if _, err := db.Exec(peer[form]); err != nil {
			b.Fatal(err)
		}
		var n, loggers int64
		var sum float64
		if err := db.QueryRow("SELECT COUNT(*), COUNT(DISTINCT logger), ROUND(SUM(temp), 2) FROM log").Scan(&n, &loggers, &sum); err != nil {
			b.Fatal(err)
		}
		want := fmt.Sprintf("%d %d %.2f", n, loggers, sum)
		got := strings.Fields(run(fmt.Sprintf("SET DIGITS 17; CREATE TABLE log FROM 'log.%s'; SELECT COUNT(*) AS n, COUNT(DISTINCT logger) AS l, ROUND(SUM(temp), 2) AS s FROM log;", form)))
		var s float64
		if _, err := fmt.Sscan(got[len(got)-1], &s); err != nil || fmt.Sprintf("%s %s %.2f", got[len(got)-3], got[len(got)-2], s) != want {
			b.Fatalf("%s: %v, and DuckDB says %s (%v)", form, got, want, err)
		}
		b.Run(form+"/nearcell", func(b *testing.B) {
			b.SetBytes(bytesOf[form])
			for b.Loop() {
				run(fmt.Sprintf("CREATE TABLE log FROM 'log.%s';", form))
			}
		})
		b.Run(form+"/duckdb", func(b *testing.B) {
			b.SetBytes(bytesOf[form])
			for b.Loop() {
				if _, err := db.Exec(peer[form]); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
