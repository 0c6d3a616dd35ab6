package engine

import (
	"bytes"
	"context"
	"encoding/csv"
	"os"
	"slices"
	"strings"
	"testing"

	"github.com/cockroachdb/datadriven"

	"nearcell/catalog"
	"nearcell/engine/function"
	"nearcell/engine/present"
	"nearcell/engine/problem/catalogue"
	"nearcell/engine/relation"
	"nearcell/lang"
)

// examples are the folder of the setting of the examples.
const examples = "problem/catalogue/testdata"

// onSetting is a session on the setting of the examples, in a folder of its own.
func onSetting(t testing.TB, out *bytes.Buffer, o Options) (s *Session, folder string) {
	t.Helper()
	folder = t.TempDir()
	if err := os.CopyFS(folder, os.DirFS(examples)); err != nil {
		t.Fatal(err)
	}
	o.Out, o.Err = out, out
	s = New(catalog.Memory(), o)
	if err := s.Run(context.Background(), "setting", catalogue.Setting, folder); err != nil {
		t.Fatal(out.String())
	}
	out.Reset()
	return s, folder
}

// TestHelpStories holds what HELP, LIST and DESCRIBE of the language print.
func TestHelpStories(t *testing.T) {
	datadriven.Walk(t, "testdata/help", func(t *testing.T, path string) {
		var out bytes.Buffer
		o := Options{Quiet: true, CommandLine: []Switch{
			{"run FILE…", "runs scripts, '-' is the standard input"},
			{"--catalog DIR", "folder of the catalog (default .nearcell)"},
			{"--keep-going", "go on after a failing statement"},
		}}
		s, folder := onSetting(t, &out, o)
		datadriven.RunTest(t, path, func(t *testing.T, d *datadriven.TestData) string {
			out.Reset()
			s.results = 0
			s.o.Format = present.AsTable
			if d.Cmd == "json" {
				s.o.Format = present.AsJSONLines
			}
			s.o.Screen = nil
			if d.HasArg("width") {
				var width int
				d.ScanArgs(t, "width", &width)
				s.o.Screen = func() (int, int) { return width, 0 }
			}
			if err := s.Run(context.Background(), "input", d.Input, folder); err != nil && out.Len() == 0 {
				t.Fatal(err)
			}
			return strings.TrimSuffix(out.String(), "\n") + "\n"
		})
	})
}

// documented are all examples of the registries, by the names of their topics.
func documented() map[string]string {
	all := map[string]string{}
	for _, list := range [][]entry{statementEntries(), queryEntries(), readingEntries(), solidEntries()} {
		for _, e := range list {
			all[e.name+" "+e.example] = e.example
		}
	}
	for _, g := range guides() {
		if g.example != "" {
			all[g.name] = g.example
		}
	}
	for _, c := range relation.AllClauses() {
		all["clause "+c.Name] = c.Example
	}
	for _, d := range relation.All() {
		all["relation "+d.Noun] = relationExample(d.Noun)
	}
	for _, f := range function.All() {
		all["function "+f.Name] = "SELECT " + f.Example + ";"
	}
	for _, f := range function.Aggregates() {
		all["function "+f.Name] = "SELECT " + f.Example + " FROM CELLS OF hall;"
	}
	return all
}

// TestRegistryExamples: every example of what is there runs on the setting of the
// examples, and that of what is not there is refused by name.
func TestRegistryExamples(t *testing.T) {
	for name, example := range documented() {
		if example == "" {
			t.Errorf("%s has no example", name)
			continue
		}
		var out bytes.Buffer
		s, folder := onSetting(t, &out, Options{})
		err := s.Run(context.Background(), "example", example, folder)
		switch isThere := there(example); {
		case err != nil && s.LastCode() != "not-yet", err != nil && isThere:
			t.Errorf("%s: %s\n%s", name, example, out.String())
		case err == nil && !isThere:
			t.Errorf("%s: %s runs, and is said not to be there", name, example)
		}
	}
}

