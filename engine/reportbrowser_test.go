package engine

import (
	"bytes"
	"context"
	"encoding/json"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"nearcell/catalog"
	"nearcell/engine/browser"
	"nearcell/engine/present"
)

// pageSetting is a script (invented) with all that a report can have.
const pageSetting = `
TITLE 'Hall 4, summer mapping';
TEXT 'The floor plan at noon. <script>document.title = "broken"</script>';
SELECT '<script>document.title = "broken"</script>' AS trap, NULL AS nothing, temp FROM rows;
TITLE 'Pictures';
DRAW SECTION OF hall AT z = 1 SHADED BY temp LIMITS (2, 8) TO 'p.svg';
DRAW SECTION OF hall THROUGH (15, 9, 3) NORMAL (1, 1, 0.2) METHOD LINEAR SHADED BY temp TO 'q.svg';
DRAW SECTION OF twice AT z = 1 FOR EACH pass WITHIN air SHADED BY temp LIMITS (8) TO 'r.svg';
DRAW COURSE OF log ALONG t SHOWING temp, people LIMITS (8) TO 'c.svg';
DRAW HISTOGRAM OF (SELECT temp, volume FROM CELLS OF hall WHERE temp IS NOT NULL) SHOWING temp WEIGHTED BY volume LIMITS (2, 8) TO 'h.svg';
DRAW PROFILE OF hall FOR temp ALONG z LIMITS (2, 8) TO 'z.svg';
SHOW SECTION OF hall AT z = 1 SHADED BY temp LIMITS (2, 8);
TITLE 'Verdicts';
REQUIRE 'A1 nothing over 20 °C' NONE (SELECT id, temp FROM rows WHERE temp > 20);
REQUIRE 'A2 nothing over 8 °C' NONE (SELECT id, temp FROM rows WHERE temp > 8);
REQUIRE 'A3 what nobody measured' (SELECT NULL) > 3;
SELECT * FROM VERDICTS;
SELECT id, id AS a, id AS b, id AS c, x, y, z, temp, x AS x2, y AS y2, z AS z2, 'a text of some length without an end' AS words FROM rows;
SELECT nothing_of_the_kind FROM rows;
`

// reportPage writes the report of a script into a file of a folder of its own. What fails
// stands in the report.
func reportPage(t testing.TB, text string) string {
	t.Helper()
	folder := t.TempDir()
	var out, told bytes.Buffer
	s := New(catalog.Memory(), Options{Out: &out, Err: &told, Quiet: true, Format: present.AsHTML, Program: "nearcell test"})
	_ = s.Run(context.Background(), "summer.ncell", text, folder)
	if err := s.WriteReport(); err != nil {
		t.Fatalf("%v\n%s", err, told.String())
	}
	file := filepath.Join(folder, "report.html")
	if err := os.WriteFile(file, out.Bytes(), 0o666); err != nil {
		t.Fatal(err)
	}
	return file
}

// Questions to a page, in JavaScript.
const (
	// Blocks that stick out of the page; tables may, in a frame that scrolls.
	jsWide = `(() => { const w = document.documentElement.clientWidth + 0.5;
  return [...document.querySelectorAll('body *')].filter(e => !e.closest('.scroll, pre, svg') && e.getBoundingClientRect().right > w).map(e => e.tagName + '.' + e.className); })()`
	// Texts of pictures that stick out of their picture.
	jsCut = `[...document.querySelectorAll('figure svg text')].filter(e => { const a = e.getBoundingClientRect(), b = e.ownerSVGElement.getBoundingClientRect();
  return a.left < b.left - 1 || a.right > b.right + 1 || a.top < b.top - 1 || a.bottom > b.bottom + 1; }).map(e => e.textContent)`
	// Names and words of pictures that lie over one another.
	jsOver = `(() => { const bad = []; for (const svg of document.querySelectorAll('figure svg')) {
  const boxes = [...svg.querySelectorAll('.name, .part-name, .title, .subtitle, .legend, .words, .note, .axis, .number, .limit-text, .panel')].map(e => {
    const b = e.getBoundingClientRect(), h = b.height * 0.22; return [e.textContent, b.left + 1, b.right - 1, b.top + h, b.bottom - h]; });
  boxes.forEach((a, i) => boxes.slice(0, i).forEach(b => { if (a[1] < b[2] && b[1] < a[2] && a[3] < b[4] && b[3] < a[4]) bad.push(a[0] + ' | ' + b[0]); })); }
  return bad; })()`
	// Contrast of texts with the page, by the formula of WCAG 2.1; those below 4.5.
	jsFaint = `(() => { const light = c => { const [r, g, b] = c.match(/[\d.]+/g).slice(0, 3).map(v => { v /= 255; return v <= 0.03928 ? v / 12.92 : ((v + 0.055) / 1.055) ** 2.4; });
  return 0.2126 * r + 0.7152 * g + 0.0722 * b; };
  const page = light(getComputedStyle(document.body).backgroundColor);
  return [...document.querySelectorAll('h1, h2, h3, p, td, th, summary, a, b')].filter(e => { const t = light(getComputedStyle(e).color);
    return (Math.max(t, page) + 0.05) / (Math.min(t, page) + 0.05) < 4.5; }).map(e => e.tagName + ' ' + e.className + ': ' + e.textContent.slice(0, 30)); })()`
	// The parts of a page from top to bottom.
	jsOrder = `['h1', '.summary', '.verdicts', '.result', 'figure', '.provenance', '.script'].map(q => document.querySelector(q).getBoundingClientRect().top)`
)

// none expects a question to be answered with an empty list.
func none(t *testing.T, p *browser.Page, what, question string) {
	t.Helper()
	var found []string
	if p.Eval(question, &found); len(found) > 0 {
		t.Errorf("%s: %q", what, found)
	}
}

