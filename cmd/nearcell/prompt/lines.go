package prompt

import (
	"strings"

	"nearcell/lang"
)

// gathered is what was typed so far of one or more statements.
type gathered struct {
	text   string
	hinted bool // how statements end was said
	open   byte // the quote of which was said that it is open
}

// add takes a line and tells whether everything can run now.
func (g *gathered) add(line string) (whole bool) {
	first := g.text == ""
	g.text += recalled(line) + "\n"
	pieces := lang.Split(g.text)
	if first && isLoneWord(line) {
		return true
	}
	if unclosed(strings.TrimSuffix(g.text, "\n")) == '*' {
		return false
	}
	for _, p := range pieces {
		if !p.Closed {
			return false
		}
	}
	return true
}

// empty tells whether there is nothing to run: blanks, comments, semicolons.
func (g *gathered) empty() bool { return len(lang.Split(g.text)) == 0 }

// take gives the text and begins anew.
func (g *gathered) take() string {
	text := g.text
	g.text, g.open = "", 0
	return text
}

// loneWords are what people type without a semicolon, and mean at once.
var loneWords = []string{"QUIT", "EXIT", "HELP"}

// isLoneWord tells whether a line is nothing but one of those words.
func isLoneWord(line string) bool {
	for _, w := range loneWords {
		if strings.EqualFold(strings.TrimSpace(line), w) {
			return true
		}
	}
	return false
}

// isExit tells whether a text asks to end, in a word that is no statement.
func isExit(text string) bool {
	return strings.EqualFold(strings.Trim(text, " \t\r\n;"), "EXIT")
}

// hint says why a line did not run, where a newcomer may wonder: a quote that is
// still open, or the semicolon, the latter once.
func (g *gathered) hint() string {
	open := unclosed(strings.TrimSuffix(g.text, "\n"))
	what := ""
	switch open {
	case '\'':
		what = "a text is not closed yet: end it with '"
	case '"':
		what = `a quoted name is not closed yet: end it with "`
	case '*':
		what = "a comment is not closed yet: end it with */"
	}
	if what == "" {
		g.open = 0
		if g.hinted {
			return ""
		}
		g.hinted = true
		return "the statement goes on until a ; ends it (Ctrl-C drops it)"
	}
	if g.open == open && !strings.HasSuffix(strings.TrimSpace(g.text), ";") {
		return "" // said before
	}
	g.open = open
	return what + " (Ctrl-C drops the statement)"
}
