package xlsx

import (
	"archive/zip"
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"strings"
	"testing"

	"github.com/xuri/excelize/v2"

	"nearcell/catalog/column"
	"nearcell/catalog/reader"
)

// book writes a workbook by hand: the XML of each sheet's rows, and what stands around.
type testBook struct {
	sheets  []string // "name|state|rows"
	shared  []string
	styles  string
	pr      string
	without string // a part to leave out
}

func (w *testBook) bytes() []byte {
	var b bytes.Buffer
	z := zip.NewWriter(&b)
	add := func(name, text string) {
		if name != w.without {
			f, _ := z.Create(name)
			io.WriteString(f, `<?xml version="1.0" encoding="UTF-8"?>`+text)
		}
	}
	const main = `xmlns="http://schemas.openxmlformats.org/spreadsheetml/2006/main" xmlns:r="http://schemas.openxmlformats.org/officeDocument/2006/relationships"`
	add("_rels/.rels", `<Relationships><Relationship Id="rId1" Type="http://schemas.openxmlformats.org/officeDocument/2006/relationships/officeDocument" Target="xl/workbook.xml"/></Relationships>`)
	book, rels := "", ""
	for i, s := range w.sheets {
		parts := strings.SplitN(s, "|", 3)
		book += fmt.Sprintf(`<sheet name="%s" sheetId="%d" state="%s" r:id="rId%d"/>`, parts[0], i+1, parts[1], i+1)
		rels += fmt.Sprintf(`<Relationship Id="rId%d" Type="http://schemas.openxmlformats.org/officeDocument/2006/relationships/worksheet" Target="worksheets/sheet%d.xml"/>`, i+1, i+1)
		rows, after, _ := strings.Cut(parts[2], "@@")
		add(fmt.Sprintf("xl/worksheets/sheet%d.xml", i+1), `<worksheet `+main+`><sheetData>`+rows+`</sheetData>`+after+`</worksheet>`)
	}
	add("xl/workbook.xml", `<workbook `+main+`><workbookPr `+w.pr+`/><sheets>`+book+`</sheets></workbook>`)
	add("xl/_rels/workbook.xml.rels", `<Relationships>`+rels+`</Relationships>`)
	shared := ""
	for _, s := range w.shared {
		shared += "<si>" + s + "</si>"
	}
	if shared != "" {
		add("xl/sharedStrings.xml", `<sst `+main+`>`+shared+`</sst>`)
	}
	if w.styles != "" {
		add("xl/styles.xml", `<styleSheet `+main+`>`+w.styles+`</styleSheet>`)
	}
	z.Close()
	return b.Bytes()
}

func read(data []byte, o reader.Options) (*reader.Result, error) {
	return Reader{}.Read(context.Background(), &reader.Source{Name: "log.xlsx", Data: data}, o)
}

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

const dateStyles = `<numFmts><numFmt numFmtId="164" formatCode="yyyy\-mm\-dd hh:mm:ss"/><numFmt numFmtId="165" formatCode="[h]:mm"/><numFmt numFmtId="166" formatCode="0.00&quot; days&quot;"/></numFmts>` +
	`<cellXfs><xf numFmtId="0"/><xf numFmtId="164"/><xf numFmtId="14"/><xf numFmtId="165"/><xf numFmtId="166"/></cellXfs>`

