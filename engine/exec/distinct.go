package exec

import (
	"context"

	"nearcell/catalog/column"
)

// distinctSink keeps the first of equal rows, in the order of the input.
type distinctSink struct {
	env    *Env
	schema column.Schema
	types  []column.Type
	all    *distinctPart
}

func newDistinctSink(env *Env, schema column.Schema) *distinctSink {
	s := &distinctSink{env: env, schema: schema}
	for _, f := range schema {
		s.types = append(s.types, f.Type)
	}
	return s
}

// distinctPart is the distinct rows of one chunk; row k has key k.
type distinctPart struct {
	keys   *keyTable
	reader *keyReader
	rows   *tableBuilder
	ids    []int32
	fresh  []int32
	kept   int64 // bytes
}

func (s *distinctSink) Part(int) Part {
	p := &distinctPart{keys: newKeyTable(s.types).until(s.env.stop), rows: newTableBuilder(s.env, s.schema)}
	p.reader = newKeyReader(p.keys)
	return p
}

func (p *distinctPart) Consume(_ *Worker, b *column.Batch) error { return p.add(b.Cols, b.On, b.N) }

func (p *distinctPart) add(cols []column.Vector, on []uint64, n int) error {
	p.ids = room(p.ids, n)
	known := int32(p.keys.n)
	p.reader.put(cols, on, n, p.ids)
	// keys are numbered as they come: a new one is the next number
	p.fresh = p.fresh[:0]
	forEachOn(on, n, func(i int) {
		if p.ids[i] == known {
			p.fresh = append(p.fresh, int32(i))
			known++
		}
	})
	if err := p.rows.addRows(cols, p.fresh); err != nil {
		return err
	}
	bytes := int64(len(p.fresh)) * (rowBytes(p.rows.schema) + int64(8*p.keys.width))
	p.kept += bytes
	return p.rows.env.keep(bytes)
}

func (s *distinctSink) Merge(part Part) error {
	p := part.(*distinctPart)
	if s.all == nil {
		s.all = p
		return nil
	}
	t := p.rows.finish()
	s.env.release(p.kept)
	cols := make([]column.Vector, len(t.Cols))
	for lo := 0; lo < t.N; lo += freshRows {
		if err := s.env.stop(); err != nil {
			return err
		}
		hi := min(lo+freshRows, t.N)
		for i := range cols {
			cols[i] = t.Cols[i].Slice(lo, hi)
		}
		if err := s.all.add(cols, nil, hi-lo); err != nil {
			return err
		}
	}
	return nil
}

func (s *distinctSink) Finish(context.Context) (Source, error) {
	if s.all == nil {
		s.all = s.Part(0).(*distinctPart)
	}
	return newTableSource(s.env, s.all.rows.finish()), nil
}
