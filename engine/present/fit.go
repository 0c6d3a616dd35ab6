package present

import (
	"strings"

	"github.com/clipperhouse/displaywidth"

	"nearcell/catalog/column"
)

const (
	gap = 2 // blanks between two columns
	// A text column is broken into lines of no less than narrowText characters.
	narrowText = 24
)

// fit makes the table no wider than Options.Width. Long texts are broken into
// lines at their blanks first, since that loses nothing; if that is not enough,
// the last columns are left out. The first column always stays.
func (t *tableWriter) fit() {
	if t.o.Width <= 0 || len(t.schema) == 0 {
		return
	}
	widths := t.widths()
	t.breakTexts(widths)
	total := widths[0]
	for i := 1; i < len(widths); i++ {
		if total += gap + widths[i]; total > t.o.Width {
			t.cut(i)
			return
		}
	}
}

// widths are the characters that each column takes.
func (t *tableWriter) widths() []int {
	widths := make([]int, len(t.schema))
	for i, f := range t.schema {
		widths[i] = max(displaywidth.String(oneLine(f.Name)), displaywidth.String(oneLine(f.Unit.String())))
	}
	for _, row := range t.cells {
		for i, cell := range row {
			widths[i] = max(widths[i], displaywidth.String(cell))
		}
	}
	return widths
}

// breakTexts narrows text columns, the widest first, until the table fits or
// none is left to narrow.
func (t *tableWriter) breakTexts(widths []int) {
	excess := -t.o.Width - gap
	for _, w := range widths {
		excess += w + gap
	}
	broken := map[int]bool{}
	for excess > 0 {
		widest := -1
		for i, w := range widths {
			if w > t.narrowest(i, w) && (widest < 0 || w > widths[widest]) {
				widest = i
			}
		}
		if widest < 0 {
			break
		}
		widths[widest]--
		excess--
		broken[widest] = true
	}
	for i := range broken {
		for _, row := range t.cells {
			row[i] = breakLines(row[i], widths[i])
		}
	}
}

// narrowest is how narrow column i, w characters wide, may become.
func (t *tableWriter) narrowest(i, w int) int {
	if t.schema[i].Type != column.Text {
		return w
	}
	return min(w, max(narrowText, displaywidth.String(oneLine(t.schema[i].Name))))
}

// breakLines breaks a text into lines of at most width characters, at blanks
// where there are any.
func breakLines(text string, width int) string {
	if displaywidth.String(text) <= width {
		return text
	}
	var lines []string
	line := ""
	for _, word := range strings.Fields(text) {
		for displaywidth.String(word) > width {
			head := headOf(word, width)
			if line != "" {
				lines = append(lines, line)
				line = ""
			}
			lines = append(lines, head)
			word = word[len(head):]
		}
		switch {
		case line == "":
			line = word
		case displaywidth.String(line)+1+displaywidth.String(word) <= width:
			line += " " + word
		default:
			lines = append(lines, line)
			line = word
		}
	}
	if line != "" {
		lines = append(lines, line)
	}
	return strings.Join(lines, "\n")
}

// headOf is the longest beginning of a word that is at most width wide, one
// character at least.
func headOf(word string, width int) string {
	end := 0
	for i, r := range word {
		next := i + len(string(r))
		if end > 0 && displaywidth.String(word[:next]) > width {
			break
		}
		end = next
	}
	return word[:end]
}

// cut leaves the columns from n on out.
func (t *tableWriter) cut(n int) {
	for _, f := range t.schema[n:] {
		t.out = append(t.out, f.Name)
	}
	t.schema = t.schema[:n:n]
	for i, row := range t.cells {
		t.cells[i] = row[:n:n]
	}
}
