package exec

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/plan"
)

// ledger adds up what a weighted answer speaks for: the volume of the rows with a
// value, of those without one, and of those that FILTER leaves out. What is then
// missing from the solid was left out on the way, or belongs to no partition.
type ledger struct {
	of                         plan.Weighing
	answered, silent, filtered volumeSum
	rows                       int64
}

// volumeSum is a compensated sum (Neumaier 1974).
type volumeSum struct{ sum, rest float64 }

func (s *volumeSum) add(x float64) {
	t := s.sum + x
	if math.Abs(s.sum) >= math.Abs(x) {
		s.rest += (s.sum - t) + x
	} else {
		s.rest += (x - t) + s.sum
	}
	s.sum = t
}

func (s *volumeSum) value() float64 { return s.sum + s.rest }

// ledgers are those that a part keeps, by the number of the call.
func (s *aggregateSink) ledgers() map[int]*ledger {
	books := map[int]*ledger{}
	for _, m := range plan.Weighings(s.node) {
		books[m.Call] = &ledger{of: m}
	}
	return books
}

// add books the rows of a batch: kept are those that FILTER leaves.
func (l *ledger) add(b *column.Batch, kept []uint64, args []column.Vector) {
	if l == nil {
		return
	}
	volume := &b.Cols[l.of.Column]
	if volume.Type != column.Real {
		return
	}
	forEachOn(b.On, b.N, func(i int) {
		if volume.IsNull(i) {
			return
		}
		l.rows++
		if kept != nil && !column.Bit(kept, i) {
			l.filtered.add(volume.F[i])
			return
		}
		for k := range args {
			if args[k].IsNull(i) {
				l.silent.add(volume.F[i])
				return
			}
		}
		l.answered.add(volume.F[i])
	})
}

func (l *ledger) merge(o *ledger) {
	if l == nil {
		return
	}
	l.rows += o.rows
	for _, x := range [...]struct{ to, from *volumeSum }{{&l.answered, &o.answered}, {&l.silent, &o.silent}, {&l.filtered, &o.filtered}} {
		x.to.add(x.from.sum)
		x.to.add(x.from.rest)
	}
}

// negligible is the part of a solid that is rounding: areas and volumes of
// cells in it add up to 1e-8 of it at worst.
const negligible = 1e-8

// text is the ledger of an answer, and a warning where it does not add up; "" where
// it is not known how many partitions there were.
func (l *ledger) text(w *cellWatch) (text, warning string) {
	space, name := l.of.Relation.Bound.Space()
	parts := int64(1)
	if len(l.of.Relation.Bound.Clauses.Each) > 0 {
		shown := w.shown[l.of.Relation]
		if shown == nil || shown.parts.Load() == 0 {
			return "", ""
		}
		parts = shown.parts.Load()
	}
	total := space * float64(parts)
	unit := l.of.Relation.Bound.Clauses.Unit.Pow(3).String()
	if unit != "" {
		unit = " " + unit
	}
	write := amounts(total)
	of := fmt.Sprintf("of %s%s of %s", write(total), unit, name)
	if parts > 1 {
		of = fmt.Sprintf("of %d partitions of %s, %s%s together,", parts, name, write(total), unit)
	}
	answered, silent, filtered := l.answered.value(), l.silent.value(), l.filtered.value()
	missing := total - answered - silent - filtered
	if missing < -negligible*total {
		return "", fmt.Sprintf("the weights add up to %s%s, and %s has only %s%s: cells are counted more than once (a join repeats them)",
			write(answered+silent+filtered), unit, name, write(total), unit)
	}
	if missing < negligible*total {
		missing = 0
	}
	if silent == 0 && filtered == 0 && missing == 0 {
		return of + " all is answered for", ""
	}
	removed, outside := l.missing(w, missing)
	items := []string{
		fmt.Sprintf("%s (%s %%) answered for", write(answered), percent(100*answered/total)),
		write(silent) + " NULL, so that nobody spoke for it",
		write(removed) + " removed by " + l.remover(),
		write(outside) + " outside any partition",
	}
	if filtered > 0 {
		items = append(items[:2], append([]string{write(filtered) + " left out by FILTER"}, items[2:]...)...)
	}
	return of + " " + strings.Join(items, ", "), ""
}

// missing splits what no row had between the steps that leave rows out and space
// that is in no partition. Where a step left out rows, it is theirs: cells that are
// not shown are not computed.
func (l *ledger) missing(w *cellWatch, missing float64) (removed, outside float64) {
	for _, r := range w.removals {
		if r.Relation == l.of.Relation && r.came.Load() > r.stayed.Load() {
			return missing, 0
		}
	}
	if !l.of.Plain {
		return missing, 0
	}
	return 0, missing
}

func (l *ledger) remover() string {
	if !l.of.Plain {
		return "WHERE or a join"
	}
	return "WHERE"
}

// amounts writes volumes with as many decimals as show the ten-thousandth part of
// the whole.
func amounts(total float64) func(float64) string {
	decimals := 0
	if total > 0 && !math.IsInf(total, 0) {
		decimals = min(9, max(0, 4-int(math.Floor(math.Log10(total)))))
	}
	return func(x float64) string {
		text := strconv.FormatFloat(x, 'f', decimals, 64)
		if strings.Contains(text, ".") {
			text = strings.TrimRight(strings.TrimRight(text, "0"), ".")
		}
		if text == "0" && x > 0 {
			return "under " + strconv.FormatFloat(math.Pow10(-decimals), 'f', -1, 64)
		}
		return text
	}
}

// ledgerNotes says what the weighted answers speak for. Calls that speak for the
// same say it together.
func (s *aggregateSink) ledgerNotes() {
	type line struct {
		level note.Level
		text  string
	}
	names := map[line][]string{}
	var order []line
	for _, c := range s.all.calls {
		if c.ledger == nil || c.ledger.rows == 0 {
			continue
		}
		text, warning := c.ledger.text(s.watch)
		l := line{note.Note, text}
		if warning != "" {
			l = line{note.Warning, warning}
		}
		if l.text == "" {
			continue
		}
		if names[l] == nil {
			order = append(order, l)
		}
		names[l] = appendNew(names[l], c.call.Text)
	}
	for _, l := range order {
		s.env.Notes.Add(l.level, note.Weights, "%s: %s", strings.Join(names[l], ", "), l.text)
	}
}