func TestRead(t *testing.T) {
	text := func(i int) string { return fmt.Sprintf(`<c t="s"><v>%d</v></c>`, i) }
	heading := `<row r="1"><c r="A1" t="inlineStr"><is><t>a</t></is></c><c r="B1" t="inlineStr"><is><t>b [°C]</t></is></c></row>`
	for name, c := range map[string]struct {
		w    testBook
		o    reader.Options
		want string
	}{
		"kinds": {w: testBook{sheets: []string{"Data||<row>" + text(0) + text(1) + text(2) + text(3) + "</row>" +
			`<row><c><v>1</v></c><c><v>4.0999999999999996</v></c><c t="b"><v>1</v></c><c t="str"><f>A1&amp;"x"</f><v>x, "y"</v></c></row>` +
			`<row><c><v>2</v></c><c><v>1E-3</v></c><c t="b"><v>0</v></c>` + text(4) + `</row>`},
			shared: []string{"<t>id</t>", "<r><t>te</t></r><r><rPr/><t>mp</t></r><rPh><t>xx</t></rPh>", "<t>ok</t>", "<t>note</t>", "<t>two\nlines_x000D_</t>"}},
			want: "id INTEGER: 1 2\ntemp REAL: 4.1 0.001\nok BOOLEAN: true false\nnote TEXT: \"x, \\\"y\\\"\" \"two\\nlines\\n\"\n"},
		"dates of 1900": {w: testBook{sheets: []string{"D||" + heading + `<row r="2"><c r="A2" s="1"><v>47945.343750000007</v></c><c r="B2" s="3"><v>1.5</v></c></row><row r="3"><c r="A3" s="2"><v>47946</v></c><c r="B3" s="4"><v>2</v></c></row>` +
			`<row r="4"><c r="A4" s="1"><v>47946.999999999</v></c></row>`}, styles: dateStyles},
			want: "a TIMESTAMP: 2031-04-07 08:15:00 2031-04-08 00:00:00 2031-04-09 00:00:00\nb REAL [°C]: 1.5 2 NULL\n"},
		"dates of 1904": {w: testBook{sheets: []string{"D||" + heading + `<row r="2"><c r="A2" s="1"><v>46483.34375</v></c><c r="B2"><v>1</v></c></row>`}, styles: dateStyles, pr: `date1904="1"`},
			want: "a TIMESTAMP: 2031-04-07 08:15:00\nb INTEGER [°C]: 1\n"},
		"gaps": {w: testBook{sheets: []string{"D||" + `<row r="3"><c r="C3" t="inlineStr"><is><t>a</t></is></c><c r="F3" t="inlineStr"><is><t>b</t></is></c></row>` +
			`<row r="4"/><row r="7"><c r="F7"><v>7</v></c></row><row r="1048576"><c r="C1048576"><v>1</v></c></row>`}},
			want: "a INTEGER: NULL 1\nb INTEGER: 7 NULL\n"},
		"errors": {w: testBook{sheets: []string{"D||" + heading + `<row r="2"><c r="A2" t="e"><v>#N/A</v></c><c r="B2"><v>1</v></c></row><row r="3"><c r="A3"><v>2</v></c><c r="B3"><f>A1</f></c></row>`}},
			want: "a INTEGER: NULL 2\nb INTEGER [°C]: 1 NULL\n"},
		"the first that is not hidden": {w: testBook{sheets: []string{"Lists|hidden|<row><c><v>1</v></c></row>", "D||" + heading + `<row><c><v>1</v></c></row>`, "E||<row/>"}},
			want: "a INTEGER: 1\nb REAL [°C]: NULL\n"},
		"by number": {w: testBook{sheets: []string{"E||<row/>", "D||" + heading + `<row><c><v>1</v></c><c><v>2</v></c></row>`}}, o: reader.Options{Sheet: "2"},
			want: "a INTEGER: 1\nb INTEGER [°C]: 2\n"},
		"by name": {w: testBook{sheets: []string{"2||<row/>", "1||" + heading + `<row><c><v>1</v></c><c><v>2</v></c></row>`}}, o: reader.Options{Sheet: "1"},
			want: "a INTEGER: 1\nb INTEGER [°C]: 2\n"},
		"units": {w: testBook{sheets: []string{"D||<row>" + text(0) + text(1) + "</row><row>" + text(2) + text(3) + "</row><row><c><v>1</v></c><c><v>2</v></c></row>"},
			shared: []string{"<t>h</t>", "<t>v</t>", "<t>m</t>", "<t>m/s</t>"}}, want: "h INTEGER [m]: 1\nv INTEGER [m·s⁻¹]: 2\n"},
		"heading at row": {w: testBook{sheets: []string{"D||<row><c t=\"inlineStr\"><is><t>a title\nof two lines</t></is></c></row><row r=\"3\">" + heading[len(`<row r="1">`):] + `<row><c><v>1</v></c><c><v>2</v></c></row>`}},
			o: reader.Options{Heading: 3}, want: "a INTEGER: 1\nb INTEGER [°C]: 2\n"},
		"decimal comma": {w: testBook{sheets: []string{"D||" + heading + `<row><c><v>1.5</v></c><c t="inlineStr"><is><t>2,5</t></is></c></row>`}},
			o: reader.Options{DecimalMark: ','}, want: "a REAL: 1.5\nb REAL [°C]: 2.5\n"},
	} {
		if name == "heading at row" {
			c.w.sheets[0] = strings.ReplaceAll(strings.ReplaceAll(c.w.sheets[0], `r="A1"`, `r="A3"`), `r="B1"`, `r="B3"`)
		}
		r, err := read(c.w.bytes(), c.o)
		if err != nil {
			t.Errorf("%s: %v", name, err)
		} else if got := shown(r.Table); got != c.want {
			t.Errorf("%s gives\n%swant\n%s", name, got, c.want)
		}
	}
}

