package present_test

import (
	"bytes"
	"errors"
	"io"
	"math"
	"testing"

	"github.com/parquet-go/parquet-go"
	"github.com/thedatashed/xlsxreader"

	"nearcell/catalog/column"
	"nearcell/engine/present"
)

// everyType is a table with a row of values, one of NULLs and one of hard ones.
func everyType() (column.Schema, column.Batch) {
	metre := column.ParseUnit("m³")
	s := column.Schema{
		{Name: "zeta", Type: column.Integer}, {Name: "volume", Type: column.Real, Unit: metre},
		{Name: "id", Type: column.Text}, {Name: "ok", Type: column.Boolean},
		{Name: "t", Type: column.Timestamp}, {Name: "span", Type: column.Interval}, {Name: "p", Type: column.Point},
	}
	at, _, err := column.ParseTimestamp("2031-04-07 08:15:00.25")
	if err != nil {
		panic(err)
	}
	var b column.Batch
	for i, f := range s {
		x := column.NewBuilder(f.Type, f.Unit)
		switch i {
		case 0:
			x.AppendInt(42)
			x.AppendNull()
			x.AppendInt(math.MaxInt64)
		case 1:
			x.AppendFloat(0.1)
			x.AppendNull()
			x.AppendFloat(math.Inf(1))
		case 2:
			x.AppendText("=1+1")
			x.AppendNull()
			x.AppendText("<ü> & \"7\"")
		case 3:
			x.AppendBool(true)
			x.AppendNull()
			x.AppendBool(false)
		case 4:
			x.AppendInt(at)
			x.AppendNull()
			x.AppendInt(-3_000_000_000_000_000) // in 1874
		case 5:
			x.AppendInt(6 * 3_600_000_000)
			x.AppendNull()
			x.AppendInt(-1)
		case 6:
			x.AppendPoint([3]float64{1, 2, 0.3})
			x.AppendNull()
			x.AppendPoint([3]float64{-0.5, 1e300, 5e-324})
		}
		b.Cols = append(b.Cols, x.Finish())
	}
	b.N = 3
	return s, b
}

func written(t *testing.T, f present.Format, o present.Options) []byte {
	t.Helper()
	var out bytes.Buffer
	w, err := present.New(f, &out, o)
	if err != nil {
		t.Fatal(err)
	}
	s, b := everyType()
	if err := w.Begin(s); err != nil {
		t.Fatal(err)
	}
	if err := w.Batch(&b); err != nil {
		t.Fatal(err)
	}
	if rows, unwritten, err := w.End(); rows != 3 || unwritten != 0 || err != nil {
		t.Fatalf("End: %d rows, %d unwritten, %v", rows, unwritten, err)
	}
	return out.Bytes()
}

func TestParquetKeepsEveryBit(t *testing.T) {
	data := written(t, present.AsParquet, present.Options{})
	if !bytes.Equal(data, written(t, present.AsParquet, present.Options{})) {
		t.Error("the same rows gave other bytes")
	}
	f, err := parquet.OpenFile(bytes.NewReader(data), int64(len(data)))
	if err != nil {
		t.Fatal(err)
	}
	var names []string
	for _, c := range f.Schema().Columns() {
		names = append(names, c[0])
	}
	want := []string{"zeta", "volume", "id", "ok", "t", "span", "p.x", "p.y", "p.z"}
	if len(names) != len(want) {
		t.Fatalf("columns %q", names)
	}
	for i := range want {
		if names[i] != want[i] {
			t.Fatalf("columns %q, want %q", names, want)
		}
	}
	if units, _ := f.Lookup("units"); units != `{"span":"us","volume":"m^3"}` {
		t.Errorf("units %s", units)
	}
	r := parquet.NewReader(f)
	rows := make([]parquet.Row, 3)
	if n, err := r.ReadRows(rows); n != 3 || err != nil && err != io.EOF {
		t.Fatal(n, err)
	}
	for i := range want {
		if !rows[1][i].IsNull() {
			t.Errorf("%s of the row of NULLs is %v", want[i], rows[1][i])
		}
	}
	if v := rows[0][1].Double(); v != 0.1 {
		t.Errorf("volume %v", v)
	}
	if v := rows[2][1].Double(); !math.IsInf(v, 1) {
		t.Errorf("infinite volume %v", v)
	}
	if v := rows[2][0].Int64(); v != math.MaxInt64 {
		t.Errorf("zeta %v", v)
	}
	if v := rows[2][2].String(); v != "<ü> & \"7\"" {
		t.Errorf("id %q", v)
	}
	if v := rows[0][4].Int64(); v != 1_933_316_100_250_000 { // 2031-04-07 08:15:00.25, counted by hand from 22,376 days
		t.Errorf("t %d", v)
	}
	if v := rows[2][8].Double(); v != 5e-324 {
		t.Errorf("p.z %v", v)
	}
}

