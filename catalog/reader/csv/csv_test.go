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
)

// TestStories runs the golden stories of testdata/stories. The command read takes a
// file and prints what became of it. \r, \t and \xNN in the file stand for those
// bytes; the options are those of reader.Options by short names, and
//
//	crlf     every line ends with CR LF
//	unended  the last line has no line break
//	bom      the file begins with a byte order mark
//	refused  faulty lines are handed over and printed
//	facts    the facts of the reading are printed
func TestStories(t *testing.T) {
	datadriven.Walk(t, "testdata/stories", func(t *testing.T, path string) {
		datadriven.RunTest(t, path, func(t *testing.T, d *datadriven.TestData) string {
			if d.Cmd != "read" {
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
	var b strings.Builder
	o := storyOptions(t, d)
	if d.HasArg("refused") {
		o.Refused = func(line int, raw []byte, f reader.Fault) error {
			fmt.Fprintf(&b, "refused line %d, %d:%d %s: %q\n", line, f.Line, f.Column, f.Kind, raw)
			return nil
		}
	}
	r, err := Reader{}.Read(context.Background(), &reader.Source{Name: "f.csv", Data: []byte(text)}, o)
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
		case "crlf", "unended", "bom", "refused", "facts":
		default:
			t.Fatalf("no such option: %s", a.Key)
		}
	}
	return o
}

func printFaults(b *strings.Builder, faults *reader.Faults) {
	for _, f := range faults.List {
		fmt.Fprintf(b, "%d:%d %s", f.Line, f.Column, f.Kind)
		if f.Got != 0 || f.Expected != 0 {
			fmt.Fprintf(b, " (got %d, expected %d)", f.Got, f.Expected)
		}
		if f.Want != column.Null {
			fmt.Fprintf(b, " for %s", f.Want)
		}
		if f.Field != 0 {
			fmt.Fprintf(b, ", field %d %q %q", f.Field, f.FieldName, f.Text)
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
		fmt.Fprintf(b, "stayed text: %s, reason %d, %d not numeric, first %q on line %d\n", s.Column, s.Reason, s.NotNumeric, s.FirstText, s.FirstLine)
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
	if f.TrailingDelimiter {
		b.WriteString("the heading ends with a delimiter\n")
	}
}