// What a workbook holds beyond its values is told.
func TestTold(t *testing.T) {
	w := testBook{sheets: []string{"Lists|hidden|", "D||" + `<row r="1"><c r="A1" t="inlineStr"><is><t>a</t></is></c></row><row r="2"><c r="A2" t="e"><v>#DIV/0!</v></c></row><row r="3"><c r="A3"><v>1</v></c></row>` +
		`@@<mergeCells count="1"><mergeCell ref="A3:B4"/></mergeCells>`, "More||", "Other||"}}
	r, err := read(w.bytes(), reader.Options{})
	if err != nil {
		t.Fatal(err)
	}
	f := r.Facts
	if got := fmt.Sprint(f.Sheet, f.Sheets, f.Hidden, f.Columns); got != "D[More Other] 1 [{ 6 1 A2 #DIV/0!} { 8 3 A3:B4}]" {
		t.Error(got)
	}
}

func TestFaults(t *testing.T) {
	rows := `<row r="1"><c r="B1" t="inlineStr"><is><t>a</t></is></c><c r="D1" t="inlineStr"><is><t>b</t></is></c></row>`
	for i := range 5 {
		rows += fmt.Sprintf(`<row r="%d"><c r="B%d" t="inlineStr"><is><t>x
y</t></is></c><c r="D%d"><v>%d</v></c></row>`, i+3, i+3, i+3, i)
	}
	bad := rows + `<row r="9"><c r="D9" t="inlineStr"><is><t>err</t></is></c></row>`
	_, err := read((&testBook{sheets: []string{"Data||" + bad}}).bytes(), reader.Options{})
	var faults *reader.Faults
	if !errors.As(err, &faults) || faults.List[0].Cell != "Data!D9" || faults.List[0].Line != 9 || faults.List[0].Kind != reader.NotANumber {
		t.Errorf("a text among numbers: %v", err)
	}
	var line int
	var raw string
	r, err := read((&testBook{sheets: []string{"Data||" + bad}}).bytes(), reader.Options{Refused: func(n int, b []byte, f reader.Fault) error {
		line, raw = n, string(b)
		return nil
	}})
	if err != nil || line != 9 || raw != `,"err"` || r.Table.N != 5 || r.Files[0].Heading != `"a","b"` {
		t.Errorf("set aside: %v, row %d, %q", err, line, raw)
	}
	for name, c := range map[string]struct {
		data []byte
		o    reader.Options
		kind reader.FaultKind
	}{
		"empty":            {nil, reader.Options{}, reader.EmptyFile},
		"text":             {[]byte("a,b\n1,2\n"), reader.Options{}, reader.NotTheFormat},
		"an old workbook":  {[]byte("\xD0\xCF\x11\xE0\xA1\xB1\x1A\xE1 and more"), reader.Options{}, reader.NotSupported},
		"no workbook":      {(&testBook{without: "xl/workbook.xml", sheets: []string{"D||"}}).bytes(), reader.Options{}, reader.NotTheFormat},
		"no such sheet":    {(&testBook{sheets: []string{"D||" + rows}}).bytes(), reader.Options{Sheet: "Data"}, reader.NoSheet},
		"no sheet file":    {(&testBook{without: "xl/worksheets/sheet1.xml", sheets: []string{"D||"}}).bytes(), reader.Options{}, reader.Damaged},
		"nothing on it":    {(&testBook{sheets: []string{"D||<row/>"}}).bytes(), reader.Options{}, reader.NoRows},
		"a text not there": {(&testBook{sheets: []string{`D||<row><c t="s"><v>7</v></c></row>`}}).bytes(), reader.Options{}, reader.Damaged},
		"a cell far out":   {(&testBook{sheets: []string{`D||<row r="1"><c r="ZZZ1"><v>7</v></c></row>`}}).bytes(), reader.Options{}, reader.Damaged},
		"a row far out":    {(&testBook{sheets: []string{`D||<row r="99999999"><c><v>7</v></c></row>`}}).bytes(), reader.Options{}, reader.Damaged},
		"the same heading": {(&testBook{sheets: []string{`D||<row><c t="inlineStr"><is><t>a</t></is></c><c t="inlineStr"><is><t>a</t></is></c></row>`}}).bytes(), reader.Options{}, reader.HeadingRepeated},
		"XML cut":          {(&testBook{sheets: []string{`D||<row><c><v>1`}}).bytes(), reader.Options{}, reader.Damaged},
	} {
		_, err := read(c.data, c.o)
		if !errors.As(err, &faults) || faults.List[0].Kind != c.kind {
			t.Errorf("%s: %v, want %s", name, err, c.kind)
		}
	}
}

