package exec

import (
	"context"
	"math"
	"runtime"
	"sync"
	"sync/atomic"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
)

// windowRun computes the calls of one window over all rows.
type windowRun struct {
	sink  *windowSink
	env   *Env
	all   *column.Table
	rows  []int32 // by partition, in the order of the input
	start []int32 // of each partition in rows, and the end
	order []orderKey
	ranks [][]uint64 // of the texts of an order key
	peers bool       // somebody asks which rows are equal in the order
	calls []windowCall
}

func (r *windowRun) prepare(ctx context.Context) error {
	s := r.sink
	if r.all.N > math.MaxInt32-1 {
		return problem.New("too-many-rows", problem.Place{}, "a window holds more than %d rows", math.MaxInt32-1)
	}
	if err := r.divide(ctx); err != nil {
		return err
	}
	for i, k := range s.node.OrderBy {
		v := &r.all.Cols[s.order[i]]
		if v.Valid != nil && column.Count(v.Valid) == v.N { // all are there: nobody need look
			all := *v
			all.Valid = nil
			v = &all
		}
		r.order = append(r.order, orderKey{v, k.Descending, k.NullsFirst})
		r.ranks = append(r.ranks, nil)
		if v.Type == column.Text {
			var err error
			if r.ranks[i], err = textRanks(ctx.Err, v); err != nil {
				return err
			}
		}
	}
	r.calls = make([]windowCall, len(s.node.Calls))
	for i := range r.calls {
		if err := ctx.Err(); err != nil {
			return err
		}
		if err := r.prepareCall(i); err != nil {
			return s.fault(err, &s.node.Calls[i], r.all)
		}
	}
	return nil
}

// divide puts the rows of each partition together.
func (r *windowRun) divide(ctx context.Context) error {
	n := r.all.N
	r.rows = large[int32](nil, n)
	if len(r.sink.part) == 0 {
		for i := range r.rows {
			r.rows[i] = int32(i)
		}
		r.start = []int32{0, int32(n)}
		return nil
	}
	ids, count, err := r.numbers(ctx, r.sink.part)
	if err != nil {
		return err
	}
	r.start = make([]int32, count+1)
	for _, g := range ids {
		r.start[g+1]++
	}
	for g := range count {
		r.start[g+1] += r.start[g]
	}
	next := append([]int32(nil), r.start...)
	for i, g := range ids {
		if i&(cancelRows-1) == 0 {
			if err := ctx.Err(); err != nil {
				return err
			}
		}
		r.rows[next[g]] = int32(i)
		next[g]++
	}
	return nil
}

// numbers numbers the different values of columns.
func (r *windowRun) numbers(ctx context.Context, at []int) ([]int32, int, error) {
	var types []column.Type
	for _, c := range at {
		types = append(types, r.all.Cols[c].Type)
	}
	t := newKeyTable(types).until(ctx.Err)
	read := newKeyReader(t)
	ids := large[int32](ctx.Err, r.all.N)
	cols := make([]column.Vector, len(at))
	for lo := 0; lo < r.all.N; lo += BatchRows {
		if err := ctx.Err(); err != nil {
			return nil, 0, err
		}
		hi := min(lo+BatchRows, r.all.N)
		for i, c := range at {
			cols[i] = r.all.Cols[c].Slice(lo, hi)
		}
		read.put(cols, nil, hi-lo, ids[lo:hi])
	}
	return ids, t.n, nil
}

func (r *windowRun) prepareCall(i int) error {
	s, n := r.sink, r.all.N
	node, at := &s.node.Calls[i], s.calls[i]
	c := &r.calls[i]
	*c = windowCall{node: node, missing: -1, by: 1}
	r.peers = r.peers || asksPeers(node)
	result := s.node.Fields[len(s.schema)+i].Type
	if node.Fn != nil {
		if constant := whichArg(node.Fn.Kind); constant >= 0 && constant < len(node.Args) {
			if v, ok := expr.Const(node.Args[constant]); ok {
				c.by = v.I
			}
		}
		c.out = function.NewSlid(result, n, node.Fn.Kind >= function.PickFirst)
		if node.Fn.Kind >= function.PickFirst {
			c.picked = r.all.Cols[at.args[0]]
			if len(at.args) == 3 {
				c.missing = n
				c.picked = stacked(&c.picked, &r.all.Cols[at.args[2]], result, n)
			}
		}
		return nil
	}
	rows := function.Rows{N: n}
	for _, a := range at.args {
		rows.Args = append(rows.Args, r.all.Cols[a])
	}
	if at.filter >= 0 {
		rows.On = trueRows(nil, &r.all.Cols[at.filter], nil, n)
	}
	if at.weight >= 0 {
		rows.Weight = &r.all.Cols[at.weight]
		if s.watch != nil {
			c.weights = &frameWeights{weight: rows.Weight, on: rows.On}
			for _, a := range at.args {
				c.weights.args = append(c.weights.args, &r.all.Cols[a])
			}
		}
	}
	if node.Distinct {
		r.firstOnes(&rows, at)
	}
	var err error
	if c.sliders, err = node.Call.Fn.Slide(newSetup(&node.Call), rows); err != nil {
		return err
	}
	c.out = function.NewSlid(result, n, c.sliders.Picks)
	if c.sliders.Picks {
		c.picked = rows.Args[0]
	}
	return nil
}

