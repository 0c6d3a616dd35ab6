package engine

import (
	"bytes"
	"context"
	"encoding/binary"
	"encoding/json"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"nearcell/catalog"
	"nearcell/engine/draw"
	"nearcell/engine/present"
	"nearcell/engine/view"
)

var embedded = regexp.MustCompile(`(?s)<script type="application/json" id="data">(.*?)</script>`)

// pageData reads the data of a page back.
func pageData(t *testing.T, file string) *view.Data {
	t.Helper()
	text, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	m := embedded.FindAllSubmatch(text, -1)
	if len(m) != 1 {
		t.Fatalf("%s has %d data", file, len(m))
	}
	var d view.Data
	if err := json.Unmarshal(m[0][1], &d); err != nil {
		t.Fatal(err)
	}
	return &d
}

func floats(a view.Array) []float64 {
	out := make([]float64, len(a)/8)
	for i := range out {
		out[i] = math.Float64frombits(binary.LittleEndian.Uint64(a[8*i:]))
	}
	return out
}

func ints(a view.Array) []int32 {
	out := make([]int32, len(a)/4)
	for i := range out {
		out[i] = int32(binary.LittleEndian.Uint32(a[4*i:]))
	}
	return out
}

func singles(a view.Array) []float64 {
	out := make([]float64, len(a)/4)
	for i := range out {
		out[i] = float64(math.Float32frombits(binary.LittleEndian.Uint32(a[4*i:])))
	}
	return out
}

// answer runs queries after a setting and gives their rows as JSON has them: with every
// digit.
func answer(t *testing.T, setting, query string) []map[string]any {
	t.Helper()
	var o, e bytes.Buffer
	s := New(catalog.Memory(), Options{Out: &o, Err: &e, Quiet: true, Format: present.AsJSON})
	if err := s.Run(context.Background(), "answer", setting+query, t.TempDir()); err != nil {
		t.Fatalf("%v\n%s", err, e.String())
	}
	var rows []map[string]any
	if err := json.Unmarshal(o.Bytes(), &rows); err != nil {
		t.Fatalf("%v\n%s", err, o.String())
	}
	return rows
}

// seen is a page's data as one would look at them.
type seen struct {
	*view.Data
	body  map[string]int32           // of an identifier
	walls []float64                  // area of each body's walls
	near  map[string]map[string]bool // identifiers of the cells that touch
}

// look computes what the page's program would.
func look(d *view.Data) *seen {
	s := &seen{Data: d, body: map[string]int32{}, walls: make([]float64, len(d.Paint)/4), near: map[string]map[string]bool{}}
	rows, ofBody := ints(d.Rows), map[int32][]string{}
	for r, b := range rows {
		s.body[d.IDs[r]] = b
		ofBody[b] = append(ofBody[b], d.IDs[r])
		s.near[d.IDs[r]] = map[string]bool{}
	}
	hulls, others, points, patched, patches := ints(d.Hulls), ints(d.Others), singles(d.Points), singles(d.Patched), ints(d.Patches)
	face, loop, point := 0, 0, 0
	for h := 0; h < len(hulls); h += 3 {
		b := hulls[h]
		for range hulls[h+2] {
			n := int(binary.LittleEndian.Uint16(d.Counts[2*face:]))
			var at []draw.Spot
			for range n {
				c := point + int(binary.LittleEndian.Uint16(d.Loops[2*loop:]))
				at = append(at, draw.Spot{points[3*c], points[3*c+1], points[3*c+2]})
				loop++
			}
			switch o := others[face]; {
			case o >= 0:
				for _, from := range ofBody[b] {
					for _, to := range ofBody[o] {
						s.near[from][to] = true
					}
				}
			case o == draw.Wall:
				s.walls[b] += spotArea(at)
			}
			face++
		}
		point += int(hulls[h+1])
	}
	for i, o := 0, 0; i < len(patches); i += 2 {
		var at []draw.Spot
		for range patches[i+1] {
			at = append(at, draw.Spot{patched[o], patched[o+1], patched[o+2]})
			o += 3
		}
		s.walls[patches[i]] += spotArea(at)
	}
	return s
}

func spotArea(p []draw.Spot) float64 {
	var n [3]float64
	for k := 2; k < len(p); k++ {
		var a, b [3]float64
		for i := range 3 {
			a[i], b[i] = p[k-1][i]-p[0][i], p[k][i]-p[0][i]
		}
		for i := range 3 {
			j, l := (i+1)%3, (i+2)%3
			n[i] += (a[j]*b[l] - a[l]*b[j]) / 2
		}
	}
	return math.Sqrt(n[0]*n[0] + n[1]*n[1] + n[2]*n[2])
}

