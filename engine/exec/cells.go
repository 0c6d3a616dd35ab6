package exec

import (
	"context"
	"errors"
	"sync/atomic"

	"nearcell/catalog/column"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
)

// removal counts the cells that a step left out.
type removal struct {
	plan.Removal
	came, stayed atomic.Int64
}

// cellWatch is what an aggregate may have to say about the cells behind its
// sums and weights. It is said only where it happened.
type cellWatch struct {
	removals []*removal
}

// watch starts to count the removals that bear on an aggregate; it must be
// called before the aggregate's input is opened.
func (r *runner) watch(n *plan.Aggregate) *cellWatch {
	if r.env.Notes == nil {
		return nil
	}
	w := &cellWatch{}
	for _, m := range plan.Removals(n) {
		c := &removal{Removal: m}
		w.removals = append(w.removals, c)
		if r.removals == nil {
			r.removals = map[plan.Node]*removal{}
		}
		r.removals[m.Step] = c
	}
	return w
}

// count tells a watched step's counter of the rows that came and stayed in a
// batch. Rows that Parted leaves out do not count: their partition is out as a
// whole.
func (c *removal) count(s scope, w *Worker, b *column.Batch, stayed int) error {
	if c == nil {
		return nil
	}
	came := countOn(b.On, b.N)
	if c.Parted != nil {
		v, err := s.eval(w, c.Parted, b, b.On)
		if err != nil {
			return err
		}
		came = column.Count(trueRows(nil, &v, b.On, b.N))
	}
	c.came.Add(int64(came))
	c.stayed.Add(int64(stayed))
	return nil
}

// say notes the cells that were left out.
func (w *cellWatch) say(notes *note.Notes) {
	for _, c := range w.removals {
		came, out := c.came.Load(), c.came.Load()-c.stayed.Load()
		if out <= 0 {
			continue
		}
		what := "rows"
		if _, ok := c.Step.(*plan.Relation); ok {
			what = "sites"
		}
		notes.Add(note.Note, note.Rows, "WHERE left out %d of %d %s of %s: their space is in no sum and no weight, "+
			"and it is not given to the others (OF (query) or OMITTING would do that)", out, came, what, c.Relation.Bound.Title())
	}
}

// cellCount counts the rows and the different cells behind a sum of measures.
type cellCount struct {
	sum   plan.CellSum
	cells *keyTable // group, then what tells cells apart
	read  *keyReader
	rows  int64
	ids   []int32
	cols  []column.Vector
}

// cellCounts are the counts that a part keeps, by the number of the call.
func cellCounts(n *plan.Aggregate) map[int]*cellCount {
	schema := n.Input.Schema()
	counts := map[int]*cellCount{}
	for _, s := range plan.CellSums(n) {
		if s.Identity == nil {
			continue
		}
		types := []column.Type{column.Integer}
		for _, c := range s.Identity {
			types = append(types, schema[c].Type)
		}
		t := newKeyTable(types)
		counts[s.Call] = &cellCount{sum: s, cells: t, read: newKeyReader(t)}
	}
	return counts
}

func (c *cellCount) add(b *column.Batch, on []uint64, groups []int32) {
	if c == nil {
		return
	}
	group := column.Vector{Type: column.Integer, N: b.N, I: make([]int64, b.N)}
	forEachOn(on, b.N, func(i int) { group.I[i] = int64(groups[i]) })
	c.cols = append(c.cols[:0], group)
	for _, at := range c.sum.Identity {
		c.cols = append(c.cols, b.Cols[at])
	}
	c.ids = room(c.ids, b.N)
	c.read.put(c.cols, on, b.N, c.ids)
	c.rows += int64(countOn(on, b.N))
}

func (c *cellCount) merge(o *cellCount, to []int32) {
	if c == nil {
		return
	}
	c.cells.absorb(o.cells, to)
	c.rows += o.rows
}

// say warns where a group had a cell more than once.
func (c *cellCount) say(notes *note.Notes, call *plan.Call) {
	if c == nil || c.rows == int64(c.cells.n) {
		return
	}
	b := c.sum.Relation.Bound
	way := "a join repeats them: sum before joining, in FROM (SELECT … GROUP BY …)"
	if len(b.Clauses.Each) > 0 {
		way = "GROUP BY the columns of FOR EACH gives each partition its own sum"
	}
	notes.Add(note.Warning, note.Rows, "%s adds up %d rows of %s that are only %d different ones in their group: the same space counts more than once (%s)",
		call.Text, c.rows, b.Title(), c.cells.n, way)
}

// placed gives an error of a relation its place.
func placed(err error, n *plan.Relation) error {
	if err == nil || errors.Is(err, errEnough) || errors.Is(err, context.Canceled) || errors.Is(err, context.DeadlineExceeded) {
		return err
	}
	return problem.At(err, n.Place)
}
