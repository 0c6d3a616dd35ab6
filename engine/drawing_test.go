package engine

import (
	"bytes"
	"context"
	"encoding/xml"
	"flag"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"

	"nearcell/catalog"
)

var rewritePictures = flag.Bool("rewrite-pictures", false, "write the golden pictures anew")

// drawingSetting is an L-shaped hall (invented) of 468 m² with two levels of loggers; one
// has no reading, two stand at one place.
const drawingSetting = `
CREATE SOLID air AS PRISM ((0, 0), (30, 0), (30, 12), (18, 12), (18, 18), (0, 18)) FROM 0 TO 7.5;
CREATE TABLE rows AS (SELECT * FROM (VALUES
  ('L01', 3.0, 3.0, 1.0, 4.0), ('L02', 15.0, 4.0, 1.0, 6.5), ('L03', 27.0, 5.0, 1.5, 9.0), ('L04', 4.0, 15.0, 0.5, 1.5),
  ('L05', 14.0, 14.0, 1.0, NULL), ('L06', 10.0, 9.0, 6.5, 7.0), ('L07', 24.0, 9.0, 6.5, 8.5), ('L08', 24.0, 9.0, 6.5, 7.5))
  AS v (id, x, y, z, temp));
CREATE CAMPAIGN hall AS (SELECT * FROM rows) WITHIN air;
CREATE VIEW twice AS (SELECT id, x, y, z, 1 AS pass, temp FROM rows UNION ALL SELECT id, x, y, z, 2, temp + 1 FROM rows);
CREATE TABLE log AS (SELECT * FROM (VALUES (TIMESTAMP '2031-04-07 00:00:00', 4.0, 10), (TIMESTAMP '2031-04-07 01:00:00', 9.0, 20),
  (TIMESTAMP '2031-04-07 02:00:00', 5.0, NULL), (TIMESTAMP '2031-04-07 05:00:00', 6.0, 30)) AS v (t, temp, people));
`

// drawn runs statements in a folder of their own and gives what was printed and told.
func drawn(t *testing.T, threads int, text string) (folder, out, said string) {
	t.Helper()
	folder = t.TempDir()
	var o, e bytes.Buffer
	s := New(catalog.Memory(), Options{Out: &o, Err: &e, Quiet: true, Threads: threads})
	if err := s.Run(context.Background(), "drawing", drawingSetting+text, folder); err != nil {
		t.Fatalf("%v\n%s", err, e.String())
	}
	return folder, o.String(), e.String()
}

// mark is an element of a picture as it is read back.
type mark struct {
	class, d, text string
	data           map[string]string
}

// number is a fact about a mark.
func (m mark) number(t *testing.T, name string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(m.data[name], 64)
	if err != nil {
		t.Fatalf("data-%s of %+v: %v", name, m, err)
	}
	return v
}

// readPicture parses an SVG into its marks by class.
func readPicture(t *testing.T, file string) map[string][]mark {
	t.Helper()
	data, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	found := map[string][]mark{}
	d := xml.NewDecoder(bytes.NewReader(data))
	for {
		token, err := d.Token()
		if token == nil {
			return found
		}
		if err != nil {
			t.Fatal(err)
		}
		e, ok := token.(xml.StartElement)
		if !ok || e.Name.Local != "path" && e.Name.Local != "text" {
			continue
		}
		m := mark{data: map[string]string{}}
		for _, a := range e.Attr {
			switch {
			case a.Name.Local == "class":
				m.class = a.Value
			case a.Name.Local == "d":
				m.d = a.Value
			case strings.HasPrefix(a.Name.Local, "data-"):
				m.data[a.Name.Local[5:]] = a.Value
			}
		}
		if e.Name.Local == "text" {
			inner, _ := d.Token()
			m.text = string(inner.(xml.CharData))
		}
		found[m.class] = append(found[m.class], m)
	}
}

