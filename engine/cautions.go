package engine

import "slices"

// cautions are what to have in mind before a number leaves the desk. The README
// says the same, and a test holds it to that.
var cautions = []string{
	"Point readings weighted by the space nearest to them are an estimate. The tool sees nothing between the sensors: a door, a fan or a rack may part a place from the reading that speaks for it.",
	"A cell knows no walls inside the solid: its space may lie behind a corner, out of its sensor's sight.",
	"nearcell is no alarm, no gas-free certificate and no release decision. Limits, the number and place of sensors, calibration and the entry to confined or contaminated spaces are matters of local codes, of the standard that applies and of licensed or qualified people with calibrated instruments. Where a life may hang on a reading, measure at the spot.",
}

// Cautions are the cautions, one paragraph each.
func Cautions() []string { return slices.Clone(cautions) }
