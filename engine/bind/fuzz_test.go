package bind

import (
	"os"
	"path/filepath"
	"strings"
	"testing"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/lang"
)

// FuzzQuery binds whatever parses: never a panic, every error with its place,
// every plan with columns that have names, and a plan that the rules take.
func FuzzQuery(f *testing.F) {
	files, err := filepath.Glob("testdata/*.story")
	if err != nil {
		f.Fatal(err)
	}
	for _, file := range files {
		text, err := os.ReadFile(file)
		if err != nil {
			f.Fatal(err)
		}
		for _, story := range strings.Split(string(text), "\n\n") {
			lines := strings.SplitN(story, "\n----", 2)[0]
			if _, query, ok := strings.Cut(lines, "\n"); ok {
				f.Add(query)
			}
		}
	}
	c := depot(f)
	f.Fuzz(func(t *testing.T, text string) {
		q, err := lang.ParseQuery(text)
		if err != nil {
			return
		}
		env := &Env{Catalog: c, Params: map[string]column.Value{"limit": column.Float(8)}, Folder: "testdata", Notes: &note.Notes{},
			Source: &problem.Source{Name: "input", Text: text}}
		node, err := Query(env, q)
		if err != nil {
			if problem.Render(err) == err.Error() {
				t.Fatalf("%s\nthis error has no place: %v", text, err)
			}
			return
		}
		for _, field := range node.Schema() {
			if field.Name == "" {
				t.Fatalf("%s\na column has no name", text)
			}
		}
		if _, err := plan.Optimise(node); err != nil && problem.Render(err) == err.Error() {
			t.Fatalf("%s\nthe rules fail without a place: %v", text, err)
		}
	})
}
