package files_test

import (
	"bytes"
	"context"
	"database/sql"
	"math"
	"path/filepath"
	"testing"
	"time"

	_ "github.com/duckdb/duckdb-go/v2"

	"nearcell/catalog"
	"nearcell/engine"
)

// DuckDB's reader, which shares no code with the writer, finds the same values.
func TestParquetIsReadByDuckDB(t *testing.T) {
	folder := t.TempDir()
	var said bytes.Buffer
	s := engine.New(catalog.Memory(), engine.Options{Out: &said, Err: &said})
	script := `SAVE SELECT * FROM (VALUES (1, 0.1, 'ü''7', TRUE, TIMESTAMP '2031-04-07 08:15:00.25', INTERVAL '15' MINUTE),
		(NULL, NULL, NULL, NULL, NULL, NULL), (9223372036854775807, 1e308, '', FALSE, TIMESTAMP '1874-01-01 00:00:00', INTERVAL '-1' SECOND)) AS v(n, x, id, ok, t, span) TO 'rows.parquet';`
	if err := s.Run(context.Background(), "test", script, folder); err != nil {
		t.Fatal(err, said.String())
	}
	db, err := sql.Open("duckdb", "")
	if err != nil {
		t.Fatal(err)
	}
	defer db.Close()
	rows, err := db.Query("SELECT n, x, id, ok, t, span FROM read_parquet(?)", filepath.Join(folder, "rows.parquet"))
	if err != nil {
		t.Fatal(err)
	}
	defer rows.Close()
	type record struct {
		n, span sql.NullInt64
		x       sql.NullFloat64
		id      sql.NullString
		ok      sql.NullBool
		t       sql.NullTime
	}
	var got []record
	for rows.Next() {
		var r record
		if err := rows.Scan(&r.n, &r.x, &r.id, &r.ok, &r.t, &r.span); err != nil {
			t.Fatal(err)
		}
		got = append(got, r)
	}
	if err := rows.Err(); err != nil || len(got) != 3 {
		t.Fatalf("%d rows, %v", len(got), err)
	}
	if r := got[0]; r.n.Int64 != 1 || r.x.Float64 != 0.1 || r.id.String != "ü'7" || !r.ok.Bool ||
		!r.t.Time.Equal(time.Date(2031, 4, 7, 8, 15, 0, 250_000_000, time.UTC)) || r.span.Int64 != 900_000_000 {
		t.Errorf("first row: %+v", r)
	}
	if r := got[1]; r.n.Valid || r.x.Valid || r.id.Valid || r.ok.Valid || r.t.Valid || r.span.Valid {
		t.Errorf("row of NULLs: %+v", r)
	}
	if r := got[2]; r.n.Int64 != math.MaxInt64 || r.x.Float64 != 1e308 || !r.id.Valid || r.id.String != "" || r.ok.Bool || !r.ok.Valid ||
		!r.t.Time.Equal(time.Date(1874, 1, 1, 0, 0, 0, 0, time.UTC)) || r.span.Int64 != -1_000_000 {
		t.Errorf("last row: %+v", r)
	}
}
