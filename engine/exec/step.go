package exec

import (
	"context"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
)

// filterStep keeps the rows for which cond is TRUE. It never copies: it hands
// on the same columns under a mask, so that a row keeps its number in the
// batch and the sinks alone pay for moving what is left. A batch of which
// nothing is left is dropped.
type filterStep struct {
	scope
	cond    expr.Expr
	removal *removal // counts what is left out, nil: nobody asks
}

type filterLocal struct {
	on  []uint64
	out column.Batch
}

func (s *filterStep) Run(_ context.Context, w *Worker, b *column.Batch, emit Emit) error {
	l := localOf(w, s, func() *filterLocal { return new(filterLocal) })
	cond, err := s.eval(w, s.cond, b, b.On)
	if err != nil {
		return err
	}
	l.on = trueRows(l.on, &cond, b.On, b.N)
	stayed := column.Count(l.on)
	if err := s.removal.count(s.scope, w, b, stayed); err != nil {
		return err
	}
	switch stayed {
	case 0:
		return nil
	case b.N:
		return emit(b)
	}
	l.out = column.Batch{N: b.N, Cols: b.Cols, On: l.on}
	return emit(&l.out)
}

// projectStep computes the columns of its output for the active rows.
type projectStep struct {
	scope
	exprs []expr.Expr
}

type projectLocal struct {
	out column.Batch
}

func (s *projectStep) Run(_ context.Context, w *Worker, b *column.Batch, emit Emit) error {
	l := localOf(w, s, func() *projectLocal { return new(projectLocal) })
	cols, err := s.evalAll(w, l.out.Cols, s.exprs, b, b.On)
	if err != nil {
		return err
	}
	l.out = column.Batch{N: b.N, Cols: cols, On: b.On}
	return emit(&l.out)
}
