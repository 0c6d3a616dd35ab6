package exec

import (
	"context"
	"errors"
	"math"
	"time"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
)

// buildSide is the right side of a join in memory, its rows grouped by key.
type buildSide struct {
	table *column.Table
	keys  *keyTable // nil: a nested loop
	// rows[start[k]:start[k+1]] are the rows with key k, in their order.
	start, rows []int32
	near        *nearSide // of a nested loop, nil: every pair is looked at
}

// openBuild is the right side of a join.
func (r *runner) openBuild(ctx context.Context, n *plan.Join) (*buildSide, error) {
	if s, ok := n.Right.(*plan.Shared); ok && len(n.RightKeys) > 0 && !n.Guarded {
		return r.commonSide(ctx, s, n.RightKeys, n.LeftKeys)
	}
	side, err := r.buildSide(ctx, n)
	if err == nil || !n.Guarded || !ofRow(err) {
		return side, err
	}
	// a key of the right side cannot be computed: whether a pair meets it, the
	// condition finds out
	c := *n
	c.LeftKeys, c.RightKeys = nil, nil
	return r.buildSide(ctx, &c)
}

// ofRow reports whether an error is that of a row, and not of the run.
func ofRow(err error) bool {
	var p *problem.Problem
	return errors.As(err, &p) && p.Code != "memory" && p.Code != "too-many-rows"
}

// buildSide computes the right side with its keys. Key expressions that read a
// column cost nothing; others are computed beside the columns.
func (r *runner) buildSide(ctx context.Context, n *plan.Join) (*buildSide, error) {
	right := n.Right
	schema := right.Schema()
	at := make([]int, len(n.RightKeys))
	var extra []expr.Expr
	for i, k := range n.RightKeys {
		c, plain := expr.AsColumn(k)
		if !plain {
			c = len(schema) + len(extra)
			extra = append(extra, k)
		}
		at[i] = c
	}
	if len(extra) > 0 {
		p := &plan.Project{Input: right}
		for c, f := range schema {
			p.Exprs = append(p.Exprs, expr.NewColumn(c, f, extra[0].Place()))
			p.Fields = append(p.Fields, f)
		}
		for _, e := range extra {
			p.Exprs = append(p.Exprs, e)
			p.Fields = append(p.Fields, column.Field{Name: e.String(), Type: e.Type(), Unit: e.Unit()})
		}
		right = p
	}
	table, err := r.collect(ctx, right)
	if err != nil {
		return nil, err
	}
	side := &buildSide{table: table}
	if len(at) > 0 {
		m := r.meter(n)
		if m != nil {
			defer m.took(time.Now())
		}
		err = side.index(ctx, r.envOf(m), at, n.LeftKeys)
	}
	side.table = &column.Table{Schema: schema, Cols: table.Cols[:len(schema)], N: table.N}
	if err == nil && n.Near != nil {
		m := r.meter(n)
		if m != nil {
			defer m.took(time.Now())
		}
		err = side.openNear(ctx, r.envOf(m), n.Near)
	}
	return side, err
}

// index groups the rows by the key columns at; rows with a NULL key match
// nothing and are in no group.
func (s *buildSide) index(ctx context.Context, env *Env, at []int, left []expr.Expr) error {
	types := make([]column.Type, len(at))
	for i, c := range at {
		types[i] = s.table.Schema[c].Type
		if left[i].Type() == column.Integer {
			types[i] = column.Integer
		}
	}
	s.keys = newKeyTable(types).until(ctx.Err)
	reader := newKeyReader(s.keys)
	keyOf := large[int32](ctx.Err, s.table.N)
	on := make([]uint64, column.Words(BatchRows))
	cols := make([]column.Vector, len(at))
	for lo := 0; lo < s.table.N; lo += BatchRows {
		if err := ctx.Err(); err != nil {
			return err
		}
		b := s.table.Batch(lo, min(lo+BatchRows, s.table.N))
		mask := on[:column.Words(b.N)]
		column.FillOn(mask, b.N)
		for i, c := range at {
			cols[i] = keyColumn(&b.Cols[c], types[i])
			maskPresent(mask, &cols[i])
		}
		for i := range b.N {
			keyOf[lo+i] = -1
		}
		reader.put(cols, mask, b.N, keyOf[lo:lo+b.N])
	}
	if err := s.group(ctx, keyOf); err != nil {
		return err
	}
	return env.keep(int64(len(keyOf))*8 + s.keys.bytes())
}

