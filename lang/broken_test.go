package lang

import (
	"errors"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	"pgregory.net/rapid"
)

// A text with one token left out, doubled, exchanged or put in either is still a script,
// which then comes back from Print, or has a fault in plain words within the statement.
func TestBrokenTextsAreExplained(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		text := broken(t, Print(drawScript(t)))
		script, err := Parse(text)
		if err == nil {
			again, err := Parse(Print(script))
			if err != nil {
				t.Fatalf("%s\n%s", text, caretOf(Print(script), err))
			}
			if diff := cmp.Diff(script, again, exactly); diff != "" {
				t.Fatalf("%s\n%s", text, diff)
			}
			return
		}
		var fault *Error
		if !errors.As(err, &fault) {
			t.Fatalf("%s\nnot one of our faults: %v", text, err)
		}
		if !liesInOnePiece(text, fault.Span) {
			t.Fatalf("%s\n%s\nlies in no statement: %v", text, fault, fault.Span)
		}
		for _, foreign := range []string{"unexpected token", "lang.", "%!", "kSelect", "@@", "<nil>", "tokenType"} {
			if strings.Contains(fault.Message, foreign) && !strings.Contains(text, foreign) {
				t.Fatalf("%s\n%s", text, fault)
			}
		}
		if fault.Message == "" || strings.Contains(fault.Error(), "()") && !strings.Contains(text, "()") {
			t.Fatalf("%s\n%q", text, fault.Error())
		}
	})
}

func liesInOnePiece(text string, span Span) bool {
	for _, piece := range Split(text) {
		if piece.Contains(span) {
			return true
		}
	}
	return false
}

// broken changes one token of a text.
func broken(t *rapid.T, text string) string {
	var words []string
	s := scanner{src: text, end: len(text)}
	for {
		kind, from, to := s.next()
		if kind == tokEOF {
			break
		}
		words = append(words, text[from:to])
	}
	at := rapid.IntRange(0, len(words)-1).Draw(t, "at")
	other := rapid.SampledFrom(append([]string{"(", ")", ",", ".", "=", "<", "-", "*", "1", "'x'", `"x"`, ":x", "0.5m", "==", "x", "'"},
		append(ReservedWords(), StopWords()...)...)).Draw(t, "other")
	switch rapid.IntRange(0, 3).Draw(t, "how") {
	case 0:
		words[at] = ""
	case 1:
		words[at] += " " + words[at]
	case 2:
		words[at] = other
	default:
		words[at] += " " + other
	}
	return strings.Join(words, " ")
}
