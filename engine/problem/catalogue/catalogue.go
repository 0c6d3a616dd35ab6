package catalogue

import (
	"slices"
	"strings"
)

// Entry is what is to be known of a code.
type Entry struct {
	Code    string // as in problem.Problem: "no-column"
	Meaning string
	WayOut  string
	// Example is a script whose last statement fails with the code, in the
	// setting that Setting makes.
	Example string
	Strict  bool   // the example runs with --strict
	Unshown string // why there is no example; empty where there is one
}

// Setting is what the examples stand on: an L-shaped hall (invented), loggers in
// it, their readings. Its files lie beside the test.
const Setting = `
CREATE SOLID air AS PRISM ((0, 0), (30, 0), (30, 12), (18, 12), (18, 18), (0, 18)) FROM 0 TO 7.5;
CREATE CAMPAIGN hall FROM 'hall.csv' WITHIN air TOLERANCE 0.05;
CREATE TABLE log FROM 'log.csv' UNITS (temp '°C');
CREATE VIEW readings AS (
  SELECT s.id, s.x, s.y, s.z, l.t, l.temp FROM hall s JOIN log l ON l.logger = s.id WHERE l.temp IS NOT NULL);
LET upper = 8;
`

var entries = slices.Concat(ofNames, ofObjects, ofQueries, ofValues, ofSites, ofFiles, ofTheProgram)

// All are all entries, sorted by code.
func All() []Entry {
	sorted := slices.Clone(entries)
	slices.SortFunc(sorted, func(a, b Entry) int { return strings.Compare(a.Code, b.Code) })
	return sorted
}

// Lookup finds the entry of a code.
func Lookup(code string) (Entry, bool) {
	for _, e := range entries {
		if e.Code == code {
			return e, true
		}
	}
	return Entry{}, false
}
