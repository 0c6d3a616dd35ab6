package exec

import (
	"context"
	"math"
	"slices"
	"sync"
	"weak"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/plan"
	"nearcell/voronoi/index"
)

// Places are the search trees of stored tables that a running program keeps from
// one statement to the next: a few of those that were asked last. It is safe for
// several goroutines.
type Places struct {
	mu   sync.Mutex
	list []*tablePlaces
}

// tablePlaces is the tree of one stored table by one expression for its points.
type tablePlaces struct {
	table weak.Pointer[column.Table]
	nearIndex
}

const mostPlaces = 4

// of is the tree of a table, which may have to be built yet.
func (p *Places) of(t *column.Table, point expr.Expr) *nearIndex {
	p.mu.Lock()
	defer p.mu.Unlock()
	p.list = slices.DeleteFunc(p.list, func(x *tablePlaces) bool { return x.table.Value() == nil })
	for i, x := range p.list {
		if x.table.Value() == t && expr.Equal(x.point, point) {
			p.list = append(slices.Delete(p.list, i, i+1), x)
			return &x.nearIndex
		}
	}
	if len(p.list) == mostPlaces {
		p.list = slices.Delete(p.list, 0, 1)
	}
	x := &tablePlaces{table: weak.Make(t), nearIndex: nearIndex{point: point}}
	p.list = append(p.list, x)
	return &x.nearIndex
}

// nearIndex finds the rows of a table that are nearest to a place. A tree costs as
// much as some scans: it is built when it is asked for once more.
type nearIndex struct {
	point expr.Expr

	mu    sync.Mutex
	asked int
	was   bool
	tree  *index.Tree // nil: a row has no finite place, or there is no memory for it
	rows  []int32     // of the table, by place in the tree's input
}

const (
	scansFirst = 1       // searches that are scans, unless the table is small
	smallNear  = 4 << 10 // rows
	nearBytes  = 64      // of a tree, for each point
)

// search is the tree, nil where a scan will do.
func (x *nearIndex) search(ctx context.Context, env *Env, t *column.Table) (*index.Tree, error) {
	x.mu.Lock()
	defer x.mu.Unlock()
	x.asked++
	if x.was || x.asked <= scansFirst && t.N > smallNear {
		return x.tree, nil
	}
	bytes := nearBytes * int64(t.N)
	if err := env.keep(bytes); err != nil {
		env.release(bytes)
		return nil, nil
	}
	points, err := x.places(ctx, env, t)
	if err != nil {
		env.release(bytes)
		return nil, err
	}
	x.was = true
	if points != nil {
		x.tree = index.New(points)
	}
	return x.tree, nil
}

// places are the points of a table, and x.rows those that have one; none where a
// point is not finite, as what its distance is the expression has to say.
func (x *nearIndex) places(ctx context.Context, env *Env, t *column.Table) ([]index.Vec, error) {
	w, s := NewWorker(env), scopeOf(t.Schema)
	points := make([]index.Vec, 0, t.N)
	x.rows = make([]int32, 0, t.N)
	for lo := 0; lo < t.N; lo += BatchRows {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		b := t.Batch(lo, min(lo+BatchRows, t.N))
		w.begin(int64(lo))
		v, err := s.eval(w, x.point, &b, nil)
		if err != nil {
			return nil, err
		}
		for i := range b.N {
			if v.Type == column.Null || v.IsNull(i) {
				continue
			}
			p := index.Vec{X: v.F[3*i], Y: v.F[3*i+1], Z: v.F[3*i+2]}
			if !finite(p) {
				return nil, nil
			}
			points = append(points, p)
			x.rows = append(x.rows, int32(lo+i))
		}
	}
	return points, nil
}

func finite(p index.Vec) bool { return p.X-p.X == 0 && p.Y-p.Y == 0 && p.Z-p.Z == 0 }

// nearIndexOf is the index of what a Nearest looks through.
func (r *runner) nearIndexOf(n *plan.Nearest, t *column.Table) (*nearIndex, *column.Table) {
	if s, ok := n.Common.Plan.(*plan.Scan); ok && r.env.Places != nil {
		return r.env.Places.of(s.Table, expr.Remap(n.Point, s.Use)), s.Table
	}
	rows, _ := r.env.queries.common(n.Common)
	rows.mu.Lock()
	defer rows.mu.Unlock()
	for _, x := range rows.near {
		if expr.Equal(x.point, n.Point) {
			return x, t
		}
	}
	x := &nearIndex{point: n.Point}
	rows.near = append(rows.near, x)
	return x, t
}

