package csv

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"unicode/utf16"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

// inUTF16 writes text as UTF-16, low byte first or last, with its byte order mark.
func inUTF16(text string, bigEndian bool) string {
	var b []byte
	for _, u := range utf16.Encode([]rune("\uFEFF" + text)) {
		if bigEndian {
			b = append(b, byte(u>>8), byte(u))
		} else {
			b = append(b, byte(u), byte(u>>8))
		}
	}
	return string(b)
}

// gist is a table in one line: names with types, then the rows; or the first fault.
func gist(data string, o reader.Options) string {
	r, err := Reader{}.Read(context.Background(), &reader.Source{Name: "f", Data: []byte(data)}, o)
	var faults *reader.Faults
	if errors.As(err, &faults) {
		x := faults.List[0]
		return fmt.Sprintf("%d:%d %s", x.Line, x.Column, x.Kind)
	}
	if err != nil {
		return err.Error()
	}
	var b strings.Builder
	for _, f := range r.Table.Schema {
		fmt.Fprintf(&b, "%s:%s ", f.Name, f.Type)
	}
	for row := range r.Table.N {
		b.WriteString("/")
		for i := range r.Table.Cols {
			v := r.Table.Cols[i].Value(row)
			switch {
			case v.Null:
				b.WriteString(" NULL")
			case v.Type == column.Text:
				fmt.Fprintf(&b, " %q", v.S)
			default:
				b.WriteString(" " + strings.Fields(v.String())[0])
			}
		}
	}
	return b.String()
}

