package main

import (
	"regexp"
	"strings"
	"testing"

	"nearcell/engine"
	"nearcell/engine/function"
	"nearcell/engine/relation"
)

func printed(t *testing.T, args ...string) string {
	t.Helper()
	var out, said strings.Builder
	if code := execute(args, strings.NewReader(""), &out, &said); code != exitFine {
		t.Fatalf("%q: exit code %d: %s", args, code, said.String())
	}
	return out.String()
}

// The manual page has a line for every command, option, statement, relation and
// function, and nothing in it is taken for a request that is none.
func TestManual(t *testing.T) {
	page := printed(t, "man")
	has := func(text string) {
		if !strings.Contains(page, troff(text)) {
			t.Errorf("the page does not have %q", text)
		}
	}
	for _, c := range []string{"run", "ask", "check", "completion", "man", "version"} {
		has("nearcell " + c)
	}
	for _, o := range []string{"--catalog", "--no-catalog", "--as", "--to", "--let", "--strict", "--keep-going", "--threads", "--memory", "--quiet", "--plain"} {
		has(o)
	}
	for _, d := range relation.All() {
		has(d.Noun + " OF …")
		has(d.Meaning)
	}
	for _, f := range function.All() {
		has(f.Signature)
	}
	for _, f := range function.Aggregates() {
		has(f.Signature)
	}
	for _, s := range engine.Statements() {
		has(s)
	}
	request := regexp.MustCompile(`^\.(\\"|TH|SH|PP|TP|B|RS|RE|nf|fi|br)( |$)`)
	for _, line := range strings.Split(page, "\n") {
		if (strings.HasPrefix(line, ".") || strings.HasPrefix(line, "'")) && !request.MatchString(line) {
			t.Errorf("taken for a request: %s", line)
		}
	}
}

func TestTroff(t *testing.T) {
	for text, want := range map[string]string{
		"plain": "plain", ".PP": `\&.PP`, "'a' - b": `\&'a' \- b`, `a\b`: `a\eb`, "x …": "x ...",
	} {
		if got := troff(text); got != want {
			t.Errorf("%q is written %q, not %q", text, got, want)
		}
	}
}

func TestCompletionScripts(t *testing.T) {
	for _, shell := range []string{"bash", "zsh", "fish", "powershell"} {
		if script := printed(t, "completion", shell); !strings.Contains(script, "nearcell") || len(script) < 1000 {
			t.Errorf("no script for %s", shell)
		}
	}
	// What the scripts ask the program for.
	for want, args := range map[string][]string{
		"version":      {"__complete", "ver"},
		"--no-catalog": {"__complete", "run", "--no"},
		"jsonl":        {"__complete", "run", "--as", "j"},
	} {
		if got := printed(t, args...); !strings.Contains(got, want) {
			t.Errorf("%q does not offer %s:\n%s", args, want, got)
		}
	}
}
