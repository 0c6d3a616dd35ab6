package exec

import (
	"context"
	"sync"

	"nearcell/catalog/column"
	"nearcell/engine/plan"
)

// limitSink passes so many rows after so many others and stops what feeds it
// as soon as it has them, so that a relation computes no further cells.
type limitSink struct {
	env    *Env
	node   *plan.Limit
	schema column.Schema
	all    *tableBuilder

	mu     sync.Mutex
	merged int   // chunks
	rows   int64 // of merged chunks, offset included
}

func newLimitSink(env *Env, n *plan.Limit) *limitSink {
	schema := n.Input.Schema()
	return &limitSink{env: env, node: n, schema: schema, all: newTableBuilder(env, schema)}
}

// end is the number of rows after which no more is wanted, -1: no end.
func (s *limitSink) end() int64 {
	if s.node.Count < 0 {
		return -1
	}
	return s.node.Offset + s.node.Count
}

// limitPart keeps the rows of one chunk that may be wanted: where all chunks
// before it are merged it knows where it stands, else it keeps all up to the end.
type limitPart struct {
	sink *limitSink
	kept *tableBuilder
	skip int64 // rows still to pass over, of those that are known to be in front
	left int64 // rows still wanted, -1: no end
	took int64 // rows seen
	idx  []int32
}

func (s *limitSink) Part(chunk int) Part {
	s.mu.Lock()
	defer s.mu.Unlock()
	p := &limitPart{sink: s, kept: newTableBuilder(s.env, s.schema), left: s.end()}
	if chunk == s.merged {
		p.skip = max(0, s.node.Offset-s.rows)
		if p.left >= 0 {
			p.left = max(0, p.left-s.rows)
		}
	}
	return p
}

func (p *limitPart) Consume(_ *Worker, b *column.Batch) error {
	p.idx = activeRows(p.idx, b.On, b.N)
	idx := p.idx
	if p.left >= 0 && int64(len(idx)) > p.left-p.took {
		idx = idx[:p.left-p.took]
	}
	p.took += int64(len(idx))
	if pass := min(p.skip, int64(len(idx))); pass > 0 {
		p.skip -= pass
		idx = idx[pass:]
	}
	if err := p.kept.addRows(b.Cols, idx); err != nil {
		return err
	}
	if err := p.sink.env.keep(int64(len(idx)) * rowBytes(p.sink.schema)); err != nil {
		return err
	}
	if p.left >= 0 && p.took >= p.left {
		return errEnough
	}
	return nil
}

func (s *limitSink) Merge(part Part) error {
	s.mu.Lock()
	defer s.mu.Unlock()
	p := part.(*limitPart)
	t := p.kept.finish()
	// the part holds the last t.N of the rows that it took
	lo := max(0, s.node.Offset-s.rows-(p.took-int64(t.N)))
	hi := int64(t.N)
	if end := s.end(); end >= 0 {
		hi = min(hi, max(lo, end-s.rows-(p.took-int64(t.N))))
	}
	if lo < hi {
		idx := make([]int32, 0, hi-lo)
		for i := lo; i < hi; i++ {
			idx = append(idx, int32(i))
		}
		if err := s.all.addRows(t.Cols, idx); err != nil {
			return err
		}
	}
	s.merged++
	s.rows += p.took
	if end := s.end(); end >= 0 && s.rows >= end {
		return errEnough
	}
	return nil
}

func (s *limitSink) Finish(context.Context) (Source, error) {
	return newTableSource(s.env, s.all.finish()), nil
}

// inOrder makes one worker take the chunks in order: what lies behind the end
// is then never computed.
func (s *limitSink) inOrder() {}
