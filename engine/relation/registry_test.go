package relation

import (
	"slices"
	"testing"

	"nearcell/catalog/column"
	"nearcell/lang"
	"nearcell/voronoi"
)

// Every line of the registry can be described, and no name stands for two things.
func TestRegistry(t *testing.T) {
	for _, d := range All() {
		if got, ok := Lookup("cE" + d.Noun[2:]); d.Noun == "CELLS" && (!ok || got != d) {
			t.Error("nouns are not known in any case")
		}
		if _, ok := Planned(d.Noun); ok {
			t.Errorf("%s is there and planned", d.Noun)
		}
		if d.Meaning == "" || d.RowIs == "" || d.Open == nil || len(d.Computed) == 0 {
			t.Errorf("%s is not described", d.Noun)
		}
		seen := map[string]bool{}
		var measures voronoi.Measures
		for _, c := range d.Computed {
			if c.Meaning == "" || c.Type == column.Null || c.Site != -1 || c.Name != lang.Fold(c.Name) {
				t.Errorf("%s.%s is not described", d.Noun, c.Name)
			}
			if seen[c.Name] {
				t.Errorf("%s has two columns %s", d.Noun, c.Name)
			}
			seen[c.Name] = true
			measures |= c.Measures
		}
		for _, n := range d.NotYet {
			if seen[n] {
				t.Errorf("%s.%s is there and not there yet", d.Noun, n)
			}
		}
		for _, c := range d.Later {
			if slices.Contains(d.Clauses, c) {
				t.Errorf("%s takes %s and does not take it yet", d.Noun, c)
			}
		}
		if d.Noun == "CELLS" && measures != voronoi.All {
			t.Error("a measure of the geometry has no column")
		}
	}
	for noun := range planned {
		if _, ok := Planned(lang.Fold(noun)); !ok {
			t.Error("planned nouns are not known in any case")
		}
	}
	if near := lang.Nearest("CELS", Nouns()); near != "CELLS" {
		t.Errorf("the nearest noun to CELS is %s", near)
	}
}

// Nouns come in a fixed order, so that the nearest name does.
func TestNounsOrder(t *testing.T) {
	first := Nouns()
	for range 20 {
		if !slices.Equal(first, Nouns()) {
			t.Fatal("the nouns change their order")
		}
	}
}
