package exec

import (
	"context"
	"errors"
	"strings"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/function"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
)

// aggregateSink groups rows and computes aggregates. Each chunk has a key table
// and accumulators of its own; merging them in the order of the chunks gives
// the same bits for any number of workers. Groups come out in the order of
// their keys, NULL last.
type aggregateSink struct {
	scope
	env   *Env
	node  *plan.Aggregate
	types []column.Type // of the keys
	watch *cellWatch    // what may have to be said, nil: nobody listens
	pairs []*pairSet    // of calls that count different values, else nil
	all   *aggregatePart
}

func newAggregateSink(env *Env, n *plan.Aggregate) (*aggregateSink, error) {
	s := &aggregateSink{scope: scopeOf(n.Input.Schema()), env: env, node: n}
	for _, k := range n.Keys {
		s.types = append(s.types, k.Type())
	}
	for _, c := range n.Calls {
		if c.Distinct && c.Weight != nil {
			// which weight would count for a value that several rows have?
			return nil, problem.New("distinct-weight", c.Place, "%s cannot count each value once and weigh it by its rows", c.Text).
				WithHint("leave out DISTINCT or WEIGHTED BY")
		}
		var pairs *pairSet
		if countsPairs(&c) {
			pairs = newPairSet(env)
		}
		s.pairs = append(s.pairs, pairs)
	}
	return s, nil
}

// aggregatePart is the groups of one chunk, or of all chunks merged so far.
type aggregatePart struct {
	sink   *aggregateSink
	keys   *keyTable
	reader *keyReader
	calls  []*callState
	group  []int32 // of each row of the batch
	cols   []column.Vector
	kept   int64 // bytes
	chunk  int
	to     []int32 // once merged: which group of all is which of these; nil: the same
}

// callState is one aggregate over the groups of a part.
type callState struct {
	call *plan.Call
	acc  function.Accumulator
	// distinct holds the pairs of group and arguments of a call with DISTINCT
	// until all parts are merged, else nil.
	distinct *keyTable
	reader   *keyReader
	ids      []int32
	pairs    *pairPart // of a COUNT(DISTINCT x): instead of distinct
	args     []column.Vector
	on       []uint64
	largest  heaviest
	cells    *cellCount // what a sum of measures has met, nil: not asked
	ledger   *ledger    // what a weighted answer speaks for, nil: of no closed space, or not asked
	spreads  *spreads   // of instruments' uncertainties by column, nil: none or not asked
	near     *nearCount // what limits can hardly tell apart, nil: none or not asked
}

func (s *aggregateSink) Part(chunk int) Part {
	p := s.newPart()
	p.chunk = chunk
	return p
}

func (s *aggregateSink) newPart() *aggregatePart {
	p := &aggregatePart{sink: s, keys: newKeyTable(s.types).until(s.env.stop), calls: make([]*callState, len(s.node.Calls))}
	p.reader = newKeyReader(p.keys)
	for i := range s.node.Calls {
		p.calls[i] = newCallState(s.env, &s.node.Calls[i], s.pairs[i])
		if d := p.calls[i].distinct; d != nil {
			d.until(s.env.stop)
		}
	}
	if s.watch != nil {
		for i, cells := range s.cellCounts() {
			p.calls[i].cells = cells
		}
		for i, book := range s.ledgers() {
			p.calls[i].ledger = book
		}
		for i, of := range s.spreads() {
			p.calls[i].spreads = of
		}
		for _, c := range p.calls {
			c.near = newNearCount(c.call)
		}
	}
	return p
}

func newCallState(env *Env, c *plan.Call, pairs *pairSet) *callState {
	setup := newSetup(c)
	state := &callState{call: c, acc: c.Fn.New(setup)}
	// the first of ordered values is the same whether or not equals are dropped
	if pairs != nil {
		state.pairs = &pairPart{set: pairs}
	} else if c.Distinct && len(c.OrderBy) == 0 {
		state.distinct = newKeyTable(append([]column.Type{column.Integer}, setup.Args...)).until(env.stop)
		state.reader = newKeyReader(state.distinct)
	}
	return state
}

// newSetup is what an aggregate is made for.
func newSetup(c *plan.Call) function.Setup {
	setup := function.Setup{Weighted: c.Weight != nil}
	for _, a := range c.Args {
		setup.Args = append(setup.Args, a.Type())
		var constant *column.Value
		if v, ok := expr.Const(a); ok {
			constant = &v
		}
		setup.Consts = append(setup.Consts, constant)
	}
	for _, k := range c.OrderBy {
		setup.Keys = append(setup.Keys, function.Key{Type: k.Expr.Type(), Descending: k.Descending})
	}
	return setup
}

