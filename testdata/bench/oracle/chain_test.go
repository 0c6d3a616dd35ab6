package oracle

import (
	"fmt"
	"math/rand/v2"
	"strings"
	"testing"

	"nearcell/catalog"
	col "nearcell/catalog/column"
)

// Up to sixty-four tables of ten rows, listed and tied in any order: one row comes
// out, which following the ties by hand gives, too.
func TestSixtyFourTables(t *testing.T) {
	const tables, rows = 64, 10
	b, err := New(*seed)
	if err != nil {
		t.Fatal(err)
	}
	rng := rand.New(rand.NewPCG(*seed, 64))
	next := make([][]int, tables) // the partner of row i of each table
	for n := range tables {
		next[n] = rng.Perm(rows)
		name := fmt.Sprintf("j%d", n)
		x := &col.Table{N: rows}
		for _, c := range []string{"a", "b"} {
			build := col.NewBuilder(col.Integer, nil)
			for i := range rows {
				if c == "a" {
					build.AppendInt(int64(i))
				} else {
					build.AppendInt(int64(next[n][i]))
				}
			}
			x.Schema = append(x.Schema, col.Field{Name: fmt.Sprintf("%s%d", c, n), Type: col.Integer})
			x.Cols = append(x.Cols, build.Finish())
		}
		if err := b.catalog.Put(catalog.Object{Kind: catalog.Table, Key: name, Name: name, Table: x}, false); err != nil {
			t.Fatal(err)
		}
	}
	for _, n := range []int{2, 5, 13, 30, 64} {
		order := rng.Perm(tables)[:n]
		at := rng.IntN(rows)
		where, want := []string{fmt.Sprintf("a%d = %d", order[0], at)}, ""
		var from, items []string
		for i, k := range order {
			items, from = append(items, fmt.Sprintf("a%d", k)), append(from, fmt.Sprintf("j%d", k))
			want += fmt.Sprintf("%d | ", at)
			at = next[k][at]
			if i > 0 {
				where = append(where, fmt.Sprintf("b%d = a%d", order[i-1], k))
			}
		}
		rng.Shuffle(n, func(i, j int) { from[i], from[j] = from[j], from[i] })
		rng.Shuffle(n, func(i, j int) { where[i], where[j] = where[j], where[i] })
		q := "SELECT " + strings.Join(items, ", ") + " FROM " + strings.Join(from, ", ") + " WHERE " + strings.Join(where, " AND ")
		got, err := b.ours(q, true, 2)
		if err != nil || len(got) != 1 || got[0] != want {
			t.Errorf("%d tables: %v %v, want %s", n, got, err, want)
		}
	}
}
