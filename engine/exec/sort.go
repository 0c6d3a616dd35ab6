package exec

import (
	"context"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/plan"
)

// sortSink orders all rows by keys that are columns or are kept beside them. With a top
// it forgets, chunk by chunk, the rows that cannot be among the first ones.
type sortSink struct {
	env    *Env
	node   *plan.Sort
	schema column.Schema // of the input
	keyed  column.Schema // with the computed keys behind
	keyAt  []int         // column of each key in keyed
	scope
	parts []*column.Table // sorted where there is a top
	rows  int             // of parts
	bound *topBound       // where there is a top
}

func newSortSink(env *Env, n *plan.Sort) *sortSink {
	s := &sortSink{env: env, node: n, schema: n.Input.Schema()}
	s.scope = scopeOf(s.schema)
	s.keyed = append(s.keyed, s.schema...)
	for _, k := range n.Keys {
		at, plain := expr.AsColumn(k.Expr)
		if !plain {
			at = len(s.keyed)
			s.keyed = append(s.keyed, column.Field{Type: k.Expr.Type()})
		}
		s.keyAt = append(s.keyAt, at)
	}
	if n.Top > 0 && len(n.Keys) > 0 {
		s.bound = &topBound{key: n.Keys[0]}
	}
	return s
}

type sortPart struct {
	sink *sortSink
	rows *tableBuilder
	cols []column.Vector
	on   []uint64
}

func (s *sortSink) Part(int) Part {
	return &sortPart{sink: s, rows: newTableBuilder(s.env, s.keyed)}
}

func (p *sortPart) Consume(w *Worker, b *column.Batch) error {
	p.cols = append(p.cols[:0], b.Cols...)
	for i, k := range p.sink.node.Keys {
		if p.sink.keyAt[i] < len(p.sink.schema) {
			continue
		}
		v, err := p.sink.eval(w, k.Expr, b, b.On)
		if err != nil {
			return err
		}
		p.cols = append(p.cols, v)
	}
	on := b.On
	if bound := p.sink.bound; bound != nil {
		p.on = room(p.on, column.Words(b.N))
		on = bound.within(p.on, &p.cols[p.sink.keyAt[0]], b.On, b.N)
		if !anyOn(on, b.N) {
			return nil
		}
	}
	if err := p.rows.add(p.cols, on, b.N); err != nil {
		return err
	}
	if p.sink.worthCutting(p.rows.n) {
		first, err := p.sink.first(p.rows.finish())
		if err != nil {
			return err
		}
		p.rows = newTableBuilder(p.sink.env, p.sink.keyed)
		return p.rows.addAll(first.Cols, first.N)
	}
	return nil
}

// worthCutting reports whether so many rows are so many more than the top that
// putting them in order costs little for each of those that came since.
func (s *sortSink) worthCutting(rows int) bool {
	return s.node.Top > 0 && int64(rows) > 2*s.node.Top+int64(s.env.batchRows())
}

// first is the rows of t that are among the first Top ones, in their order.
// Without a top, and where there are no more, it is t as it is.
func (s *sortSink) first(t *column.Table) (*column.Table, error) {
	if s.node.Top <= 0 || int64(t.N) <= s.node.Top {
		return t, nil
	}
	s.env.release((int64(t.N) - s.node.Top) * rowBytes(s.keyed))
	order, err := s.order(s.env.stop, t)
	if err != nil {
		return nil, err
	}
	first, err := gatherTable(s.env.stop, t, order[:s.node.Top])
	if err != nil {
		return nil, err
	}
	if s.bound != nil {
		s.bound.tighten(&first.Cols[s.keyAt[0]], first.N-1)
	}
	return first, nil
}

func (s *sortSink) order(stop func() error, t *column.Table) ([]int32, error) {
	keys := make([]orderKey, len(s.node.Keys))
	for i, k := range s.node.Keys {
		keys[i] = orderKey{&t.Cols[s.keyAt[i]], k.Descending, k.NullsFirst}
	}
	return argsort(stop, keys, t.N)
}

// Merge appends a part. Parts come in the order of their chunks and the sort is
// stable, so that rows with equal keys stay in the order of the input.
func (s *sortSink) Merge(p Part) error {
	rows := p.(*sortPart).rows
	if rows.n == 0 {
		return nil
	}
	part, err := s.first(rows.finish())
	if err != nil {
		return err
	}
	s.parts = append(s.parts, part)
	s.rows += part.N
	if !s.worthCutting(s.rows) {
		return nil
	}
	all, err := joined(s.env.stop, s.env, s.keyed, s.parts)
	if err != nil {
		return err
	}
	if all, err = s.first(all); err != nil {
		return err
	}
	s.parts = []*column.Table{all}
	s.rows = s.parts[0].N
	return nil
}

func (s *sortSink) Finish(ctx context.Context) (Source, error) {
	all, err := joined(ctx.Err, s.env, s.keyed, s.parts)
	if err != nil {
		return nil, err
	}
	idx, err := s.order(ctx.Err, all)
	if err != nil {
		return nil, err
	}
	if s.node.Top > 0 && int64(len(idx)) > s.node.Top {
		idx = idx[:s.node.Top]
	}
	visible := &column.Table{Schema: s.schema, Cols: all.Cols[:len(s.schema)], N: all.N}
	out, err := gatherTable(ctx.Err, visible, idx)
	if err != nil {
		return nil, err
	}
	return newTableSource(s.env, out), nil
}