var corner = regexp.MustCompile(`[ML](-?[0-9.]+) (-?[0-9.]+)`)

// pathArea is the area of a path on the page, in the units of the page.
func pathArea(t *testing.T, d string) float64 {
	t.Helper()
	sum := 0.0
	for _, ring := range strings.Split(strings.TrimSuffix(d, "Z"), "Z") {
		var x, y []float64
		for _, m := range corner.FindAllStringSubmatch(ring, -1) {
			a, _ := strconv.ParseFloat(m[1], 64)
			b, _ := strconv.ParseFloat(m[2], 64)
			x, y = append(x, a), append(y, b)
		}
		for i := range x {
			k := (i + 1) % len(x)
			sum += x[i]*y[k] - x[k]*y[i]
		}
	}
	return math.Abs(sum) / 2
}

// TestSectionReadBack: in the file, the cells have the areas that they say, on the page
// and in numbers; they fill the walls; shares and limits are those of the statement.
func TestSectionReadBack(t *testing.T) {
	for _, where := range []string{"AT z = 1", "AT z = 0", "AT z = 7.5", "AT x = 12", "AT y = 15", "THROUGH (9, 9, 3) NORMAL (1, 2, 3)", "AT z = 1 STRETCHED (1, 1, 5)"} {
		folder, _, _ := drawn(t, 2, "DRAW SECTION OF hall "+where+" SHADED BY temp LIMITS (2, 8) TO 'p.svg';")
		p := readPicture(t, filepath.Join(folder, "p.svg"))
		if len(p["wall"]) != 1 || len(p["cell"]) < 3 {
			t.Fatalf("%s: %d walls, %d cells", where, len(p["wall"]), len(p["cell"]))
		}
		walls, areas, paths, over := pathArea(t, p["wall"][0].d), 0.0, 0.0, 0.0
		for _, c := range p["cell"] {
			areas += c.number(t, "area")
			paths += pathArea(t, c.d)
			if c.data["value"] != "" && c.number(t, "value") > 8 {
				over += c.number(t, "area")
			}
			if c.data["id"] == "L07, L08" { // 8.5 and 7.5 have half of it each
				over += c.number(t, "area") / 2
			}
		}
		for _, c := range p["cell"] {
			if a, b := pathArea(t, c.d)/paths, c.number(t, "area")/areas; math.Abs(a-b) > 1e-4 {
				t.Errorf("%s: %s has the share %v on the page and %v in numbers", where, c.data["id"], a, b)
			}
		}
		if math.Abs(paths-walls) > 1e-4*walls {
			t.Errorf("%s: cells fill %v of %v", where, paths, walls)
		}
		if strings.HasPrefix(where, "AT z") && math.Abs(areas-468) > 1e-9 {
			t.Errorf("%s: the areas add up to %v, the hall has 468", where, areas)
		}
		if len(p["limit"]) != 2 || p["limit"][0].data["value"] != "2" || p["limit"][1].data["value"] != "8" {
			t.Errorf("%s: limits %+v", where, p["limit"])
		}
		if said := fmt.Sprintf("%.4g", math.Round(over/areas*1e4)/100) + " % ("; !strings.Contains(p["words"][0].text, said) {
			t.Errorf("%s: %q, and %s are over", where, p["words"][0].text, said)
		}
	}
}

