package lang

import (
	"strings"
	"testing"
	"unicode/utf8"

	"pgregory.net/rapid"
)

// place finds the part of a text between the marks « and », and the text without them.
func place(marked string) (string, Span) {
	start := strings.Index(marked, "«")
	text := strings.Replace(marked, "«", "", 1)
	end := strings.Index(text, "»")
	return strings.Replace(text, "»", "", 1), Span{start, end}
}

func TestCaret(t *testing.T) {
	for _, c := range []struct{ name, marked, want string }{
		{"a word", "x;\ny;\nSELECT id, «tmep» FROM CELLS OF hall;\n", `
hall.ncell:3: what
  SELECT id, tmep FROM CELLS OF hall;
             ^^^^`},
		{"an empty place", "SELECT «»;", `
hall.ncell:1: what
  SELECT ;
         ^`},
		{"the end of the text", "SELECT 1 +«»", `
hall.ncell:1: what
  SELECT 1 +
            ^`},
		{"blank lines before the end", "SELECT 1 +\n\n  \n«»", `
hall.ncell:1: what
  SELECT 1 +
            ^`},
		{"several lines", "SELECT «a +\n  b» FROM t", `
hall.ncell:1: what
  SELECT a +
         ^^^`},
		{"carriage returns", "SELECT «a +\r\n  b» FROM t\r\n", `
hall.ncell:1: what
  SELECT a +
         ^^^`},
		{"tabs stay tabs", "\tSELECT\t«a» FROM t", "\nhall.ncell:1: what\n  \tSELECT\ta FROM t\n  \t      \t^"},
		{"wide letters", "SELECT '日本', «x» FROM t", `
hall.ncell:1: what
  SELECT '日本', x FROM t
                 ^`},
		{"wide letters marked", "SELECT «'日本'» FROM t", `
hall.ncell:1: what
  SELECT '日本' FROM t
         ^^^^^^`},
		{"letters of two bytes", "SELECT '°C', «größe» FROM t", `
hall.ncell:1: what
  SELECT '°C', größe FROM t
               ^^^^^`},
		{"letters in two parts", "SELECT 'e\u0301', «x» FROM t", "\nhall.ncell:1: what\n  SELECT 'e\u0301', x FROM t\n              ^"},
		{"an empty text", "«»", "\nhall.ncell:1: what\n  \n  ^"},
		{"a newline alone", "«»\n", "\nhall.ncell:1: what\n  \n  ^"},
	} {
		text, span := place(c.marked)
		if got := Caret("hall.ncell", text, span, "what"); got != c.want[1:] {
			t.Errorf("%s: got\n%s\nwant%s", c.name, got, c.want)
		}
	}
	if got := Caret("", "a", Span{0, 1}, "what"); got != "line 1: what\n  a\n  ^" {
		t.Error(got)
	}
	if got := Caret("f", "abc", Span{-5, 99}, "what"); got != "f:1: what\n  abc\n  ^^^" {
		t.Error(got)
	}
}

func TestCaretCutsLongLines(t *testing.T) {
	text := strings.Repeat("a, ", 200) + "HERE" + strings.Repeat(", b", 200)
	at := strings.Index(text, "HERE")
	lines := strings.Split(Caret("f", text, Span{at, at + 4}, "what"), "\n")
	source, marks := []rune(lines[1]), []rune(lines[2])
	if len(source) > caretWidth+5 || !strings.HasPrefix(lines[1], "  …") || !strings.HasSuffix(lines[1], "…") {
		t.Errorf("the line is %d long: %s", len(source), lines[1])
	}
	if first := strings.IndexRune(lines[2], '^'); string(source[first:first+4]) != "HERE" || len(marks) != first+4 {
		t.Errorf("marks stand elsewhere:\n%s\n%s", lines[1], lines[2])
	}
	// At the beginning nothing is cut on the left; a place longer than the window is marked to its end.
	lines = strings.Split(Caret("f", text, Span{0, len(text)}, "what"), "\n")
	if strings.HasPrefix(lines[1], "  …") || !strings.HasSuffix(lines[1], "…") || strings.Count(lines[2], "^") != caretWidth {
		t.Errorf("%s\n%s", lines[1], lines[2])
	}
	lines = strings.Split(Caret("f", text, Span{len(text), len(text)}, "what"), "\n")
	if !strings.HasPrefix(lines[1], "  …") || strings.HasSuffix(lines[1], "…") || columns(lines[2]) != columns(lines[1])+1 {
		t.Errorf("%s\n%s", lines[1], lines[2])
	}
}