// manySites are readings at 150 places of an invented hall with two racks cut out of it.
func manySites() string {
	var b strings.Builder
	b.WriteString("CREATE SOLID racks AS PRISM ((0, 0), (40, 0), (40, 25), (0, 25)) HOLE ((10, 5), (14, 5), (14, 20), (10, 20)) HOLE ((22, 5), (26, 5), (26, 20), (22, 20)) FROM 0 TO 9;\n" +
		"CREATE CAMPAIGN many AS (SELECT * FROM (VALUES ")
	state := uint64(7)
	next := func(most float64) float64 {
		state = state*6364136223846793005 + 1442695040888963407
		return math.Round(float64(state>>40)/float64(1<<24)*most*1000) / 1000
	}
	for i := range 150 {
		if i > 0 {
			b.WriteString(", ")
		}
		temp := strconv.FormatFloat(next(10), 'g', -1, 64)
		if i%23 == 5 {
			temp = "NULL"
		}
		fmt.Fprintf(&b, "('S%03d', %g, %g, %g, %s)", i, next(40), next(25), next(9), temp)
	}
	b.WriteString(") AS v (id, x, y, z, temp)) WITHIN racks;\n")
	return b.String()
}

// cellStories are the partitions whose pages are compared with their tables.
func cellStories() map[string]struct{ setting, of string } {
	return map[string]struct{ setting, of string }{
		"an L with two sites in one place": {drawingSetting, "hall"},
		"stretched":                        {drawingSetting, "hall STRETCHED (1, 1, 5)"},
		"a part of it":                     {drawingSetting, "hall WITHIN BOX (0, 0, 0) TO (30, 9, 7.5)"},
		"racks":                            {manySites(), "many"},
		"zones":                            {drawingSetting + "CREATE SOLID west AS BOX (0, 0, 0) TO (15, 18, 7.5); CREATE SOLID east AS BOX (15, 0, 0) TO (30, 12, 7.5);", "hall WITHIN (west, east)"},
	}
}

// TestCellsPageNumbers: what the page holds of every cell is what CELLS, CONTACTS and
// SECTION say, values and volumes to the bit.
func TestCellsPageNumbers(t *testing.T) {
	for name, c := range cellStories() {
		t.Run(name, func(t *testing.T) {
			folder := drawnIn(t, c.setting, "DRAW CELLS OF "+c.of+" SHADED BY temp LIMITS (2, 8) TO 'p.html'; DRAW CELLS OF "+c.of+" SHADED BY temp SEEN FROM (0, 0, 1) TO 'p.svg';")
			s := look(pageData(t, filepath.Join(folder, "p.html")))
			exact := floats(s.Exact)
			rows := answer(t, c.setting, "SELECT id, temp, volume, wall_area, neighbours FROM CELLS OF "+c.of+" WHERE volume > 0;")
			if len(rows) != len(s.IDs) || len(rows) < 5 {
				t.Fatalf("%d cells in the page, %d in the table", len(s.IDs), len(rows))
			}
			walls := map[int32]float64{}
			for _, r := range rows {
				id := r["id"].(string)
				k := slices.Index(s.IDs, id)
				if k < 0 {
					t.Fatalf("%s is not in the page", id)
				}
				value, there := r["temp"].(float64)
				if there && exact[2*k] != value || !there && (!math.IsNaN(exact[2*k]) || s.Values[k] != "") || exact[2*k+1] != r["volume"].(float64) {
					t.Errorf("%s: %v, %v in the page, %v in the table", id, exact[2*k], exact[2*k+1], r)
				}
				if text := present.Number(r["volume"].(float64), present.DefaultDigits); s.Volumes[k] != text {
					t.Errorf("%s: the volume is written %q, not %q", id, s.Volumes[k], text)
				}
				walls[s.body[id]] += r["wall_area"].(float64)
			}
			for b, want := range walls {
				if math.Abs(s.walls[b]-want) > 1e-5*math.Max(want, 1) {
					t.Errorf("body %d has %v of walls in the page, %v in the table", b, s.walls[b], want)
				}
			}
			s.compareContacts(t, answer(t, c.setting, "SELECT a, b FROM CONTACTS OF "+c.of+" WHERE area > 1e-9;"))
			compareCut(t, readPicture(t, filepath.Join(folder, "p.svg"))["cap"], answer(t, c.setting, "SELECT id, area FROM SECTION OF "+c.of+" AT z = 3.75;"), name == "racks")
		})
	}
}

