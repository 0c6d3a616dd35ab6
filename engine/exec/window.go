package exec

import (
	"context"
	"errors"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
)

// windowSink collects all rows with the keys and arguments of the functions, parts
// them by partition, sorts each partition and lets the functions of package function
// slide over it. Partitions are shared out among the workers; rows stay in the order
// in which they came.
type windowSink struct {
	scope
	env    *Env
	node   *plan.Window
	schema column.Schema // of the input
	keyed  column.Schema // with what is computed behind
	exprs  []windowExpr  // what is computed
	part   []int         // columns of keyed: of the partition,
	order  []int         // of the order,
	calls  []windowColumns
	parts  []*column.Table
	watch  *cellWatch
}

// windowExpr is a computed column; where filter is not below 0, for the rows alone for
// which that column is TRUE.
type windowExpr struct {
	e      expr.Expr
	filter int
}

// windowColumns is where a call finds what it needs, as columns of keyed; -1: none.
type windowColumns struct {
	args           []int
	filter, weight int
}

func newWindowSink(env *Env, n *plan.Window) *windowSink {
	s := &windowSink{env: env, node: n, schema: n.Input.Schema()}
	s.scope = scopeOf(s.schema)
	s.keyed = append(s.keyed, s.schema...)
	for _, e := range n.Partition {
		s.part = append(s.part, s.place(e, -1))
	}
	for _, k := range n.OrderBy {
		s.order = append(s.order, s.place(k.Expr, -1))
	}
	for i := range n.Calls {
		c := &n.Calls[i]
		at := windowColumns{filter: -1, weight: -1}
		if c.Filter != nil {
			at.filter = s.place(c.Filter, -1)
		}
		for _, a := range c.Args {
			at.args = append(at.args, s.place(a, at.filter))
		}
		for _, k := range c.Call.OrderBy {
			at.args = append(at.args, s.place(k.Expr, at.filter))
		}
		if c.Weight != nil {
			at.weight = s.place(c.Weight, at.filter)
		}
		s.calls = append(s.calls, at)
	}
	return s
}

// place is the column of keyed that holds an expression.
func (s *windowSink) place(e expr.Expr, filter int) int {
	if at, plain := expr.AsColumn(e); plain {
		return at
	}
	for i, x := range s.exprs {
		if x.filter == filter && expr.Equal(x.e, e) {
			return len(s.schema) + i
		}
	}
	s.exprs = append(s.exprs, windowExpr{e, filter})
	s.keyed = append(s.keyed, column.Field{Type: e.Type(), Unit: e.Unit()})
	return len(s.keyed) - 1
}

type windowPart struct {
	sink *windowSink
	rows *tableBuilder
	cols []column.Vector
	on   []uint64
}

func (s *windowSink) Part(int) Part {
	return &windowPart{sink: s, rows: newTableBuilder(s.env, s.keyed)}
}

func (p *windowPart) Consume(w *Worker, b *column.Batch) error {
	s := p.sink
	p.cols = append(p.cols[:0], b.Cols...)
	for _, x := range s.exprs {
		on := b.On
		if x.filter >= 0 {
			p.on = trueRows(p.on, &p.cols[x.filter], b.On, b.N)
			on = p.on
		}
		v, err := s.eval(w, x.e, b, on)
		if err != nil {
			return err
		}
		if x.filter >= 0 {
			v = onlyWhere(v, on, b.N)
		}
		p.cols = append(p.cols, v)
	}
	return p.rows.add(p.cols, b.On, b.N)
}

// onlyWhere is a vector with NULL in all rows but those of on, which alone were
// computed.
func onlyWhere(v column.Vector, on []uint64, n int) column.Vector {
	if v.Type == column.Null {
		return v
	}
	valid := make([]uint64, column.Words(n))
	copy(valid, on)
	if v.Valid != nil {
		for i := range valid {
			valid[i] &= v.Valid[i]
		}
	}
	v.Valid = valid
	return v
}

func (s *windowSink) Merge(p Part) error {
	if rows := p.(*windowPart).rows; rows.n > 0 {
		s.parts = append(s.parts, rows.finish())
	}
	return nil
}

func (s *windowSink) Finish(ctx context.Context) (Source, error) {
	all, err := joined(ctx.Err, s.env, s.keyed, s.parts)
	if err != nil {
		return nil, err
	}
	s.parts = nil
	out := &column.Table{Schema: s.node.Fields, N: all.N, Cols: append([]column.Vector(nil), all.Cols[:len(s.schema)]...)}
	scratch := int64(all.N) * 40
	if err := s.env.keep(scratch); err != nil {
		return nil, err
	}
	defer s.env.release(scratch)
	run := &windowRun{sink: s, all: all, env: s.env}
	if err := run.prepare(ctx); err != nil {
		return nil, err
	}
	if err := run.partitions(ctx); err != nil {
		return nil, err
	}
	if s.watch != nil {
		s.watch.say(s.env.Notes)
		for i := range run.calls {
			run.calls[i].weights.say(s.env.Notes, s.node.Calls[i].Text)
		}
	}
	for i := range s.node.Calls {
		v, err := run.calls[i].vector(ctx.Err, all.N)
		if err != nil {
			return nil, err
		}
		v.Unit = s.node.Fields[len(s.schema)+i].Unit
		out.Cols = append(out.Cols, v)
		if err := s.env.keep(int64(all.N) * rowBytes(s.node.Fields[len(s.schema)+i:len(s.schema)+i+1])); err != nil {
			return nil, err
		}
	}
	return newTableSource(s.env, out), nil
}

// windowFault gives an error of a call its place and names the row.
func (s *windowSink) fault(err error, c *plan.WindowCall, all *column.Table) error {
	var f *function.RowFault
	if !errors.As(err, &f) {
		return err
	}
	at, text := c.Place, f.Message
	if f.Code == "weight" && c.Weight != nil {
		at = c.Weight.Place()
	}
	if f.Row >= 0 && f.Row < all.N && s.id >= 0 && !all.Cols[s.id].IsNull(f.Row) {
		text += " in the row with id " + idText(all.Cols[s.id].Value(f.Row))
	}
	return problem.New(f.Code, at, "%s", text).WithHint("%s", f.Hint).Because(err)
}

// windowCall is one call over all rows.
type windowCall struct {
	node    *plan.WindowCall
	out     *function.Slid
	picked  column.Vector // what Pick gives the rows of
	sliders function.Sliders
	weights *frameWeights // nil: nothing is weighed, or nobody listens
	by      int64         // the number of LAG, LEAD, NTH_VALUE and NTILE
	missing int           // of LAG and LEAD: the row of picked that stands for a missing one of row 0, -1: NULL
}

// vector is the column of the values.
func (c *windowCall) vector(stop func() error, n int) (column.Vector, error) {
	out := c.out
	if out.Pick != nil {
		if c.missing >= 0 {
			for row, at := range out.Pick {
				if at < 0 {
					out.Pick[row] = int32(c.missing + row)
				}
			}
		}
		v, err := gatherUntil(stop, &c.picked, out.Pick, true)
		if err != nil {
			return v, err
		}
		if v.Type == column.Real {
			for i := range v.F {
				v.F[i] += 0 // -0 is 0, as in MIN without a window
			}
		}
		return v, nil
	}
	v := column.Vector{Type: out.Type, N: n, I: out.I, F: out.F}
	for i, null := range out.Null {
		if null {
			v.SetNull(i)
		}
	}
	return v, stop()
}
