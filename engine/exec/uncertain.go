package exec

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"nearcell/engine/note"
	"nearcell/engine/plan"
)

// instrumentNotes gives the instruments' part of the uncertainty of weighted means:
// independent errors u of each one shrink to √Σw²u² / Σw, and what all share adds up
// with the weights, Σwu / Σw, so that one of one size stays as it is. How well the sites
// stand for the space is another matter, and not in it.
func (s *aggregateSink) instrumentNotes() {
	for _, m := range plan.Uncertainties(s.node) {
		c := s.all.calls[m.Call]
		unit := ""
		if m.Unit != nil {
			unit = " " + m.Unit.String()
		}
		if why := instrumentsUntold(&m, c.spreads); why != "" {
			s.env.Notes.Add(note.Note, note.Weights, "%s: the instruments' part of its uncertainty is not told: %s", c.call.Text, why)
			continue
		}
		var all, own, shared span
		fits := true
		for g, f := range c.acc.Weights(s.all.keys.n) {
			if f.Rows == 0 || !(f.Sum > 0) {
				continue
			}
			each, common, ok := c.spreads.parts(g, f.Sum)
			fits = fits && ok
			each = math.Hypot(each, m.Of.Each*math.Sqrt(f.SumSquares)/f.Sum)
			common = math.Hypot(common, m.Of.Common)
			own.add(each)
			shared.add(common)
			all.add(math.Hypot(each, common))
		}
		switch {
		case !all.any:
		case !fits:
			s.env.Notes.Add(note.Note, note.Weights, "%s: the instruments' part of its uncertainty is not told: weights and uncertainties multiply to numbers beyond what can be computed", c.call.Text)
		default:
			s.env.Notes.Add(note.Note, note.Weights, "%s: the instruments' part of its standard uncertainty is %s%s: %s of each one's own errors, %s shared by all. That is of the instruments only, not of how well they stand for the space between them",
				c.call.Text, all.text(three), unit, own.text(three), shared.text(three))
		}
	}
}

// instrumentsUntold says why nothing can be said of the instruments, "" where it can.
func instrumentsUntold(m *plan.Instruments, s *spreads) string {
	switch {
	case !m.Once && (m.Of.Each > 0 || len(m.Of.EachBy) > 0):
		return "an instrument is in it more than once, and its errors there are not independent"
	case m.Merged:
		return "with DUPLICATES MEAN a value may be that of several instruments, and a column of uncertainties is of one each"
	case len(m.Lost) > 0:
		return fmt.Sprintf("the column %s does not reach the mean, name it in the SELECT below it, too", strings.Join(m.Lost, ", "))
	case s != nil && s.missing > 0:
		return fmt.Sprintf("%d of %d %s with a weight %s no uncertainty, NULL (COALESCE in OF (SELECT …) gives one)", s.missing, s.rows, plural(float64(s.rows), "value"), hasHave(s.missing))
	}
	return ""
}

func hasHave(n int64) string {
	if n == 1 {
		return "has"
	}
	return "have"
}

// three writes three significant digits.
func three(x float64) string { return strconv.FormatFloat(x, 'g', 3, 64) }
