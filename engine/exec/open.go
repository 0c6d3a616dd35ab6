package exec

import (
	"context"
	"fmt"
	"time"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/plan"
	"nearcell/engine/relation"
)

// open gives the pipeline whose rows are those of a node. What a node needs as
// a whole (the groups of an aggregate, the right side of a join, the sites of a
// relation) is computed here, before the first row comes out.
func (r *runner) open(ctx context.Context, n plan.Node) (*pipeline, error) {
	p, err := r.openNode(ctx, n)
	err = blame(err, n)
	if m := r.meter(n); m != nil && err == nil {
		return p.metered(m), nil
	}
	return p, err
}

func (r *runner) openNode(ctx context.Context, n plan.Node) (*pipeline, error) {
	switch n := n.(type) {
	case *plan.One:
		return sourceOnly(newTableSource(r.env, &column.Table{N: 1})), nil
	case *plan.Values:
		return r.openValues(n)
	case *plan.Scan:
		return sourceOnly(newTableSource(r.env, scanned(n))), nil
	case *plan.Relation:
		return r.openRelation(ctx, n)
	case *plan.Filter:
		p, err := r.open(ctx, n.Input)
		if err != nil {
			return nil, err
		}
		return p.with(&filterStep{scopeOf(p.schema), n.Cond, r.removals[n]}, p.schema), nil
	case *plan.Project:
		p, err := r.open(ctx, n.Input)
		if err != nil {
			return nil, err
		}
		return p.with(&projectStep{scopeOf(p.schema), n.Exprs}, n.Fields), nil
	case *plan.Join:
		return r.openJoin(ctx, n)
	case *plan.Interpolate:
		return r.openInterpolate(ctx, n)
	case *plan.Union:
		return r.openUnion(ctx, n)
	case *plan.Matched:
		return r.openMatched(ctx, n)
	case *plan.Number:
		return r.openNumber(ctx, n)
	case *plan.Shared:
		return r.openShared(n)
	case *plan.Nearest:
		return r.openNearest(ctx, n)
	case *plan.Lookup:
		return r.openLookup(ctx, n)
	}
	return r.openSink(ctx, n)
}

// openSink runs the nodes that give nothing before they have seen everything.
func (r *runner) openSink(ctx context.Context, n plan.Node) (*pipeline, error) {
	var sink Sink
	m := r.meter(n)
	env := r.envOf(m)
	switch n := n.(type) {
	case *plan.Aggregate:
		s, err := newAggregateSink(env, n)
		if err != nil {
			return nil, err
		}
		s.watch = r.watch(n)
		sink = s
	case *plan.Window:
		s := newWindowSink(env, n)
		s.watch = r.watchWindow(n)
		sink = s
	case *plan.Sort:
		sink = newSortSink(env, n)
	case *plan.Limit:
		if n.Count == 0 { // asked for the columns alone
			return sourceOnly(newTableSource(r.env, newTableBuilder(env, n.Schema()).finish())), nil
		}
		sink = newLimitSink(env, n)
	case *plan.Distinct:
		sink = newDistinctSink(env, n.Input.Schema())
	default:
		return nil, fmt.Errorf("exec: no way to run a %T", n)
	}
	p, err := r.open(ctx, n.Inputs()[0])
	if err != nil {
		return nil, err
	}
	src, done, err := ofTable(ctx, p, sink, m)
	if !done && err == nil {
		src, err = p.into(ctx, NewWorker(r.env), m.around(sink))
	}
	if err != nil {
		return nil, err
	}
	return sourceOnly(src), nil
}

// ofTable gives a sink that would copy all rows of a table as they lie the table
// itself; false where it is none or something is to be computed for them.
func ofTable(ctx context.Context, p *pipeline, sink Sink, m *meter) (Source, bool, error) {
	if len(p.steps) > 0 {
		return nil, false, nil
	}
	var take func(*column.Table) error
	switch s := sink.(type) {
	case *windowSink:
		if len(s.keyed) == len(s.schema) {
			take = func(t *column.Table) error {
				s.parts = []*column.Table{t}
				return nil
			}
		}
	case *sortSink:
		if len(s.keyed) == len(s.schema) && s.node.Top == 0 {
			take = func(t *column.Table) error {
				s.parts, s.rows = []*column.Table{t}, t.N
				return s.env.keep(int64(t.N) * rowBytes(s.schema)) // in their order they are a copy
			}
		}
	}
	if take == nil {
		return nil, false, nil
	}
	t := asTable(p.source)
	if t == nil {
		return nil, false, nil
	}
	if err := take(t); err != nil {
		return nil, true, err
	}
	src, err := m.around(sink).Finish(ctx)
	return src, true, err
}

func sourceOnly(s Source) *pipeline { return &pipeline{source: s, schema: s.Schema()} }

// scanned is the columns in use of a table, as views.
func scanned(n *plan.Scan) *column.Table {
	t := &column.Table{Schema: n.Fields, N: n.Table.N, Cols: make([]column.Vector, len(n.Use))}
	for i, c := range n.Use {
		t.Cols[i] = n.Table.Cols[c]
		t.Cols[i].Unit = n.Fields[i].Unit
	}
	return t
}

func (r *runner) openValues(n *plan.Values) (*pipeline, error) {
	w := NewWorker(r.env)
	one := &column.Batch{N: 1}
	builders := make([]*column.Builder, len(n.Fields))
	for i, f := range n.Fields {
		builders[i] = column.NewBuilder(f.Type, f.Unit)
	}
	none := scopeOf(nil)
	for _, row := range n.Rows {
		for i, e := range row {
			v, err := none.eval(w, e, one, nil)
			if err != nil {
				return nil, err
			}
			builders[i].Append(v.Value(0))
		}
		w.begin(0)
	}
	t := &column.Table{Schema: n.Fields, N: len(n.Rows), Cols: make([]column.Vector, len(n.Fields))}
	for i, b := range builders {
		t.Cols[i] = b.Finish()
	}
	return sourceOnly(newTableSource(r.env, t)), nil
}

