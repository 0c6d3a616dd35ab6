package store

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"github.com/apache/arrow-go/v18/arrow"
	"github.com/apache/arrow-go/v18/arrow/array"
	"github.com/apache/arrow-go/v18/arrow/ipc"
	"pgregory.net/rapid"

	"nearcell/catalog/column"
)

// everyType is a table with a column of each type, n rows long, with NULLs.
func everyType(n int) *column.Table {
	types := []column.Type{column.Integer, column.Real, column.Text, column.Boolean, column.Timestamp, column.Interval, column.Point, column.Null}
	t := &column.Table{N: n}
	for k, typ := range types {
		b := column.NewBuilder(typ, nil)
		for i := range n {
			if (i+k)%7 == 3 {
				b.AppendNull()
				continue
			}
			b.Append(sampleValue(typ, i))
		}
		v := b.Finish()
		v.Unit = column.ParseUnit([]string{"", "°C", "m^3", "µg/m³"}[k%4])
		meaning := ""
		if k%2 == 1 {
			meaning = "what column " + typ.String() + " means – in words"
		}
		t.Schema = append(t.Schema, column.Field{Name: "Spalte " + typ.String(), Type: typ, Unit: v.Unit, Meaning: meaning})
		t.Cols = append(t.Cols, v)
	}
	return t
}

func sampleValue(typ column.Type, i int) column.Value {
	reals := []float64{0, math.Copysign(0, -1), 0.1, -1e300, 5e-324, math.Inf(1), math.Inf(-1)}
	switch typ {
	case column.Null:
		return column.NullOf(column.Null)
	case column.Real:
		return column.Float(reals[i%len(reals)] + float64(i/len(reals)))
	case column.Text:
		return column.String([]string{"", "L01", "Tor-Süd", "冷藏", "a\x00b", strings.Repeat("long ", 50)}[i%6] + strings.Repeat("x", i%13))
	case column.Boolean:
		return column.Bool(i%3 == 0)
	case column.Point:
		return column.Value{Type: column.Point, P: [3]float64{float64(i), -0.5, 1e6}}
	}
	return column.Value{Type: typ, I: int64(i) * 1_000_003 * int64(1-2*(i%2))}
}

func put(t testing.TB, d *Dir, key string, table *column.Table) {
	t.Helper()
	err := d.Change(context.Background(), func(tx *Tx) error { return tx.Put(key, "about "+key, table) })
	if err != nil {
		t.Fatal(err)
	}
}

func open(t testing.TB, path string) *Dir {
	t.Helper()
	d, err := Open(path)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { d.Close() })
	return d
}

func table(t testing.TB, d *Dir, key string) *column.Table {
	t.Helper()
	_, got, ok, err := d.FindTable(key)
	if err != nil || !ok {
		t.Fatalf("%s: found %v, %v", key, ok, err)
	}
	return got
}

var sizes = []int{0, 1, 63, 64, 65, 200, 1<<16 - 1, 1<<16 + 100}

func TestRoundTrip(t *testing.T) {
	path := filepath.Join(t.TempDir(), "catalog")
	d := open(t, path)
	for _, n := range sizes {
		put(t, d, fmt.Sprint("t", n), everyType(n))
	}
	again := open(t, path)
	for _, n := range sizes {
		want := everyType(n)
		got := table(t, again, fmt.Sprint("t", n))
		if err := got.Validate(); err != nil {
			t.Errorf("%d rows: %v", n, err)
		}
		if diff := column.DiffTables(got, want); diff != "" {
			t.Errorf("%d rows: %s", n, diff)
		}
	}
}

func TestRoundTripAtRandom(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		want := everyType(rapid.IntRange(0, 300).Draw(t, "rows"))
		rows := rapid.SliceOfN(rapid.Int32Range(-1, int32(want.N)-1), 0, 300).Draw(t, "gathered")
		want = column.GatherTable(want, rows)
		var b bytes.Buffer
		if err := Encode(&b, want); err != nil {
			t.Fatal(err)
		}
		// both aligned and not, so that views and copies are taken
		for shift := range 2 {
			data := append(make([]byte, shift, shift+b.Len()), b.Bytes()...)[shift:]
			got, err := Decode(data)
			if err != nil {
				t.Fatal(err)
			}
			if err := got.Validate(); err != nil {
				t.Fatal(err)
			}
			if diff := column.DiffTables(got, want); diff != "" {
				t.Fatal(diff)
			}
		}
	})
}

