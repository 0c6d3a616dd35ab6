package lang

import (
	"bufio"
	"errors"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"time"

	"github.com/google/go-cmp/cmp"
)

// FuzzParse: no text makes the parser panic or take long; a fault lies within the text
// and can be shown; what is read is written back as text that is read the same.
func FuzzParse(f *testing.F) {
	for _, text := range storyInputs(f) {
		f.Add(text)
	}
	for i := range nests {
		f.Add(nested(i, 3))
	}
	f.Add("SELECT 1 /* '; \" */ -- x\r\n;\u00a0\uFEFF SELECT \xff")
	f.Fuzz(func(t *testing.T, text string) {
		if len(text) > 1<<14 {
			t.Skip("long texts only slow the search down")
		}
		start := time.Now()
		script, err := Parse(text)
		if took := time.Since(start); took > time.Second {
			t.Fatalf("%d bytes took %v", len(text), took)
		}
		checkPieces(t, text)
		if err != nil {
			var fault *Error
			if !errors.As(err, &fault) || fault.Message == "" {
				t.Fatalf("not one of our faults: %v", err)
			}
			if s := fault.Span; s.Start < 0 || s.End < s.Start || s.End > len(text) {
				t.Fatalf("the place %v lies outside", s)
			}
			Caret("f", text, fault.Span, fault.Error())
			return
		}
		checkSpans(t, text, script)
		printed := Print(script)
		again, err := Parse(printed)
		if err != nil {
			t.Fatalf("%s\n%s", printed, caretOf(printed, err))
		}
		if diff := cmp.Diff(script, again, exactly); diff != "" {
			t.Fatalf("%s\n%s", printed, diff)
		}
		if twice := Print(again); twice != printed {
			t.Fatalf("printed first %s\nthen %s", printed, twice)
		}
	})
}

// checkPieces asserts that the pieces of a script stand in order, and that nothing but
// blanks, comments and semicolons stands between them.
func checkPieces(t *testing.T, text string) {
	end := 0
	for _, piece := range append(Split(text), Piece{Span: Span{len(text), len(text)}}) {
		if piece.Start < end || piece.End < piece.Start {
			t.Fatalf("the piece %v begins before %d", piece, end)
		}
		s := scanner{src: text, at: end, end: piece.Start}
		for {
			kind, from, to := s.next()
			if kind == tokEOF {
				break
			}
			if kind != tokSemicolon {
				t.Fatalf("%q stands between the pieces", text[from:to])
			}
		}
		end = piece.End
	}
}

// storyInputs collects the inputs of all stories as seeds.
func storyInputs(tb testing.TB) []string {
	files, err := filepath.Glob("testdata/stories/*")
	if err != nil || len(files) == 0 {
		tb.Fatalf("no stories: %v", err)
	}
	var inputs []string
	for _, file := range files {
		f, err := os.Open(file)
		if err != nil {
			tb.Fatal(err)
		}
		var lines []string
		reading := false
		for s := bufio.NewScanner(f); s.Scan(); {
			switch line := s.Text(); {
			case line == "script" || line == "split":
				reading, lines = true, nil
			case line == "expr" || line == "tree":
				reading, lines = true, []string{"SELECT"}
			case line == "----" && reading:
				reading = false
				inputs = append(inputs, strings.Join(lines, "\n"))
			case reading:
				lines = append(lines, line)
			}
		}
		f.Close()
	}
	if len(inputs) < 100 {
		tb.Fatalf("only %d seeds", len(inputs))
	}
	return inputs
}
