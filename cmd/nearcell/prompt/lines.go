package prompt

import (
	"strings"

	"nearcell/lang"
)

// gathered is what was typed so far of one or more statements.
type gathered struct {
	text   string
	hinted bool // how statements end was said
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
	g.text = ""
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

// hint says why a line did not run, once for each reason, where a newcomer may
// wonder: the semicolon, or a quote that is still open.
func (g *gathered) hint(line string) string {
	switch {
	case strings.HasSuffix(strings.TrimSpace(line), ";"):
		switch unclosed(strings.TrimSuffix(g.text, "\n")) {
		case '\'':
			return "a text is not closed yet: end it with ' (Ctrl-C drops the statement)"
		case '"':
			return `a quoted name is not closed yet: end it with " (Ctrl-C drops the statement)`
		case '*':
			return "a comment is not closed yet: end it with */ (Ctrl-C drops the statement)"
		}
	case !g.hinted:
		g.hinted = true
		return "the statement goes on until a ; ends it (Ctrl-C drops it)"
	}
	return ""
}
