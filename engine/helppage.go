package engine

import (
	"strings"
	"unicode/utf8"
)

// page is a page of HELP on its way: plain text, broken at width characters
// (0: never), in which what is to be typed stands two blanks to the right.
type page struct {
	b     strings.Builder
	width int
}

const pageIndent = "  "

// tied stands for a blank at which a line is not broken.
const tied = "\x1f"

// heading is the first line of a page.
func (p *page) heading(text string) {
	p.gap()
	p.b.WriteString(text + "\n")
}

// gap is an empty line between what is written and what follows.
func (p *page) gap() {
	if p.b.Len() > 0 {
		p.b.WriteString("\n")
	}
}

// say writes a paragraph.
func (p *page) say(text string) {
	if text == "" {
		return
	}
	p.gap()
	p.flow(text, 0)
}

// verbatim writes lines as they are.
func (p *page) verbatim(lines ...string) {
	if len(lines) == 0 {
		return
	}
	p.gap()
	for _, line := range lines {
		for _, l := range strings.Split(line, "\n") {
			p.b.WriteString(pageIndent + l + "\n")
		}
	}
}

// table writes rows with aligned columns, the last one broken below itself.
func (p *page) table(rows [][]string) {
	if len(rows) == 0 {
		return
	}
	p.gap()
	widths := make([]int, len(rows[0]))
	for _, r := range rows {
		for i, cell := range r {
			widths[i] = max(widths[i], utf8.RuneCountInString(cell))
		}
	}
	for _, r := range rows {
		line, at := pageIndent, len(pageIndent)
		for i, cell := range r[:len(r)-1] {
			line += cell + strings.Repeat(" ", widths[i]-utf8.RuneCountInString(cell)+2)
			at += widths[i] + 2
		}
		p.b.WriteString(line)
		p.flow(r[len(r)-1], at)
	}
}

// flow writes words from where the line stands, and begins new lines at column
// indent. Where that leaves no room to speak of, lines are not broken.
func (p *page) flow(text string, indent int) {
	const least = 20
	width := p.width
	if width-indent < least {
		width = 0
	}
	at := indent
	for i, word := range strings.Fields(text) {
		n := utf8.RuneCountInString(word)
		switch {
		case i == 0:
		case width > 0 && at+1+n > width:
			p.b.WriteString("\n" + strings.Repeat(" ", indent))
			at = indent
		default:
			p.b.WriteByte(' ')
			at++
		}
		p.b.WriteString(strings.ReplaceAll(word, tied, " "))
		at += n
	}
	p.b.WriteByte('\n')
}

// text is the page; lines have no blanks at their ends.
func (p *page) text() string {
	lines := strings.Split(p.b.String(), "\n")
	for i, l := range lines {
		lines[i] = strings.TrimRight(l, " ")
	}
	return strings.Join(lines, "\n")
}

// firstSentence is the summary of a text.
func firstSentence(text string) string {
	if i := strings.Index(text, ". "); i >= 0 {
		return text[:i+1]
	}
	return text
}