// TestEdges reads files as people have them, and as sets of test files have them: each is
// read right, or refused at the right place. What is right is RFC 4180 (Shafranovich,
// 2005) where it speaks, and common practice of spreadsheets and loggers elsewhere.
func TestEdges(t *testing.T) {
	comma := reader.Options{DecimalMark: ','}
	for _, c := range []struct {
		name, data string
		o          reader.Options
		want       string
	}{
		{"doubled quotation marks", "a,b\n\"x \"\"y\"\" z\",1\n\"\"\"\",2\n\"\",3\n", reader.Options{}, `a:TEXT b:INTEGER / "x \"y\" z" 1/ "\"" 2/ "" 3`},
		{"line breaks in fields", "a,b\n\"one\ntwo\",1\n\"three\r\nfour\",2\n\"five\rsix\",3\n", reader.Options{}, `a:TEXT b:INTEGER / "one\ntwo" 1/ "three\r\nfour" 2/ "five\rsix" 3`},
		{"a comma in a field", "a,b\n\"x,y\",1\n", reader.Options{}, `a:TEXT b:INTEGER / "x,y" 1`},
		{"JSON in a field", "key,val\n1,\"{\"\"type\"\": \"\"Point\"\", \"\"c\"\": [102.0, 0.5]}\"\n", reader.Options{}, `key:INTEGER val:TEXT / 1 "{\"type\": \"Point\", \"c\": [102.0, 0.5]}"`},
		{"CR LF", "a,b\r\n1,2\r\n", reader.Options{}, "a:INTEGER b:INTEGER / 1 2"},
		{"CR alone", "a,b\r1,2\r3,4\r", reader.Options{}, "a:INTEGER b:INTEGER / 1 2/ 3 4"},
		{"all three line breaks", "a,b\r\n1,2\n3,4\r5,6\n\r\n7,8", reader.Options{}, "a:INTEGER b:INTEGER / 1 2/ 3 4/ 5 6/ 7 8"},
		{"a byte order mark", "\xEF\xBB\xBFa,b\n1,2\n", reader.Options{}, "a:INTEGER b:INTEGER / 1 2"},
		{"a byte order mark and quotation marks", "\xEF\xBB\xBF\"a\",b\n1,2\n", reader.Options{}, "a:INTEGER b:INTEGER / 1 2"},
		{"UTF-16, low byte first", inUTF16("a,é\n1,2\n", false), reader.Options{}, "a:INTEGER é:INTEGER / 1 2"},
		{"UTF-16, high byte first", inUTF16("a,é\r\nœ\U0001F600,2\r\n", true), reader.Options{}, "a:TEXT é:INTEGER / \"œ\U0001F600\" 2"},
		{"half a character of UTF-16", inUTF16("a,b\n1,2\n", false) + "x", reader.Options{}, "3:1 not of the encoding"},
		{"UTF-16 without its mark", strings.TrimPrefix(inUTF16("abc,d\n1,2\n", false), "\xFF\xFE"), reader.Options{}, "0:0 UTF-16"},
		{"no line break at the end", "a,b\n1,2", reader.Options{}, "a:INTEGER b:INTEGER / 1 2"},
		{"empty lines at the end", "a,b\n1,2\n\n\r\n\n", reader.Options{}, "a:INTEGER b:INTEGER / 1 2"},
		{"an end of file mark", "a,b\n1,2\n\x1a", reader.Options{}, "a:INTEGER b:INTEGER / 1 2"},
		{"a short record", "a,b,c\n1,2,3\n4,5\n6,7,8\n", reader.Options{}, "3:4 wrong number of fields"},
		{"a long record", "a,b,c\n1,2,3\n4,5,6,7\n", reader.Options{}, "3:7 wrong number of fields"},
		{"a quotation mark within a field", "a,b\n5\" pipe,1\n", reader.Options{}, "2:2 stray quotation mark"},
		{"text behind a closing quotation mark", "a,b\n\"x\"y,1\n", reader.Options{}, "2:3 stray quotation mark"},
		{"a backslash before a quotation mark", "a,b\n\"x \\\"y\\\"\",1\n", reader.Options{}, "2:5 stray quotation mark"},
		{"a field that never ends", "a,b\n1,\"x\n2,y\n", reader.Options{}, "2:3 quotation mark not closed"},
		{"a byte 0", "a,b\n1,\x002\n", reader.Options{}, "2:3 NUL byte"},
		{"bytes that are no UTF-8", "a,b\nx,1\n\xe4,2\n", reader.Options{}, "3:1 not UTF-8"},
		{"Latin-1", "a,b\n\xe4,2\n", reader.Options{Encoding: reader.Latin1}, `a:TEXT b:INTEGER / "ä" 2`},
		{"a heading twice", "a,a,b\n1,2,3\n", reader.Options{}, "1:3 heading repeated"},
		{"an empty heading", "a,,b\n1,2,3\n", reader.Options{}, "1:3 heading empty"},
		{"a heading with a line break", "\"a\nb\",c\n1,2\n", reader.Options{}, "a b:INTEGER c:INTEGER / 1 2"},
		{"semicolons", "a;b\n1;2.5\n", reader.Options{}, "a:INTEGER b:REAL / 1 2.5"},
		{"semicolons and decimal commas", "a;b\n1;2,5\n3;-0,25\n", comma, "a:INTEGER b:REAL / 1 2.5/ 3 -0.25"},
		{"decimal commas in quotation marks", "a,b\n1,\"2,5\"\n", reader.Options{DecimalMark: ',', Delimiter: ','}, "a:INTEGER b:REAL / 1 2.5"},
		{"a point where commas are", "a;b\n1;2,5\n2;3,5\n3;4,5\n4;5,5\n5;6.5\n", comma, "6:3 not a number"},
		{"marks between thousands", "a,b\nx,\"1,234\"\ny,\"12,345.5\"\n", reader.Options{}, `a:TEXT b:TEXT / "x" "1,234"/ "y" "12,345.5"`},
		{"one mark between thousands", "a\n1\n2\n3\n4\n5\n6\n\"1,234\"\n", reader.Options{}, "8:1 not a number"},
		{"a line of units", "id,t,rh\n,°C,%\nL1,3.5,60\n", reader.Options{}, `id:TEXT t:REAL rh:INTEGER / "L1" 3.5 60`},
		{"quoted numbers", "a,b\n\"1\",\"2.5\"\n", reader.Options{}, "a:INTEGER b:REAL / 1 2.5"},
		{"delimiters at the end", "a,b,\n1,2,\n3,4,\n", reader.Options{}, "a:INTEGER b:INTEGER / 1 2/ 3 4"},
		{"delimiters at the end of records", "a,b\n1,2,\n3,4,\n", reader.Options{}, "a:INTEGER b:INTEGER / 1 2/ 3 4"},
		{"only a heading", "a,b\n", reader.Options{}, "a:REAL b:REAL "},
		{"only a heading without its line break", "a,b", reader.Options{}, "a:REAL b:REAL "},
		{"nothing", "", reader.Options{}, "0:0 empty file"},
		{"blank lines", "\n \r\n\n", reader.Options{}, "0:0 empty file"},
		{"a byte order mark alone", "\xEF\xBB\xBF", reader.Options{}, "0:0 empty file"},
		{"blank lines before the heading", "\n\na,b\n1,2\n", reader.Options{}, "a:INTEGER b:INTEGER / 1 2"},
		{"tabs", "a\tb\n1\t2\n", reader.Options{}, "a:INTEGER b:INTEGER / 1 2"},
		{"bars", "a|b\n1|2\n", reader.Options{}, "a:INTEGER b:INTEGER / 1 2"},
		{"delimiters of another kind in fields", "\"x;y\",\"z;w\"\n\"1;2\",\"3;4\"\n", reader.Options{}, `x;y:TEXT z;w:TEXT / "1;2" "3;4"`},
		{"a line that says the delimiter", "sep=;\r\na;b\r\n1;2,5\r\n", comma, "a:INTEGER b:REAL / 1 2.5"},
		{"a line that says an odd delimiter", "SEP=:\na:b\n1:2\n", reader.Options{}, "a:INTEGER b:INTEGER / 1 2"},
		{"a line that says too much", "sep=;;\na;b\n1;2\n", reader.Options{}, "1:6 heading empty"},
		{"one column", "a\n1\n\n2\n", reader.Options{}, "a:INTEGER / 1/ 2"},
		{"a record of delimiters", "a,b\n1,2\n,\n3,4\n", reader.Options{}, "a:INTEGER b:INTEGER / 1 2/ NULL NULL/ 3 4"},
		{"blanks around fields", "a, b\n 1 , 2.5 \n", reader.Options{}, "a:INTEGER b:REAL / 1 2.5"},
		{"forms of numbers", "a\n1e3\n-2.5E-10\n+4\n.5\n5.\n", reader.Options{}, "a:REAL / 1000/ -2.5e-10/ 4/ 0.5/ 5"},
		{"infinities", "a\n1\n2\nInf\n", reader.Options{}, "4:1 not a finite number"},
		{"a number that float64 has not", "a\n1.5\n1e400\n", reader.Options{}, "3:1 number out of range"},
		{"digits that a number would not keep", "a\n9223372036854775808\n", reader.Options{}, `a:TEXT / "9223372036854775808"`},
		{"codes", "a\n007\n010\n", reader.Options{}, `a:TEXT / "007"/ "010"`},
		{"truth values", "a\nTrue\nFALSE\n", reader.Options{}, "a:BOOLEAN / TRUE/ FALSE"},
		{"missing values", "a\nn/a\n1\n-\n2\n", reader.Options{Missing: []string{"n/a", "-"}}, "a:INTEGER / NULL/ 1/ NULL/ 2"},
		{"a preamble", "# device 7\nserial: 99\n\na,b\n1,2.5\n", reader.Options{Heading: 4}, "a:INTEGER b:REAL / 1 2.5"},
		{"a preamble that nobody told of", "device\na,b\n1,2.5\n", reader.Options{}, "2:3 wrong number of fields"},
		{"a heading beyond the end", "a,b\n1,2\n", reader.Options{Heading: 9}, "9:0 no heading"},
	} {
		if got := gist(c.data, c.o); got != c.want {
			t.Errorf("%s:\n%s\nexpected\n%s", c.name, got, c.want)
		}
	}
}

