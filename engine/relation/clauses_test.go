package relation

import (
	"strings"
	"testing"

	"nearcell/lang"
)

// Every clause that a relation takes or will take is described, every example
// parses and holds the clause that it is for.
func TestClauses(t *testing.T) {
	for _, d := range All() {
		for _, name := range append(append([]string(nil), d.Clauses...), d.Later...) {
			if _, ok := LookupClause(name); !ok {
				t.Errorf("%s takes %s, of which nothing is known", d.Noun, name)
			}
		}
	}
	if got := Taking("OMITTING"); len(got) < 2 || got[0] != "CELLS" {
		t.Errorf("OMITTING is taken by %v", got)
	}
	seen := map[string]bool{}
	for _, c := range AllClauses() {
		if seen[c.Name] || c.Meaning == "" || !strings.HasPrefix(c.Syntax, c.Name) || !strings.Contains(c.Example, c.Name) {
			t.Errorf("%s is not described, or twice", c.Name)
		}
		seen[c.Name] = true
		if _, err := lang.Parse(c.Example); err != nil {
			t.Errorf("%s: %v", c.Name, err)
		}
		if found, ok := LookupClause(strings.ToLower(c.Name)); !ok || found.Name != c.Name {
			t.Errorf("%s is not found in any case", c.Name)
		}
	}
}
