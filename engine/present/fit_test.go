package present

import (
	"strings"
	"testing"

	"github.com/clipperhouse/displaywidth"
	"pgregory.net/rapid"

	"nearcell/catalog/column"
)

// fatal is what testing and rapid share.
type fatal interface {
	Helper()
	Fatal(args ...any)
}

// fitted prints one table of texts and numbers with a width.
func fitted(t fatal, width int, names []string, rows [][]string, kinds []column.Type) (printed string, out []string) {
	t.Helper()
	var b strings.Builder
	w, err := New(AsTable, &b, Options{Width: width})
	if err != nil {
		t.Fatal(err)
	}
	schema := make(column.Schema, len(names))
	batch := column.Batch{N: len(rows)}
	for i, n := range names {
		schema[i] = column.Field{Name: n, Type: kinds[i]}
		builder := column.NewBuilder(kinds[i], nil)
		for _, row := range rows {
			if kinds[i] == column.Text {
				builder.Append(column.String(row[i]))
			} else {
				builder.Append(column.Int(int64(len(row[i]))))
			}
		}
		batch.Cols = append(batch.Cols, builder.Finish())
	}
	if err := w.Begin(schema); err != nil {
		t.Fatal(err)
	}
	if err := w.Batch(&batch); err != nil {
		t.Fatal(err)
	}
	if _, _, err := w.End(); err != nil {
		t.Fatal(err)
	}
	return b.String(), w.(Fitted).LeftOut()
}

func TestFitBreaksTextsBeforeItCuts(t *testing.T) {
	names := []string{"what", "n", "meaning"}
	kinds := []column.Type{column.Text, column.Integer, column.Text}
	rows := [][]string{{"volume", "four", "the space that is nearer to a site than to any other"}}
	got, out := fitted(t, 40, names, rows, kinds)
	want := "what    n  meaning\n" + strings.Repeat("─", 40) + "\n" +
		"volume  4  the space that is nearer to a\n           site than to any other\n"
	if got != want || out != nil {
		t.Errorf("printed\n%s%q left out", got, out)
	}
	got, out = fitted(t, 20, names, rows, kinds)
	if want := "what    n\n─────────\nvolume  4\n"; got != want || len(out) != 1 || out[0] != "meaning" {
		t.Errorf("printed\n%s%q left out", got, out)
	}
}

// No line is wider than asked for unless it is of the first column alone, every
// word of a column that is printed is there, and what is left out is named.
func TestFitLaws(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 6).Draw(t, "columns")
		width := rapid.IntRange(1, 100).Draw(t, "width")
		kinds, names := make([]column.Type, n), make([]string, n)
		for i := range n {
			kinds[i] = rapid.SampledFrom([]column.Type{column.Text, column.Integer}).Draw(t, "kind")
			names[i] = rapid.SampledFrom([]string{"a", "volume", "日本", "a_rather_long_name_of_a_column"}).Draw(t, "name")
		}
		rows := make([][]string, rapid.IntRange(0, 4).Draw(t, "rows"))
		for r := range rows {
			for range n {
				rows[r] = append(rows[r], rapid.StringMatching(`([a-z日本é]{1,30} ?){0,12}`).Draw(t, "cell"))
			}
		}
		printed, out := fitted(t, width, names, rows, kinds)
		kept := n - len(out)
		if kept < 1 {
			t.Fatalf("all columns are left out")
		}
		for i, name := range out {
			if name != names[kept+i] {
				t.Fatalf("%q are left out of %q", out, names)
			}
		}
		for _, line := range strings.Split(printed, "\n") {
			if w := displaywidth.String(line); w > width && kept > 1 {
				t.Fatalf("%d columns in a width of %d:\n%s", w, width, printed)
			}
		}
		for _, row := range rows {
			for i, cell := range row[:kept] {
				for _, word := range strings.Fields(cell) {
					if kinds[i] == column.Text && displaywidth.String(word) < narrowText && !strings.Contains(printed, word) {
						t.Fatalf("%q is lost:\n%s", word, printed)
					}
				}
			}
		}
	})
}