// Thousands of columns, and lines of ten million characters.
func TestLargeEdges(t *testing.T) {
	const columns = 5000
	var b bytes.Buffer
	for row := range 4 {
		for i := range columns {
			if i > 0 {
				b.WriteByte(';')
			}
			if row == 0 {
				fmt.Fprintf(&b, "c%d", i)
			} else {
				fmt.Fprintf(&b, "%d,%d", row, i)
			}
		}
		b.WriteString("\r\n")
	}
	r, err := Reader{}.Read(context.Background(), &reader.Source{Data: b.Bytes()}, reader.Options{DecimalMark: ','})
	if err != nil || len(r.Table.Cols) != columns || r.Table.N != 3 || r.Table.Cols[25].F[1] != 2.25 {
		t.Fatal(err)
	}
	long := strings.Repeat("x,\"y", 5<<19)
	text := "a,b\n1," + quoteField(long) + "\n2,z\n"
	r, err = Reader{}.Read(context.Background(), &reader.Source{Data: []byte(text)}, reader.Options{})
	if err != nil || r.Table.N != 2 || r.Table.Cols[1].Value(0).S != long {
		t.Fatal(err)
	}
	if got := gist("a,b\n1,"+strings.Repeat("7", 10<<20)+"\n", reader.Options{}); !strings.HasPrefix(got, "a:INTEGER b:TEXT") {
		t.Error(got[:60])
	}
	if got := gist("a,b\n1,2\n"+strings.Repeat(",", 10<<20)+"\n", reader.Options{}); got != "3:3 wrong number of fields" {
		t.Error(got)
	}
}

