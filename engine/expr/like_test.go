package expr

import (
	"regexp"
	"strings"
	"testing"
	"time"

	"nearcell/catalog/column"

	"pgregory.net/rapid"
)

// TestLikePatterns compares with regular expressions, escapes included.
func TestLikePatterns(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := rapid.StringOfN(rapid.RuneFrom([]rune("abä%_!")), 0, 12, -1).Draw(t, "text")
		var pattern strings.Builder
		expression := "(?s)^"
		for range rapid.IntRange(0, 8).Draw(t, "steps") {
			switch r := rapid.SampledFrom([]rune("abä%%__!")).Draw(t, "step"); r {
			case '%':
				pattern.WriteRune(r)
				expression += ".*"
			case '_':
				pattern.WriteRune(r)
				expression += "."
			case '!':
				escaped := rapid.SampledFrom([]string{"%", "_", "!"}).Draw(t, "escaped")
				pattern.WriteString("!" + escaped)
				expression += regexp.QuoteMeta(escaped)
			default:
				pattern.WriteRune(r)
				expression += string(r)
			}
		}
		p, err := compileLike(pattern.String(), "!")
		if err != nil {
			t.Fatal(err)
		}
		if got, want := p.matches(text), regexp.MustCompile(expression+"$").MatchString(text); got != want {
			t.Fatalf("%q LIKE %q is %v", text, pattern.String(), got)
		}
	})
}

// TestLikeIsNotExponential: a pattern of many % on a text that almost fits.
func TestLikeIsNotExponential(t *testing.T) {
	p, err := compileLike(strings.Repeat("%a", 40)+"b", "")
	if err != nil {
		t.Fatal(err)
	}
	done := make(chan bool, 1)
	go func() { done <- p.matches(strings.Repeat("a", 2000)) }()
	select {
	case matched := <-done:
		if matched {
			t.Error("it matched")
		}
	case <-time.After(30 * time.Second):
		t.Fatal("it takes for ever")
	}
}

// TestLikeByRow: patterns and escape characters that are columns.
func TestLikeByRow(t *testing.T) {
	schema := column.Schema{{Name: "s", Type: column.Text}, {Name: "p", Type: column.Text}, {Name: "e", Type: column.Text}}
	e := mustRead(t, "s LIKE p ESCAPE e", schema)
	text := func(s, p, e string) []column.Value {
		return []column.Value{column.String(s), column.String(p), column.String(e)}
	}
	rows := [][]column.Value{text("10%", "10!%", "!"), text("100", "10!%", "!"), text("100", "10!%", "?"), text("10%", "10?%", "?"),
		{column.NullOf(column.Text), column.String("%"), column.String("!")}, {column.String("a"), column.String("%"), column.NullOf(column.Text)}}
	var w Work
	v, err := e.Eval(&w, batchOf(schema, rows), nil)
	if err != nil {
		t.Fatal(err)
	}
	for i, want := range []string{"TRUE", "FALSE", "FALSE", "TRUE", "NULL", "NULL"} {
		if got := show(v.Value(i)); got != want {
			t.Errorf("row %d: %s, want %s", i, got, want)
		}
	}
	for _, bad := range [][]column.Value{text("a", "a", "!!"), text("a", "!a", "!"), text("a", "a!", "!")} {
		_, err := e.Eval(&w, batchOf(schema, append(rows[:2:2], bad)), nil)
		if r, ok := err.(*RowError); !ok || r.Row != 2 {
			t.Errorf("%v: %v", bad, err)
		}
	}
	points := column.Schema{{Name: "ok", Type: column.Boolean}}
	got, err := evalAt(mustRead(t, "CASE WHEN ok THEN POINT(1, 2, 3) ELSE POINT(4, 5, 6) END", points), []column.Value{column.Bool(false)}, points)
	if err != nil || show(got) != "POINT(4, 5, 6)" {
		t.Errorf("a CASE of points is %s (%v)", show(got), err)
	}
}