// TestSectionMarks: what is over, under, without a value is hatched and named; sites near
// the plane are marked, those that share a place have one cell.
func TestSectionMarks(t *testing.T) {
	folder, _, _ := drawn(t, 2, "DRAW SECTION OF hall AT z = 5 SHADED BY temp LIMITS (2, 6) TO 'p.svg'; DRAW SECTION OF hall AT z = 1 SHADED BY temp LIMITS (2, 8) TO 'q.svg';")
	p := readPicture(t, filepath.Join(folder, "p.svg"))
	shared := false
	for _, c := range p["cell"] {
		shared = shared || c.data["id"] == "L07, L08" && c.data["value"] == "8"
	}
	if !shared {
		t.Error("L07 and L08 share a cell of the mean 8")
	}
	q := readPicture(t, filepath.Join(folder, "q.svg"))
	if len(q["over"]) != 1 || len(q["under"]) != 1 || len(q["missing"]) != 1 {
		t.Errorf("hatchings: %d over, %d under, %d missing", len(q["over"]), len(q["under"]), len(q["missing"]))
	}
	words := ""
	for _, m := range q["legend"] {
		words += m.text + "; "
	}
	for _, want := range []string{"over the limit", "under the limit", "no value at the site", "site within 1 m of the plane"} {
		if !strings.Contains(words, want) {
			t.Errorf("the legend has no %q: %s", want, words)
		}
	}
	if len(q["site"]) != 5 || len(q["name"]) != 5 {
		t.Errorf("%d sites and %d names, want 5", len(q["site"]), len(q["name"]))
	}
}

// TestSectionPanels: FOR EACH has a panel for each value; zones lie side by side.
func TestSectionPanels(t *testing.T) {
	folder, _, _ := drawn(t, 2, `DRAW SECTION OF twice AT z = 1 FOR EACH pass WITHIN air SHADED BY temp LIMITS (8) TO 'p.svg';
CREATE SOLID west AS BOX (0, 0, 0) TO (18, 18, 7.5); CREATE SOLID east AS BOX (18, 0, 0) TO (30, 12, 7.5);
DRAW SECTION OF hall AT z = 1 WITHIN (west, east) SHADED BY temp TO 'z.svg';`)
	p := readPicture(t, filepath.Join(folder, "p.svg"))
	if len(p["panel"]) != 2 || p["panel"][1].text != "pass = 2" || len(p["wall"]) != 2 || len(p["words"]) != 2 {
		t.Errorf("panels %+v, %d walls, %d lines of words", p["panel"], len(p["wall"]), len(p["words"]))
	}
	sum := 0.0
	for _, c := range readPicture(t, filepath.Join(folder, "z.svg"))["cell"] {
		sum += c.number(t, "area")
	}
	if math.Abs(sum-468) > 1e-9 {
		t.Errorf("the zones have %v together, want 468", sum)
	}
}

// TestSectionEstimate: an estimate fills the walls and says so.
func TestSectionEstimate(t *testing.T) {
	folder, _, _ := drawn(t, 2, "DRAW SECTION OF hall AT z = 1 METHOD NEAREST SHADED BY temp TO 'p.svg'; DRAW SECTION OF hall AT z = 1 METHOD LINEAR SHADED BY temp TO 'q.svg';")
	p := readPicture(t, filepath.Join(folder, "p.svg"))
	tiles := 0.0
	for _, m := range p["tile"] {
		tiles += pathArea(t, m.d)
	}
	if walls := pathArea(t, p["wall"][0].d); math.Abs(tiles-walls) > 1e-3*walls {
		t.Errorf("tiles fill %v of %v", tiles, walls)
	}
	if len(p["cell"]) != 0 || !strings.Contains(p["subtitle"][0].text, "as estimated by NEAREST") {
		t.Errorf("%d cells, %q", len(p["cell"]), p["subtitle"][0].text)
	}
	if q := readPicture(t, filepath.Join(folder, "q.svg")); len(q["unreached"]) != 1 {
		t.Error("LINEAR does not reach beyond the hull, and nothing is hatched for it")
	}
}

