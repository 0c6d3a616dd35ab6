package exec

import (
	"context"
	"sync/atomic"
	"time"

	"nearcell/catalog/column"
	"nearcell/engine/plan"
	"nearcell/engine/relation"
)

// Measured counts what the steps of one plan do while it runs. It is made for a
// plan in which no node stands twice (plan.Apart) and serves one run.
//
// Nothing of it is there unless Env.Measured is set: then each step is put into
// a meter, which looks at the clock twice a batch.
type Measured struct {
	meters map[plan.Node]*meter
}

// Count is what a step did. Time is its own, without that of its inputs: the
// time of all workers together, but of geometry, which has its own threads, by
// the clock. Bytes is the most that it kept at a time: rows, keys, groups, and
// of a relation its sites and what its diagrams grew by.
type Count struct {
	Ran      bool
	Rows     int64
	Time     time.Duration
	Bytes    int64
	Geometry *GeometryCount // of a relation that ran
}

// GeometryCount is what a relation took from its diagrams.
type GeometryCount struct {
	Cells int64 // computed, for measures and for contacts
}

// NewMeasured starts the counts of a plan, of its common parts and of the queries
// in its expressions that are computed once. Those that are computed for many rows
// outside are not counted step by step: their time is that of the step that asks.
func NewMeasured(n plan.Node) *Measured {
	m := &Measured{meters: map[plan.Node]*meter{}}
	m.add(n, nil)
	return m
}

func (m *Measured) add(n plan.Node, above *meter) {
	if m.meters[n] != nil {
		return // a common part that is used again
	}
	x := &meter{above: above}
	if _, nothing := n.(*plan.One); !nothing { // single rows are one node all over the plan
		m.meters[n] = x
	}
	for _, in := range n.Inputs() {
		m.add(in, x)
	}
	for _, q := range plan.QueriesOf(n) {
		if len(q.Outer) == 0 {
			m.add(q.Query.(*plan.Query).Plan, nil)
		}
	}
	if c := plan.CommonOf(n); c != nil {
		m.add(c.Plan, nil)
	}
}

// Of is the count of a node; of one that is not counted it is zero.
func (m *Measured) Of(n plan.Node) Count {
	if _, nothing := n.(*plan.One); nothing {
		return Count{Ran: true, Rows: 1}
	}
	x := m.meters[n]
	if x == nil {
		return Count{}
	}
	return Count{
		Ran: x.ran.Load(), Rows: x.rows.Load(), Time: time.Duration(x.time.Load()), Bytes: x.most.Load(), Geometry: x.geometry,
	}
}

// meter is the counters of one node. All its methods may be called of nil, when
// nobody asked.
type meter struct {
	above      *meter // of the node that takes the rows
	ran        atomic.Bool
	rows, time atomic.Int64
	kept, most atomic.Int64 // bytes
	geometry   *GeometryCount
}

// meter is that of a node, nil where nobody asked or the node is no part of the
// plan but of how it runs.
func (r *runner) meter(n plan.Node) *meter {
	if r.env.Measured == nil {
		return nil
	}
	return r.env.Measured.meters[n]
}

// above is the meter of the node that takes the rows of n.
func (r *runner) above(n plan.Node) *meter {
	if m := r.meter(n); m != nil {
		return m.above
	}
	return nil
}

// keep counts bytes, less where they are given back.
func (m *meter) keep(bytes int64) {
	kept := m.kept.Add(bytes)
	for {
		most := m.most.Load()
		if kept <= most || m.most.CompareAndSwap(most, kept) {
			return
		}
	}
}

// took counts the time since start. It is for what has no worker.
func (m *meter) took(start time.Time) {
	if m != nil {
		m.time.Add(int64(time.Since(start)))
	}
}

// count counts the active rows of a batch.
func (m *meter) count(b *column.Batch) { m.rows.Add(int64(countOn(b.On, b.N))) }

// watch is the clock of a worker: whatever time passes is that of one meter.
type watch struct {
	of    *meter
	since time.Time
}

// turn gives the time so far to the meter that was on and turns to another.
func (c *watch) turn(to *meter) (before *meter) {
	before = c.of
	now := time.Now()
	if before != nil {
		before.time.Add(int64(now.Sub(c.since)))
	}
	c.of, c.since = to, now
	return before
}

