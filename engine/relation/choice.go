package relation

import "nearcell/engine/problem"

// ChoiceClauses are the bound clauses of the relations that rank or choose rows.
type ChoiceClauses struct {
	Number     int
	Keep       []string // identifiers that are chosen in any case
	KeepPlaces []problem.Place
	Aim        string  // of REPRESENTATIVES: MEAN, HIGHEST or COURSE
	Spread     []int   // column of each row's own standard uncertainty, or none
	Each       float64 // every row's own standard uncertainty, 0: not given
	Uncertain  bool    // UNCERTAINTY was given
	Common     bool    // … and one that all rows share
}