// TestChartsReadBack: numbers of courses, histograms and profiles are those of the rows.
func TestChartsReadBack(t *testing.T) {
	folder, _, said := drawn(t, 2, `DRAW COURSE OF log ALONG t SHOWING temp, people LIMITS (8) TO 'c.svg';
DRAW HISTOGRAM OF (SELECT temp, volume FROM CELLS OF hall WHERE temp IS NOT NULL) SHOWING temp WEIGHTED BY volume LIMITS (8) TO 'h.svg';
DRAW PROFILE OF hall FOR temp ALONG z LIMITS (2, 8) TO 'p.svg';
SELECT 1;`)
	c := readPicture(t, filepath.Join(folder, "c.svg"))
	if len(c["line"]) != 2 || strings.Count(c["line"][0].d, "M") != 1 || !strings.HasPrefix(c["words"][0].text, "temp: 4 values from 4 to 9; 1 of them over 8") {
		t.Errorf("course: %d lines, %+v", len(c["line"]), c["words"])
	}
	if !strings.Contains(said, "open at 1 place") {
		t.Errorf("the gap of three hours is not told: %s", said)
	}
	sum, over := 0.0, 0.0
	for _, b := range readPicture(t, filepath.Join(folder, "h.svg"))["bar"] {
		sum += b.number(t, "weight")
		if b.number(t, "from") >= 8 {
			over += b.number(t, "weight")
		}
	}
	_, out, _ := drawn(t, 1, "SELECT SUM(volume) AS v, SUM(volume) FILTER (WHERE temp >= 8) AS o FROM CELLS OF hall WHERE temp IS NOT NULL;")
	for _, v := range []float64{sum, over} {
		if !strings.Contains(out, strings.TrimSuffix(fmt.Sprintf("%.6g", v), "0")[:5]) {
			t.Errorf("histogram: %v is not among the sums\n%s", v, out)
		}
	}
	layers := readPicture(t, filepath.Join(folder, "p.svg"))["layer"]
	weights := 0.0
	for _, l := range layers {
		weights += l.number(t, "weight")
	}
	if len(layers) < 2 || math.Abs(weights-sum) > 1e-9*sum {
		t.Errorf("profile: %d layers of %v together, the cells with a value have %v", len(layers), weights, sum)
	}
}

// TestPicturesGolden: the same bytes for any number of threads, and those of the file.
func TestPicturesGolden(t *testing.T) {
	const text = "DRAW SECTION OF hall AT z = 1 SHADED BY temp LIMITS (2, 8) TO 'section.svg';\nDRAW COURSE OF log ALONG t SHOWING temp, people LIMITS (8) TO 'course.svg';\n" +
		"DRAW CELLS OF hall SHADED BY temp LIMITS (2, 8) SEEN FROM (1, 2, 1) TO 'cells.svg';"
	one, _, _ := drawn(t, 1, text)
	two, _, _ := drawn(t, 2, text)
	four, _, _ := drawn(t, 4, text)
	for _, name := range []string{"section.svg", "course.svg", "cells.svg"} {
		a, err := os.ReadFile(filepath.Join(one, name))
		if err != nil {
			t.Fatal(err)
		}
		if b, err := os.ReadFile(filepath.Join(two, name)); err != nil || !bytes.Equal(a, b) {
			t.Errorf("%s: other bytes with two threads (%v)", name, err)
		}
		if b, err := os.ReadFile(filepath.Join(four, name)); err != nil || !bytes.Equal(a, b) {
			t.Errorf("%s: other bytes with four threads (%v)", name, err)
		}
		golden := filepath.Join("testdata", "pictures", name)
		if *rewritePictures {
			if err := os.MkdirAll(filepath.Dir(golden), 0o777); err != nil {
				t.Fatal(err)
			}
			if err := os.WriteFile(golden, a, 0o644); err != nil {
				t.Fatal(err)
			}
		}
		if want, err := os.ReadFile(golden); err != nil || !bytes.Equal(a, want) {
			t.Errorf("%s is not the golden one (%v): -rewrite-pictures writes it anew", name, err)
		}
	}
}