func quoteField(s string) string { return `"` + strings.ReplaceAll(s, `"`, `""`) + `"` }

// Columns that stay TEXT for their marks between thousands are told of.
func TestThousandsAreTold(t *testing.T) {
	for text, reason := range map[string]reader.TextReason{
		"1,234": reader.Thousands, "1,234,567": reader.Thousands, "12 345.5": reader.Thousands, "1'234": reader.Thousands, "-1 234": reader.Thousands,
		"1\u202f234,5": reader.Thousands, "1.234,5": reader.Thousands, "3,5": reader.OtherMark, "1,23": reader.OtherMark,
	} {
		r, err := Reader{}.Read(context.Background(), &reader.Source{Data: []byte("a;b\n1;" + text + "\n")}, reader.Options{})
		if err != nil || len(r.Facts.StayedText) != 1 || r.Facts.StayedText[0].Reason != reason {
			t.Errorf("%s: %v, %+v", text, err, r.Facts.StayedText)
		}
	}
}

// A mapped file is read as any other; one that shrinks while it is read ends the reading.
func TestMapped(t *testing.T) {
	path := filepath.Join(t.TempDir(), "f.csv")
	data := append([]byte("t,v\n"), bytes.Repeat([]byte("1,2.5\n"), reader.MappedFrom/6+1)...)
	if err := os.WriteFile(path, data, 0o666); err != nil {
		t.Fatal(err)
	}
	src, err := reader.Map("f", path)
	if err != nil {
		t.Fatal(err)
	}
	r, err := Reader{}.Read(context.Background(), src, reader.Options{Threads: 2})
	if err != nil || r.Table.N != reader.MappedFrom/6+1 || r.Table.Cols[1].F[r.Table.N-1] != 2.5 {
		t.Fatal(err)
	}
	if r.Files[0].SHA256 != (&reader.Source{Data: data}).SHA256() {
		t.Error("another checksum")
	}
	if err := src.Close(); err != nil {
		t.Error(err)
	}
	for _, threads := range []int{1, 2} {
		if err := os.WriteFile(path, data, 0o666); err != nil {
			t.Fatal(err)
		}
		if src, err = reader.Map("f", path); err != nil {
			t.Fatal(err)
		}
		cut := false
		_, err = Reader{}.Read(context.Background(), src, reader.Options{Threads: threads, Progress: func(done, total int64) {
			if !cut && done > 1<<20 {
				cut = true
				if err := os.Truncate(path, 4096); err != nil {
					t.Error(err)
				}
			}
		}})
		if !errors.Is(err, reader.ErrChanged) {
			t.Errorf("%d threads, a file that shrank: %v", threads, err)
		}
		if err := src.Close(); !errors.Is(err, reader.ErrChanged) {
			t.Errorf("closed: %v", err)
		}
	}
}

// A table beyond the memory that it may take is refused before it is made.
func TestMemory(t *testing.T) {
	var memory *reader.MemoryError
	_, err := Reader{}.Read(context.Background(), &reader.Source{Data: readings(5000)}, reader.Options{Memory: 1000})
	if !errors.As(err, &memory) || memory.Rows != 5000 || memory.Need < 5000*8 {
		t.Errorf("%v", err)
	}
}