// TestLanguageLists: the lists of the language have a row for each line of their
// registries, and say of each whether it is there.
func TestLanguageLists(t *testing.T) {
	var out bytes.Buffer
	s, folder := onSetting(t, &out, Options{Quiet: true, Format: present.AsCSV})
	for what, rows := range map[string]int{"STATEMENTS": len(statementEntries()), "CLAUSES": len(relation.AllClauses()),
		"SETTINGS": len(settings), "ERRORS": len(catalogue.All())} {
		out.Reset()
		if err := s.Run(context.Background(), "list", "LIST "+what+";", folder); err != nil {
			t.Fatal(out.String())
		}
		table, err := csv.NewReader(&out).ReadAll()
		for len(table) > 0 && len(table[0]) == 1 {
			table = table[1:] // the empty line between results
		}
		if err != nil || len(table) != rows+1 {
			t.Errorf("LIST %s has %d rows for %d lines of the registry (%v)", what, len(table)-1, rows, err)
			continue
		}
		for i, e := range statementEntries() {
			if what == "STATEMENTS" && (table[i+1][0] != e.name || (table[i+1][1] == "yes") != e.there()) {
				t.Errorf("LIST STATEMENTS says of %s: %s", table[i+1][0], table[i+1][1])
			}
		}
	}
}

// TestEntries: every entry says how it is written and what it means, and every
// word that begins a statement is the first word of one.
func TestEntries(t *testing.T) {
	first := map[string]bool{}
	for _, e := range statementEntries() {
		for _, line := range e.syntax {
			first[strings.Trim(strings.Fields(line)[0], "[(;")] = true
		}
	}
	for _, w := range lang.StatementWords() {
		if !first[w] && w != "VALUES" {
			t.Errorf("no statement that begins with %s is described", w)
		}
	}
	for _, list := range [][]entry{statementEntries(), queryEntries(), readingEntries(), solidEntries()} {
		for _, e := range list {
			if len(e.syntax) == 0 || e.syntax[0] == "" || !strings.HasSuffix(e.meaning, ".") {
				t.Errorf("%s is not described", e.name)
			}
		}
	}
}

// TestTopics: every name under which a topic stands finds it, typed as it is
// written, and so does every topic that another one refers to.
func TestTopics(t *testing.T) {
	var out bytes.Buffer
	s, folder := onSetting(t, &out, Options{Quiet: true})
	names := s.HelpTopics()
	for _, g := range s.topicGroups() {
		names = append(names, g.also...)
		seen := map[string]bool{}
		for _, tp := range g.topics {
			names = append(names, tp.also...)
			if key := topicKey(tp.name) + tp.kind; seen[key] {
				t.Errorf("%s is there twice", tp.name)
			} else {
				seen[key] = true
			}
			if tp.summary == "" {
				t.Errorf("%s has no summary", tp.name)
			}
		}
	}
	for _, list := range [][]entry{statementEntries(), queryEntries(), readingEntries(), solidEntries()} {
		for _, e := range list {
			names = append(names, e.see...)
		}
	}
	if len(names) < 250 {
		t.Errorf("only %d topics", len(names))
	}
	for _, n := range names {
		out.Reset()
		if err := s.Run(context.Background(), "topic", "HELP "+strings.ToLower(n)+";", folder); err != nil {
			t.Error(out.String())
		}
		if len(strings.Split(strings.TrimSpace(out.String()), "\n")) < 2 && !strings.Contains(out.String(), "not there yet") && !strings.EqualFold(n, "ERROR") {
			t.Errorf("HELP %s says too little: %s", n, out.String())
		}
	}
	for _, word := range ListTopics() {
		if listMeanings[word] == "" {
			t.Errorf("nothing is known of LIST %s", word)
		}
	}
	for _, want := range []string{"no-column", "WEIGHTED BY", "MKT", "CELLS", "CAUTIONS", "volume", "FOR EACH"} {
		if !slices.Contains(s.HelpTopics(), want) {
			t.Errorf("%s is no topic", want)
		}
	}
}

// TestPagesFit: no line of a page is longer than the screen, but for what is to be
// typed, which keeps to 100 characters, and none ends in a blank.
func TestPagesFit(t *testing.T) {
	var out bytes.Buffer
	const width = 72
	s, folder := onSetting(t, &out, Options{Quiet: true, Screen: func() (int, int) { return width, 0 }})
	for _, n := range s.HelpTopics() {
		out.Reset()
		if err := s.Run(context.Background(), "topic", "HELP "+n+";", folder); err != nil {
			t.Error(out.String())
		}
		for _, line := range strings.Split(out.String(), "\n") {
			if strings.HasSuffix(line, " ") {
				t.Errorf("HELP %s: %q ends in a blank", n, line)
			}
			if long := len([]rune(line)); long > 100 || long > width && !strings.HasPrefix(line, pageIndent) {
				t.Errorf("HELP %s: %q is too long", n, line)
			}
		}
	}
}
