package prompt

import (
	"context"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"github.com/cockroachdb/datadriven"

	"nearcell/catalog"
	"nearcell/engine"
	"nearcell/engine/relation"
)

// session is one at an empty catalog in memory, fed with a script.
func session(t testing.TB, folder, script string) *engine.Session {
	t.Helper()
	var said strings.Builder
	s := engine.New(catalog.Memory(), engine.Options{Out: io.Discard, Err: &said})
	if err := s.Run(context.Background(), "setup", script, folder); err != nil {
		t.Fatalf("%v\n%s", err, said.String())
	}
	return s
}

// TestComplete runs the stories in testdata/complete: a half-written statement
// with ‸ for the cursor, and what it may become. Long lists are cut in the
// middle of the alphabet, never in what they begin with.
func TestComplete(t *testing.T) {
	folder := t.TempDir()
	for _, name := range []string{"readings.csv", "räume.csv", "run.ncell", "it's.csv", ".hidden.csv", "more/inner.csv"} {
		path := filepath.Join(folder, name)
		if err := os.MkdirAll(filepath.Dir(path), 0o777); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(path, []byte("id,x,y,z,temp,\"Air speed\"\nA,1,1,1,4,0.1\nB,2,1,1,5,0.2\n"), 0o666); err != nil {
			t.Fatal(err)
		}
	}
	s := session(t, folder, `
		CREATE SOLID air AS BOX (0,0,0) TO (3,3,3);
		CREATE SOLID rack AS BOX (0,0,0) TO (1,3,3);
		CREATE CAMPAIGN hall FROM 'readings.csv';
		CREATE TABLE log AS (SELECT id AS logger, TIMESTAMP '2031-04-07 08:15:00' AS t, temp FROM hall);
		CREATE VIEW placed AS (SELECT id, x, y, z FROM hall);
		LET limit = 8; LET lower = 2;`)
	c := &completer{session: s, folder: folder}
	datadriven.RunTest(t, "testdata/complete", func(t *testing.T, d *datadriven.TestData) string {
		if d.Cmd != "complete" {
			d.Fatalf(t, "unknown command %s", d.Cmd)
		}
		before, after, found := strings.Cut(d.Input, "‸")
		if !found {
			d.Fatalf(t, "no cursor ‸ in %q", d.Input)
		}
		typed, list := c.complete(before+after, len(before))
		return shown(typed, list)
	})
}

// shown writes candidates on one line. What a registry lists in full stands there
// by its name, so that a new function or relation changes no story.
func shown(typed string, list []string) string {
	var b strings.Builder
	if typed != "" {
		fmt.Fprintf(&b, "typed: %s\n", typed)
	}
	for _, whole := range []struct {
		name   string
		words  []string
		suffix string
	}{
		{"every function", engine.Functions(), "("},
		{"every relation", engine.Nouns(), " OF "},
		{"every relation", engine.Nouns(), ""},
		{"every column of CELLS", columnsOf("CELLS"), ""},
		{"every topic of LIST", engine.ListTopics(), ""},
		{"every setting", engine.Settings(), " "},
		{"every clause of CELLS", engine.ClausesOf("CELLS"), " "},
		{"every clause of CONTACTS", engine.ClausesOf("CONTACTS"), " "},
		{"every statement", engine.Statements(), " "},
	} {
		list = named(list, whole.words, whole.suffix, "<"+whole.name+">")
	}
	if len(list) == 0 {
		b.WriteString("nothing\n")
	}
	b.WriteString(strings.ReplaceAll(strings.Join(list, " | ")+" | ", "  | ", "␣ | "))
	return strings.TrimSuffix(b.String(), " | ") + "\n"
}

// columnsOf are the columns that a relation computes.
func columnsOf(noun string) []string {
	d, ok := relation.Lookup(noun)
	if !ok {
		return nil
	}
	var names []string
	for _, c := range d.Computed {
		names = append(names, c.Name)
	}
	return names
}

// named puts one name in the place of words that are all in a list.
func named(list, words []string, suffix, name string) []string {
	for _, w := range words {
		if !slices.Contains(list, w+suffix) {
			return list
		}
	}
	var kept []string
	for _, x := range list {
		in := slices.ContainsFunc(words, func(w string) bool { return w+suffix == x })
		switch {
		case !in:
			kept = append(kept, x)
		case !slices.Contains(kept, name):
			kept = append(kept, name)
		}
	}
	return kept
}