func TestParquetRefusesTwoOfAName(t *testing.T) {
	w, err := present.New(present.AsParquet, io.Discard, present.Options{})
	if err != nil {
		t.Fatal(err)
	}
	err = w.Begin(column.Schema{{Name: "a", Type: column.Real}, {Name: "a", Type: column.Text}})
	var repeated *present.RepeatedColumnError
	if !errors.As(err, &repeated) || repeated.Name != "a" {
		t.Fatalf("got %v", err)
	}
}

// An independent reader of the format finds what was written.
func TestSheetIsRead(t *testing.T) {
	data := written(t, present.AsXLSX, present.Options{Units: true})
	if !bytes.Equal(data, written(t, present.AsXLSX, present.Options{Units: true})) {
		t.Error("the same rows gave other bytes")
	}
	x, err := xlsxreader.NewReader(data)
	if err != nil {
		t.Fatal(err)
	}
	var got [][]string // without the row of NULLs, whose cells are empty
	for row := range x.ReadRows(x.Sheets[0]) {
		if row.Error != nil {
			t.Fatal(row.Error)
		}
		cells := make([]string, 7)
		for _, c := range row.Cells {
			cells[c.ColumnIndex()] = c.Value
		}
		got = append(got, cells)
	}
	want := [][]string{
		{"zeta", "volume [m^3]", "id", "ok", "t", "span", "p"},
		{"42", "0.1", "=1+1", "1", "2031-04-07T08:15:00Z", "1899-12-30T06:00:00Z", "POINT(1, 2, 0.3)"},
		{"9223372036854775807", "Infinity", "<ü> & \"7\"", "0", "1874-12-07 18:40:00", "-00:00:00.000001", "POINT(-0.5, 1e+300, 5e-324)"},
	}
	if len(got) != len(want) {
		t.Fatalf("%d rows: %q", len(got), got)
	}
	for i := range want {
		for k := range want[i] {
			if got[i][k] != want[i][k] {
				t.Errorf("row %d, column %d: %q, want %q", i+1, k+1, got[i][k], want[i][k])
			}
		}
	}
}

func TestSheetLimits(t *testing.T) {
	w, err := present.New(present.AsXLSX, io.Discard, present.Options{})
	if err != nil {
		t.Fatal(err)
	}
	if err := w.Begin(make(column.Schema, 16_385)); !errors.Is(err, present.ErrSheetFull) {
		t.Errorf("16,385 columns: %v", err)
	}
	w, _ = present.New(present.AsXLSX, io.Discard, present.Options{})
	if err := w.Begin(column.Schema{{Name: "a", Type: column.Text}}); err != nil {
		t.Fatal(err)
	}
	b := column.NewBuilder(column.Text, nil)
	b.AppendText(string(bytes.Repeat([]byte("x"), 32_768)))
	if err := w.Batch(&column.Batch{N: 1, Cols: []column.Vector{b.Finish()}}); !errors.Is(err, present.ErrSheetFull) {
		t.Errorf("32,768 characters: %v", err)
	}
}
