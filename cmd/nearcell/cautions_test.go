package main

import (
	"os"
	"strings"
	"testing"

	"nearcell/engine"
)

// TestCautions: the README's cautions are those of HELP CAUTIONS, word for word.
func TestCautions(t *testing.T) {
	data, err := os.ReadFile(readme)
	if err != nil {
		t.Fatal(err)
	}
	_, rest, found := strings.Cut(string(data), "\n## Cautions\n")
	section, _, more := strings.Cut(rest, "\n## ")
	if !found || !more {
		t.Fatal("the README has no section of cautions")
	}
	var said []string
	for _, item := range strings.Split(strings.TrimSpace(section), "\n- ") {
		said = append(said, strings.Join(strings.Fields(strings.TrimPrefix(item, "- ")), " "))
	}
	want := engine.Cautions()
	if len(said) != len(want) {
		t.Fatalf("the README has %d cautions, HELP CAUTIONS %d", len(said), len(want))
	}
	for i := range want {
		if said[i] != want[i] {
			t.Errorf("the README says\n%s\nand HELP CAUTIONS\n%s", said[i], want[i])
		}
	}
}