// The bytes depend on the values and not on how their texts are coded.
func TestSameValuesSameBytes(t *testing.T) {
	encode := func(texts ...string) []byte {
		b := column.NewBuilder(column.Text, nil)
		for _, s := range texts {
			b.AppendText(s)
		}
		v := b.Finish()
		v = column.Gather(&v, []int32{1, 2})
		var out bytes.Buffer
		if err := Encode(&out, &column.Table{N: v.N, Cols: []column.Vector{v}, Schema: column.Schema{{Name: "s", Type: column.Text}}}); err != nil {
			t.Fatal(err)
		}
		return out.Bytes()
	}
	if !bytes.Equal(encode("x", "a", "b"), encode("b", "a", "b")) {
		t.Error("the same two texts gave different files")
	}
}

// Views are views: the numbers stay in the mapped file.
func TestNoCopy(t *testing.T) {
	var b bytes.Buffer
	if err := Encode(&b, everyType(1000)); err != nil {
		t.Fatal(err)
	}
	data := b.Bytes()
	got, err := Decode(data)
	if err != nil {
		t.Fatal(err)
	}
	before := got.Cols[0].I[1]
	for i := range data {
		data[i] ^= 0xFF
	}
	if got.Cols[0].I[1] == before || got.Cols[1].F[2] == 0.1 || got.Cols[2].C[0] == 0 || got.Cols[0].Valid[0] == 0 {
		t.Error("a column was copied")
	}
}

// Arrow's own reader finds the same values, types, units and meanings.
func TestArrowReadsIt(t *testing.T) {
	for _, n := range sizes {
		path := filepath.Join(t.TempDir(), "catalog")
		d := open(t, path)
		want := everyType(n)
		put(t, d, "Hall 4", want)
		rec, _, err := d.Find("Hall 4")
		if err != nil {
			t.Fatal(err)
		}
		f, err := os.Open(filepath.Join(path, columnsName, rec.File.Name))
		if err != nil {
			t.Fatal(err)
		}
		defer f.Close()
		in, err := ipc.NewFileReader(f)
		if err != nil {
			t.Fatal(err)
		}
		batch, err := in.RecordBatchAt(0)
		if err != nil {
			t.Fatal(err)
		}
		for k, field := range in.Schema().Fields() {
			compareArrow(t, field, batch.Column(k), want.Schema[k], &want.Cols[k])
		}
	}
}

func compareArrow(t *testing.T, field arrow.Field, a arrow.Array, f column.Field, v *column.Vector) {
	t.Helper()
	unit, _ := field.Metadata.GetValue("unit")
	meaning, _ := field.Metadata.GetValue("meaning")
	if field.Name != f.Name || unit != f.Unit.String() || meaning != f.Meaning || a.Len() != v.N || a.NullN() != v.NullCount() {
		t.Errorf("%s [%s] %q: %d values, %d NULLs", field.Name, unit, meaning, a.Len(), a.NullN())
	}
	if v.Type == column.Null {
		if field.Type.ID() != arrow.NULL {
			t.Errorf("%s is %s", f.Name, field.Type)
		}
		return // the library's null arrays know how many they are, not which
	}
	for i := range v.N {
		if a.IsNull(i) != v.IsNull(i) {
			t.Fatalf("%s: value %d NULL %v", f.Name, i, a.IsNull(i))
		}
		if a.IsNull(i) {
			continue
		}
		want, same := v.Value(i), false
		switch a := a.(type) {
		case *array.Int64:
			same = a.Value(i) == want.I
		case *array.Timestamp:
			same = a.Value(i).ToTime(arrow.Microsecond).UnixMicro() == want.I && field.Type.String() == "timestamp[us, tz=UTC]"
		case *array.Duration:
			same = int64(a.Value(i)) == want.I && field.Type.String() == "duration[us]"
		case *array.Float64:
			same = math.Float64bits(a.Value(i)) == math.Float64bits(want.F)
		case *array.Boolean:
			same = a.Value(i) == (want.I == 1)
		case *array.FixedSizeList:
			p := a.ListValues().(*array.Float64).Float64Values()
			same = [3]float64(p[3*i:3*i+3]) == want.P
		case *array.Dictionary:
			same = a.Dictionary().(*array.String).Value(a.GetValueIndex(i)) == want.S
		}
		if !same {
			t.Fatalf("%s (%s): value %d is %s, want %s", f.Name, field.Type, i, a.ValueStr(i), want)
		}
	}
}