// written is a workbook by another program's hand.
func written(t testing.TB) []byte {
	f := excelize.NewFile()
	style, err := f.NewStyle(&excelize.Style{NumFmt: 22})
	if err != nil {
		t.Fatal(err)
	}
	f.SetSheetRow("Sheet1", "A1", &[]any{"id", "t", "temp", "ok"})
	for i := range 50 {
		row := i + 2
		f.SetSheetRow("Sheet1", fmt.Sprintf("A%d", row), &[]any{fmt.Sprintf("L%02d", i), 47945 + float64(i)/96, 4.1 + float64(i)/10, i%2 == 0})
	}
	f.SetCellStyle("Sheet1", "B2", "B51", style)
	var b bytes.Buffer
	if err := f.Write(&b); err != nil {
		t.Fatal(err)
	}
	return b.Bytes()
}

func TestAnotherWriter(t *testing.T) {
	r, err := read(written(t), reader.Options{})
	if err != nil {
		t.Fatal(err)
	}
	if r.Table.N != 50 || r.Table.Schema[1].Type != column.Timestamp || r.Table.Schema[3].Type != column.Boolean {
		t.Fatalf("%d rows of %v", r.Table.N, r.Table.Schema)
	}
	for i := range 50 {
		minutes := 15 * i
		want := fmt.Sprintf("2031-04-07 %02d:%02d:00", minutes/60, minutes%60)
		if got := column.FormatTimestamp(r.Table.Cols[1].I[i]); got != want {
			t.Errorf("row %d: %s, want %s", i, got, want)
		}
	}
}

// Whatever is cut off or flipped, a damaged file is a fault or gives a table that holds
// together; every byte of a sheet is guarded by the checksum of the archive.
func TestDamaged(t *testing.T) {
	whole := written(t)
	good, err := read(whole, reader.Options{})
	if err != nil {
		t.Fatal(err)
	}
	var faults *reader.Faults
	for n := 0; n < len(whole); n += 37 {
		if _, err := read(whole[:n], reader.Options{}); !errors.As(err, &faults) {
			t.Fatalf("cut to %d: %v", n, err)
		}
	}
	for i := 0; i < len(whole); i += 41 {
		data := bytes.Clone(whole)
		data[i] ^= 0x40
		r, err := read(data, reader.Options{})
		if err != nil && !errors.As(err, &faults) {
			t.Fatalf("byte %d: %v", i, err)
		}
		if err == nil && column.DiffTables(good.Table, r.Table) != "" {
			t.Errorf("byte %d flipped gives another table", i)
		}
	}
}

func FuzzSheet(f *testing.F) {
	f.Add(`<row r="1"><c r="A1" t="s"><v>0</v></c></row><row r="2"><c s="1"><v>47945.5</v></c></row>`)
	f.Add(`<row><c t="inlineStr"><is><r><t>a</t></r></is></c></row><row><c t="e"><v>#N/A</v></c><c t="b"><v>1</v></c></row>`)
	f.Fuzz(func(t *testing.T, rows string) {
		if strings.Contains(rows, "@@") || len(rows) > 1<<12 {
			return
		}
		r, err := read((&testBook{sheets: []string{"D||" + rows}, shared: []string{"<t>a</t>"}, styles: dateStyles}).bytes(), reader.Options{})
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

func FuzzFile(f *testing.F) {
	f.Add(written(f))
	f.Fuzz(func(t *testing.T, data []byte) {
		_, err := read(data, reader.Options{})
		var faults *reader.Faults
		if err != nil && !errors.As(err, &faults) {
			t.Fatal(err)
		}
	})
}
