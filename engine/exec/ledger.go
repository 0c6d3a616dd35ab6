package exec

import (
	"context"
	"fmt"
	"math"
	"strconv"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/relation"
)

// ledger adds up what a weighted answer speaks for: the volume of the rows with a
// value, of those without one, of those that FILTER leaves out, and of those of which its
// condition is unknown. What is then missing from the solid was left out on the way, or
// belongs to no partition.
type ledger struct {
	of                                 plan.Weighing
	answered, silent, filtered, unsure volumeSum
	rows                               int64
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

func (s *volumeSum) merge(o volumeSum) {
	s.add(o.sum)
	s.add(o.rest)
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

// add books the rows of a batch: kept are those that FILTER leaves, whose condition is
// filter.
func (l *ledger) add(b *column.Batch, kept []uint64, filter *column.Vector, args []column.Vector) {
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
			if filter.N > 0 && filter.IsNull(i) {
				l.unsure.add(volume.F[i])
			} else {
				l.filtered.add(volume.F[i])
			}
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
	for _, x := range [...]struct{ to, from *volumeSum }{{&l.answered, &o.answered}, {&l.silent, &o.silent}, {&l.filtered, &o.filtered}, {&l.unsure, &o.unsure}} {
		x.to.merge(*x.from)
	}
}

// negligible is the part of a solid that is rounding: areas and volumes of
// cells in it add up to 1e-8 of it at worst.
const negligible = 1e-8

// divided takes down how the rows of a relation divide their space, for the ledgers of
// the answers that are weighed by it. A condition that chooses partitions tears no hole
// into one, so that the others are not counted.
func (r *runner) divided(ctx context.Context, n *plan.Relation, o overSites) error {
	rows, ok := o.rows.(relation.Divider)
	if !ok || r.env.Notes == nil || r.env.queries == nil {
		return nil
	}
	var on []uint64
	if cond := plan.WholePartitions(n); cond != nil {
		var err error
		if on, err = trueOf(ctx, NewWorker(r.env), scopeOf(o.sites.Schema), cond, o.sites, nil); err != nil {
			return err
		}
	}
	if d, ok := rows.Division(on); ok {
		q := r.env.queries
		q.mu.Lock()
		defer q.mu.Unlock()
		if q.divisions == nil {
			q.divisions = map[*plan.Relation]relation.Division{}
		}
		q.divisions[n] = d
	}
	return nil
}

// division is how the space of a relation was divided, as far as it was taken down.
func (q *queries) division(n *plan.Relation) (d relation.Division, ok bool) {
	if q == nil {
		return d, false
	}
	q.mu.Lock()
	defer q.mu.Unlock()
	d, ok = q.divisions[n]
	return d, ok
}

// text is the ledger of an answer, and a warning where it does not add up; "" where
// it is not known how many partitions there were.
func (l *ledger) text(w *cellWatch, q *queries) (text, warning string) {
	space, name := l.of.Relation.Bound.Space()
	d, known := q.division(l.of.Relation)
	parts := int64(1)
	switch {
	case known:
		parts = d.Partitions
	case len(l.of.Relation.Bound.Clauses.Each) > 0:
		shown := w.shown[l.of.Relation]
		if shown == nil || shown.parts.Load() == 0 {
			return "", ""
		}
		parts = shown.parts.Load()
	}
	if parts == 0 {
		return "", ""
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
	answered, silent, filtered, unsure := l.answered.value(), l.silent.value(), l.filtered.value(), l.unsure.value()
	missing := total - answered - silent - filtered - unsure
	if missing < -negligible*total {
		if l.of.Sum {
			return "", "" // cellCount tells
		}
		return "", fmt.Sprintf("the weights add up to %s%s, and %s has only %s%s: cells are counted more than once (a join repeats them)",
			write(total-missing), unit, name, write(total), unit)
	}
	if missing < negligible*total {
		missing = 0
	}
	switch {
	case l.of.Sum && silent == 0 && unsure == 0 && missing == 0:
		return "", "" // the answer itself says it
	case silent == 0 && filtered == 0 && unsure == 0 && missing == 0:
		return of + " all is answered for", ""
	}
	items := []string{
		fmt.Sprintf("%s (%s %%) answered for", write(answered), percent(100*answered/total)),
		write(silent) + " NULL, so that nobody spoke for it",
	}
	if filtered > 0 || unsure > 0 {
		items = append(items, write(filtered)+" left out by FILTER")
	}
	if unsure > 0 {
		items = append(items, write(unsure)+" of which FILTER cannot tell (its condition is unknown)")
	}
	if removed, outside, apart := l.missing(w, missing, d.Unclaimed, known, negligible*total); apart {
		items = append(items, write(removed)+" removed by "+l.remover(), write(outside)+" outside any partition")
	} else {
		items = append(items, write(missing)+" removed by "+l.remover()+" or outside any partition")
	}
	return of + " " + strings.Join(items, ", "), ""
}

// missing splits what no row had between the steps that leave rows out and space that is
// in no partition; apart is false where both may have a share and which is not known.
func (l *ledger) missing(w *cellWatch, missing, unclaimed float64, known bool, rounding float64) (removed, outside float64, apart bool) {
	removes := !l.of.Plain
	for _, r := range w.removals {
		removes = removes || r.Relation == l.of.Relation && r.came.Load() > r.stayed.Load()
	}
	switch {
	case !removes || missing == 0:
		return 0, missing, true
	case !known:
		return 0, 0, false
	case math.Abs(missing-unclaimed) <= rounding:
		return 0, missing, true
	case unclaimed <= rounding:
		return missing, 0, true
	}
	outside = min(missing, unclaimed)
	return missing - outside, outside, true
}

// remover names what may have left rows out.
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
		if c.ledger == nil || c.ledger.rows == 0 && len(s.node.Keys) > 0 {
			continue
		}
		text, warning := c.ledger.text(s.watch, s.env.queries)
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
