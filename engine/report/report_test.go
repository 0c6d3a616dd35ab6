package report

import (
	"bytes"
	"encoding/xml"
	"errors"
	"fmt"
	"io"
	"strings"
	"testing"

	"nearcell/catalog/column"
	"nearcell/engine/present"
)

// element is a start tag, or the text between two tags.
type element struct {
	name string
	attr map[string]string
	text string
}

// parsed reads a report back as strict XML.
func parsed(t *testing.T, page []byte) []element {
	t.Helper()
	d := xml.NewDecoder(bytes.NewReader(page))
	var list []element
	for {
		token, err := d.Token()
		if errors.Is(err, io.EOF) {
			return list
		}
		if err != nil {
			t.Fatalf("the report does not read back: %v", err)
		}
		switch x := token.(type) {
		case xml.StartElement:
			e := element{name: x.Name.Local, attr: map[string]string{}}
			for _, a := range x.Attr {
				e.attr[a.Name.Local] = a.Value
			}
			list = append(list, e)
		case xml.CharData:
			list = append(list, element{text: string(x)})
		}
	}
}

func written(t *testing.T, r *Report, p Provenance) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := r.Write(&b, p); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

// addTable puts a table of texts and numbers into a report.
func addTable(t testing.TB, r *Report, name string, texts []string, o present.Options) {
	t.Helper()
	w := r.Table("a.ncell, line 1", "SELECT 1", o)
	schema := column.Schema{{Name: name, Type: column.Text}, {Name: "v", Type: column.Real}}
	fill := [2]*column.Builder{column.NewBuilder(column.Text, nil), column.NewBuilder(column.Real, nil)}
	for i, s := range texts {
		fill[0].AppendText(s)
		fill[1].AppendFloat(float64(i) + 1.0/3)
	}
	if err := w.Begin(schema); err != nil {
		t.Fatal(err)
	}
	if err := w.Batch(&column.Batch{N: len(texts), Cols: []column.Vector{fill[0].Finish(), fill[1].Finish()}}); err != nil {
		t.Fatal(err)
	}
	if _, _, err := w.End(); err != nil {
		t.Fatal(err)
	}
}

// TestEverythingIsText: whatever a user writes, wherever it stands, comes out as text
// and makes no element, no attribute, no request.
func TestEverythingIsText(t *testing.T) {
	evil := `"><script>alert(1)</script><img src=x onerror=alert(1)>&amp;]]>` + "\x00\x1b\xff'`" + `<style>@import url(http://x)</style>`
	r := New()
	r.Title(evil)
	r.Title(evil)
	r.Text(evil)
	r.Plain(evil)
	addTable(t, r, evil, []string{evil}, present.Options{})
	r.Remark(Warning, evil)
	r.Decided(Verdict{Result: "FAIL", Label: evil, Reason: evil, Place: evil})
	r.Failed(evil, 2)
	page := written(t, r, Provenance{Program: evil, Values: []Value{{evil, evil}}, Scripts: []Script{{evil, evil, evil}},
		Inputs: []Input{{Name: evil, Kind: evil, Text: evil, Files: []File{{Path: evil, SHA256: evil}}}}})
	times := 0
	for _, e := range parsed(t, page) {
		switch e.name {
		case "script", "img", "iframe", "link", "object":
			t.Errorf("the report holds a <%s>", e.name)
		}
		for name, value := range e.attr {
			if strings.HasPrefix(name, "on") || name == "src" || name == "href" && !strings.HasPrefix(value, "#") {
				t.Errorf("<%s %s=%q>", e.name, name, value)
			}
		}
		times += strings.Count(e.text, "<script>alert(1)</script>")
	}
	if times < 15 {
		t.Errorf("the text stands in the report %d times", times)
	}
}

// TestOrder: title, failures, verdicts, blocks in their order, provenance; and the
// verdicts are counted.
func TestOrder(t *testing.T) {
	r := New()
	r.Text("first text")
	r.Title("the title")
	r.Decided(Verdict{Result: "PASS", Label: "one"})
	r.Decided(Verdict{Result: "FAIL", Label: "two", Reason: "9 is too much"})
	r.Decided(Verdict{Result: "NOT DECIDED", Label: "three"})
	r.Decided(Verdict{Result: "PASS", Label: "four"})
	r.Failed("what went wrong", 3)
	page := string(written(t, r, Provenance{Program: "nearcell test", Scripts: []Script{{"a.ncell", "00", "SELECT 1;"}}}))
	at := -1
	for _, text := range []string{"<h1>the title", "This report is not whole", ">Verdicts<", "2 passed, 1 failed, 1 not decided", "9 is too much",
		"first text", "the 3 statements after it", ">Provenance<", "Made by nearcell test", "SELECT 1;"} {
		found := strings.Index(strings.ToLower(page), strings.ToLower(text))
		if found <= at {
			t.Errorf("%q stands at %d, after what comes before it at %d", text, found, at)
		}
		at = found
	}
}