func (p *aggregatePart) Consume(w *Worker, b *column.Batch) error {
	s := p.sink
	cols, err := s.evalAll(w, p.cols, s.node.Keys, b, b.On)
	if err != nil {
		return err
	}
	p.cols = cols
	p.group = room(p.group, b.N)
	p.reader.put(cols, b.On, b.N, p.group)
	for _, c := range p.calls {
		if err := c.consume(s, w, b, p.group); err != nil {
			return err
		}
	}
	return p.keep()
}

// keep counts what the part holds against the limit of memory: a group costs its
// key and, at a guess, eight words an aggregate; beside that come the values that a
// MEDIAN or a DISTINCT keeps.
func (p *aggregatePart) keep() error {
	bytes := int64(p.keys.n) * int64(8*p.keys.width+64*len(p.calls))
	for _, c := range p.calls {
		bytes += c.bytes()
	}
	grown := bytes - p.kept
	p.kept = bytes
	return p.sink.env.keep(grown)
}

// bytes is what a call keeps beside its groups.
func (c *callState) bytes() int64 {
	n := int64(0)
	if c.distinct != nil {
		n = c.distinct.bytes()
	}
	if acc, ok := c.acc.(function.Sized); ok {
		n += acc.Bytes()
	}
	return n + c.spreads.bytes()
}

func (c *callState) consume(s *aggregateSink, w *Worker, b *column.Batch, groups []int32) error {
	if err := c.near.look(s.scope, w, b); err != nil {
		return err
	}
	on := b.On
	var cond column.Vector
	if c.call.Filter != nil {
		var err error
		cond, err = s.eval(w, c.call.Filter, b, b.On)
		if err != nil {
			return err
		}
		c.on = trueRows(c.on, &cond, b.On, b.N)
		on = c.on
	}
	args, err := s.evalAll(w, c.args, c.call.Args, b, on)
	if err != nil {
		return err
	}
	for _, k := range c.call.OrderBy {
		v, err := s.eval(w, k.Expr, b, on)
		if err != nil {
			return err
		}
		args = append(args, v)
	}
	c.args = args
	if c.pairs != nil {
		return c.pairs.add(w, &args[0], on, b.N, groups)
	}
	if c.distinct != nil {
		c.addDistinct(b.N, on, groups)
		return nil
	}
	var weight *column.Vector
	at := c.call.Place
	if c.call.Weight != nil {
		v, err := s.eval(w, c.call.Weight, b, on)
		if err != nil {
			return err
		}
		weight, at = &v, c.call.Weight.Place()
	}
	if err := c.acc.Add(groups, on, b.N, args, weight); err != nil {
		var f *function.RowFault
		if errors.As(err, &f) && f.Code != "weight" {
			at = c.call.Place
		}
		offerEnvelope(err, s.node, c.call.Weight)
		return s.fault(w, err, at, b)
	}
	if k, err := c.spreads.add(b, on, groups, args, weight); err != nil {
		return s.fault(w, err, c.spreads.by(k).Place, b)
	}
	c.cells.add(b, on, groups)
	c.ledger.add(b, on, &cond, args)
	if weight != nil && len(s.node.Keys) == 0 && s.id >= 0 {
		c.largest.look(weight, args, on, b.N, &b.Cols[s.id])
	}
	return nil
}

// addDistinct remembers the pairs of group and arguments.
func (c *callState) addDistinct(n int, on []uint64, groups []int32) {
	cols := make([]column.Vector, 0, len(c.args)+1)
	group := column.Vector{Type: column.Integer, N: n, I: make([]int64, n)}
	forEachOn(on, n, func(i int) { group.I[i] = int64(groups[i]) })
	cols = append(append(cols, group), c.args...)
	c.ids = room(c.ids, n)
	c.reader.put(cols, on, n, c.ids)
}

func (s *aggregateSink) Merge(part Part) error {
	p := part.(*aggregatePart)
	if s.all == nil {
		s.all = p
		return nil
	}
	to := s.all.keys.absorb(p.keys, nil)
	if err := s.env.stop(); err != nil {
		return err
	}
	p.to = to
	for i, c := range s.all.calls {
		from := p.calls[i]
		c.near.merge(from.near)
		c.ledger.merge(from.ledger)
		if c.pairs != nil {
			continue // Later
		}
		if c.distinct != nil {
			c.distinct.absorb(from.distinct, to)
			if err := s.env.stop(); err != nil {
				return err
			}
			continue
		}
		if err := c.acc.Merge(from.acc, to); err != nil {
			return s.groupFault(err, c.call)
		}
		c.largest.merge(&from.largest)
		c.cells.merge(from.cells, to)
		c.spreads.merge(from.spreads, to)
	}
	s.env.release(p.kept)
	return s.all.keep()
}

