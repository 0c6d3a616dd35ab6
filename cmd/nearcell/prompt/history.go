package prompt

import (
	"bufio"
	"bytes"
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"unicode/utf8"

	"nearcell/engine"
	"nearcell/lang"
)

const (
	historyFile = "history"
	// historyLines is how many statements are kept.
	historyLines = 1000
	// lineBreak stands for a line break inside a text or a quoted name.
	lineBreak = "␤"
)

// history is what was asked before, one line a statement, the oldest first.
type history struct {
	path    string // empty: kept in memory only
	lines   []string
	pending []string // not in the file yet, since its folder is not there yet
}

// openHistory reads the history of a catalog's folder; "" is for none. A history
// that cannot be read is none: nothing depends on it.
func openHistory(folder string) *history {
	h := &history{}
	if folder == "" {
		return h
	}
	h.path = filepath.Join(folder, historyFile)
	data, err := os.ReadFile(h.path)
	if err != nil {
		return h
	}
	read := bufio.NewScanner(bytes.NewReader(data))
	read.Buffer(nil, len(data)+1)
	for read.Scan() {
		if line := strings.TrimSpace(read.Text()); line != "" && utf8.ValidString(line) {
			h.lines = append(h.lines, line)
		}
	}
	if len(h.lines) > 2*historyLines {
		h.lines = slices.Clone(h.lines[len(h.lines)-historyLines:])
		h.rewrite()
	}
	return h
}

// rewrite shortens the file.
func (h *history) rewrite() {
	// An error leaves the long file, which serves as well.
	_ = engine.WriteAside(h.path, func(f *os.File) error {
		_, err := f.WriteString(strings.Join(h.lines, "\n") + "\n")
		return err
	})
}

// add keeps a statement unless it is the same as the last one.
func (h *history) add(line string) {
	if line == "" || len(h.lines) > 0 && h.lines[len(h.lines)-1] == line {
		return
	}
	h.lines = append(h.lines, line)
	if len(h.lines) > historyLines {
		h.lines = h.lines[len(h.lines)-historyLines:]
	}
	if h.path == "" {
		return
	}
	h.pending = append(h.pending, line)
	f, err := os.OpenFile(h.path, os.O_APPEND|os.O_CREATE|os.O_WRONLY, 0o600)
	if err != nil {
		if !errors.Is(err, fs.ErrNotExist) { // it can never be written
			h.path, h.pending = "", nil
		}
		return
	}
	defer f.Close()
	if _, err := f.WriteString(strings.Join(h.pending, "\n") + "\n"); err == nil {
		h.pending = nil
	}
}

// oneLines gives each statement of a text as one line that means the same. What
// holds the sign for a line break itself, or is not UTF-8, is left out.
func oneLines(src string) []string {
	var lines []string
	for _, p := range lang.Split(src) {
		statement := src[p.Start:p.End]
		if strings.Contains(statement, lineBreak) || !utf8.ValidString(statement) {
			continue
		}
		lines = append(lines, oneLine(statement)+";")
	}
	return lines
}

// oneLine joins the lines of a statement: a line break with the blanks around it
// becomes one blank, a comment to the end of the line a bracketed one, and a
// line break within quotes its sign.
func oneLine(src string) string {
	var b strings.Builder
	for at := 0; at < len(src); {
		rest := src[at:]
		switch {
		case rest[0] == '\'' || rest[0] == '"':
			s := scanner{src: src, at: at, cursor: -1}
			s.quote(rest[0])
			b.WriteString(signed(src[at:s.at]))
			at = s.at
		case strings.HasPrefix(rest, "--"):
			comment, _, _ := strings.Cut(rest, "\n")
			at += len(comment)
			bracket(&b, comment[2:])
		case strings.HasPrefix(rest, "/*"):
			n := strings.Index(rest[2:], "*/")
			if n < 0 {
				n = len(rest) - 2
			}
			bracket(&b, rest[2:2+n])
			at += min(len(rest), n+4)
		case isBreak(rest[0]):
			blanks := len(rest) - len(strings.TrimLeft(rest, " \t\r\n\v\f"))
			at += blanks
			before := strings.TrimRight(b.String(), " \t")
			b.Reset()
			b.WriteString(before + " ")
		case rest[0] < ' ': // a tab would ask for completion
			b.WriteByte(' ')
			at++
		default:
			_, size := utf8.DecodeRuneInString(rest)
			b.WriteString(rest[:size])
			at += size
		}
	}
	return strings.TrimSpace(b.String())
}

func isBreak(c byte) bool { return c == '\n' || c == '\r' }

// signed writes the line breaks of a quoted text as signs.
func signed(quoted string) string {
	return strings.ReplaceAll(strings.ReplaceAll(quoted, "\r\n", lineBreak), "\n", lineBreak)
}

// bracket writes a comment in brackets, without what would close it early.
func bracket(b *strings.Builder, comment string) {
	comment = strings.Join(strings.Fields(comment), " ")
	comment = strings.ReplaceAll(comment, "*/", "* /")
	b.WriteString("/* " + comment + " */")
}

// recalled turns the signs of a line back into line breaks.
func recalled(line string) string { return strings.ReplaceAll(line, lineBreak, "\n") }
