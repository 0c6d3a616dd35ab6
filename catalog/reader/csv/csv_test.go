package csv

import (
	"context"
	"errors"
	"fmt"
	"strconv"
	"strings"
	"testing"

	"github.com/cockroachdb/datadriven"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
	"nearcell/catalog/reader/timeform"
)

// TestStories runs the golden stories of testdata/stories. The command read takes a
// file and prints what became of it. \r, \t and \xNN in the file stand for those
// bytes; the options are those of reader.Options by short names, and
//
//	time=(column, pattern, zone), preamble=(column, text)  \_ stands for a blank
//	encoding=…
//
// The command files takes several, each behind a line "== name".
//
//	crlf     every line ends with CR LF
//	unended  the last line has no line break
//	bom      the file begins with a byte order mark
//	refused  faulty lines are handed over and printed
//	facts    the facts of the reading are printed
func TestStories(t *testing.T) {
	datadriven.Walk(t, "testdata/stories", func(t *testing.T, path string) {
		datadriven.RunTest(t, path, func(t *testing.T, d *datadriven.TestData) string {
			if d.Cmd != "read" && d.Cmd != "files" {
				t.Fatalf("no such command: %s", d.Cmd)
			}
			return story(t, d)
		})
	})
}

func story(t *testing.T, d *datadriven.TestData) string {
	text := d.Input + "\n"
	if d.HasArg("unended") {
		text = d.Input
	}
	if d.HasArg("crlf") {
		text = strings.ReplaceAll(text, "\n", "\r\n")
	}
	if d.HasArg("bom") {
		text = "\xEF\xBB\xBF" + text
	}
	if strings.Contains(text, `\`) {
		text = unescape(t, text)
	}
	sources := []*reader.Source{{Name: "f.csv", Data: []byte(text)}}
	if d.Cmd == "files" {
		sources = nil
		for _, part := range strings.Split("\n"+text, "\n== ")[1:] {
			name, data, _ := strings.Cut(part, "\n")
			sources = append(sources, &reader.Source{Name: name, Data: []byte(data)})
		}
	}
	var b strings.Builder
	o := storyOptions(t, d)
	if d.HasArg("refused") {
		o.Refused = func(line int, raw []byte, f reader.Fault) error {
			if d.Cmd == "files" {
				b.WriteString(f.File + ": ")
			}
			fmt.Fprintf(&b, "refused line %d, %d:%d %s: %q\n", line, f.Line, f.Column, f.Kind, raw)
			return nil
		}
	}
	r, err := Reader{}.ReadFiles(context.Background(), sources, o)
	var faults *reader.Faults
	switch {
	case errors.As(err, &faults):
		printFaults(&b, faults)
		return b.String()
	case err != nil:
		return "error: " + err.Error() + "\n"
	}
	if err := r.Table.Validate(); err != nil {
		t.Fatal(err)
	}
	printTable(&b, r.Table)
	printFacts(&b, r, d.HasArg("facts"))
	return b.String()
}

// unescape turns \r, \t, \n and \xNN into bytes; everything else stays.
func unescape(t *testing.T, s string) string {
	var b strings.Builder
	for i := 0; i < len(s); i++ {
		switch {
		case strings.HasPrefix(s[i:], `\r`):
			b.WriteByte('\r')
			i++
		case strings.HasPrefix(s[i:], `\t`):
			b.WriteByte('\t')
			i++
		case strings.HasPrefix(s[i:], `\n`):
			b.WriteByte('\n')
			i++
		case strings.HasPrefix(s[i:], `\x`):
			n, err := strconv.ParseUint(s[i+2:i+4], 16, 8)
			if err != nil {
				t.Fatal(err)
			}
			b.WriteByte(byte(n))
			i += 3
		default:
			b.WriteByte(s[i])
		}
	}
	return b.String()
}

func storyOptions(t *testing.T, d *datadriven.TestData) reader.Options {
	var o reader.Options
	for _, a := range d.CmdArgs {
		switch a.Key {
		case "delimiter":
			o.Delimiter = map[string]rune{"semicolon": ';', "comma": ',', "tab": '\t', "pipe": '|', "blank": ' ', "bar": '¦', "quote": '"'}[a.Vals[0]]
		case "decimal":
			o.DecimalMark = map[string]rune{"comma": ',', "point": '.', "x": 'x'}[a.Vals[0]]
		case "missing":
			o.Missing = a.Vals
		case "text":
			o.TextColumns = a.Vals
		case "heading":
			o.Heading, _ = strconv.Atoi(a.Vals[0])
		case "max":
			o.MaxFaults, _ = strconv.Atoi(a.Vals[0])
		case "units":
			for i := 0; i+1 < len(a.Vals); i += 2 {
				o.Units = append(o.Units, reader.ColumnUnit{Column: a.Vals[i], Unit: column.ParseUnit(a.Vals[i+1])})
			}
		case "time":
			form, err := timeform.Parse(strings.ReplaceAll(a.Vals[1], `\_`, " "))
			if err != nil {
				t.Fatal(err)
			}
			c := reader.TimeColumn{Column: a.Vals[0], Form: form}
			if len(a.Vals) > 2 {
				if c.Zone, err = timeform.LoadZone(a.Vals[2]); err != nil {
					t.Fatal(err)
				}
			}
			o.Times = append(o.Times, c)
		case "preamble":
			o.Preamble = append(o.Preamble, reader.PreambleField{Column: a.Vals[0], After: strings.ReplaceAll(a.Vals[1], `\_`, " ")})
		case "encoding":
			o.Encoding = reader.Encoding(a.Vals[0])
		case "crlf", "unended", "bom", "refused", "facts":
		default:
			t.Fatalf("no such option: %s", a.Key)
		}
	}
	return o
}

func printFaults(b *strings.Builder, faults *reader.Faults) {
	for _, f := range faults.List {
		if f.File != "f.csv" {
			b.WriteString(f.File + ": ")
		}
		fmt.Fprintf(b, "%d:%d %s", f.Line, f.Column, f.Kind)
		if f.Got != 0 || f.Expected != 0 {
			fmt.Fprintf(b, " (got %d, expected %d)", f.Got, f.Expected)
		}
		if f.Want != column.Null {
			fmt.Fprintf(b, " for %s", f.Want)
		}
		if f.Field != 0 {
			fmt.Fprintf(b, ", field %d %q %q", f.Field, f.FieldName, f.Text)
		} else if f.Text != "" {
			fmt.Fprintf(b, ", %q", f.Text)
		}
		if f.Detail != "" {
			fmt.Fprintf(b, ", %s", f.Detail)
		}
		b.WriteByte('\n')
		if f.Column > 0 {
			fmt.Fprintf(b, "  %s\n  %s^\n", strings.ToValidUTF8(strings.ReplaceAll(f.Source, "\x00", "0"), "?"), strings.Repeat(" ", f.Column-1))
		}
	}
	if faults.More > 0 {
		fmt.Fprintf(b, "and %d more\n", faults.More)
	}
}

func printTable(b *strings.Builder, t *column.Table) {
	for i, f := range t.Schema {
		if i > 0 {
			b.WriteString(" | ")
		}
		fmt.Fprintf(b, "%s %s", f.Name, f.Type)
		if f.Unit != nil {
			fmt.Fprintf(b, " [%s]", f.Unit)
		}
	}
	b.WriteByte('\n')
	for i := range t.N {
		for j := range t.Cols {
			if j > 0 {
				b.WriteString(" | ")
			}
			switch v := &t.Cols[j]; {
			case v.IsNull(i):
				b.WriteString("NULL")
			case v.Type == column.Text:
				fmt.Fprintf(b, "%q", v.Text(i))
			default:
				b.WriteString(v.Value(i).String())
			}
		}
		b.WriteByte('\n')
	}
}

func printFacts(b *strings.Builder, r *reader.Result, all bool) {
	f := r.Facts
	if all {
		fmt.Fprintf(b, "facts: %d rows, %d bytes, %d lines, %d blank, %d refused, delimiter %q, bom %v, crlf %v, missing %v\n",
			f.Rows, f.Bytes, f.Lines, f.Blank, f.Refused, f.Delimiter, f.BOM, f.CRLF, f.Missing)
	}
	for _, s := range f.StayedText {
		fmt.Fprintf(b, "stayed text: %s, reason %d, %d not numeric, first %q on line %d", s.Column, s.Reason, s.NotNumeric, s.FirstText, s.FirstLine)
		if s.Pattern != "" {
			fmt.Fprintf(b, ", pattern %s, or %q", s.Pattern, s.Other)
		}
		b.WriteByte('\n')
	}
	for _, u := range f.UnitConflicts {
		fmt.Fprintf(b, "unit of %s: heading %s, said %s\n", u.Column, u.Heading, u.Said)
	}
	if len(f.AllMissing) > 0 {
		fmt.Fprintf(b, "all missing: %v\n", f.AllMissing)
	}
	if len(f.NaiveTimes) > 0 {
		fmt.Fprintf(b, "naive times: %v\n", f.NaiveTimes)
	}
	if len(f.UnknownUnits)+len(f.UnknownText) > 0 {
		fmt.Fprintf(b, "unknown: units %v, text %v\n", f.UnknownUnits, f.UnknownText)
	}
	if f.NumericHeading {
		b.WriteString("the heading is all numbers\n")
	}
	for i := range r.Files {
		if l := r.Files[i].UnitsLine; l > 0 {
			fmt.Fprintf(b, "line %d of %s gives units\n", l, r.Files[i].Name)
		}
	}
	for _, u := range f.UnitsRow {
		fmt.Fprintf(b, "units: %s %q %v\n", u.Column, u.Text, u.Unit)
	}
	for _, h := range f.Repeated {
		fmt.Fprintf(b, "repeated hour: %s of %s, %d rows, first on line %d, by %q\n", h.Column, h.File, h.Rows, h.FirstLine, h.By)
	}
	if f.TrailingFields {
		b.WriteString("every record ends with empty fields\n")
	}
	if f.TrailingDelimiter {
		b.WriteString("the heading ends with a delimiter\n")
	}
}