// Later counts different values beside the merging of other parts.
func (p *aggregatePart) Later() error {
	for _, c := range p.calls {
		if c.pairs == nil {
			continue
		}
		if err := c.pairs.settle(p.to, p.chunk); err != nil {
			return err
		}
	}
	return nil
}

func (s *aggregateSink) Finish(ctx context.Context) (Source, error) {
	if s.all == nil {
		s.all = s.newPart()
	}
	p := s.all
	if len(s.types) == 0 && p.keys.n == 0 {
		p.keys.add(nil) // without keys there is one group, of no rows too
	}
	keys := p.keys.columns()
	order, err := s.keyOrder(ctx, keys, p.keys.n)
	if err != nil {
		return nil, err
	}
	out := &column.Table{Schema: s.node.Fields, N: p.keys.n}
	for i := range keys {
		v, err := gatherUntil(ctx.Err, &keys[i], order, false)
		if err != nil {
			return nil, err
		}
		out.Cols = append(out.Cols, v)
	}
	for _, c := range p.calls {
		v, err := c.result(s.env, p.keys.n)
		if err == nil {
			v, err = gatherUntil(ctx.Err, &v, order, false)
		}
		if stopped := ctx.Err(); stopped != nil {
			return nil, stopped
		}
		if err != nil {
			return nil, s.groupFault(err, c.call)
		}
		out.Cols = append(out.Cols, v)
	}
	for i := range out.Cols {
		out.Cols[i].Unit = s.node.Fields[i].Unit
	}
	s.say()
	return newTableSource(s.env, out), nil
}

// say notes what the values rest on.
func (s *aggregateSink) say() {
	if s.watch == nil {
		return
	}
	s.weightNotes()
	s.instrumentNotes()
	s.ledgerNotes()
	for _, m := range plan.SmoothedExtremes(s.node) {
		s.env.Notes.Add(note.Note, note.Rows, "%s is that of %s METHOD %s, not of the readings: extremes are taken from the raw rows, or from METHOD MAX and MIN",
			s.node.Calls[m.Call].Text, m.Relation.Bound.Title(), m.Relation.Bound.Log.Method)
	}
	s.watch.say(s.env.Notes)
	for _, c := range s.all.calls {
		sayContrary(s.env.Notes, c.call.Text, c.acc)
		c.cells.say(s.env.Notes, c.call, s.all.keys.n)
		c.near.say(s.env.Notes, c.call)
	}
}

func (s *aggregateSink) keyOrder(ctx context.Context, keys []column.Vector, n int) ([]int32, error) {
	by := make([]orderKey, len(keys))
	for i := range keys {
		by[i].v = &keys[i]
	}
	return argsort(ctx.Err, by, n)
}

// result is the values of all groups. The distinct values of a call with
// DISTINCT go into its accumulator now that each stands there once.
func (c *callState) result(env *Env, groups int) (column.Vector, error) {
	if c.pairs != nil {
		return c.pairs.set.counts(groups)
	}
	if acc, ok := c.acc.(function.Sized); ok { // sorting takes as much again
		if err := env.keep(acc.Bytes()); err != nil {
			return column.Vector{}, err
		}
		defer env.release(acc.Bytes())
	}
	if c.distinct != nil {
		cols := c.distinct.columns()
		group := make([]int32, c.distinct.n)
		args := make([]column.Vector, len(cols)-1)
		for lo := 0; lo < len(group); lo += BatchRows {
			if err := env.stop(); err != nil {
				return column.Vector{}, err
			}
			hi := min(lo+BatchRows, len(group))
			for i, g := range cols[0].I[lo:hi] {
				group[lo+i] = int32(g)
			}
			for i := range args {
				args[i] = cols[i+1].Slice(lo, hi)
			}
			if err := c.acc.Add(group[lo:hi], nil, hi-lo, args, nil); err != nil {
				return column.Vector{}, err
			}
		}
	}
	if long, ok := c.acc.(function.Stopping); ok {
		long.Until(env.stop)
	}
	return c.acc.Result(groups)
}

// groupFault names the group whose value could not be computed.
func (s *aggregateSink) groupFault(err error, c *plan.Call) error {
	var f *function.GroupFault
	if !errors.As(err, &f) {
		var r *function.RowFault
		if errors.As(err, &r) {
			return problem.New(r.Code, c.Place, "%s", r.Message).WithHint("%s", r.Hint).Because(err)
		}
		return problem.At(err, c.Place)
	}
	text := f.Message
	if len(s.types) > 0 {
		var names []string
		for i, v := range s.all.keys.columns() {
			names = append(names, s.node.Fields[i].Name+" = "+idText(v.Value(f.Group)))
		}
		text += " in the group " + strings.Join(names, ", ")
	}
	return problem.New(f.Code, c.Place, "%s", text).WithHint("%s", f.Hint).Because(err)
}
