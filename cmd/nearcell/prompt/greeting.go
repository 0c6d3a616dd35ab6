package prompt

import (
	"fmt"
	"os"
	"path/filepath"
	"sort"
	"strings"

	"nearcell/catalog"
	"nearcell/engine"
	"nearcell/lang"
)

// greeting is what a newcomer reads first: three things to type, made of what is
// there, a file of readings or a campaign.
func greeting(s *engine.Session, version, where, folder string) string {
	var b strings.Builder
	fmt.Fprintf(&b, "nearcell %s, %s\n", version, where)
	b.WriteString("Three things to begin with; a statement may take several lines and ends with ;\n")
	for _, t := range firstThings(s, folder) {
		fmt.Fprintf(&b, "  %s\n      %s\n", t.text, t.meaning)
	}
	b.WriteString("Tab completes, Ctrl-R searches what you asked before, Ctrl-C stops, QUIT; ends.\n")
	return b.String()
}

type thing struct{ text, meaning string }

func firstThings(s *engine.Session, folder string) []thing {
	campaigns := s.Objects(catalog.Campaign)
	help := thing{"HELP;", "tells what else can be asked"}
	if len(campaigns) > 0 {
		name := lang.QuoteName(campaigns[0])
		return []thing{
			{"DESCRIBE " + name + ";", "the columns of the campaign"},
			{"SELECT id, volume FROM CELLS OF " + name + ";", "the space nearest to each of its sites"},
			help,
		}
	}
	file := "sites.csv"
	if found := readingsIn(folder); found != "" {
		file = found
	}
	return []thing{
		{"CREATE CAMPAIGN hall FROM " + lang.QuoteText(file) + ";", "reads points from a file: columns id, x, y, z and what was measured there"},
		{"SELECT id, volume FROM CELLS OF hall WITHIN BOX (0,0,0) TO (30,18,7.5);", "the space nearest to each of them, in a room of that size"},
		help,
	}
}

// readingsIn is the file in the folder whose first line names id, x, y and z;
// of several the one with the shortest name.
func readingsIn(folder string) string {
	names, err := filepath.Glob(filepath.Join(folder, "*.csv"))
	if err != nil {
		return ""
	}
	sort.SliceStable(names, func(i, j int) bool { return len(names[i]) < len(names[j]) })
	for _, n := range names[:min(len(names), mostLookedAt)] {
		if info, err := os.Stat(n); err != nil || !info.Mode().IsRegular() {
			continue
		}
		if hasPosition(headingsOf(folder, filepath.Base(n))) {
			return filepath.Base(n)
		}
	}
	return ""
}

// mostLookedAt is how many files the greeting looks into.
const mostLookedAt = 50

func hasPosition(headings []string) bool {
	found := 0
	for _, h := range headings {
		switch strings.ToLower(h) {
		case "id", "x", "y", "z":
			found++
		}
	}
	return found == 4
}
