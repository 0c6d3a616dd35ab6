package report

import (
	"bytes"
	_ "embed"
	"fmt"
	"html/template"
	"io"
	"strings"
	"unicode/utf8"
)

//go:embed style.css
var style string

//go:embed page.tmpl
var pages string

var templates = template.Must(template.New("report").Funcs(template.FuncMap{"clean": clean}).Parse(pages))

// Level says how much a remark matters.
type Level string

// The levels of remarks below a result.
const (
	Note    Level = "Note"
	Warning Level = "Warning"
)

// Verdict is what a requirement came to.
type Verdict struct {
	Result string // "PASS", "FAIL", "NOT DECIDED"
	Label  string
	Reason string // of a FAIL or NOT DECIDED
	Place  string // "hall.ncell, line 12"
	Anchor string // of the place in the report where it was decided
}

// Mark is a sign for the result, so that it is not told by colour alone.
func (v Verdict) Mark() string { return markOf(v.Result) }

// Class names the result for the style.
func (v Verdict) Class() string { return classOf(v.Result) }

func markOf(result string) string {
	switch result {
	case "PASS":
		return "✓"
	case "FAIL":
		return "✗"
	}
	return "?"
}

func classOf(result string) string {
	switch result {
	case "PASS":
		return "pass"
	case "FAIL":
		return "fail"
	}
	return "open"
}

// Report is one report on its way. It is not safe for concurrent use.
type Report struct {
	title    string
	body     bytes.Buffer
	headings []heading
	verdicts []Verdict
	failures []link
	warnings int
	blocks   int
	pictures int
	err      error // the first one of a template
}

type heading struct{ Text, Anchor string }

type link struct{ Text, Anchor string }

// New is an empty report.
func New() *Report { return &Report{} }

// add puts a block at the end.
func (r *Report) add(name string, data any) {
	r.blocks++
	if err := templates.ExecuteTemplate(&r.body, name, data); err != nil && r.err == nil {
		r.err = err
	}
}

// anchor is a name for the next block, by its number.
func (r *Report) anchor() string { return fmt.Sprint("block-", r.blocks+1) }

// Title is the report's title the first time, and that of a chapter after that.
func (r *Report) Title(text string) {
	if r.title == "" && strings.TrimSpace(text) != "" {
		r.title = text
		return
	}
	h := heading{text, r.anchor()}
	r.headings = append(r.headings, h)
	r.add("heading", h)
}

// Text is a text, an empty line in it begins a new paragraph.
func (r *Report) Text(text string) { r.add("text", Paragraphs(text)) }

// Paragraphs are the parts of a text between its empty lines, each of one line.
func Paragraphs(text string) []string {
	var list []string
	var now []string
	flush := func() {
		if len(now) > 0 {
			list = append(list, strings.Join(now, " "))
		}
		now = nil
	}
	for line := range strings.Lines(text) {
		if line = strings.TrimSpace(clean(line)); line == "" {
			flush()
			continue
		}
		now = append(now, line)
	}
	flush()
	return list
}

// Plain is text whose line ends and blanks matter, such as a page of HELP.
func (r *Report) Plain(text string) { r.add("plain", lines(text)) }

// Remark is a note or a warning to the result before it.
func (r *Report) Remark(level Level, text string) {
	if level == Warning {
		r.warnings++
	}
	r.add("remark", struct {
		Level       Level
		Text, Class string
	}{level, text, strings.ToLower(string(level))})
}

// Decided is a verdict, at its place among the blocks and in the list on top.
func (r *Report) Decided(v Verdict) {
	v.Anchor = r.anchor()
	r.verdicts = append(r.verdicts, v)
	r.add("decided", v)
}

// Failed says that a statement failed, why, and how many after it were not run.
func (r *Report) Failed(message string, notRun int) {
	l := link{firstLine(message), r.anchor()}
	r.failures = append(r.failures, l)
	r.add("failed", struct {
		Anchor, Message string
		NotRun          int
	}{l.Anchor, lines(message), notRun})
}

func firstLine(text string) string {
	first, _, _ := strings.Cut(strings.TrimSpace(text), "\n")
	return first
}

// Picture is a drawing in SVG. words tell what it shows, for those who do not see it too;
// place and statement say where it comes from.
func (r *Report) Picture(svg []byte, words, place, statement string) error {
	inline, err := r.inline(svg, words)
	if err != nil {
		return err
	}
	r.add("picture", struct {
		SVG              template.HTML
		Place, Statement string
	}{template.HTML(inline), place, lines(statement)})
	return nil
}

// page is what the file is made of.
type page struct {
	Title      string
	Style      template.CSS
	Failures   []link
	Warnings   int
	Verdicts   []Verdict
	Counts     string
	Headings   []heading
	Body       template.HTML
	Provenance Provenance
}

// Write writes the report with what it rests on.
func (r *Report) Write(w io.Writer, p Provenance) error {
	if r.err != nil {
		return r.err
	}
	title := r.title
	if title == "" {
		title = "Report"
		if len(p.Scripts) > 0 {
			title = "Report of " + p.Scripts[0].Name
		}
	}
	if r.blocks == 0 {
		r.add("text", []string{"The script printed nothing."})
	}
	headings := r.headings
	if len(headings) < 3 {
		headings = nil
	}
	return templates.ExecuteTemplate(w, "page", page{Title: title, Style: template.CSS(style), Failures: r.failures, Warnings: r.warnings,
		Verdicts: r.verdicts, Counts: r.counts(), Headings: headings, Body: template.HTML(r.body.String()), Provenance: p})
}

// counts says in words what the verdicts come to.
func (r *Report) counts() string {
	n := map[string]int{}
	for _, v := range r.verdicts {
		n[v.Class()]++
	}
	return fmt.Sprintf("%d passed, %d failed, %d not decided", n["pass"], n["fail"], n["open"])
}

// clean replaces what XML may not hold and what would break a line.
func clean(text string) string {
	return strings.Map(func(c rune) rune {
		if c == '\n' || c == '\t' || c == '\r' {
			return ' '
		}
		return sound(c)
	}, valid(text))
}

// lines is clean for texts whose line ends and tabs matter.
func lines(text string) string {
	text = strings.ReplaceAll(valid(text), "\r\n", "\n")
	return strings.Map(func(c rune) rune {
		if c == '\n' || c == '\t' {
			return c
		}
		return sound(c)
	}, text)
}

func valid(text string) string { return strings.ToValidUTF8(text, string(utf8.RuneError)) }

func sound(c rune) rune {
	switch {
	case c < ' ' || c >= 0x7f && c < 0xa0:
		return ' '
	case c == 0xfffe || c == 0xffff:
		return utf8.RuneError
	}
	return c
}