func (r *runner) openJoin(ctx context.Context, n *plan.Join) (*pipeline, error) {
	right, err := r.openBuild(ctx, n)
	if err != nil {
		return nil, err
	}
	left, err := r.open(ctx, n.Left)
	if err != nil {
		return nil, err
	}
	step := &joinStep{kind: n.Kind, leftKeys: n.LeftKeys, leftScope: scopeOf(left.schema), right: right}
	step.rest = conditionOf(n, n.Rest)
	if n.Guarded {
		whole := conditionOf(n, n.Whole)
		step.whole = &whole
		if right.keys == nil {
			step.rest = whole
		}
	}
	return left.with(step, n.Schema()), nil
}

func (r *runner) openUnion(ctx context.Context, n *plan.Union) (*pipeline, error) {
	s := &unionSource{schema: n.Fields}
	for _, in := range n.Parts {
		p, err := r.open(ctx, in)
		if err != nil {
			return nil, err
		}
		s.parts = append(s.parts, p)
	}
	return sourceOnly(s), nil
}

// openRelation opens the relation over its sites.
func (r *runner) openRelation(ctx context.Context, n *plan.Relation) (*pipeline, error) {
	o, err := r.openSites(ctx, n)
	if err != nil {
		return nil, err
	}
	shown := r.shown[n]
	if shown != nil {
		shown.countParts(n, o.sites, o.wanted)
	}
	if err := r.divided(ctx, n, o); err != nil {
		return nil, err
	}
	if m := r.meter(n); m != nil {
		o.rows = &meteredRows{o.rows, r.env, m}
	}
	return sourceOnly(&rowSource{node: n, rows: o.rows, schema: n.Schema(), shown: shown}), nil
}

// overSites is a relation opened over its sites.
type overSites struct {
	rows   relation.Rows
	sites  *column.Table
	wanted []uint64 // which of them are shown, nil: all
}

// openSites collects the sites and decides which of them are shown; which
// partition is the relation's business.
func (r *runner) openSites(ctx context.Context, n *plan.Relation) (overSites, error) {
	sites, err := r.collect(ctx, n.Input)
	if err != nil {
		return overSites{}, err
	}
	beside := make([]*column.Table, len(n.Beside))
	for i, in := range n.Beside {
		if beside[i], err = r.collect(ctx, in); err != nil {
			return overSites{}, err
		}
	}
	if m := r.meter(n); m != nil {
		defer m.took(time.Now())
	}
	need := n.Need
	if need == nil {
		need = make([]bool, len(n.Bound.Columns))
		for i := range need {
			need[i] = true
		}
	}
	if err := r.envOf(r.meter(n)).keep(n.Bound.Holds(sites.N, need)); err != nil {
		return overSites{}, err
	}
	wanted, err := r.wanted(ctx, n, sites)
	if err != nil {
		return overSites{}, err
	}
	env := r.env.Env
	env.Keep = r.envOf(r.meter(n)).keep
	rows, err := n.Bound.Def.Open(n.Bound, &env, sites, relation.Request{Need: need, Wanted: wanted, Beside: beside, Most: n.Most, Also: n.Also})
	return overSites{rows, sites, wanted}, placed(err, n)
}

// wanted is the set of sites for which the pushed-down condition is TRUE.
func (r *runner) wanted(ctx context.Context, n *plan.Relation, sites *column.Table) ([]uint64, error) {
	if n.Wanted == nil {
		return nil, nil
	}
	w := NewWorker(r.env)
	s := scopeOf(sites.Schema)
	return trueOf(ctx, w, s, n.Wanted, sites, func(b *column.Batch, on []uint64) error {
		return r.removals[n].count(s, w, b, column.Count(on))
	})
}

// trueOf are the rows of a table for which a condition is TRUE; each, where it is not nil,
// is told of those of every batch.
func trueOf(ctx context.Context, w *Worker, s scope, cond expr.Expr, t *column.Table, each func(b *column.Batch, on []uint64) error) ([]uint64, error) {
	rows := make([]uint64, column.Words(t.N))
	var on []uint64
	for lo := 0; lo < t.N; lo += BatchRows {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		b := t.Batch(lo, min(lo+BatchRows, t.N))
		w.begin(int64(lo))
		v, err := s.eval(w, cond, &b, nil)
		if err != nil {
			return nil, err
		}
		on = trueRows(on, &v, nil, b.N)
		if each != nil {
			if err := each(&b, on); err != nil {
				return nil, err
			}
		}
		copy(rows[lo>>6:], on)
	}
	return rows, nil
}

// rowSource streams the rows of a relation.
type rowSource struct {
	node   *plan.Relation
	rows   relation.Rows
	schema column.Schema
	shown  *shownRows // nil: nobody asks
}

func (s *rowSource) Schema() column.Schema { return s.schema }

func (s *rowSource) Chunks() int { return Streamed }

func (s *rowSource) Read(ctx context.Context, w *Worker, _ int, emit Emit) error {
	row := int64(0)
	err := s.rows.Run(ctx, func(b *column.Batch) error {
		if err := ctx.Err(); err != nil {
			return err
		}
		w.begin(row)
		row += int64(b.N)
		if s.shown != nil {
			s.shown.rows.Add(int64(b.N))
		}
		return emit(b)
	})
	return placed(err, s.node)
}