// TestReportInBrowser: wide and narrow, light, dark and on paper, the page has no fault,
// runs nothing, sticks out nowhere, and its texts can be read.
func TestReportInBrowser(t *testing.T) {
	p := browser.Open(t).Page(reportPage(t, drawingSetting+pageSetting), 1200, 900)
	for _, size := range [][2]int{{1200, 900}, {360, 640}} {
		for _, dark := range []bool{false, true} {
			p.Size(size[0], size[1])
			p.Dark(dark)
			where := fmt.Sprintf("%d wide, dark %v", size[0], dark)
			none(t, p, where+": out of the page", jsWide)
			none(t, p, where+": out of a picture", jsCut)
			none(t, p, where+": over one another", jsOver)
			none(t, p, where+": too faint", jsFaint)
			if title := p.Text("document.title"); title != "Hall 4, summer mapping" {
				t.Errorf("%s: the title is %q", where, title)
			}
		}
	}
	var at []float64
	p.Eval(jsOrder, &at)
	for i := 1; i < len(at); i++ {
		if at[i] <= at[i-1] {
			t.Errorf("the order of the page is wrong: %v", at)
		}
	}
	for question, want := range map[string]string{
		"document.scripts.length": "0", "document.querySelectorAll('figure svg').length": "7",
		"document.querySelectorAll('[src], link, iframe, object').length": "0", "document.querySelectorAll('.verdicts tbody tr').length": "3",
	} {
		if got := p.Text(question); got != want {
			t.Errorf("%s is %s, want %s", question, got, want)
		}
	}
	onPaper(t, p)
	if faults := p.Faults(); len(faults) > 0 {
		t.Errorf("faults: %q", faults)
	}
}

// onPaper: on A4 and on Letter nothing is wider than the sheet, and the printed pages have
// the sheet's size.
func onPaper(t *testing.T, p *browser.Page) {
	t.Helper()
	for name, sheet := range map[string][2]float64{"A4": {210, 297}, "Letter": {215.9, 279.4}} {
		p.Paper(true)
		p.Size(int((sheet[0]-30)/25.4*96), 900) // what the margins leave
		none(t, p, name+": out of the sheet", `[...document.querySelectorAll('body *')].filter(e => !e.closest('svg') && e.getBoundingClientRect().right > document.documentElement.clientWidth + 1).map(e => e.tagName + '.' + e.className + e.textContent.slice(0, 40))`)
		none(t, p, name+": out of a picture", jsCut)
		none(t, p, name+": too high for the sheet", fmt.Sprintf(`[...document.querySelectorAll('figure svg')].filter(e => e.getBoundingClientRect().height > %g).map(e => e.textContent.slice(0, 40))`, (sheet[1]-36)/25.4*96))
		p.Paper(false)
		data := p.PDF(sheet[0], sheet[1])
		box := fmt.Sprintf("/MediaBox [0 0 %.0f", sheet[0]/25.4*72)
		if !bytes.HasPrefix(data, []byte("%PDF-")) || bytes.Count(data, []byte("/MediaBox [0 0 ")) < 4 || !strings.HasPrefix(mediaBox(data), box[:len(box)-1]) {
			t.Errorf("%s: %d bytes, %q", name, len(data), mediaBox(data))
		}
	}
}

// mediaBox is the size of the first page of a PDF, as it is written there.
func mediaBox(data []byte) string {
	_, rest, _ := bytes.Cut(data, []byte("/MediaBox"))
	box, _, _ := bytes.Cut(rest, []byte("]"))
	return "/MediaBox" + string(box)
}

// BenchmarkReportOpens opens a report of 1,000 tables of ten rows in a headless Chromium. ready-ms
// is the time from asking for the page until it can be read, painted-ms until the first
// screen has been painted, whole-ms until all of it has been laid out at once.
func BenchmarkReportOpens(b *testing.B) {
	var script strings.Builder
	script.WriteString("CREATE TABLE t AS (SELECT n AS id, n * 0.5 AS volume, 'rack' AS place FROM (VALUES (1),(2),(3),(4),(5),(6),(7),(8),(9),(10)) AS v (n));\n")
	for range 1000 {
		script.WriteString("SELECT * FROM t;\n")
	}
	file := reportPage(b, script.String())
	info, err := os.Stat(file)
	if err != nil {
		b.Fatal(err)
	}
	open := browser.Open(b)
	var ready, painted, whole float64
	for b.Loop() {
		p := open.Page(file, 1200, 900)
		var raw string
		p.Eval(`(async () => { const shown = new Promise(done => new PerformanceObserver(l => done(l.getEntries()[0].startTime)).observe({type: 'paint', buffered: true}));
  const paint = await shown, n = performance.getEntriesByType('navigation')[0], from = performance.now();
  document.querySelectorAll('.result').forEach(e => { e.style.contentVisibility = 'visible'; });
  const high = document.documentElement.scrollHeight;
  return JSON.stringify([n.domContentLoadedEventEnd, paint, performance.now() - from, high, document.querySelectorAll('table').length]); })()`, &raw)
		var got [5]float64
		if err := json.Unmarshal([]byte(raw), &got); err != nil || got[4] < 1000 {
			b.Fatalf("%s: %v", raw, err)
		}
		ready, painted, whole = ready+got[0], painted+got[1], whole+got[2]
		p.Close()
	}
	n := float64(b.N)
	b.ReportMetric(ready/n, "ready-ms")
	b.ReportMetric(painted/n, "painted-ms")
	b.ReportMetric(whole/n, "whole-ms")
	b.ReportMetric(float64(info.Size())/1e6, "MB")
}
