package relation

import (
	"maps"
	"slices"

	"nearcell/lang"
)

// definitions is the registry, in the order in which DESCRIBE and HELP list it.
var definitions = []*Definition{cells, contacts, tetrahedra, triangles, vertices, hull, gaps, placements, redundancy, spacing, sectionOf, estimates, weights, residuals, exceedance, overlays, autocorrelation, clusters, grid, transect,
	seriesOf, audit, episodes, extremes, representatives}

// planned are the relations of the language that have no rows yet, each with
// what a row of it is.
var planned = map[string]string{}

// All are the relations that there are.
func All() []*Definition { return definitions }

// Lookup finds a relation by its noun, in any case.
func Lookup(noun string) (*Definition, bool) {
	for _, d := range definitions {
		if lang.Fold(d.Noun) == lang.Fold(noun) {
			return d, true
		}
	}
	return nil, false
}

// Planned reports whether the noun is a relation of the language without an
// engine so far, and how it is written.
func Planned(noun string) (string, bool) {
	for n := range planned {
		if lang.Fold(n) == lang.Fold(noun) {
			return n, true
		}
	}
	return "", false
}

// Nouns are all nouns of the language, for the nearest name.
func Nouns() []string {
	var names []string
	for _, d := range definitions {
		names = append(names, d.Noun)
	}
	return append(names, slices.Sorted(maps.Keys(planned))...)
}
