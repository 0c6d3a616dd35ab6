package lang

import (
	"strings"
	"unicode"
	"unicode/utf8"
)

const (
	caretIndent = "  "
	caretWidth  = 110 // columns of the source line that are shown at most
	tabWidth    = 4   // a tab counts as this much when a long line is cut
)

// LineColumn gives the line and the column of a byte offset, both counted from 1, the
// column in characters.
func LineColumn(src string, offset int) (line, column int) {
	offset = min(max(offset, 0), len(src))
	start := strings.LastIndexByte(src[:offset], '\n') + 1
	return strings.Count(src[:start], "\n") + 1, utf8.RuneCountInString(src[start:offset]) + 1
}

// Caret renders a message with its place: file and line, the source line, and marks
// under the part that is meant, without a newline at the end.
//
//	hall.ncell:3: there is no column 'tmep' in CELLS OF hall (did you mean 'temp'?)
//	  SELECT id, tmep FROM CELLS OF hall;
//	             ^^^^
//
// A span over several lines is marked to the end of its first; an empty span has one
// mark; a span at the end of the text has its mark behind the last word. Of a very
// long line only the surroundings of the place are shown, with … where it was cut.
// Without a file name the message begins "line 3:".
func Caret(file, src string, span Span, message string) string {
	start := min(max(span.Start, 0), len(src))
	end := min(max(span.End, start), len(src))
	for start > 0 && start < len(src) && !utf8.RuneStart(src[start]) {
		start--
	}
	for end < len(src) && !utf8.RuneStart(src[end]) {
		end++
	}
	if start == len(src) {
		start = len(strings.TrimRightFunc(src, unicode.IsSpace))
		end = start
	}
	lineStart := strings.LastIndexByte(src[:start], '\n') + 1
	lineEnd := len(src)
	if n := strings.IndexByte(src[start:], '\n'); n >= 0 {
		lineEnd = start + n
	}
	line := strings.TrimRight(src[lineStart:lineEnd], "\r")
	from := min(start-lineStart, len(line))
	to := min(end-lineStart, len(line))

	number := itoa(strings.Count(src[:lineStart], "\n") + 1)
	head := file + ":" + number + ": "
	if file == "" {
		head = "line " + number + ": "
	}
	shownLine, blanks, marks := cutLine(line, from, to)
	return head + message + "\n" + caretIndent + shownLine + "\n" + caretIndent + blanks + strings.Repeat("^", max(marks, 1))
}

// cutLine gives the part of the line to show, what stands under it before the marks
// (tabs stay tabs, so that both lines are laid out alike), and the number of marks.
func cutLine(line string, from, to int) (shownLine, blanks string, marks int) {
	left, right := 0, len(line)
	if columns(line) > caretWidth {
		left = window(line[:from], caretWidth/3)
		right = from + reach(line[from:], caretWidth-columns(line[left:from]))
		to = min(to, right)
	}
	var text, under strings.Builder
	if left > 0 {
		text.WriteString("…")
		under.WriteByte(' ')
	}
	for i, r := range line[left:right] {
		if r != '\t' && (unicode.IsControl(r) || r == utf8.RuneError) {
			r = '\uFFFD'
		}
		text.WriteRune(r)
		if left+i >= from {
			continue
		}
		if r == '\t' {
			under.WriteByte('\t')
		} else {
			under.WriteString(strings.Repeat(" ", runeColumns(r)))
		}
	}
	if right < len(line) {
		text.WriteString("…")
	}
	return text.String(), under.String(), columns(line[from:to])
}

// window gives where the last so many columns of the text begin.
func window(text string, width int) int {
	at := len(text)
	for at > 0 {
		r, size := utf8.DecodeLastRuneInString(text[:at])
		if width -= runeColumns(r); width < 0 {
			break
		}
		at -= size
	}
	return at
}

// reach gives where the first so many columns of the text end.
func reach(text string, width int) int {
	for i, r := range text {
		if width -= runeColumns(r); width < 0 {
			return i
		}
	}
	return len(text)
}

func columns(text string) int {
	n := 0
	for _, r := range text {
		n += runeColumns(r)
	}
	return n
}

// wide are the ranges whose characters take two columns in a terminal (East Asian wide
// and full-width letters, and pictures), the well-known blocks of Unicode.
var wide = []struct{ first, last rune }{
	{0x1100, 0x115F}, {0x2E80, 0x303E}, {0x3041, 0x33FF}, {0x3400, 0x4DBF}, {0x4E00, 0x9FFF},
	{0xA000, 0xA4CF}, {0xA960, 0xA97F}, {0xAC00, 0xD7A3}, {0xF900, 0xFAFF}, {0xFE30, 0xFE6F},
	{0xFF00, 0xFF60}, {0xFFE0, 0xFFE6}, {0x1F300, 0x1F64F}, {0x1F680, 0x1F6FF},
	{0x1F900, 0x1FAFF}, {0x20000, 0x3FFFD},
}

func runeColumns(r rune) int {
	switch {
	case r == '\t':
		return tabWidth
	case r < 0x300:
		return 1
	case unicode.In(r, unicode.Mn, unicode.Me, unicode.Cf):
		return 0
	}
	for _, w := range wide {
		if w.first <= r && r <= w.last {
			return 2
		}
	}
	return 1
}