// A table that breaks the rules is not written.
func TestRefusesWhatIsWrong(t *testing.T) {
	d := open(t, filepath.Join(t.TempDir(), "catalog"))
	nan := column.New(column.Real, nil, 1)
	nan.F[0] = math.NaN()
	b := column.NewBuilder(column.Text, nil)
	b.AppendText("\xff")
	for name, v := range map[string]column.Vector{"NaN": nan, "no UTF-8": b.Finish()} {
		err := d.Change(context.Background(), func(tx *Tx) error {
			return tx.Put("k", nil, &column.Table{N: 1, Cols: []column.Vector{v}, Schema: column.Schema{{Name: "v", Type: v.Type}}})
		})
		if err == nil {
			t.Errorf("%s: written", name)
		}
		if left, _ := os.ReadDir(d.columnsPath()); len(left) != 0 {
			t.Errorf("%s: %v left behind", name, left)
		}
	}
}

// Every byte counts: one flipped bit anywhere, or a missing end, is found (here
// at places all over the files), and the other tables stay readable.
func TestDamageIsFound(t *testing.T) {
	path := filepath.Join(t.TempDir(), "catalog")
	d := open(t, path)
	put(t, d, "hall", everyType(5))
	put(t, d, "other", everyType(3))
	rec, _, err := d.Find("hall")
	if err != nil {
		t.Fatal(err)
	}
	tableFile := filepath.Join(path, columnsName, rec.File.Name)
	manifestFile := filepath.Join(path, manifestName)

	for name, file := range map[string]string{"table": tableFile, "manifest": manifestFile} {
		sound, err := os.ReadFile(file)
		if err != nil {
			t.Fatal(err)
		}
		damage := func(what string, data []byte) {
			if err := os.WriteFile(file, data, 0o666); err != nil {
				t.Fatal(err)
			}
			d, err := Open(path)
			if err == nil {
				defer d.Close()
				if _, other, ok, err := d.FindTable("other"); err != nil || !ok || other.N != 3 {
					t.Errorf("%s, %s: the other table suffers: %v", name, what, err)
				}
				_, _, _, err = d.FindTable("hall")
			}
			var damaged *DamagedError
			var newer *NewerError
			if !(errors.As(err, &damaged) && damaged.Path == file) && !(errors.As(err, &newer) && newer.Path == file) {
				t.Errorf("%s, %s: %v", name, what, err)
			}
		}
		step := max(1, len(sound)/150)
		for i := 0; i < len(sound); i += step {
			data := bytes.Clone(sound)
			data[i] ^= 1 << (i % 8)
			damage(fmt.Sprintf("bit at %d of %d flipped", i, len(sound)), data)
			damage(fmt.Sprintf("cut at %d of %d", i, len(sound)), sound[:i])
		}
		damage("a byte more", append(bytes.Clone(sound), 0))
		if err := os.WriteFile(file, sound, 0o666); err != nil {
			t.Fatal(err)
		}
	}
	if err := os.Remove(tableFile); err != nil {
		t.Fatal(err)
	}
	var damaged *DamagedError
	if _, _, _, err := open(t, path).FindTable("hall"); !errors.As(err, &damaged) || damaged.Path != tableFile {
		t.Errorf("missing: %v", err)
	}
	// a damaged table can be replaced
	put(t, d, "hall", everyType(7))
	if got := table(t, open(t, path), "hall"); got.N != 7 {
		t.Errorf("replaced: %d rows", got.N)
	}
}

func TestNewerVersion(t *testing.T) {
	path := t.TempDir()
	if err := os.WriteFile(filepath.Join(path, manifestName), seal(version+1, []byte(`{"anything": 1}`)), 0o666); err != nil {
		t.Fatal(err)
	}
	var newer *NewerError
	if _, err := Open(path); !errors.As(err, &newer) || newer.Version != version+1 {
		t.Errorf("%v", err)
	}
}

func TestNotAFolder(t *testing.T) {
	file := filepath.Join(t.TempDir(), "file")
	if err := os.WriteFile(file, nil, 0o666); err != nil {
		t.Fatal(err)
	}
	if _, err := Open(file); err == nil {
		t.Error("a file was opened as a folder")
	}
	// a folder that cannot be made: a file stands in its way
	d, err := Open(filepath.Join(t.TempDir(), "no", "such", "folder"))
	if err != nil {
		t.Fatal(err)
	}
	if recs, err := d.Records(); err != nil || len(recs) != 0 {
		t.Errorf("a folder that does not exist: %v, %v", recs, err)
	}
	if _, err := os.Stat(d.Path()); !errors.Is(err, os.ErrNotExist) {
		t.Error("looking made the folder")
	}
}
