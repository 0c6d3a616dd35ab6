package exec

import (
	"context"
	"slices"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/plan"
	"nearcell/voronoi/index"
)

// nearSide is the right side of a join that is bounded by a distance.
type nearSide struct {
	by   *plan.Near
	tree *index.Tree
	rows []int32 // of the right side, by place in the tree's input
	far  float64 // that any right row reaches, where these bound the pairs
}

// openNear gives the right side its tree; none where a point of it is not finite, or
// where there is no memory for it.
func (s *buildSide) openNear(ctx context.Context, env *Env, by *plan.Near) error {
	bytes := nearBytes * int64(s.table.N)
	if err := env.keep(bytes); err != nil {
		env.release(bytes)
		return nil
	}
	x := &nearIndex{point: by.Right}
	reach := 0.0
	if by.OfRight {
		var err error
		if reach, err = s.farthest(ctx, env, by.Within); err != nil || reach-reach != 0 {
			return ctx.Err() // all pairs stay
		}
	}
	points, err := x.places(ctx, env, s.table)
	if err == nil && points != nil {
		s.near = &nearSide{by, index.New(points), x.rows, reach}
	}
	return err
}

// farthest is the largest value of an expression over the right side, -1 without any.
func (s *buildSide) farthest(ctx context.Context, env *Env, within expr.Expr) (float64, error) {
	w, in := NewWorker(env), scopeOf(s.table.Schema)
	far := -1.0
	for lo := 0; lo < s.table.N; lo += BatchRows {
		if err := ctx.Err(); err != nil {
			return 0, err
		}
		b := s.table.Batch(lo, min(lo+BatchRows, s.table.N))
		w.begin(int64(lo))
		v, err := in.eval(w, within, &b, nil)
		if err != nil {
			return 0, err
		}
		for i := range b.N {
			if v.Type == column.Null || v.IsNull(i) {
				continue
			}
			if v.Type == column.Real {
				far = max(far, v.F[i])
			} else {
				far = max(far, float64(v.I[i]))
			}
		}
	}
	return far, nil
}

// nearLocal is what a worker knows of the left rows of a batch.
type nearLocal struct {
	it     index.Iterator
	all    bool // the bound cannot be computed: every pair is a candidate
	points column.Vector
	within column.Vector
	rows   []int32
}

// begin computes the bounds of a batch.
func (l *nearLocal) begin(s *nearSide, in scope, w *Worker, b *column.Batch) {
	points, err := in.eval(w, s.by.Left, b, b.On)
	if err == nil && !s.by.OfRight {
		l.within, err = in.eval(w, s.by.Within, b, b.On)
	}
	l.points, l.all = points, err != nil
}

// candidates are the right rows that left row i may match, in their order; false where
// all of them are.
func (l *nearLocal) candidates(s *nearSide, i int32) ([]int32, bool) {
	if l.all {
		return nil, false
	}
	if l.points.Type == column.Null || l.points.IsNull(int(i)) {
		return nil, true
	}
	within, some := s.far, true
	if !s.by.OfRight {
		within, some = reachOf(&l.within, i)
	}
	if !some {
		return nil, true
	}
	p := index.Vec{X: l.points.F[3*i], Y: l.points.F[3*i+1], Z: l.points.F[3*i+2]}
	if !finite(p) {
		return nil, false
	}
	if within < 0 {
		return nil, true
	}
	reach := max(float64(within*within*nearSlack), nearLeast)
	l.rows = l.rows[:0]
	for l.it.Start(s.tree, p); ; {
		q, more := l.it.Next()
		if !more || q.Dist2 > reach {
			break
		}
		l.rows = append(l.rows, s.rows[s.tree.Original(q.Point)])
	}
	slices.Sort(l.rows)
	return l.rows, true
}

// reachOf is the bound of row i; some: there is one.
func reachOf(within *column.Vector, i int32) (far float64, some bool) {
	switch {
	case within.Type == column.Null || within.IsNull(int(i)):
		return 0, false
	case within.Type == column.Real:
		return within.F[i], true
	}
	return float64(within.I[i]), true
}

// nearCandidates hands on the candidates of left row i.
func (s *joinStep) nearCandidates(ctx context.Context, w *Worker, l *joinLocal, b *column.Batch, i int32, known func() bool, emit Emit) error {
	rows, bounded := l.near.candidates(s.right.near, i)
	if !bounded {
		return s.allCandidates(ctx, w, l, b, i, known, emit)
	}
	for _, r := range rows {
		if known() {
			return nil
		}
		if err := s.candidate(ctx, w, l, b, i, r, emit); err != nil {
			return err
		}
	}
	return nil
}
