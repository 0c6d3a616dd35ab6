package exec

import (
	"math"
	"strconv"

	"nearcell/engine/note"
	"nearcell/engine/plan"
)

// instrumentNotes gives the instruments' part of the uncertainty of weighted means:
// independent errors of one size u shrink to u √Σw² / Σw, a shared one stays as it is.
// How well the sites stand for the space is another matter, and not in it.
func (s *aggregateSink) instrumentNotes() {
	for _, m := range plan.Uncertainties(s.node) {
		c := s.all.calls[m.Call]
		unit := ""
		if m.Unit != nil {
			unit = " " + m.Unit.String()
		}
		if !m.Once && m.Of.Each > 0 {
			s.env.Notes.Add(note.Note, note.Weights, "%s: the instruments' part of its uncertainty is not told: an instrument is in it more than once, and its errors there are not independent", c.call.Text)
			continue
		}
		var all, own span
		for _, f := range c.acc.Weights(s.all.keys.n) {
			if f.Rows == 0 || !(f.Sum > 0) {
				continue
			}
			each := m.Of.Each * math.Sqrt(f.SumSquares) / f.Sum
			own.add(each)
			all.add(math.Hypot(each, m.Of.Common))
		}
		if !all.any {
			continue
		}
		s.env.Notes.Add(note.Note, note.Weights, "%s: the instruments' part of its standard uncertainty is %s%s: %s of each one's own errors, %s shared by all. That is of the instruments only, not of how well they stand for the space between them",
			c.call.Text, all.text(three), unit, own.text(three), three(m.Of.Common))
	}
}

// three writes three significant digits.
func three(x float64) string { return strconv.FormatFloat(x, 'g', 3, 64) }
