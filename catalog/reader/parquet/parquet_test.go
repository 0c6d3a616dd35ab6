package parquet

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"math"
	"strings"
	"testing"
	"time"

	"github.com/parquet-go/parquet-go"
	"github.com/parquet-go/parquet-go/deprecated"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

func read(files ...[]byte) (*reader.Result, error) {
	var sources []*reader.Source
	for i, data := range files {
		sources = append(sources, &reader.Source{Name: fmt.Sprintf("f%d.parquet", i), Data: data})
	}
	return Reader{}.ReadFiles(context.Background(), sources, reader.Options{})
}

func written[T any](t testing.TB, rows []T, o ...parquet.WriterOption) []byte {
	var b bytes.Buffer
	w := parquet.NewGenericWriter[T](&b, o...)
	half := len(rows) / 2
	if _, err := w.Write(rows[:half]); err != nil {
		t.Fatal(err)
	}
	w.Flush() // two row groups
	if _, err := w.Write(rows[half:]); err != nil {
		t.Fatal(err)
	}
	if err := w.Close(); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

func shown(t *column.Table) string {
	var b strings.Builder
	for i, f := range t.Schema {
		fmt.Fprintf(&b, "%s %s:", f.Name, f.Type)
		for row := range t.N {
			v := t.Cols[i].Value(row)
			switch {
			case v.Null:
				b.WriteString(" NULL")
			case v.Type == column.Real:
				fmt.Fprint(&b, " ", v.F)
			case v.Type == column.Text:
				fmt.Fprintf(&b, " %q", v.S)
			case v.Type == column.Boolean:
				fmt.Fprint(&b, " ", v.I != 0)
			case v.Type == column.Timestamp:
				b.WriteString(" " + column.FormatTimestamp(v.I))
			default:
				fmt.Fprint(&b, " ", v.I)
			}
		}
		b.WriteString("\n")
	}
	return b.String()
}

type all struct {
	B    bool      `parquet:"b"`
	I8   int8      `parquet:"i8"`
	U32  uint32    `parquet:"u32"`
	I64  int64     `parquet:"i64"`
	U64  uint64    `parquet:"u64"`
	F32  float32   `parquet:"f32"`
	F64  *float64  `parquet:"f64"`
	S    *string   `parquet:"s,dict"`
	E    string    `parquet:"e,enum"`
	U    [16]byte  `parquet:"u,uuid"`
	Dec  int64     `parquet:"dec,decimal(2:10)"`
	Long int64     `parquet:"long,decimal(3:18)"`
	Ms   int64     `parquet:"ms,timestamp(millisecond)"`
	Us   int64     `parquet:"us,timestamp(microsecond)"`
	Ns   time.Time `parquet:"ns,timestamp(nanosecond)"`
	Day  int32     `parquet:"day,date"`
	Tod  int64     `parquet:"tod,time(microsecond)"`
	Old  deprecated.Int96
	Sub  struct {
		A int32 `parquet:"a"`
	} `parquet:"sub"`
	List []int32          `parquet:"list,list"`
	Map  map[string]int64 `parquet:"map"`
}

func sample() []all {
	x, nan, s := 0.1, math.NaN(), "dock"
	first := all{B: true, I8: -128, U32: math.MaxUint32, I64: math.MinInt64, U64: math.MaxInt64, F32: 0.5, F64: &x, S: &s, E: "low", Dec: -1234, Long: 123456789012345678,
		Ms: 1933402500000, Us: 1933402500000001, Ns: time.Unix(1933402500, 1500).UTC(), Day: 22377, Tod: 29700000000, Old: deprecated.Int96{0, 0, 2440588}, List: []int32{1, 2}, Map: map[string]int64{"a": 1}}
	first.Sub.A = 7
	second := first
	second.F64, second.S, second.B = nil, nil, false
	third := first
	third.F64 = &nan
	return []all{first, second, third}
}

const sampleShown = `b BOOLEAN: true false true
i8 INTEGER: -128 -128 -128
u32 INTEGER: 4294967295 4294967295 4294967295
i64 INTEGER: -9223372036854775808 -9223372036854775808 -9223372036854775808
u64 INTEGER: 9223372036854775807 9223372036854775807 9223372036854775807
f32 REAL: 0.5 0.5 0.5
f64 REAL: 0.1 NULL NULL
s TEXT: "dock" NULL "dock"
e TEXT: "low" "low" "low"
u TEXT: "00000000-0000-0000-0000-000000000000" "00000000-0000-0000-0000-000000000000" "00000000-0000-0000-0000-000000000000"
dec REAL: -12.34 -12.34 -12.34
long REAL: 1.2345678901234567e+14 1.2345678901234567e+14 1.2345678901234567e+14
ms TIMESTAMP: 2031-04-08 08:15:00 2031-04-08 08:15:00 2031-04-08 08:15:00
us TIMESTAMP: 2031-04-08 08:15:00.000001 2031-04-08 08:15:00.000001 2031-04-08 08:15:00.000001
ns TIMESTAMP: 2031-04-08 08:15:00.000002 2031-04-08 08:15:00.000002 2031-04-08 08:15:00.000002
day TIMESTAMP: 2031-04-08 00:00:00 2031-04-08 00:00:00 2031-04-08 00:00:00
tod INTERVAL: 29700000000 29700000000 29700000000
Old TIMESTAMP: 1970-01-01 00:00:00 1970-01-01 00:00:00 1970-01-01 00:00:00
sub.a INTEGER: 7 7 7
`

func TestTypes(t *testing.T) {
	for name, o := range map[string][]parquet.WriterOption{
		"plain": nil, "snappy": {parquet.Compression(&parquet.Snappy)}, "gzip": {parquet.Compression(&parquet.Gzip)}, "zstd": {parquet.Compression(&parquet.Zstd)},
		"brotli": {parquet.Compression(&parquet.Brotli)}, "lz4": {parquet.Compression(&parquet.Lz4Raw)}, "pages of version 1": {parquet.DataPageVersion(1)},
	} {
		r, err := read(written(t, sample(), o...))
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		if got := shown(r.Table); got != sampleShown {
			t.Errorf("%s gives\n%swant\n%s", name, got, sampleShown)
		}
		told := fmt.Sprint(r.Facts.Columns, r.Facts.NaiveTimes)
		for _, want := range []string{"{list 1 0 list}", "{map 1 0 map", "{f64 3 1 }", "{long 2 3 123456789012345.678}", "{ns 4 3 nanoseconds}", "[day Old]"} {
			if !strings.Contains(told, want) {
				t.Errorf("%s: %s does not tell %s", name, told, want)
			}
		}
	}
}

// Every encoding of values gives the same table.
func TestEncodings(t *testing.T) {
	type coded struct {
		Plain  int64   `parquet:"plain,plain"`
		Dict   int64   `parquet:"dict,dict"`
		Delta  int64   `parquet:"delta,delta"`
		Delta4 int32   `parquet:"delta4,delta"`
		Split  float64 `parquet:"split,split"`
		Text   string  `parquet:"text,plain"`
		Words  string  `parquet:"words,dict,optional"`
		Long   string  `parquet:"long,delta"`
		Real   float64 `parquet:"real,dict"`
	}
	rows := make([]coded, 5000)
	var want strings.Builder
	lines := make([]strings.Builder, 9)
	for i := range rows {
		n := int64(i)*7919 - 9000
		rows[i] = coded{n, n % 5, n * n, int32(n), float64(n) / 8, fmt.Sprint("x", n), fmt.Sprint("w", n%3), fmt.Sprint("prefix ", n/10), float64(n % 4)}
		for k, v := range []any{n, n % 5, n * n, n, float64(n) / 8, fmt.Sprintf("%q", rows[i].Text), fmt.Sprintf("%q", rows[i].Words), fmt.Sprintf("%q", rows[i].Long), float64(n % 4)} {
			fmt.Fprint(&lines[k], " ", v)
		}
	}
	for k, head := range []string{"plain INTEGER", "dict INTEGER", "delta INTEGER", "delta4 INTEGER", "split REAL", "text TEXT", "words TEXT", "long TEXT", "real REAL"} {
		fmt.Fprintf(&want, "%s:%s\n", head, lines[k].String())
	}
	for _, version := range []int{1, 2} {
		for _, page := range []int{512, 1 << 20} {
			r, err := read(written(t, rows, parquet.DataPageVersion(version), parquet.PageBufferSize(page)))
			if err != nil {
				t.Fatalf("pages of version %d of %d bytes: %v", version, page, err)
			}
			if got := shown(r.Table); got != want.String() {
				t.Errorf("pages of version %d of %d bytes give another table", version, page)
			}
		}
	}
}

func TestFaults(t *testing.T) {
	type u struct{ N uint64 }
	type f struct{ X float64 }
	type l struct {
		A []int64 `parquet:"a,list"`
	}
	type ts struct {
		T int64 `parquet:"t,timestamp(millisecond)"`
	}
	type str struct{ S string }
	for name, c := range map[string]struct {
		data   []byte
		kind   reader.FaultKind
		record int64
	}{
		"beyond 63 bits":  {written(t, []u{{1}, {2}, {math.MaxInt64 + 1}}), reader.BeyondInteger, 3},
		"an infinity":     {written(t, []f{{1}, {math.Inf(-1)}}), reader.NotFinite, 2},
		"nothing flat":    {written(t, []l{{[]int64{1}}, {nil}}), reader.NothingToRead, 0},
		"the year 300000": {written(t, []ts{{1}, {9e15}}), reader.NoSuchTime, 2},
		"no UTF-8":        {written(t, []str{{"a"}, {"\xff"}}), reader.NotUTF8, 2},
		"empty":           {nil, reader.EmptyFile, 0},
		"text":            {[]byte("a,b\n1,2\n"), reader.NotTheFormat, 0},
		"encrypted":       {[]byte("PARE0000000000000000PARE"), reader.NotSupported, 0},
		"a lying footer":  {[]byte("PAR1....\xff\xff\xff\x7fPAR1"), reader.CutShort, 0},
	} {
		_, err := read(c.data)
		var faults *reader.Faults
		if !errors.As(err, &faults) || faults.List[0].Kind != c.kind || faults.List[0].Record != c.record {
			t.Errorf("%s: %v, want %s", name, err, c.kind)
		}
	}
}

func TestFiles(t *testing.T) {
	type a struct {
		N int64
		S string
	}
	type b struct {
		S string
		N float64
	}
	r, err := read(written(t, []a{{1, "x"}}), written(t, []b{{"y", 2.5}}))
	if err != nil {
		t.Fatal(err)
	}
	if got := shown(r.Table); got != "N REAL: 1 2.5\nS TEXT: \"x\" \"y\"\n" {
		t.Error(got)
	}
	type c struct {
		N string
		S string
	}
	var faults *reader.Faults
	if _, err := read(written(t, []a{{1, "x"}}), written(t, []c{{"1", "y"}})); !errors.As(err, &faults) || faults.List[0].Kind != reader.TypesDiffer {
		t.Errorf("a number and a text: %v", err)
	}
	if r, err := read(written(t, []a{})); err != nil || r.Table.N != 0 || len(r.Table.Cols) != 2 {
		t.Errorf("no rows: %v", err)
	}
}

// Whatever is cut off or flipped, the process goes on: a fault, or a table that holds together.
func TestDamaged(t *testing.T) {
	whole := written(t, sample(), parquet.Compression(&parquet.Snappy))
	var faults *reader.Faults
	for n := 0; n < len(whole); n += 29 {
		if _, err := read(whole[:n]); !errors.As(err, &faults) {
			t.Fatalf("cut to %d of %d: %v", n, len(whole), err)
		}
	}
	for i := 0; i < len(whole); i += 11 {
		data := bytes.Clone(whole)
		data[i] ^= 1 << (i % 8)
		r, err := read(data)
		if err != nil && !errors.As(err, &faults) {
			t.Fatalf("byte %d: %v", i, err)
		}
		if err == nil {
			if err := r.Table.Validate(); err != nil {
				t.Fatalf("byte %d: %v", i, err)
			}
		}
	}
}

func FuzzRead(f *testing.F) {
	f.Add(written(f, sample()))
	f.Add(written(f, sample(), parquet.Compression(&parquet.Snappy), parquet.DataPageVersion(1)))
	f.Fuzz(func(t *testing.T, data []byte) {
		r, err := read(data)
		var faults *reader.Faults
		if err != nil && !errors.As(err, &faults) {
			t.Fatal(err)
		}
		if err == nil {
			if err := r.Table.Validate(); err != nil {
				t.Fatal(err)
			}
		}
	})
}
