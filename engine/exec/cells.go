package exec

import (
	"context"
	"errors"
	"fmt"
	"slices"
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
	shown    map[*plan.Relation]*shownRows
}

// watch starts to count the removals that bear on an aggregate; it must be
// called before the aggregate's input is opened.
func (r *runner) watch(n *plan.Aggregate) *cellWatch {
	if r.env.Notes == nil {
		return nil
	}
	w := &cellWatch{shown: map[*plan.Relation]*shownRows{}}
	for _, m := range plan.CellSums(n) {
		w.shown[m.Relation] = r.countShown(m.Relation)
	}
	for _, of := range plan.Repeated(n) {
		w.shown[of] = r.countShown(of)
	}
	for _, m := range plan.Weighings(n) {
		w.shown[m.Relation] = r.countShown(m.Relation)
	}
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

// countShown is the counter of what a relation gives.
func (r *runner) countShown(n *plan.Relation) *shownRows {
	if r.shown[n] == nil {
		if r.shown == nil {
			r.shown = map[*plan.Relation]*shownRows{}
		}
		r.shown[n] = &shownRows{}
	}
	return r.shown[n]
}

// watchWindow is watch for the weights and sums of a window.
func (r *runner) watchWindow(n *plan.Window) *cellWatch {
	a := &plan.Aggregate{Input: n.Input}
	for i := range n.Calls {
		if n.Calls[i].Fn == nil {
			c := n.Calls[i].Call
			c.Distinct = true // of a window whose rows stay apart, none counts a cell twice unseen
			a.Calls = append(a.Calls, c)
		}
	}
	return r.watch(a)
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
		if _, ok := c.Step.(*plan.Relation); ok && len(c.Relation.Bound.Clauses.Each) == 0 {
			what = "sites" // with FOR EACH a site has a row in each partition
		}
		notes.Add(note.Note, note.Rows, "WHERE left out %d of %d %s of %s: their space is in no sum and no weight, "+
			"and it is not given to the others (OF (query) or OMITTING would do that)", out, came, what, c.Relation.Bound.Title())
	}
}

// shownRows is what a relation gave: how many rows, of how many partitions.
type shownRows struct {
	rows, parts atomic.Int64
}

// countParts counts the partitions that have rows to show.
func (s *shownRows) countParts(n *plan.Relation, sites *column.Table, wanted []uint64) {
	var cols []column.Vector
	var types []column.Type
	for _, c := range n.Bound.Clauses.Each {
		cols = append(cols, sites.Cols[c])
		types = append(types, sites.Cols[c].Type)
	}
	t := newKeyTable(types)
	newKeyReader(t).put(cols, wanted, sites.N, make([]int32, sites.N))
	s.parts.Store(int64(t.n))
}

// cellCount counts the rows and the different cells behind a sum of measures.
// Where the rows do not carry what tells cells apart, it counts the rows of
// each group instead.
type cellCount struct {
	sum   plan.CellSum
	shown *shownRows
	cells *keyTable // group, then what tells cells apart
	read  *keyReader
	rows  int64
	most  []int64 // rows by group, where cells cannot be told apart
	ids   []int32
	cols  []column.Vector
}

// cellCounts are the counts that a part keeps, by the number of the call.
func (s *aggregateSink) cellCounts() map[int]*cellCount {
	schema := s.node.Input.Schema()
	counts := map[int]*cellCount{}
	for _, m := range plan.CellSums(s.node) {
		c := &cellCount{sum: m, shown: s.watch.shown[m.Relation]}
		if m.Identity != nil {
			types := []column.Type{column.Integer}
			for _, at := range m.Identity {
				types = append(types, schema[at].Type)
			}
			c.cells = newKeyTable(types)
			c.read = newKeyReader(c.cells)
		}
		counts[m.Call] = c
	}
	return counts
}

func (c *cellCount) add(b *column.Batch, on []uint64, groups []int32) {
	if c == nil {
		return
	}
	c.rows += int64(countOn(on, b.N))
	if c.cells == nil {
		forEachOn(on, b.N, func(i int) { c.countIn(groups[i], 1) })
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
}

func (c *cellCount) countIn(group int32, rows int64) {
	for int(group) >= len(c.most) {
		c.most = append(c.most, 0)
	}
	c.most[group] += rows
}

func (c *cellCount) merge(o *cellCount, to []int32) {
	if c == nil {
		return
	}
	c.rows += o.rows
	if c.cells != nil {
		c.cells.absorb(o.cells, to)
		return
	}
	for g, rows := range o.most {
		c.countIn(to[g], rows)
	}
}

// say warns where a group had a cell more than once: where it met one twice, or
// must have, since there were more partitions than groups or a group had more
// rows than there are cells.
func (c *cellCount) say(notes *note.Notes, call *plan.Call, groups int) {
	if c == nil {
		return
	}
	b := c.sum.Relation.Bound
	way := "a join repeats them: sum before joining, in FROM (SELECT … GROUP BY …)"
	if len(b.Clauses.Each) > 0 {
		way = "GROUP BY the columns of FOR EACH gives each partition its own sum"
	}
	what := ""
	switch {
	case c.cells != nil && c.rows > int64(c.cells.n):
		what = fmt.Sprintf("that are only %d different ones in their group", c.cells.n)
	case c.cells == nil && len(b.Clauses.Each) > 0 && c.shown.parts.Load() > int64(groups):
		what = fmt.Sprintf("of %d partitions in %d %s", c.shown.parts.Load(), groups, plural(float64(groups), "group"))
	case c.cells == nil && c.shown.rows.Load() == 0:
		return // the cells were made elsewhere, in a common part: how many is not known here
	case c.cells == nil && len(c.most) > 0 && slices.Max(c.most) > c.shown.rows.Load():
		what = fmt.Sprintf("of which there are only %d", c.shown.rows.Load())
	default:
		return
	}
	notes.Add(note.Warning, note.Rows, "%s adds up %d rows of %s %s: the same space counts more than once (%s)",
		call.Text, c.rows, b.Title(), what, way)
}

// placed gives an error of a relation its place.
func placed(err error, n *plan.Relation) error {
	if err == nil || errors.Is(err, errEnough) || errors.Is(err, context.Canceled) || errors.Is(err, context.DeadlineExceeded) {
		return err
	}
	return problem.At(err, n.Place)
}