// TestDrawingProblems: mistakes are told with a code, and leave no file.
func TestDrawingProblems(t *testing.T) {
	for _, c := range []struct{ text, code string }{
		{"DRAW SECTION OF hall AT z = 1 SHADED BY heat TO 'p.svg';", "no-column"},
		{"DRAW SECTION OF hall AT z = 1 SHADED BY id TO 'p.svg';", "types"},
		{"DRAW SECTION OF hall AT z = 99 SHADED BY temp TO 'p.svg';", "plane"},
		{"DRAW SECTION OF hall THROUGH (0, 0, 0) NORMAL (0, 0, 0) SHADED BY temp TO 'p.svg';", "plane"},
		{"DRAW SECTION OF hall SHADED BY temp TO 'p.svg';", "needs-clause"},
		{"DRAW SECTION OF hall AT z = 1 TO 'p.svg';", "needs-clause"},
		{"DRAW SECTION OF hall AT z = 1 SHADED BY temp;", "needs-clause"},
		{"DRAW SECTION OF (SELECT id, x, y, z, temp FROM hall) AT z = 1 SHADED BY temp TO 'p.svg';", "no-solid"},
		{"DRAW SECTION OF hall AT z = 1 UNCLIPPED SHADED BY temp TO 'p.svg';", "no-solid"},
		{"DRAW SECTION OF hall AT z = 1 SHADED BY temp TO 'p.bmp';", "file-kind"},
		{"DRAW SECTION OF hall AT z = 1 SHADED BY temp LIMITS (1, 2, 3) TO 'p.svg';", "limits"},
		{"SAVE SELECT 1 AS one TO 'there.csv'; DRAW SECTION OF hall AT z = 1 SHADED BY temp TO 'there.csv/p.svg';", "file"},
		{"DRAW SECTION OF hall AT z = 1 SHADED BY temp TO 'a.svg'; DRAW SECTION OF hall AT z = 1 SHADED BY temp TO 'a.svg';", "file-exists"},
		{"DRAW COURSE OF (SELECT * FROM log WHERE temp > 99) ALONG t SHOWING temp TO 'p.svg';", "no-rows"},
		{"DRAW COURSE OF (SELECT 1 AS t, temp FROM log) ALONG t SHOWING temp TO 'p.svg';", "many-rows"},
		{"DRAW COURSE OF log SHOWING temp TO 'p.svg';", "needs-clause"},
		{"DRAW HISTOGRAM OF log SHOWING temp WEIGHTED BY (0 - people) TO 'p.svg';", "weight"},
		{"DRAW PROFILE OF hall FOR temp ALONG temp TO 'p.svg';", "plane"},
		{"SHOW COURSE OF log ALONG t SHOWING temp;", "no-picture"},
		{"SHOW SECTION OF hall AT z = 1 SHADED BY temp TO 'p.svg';", "clauses"},
	} {
		folder := t.TempDir()
		var out bytes.Buffer
		s := New(catalog.Memory(), Options{Out: &out, Err: &out, Quiet: true})
		err := s.Run(context.Background(), "drawing", drawingSetting+c.text, folder)
		if err == nil || s.LastCode() != c.code {
			t.Errorf("%s\ngives %q, want %q\n%s", c.text, s.LastCode(), c.code, out.String())
		}
		if _, err := os.Stat(filepath.Join(folder, "p.svg")); err == nil {
			t.Errorf("%s\nleaves a file", c.text)
		}
	}
}

// TestShow: the map of the terminal has the words of the file.
func TestShow(t *testing.T) {
	folder, out, _ := drawn(t, 2, "SHOW SECTION OF hall AT z = 1 SHADED BY temp LIMITS (2, 8); DRAW SECTION OF hall AT z = 1 SHADED BY temp LIMITS (2, 8) TO 'p.svg';")
	words := readPicture(t, filepath.Join(folder, "p.svg"))["words"][0].text
	if flat := strings.Join(strings.Fields(out), " "); !strings.Contains(flat, words) || !strings.Contains(out, "^^^") || !strings.Contains(out, "vvv") {
		t.Errorf("%s\nhas not %q", out, words)
	}
}