// keyColumn is a key as the type of the table's keys. Where an INTEGER meets a
// REAL the keys are integers: a REAL that is none equals no INTEGER and becomes
// NULL, so that nothing is lost beyond 2^53.
func keyColumn(v *column.Vector, t column.Type) column.Vector {
	if v.Type != column.Real || t != column.Integer {
		return *v
	}
	out := column.New(t, nil, v.N)
	for i, f := range v.F[:v.N] {
		if whole := math.Trunc(f); v.IsNull(i) || whole != f || f < -1<<63 || f >= 1<<63 {
			out.SetNull(i)
		} else {
			out.I[i] = int64(f)
		}
	}
	return out
}

// maskPresent clears the rows where v is NULL.
func maskPresent(mask []uint64, v *column.Vector) {
	if v.Type == column.Null {
		clear(mask)
		return
	}
	if v.Valid != nil {
		for i := range mask {
			mask[i] &= v.Valid[i]
		}
	}
}

// group sorts the rows by key, by counting.
func (s *buildSide) group(ctx context.Context, keyOf []int32) error {
	s.start = large[int32](ctx.Err, s.keys.n+1)
	for i, k := range keyOf {
		if i&(freshRows-1) == 0 && ctx.Err() != nil {
			return ctx.Err()
		}
		if k >= 0 {
			s.start[k+1]++
		}
	}
	next := large[int32](ctx.Err, len(s.start))
	for k := 1; k < len(s.start); k++ {
		if k&(freshRows-1) == 0 && ctx.Err() != nil {
			return ctx.Err()
		}
		s.start[k] += s.start[k-1]
		next[k] = s.start[k]
	}
	s.rows = large[int32](ctx.Err, int(s.start[s.keys.n]))
	for row, k := range keyOf {
		if row&(freshRows-1) == 0 && ctx.Err() != nil {
			return ctx.Err()
		}
		if k >= 0 {
			s.rows[next[k]] = int32(row)
			next[k]++
		}
	}
	return nil
}

// joinStep meets the batches of the left side with the right side. Its rows
// come in the order of the left rows, for each of them in that of the right.
type joinStep struct {
	kind      plan.JoinKind
	leftKeys  []expr.Expr
	rest      pairCondition
	whole     *pairCondition // of batches with a key that fails; nil: no key can
	leftScope scope
	right     *buildSide
}

// pairCondition decides pairs. cond is nil where all match.
type pairCondition struct {
	cond  expr.Expr
	reads []bool // which columns it reads
}

func conditionOf(n *plan.Join, cond expr.Expr) pairCondition {
	c := pairCondition{cond, make([]bool, len(n.Both()))}
	expr.Columns(cond, c.reads)
	return c
}

// pairs are rows of the current left batch with rows of the right side; -1
// stands for no row.
type pairs struct {
	left, right []int32
}

func (p *pairs) add(l, r int32) { p.left, p.right = append(p.left, l), append(p.right, r) }

func (p *pairs) reset() { p.left, p.right = p.left[:0], p.right[:0] }

// joinLocal is the state of a worker in a join: pairs that may match
// (candidates, in order; one with right -1 says that a left row has none),
// pairs to hand on, and the left row whose candidates are being looked at.
type joinLocal struct {
	reader    *keyReader
	keys      []int32
	keyCols   []column.Vector
	active    []int32
	maybe     pairs
	out       pairs
	cols      []column.Vector
	batch     column.Batch
	candidate []uint64
	holds     []uint64
	rest      *pairCondition
	keyed     bool // partners are looked up by key
	current   int32
	matched   bool
	wide      []column.Vector // of a unique right side: the left columns as they are, the right ones gathered
	met, stay []uint64        // of a semi or anti join: left rows with a match, rows to hand on
	masked    column.Batch
	near      nearLocal
}

func (s *joinStep) local(w *Worker) *joinLocal {
	return localOf(w, s, func() *joinLocal {
		l := &joinLocal{}
		if s.right.keys != nil {
			l.reader = newKeyReader(s.right.keys)
		}
		return l
	})
}