// Whatever the text and the place, three lines come out, the marks under the shown line.
func TestCaretNeverFails(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := rapid.StringOf(rapid.SampledFrom([]rune("ab \t\n\r'日é\u0301\x00𝄞🙂"))).Draw(t, "text")
		if rapid.Bool().Draw(t, "long") {
			text = strings.Repeat(text, 40)
		}
		if rapid.Bool().Draw(t, "broken") && len(text) > 0 {
			text = text[1:]
		}
		span := Span{rapid.IntRange(-1, len(text)+1).Draw(t, "start"), rapid.IntRange(-1, len(text)+1).Draw(t, "end")}
		got := Caret("f", text, span, "what")
		lines := strings.Split(got, "\n")
		if len(lines) != 3 || !utf8.ValidString(got) {
			t.Fatalf("%q", got)
		}
		marks := strings.TrimLeft(lines[2], " \t")
		if marks == "" || strings.Trim(marks, "^") != "" {
			t.Fatalf("%q", got)
		}
		if columns(lines[2]) > columns(lines[1])+1 {
			t.Fatalf("the marks go beyond the line: %q", got)
		}
	})
}

func TestNearest(t *testing.T) {
	columns := []string{"id", "temp", "volume", "neighbours", "temperature_of_air"}
	for word, want := range map[string]string{
		"tmep": "temp", "tem": "temp", "TEMP": "temp", "tempp": "temp", "volum": "volume", "valume": "volume", "neighbors": "neighbours",
		"nieghbuors": "neighbours", "temprature_of_air": "temperature_of_air", "di": "id",
		"area": "", "x": "", "": "", "volume": "volume", "pressure": "", "temperature": "",
	} {
		if got := Nearest(word, columns); got != want {
			t.Errorf("Nearest(%q) = %q, want %q", word, got, want)
		}
	}
	if got := Nearest("GROSE", []string{"größe", "grosse"}); got != "grosse" {
		t.Error(got)
	}
	if got := Nearest("a", nil); got != "" {
		t.Error(got)
	}
}

// The distance is checked against its definition, computed without any sharing of work.
func TestEditDistanceFollowsItsDefinition(t *testing.T) {
	var slow func(a, b []rune) int
	slow = func(a, b []rune) int {
		if len(a) == 0 || len(b) == 0 {
			return len(a) + len(b)
		}
		m, n := len(a)-1, len(b)-1
		change := 1
		if a[m] == b[n] {
			change = 0
		}
		d := min(slow(a[:m], b)+1, slow(a, b[:n])+1, slow(a[:m], b[:n])+change)
		if m > 0 && n > 0 && a[m] == b[n-1] && a[m-1] == b[n] {
			d = min(d, slow(a[:m-1], b[:n-1])+1)
		}
		return d
	}
	rapid.Check(t, func(t *rapid.T) {
		letters := rapid.SliceOfN(rapid.SampledFrom([]rune("abc")), 0, 6)
		a, b := letters.Draw(t, "a"), letters.Draw(t, "b")
		if got, want := editDistance(a, b), slow(a, b); got != want || got != editDistance(b, a) {
			t.Fatalf("%q %q: %d, want %d", string(a), string(b), got, want)
		}
	})
}
