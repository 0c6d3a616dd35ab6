package present

import (
	"bytes"
	"context"
	"encoding/json"
	"math"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
	"nearcell/catalog/reader/csv"
)

func TestNumber(t *testing.T) {
	cases := []struct {
		f      float64
		digits int
		want   string
	}{
		{0, 6, "0"}, {math.Copysign(0, -1), 6, "0"}, {1, 6, "1"}, {19.4781368, 6, "19.4781"}, {3420, 6, "3420"},
		{1234567.8, 6, "1234568"}, {99999.96, 6, "100000"}, {999999.5, 6, "1000000"}, {0.00310912, 6, "0.00310912"},
		{-0.5, 6, "-0.5"}, {1e15, 6, "1e15"}, {123456789012345, 6, "123456789012345"}, {1.5e-7, 6, "1.5e-07"},
		{2.0 / 3, 3, "0.667"}, {19.99, 2, "20"}, {math.Inf(1), 6, "∞"}, {math.Inf(-1), 6, "-∞"}, {0.1, 17, "0.10000000000000001"},
	}
	for _, c := range cases {
		if got := Number(c.f, c.digits); got != c.want {
			t.Errorf("Number(%v, %d) = %s, wanted %s", c.f, c.digits, got, c.want)
		}
	}
}

// TestNumberLaw: what is printed lies within half a unit of the last digit asked
// for, and 17 digits read back to the same bits.
func TestNumberLaw(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		f := rapid.Float64().Draw(t, "f")
		if math.IsNaN(f) || math.Abs(f) > 1e300 { // rounding up may leave the range
			return
		}
		digits := rapid.IntRange(1, MaxDigits).Draw(t, "digits")
		back, err := strconv.ParseFloat(Number(f, digits), 64)
		if err != nil {
			t.Fatal(err)
		}
		if off := math.Abs(back - f); off > math.Abs(f)*0.5000001*math.Pow(10, float64(1-digits)) {
			t.Fatalf("%v to %d digits is %v", f, digits, back)
		}
		if back, _ = strconv.ParseFloat(Number(f, MaxDigits), 64); back != f {
			t.Fatalf("%v reads back as %v", f, back)
		}
	})
}

// sample has every awkward value that a column can hold.
func sample() *column.Table {
	texts := column.NewBuilder(column.Text, nil)
	for _, s := range []string{"", "a,b", `say "x"`, "two\nlines", "  ", "=1+1"} {
		texts.AppendText(s)
	}
	texts.AppendNull()
	reals := column.NewBuilder(column.Real, column.Symbol("m").Pow(3))
	for _, f := range []float64{0.1, 1e300, 5e-324, -2.5, 1 << 53, 1.0 / 3} {
		reals.AppendFloat(f)
	}
	reals.AppendNull()
	t := &column.Table{
		Schema: column.Schema{{Name: "text", Type: column.Text}, {Name: "volume", Type: column.Real, Unit: column.Symbol("m").Pow(3)}},
		Cols:   []column.Vector{texts.Finish(), reals.Finish()},
	}
	t.N = t.Cols[0].N
	return t
}

func write(t *testing.T, f Format, o Options, table *column.Table) string {
	t.Helper()
	var out bytes.Buffer
	w, err := New(f, &out, o)
	if err != nil {
		t.Fatal(err)
	}
	if err := w.Begin(table.Schema); err != nil {
		t.Fatal(err)
	}
	b := table.Batch(0, table.N)
	if err := w.Batch(&b); err != nil {
		t.Fatal(err)
	}
	rows, _, err := w.End()
	if err != nil || rows != int64(table.N) {
		t.Fatalf("%d rows of %d, %v", rows, table.N, err)
	}
	return out.String()
}

// TestCSVReadsBack writes CSV and reads it with the catalog's own reader: every
// value, NULL, empty text and unit comes back.
func TestCSVReadsBack(t *testing.T) {
	table := sample()
	text := write(t, AsCSV, Options{Units: true}, table)
	if !strings.HasPrefix(text, "text,volume [m^3]\n") {
		t.Errorf("heading: %s", text)
	}
	back, err := csv.Reader{}.Read(context.Background(), &reader.Source{Name: "x.csv", Data: []byte(text)},
		reader.Options{TextColumns: []string{"text"}})
	if err != nil {
		t.Fatal(err)
	}
	for c := range table.Cols {
		if !column.SameUnit(back.Table.Schema[c].Unit, table.Schema[c].Unit) {
			t.Errorf("the unit of %s comes back as %s", table.Schema[c].Name, back.Table.Schema[c].Unit)
		}
		for i := 0; i < table.N; i++ {
			if got, want := back.Table.Cols[c].Value(i), table.Cols[c].Value(i); got.Null != want.Null || got.S != want.S || got.F != want.F {
				t.Errorf("row %d, column %d comes back as %+v, wanted %+v", i, c, got, want)
			}
		}
	}
}

// TestCSVOneColumn: a NULL alone in its row is not an empty line, which readers skip.
func TestCSVOneColumn(t *testing.T) {
	b := column.NewBuilder(column.Integer, nil)
	b.AppendInt(1)
	b.AppendNull()
	b.AppendInt(3)
	table := &column.Table{Schema: column.Schema{{Name: "n", Type: column.Integer}}, Cols: []column.Vector{b.Finish()}, N: 3}
	if got := write(t, AsCSV, Options{}, table); got != "n\n1\n\"\"\n3\n" {
		t.Errorf("%q", got)
	}
}

func TestQuoteFormulas(t *testing.T) {
	if got := write(t, AsCSV, Options{Formulas: true}, sample()); !strings.Contains(got, "\n'=1+1,") {
		t.Errorf("%q", got)
	}
}

// TestJSONReadsBack reads JSON lines with the standard library.
func TestJSONReadsBack(t *testing.T) {
	table := sample()
	lines := strings.Split(strings.TrimSpace(write(t, AsJSONLines, Options{}, table)), "\n")
	for i, line := range lines {
		var row struct {
			Text   *string
			Volume *float64
		}
		if err := json.Unmarshal([]byte(line), &row); err != nil {
			t.Fatal(err)
		}
		want := table.Cols[1].Value(i)
		if (row.Volume == nil) != want.Null || row.Volume != nil && *row.Volume != want.F {
			t.Errorf("row %d: %s", i, line)
		}
		if text := table.Cols[0].Value(i); (row.Text == nil) != text.Null || row.Text != nil && *row.Text != text.S {
			t.Errorf("row %d: %s", i, line)
		}
	}
	var all []map[string]any
	if err := json.Unmarshal([]byte(write(t, AsJSON, Options{}, table)), &all); err != nil || len(all) != table.N {
		t.Errorf("%d objects, %v", len(all), err)
	}
}
