package prompt

import (
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"nearcell/lang"
)

func TestOneLine(t *testing.T) {
	for _, c := range []struct{ src, want string }{
		{"SELECT 1", "SELECT 1"},
		{"SELECT a,\n  b\nFROM c", "SELECT a, b FROM c"},
		{"SELECT a -- the first\nFROM c", "SELECT a /* the first */ FROM c"},
		{"SELECT a --\nFROM c", "SELECT a /*  */ FROM c"},
		{"SELECT a -- ends */ early\nFROM c", "SELECT a /* ends * / early */ FROM c"},
		{"SELECT a /* one\n two */ FROM c", "SELECT a /* one two */ FROM c"},
		{"SELECT 'a -- b\nc' FROM d", "SELECT 'a -- b␤c' FROM d"},
		{"SELECT 'it''s\n' FROM d", "SELECT 'it''s␤' FROM d"},
		{"SELECT \"a\nb\" FROM d", "SELECT \"a␤b\" FROM d"},
		{"SELECT a\tFROM\r\n  b", "SELECT a FROM b"},
		{"SELECT 8 - -\n 1", "SELECT 8 - - 1"},
	} {
		if got := oneLine(c.src); got != c.want {
			t.Errorf("%q became\n%s, not\n%s", c.src, got, c.want)
		}
	}
}

// What is recalled means what was typed: the same tree, from one line.
func TestOneLineMeansTheSame(t *testing.T) {
	gaps := []string{" ", "\n", "\n    ", " -- note, it's 'odd' */ ;\n", " /* ; */ ", "\t", " /* two\nlines -- */\n", "\r\n"}
	words := []string{"SELECT", "a", ",", "'one\ntwo'", ",", `"b c"`, ",", "'--'", ",", "'it''s /*'", "FROM", "(", "SELECT", "a", ",", `"b c"`, "FROM",
		"CELLS", "OF", "hall", "WITHIN", "air", ")", "WHERE", "a", "-", "-", "1", ">", "2"}
	rapid.Check(t, func(t *rapid.T) {
		var b strings.Builder
		for _, w := range words {
			b.WriteString(w + rapid.SampledFrom(gaps).Draw(t, "gap"))
		}
		src := strings.TrimRight(b.String(), " \t\r\n")
		want, err := lang.Parse(src)
		if err != nil {
			t.Fatalf("the text does not parse: %v\n%s", err, src)
		}
		lines := oneLines(src + "\n;")
		if len(lines) != 1 || strings.ContainsAny(lines[0], "\n\r\t") {
			t.Fatalf("not one line: %q", lines)
		}
		got, err := lang.Parse(recalled(lines[0]))
		if err != nil {
			t.Fatalf("the line does not parse: %v\n%s", err, lines[0])
		}
		if !lang.Equal(want.Statements[0], got.Statements[0]) {
			t.Fatalf("%q\nbecame\n%q", src, lines[0])
		}
	})
}

func TestHistoryIsKept(t *testing.T) {
	folder := filepath.Join(t.TempDir(), "catalog")
	h := openHistory(folder)
	h.add("SELECT 1;")
	if _, err := os.Stat(folder); err == nil {
		t.Fatal("the history made the catalog's folder")
	}
	if err := os.Mkdir(folder, 0o777); err != nil {
		t.Fatal(err)
	}
	h.add("SELECT 2;")
	h.add("SELECT 2;")
	h.add("SELECT 'ä';")
	want := []string{"SELECT 1;", "SELECT 2;", "SELECT 'ä';"}
	if got := openHistory(folder).lines; !slices.Equal(got, want) {
		t.Fatalf("read %q, not %q", got, want)
	}
	if got := openHistory("").lines; len(got) != 0 {
		t.Fatalf("no folder has the history %q", got)
	}
}

func TestHistoryIsShortened(t *testing.T) {
	folder := t.TempDir()
	long := strings.Repeat("SELECT 1;\n", 2*historyLines) + "SELECT 2;\n"
	if err := os.WriteFile(filepath.Join(folder, historyFile), []byte(long), 0o600); err != nil {
		t.Fatal(err)
	}
	lines := openHistory(folder).lines
	if len(lines) != historyLines || lines[len(lines)-1] != "SELECT 2;" {
		t.Fatalf("%d lines, the last %q", len(lines), lines[len(lines)-1])
	}
	data, err := os.ReadFile(filepath.Join(folder, historyFile))
	if err != nil || strings.Count(string(data), "\n") != historyLines {
		t.Fatalf("the file has %d lines (%v)", strings.Count(string(data), "\n"), err)
	}
}
