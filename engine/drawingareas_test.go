package engine

import (
	"bytes"
	"encoding/csv"
	"image/png"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"strconv"
	"strings"
	"testing"
)

// areaSetting has a hall (invented) in several forms: a prism, a mesh of the same walls,
// and what a mezzanine and racks leave of it.
const areaSetting = `
CREATE SOLID plan AS PRISM ((0, 0), (30, 0), (30, 12), (18, 12), (18, 18), (0, 18)) HOLE ((0, 0), (4, 0), (4, 3), (0, 3)) FROM 0 TO 7.5;
CREATE SOLID drawn AS MESH '%s';
CREATE SOLID mezzanine AS BOX (12, 14, 3) TO (18, 18, 3.3);
CREATE SOLID rooms AS drawn MINUS mezzanine;
CREATE SOLID annexe AS BOX (30, 2, 0) TO (34, 6, 3);
CREATE SOLID wider AS plan PLUS annexe;
CREATE SOLID racks AS BOXES '%s';
CREATE SOLID aisles AS rooms MINUS racks;
CREATE SOLID dock AS BOX (20, -5, 0) TO (40, 20, 4);
`

// tableOf runs a query and gives its rows by the first column.
func tableOf(t *testing.T, folder, out string) map[string]float64 {
	t.Helper()
	data, err := os.ReadFile(filepath.Join(folder, out))
	if err != nil {
		t.Fatal(err)
	}
	rows, err := csv.NewReader(bytes.NewReader(data)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	found := map[string]float64{}
	for _, r := range rows[1:] {
		v, err := strconv.ParseFloat(r[len(r)-1], 64)
		if err != nil {
			t.Fatal(err)
		}
		found[strings.Join(r[:len(r)-1], " in ")] += v
	}
	return found
}

// inDemo gives the setting with the files of the demo.
func inDemo(t *testing.T) string {
	t.Helper()
	file := func(name string) string {
		path, err := filepath.Abs(filepath.Join("..", "testdata", "demo", name))
		if err != nil {
			t.Fatal(err)
		}
		return strings.ReplaceAll(path, "'", "''")
	}
	return strings.Replace(strings.Replace(areaSetting, "%s", file("hall4.obj"), 1), "%s", file("racks.csv"), 1)
}

// TestSectionAreas: whatever the solid is made of, the polygons of a picture have the
// areas of SECTION, and those of the solid's own section, worked out by hand.
func TestSectionAreas(t *testing.T) {
	setting := inDemo(t)
	for _, c := range []struct {
		within, where string
		area          float64 // in m²; 0: as SECTION says
	}{
		{"plan", "AT z = 1.1", 456}, {"drawn", "AT z = 1.1", 456}, {"drawn", "AT z = 0", 456}, {"drawn", "AT y = 16", 18 * 7.5},
		{"rooms", "AT z = 3.1", 456 - 24}, {"rooms", "AT y = 16", 18*7.5 - 6*0.3}, {"rooms", "AT x = 15", 18*7.5 - 4*0.3},
		{"wider", "AT z = 1.1", 456 + 16}, {"wider", "AT y = 4", (30+4)*7.5 - 4*4.5}, {"aisles", "AT z = 1.1", 0},
		{"drawn", "THROUGH (9, 9, 3) NORMAL (1, 2, 3)", 0}, {"dock MINUS racks", "AT z = 1.1", 0},
	} {
		name := c.within + " " + c.where
		section := "SECTION OF rows " + c.where + " WITHIN " + c.within
		folder, _, _ := drawn(t, 2, setting+"DRAW "+section+" SHADED BY temp LIMITS (8) TO 'p.svg'; SAVE SELECT id, area FROM "+section+" TO 'areas.csv';")
		p := readPicture(t, filepath.Join(folder, "p.svg"))
		want := tableOf(t, folder, "areas.csv")
		if len(p["cell"]) == 0 {
			t.Errorf("%s: no cells", name)
		}
		sum, total, paths := 0.0, 0.0, 0.0
		for _, a := range want {
			total += a
		}
		for _, cell := range p["cell"] {
			paths += pathArea(t, cell.d)
		}
		for _, cell := range p["cell"] {
			of := 0.0
			for _, id := range strings.Split(cell.data["id"], ", ") {
				of += want[id]
			}
			got := cell.number(t, "area")
			sum += got
			if math.Abs(got-of) > 1e-9*total {
				t.Errorf("%s: %s has %v m² in the picture and %v in SECTION", name, cell.data["id"], got, of)
			}
			if a := pathArea(t, cell.d) / paths * total; math.Abs(a-of) > 1e-4*total {
				t.Errorf("%s: the polygons of %s have %v m², SECTION says %v", name, cell.data["id"], a, of)
			}
		}
		if math.Abs(sum-total) > 1e-9*total || c.area > 0 && math.Abs(sum-c.area) > 1e-9*c.area {
			t.Errorf("%s: %v m² in the picture, %v in SECTION, %v by hand", name, sum, total, c.area)
		}
		if walls := pathArea(t, p["wall"][0].d); math.Abs(paths-walls) > 1e-4*walls {
			t.Errorf("%s: cells fill %v of the walls' %v", name, paths, walls)
		}
	}
}

// TestSectionMeasuredIn: a picture of parts has what SECTION says of each; parts that reach
// out of the solid end at its walls, and parts that overlap are not added up.
func TestSectionMeasuredIn(t *testing.T) {
	setting := inDemo(t)
	for _, c := range []struct {
		parts, words string
		own          int
	}{
		{"racks", "Section of 8 parts, together 38.4 m²:", 8}, {"dock", "Section of dock, 120 m²:", 0},
		{"dock, racks", "9 parts, which overlap in the plane and are not added up.", 9},
	} {
		section := "SECTION OF rows AT z = 1.1 WITHIN drawn MEASURED IN (" + c.parts + ")"
		folder, _, _ := drawn(t, 2, setting+"DRAW "+section+" SHADED BY temp LIMITS (8) TO 'p.svg'; DRAW "+section+
			" METHOD NEAREST SHADED BY temp LIMITS (8) TO 'q.svg'; SAVE SELECT id, part, area FROM "+section+" TO 'areas.csv';")
		p := readPicture(t, filepath.Join(folder, "p.svg"))
		want := tableOf(t, folder, "areas.csv")
		got := map[string]float64{}
		for _, cell := range p["cell"] {
			ids := strings.Split(cell.data["id"], ", ") // those of one place share its cell
			for _, id := range ids {
				got[id+" in "+cell.data["part"]] += cell.number(t, "area") / float64(len(ids))
			}
		}
		if len(got) != len(want) {
			t.Errorf("%s: %d pieces in the picture, %d in SECTION", c.parts, len(got), len(want))
		}
		for name, area := range want {
			if math.Abs(got[name]-area) > 1e-9 {
				t.Errorf("%s: %s has %v m² in the picture and %v in SECTION", c.parts, name, got[name], area)
			}
		}
		q := readPicture(t, filepath.Join(folder, "q.svg"))
		for _, picture := range []map[string][]mark{p, q} {
			if words := picture["words"][0].text; !strings.HasPrefix(words, c.words) || len(picture["part-words"]) != c.own {
				t.Errorf("%s: %q and %d lines of parts, want %q and %d", c.parts, words, len(picture["part-words"]), c.words, c.own)
			}
			if len(picture["part-name"]) != max(1, c.own) || len(picture["not-measured"]) != 1 {
				t.Errorf("%s: %d names, %d grounds", c.parts, len(picture["part-name"]), len(picture["not-measured"]))
			}
		}
	}
}

// TestSectionUnreached: a zone without a site is part of the section, hatched, named in
// the legend and counted as space without a value; so is what LINEAR does not reach.
func TestSectionUnreached(t *testing.T) {
	folder, out, _ := drawn(t, 2, `CREATE SOLID west AS BOX (0, 0, 0) TO (20, 12, 7.5); CREATE SOLID store AS BOX (20, 8, 0) TO (22, 11, 2);
DRAW SECTION OF hall AT z = 1 WITHIN (west, store) SHADED BY temp LIMITS (8) TO 'p.svg'; SHOW SECTION OF hall AT z = 1 WITHIN (west, store) SHADED BY temp LIMITS (8);`)
	p := readPicture(t, filepath.Join(folder, "p.svg"))
	legend := ""
	for _, m := range p["legend"] {
		legend += m.text + ";"
	}
	if len(p["unreached"]) != 1 || len(p["empty"]) != 1 || !strings.Contains(legend, "no site in the zone") {
		t.Errorf("%d hatchings, %d zones, legend %q", len(p["unreached"]), len(p["empty"]), legend)
	}
	if words := p["words"][0].text; !strings.HasPrefix(words, "Section of 246 m²") || !strings.Contains(words, "2.44 % (6 m²) without a value") {
		t.Errorf("words %q, and 6 of 246 m² have no site", words)
	}
	if !strings.Contains(out, "~~~") || !strings.Contains(out, "~ no site in the zone") {
		t.Errorf("the terminal does not tell of the zone\n%s", out)
	}
}

// TestSectionBeside: sites that lie near a slanting plane but beside what it cuts are not
// drawn over the texts.
func TestSectionBeside(t *testing.T) {
	folder, _, _ := drawn(t, 2, "DRAW SECTION OF hall THROUGH (15, 9, 3) NORMAL (1, 1, 0.2) SHADED BY temp TO 'p.svg';")
	p := readPicture(t, filepath.Join(folder, "p.svg"))
	var low, high float64 = math.Inf(1), math.Inf(-1)
	for _, m := range corner.FindAllStringSubmatch(p["wall"][0].d, -1) {
		y, _ := strconv.ParseFloat(m[2], 64)
		low, high = math.Min(low, y), math.Max(high, y)
	}
	if len(p["site"]) == 0 {
		t.Error("no site is marked")
	}
	for _, m := range p["site"] {
		for _, c := range corner.FindAllStringSubmatch(m.d, -1) {
			if y, _ := strconv.ParseFloat(c[2], 64); y < low-5 || y > high+5 {
				t.Errorf("%s is marked at %v, the map goes from %v to %v", m.data["id"], y, low, high)
			}
		}
	}
}

var fillOf = regexp.MustCompile(`<path class="cell"[^>]* d="([^"]*)" fill="#([0-9a-f]{6})"`)

// TestPictureInDots: the .png has the colours of the .svg where its cells are.
func TestPictureInDots(t *testing.T) {
	folder, _, _ := drawn(t, 2, "DRAW SECTION OF hall AT z = 1 SHADED BY temp TO 'p.svg'; DRAW SECTION OF hall AT z = 1 SHADED BY temp TO 'p.png';")
	text, err := os.ReadFile(filepath.Join(folder, "p.svg"))
	if err != nil {
		t.Fatal(err)
	}
	f, err := os.Open(filepath.Join(folder, "p.png"))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	dots, err := png.Decode(f)
	if err != nil {
		t.Fatal(err)
	}
	scale := float64(dots.Bounds().Dx()) / 720 // the width of a page
	seen := 0
	for _, m := range fillOf.FindAllStringSubmatch(string(text), -1) {
		var x, y, n float64
		for _, c := range corner.FindAllStringSubmatch(m[1], -1) {
			a, _ := strconv.ParseFloat(c[1], 64)
			b, _ := strconv.ParseFloat(c[2], 64)
			x, y, n = x+a, y+b, n+1
		}
		hits := 0
		for k := range 25 { // a name, a mark or a hatching may cover some
			dx, dy := float64(k%5-2)*7.3, float64(k/5-2)*7.7
			r, g, b, _ := dots.At(int((x/n+dx)*scale), int((y/n+dy)*scale)).RGBA()
			if got := strings.ToLower(hex6(r, g, b)); got == m[2] {
				hits++
			}
		}
		if hits < 5 {
			t.Errorf("the cell of the colour %s has it at %d of 25 places in the .png", m[2], hits)
		}
		seen++
	}
	if seen < 5 {
		t.Errorf("%d cells compared", seen)
	}
}

func hex6(r, g, b uint32) string {
	v := int64(r>>8)<<16 | int64(g>>8)<<8 | int64(b>>8)
	text := strconv.FormatInt(v, 16)
	return strings.Repeat("0", 6-len(text)) + text
}