func (s *joinStep) Run(ctx context.Context, w *Worker, b *column.Batch, emit Emit) error {
	l := s.local(w)
	l.current, l.matched = -1, false
	l.maybe.reset()
	l.out.reset()
	l.rest, l.keyed = &s.rest, s.right.keys != nil
	if l.keyed {
		if err := s.findKeys(w, l, b); err != nil {
			if s.whole == nil || !ofRow(err) {
				return err
			}
			l.rest, l.keyed = s.whole, false
		}
	}
	if s.right.near != nil {
		l.near.begin(s.right.near, s.leftScope, w, b)
	}
	if s.one() {
		return s.runOne(ctx, w, l, b, emit)
	}
	if l.keyed && l.rest.cond == nil {
		if done, err := s.runUnique(ctx, w, l, b, emit); done || err != nil {
			return err
		}
		return s.runKeys(ctx, w, l, b, emit)
	}
	if err := s.walk(ctx, w, l, b, emit); err != nil {
		return err
	}
	s.finishRow(l)
	return s.handOn(ctx, w, l, b, emit)
}

// findKeys finds the keys of the rows of a batch.
func (s *joinStep) findKeys(w *Worker, l *joinLocal, b *column.Batch) error {
	cols, err := s.leftScope.evalAll(w, l.keyCols, s.leftKeys, b, b.On)
	if err != nil {
		return err
	}
	for i := range cols {
		cols[i] = keyColumn(&cols[i], s.right.keys.types[i])
	}
	l.keyCols = cols
	l.keys = room(l.keys, b.N)
	l.reader.find(cols, b.On, b.N, l.keys)
	return nil
}

// walk decides the pairs of all active left rows.
func (s *joinStep) walk(ctx context.Context, w *Worker, l *joinLocal, b *column.Batch, emit Emit) error {
	var err error
	forEachOn(b.On, b.N, func(i int) {
		if err == nil {
			err = s.candidates(ctx, w, l, b, int32(i), emit)
		}
	})
	if err != nil {
		return err
	}
	return s.settle(ctx, w, l, b, emit)
}

// one reports whether the join gives left rows alone, each at most once.
func (s *joinStep) one() bool { return s.kind == plan.Semi || s.kind == plan.Anti }

// runOne gives the left rows with a match, or those without, under a mask as a
// filter does.
func (s *joinStep) runOne(ctx context.Context, w *Worker, l *joinLocal, b *column.Batch, emit Emit) error {
	l.met = bitsFor(l.met, b.N)
	if l.keyed && l.rest.cond == nil {
		forEachOn(b.On, b.N, func(i int) {
			if l.keys[i] >= 0 {
				column.SetBit(l.met, i)
			}
		})
	} else if err := s.walk(ctx, w, l, b, emit); err != nil {
		return err
	}
	l.stay = bitsFor(l.stay, b.N)
	forEachOn(b.On, b.N, func(i int) {
		if column.Bit(l.met, i) == (s.kind == plan.Semi) {
			column.SetBit(l.stay, i)
		}
	})
	switch column.Count(l.stay) {
	case 0:
		return nil
	case b.N:
		return emit(b)
	}
	l.masked = column.Batch{N: b.N, Cols: b.Cols, On: l.stay}
	return emit(&l.masked)
}

// runKeys joins a batch where equal keys are all that is asked.
func (s *joinStep) runKeys(ctx context.Context, w *Worker, l *joinLocal, b *column.Batch, emit Emit) error {
	l.active = activeRows(l.active, b.On, b.N)
	for _, i := range l.active {
		k := l.keys[i]
		if k < 0 {
			if s.kind == plan.Left {
				l.out.add(i, -1)
			}
			continue
		}
		for _, r := range s.right.rows[s.right.start[k]:s.right.start[k+1]] {
			l.out.add(i, r)
			if len(l.out.left) == BatchRows {
				if err := s.handOn(ctx, w, l, b, emit); err != nil {
					return err
				}
			}
		}
	}
	return s.handOn(ctx, w, l, b, emit)
}

// candidates lists the right rows that left row i may match; of a semi or anti
// join no more than it takes to know.
func (s *joinStep) candidates(ctx context.Context, w *Worker, l *joinLocal, b *column.Batch, i int32, emit Emit) error {
	known := func() bool { return s.one() && column.Bit(l.met, int(i)) }
	if s.right.near != nil {
		if err := s.nearCandidates(ctx, w, l, b, i, known, emit); err != nil {
			return err
		}
	} else if !l.keyed {
		if err := s.allCandidates(ctx, w, l, b, i, known, emit); err != nil {
			return err
		}
	} else if k := l.keys[i]; k >= 0 {
		for _, r := range s.right.rows[s.right.start[k]:s.right.start[k+1]] {
			if known() {
				break
			}
			if err := s.candidate(ctx, w, l, b, i, r, emit); err != nil {
				return err
			}
		}
	}
	if s.kind == plan.Left {
		return s.candidate(ctx, w, l, b, i, -1, emit)
	}
	return nil
}

