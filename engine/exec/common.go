package exec

import (
	"context"
	"sync"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/plan"
)

// commonRows is a common part of a plan, computed when it is first asked for,
// with its indexes.
type commonRows struct {
	mu      sync.Mutex
	was     bool
	table   *column.Table
	err     error
	indexes []*commonIndex
	near    []*nearIndex
}

// commonIndex finds the rows of a common part by keys.
type commonIndex struct {
	keys []expr.Expr
	with []column.Type // of what the keys are compared with
	side *buildSide
}

func (q *queries) common(c *plan.Common) (rows *commonRows, fresh bool) {
	q.mu.Lock()
	defer q.mu.Unlock()
	if q.commons[c] == nil {
		q.commons[c] = &commonRows{}
	}
	return q.commons[c], q.fresh[c]
}

// commonTable computes a common part. Its rows are kept until the end of the run,
// or of the one query that they were made for.
func (r *runner) commonTable(c *plan.Common) (*column.Table, error) {
	q := r.env.queries
	rows, fresh := q.common(c)
	rows.mu.Lock()
	defer rows.mu.Unlock()
	if !rows.was {
		rows.was = true
		in := &runner{env: q.env}
		if fresh {
			in = r
		}
		rows.table, rows.err = in.collect(q.ctx, c.Plan)
	}
	return rows.table, rows.err
}

func (r *runner) openShared(n *plan.Shared) (*pipeline, error) {
	t, err := r.commonTable(n.Common)
	if err != nil {
		return nil, err
	}
	return sourceOnly(newTableSource(r.env, &column.Table{Schema: n.Fields, Cols: t.Cols, N: t.N})), nil
}

// commonSide is the right side of a join, or what a Lookup looks into, where that
// is a common part: its index serves all that ask for the same keys.
func (r *runner) commonSide(ctx context.Context, s *plan.Shared, keys, with []expr.Expr) (*buildSide, error) {
	if _, err := r.commonTable(s.Common); err != nil {
		return nil, err
	}
	rows, _ := r.env.queries.common(s.Common)
	rows.mu.Lock()
	defer rows.mu.Unlock()
	for _, x := range rows.indexes {
		if x.fits(keys, with) {
			return x.side, nil
		}
	}
	view := &plan.Scan{Table: &column.Table{Schema: s.Fields, Cols: rows.table.Cols, N: rows.table.N}, Fields: s.Fields}
	for i := range s.Fields {
		view.Use = append(view.Use, i)
	}
	in := &runner{env: r.env.queries.env}
	side, err := in.buildSide(ctx, &plan.Join{Right: view, LeftKeys: with, RightKeys: keys})
	if err != nil {
		return nil, err
	}
	x := &commonIndex{keys: keys, side: side}
	for _, e := range with {
		x.with = append(x.with, e.Type())
	}
	rows.indexes = append(rows.indexes, x)
	return side, nil
}

func (x *commonIndex) fits(keys, with []expr.Expr) bool {
	if len(keys) != len(x.keys) {
		return false
	}
	for i := range keys {
		if !expr.Equal(keys[i], x.keys[i]) || with[i].Type() != x.with[i] {
			return false
		}
	}
	return true
}

func (r *runner) openLookup(ctx context.Context, n *plan.Lookup) (*pipeline, error) {
	side, err := r.commonSide(ctx, &plan.Shared{Common: n.Common, Fields: n.Fields}, n.Keys, n.Values)
	if err != nil {
		return nil, err
	}
	w := NewWorker(r.env)
	cols, err := scopeOf(nil).evalAll(w, nil, n.Values, &column.Batch{N: 1}, nil)
	if err != nil { // whether a row meets it, the condition above finds out
		return r.openShared(&plan.Shared{Common: n.Common, Fields: n.Fields})
	}
	for i := range cols {
		cols[i] = keyColumn(&cols[i], side.keys.types[i])
	}
	key := []int32{-1}
	newKeyReader(side.keys).find(cols, nil, 1, key)
	s := &lookupSource{table: &column.Table{Schema: n.Fields, Cols: side.table.Cols, N: side.table.N}, env: r.env}
	if k := key[0]; k >= 0 {
		s.rows = side.rows[side.start[k]:side.start[k+1]]
	}
	return sourceOnly(s), nil
}

// lookupSource is some rows of a table.
type lookupSource struct {
	table *column.Table
	rows  []int32
	env   *Env
}

func (s *lookupSource) Schema() column.Schema { return s.table.Schema }

func (s *lookupSource) Chunks() int { return (len(s.rows) + s.env.chunkRows() - 1) / s.env.chunkRows() }

func (s *lookupSource) Read(ctx context.Context, w *Worker, chunk int, emit Emit) error {
	end := min(len(s.rows), (chunk+1)*s.env.chunkRows())
	cols := localOf(w, s, func() *[]column.Vector {
		c := make([]column.Vector, len(s.table.Cols))
		return &c
	})
	for lo := chunk * s.env.chunkRows(); lo < end; lo += s.env.batchRows() {
		if err := ctx.Err(); err != nil {
			return err
		}
		idx := s.rows[lo:min(lo+s.env.batchRows(), end)]
		for i := range *cols {
			gatherInto(&(*cols)[i], &s.table.Cols[i], idx, false)
		}
		w.begin(-1)
		if err := emit(&column.Batch{N: len(idx), Cols: *cols}); err != nil {
			return err
		}
	}
	return nil
}