// asksPeers reports whether a call looks at rows that are equal in the order: places
// among them and frames of RANGE do, LAG and frames of ROWS do not.
func asksPeers(c *plan.WindowCall) bool {
	if c.Fn == nil || c.Fn.Framed {
		return c.Frame.Range
	}
	return c.Fn.Kind < function.PickFirst
}

// whichArg is the argument of a window function that is a number of rows.
func whichArg(k function.WindowKind) int {
	switch k {
	case function.Ntile:
		return 0
	case function.PickNth, function.PickBefore, function.PickAfter:
		return 1
	}
	return -1
}

// stacked is two columns one under the other.
func stacked(a, b *column.Vector, t column.Type, n int) column.Vector {
	g := newGatherer(column.Field{Type: t})
	idx := activeRows(nil, nil, n)
	g.add(a, idx)
	g.add(b, idx)
	return g.finish()
}

// firstOnes leaves of equal arguments the first of each partition (DISTINCT, which
// stands over whole partitions alone).
func (r *windowRun) firstOnes(rows *function.Rows, at windowColumns) {
	cols := append([]int(nil), at.args...)
	types := []column.Type{column.Integer}
	partition := column.New(column.Integer, nil, rows.N)
	for g := 0; g+1 < len(r.start); g++ {
		for _, row := range r.rows[r.start[g]:r.start[g+1]] {
			partition.I[row] = int64(g)
		}
	}
	vectors := []column.Vector{partition}
	for _, c := range cols {
		types = append(types, r.all.Cols[c].Type)
		vectors = append(vectors, r.all.Cols[c])
	}
	ids := make([]int32, rows.N)
	t := newKeyTable(types)
	newKeyReader(t).put(vectors, rows.On, rows.N, ids)
	seen := make([]bool, t.n)
	first := make([]uint64, column.Words(rows.N))
	forEachOn(rows.On, rows.N, func(i int) {
		if !seen[ids[i]] {
			seen[ids[i]] = true
			column.SetBit(first, i)
		}
	})
	rows.On = first
}

// taskRows is about how many rows a worker takes at a time: whole partitions.
const taskRows = 1 << 14

// partitions computes all partitions, on all workers. Of several at fault the first
// one's error is told: tasks are given out in order, and none after one at fault.
func (r *windowRun) partitions(ctx context.Context) error {
	var ends []int // the partition behind each task
	for g, from := 0, int32(0); g+1 < len(r.start); g++ {
		if r.start[g+1]-from >= taskRows || g+2 == len(r.start) {
			ends = append(ends, g+1)
			from = r.start[g+1]
		}
	}
	threads := r.env.Threads
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	faults := make([]error, len(ends))
	var next, last atomic.Int64
	last.Store(int64(len(ends)))
	work := func() {
		w := &windowWorker{run: r, stop: ctx.Err}
		for {
			t := next.Add(1) - 1
			if t >= last.Load() {
				return
			}
			g := 0
			if t > 0 {
				g = ends[t-1]
			}
			for ; g < ends[t] && faults[t] == nil; g++ {
				faults[t] = w.partition(r.rows[r.start[g]:r.start[g+1]])
			}
			if faults[t] != nil {
				last.Store(min(last.Load(), t)) // a race loses a later task's mark at worst
			}
		}
	}
	var group sync.WaitGroup
	var panicked atomic.Pointer[any]
	for range min(threads, len(ends)) - 1 {
		group.Go(func() {
			defer func() {
				if p := recover(); p != nil {
					panicked.CompareAndSwap(nil, &p)
				}
			}()
			work()
		})
	}
	work()
	group.Wait()
	if p := panicked.Load(); p != nil {
		panic(*p)
	}
	if err := ctx.Err(); err != nil {
		return err
	}
	for _, err := range faults {
		if err != nil {
			return err
		}
	}
	return nil
}

// windowWorker owns the scratch of one goroutine.
type windowWorker struct {
	run         *windowRun
	stop        func() error
	words       []rowWord
	spare       []rowWord
	peers, ends []int32
	lo, hi      []int32
	sliders     []function.Slider // by call
	frame       frameScratch
}