// TestNumbersAsInTables: what stands in a cell is what a printed table has, to the
// right, and more rows than the most are counted and left out.
func TestNumbersAsInTables(t *testing.T) {
	r := New()
	addTable(t, r, "name", []string{"a", "b", "c"}, present.Options{Digits: 3, Rows: 2})
	var cells []string
	list := parsed(t, written(t, r, Provenance{}))
	for i, e := range list {
		if e.name == "td" && e.attr["class"] == "n" {
			cells = append(cells, list[i+1].text)
		}
		if e.name == "p" && e.attr["class"] == "count" && list[i+1].text != "the first 2 of 3 rows" {
			t.Errorf("the count is %q", list[i+1].text)
		}
	}
	if got := strings.Join(cells, " "); got != present.Number(1.0/3, 3)+" "+present.Number(4.0/3, 3) {
		t.Errorf("the numbers are %q", got)
	}
}

// TestPicturesAreStill: pictures keep apart the names that they share, and what runs or
// reaches out is refused.
func TestPicturesAreStill(t *testing.T) {
	r := New()
	good := `<?xml version="1.0"?><svg xmlns="http://www.w3.org/2000/svg"><defs><pattern id="a"/></defs><rect fill="url(#a)"/><use href="#a"/></svg>`
	for range 2 {
		if err := r.Picture([]byte(good), "a <map>", "hall.ncell, line 7", "DRAW <something>"); err != nil {
			t.Fatal(err)
		}
	}
	ids := map[string]int{}
	for _, e := range parsed(t, written(t, r, Provenance{})) {
		if id := e.attr["id"]; e.name == "pattern" {
			ids[id]++
		}
		if fill := e.attr["fill"]; e.name == "rect" && ids[strings.TrimSuffix(strings.TrimPrefix(fill, "url(#"), ")")] != 1 {
			t.Errorf("the fill %q names nothing, or two things", fill)
		}
	}
	if len(ids) != 2 {
		t.Errorf("two pictures have the names %v", ids)
	}
	for _, bad := range []string{`<script/>`, `<rect onload="x()"/>`, `<image href="http://x/y.png"/>`, `<rect fill="url(http://x)"/>`,
		`<foreignObject/>`, `<style>@import "x"</style>`} {
		if err := r.Picture([]byte(`<svg xmlns="http://www.w3.org/2000/svg">`+bad+`</svg>`), "", "", ""); err == nil {
			t.Errorf("%s was let in", bad)
		}
	}
}

// BenchmarkThousandTables writes a report of 1,000 tables of ten rows.
func BenchmarkThousandTables(b *testing.B) {
	texts := strings.Fields("a b c d e f g h i j")
	for b.Loop() {
		r := New()
		for i := range 1000 {
			addTable(b, r, fmt.Sprint("t", i), texts, present.Options{})
		}
		var out bytes.Buffer
		if err := r.Write(&out, Provenance{}); err != nil {
			b.Fatal(err)
		}
		b.SetBytes(int64(out.Len()))
	}
}

// TestShortColumns: texts that fit a line of paper beside the others are not broken, a long
// one is; more than fit are broken, all but the shortest.
func TestShortColumns(t *testing.T) {
	for _, c := range []struct {
		columns []string
		want    string
	}{
		{[]string{"PASS", strings.Repeat("long ", 60), "r.ncell"}, "s-s"},
		{[]string{strings.Repeat("a", 40), strings.Repeat("b", 40)}, "ss"},
		{[]string{strings.Repeat("a", 70), strings.Repeat("b", 70)}, "--"},
		{[]string{strings.Repeat("a", 60), "b", strings.Repeat("c", 60)}, "-s-"},
	} {
		w := &tableWriter{report: New()}
		line := make([]cell, len(c.columns))
		for k, text := range c.columns {
			w.data.Columns = append(w.data.Columns, columnHead{Name: "c"})
			line[k].Text = text
		}
		w.data.Rows = [][]cell{line}
		w.keepShort()
		got := ""
		for _, one := range w.data.Rows[0] {
			got += map[bool]string{true: "s", false: "-"}[one.Short]
		}
		if got != c.want {
			t.Errorf("%d columns: %s, want %s", len(c.columns), got, c.want)
		}
	}
}
