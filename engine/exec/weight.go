package exec

import (
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/note"
	"nearcell/engine/plan"
)

// heaviest is the row with the largest weight among those with a value.
type heaviest struct {
	weight float64
	id     column.Value
	tied   bool // another row weighs the same
}

func (h *heaviest) look(weight *column.Vector, args []column.Vector, on []uint64, n int, id *column.Vector) {
	forEachOn(on, n, func(i int) {
		if weight.IsNull(i) {
			return
		}
		for k := range args {
			if args[k].IsNull(i) {
				return
			}
		}
		f := 0.0
		if weight.Type == column.Real {
			f = weight.F[i]
		} else if weight.Type.Counted() {
			f = float64(weight.I[i])
		}
		switch {
		case f > h.weight:
			h.weight, h.id, h.tied = f, id.Value(i), false
		case f == h.weight && f > 0:
			h.tied = true
		}
	})
}

func (h *heaviest) merge(o *heaviest) {
	switch {
	case o.weight > h.weight:
		*h = *o
	case o.weight == h.weight && o.weight > 0:
		h.tied = true
	}
}

// weightNotes says what stands behind the weighted answers: how many equally
// weighted values they are worth (Kish's effective sample size), the largest
// single weight, and the weight of rows without a value. Calls that rest on the
// same weights of the same rows say it together.
func (s *aggregateSink) weightNotes() {
	said := make([]bool, len(s.node.Calls))
	repeated := plan.Repeated(s.node)
	for i, c := range s.all.calls {
		if said[i] || c.call.Weight == nil {
			continue
		}
		facts := c.acc.Weights(s.all.keys.n)
		names := []string{c.call.Text}
		for j := i + 1; j < len(said); j++ {
			o := s.all.calls[j]
			if o.call.Weight != nil && expr.Equal(c.call.Weight, o.call.Weight) && slices.Equal(facts, o.acc.Weights(s.all.keys.n)) {
				said[j] = true
				names = appendNew(names, o.call.Text)
			}
		}
		text := strings.Join(names, ", ")
		parts := int64(0)
		if of := repeated[i]; of != nil && s.watch.shown[of] != nil {
			parts = s.watch.shown[of].parts.Load()
		}
		if line := effectiveText(facts, &c.largest, parts); line != "" {
			s.env.Notes.Add(note.Note, note.Weights, "%s: %s", text, line)
		}
		if line := silentText(facts); line != "" {
			s.env.Notes.Add(note.Note, note.Weights, "%s: %s", text, line)
		}
	}
}

func appendNew(names []string, name string) []string {
	if slices.Contains(names, name) {
		return names
	}
	return append(names, name)
}

// effectiveText is n_eff = (Σw)² / Σw² and the largest share of the weight, as
// ranges over the groups where there are several; "" where nothing was weighed. Above one
// partition, the values are those of sites in so many of them: then a site is there many
// times, and what one partition is worth is said, too.
func effectiveText(facts []function.WeightFacts, largest *heaviest, parts int64) string {
	var eff, share, rows span
	groups := 0
	for _, f := range facts {
		if f.Rows == 0 {
			continue
		}
		groups++
		eff.add(f.Sum * (f.Sum / f.SumSquares))
		share.add(100 * f.Largest / f.Sum)
		rows.add(float64(f.Rows))
	}
	if groups == 0 {
		return ""
	}
	of := ""
	switch {
	case parts > 1 && groups == 1:
		of = fmt.Sprintf(" (%s in each of %d partitions on average: what one site reads in several is not independent)", short(eff.high/float64(parts)), parts)
	case parts > 1:
		of = " (of sites in several partitions: what one site reads in several is not independent)"
	}
	text := fmt.Sprintf("n_eff %s of %s %s%s, largest weight %s %%", eff.text(short), rows.text(whole), plural(rows.high, "value"), of, share.text(percent))
	switch {
	case groups > 1:
		return fmt.Sprintf("over %d groups %s", groups, text)
	case largest.weight > 0 && !largest.tied:
		return fmt.Sprintf("%s (id %s)", text, idText(largest.id))
	}
	return text
}

// silentText tells of the weight whose rows had no value: space nobody spoke
// for. It was left out, so that the others stand for more than they measured.
func silentText(facts []function.WeightFacts) string {
	var share span
	groups, all := 0, 0
	for _, f := range facts {
		if f.Rows > 0 || f.NullWeight > 0 {
			all++
		}
		if f.NullWeight > 0 {
			groups++
			share.add(100 * f.NullWeight / (f.Sum + f.NullWeight))
		}
	}
	switch {
	case groups == 0:
		return ""
	case all == 1:
		return fmt.Sprintf("%s %% of the weight was left out, its values are NULL: space nobody spoke for", share.text(percent))
	}
	return fmt.Sprintf("in %d of %d groups weight was left out, its values are NULL: space nobody spoke for, %s %% of the group's",
		groups, all, share.text(percent))
}

// span is the range of a quantity over groups.
type span struct {
	low, high float64
	any       bool
}

func (s *span) add(x float64) {
	if !s.any {
		s.low, s.high, s.any = x, x, true
		return
	}
	s.low, s.high = math.Min(s.low, x), math.Max(s.high, x)
}

// text is one number where both ends look alike, else "31.0 to 37.2".
func (s *span) text(format func(float64) string) string {
	low, high := format(s.low), format(s.high)
	if low == high {
		return low
	}
	return low + " to " + high
}

func plural(n float64, noun string) string {
	if n == 1 {
		return noun
	}
	return noun + "s"
}

func whole(x float64) string { return strconv.FormatFloat(x, 'f', 0, 64) }

// short is a count that may be broken: one decimal, none from a thousand on.
func short(x float64) string {
	if x >= 1000 {
		return whole(x)
	}
	return strconv.FormatFloat(x, 'f', 1, 64)
}

// percent has one decimal, and two digits below one.
func percent(x float64) string {
	switch {
	case x >= 99.95:
		return whole(x)
	case x >= 0.95 || x == 0:
		return strconv.FormatFloat(x, 'f', 1, 64)
	}
	return strconv.FormatFloat(x, 'g', 2, 64)
}