func (w *windowWorker) partition(rows []int32) error {
	r := w.run
	if err := w.stop(); err != nil {
		return err
	}
	sorted := false // by words that are still there
	if len(r.order) > 0 {
		var err error
		if sorted, err = w.sort(rows); err != nil {
			return err
		}
	}
	if r.peers {
		if err := w.findPeers(rows, sorted); err != nil {
			return err
		}
	}
	if w.sliders == nil {
		w.sliders = make([]function.Slider, len(r.calls))
	}
	for i := range r.calls {
		c := &r.calls[i]
		if c.node.Fn != nil && !c.node.Fn.Framed {
			if c.out.Pick != nil {
				c.node.Fn.Pick(rows, nil, nil, c.by, c.out)
			} else {
				c.node.Fn.Place(rows, w.peers, w.ends, c.by, c.out)
			}
			continue
		}
		if err := w.frames(rows, c.node.Frame); err != nil {
			return err
		}
		if c.node.Fn != nil {
			c.node.Fn.Pick(rows, w.lo, w.hi, c.by, c.out)
			continue
		}
		if c.weights != nil {
			c.weights.look(&w.frame, rows, w.lo, w.hi)
		}
		if w.sliders[i] == nil {
			w.sliders[i] = c.sliders.New(c.out)
		}
		if err := w.sliders[i].Slide(rows, w.lo, w.hi, c.out, w.stop); err != nil {
			return r.sink.fault(err, c.node, r.all)
		}
	}
	return nil
}

// sort orders the rows of a partition by the keys; equals stay in their order. It
// reports whether w.words holds the words by which they were put in order last.
func (w *windowWorker) sort(rows []int32) (bool, error) {
	w.words = room(w.words, len(rows))
	words, spare := w.words, w.spare
	for i, row := range rows {
		words[i].row = row
	}
	by := false
	for k := len(w.run.order) - 1; k >= 0; k-- {
		key := w.run.order[k]
		if key.v.Type == column.Null {
			continue
		}
		by = true
		for part := wordsOf(key.v.Type) - 1; part >= 0; part-- {
			if err := w.stop(); err != nil {
				return false, err
			}
			for lo := 0; lo < len(words); lo += cancelRows {
				if err := w.stop(); err != nil {
					return false, err
				}
				key.fill(words[lo:min(lo+cancelRows, len(words))], part, w.run.ranks[k])
			}
			var err error
			if words, spare, err = radixSortUntil(w.stop, words, spare); err != nil {
				return false, err
			}
		}
		if key.v.Valid != nil {
			var err error
			if words, spare, err = nullsToEnd(w.stop, key, words, spare); err != nil {
				return false, err
			}
		}
	}
	for i, x := range words {
		rows[i] = x.row
	}
	w.words, w.spare = words, spare
	return by, nil
}

// equal reports whether two rows are equal in the order.
func (r *windowRun) equal(a, b int32) bool {
	for k, key := range r.order {
		if key.v.Type == column.Null {
			continue
		}
		if none := key.v.IsNull(int(a)); none != key.v.IsNull(int(b)) {
			return false
		} else if none {
			continue
		}
		for part := range wordsOf(key.v.Type) {
			if orderWord(key.v, int(a), part, r.ranks[k]) != orderWord(key.v, int(b), part, r.ranks[k]) {
				return false
			}
		}
	}
	return true
}

// findPeers finds the rows that are equal in the order; without one all are. sorted: the
// words by which they were put in order last are still there. Most rows differ in them,
// and the values lie far apart in memory.
func (w *windowWorker) findPeers(rows []int32, sorted bool) error {
	n := len(rows)
	w.peers, w.ends = room(w.peers, n), room(w.ends, n)
	var words []rowWord
	if sorted {
		words = w.words
	}
	// of one word without NULLs the words say all
	all := words != nil && len(w.run.order) == 1 && w.run.order[0].v.Valid == nil && wordsOf(w.run.order[0].v.Type) == 1
	first := 0
	for k := 1; k <= n; k++ {
		if k&(cancelRows-1) == 0 {
			if err := w.stop(); err != nil {
				return err
			}
		}
		if k < n && (words == nil || words[k-1].word == words[k].word) && (all || w.run.equal(rows[k-1], rows[k])) {
			continue
		}
		for j := first; j < k; j++ {
			w.peers[j], w.ends[j] = int32(first), int32(k)
		}
		first = k
	}
	return nil
}

func (w *windowWorker) frames(rows []int32, f plan.Frame) error {
	w.lo, w.hi = room(w.lo, len(rows)), room(w.hi, len(rows))
	if f.Range {
		if err := w.rangeFrames(rows, f); err != nil {
			return err
		}
	} else {
		rowFrames(w.lo, w.hi, f)
	}
	for k, lo := range w.lo {
		w.hi[k] = max(w.hi[k], lo) // an empty frame
	}
	return w.stop()
}