// merge merges a part in the midst of a stream. A meter around the sink counts
// the time, so that the worker's clock must not.
func (w *Worker) merge(sink Sink, p Part) error {
	if w.Env.Measured == nil {
		return sink.Merge(p)
	}
	before := w.watch.turn(nil)
	defer w.watch.turn(before)
	return sink.Merge(p)
}

// envOf is the environment in which a node keeps what it keeps.
func (r *runner) envOf(m *meter) *Env {
	if m == nil {
		return r.env
	}
	e := r.env
	return &Env{Env: e.Env, Memory: e.Memory, Places: e.Places, Measured: e.Measured, chunk: e.chunk, batch: e.batch, whole: e, holder: m, queries: e.queries}
}

// metered puts the meter of a node around what opens it: its source where it
// has no step, else its last step.
func (p *pipeline) metered(m *meter) *pipeline {
	m.ran.Store(true)
	out := *p
	if last := len(p.steps) - 1; last >= 0 {
		out.steps = append(append([]Step(nil), p.steps[:last]...), &meteredStep{p.steps[last], m})
	} else {
		out.source = &meteredSource{p.source, m}
	}
	return &out
}

type meteredStep struct {
	step Step
	m    *meter
}

func (s *meteredStep) Run(ctx context.Context, w *Worker, b *column.Batch, emit Emit) error {
	before := w.watch.turn(s.m)
	err := s.step.Run(ctx, w, b, func(b *column.Batch) error {
		s.m.count(b)
		w.watch.turn(s.m.above)
		err := emit(b)
		w.watch.turn(s.m)
		return err
	})
	w.watch.turn(before)
	return err
}

type meteredSource struct {
	source Source
	m      *meter
}

func (s *meteredSource) Schema() column.Schema { return s.source.Schema() }

func (s *meteredSource) Chunks() int { return s.source.Chunks() }

func (s *meteredSource) Read(ctx context.Context, w *Worker, chunk int, emit Emit) error {
	before := w.watch.turn(s.m)
	err := s.source.Read(ctx, w, chunk, func(b *column.Batch) error {
		s.m.count(b)
		w.watch.turn(s.m.above)
		err := emit(b)
		w.watch.turn(s.m)
		return err
	})
	w.watch.turn(before)
	return err
}

// asTable is the table that a source lies in, nil where it does not. Whoever
// takes it whole takes all its rows.
func asTable(s Source) *column.Table {
	if x, ok := s.(*meteredSource); ok {
		t := asTable(x.source)
		if t != nil {
			x.m.rows.Add(int64(t.N))
		}
		return t
	}
	if x, ok := s.(*tableSource); ok {
		return x.table
	}
	return nil
}

// meteredSink counts the time of merging and finishing, which no worker's
// clock does.
type meteredSink struct {
	Sink
	m *meter
}

func (s *meteredSink) Merge(p Part) error {
	defer s.m.took(time.Now())
	return s.Sink.Merge(p)
}

func (s *meteredSink) Finish(ctx context.Context) (Source, error) {
	defer s.m.took(time.Now())
	return s.Sink.Finish(ctx)
}

// meteredInOrder is a meteredSink around an inOrderSink.
type meteredInOrder struct{ meteredSink }

func (*meteredInOrder) inOrder() {}

// around puts a meter around a sink, if there is one.
func (m *meter) around(s Sink) Sink {
	if m == nil {
		return s
	}
	if _, ordered := s.(inOrderSink); ordered {
		return &meteredInOrder{meteredSink{s, m}}
	}
	return &meteredSink{s, m}
}

// meteredRows counts the work of a relation by what its store of diagrams did
// meanwhile.
type meteredRows struct {
	relation.Rows
	env *Env
	m   *meter
}

func (s *meteredRows) Run(ctx context.Context, emit func(*column.Batch) error) error {
	if s.env.Diagrams == nil {
		return s.Rows.Run(ctx, emit)
	}
	before := s.env.Diagrams.Stats()
	err := s.Rows.Run(ctx, emit)
	after := s.env.Diagrams.Stats()
	s.m.geometry = &GeometryCount{
		Cells: after.Cells - before.Cells + after.Contacts - before.Contacts,
	}
	s.m.keep(max(0, after.Bytes-before.Bytes))
	return err
}