func (r *runner) openNearest(ctx context.Context, n *plan.Nearest) (*pipeline, error) {
	common, err := r.commonTable(n.Common)
	if err != nil {
		return nil, err
	}
	t := &column.Table{Schema: n.Fields, Cols: common.Cols, N: common.N}
	all := sourceOnly(newTableSource(r.env, t))
	if n.Keep != nil {
		all = all.with(&filterStep{scope: scopeOf(n.Fields), cond: n.Keep}, n.Fields)
	}
	w := NewWorker(r.env)
	at, err := scopeOf(nil).eval(w, n.At, &column.Batch{N: 1}, nil)
	if err != nil || at.Type == column.Null || at.IsNull(0) { // whether a row meets it, the step above finds out
		return all, nil
	}
	from := index.Vec{X: at.F[0], Y: at.F[1], Z: at.F[2]}
	x, of := r.nearIndexOf(n, t)
	tree, err := x.search(ctx, r.env.queries.env, of)
	if err != nil {
		return nil, err
	}
	if tree == nil || !finite(from) || n.Most > int64(tree.Len()/4) {
		return all, nil
	}
	s := nearSearch{node: n, table: t, rows: x.rows, w: w}
	s.it.Start(tree, from)
	found, enough, err := s.run(ctx, tree)
	if err != nil && !ofRow(err) {
		return nil, err
	}
	if err != nil || !enough { // rows without a place may be among the first ones
		return all, nil
	}
	slices.Sort(found)
	return sourceOnly(&lookupSource{table: t, rows: found, env: r.env}), nil
}

// nearSearch walks away from a place.
type nearSearch struct {
	node  *plan.Nearest
	table *column.Table
	rows  []int32
	w     *Worker
	it    index.Iterator
}

// Squared distances that differ by less than nearSlack of themselves may be the same
// distance, or change places, by rounding; beneath nearLeast they lose digits.
const (
	nearSlack = 1 + 1e-12
	nearLeast = 1e-280
)

// run is the rows that can be among the first ones; enough: there are that many.
func (s *nearSearch) run(ctx context.Context, tree *index.Tree) (found []int32, enough bool, err error) {
	reach := math.Inf(1)
	var batch, kept []int32
	var far []float64
	for size := int(2 * min(s.node.Most, BatchRows)); ; size = min(2*size, BatchRows) {
		if err := ctx.Err(); err != nil {
			return nil, false, err
		}
		batch, far = batch[:0], far[:0]
		for len(batch) < size {
			p, more := s.it.Next()
			if !more || p.Dist2 > reach {
				break
			}
			batch = append(batch, s.rows[tree.Original(p.Point)])
			far = append(far, p.Dist2)
		}
		if kept, err = s.keep(kept[:0], batch); err != nil {
			return nil, false, err
		}
		for _, k := range kept {
			if far[k] > reach {
				break
			}
			found = append(found, batch[k])
			if int64(len(found)) == s.node.Most {
				reach = max(float64(far[k]*nearSlack), nearLeast)
			}
		}
		if len(batch) < size {
			return found, int64(len(found)) >= s.node.Most, nil
		}
	}
}

// keep is the places in rows of those for which the condition holds.
func (s *nearSearch) keep(out, rows []int32) ([]int32, error) {
	if s.node.Keep == nil {
		for k := range rows {
			out = append(out, int32(k))
		}
		return out, nil
	}
	if len(rows) == 0 {
		return out, nil
	}
	used := make([]bool, len(s.table.Cols))
	expr.Columns(s.node.Keep, used)
	b := &column.Batch{N: len(rows), Cols: make([]column.Vector, len(s.table.Cols))}
	for c := range b.Cols {
		if used[c] {
			gatherInto(&b.Cols[c], &s.table.Cols[c], rows, false)
		} else {
			b.Cols[c] = column.Vector{Type: column.Null, N: len(rows)}
		}
	}
	s.w.begin(-1)
	holds, err := scopeOf(s.table.Schema).eval(s.w, s.node.Keep, b, nil)
	if err != nil {
		return nil, err
	}
	return activeRows(out, trueRows(nil, &holds, nil, b.N), b.N), nil
}