func (s *seen) compareContacts(t *testing.T, rows []map[string]any) {
	t.Helper()
	want := map[string]map[string]bool{}
	for id := range s.near {
		want[id] = map[string]bool{}
	}
	for _, r := range rows {
		a, b := r["a"].(string), r["b"].(string)
		if s.body[a] != s.body[b] {
			want[a][b] = true
		}
	}
	if fmt.Sprint(s.near) != fmt.Sprint(want) {
		t.Errorf("neighbours in the page\n%v\nin the table\n%v", s.near, want)
	}
}

// compareCut compares the opened half of the still, seen from above, with SECTION.
func compareCut(t *testing.T, caps []mark, rows []map[string]any, racks bool) {
	t.Helper()
	if racks { // 9 m high, opened at 4.5
		return
	}
	got, want := map[string]float64{}, map[string]float64{}
	for _, c := range caps {
		for _, id := range strings.Split(c.data["id"], ", ") {
			got[id] += c.number(t, "area") / float64(1+strings.Count(c.data["id"], ", "))
		}
	}
	for _, r := range rows {
		want[r["id"].(string)] += r["area"].(float64)
	}
	for id, area := range want {
		if area > 1e-9 && math.Abs(got[id]-area) > 1e-9*math.Max(1, area) {
			t.Errorf("%s: %v in the cut of the picture, %v in SECTION", id, got[id], area)
		}
	}
	if len(got) == 0 {
		t.Error("the picture has no cut")
	}
}

// drawnIn runs a script in a folder of its own.
func drawnIn(t testing.TB, setting, text string) string {
	t.Helper()
	folder := t.TempDir()
	var o, e bytes.Buffer
	s := New(catalog.Memory(), Options{Out: &o, Err: &e, Quiet: true, Threads: 2, Program: "nearcell test"})
	if err := s.Run(context.Background(), "drawing", setting+text, folder); err != nil {
		t.Fatalf("%v\n%s", err, e.String())
	}
	return folder
}

// TestCellsPageBytes: the same bytes again, with any number of threads and in any order of
// the rows.
func TestCellsPageBytes(t *testing.T) {
	var first []byte
	for k, text := range []string{"many", "many", "(SELECT * FROM many ORDER BY temp) WITHIN racks"} {
		folder := t.TempDir()
		var o bytes.Buffer
		s := New(catalog.Memory(), Options{Out: &o, Err: &o, Quiet: true, Threads: k + 1})
		if err := s.Run(context.Background(), "drawing", manySites()+"DRAW CELLS OF "+text+" SHADED BY temp TO 'p.html';", folder); err != nil {
			t.Fatal(o.String())
		}
		data, err := os.ReadFile(filepath.Join(folder, "p.html"))
		if err != nil {
			t.Fatal(err)
		}
		if k == 2 { // it has no name
			data = bytes.ReplaceAll(data, []byte("Cells, shaded"), []byte("Cells of many, shaded"))
			data = bytes.ReplaceAll(data, []byte("<title>Cells</title>"), []byte("<title>Cells of many</title>"))
			data = bytes.ReplaceAll(data, []byte(">Cells</text>"), []byte(">Cells of many</text>"))
		}
		if first == nil {
			first = data
		}
		if !bytes.Equal(first, data) {
			t.Errorf("%s with %d threads gives other bytes", text, k+1)
		}
	}
}

// TestCellsPageStandsAlone: the file names nothing outside itself, and texts in it stay texts.
func TestCellsPageStandsAlone(t *testing.T) {
	const nasty = "</script><script>alert(1)</script>"
	folder := drawnIn(t, drawingSetting, "CREATE OR REPLACE CAMPAIGN hall AS (SELECT CASE WHEN id = 'L01' THEN '"+nasty+"' ELSE id END AS id, x, y, z, temp AS \"<img src=x onerror=alert(2)>\" FROM rows) WITHIN air;"+
		"DRAW CELLS OF hall SHADED BY \"<img src=x onerror=alert(2)>\" TO 'p.html';")
	data, err := os.ReadFile(filepath.Join(folder, "p.html"))
	if err != nil {
		t.Fatal(err)
	}
	page := string(data)
	for _, bad := range []string{"<script>alert", "<img", "src=\"", "href=", "url(", "@import", "<link", "<iframe", "//cdn"} {
		if strings.Contains(page, bad) {
			t.Errorf("the page has %q", bad)
		}
	}
	for _, address := range regexp.MustCompile(`https?://[^"'\s<]+`).FindAllString(page, -1) {
		if address != "http://www.w3.org/2000/svg" { // a name, not a place
			t.Errorf("the page names %s", address)
		}
	}
	if n := strings.Count(page, "<script"); n != 2 {
		t.Errorf("the page has %d scripts: the data and the program are two", n)
	}
	if !strings.Contains(page, `content="default-src 'none'; script-src 'sha256-`) {
		t.Error("the page has no policy that forbids all else")
	}
	if d := pageData(t, filepath.Join(folder, "p.html")); !slices.Contains(d.IDs, nasty) {
		t.Errorf("the identifier is not there: %q", d.IDs)
	}
}

