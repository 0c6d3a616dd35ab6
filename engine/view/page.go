package view

import (
	"bytes"
	"crypto/sha256"
	_ "embed"
	"encoding/base64"
	"fmt"
	"html"
	"strings"
	"text/template"

	"nearcell/engine/draw"
)

//go:embed view.js
var program string

//go:embed view.css
var style string

//go:embed page.tmpl
var page string

var pageTemplate = template.Must(template.New("page").Funcs(template.FuncMap{"text": html.EscapeString}).Parse(page))

// named is how a policy names a text of the page.
func named(text string) string {
	sum := sha256.Sum256([]byte(text))
	return "'sha256-" + base64.StdEncoding.EncodeToString(sum[:]) + "'"
}

// Page writes the page; still is the space's scene, generator the name and the version of
// the program.
func Page(x *draw.Space, still *draw.Scene, generator string) ([]byte, error) {
	data, err := dataOf(x).json()
	if err != nil {
		return nil, err
	}
	has := map[draw.Hatch]bool{}
	for _, h := range x.Marks() {
		has[h] = true
	}
	_, seen := x.Seen()
	var b bytes.Buffer
	err = pageTemplate.Execute(&b, map[string]any{
		"Title": x.Title, "Shaded": x.Shaded(), "Words": x.Words(), "Seen": seen, "Notes": x.Notes, "Generator": generator, "Length": x.Length,
		"Program": program, "Style": style, "ProgramSum": named(program), "StyleSum": named(style),
		"Data": string(data), "Still": string(still.SVG()), "Legend": legend(x), "Source": x.Scale().Source,
		"Over": has[draw.Rising], "Under": has[draw.Falling], "Missing": has[draw.Level],
	})
	return b.Bytes(), err
}

// Measures of the legend's strip.
const (
	stripWide = 400.0
	stripTop  = 20.0
	stripHigh = 14.0
)

// legend is the scale of colours and the marks, in the page's own ink.
func legend(x *draw.Space) string {
	scale := x.Scale()
	var b strings.Builder
	name := x.Value
	if x.Unit != "" {
		name += " [" + x.Unit + "]"
	}
	fmt.Fprintf(&b, `<svg class="strip" viewBox="-24 0 %g 52" role="img" aria-label="%s"><g fill="currentColor" font-size="11" text-anchor="middle">`,
		stripWide+48, html.EscapeString("Scale of colours: "+name+" from "+draw.Number(scale.Lo)+" to "+draw.Number(scale.Hi)))
	const steps = 50
	for k := range steps {
		fmt.Fprintf(&b, `<rect x="%g" y="%g" width="%g" height="%g" fill="%s"/>`, stripWide*float64(k)/steps, stripTop, stripWide/steps+0.4, stripHigh,
			scale.At((float64(k)+0.5)/steps))
	}
	fmt.Fprintf(&b, `<rect x="0" y="%g" width="%g" height="%g" fill="none" stroke="currentColor"/>`, stripTop, stripWide, stripHigh)
	for _, t := range scale.Ticks(8) {
		at := stripWide * t.Share
		fmt.Fprintf(&b, `<path d="M%.2f %gv4" stroke="currentColor"/><text x="%.2f" y="%g">%s</text>`, at, stripTop+stripHigh, at, stripTop+stripHigh+15, t.Text)
	}
	for k, t := range scale.LimitTicks(x.Unit) {
		at, anchor := stripWide*t.Share, "middle"
		if len(scale.Limits) == 2 { // to both sides, so that they never meet
			anchor = [2]string{"end", "start"}[k]
		}
		fmt.Fprintf(&b, `<path class="limit" d="M%.2f %gv%g" stroke="currentColor" stroke-width="2.5"/><text x="%.2f" y="11" text-anchor="%s">%s</text>`,
			at, stripTop-5, stripHigh+7, at, anchor, html.EscapeString(t.Text))
	}
	b.WriteString("</g></svg>")
	words := x.MarkWords()
	lines := map[draw.Hatch]string{draw.Rising: "M-2 12L10 0M4 15L19 0M13 15L26 2M22 15L26 11", draw.Falling: "M-2 2L11 15M4 0L19 15M13 0L26 13M22 0L26 4",
		draw.Level: "M0 4H24M0 10H24"}
	for _, h := range x.Marks() {
		fmt.Fprintf(&b, `<span class="mark"><svg width="24" height="14" aria-hidden="true"><rect width="24" height="14" fill="#eeeeee"/>`+
			`<path d="%s" stroke="#222222"/><rect width="24" height="14" fill="none" stroke="currentColor"/></svg> %s</span>`, lines[h], words[h])
	}
	return b.String()
}
