package jsonl

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"strings"
	"testing"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

func read(o reader.Options, files ...string) (*reader.Result, error) {
	var sources []*reader.Source
	for i, text := range files {
		sources = append(sources, &reader.Source{Name: fmt.Sprintf("f%d.jsonl", i), Data: []byte(text)})
	}
	return Reader{}.ReadFiles(context.Background(), sources, o)
}

// shown is a table as text: name, type and values of each column.
func shown(t *column.Table) string {
	var b strings.Builder
	for i, f := range t.Schema {
		fmt.Fprintf(&b, "%s %s", f.Name, f.Type)
		if f.Unit != nil {
			fmt.Fprintf(&b, " [%s]", f.Unit)
		}
		b.WriteByte(':')
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

func TestRead(t *testing.T) {
	for name, c := range map[string]struct {
		o    reader.Options
		in   string
		want string
	}{
		"types": {in: `{"id":1,"temp [°C]":4.5,"ok":true,"note":"5","t":"2031-04-07T08:15:00Z"}` + "\n" + `{"id":-9223372036854775808,"temp [°C]":1e2,"ok":null,"note":"","t":null}` + "\n",
			want: "id INTEGER: 1 -9223372036854775808\ntemp REAL [°C]: 4.5 100\nok BOOLEAN: true NULL\nnote TEXT: \"5\" \"\"\nt TIMESTAMP: 2031-04-07 08:15:00 NULL\n"},
		"nested":        {in: `{"a":{"b":1,"c":{"d":"x"}},"e":2}`, want: "a.b INTEGER: 1\na.c.d TEXT: \"x\"\ne INTEGER: 2\n"},
		"missing keys":  {in: "{\"a\":1}\n\n{\"b\":2}\r\n", want: "a INTEGER: 1 NULL\nb INTEGER: NULL 2\n"},
		"a list":        {in: " [ {\"a\":1} ,\n{\"a\":2.5}\n] \n", want: "a REAL: 1 2.5\n"},
		"one column":    {in: "{\"a\":null}\n{\"a\":\"x\"}\n{\"a\":\"\"}\n", want: "a TEXT: NULL \"x\" \"\"\n"},
		"escapes":       {in: `{"a\"b":"x\ny\u00e9\t\ud83d\ude00, \"q\""}`, want: "a\"b TEXT: \"x\\nyé\\t😀, \\\"q\\\"\"\n"},
		"missing words": {o: reader.Options{Missing: []string{"n/a"}}, in: "{\"a\":1}\n{\"a\":\"n/a\"}\n", want: "a INTEGER: 1 NULL\n"},
		"whole as real": {in: "{\"a\":1}\n{\"a\":2.0}\n{\"a\":-0}\n{\"a\":12345678901234567890}\n", want: "a REAL: 1 2 -0 1.2345678901234567e+19\n"},
		"censored":      {o: reader.Options{Censored: []string{"a"}}, in: "{\"a\":1}\n{\"a\":\"<0.5\"}\n", want: "a TEXT: \"1\" \"<0.5\"\n"},
		"a mark":        {in: "\xEF\xBB\xBF{\"a\":1}", want: "a INTEGER: 1\n"},
		"zeros":         {in: "{\"a\":\"007\"}\n{\"a\":\"8\"}", want: "a TEXT: \"007\" \"8\"\n"},
	} {
		r, err := read(c.o, c.in)
		if err != nil {
			t.Errorf("%s: %v", name, err)
		} else if got := shown(r.Table); got != c.want {
			t.Errorf("%s gives\n%swant\n%s", name, got, c.want)
		}
	}
}

func TestFaults(t *testing.T) {
	for name, c := range map[string]struct {
		in           string
		kind         reader.FaultKind
		line, column int
	}{
		"empty":            {"", reader.EmptyFile, 0, 0},
		"blank":            {" \n\n", reader.EmptyFile, 0, 0},
		"empty list":       {"[]", reader.NothingToRead, 0, 0},
		"empty object":     {"{}\n", reader.NothingToRead, 0, 0},
		"a key twice":      {"{\"a\":1}\n{\"a\":1, \"a\":2}\n", reader.KeyRepeated, 2, 9},
		"twice by nesting": {"{\"a.b\":1,\"a\":{\"b\":2}}\n", reader.KeyRepeated, 1, 15},
		"a list inside":    {"{\"a\":1}\n{\"a\":[1]}\n", reader.NestedList, 2, 6},
		"no object":        {"{\"a\":1}\n5\n", reader.NotObject, 2, 1},
		"a comma too many": {"{\"a\":1,}\n", reader.NotJSON, 1, 8},
		"cut":              {"{\"a\":1}\n{\"a\":", reader.CutShort, 2, 6},
		"cut in a string":  {"{\"a\":\"x", reader.CutShort, 1, 8},
		"cut list":         {"[{\"a\":1}", reader.CutShort, 1, 9},
		"behind the list":  {"[{\"a\":1}] x", reader.NotJSON, 1, 11},
		"NaN":              {"{\"a\":NaN}", reader.NotJSON, 1, 6},
		"a zero before":    {"{\"a\":007}", reader.NotJSON, 1, 6},
		"a bad escape":     {`{"a":"\x"}`, reader.NotJSON, 1, 6},
		"another kind":     {"{\"a\":1}\n{\"a\":2}\n{\"é\":0,\"a\":\"x\"}\n", reader.OtherKind, 3, 12},
		"a number in text": {"{\"a\":\"x\"}\n{\"a\":\"y\"}\n{\"a\":2}\n", reader.OtherKind, 3, 6},
		"too long":         {"{\"a\":1}\n{\"a\":12345678901234567890}\n", reader.BeyondInteger, 2, 6},
		"too great":        {"{\"a\":1.5}\n{\"a\":1e999}\n", reader.OutOfRange, 2, 6},
		"no such date":     {"{\"t\":\"2031-02-03\"}\n{\"t\":\"2031-02-30\"}\n", reader.NotATimestamp, 2, 6},
		"no UTF-8":         {"{\"a\":\"\xff\"}", reader.NotUTF8, 1, 6},
		"deep":             {strings.Repeat("{\"a\":", 70) + "1" + strings.Repeat("}", 70), reader.NestedList, 1, 321},
	} {
		_, err := read(reader.Options{}, c.in)
		var faults *reader.Faults
		if !errors.As(err, &faults) {
			t.Errorf("%s: %v", name, err)
			continue
		}
		if f := faults.List[0]; f.Kind != c.kind || f.Line != c.line || f.Column != c.column {
			t.Errorf("%s: %v, want %s at %d:%d", name, err, c.kind, c.line, c.column)
		}
	}
}

// Lines that are set aside come whole, with their numbers.
func TestRefused(t *testing.T) {
	var got []string
	o := reader.Options{Refused: func(line int, raw []byte, f reader.Fault) error {
		got = append(got, fmt.Sprintf("%d %s %s", line, f.Kind, raw))
		return nil
	}}
	r, err := read(o, "{\"a\":1,\"n\":\"x\\ny\"}\n{\"a\":}\n{\"a\":\"x\"}\n{\"a\":3}\n{\"a\":4,\"a\":5}\n{\"a\":6}\n")
	if err != nil {
		t.Fatal(err)
	}
	want := `["2 not JSON {\"a\":}" "5 key repeated {\"a\":4,\"a\":5}" "3 of another kind {\"a\":\"x\"}"]`
	if fmt.Sprintf("%q", got) != want || r.Table.N != 3 || r.Facts.Refused != 3 {
		t.Errorf("set aside %q, %d rows are left, %d refused", got, r.Table.N, r.Facts.Refused)
	}
}

func TestFiles(t *testing.T) {
	r, err := read(reader.Options{}, "{\"a\":1,\"b\":\"x\"}\n", "{\"b\":\"y\",\"a\":2.5}\n")
	if err != nil {
		t.Fatal(err)
	}
	if got := shown(r.Table); got != "a REAL: 1 2.5\nb TEXT: \"x\" \"y\"\n" {
		t.Error(got)
	}
	if _, err = read(reader.Options{}, "{\"a\":1}", "{\"b\":1}"); err == nil {
		t.Error("files of other columns were read as one")
	}
}

// Whatever is read is JSON by the standard library's word, and numbers are its numbers.
func FuzzRead(f *testing.F) {
	f.Add([]byte(`{"a":1,"b":{"c":"x\n"}}` + "\n" + `{"a":2.5,"t":"2031-04-07"}`))
	f.Add([]byte(`[{"a":true},{"a":null}]`))
	f.Add([]byte(`{"":1}`))
	f.Fuzz(func(t *testing.T, data []byte) {
		r, err := read(reader.Options{}, string(data))
		var faults *reader.Faults
		if err != nil && !errors.As(err, &faults) {
			t.Fatal(err)
		}
		if err != nil {
			return
		}
		if err := r.Table.Validate(); err != nil {
			t.Fatal(err)
		}
		text := strings.TrimPrefix(string(data), "\xEF\xBB\xBF")
		d := json.NewDecoder(strings.NewReader(text))
		for n := 0; d.More(); n++ {
			var x any
			if err := d.Decode(&x); err != nil {
				t.Fatalf("%q was read and is no JSON: %v", data, err)
			}
		}
	})
}
