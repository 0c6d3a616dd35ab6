package expr

import (
	"regexp"
	"strings"
	"testing"
	"time"

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
