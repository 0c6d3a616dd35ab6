package prompt

import (
	"strings"
	"testing"
)

func TestGathered(t *testing.T) {
	for _, c := range []struct {
		lines []string
		whole bool // after the last line, and not before it
	}{
		{[]string{"SELECT 1;"}, true},
		{[]string{"SELECT 1"}, false},
		{[]string{"SELECT", "1", ";"}, true},
		{[]string{"SELECT 1; SELECT 2", ";"}, true},
		{[]string{"SELECT 1; SELECT 2"}, false},
		{[]string{"SELECT 'a;"}, false},
		{[]string{"SELECT 'a;", "b';"}, true},
		{[]string{"SELECT 1 -- one;"}, false},
		{[]string{"SELECT 1 -- one;", ";"}, true},
		{[]string{"SELECT 1 /* ;"}, false},
		{[]string{"/* a comment"}, false},
		{[]string{"/* a comment", "ends */"}, true},
		{[]string{""}, true},
		{[]string{"-- nothing"}, true},
		{[]string{";;"}, true},
		{[]string{"quit"}, true},
		{[]string{" Help "}, true},
		{[]string{"exit"}, true},
		{[]string{"SELECT", "quit"}, false},
		{[]string{"help cells"}, false},
	} {
		var g gathered
		for i, line := range c.lines {
			whole := g.add(line)
			if want := c.whole && i == len(c.lines)-1; whole != want {
				t.Errorf("%q: line %d: whole is %v", c.lines, i+1, whole)
			}
		}
	}
}

func TestGatheredRecallsLineBreaks(t *testing.T) {
	var g gathered
	if !g.add("SELECT 'one␤two';") || g.take() != "SELECT 'one\ntwo';\n" {
		t.Error("the line break of a recalled text is lost")
	}
	if g.text != "" {
		t.Error("what was taken is still there")
	}
}

func TestHints(t *testing.T) {
	var g gathered
	for _, c := range []struct{ line, want string }{
		{"SELECT", "until a ; ends it"},
		{"1,", ""},
		{"'a", "end it with '"},
		{"b", ""},
		{"c;", "end it with '"},
		{"', \"x", `end it with "`},
		{"\" /* ", "end it with */"},
	} {
		g.add(c.line)
		got := g.hint()
		if (got == "") != (c.want == "") || !strings.Contains(got, c.want) {
			t.Errorf("after %q: %q, not %q", c.line, got, c.want)
		}
	}
}