// TestDrawCellsProblems: what cannot be drawn is refused with its reason, and leaves no file.
func TestDrawCellsProblems(t *testing.T) {
	const mesh = "CREATE SOLID shell AS MESH 'cube.stl'; "
	for _, c := range []struct{ text, code, says string }{
		{"DRAW CELLS OF hall SHADED BY heat TO 'p.html';", "no-column", "heat"},
		{"DRAW CELLS OF hall SHADED BY id TO 'p.html';", "types", "not a number"},
		{"DRAW CELLS OF hall TO 'p.html';", "needs-clause", "SHADED BY"},
		{"DRAW CELLS OF hall SHADED BY temp TO 'p.bmp';", "file-kind", ".html"},
		{"DRAW CELLS OF rows SHADED BY temp TO 'p.html';", "no-solid", "WITHIN"},
		{"DRAW CELLS OF hall UNCLIPPED SHADED BY temp TO 'p.html';", "no-clause", "without an end"},
		{"DRAW CELLS OF twice WITHIN air FOR EACH pass SHADED BY temp TO 'p.html';", "no-clause", "WHERE"},
		{"DRAW CELLS OF hall MEASURED IN air SHADED BY temp TO 'p.html';", "no-clause", "MEASURED IN"},
		{"DRAW CELLS OF hall SHADED BY temp LIMITS (8, 2) TO 'p.html';", "limits", "not below"},
		{"DRAW CELLS OF hall SHADED BY temp SEEN FROM (0, 0, 0) TO 'p.html';", "direction", "length zero"},
		{"DRAW CELLS OF hall SHADED BY temp SEEN FROM (1, 2, NULL) TO 'p.html';", "syntax", ""},
		{"DRAW CELLS OF hall SHADED BY temp SEEN FROM (1, 2, (NULL)) TO 'p.html';", "no-value", "NULL"},
		{"DRAW SECTION OF hall AT z = 1 SHADED BY temp SEEN FROM (1, 2, 3) TO 'p.svg';", "no-clause", "SEEN FROM"},
		{"DRAW SECTION OF hall AT z = 1 SHADED BY temp TO 'p.html';", "file-kind", "only CELLS"},
		{"DRAW CELLS OF hall AT z = 1 SHADED BY temp TO 'p.html';", "no-clause", "AT"},
		{"DRAW CELLS OF (SELECT * FROM hall WHERE temp > 99) WITHIN air SHADED BY temp TO 'p.html';", "no-sites", "belongs to nobody"},
		{"DRAW CELLS OF (SELECT id, x + 100 AS x, y, z, temp FROM rows) WITHIN air SHADED BY temp TO 'p.html';", "no-sites", "belongs to nobody"},
		{"SHOW CELLS OF hall SHADED BY temp;", "no-picture", "files"},
		{mesh + "DRAW CELLS OF hall WITHIN shell SHADED BY temp TO 'p.html';", "no-pieces", "not known as convex parts"},
	} {
		folder := t.TempDir()
		cube, err := os.ReadFile(filepath.Join("problem", "catalogue", "testdata", "hall.stl"))
		if err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(filepath.Join(folder, "cube.stl"), cube, 0o666); err != nil {
			t.Fatal(err)
		}
		var out bytes.Buffer
		s := New(catalog.Memory(), Options{Out: &out, Err: &out, Quiet: true})
		err = s.Run(context.Background(), "drawing", drawingSetting+c.text, folder)
		if err == nil || s.LastCode() != c.code || !strings.Contains(out.String(), c.says) {
			t.Errorf("%s\ngives %q, want %q\n%s", c.text, s.LastCode(), c.code, out.String())
		}
		for _, name := range []string{"p.html", "p.svg"} {
			if _, err := os.Stat(filepath.Join(folder, name)); err == nil {
				t.Errorf("%s\nleaves a file", c.text)
			}
		}
	}
}
