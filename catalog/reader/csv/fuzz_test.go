package csv

import (
	"bytes"
	"context"
	stdcsv "encoding/csv"
	"errors"
	"fmt"
	"io"
	"strings"
	"testing"
	"unicode/utf8"

	"pgregory.net/rapid"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

var seeds = []string{
	"", "a", "a,b\n1,2\n", "\xEF\xBB\xBFid;temp [°C]\r\n1;1,5\r\n2;n/a\r\n", "a,b\n1,\"x\n\"\"y\"\"\"\n2,\n",
	"t\n2031-04-07 08:15:00\n2031-02-30\n", "a,a\n1,2\n", "v\nNaN\n1\n", "a,b,,\n1,2,,\n", "a\n\"\n1\n\"\"\n", "x\n007\n1\n",
	"a|b\n1|2|3\n", "a\tb\n-0\t1e400\n", "id,on\n1,true\n2,FALSE\n3,x\n4,true\n5,true\n", "a,b\r1,2\r", "x [m] [-],x [m] [ft]\n1,2\n",
	"v,w\n99999999999999999999,1.0\n1,2\n", "\xff\xfea\x00", "a,b\n1,caf\xe9\n", "a b\n\" \" \n", "a,b\n1,\x00\n", "a,b\n , \n\" \",\"\"\nx,y\n",
}

// FuzzCSV: whatever the file, reading it does not panic, faults have places in
// the file, every record is a row, refused or blank, and what was imported is
// the same again when it is written and imported once more.
func FuzzCSV(f *testing.F) {
	for i, s := range seeds {
		f.Add([]byte(s), uint8(i))
	}
	f.Fuzz(func(t *testing.T, data []byte, how uint8) { checkFile(t, data, how) })
}

// fataler is a testing.T of either kind.
type fataler interface {
	Helper()
	Fatalf(string, ...any)
}

func checkFile(t fataler, data []byte, how uint8) {
	t.Helper()
	o := reader.Options{Missing: []string{"n/a"}, MaxFaults: 3}
	if how&1 != 0 {
		o.DecimalMark = ','
	}
	if how&2 != 0 {
		o.Delimiter = []rune{',', ';', '|', 'é'}[how>>2&3]
	}
	src := &reader.Source{Name: "f", Data: data}
	r, err := Reader{}.Read(context.Background(), src, o)
	var faults *reader.Faults
	if errors.As(err, &faults) {
		checkFaults(t, data, faults)
	} else if err != nil {
		t.Fatalf("%v", err)
	}

	refused := 0
	o.Refused = func(line int, raw []byte, f reader.Fault) error {
		if line < 1 || line > f.Line || !bytes.Contains(data, raw) {
			t.Fatalf("refused line %d, fault on line %d", line, f.Line)
		}
		refused++
		return nil
	}
	all, err := Reader{}.Read(context.Background(), src, o)
	if err != nil {
		if r != nil || !errors.As(err, &faults) {
			t.Fatalf("with and without refusing lines: %v, %v", r, err)
		}
		return
	}
	if (r == nil) != (refused > 0) || all.Facts.Refused != refused {
		t.Fatalf("%d lines refused, %d in the facts; without refusing: %v", refused, all.Facts.Refused, faults)
	}
	if err := all.Table.Validate(); err != nil {
		t.Fatalf("%v", err)
	}
	if r == nil {
		return
	}
	if d := column.DiffTables(r.Table, all.Table); d != "" {
		t.Fatalf("refusing nothing changes the table: %s", d)
	}
	checkAgain(t, r.Table, o.DecimalMark)
}

func checkFaults(t fataler, data []byte, faults *reader.Faults) {
	if len(faults.List) == 0 || len(faults.List) > 3 || len(faults.List) < 3 && faults.More > 0 || faults.Error() == "" {
		t.Fatalf("%d faults and %d more", len(faults.List), faults.More)
	}
	lines := bytes.Count(data, []byte("\n")) + bytes.Count(data, []byte("\r")) + 1
	for i, f := range faults.List {
		if f.Kind == reader.NoFault || f.Line < 0 || f.Line > lines || f.Column < 0 || f.Column > utf8.RuneCountInString(f.Source)+1 {
			t.Fatalf("fault at %d:%d of %q", f.Line, f.Column, f.Source)
		}
		if i > 0 && f.Line < faults.List[i-1].Line {
			t.Fatalf("faults out of order: line %d after %d", f.Line, faults.List[i-1].Line)
		}
	}
}

// checkAgain writes a table as a file and reads it back, with the decimal mark
// that it was read with: a text may look like a number with another one.
func checkAgain(t fataler, want *column.Table, mark rune) {
	if want.N > 0 && len(want.Cols) == 1 && want.Cols[0].NullCount() > 0 && want.Cols[0].Type == column.Text {
		return // NULL and the empty text look alike there, as the documentation says
	}
	data := export(want, mark)
	r, err := Reader{}.Read(context.Background(), &reader.Source{Name: "again", Data: data}, reader.Options{Delimiter: ',', DecimalMark: mark})
	if err != nil {
		t.Fatalf("written as %q: %v", data, err)
	}
	if r.Files[0].UnitsLine > 0 {
		return // texts such as A over a number: a blank line stood between them and the heading
	}
	got := r.Table
	for i := range got.Cols {
		// A column of REALs that all are whole numbers comes back as INTEGER.
		if i < len(want.Cols) && want.Cols[i].Type == column.Real && got.Cols[i].Type == column.Integer {
			b := column.NewBuilder(column.Real, got.Cols[i].Unit)
			b.AppendVector(&got.Cols[i], nil)
			got.Cols[i], got.Schema[i].Type = b.Finish(), column.Real
		}
	}
	if d := column.DiffTables(got, want); d != "" {
		t.Fatalf("written as %q: %s", data, d)
	}
}

// export writes a table as RFC 4180 and the documentation of the package say.
func export(t *column.Table, mark rune) []byte {
	var b bytes.Buffer
	quote := func(s string) { b.WriteString(`"` + strings.ReplaceAll(s, `"`, `""`) + `"`) }
	for i, f := range t.Schema {
		if i > 0 {
			b.WriteByte(',')
		}
		switch {
		case f.Unit != nil:
			quote(f.Name + " [" + f.Unit.ASCII() + "]")
		case strings.HasSuffix(f.Name, "]"):
			quote(f.Name + " [-]")
		default:
			quote(f.Name)
		}
	}
	b.WriteByte('\n')
	for i := range t.N {
		for j := range t.Cols {
			if j > 0 {
				b.WriteByte(',')
			}
			v := &t.Cols[j]
			s := string(v.AppendValue(nil, i))
			if v.Type == column.Real && mark == ',' {
				s = strings.ReplaceAll(s, ".", ",")
			}
			switch {
			case v.IsNull(i) && len(t.Cols) == 1, !v.IsNull(i) && (strings.TrimSpace(s) == "" || strings.ContainsAny(s, ",\"\r\n")):
				quote(s)
			default:
				b.WriteString(s)
			}
		}
		b.WriteByte('\n')
	}
	return b.Bytes()
}

// The same laws on files put together from telling pieces, which reach further
// than random bytes do.
func TestFilesOfPieces(t *testing.T) {
	pieces := append([]string{",", ",", ",", ";", "\n", "\n", "\n", "\r\n", "\r", "\"", "\"\"", " ", "1", "2.5", "-3", "1,5", "007", "n/a", "nan", "inf",
		"true", "2031-04-07", "2031-02-30 08:15Z", "x", "ö", "é", "[m]", "[1]", "\xff", "99999999999999999999", "1e400", "-0"}, seeds...)
	piece := rapid.SampledFrom(pieces)
	rapid.Check(t, func(t *rapid.T) {
		s := strings.Join(rapid.SliceOfN(piece, 0, 40).Draw(t, "pieces"), "")
		checkFile(t, []byte(s), rapid.Uint8().Draw(t, "how"))
	})
}

// Whole tables of every type, with a few spoilt values, keep the laws too.
func TestFilesOfTables(t *testing.T) {
	columns := [][]string{{"1", "-2", "9223372036854775807"}, {"1.5", "-.5", "1e-7", "1e300", "-0", "1e18"}, {"true", "FALSE"},
		{"2031-04-07", "2031-04-07T08:15:00.000001+02:00"}, {"\"\"", "\" \"", "a\"\"b", "\"a\n\"\"b\"\"\"", " x ", "L01"}, {""}, {"007", "1"}}
	rapid.Check(t, func(t *rapid.T) {
		kinds := rapid.SliceOfN(rapid.SampledFrom(columns), 1, 4).Draw(t, "columns")
		spoil := rapid.SampledFrom([]int{0, 0, 30}).Draw(t, "one in")
		var b strings.Builder
		for i := range kinds {
			fmt.Fprintf(&b, "%sc%d", strings.Repeat(",", min(i, 1)), i)
		}
		for range rapid.IntRange(0, 25).Draw(t, "rows") {
			b.WriteByte('\n')
			for i, kind := range kinds {
				b.WriteString(strings.Repeat(",", min(i, 1)))
				switch {
				case spoil > 0 && rapid.IntRange(0, spoil).Draw(t, "spoil") == 0:
					b.WriteString(rapid.SampledFrom([]string{"err", "NaN", "1", ",", "1e999"}).Draw(t, "spoilt"))
				case rapid.IntRange(0, 5).Draw(t, "null") > 0:
					b.WriteString(rapid.SampledFrom(kind).Draw(t, "value"))
				}
			}
		}
		checkFile(t, []byte(b.String()), 2)
	})
}

// The standard library's reader is the outside value for records and places. It
// differs from ours by intent in two points: it takes CR LF inside quotation
// marks for LF, and a lone CR for a character.
func TestScannerAgainstStandardLibrary(t *testing.T) {
	piece := rapid.SampledFrom([]string{",", ",", "\n", "\n", "\r\n", "\"", "\"\"", "\"x\"", "a", " ", "ö", "\"a,b\nc\"", ",\"", "\","})
	rapid.Check(t, func(t *rapid.T) {
		text := strings.Join(rapid.SliceOfN(piece, 0, 30).Draw(t, "pieces"), "")
		std := stdcsv.NewReader(strings.NewReader(text))
		std.FieldsPerRecord = -1
		s := newScanner([]byte(text), ',', 0, 1)
		for {
			more := s.next()
			for more && s.rec.start == s.rec.end { // the library skips empty lines
				more = s.next()
			}
			want, err := std.Read()
			if more == (err == io.EOF) {
				t.Fatalf("%q: a record here and none there: %v, %v", text, more, err)
			}
			if !more {
				return
			}
			var bad *stdcsv.ParseError
			if errors.As(err, &bad) {
				want := reader.BareQuote
				if s.rec.fault.kind == reader.UnclosedQuote {
					want = reader.UnclosedQuote // the library reports the end of the file instead
				} else if bad.Line != s.rec.fault.line || bad.Column != s.rec.fault.at-s.rec.fault.lineStart+1 {
					t.Fatalf("%q: %v; we say line %d, byte %d", text, err, s.rec.fault.line, s.rec.fault.at-s.rec.fault.lineStart+1)
				}
				if s.rec.fault.kind != want {
					t.Fatalf("%q: %v; we say %v", text, err, s.rec.fault.kind)
				}
				return
			}
			if s.rec.fault.kind != reader.NoFault || len(want) != len(s.rec.fields) {
				t.Fatalf("%q: %d fields, we have %d, %s", text, len(want), len(s.rec.fields), s.rec.fault.kind)
			}
			for i, f := range s.rec.fields {
				line, col := std.FieldPos(i)
				if got := strings.ReplaceAll(string(f.text), "\r\n", "\n"); got != want[i] || line != f.line || col != f.start-f.lineStart+1 {
					t.Fatalf("%q: field %q at %d:%d, we have %q at %d:%d", text, want[i], line, col, got, f.line, f.start-f.lineStart+1)
				}
			}
		}
	})
}