func (s *joinStep) allCandidates(ctx context.Context, w *Worker, l *joinLocal, b *column.Batch, i int32, known func() bool, emit Emit) error {
	for r := int32(0); int(r) < s.right.table.N && !known(); r++ {
		if err := s.candidate(ctx, w, l, b, i, r, emit); err != nil {
			return err
		}
	}
	return nil
}

func (s *joinStep) candidate(ctx context.Context, w *Worker, l *joinLocal, b *column.Batch, i, r int32, emit Emit) error {
	l.maybe.add(i, r)
	if len(l.maybe.left) < BatchRows {
		return nil
	}
	return s.settle(ctx, w, l, b, emit)
}

// settle decides the candidates so far and moves those that match to l.out.
func (s *joinStep) settle(ctx context.Context, w *Worker, l *joinLocal, b *column.Batch, emit Emit) error {
	if err := ctx.Err(); err != nil {
		return err
	}
	if err := s.decide(w, l, b); err != nil {
		return err
	}
	for k, i := range l.maybe.left {
		if i != l.current {
			s.finishRow(l)
			l.current, l.matched = i, false
		}
		if r := l.maybe.right[k]; r >= 0 && (l.rest.cond == nil || column.Bit(l.holds, k)) {
			if s.one() {
				column.SetBit(l.met, int(i))
				continue
			}
			l.matched = true
			l.out.add(i, r)
		}
	}
	l.maybe.reset()
	if len(l.out.left) >= BatchRows {
		return s.handOn(ctx, w, l, b, emit)
	}
	return nil
}

// decide computes the rest of the condition for the candidates into l.holds.
func (s *joinStep) decide(w *Worker, l *joinLocal, b *column.Batch) error {
	n := len(l.maybe.left)
	if l.rest.cond == nil || n == 0 {
		return nil
	}
	s.gather(l, b, &l.maybe, l.rest.reads)
	l.candidate = bitsFor(l.candidate, n)
	for k, r := range l.maybe.right {
		if r >= 0 {
			column.SetBit(l.candidate, k)
		}
	}
	err := w.deeper(&l.batch, func(joined *column.Batch) error {
		holds, err := l.rest.cond.Eval(w.Work(), joined, l.candidate)
		if err == nil {
			l.holds = trueRows(l.holds, &holds, l.candidate, n)
		}
		return err
	})
	if err == nil {
		return nil
	}
	// the row that the user knows is the left one
	var inRow *expr.RowError
	if errors.As(err, &inRow) {
		err = &expr.RowError{Row: int(l.maybe.left[inRow.Row]), Err: inRow.Err}
	}
	return s.leftScope.fault(w, err, l.rest.cond.Place(), b)
}

// finishRow closes the current left row: in a left join it stays without a match.
func (s *joinStep) finishRow(l *joinLocal) {
	if l.current < 0 {
		return
	}
	if !l.matched && s.kind == plan.Left {
		l.out.add(l.current, -1)
	}
	l.current = -1
}

// handOn emits the pairs found so far, in batches.
func (s *joinStep) handOn(ctx context.Context, w *Worker, l *joinLocal, b *column.Batch, emit Emit) error {
	for lo := 0; lo < len(l.out.left); lo += BatchRows {
		if err := ctx.Err(); err != nil {
			return err
		}
		hi := min(lo+BatchRows, len(l.out.left))
		s.gather(l, b, &pairs{l.out.left[lo:hi], l.out.right[lo:hi]}, nil)
		if err := w.deeper(&l.batch, emit); err != nil {
			return err
		}
	}
	l.out.reset()
	return nil
}

// gather makes l.batch the joined rows of the pairs; columns outside of reads,
// where that is not nil, are left without values.
func (s *joinStep) gather(l *joinLocal, b *column.Batch, p *pairs, reads []bool) {
	left, right := b.Cols, s.right.table.Cols
	if l.cols == nil {
		l.cols = make([]column.Vector, len(left)+len(right))
	}
	l.batch = column.Batch{N: len(p.left), Cols: l.cols}
	for c := range l.cols {
		switch {
		case reads != nil && !reads[c]:
			l.cols[c].Type, l.cols[c].N = column.Null, len(p.left)
		case c < len(left):
			gatherInto(&l.cols[c], &left[c], p.left, false)
		default:
			gatherInto(&l.cols[c], &right[c-len(left)], p.right, true)
		}
	}
}
