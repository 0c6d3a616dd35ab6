package exec

import (
	"context"
	"errors"
	"sync"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/note"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
)

// queries are the queries inside the expressions of one run, with the answers
// so far, and the common parts of its plans.
type queries struct {
	ctx  context.Context // of the run
	env  *Env            // of the run
	said note.Notes      // by queries that are computed for many rows

	mu      sync.Mutex
	answers map[*plan.Query]*answers
	commons map[*plan.Common]*commonRows
	fresh   map[*plan.Common]bool // those made for one row outside

	divisions map[*plan.Relation]relation.Division // of the relations opened so far
}

// start begins a run.
func start(ctx context.Context, env *Env) *runner {
	env.queries = &queries{ctx: ctx, env: env, answers: map[*plan.Query]*answers{},
		commons: map[*plan.Common]*commonRows{}, fresh: map[*plan.Common]bool{}}
	return &runner{env: env}
}

// mostSaid is how many warnings of a query inside are said one by one.
const mostSaid = 3

// finish hands on what the queries had to warn of. Notes on the single answers
// of a query that is computed for many rows would drown the others.
func (q *queries) finish() {
	if q.env.Notes == nil {
		return
	}
	more := 0
	for i, l := range q.said.Lines() {
		switch {
		case l.Level != note.Warning:
		case i < mostSaid:
			q.env.Notes.Add(l.Level, l.Rank, "%s", l.Text)
		default:
			more++
		}
	}
	if more > 0 {
		q.env.Notes.Add(note.Warning, note.Rows, "a query inside an expression gave %d further warnings like these for other rows", more)
	}
}

// maxAnswers is how many bytes of answers a query keeps; beyond it forgets them
// and computes anew.
const maxAnswers = 64 << 20

// answers are those of one query, by the values of the row outside that it
// depends on.
type answers struct {
	mu    sync.Mutex
	query *plan.Query
	ask   *expr.Subquery
	of    *queries

	one *expr.Literal // of a scalar query or EXISTS that depends on nothing
	set *valueSet     // of IN that depends on nothing
	err error         // of either
	was bool          // it was computed

	keys   *keyTable
	reader *keyReader
	ids    []int32
	list   []answer // by key
	texts  textCodes
	dict   *column.Dict
	kept   int64
}

// answer is what one row outside gets.
type answer struct {
	value column.Value
	code  uint32 // of a TEXT, in texts
	set   *valueSet
	err   error
}

// asker asks for one worker.
type asker struct{ w *Worker }

func (q *queries) answersOf(e *expr.Subquery) *answers {
	q.mu.Lock()
	defer q.mu.Unlock()
	query := e.Query.(*plan.Query)
	a := q.answers[query]
	if a == nil {
		a = &answers{query: query, ask: e, of: q}
		q.answers[query] = a
	}
	return a
}

// Ask computes the answers for the active rows.
func (k asker) Ask(w *expr.Work, e *expr.Subquery, x *column.Vector, outer []column.Vector, on []uint64, n int) (column.Vector, error) {
	if countOn(on, n) == 0 {
		return column.New(e.Type(), nil, n), nil
	}
	a := k.w.Env.queries.answersOf(e)
	if len(outer) > 0 {
		return a.byKey(e, x, outer, on, n)
	}
	if err := a.compute(); err != nil {
		return column.Vector{}, err
	}
	if a.set == nil {
		return a.one.Eval(w, &column.Batch{N: n}, nil)
	}
	reader := localOf(k.w, a.set, func() *keyReader { return newKeyReader(a.set.keys) })
	return a.set.search(reader, x, on, n, e.Not), nil
}

// compute finds the answer of a query that depends on nothing, once.
func (a *answers) compute() error {
	a.mu.Lock()
	defer a.mu.Unlock()
	if a.was {
		return a.err
	}
	a.was = true
	got := a.run(nil)
	a.err = got.err
	if a.err == nil && a.ask.Kind == expr.InQuery {
		a.set = got.set
	} else if a.err == nil {
		a.one = expr.NewConst(got.value, a.ask.Place()).(*expr.Literal)
	}
	return a.err
}

// byKey finds the answers by the values that the query depends on, and computes
// those that are not there.
func (a *answers) byKey(e *expr.Subquery, x *column.Vector, outer []column.Vector, on []uint64, n int) (column.Vector, error) {
	a.mu.Lock()
	defer a.mu.Unlock()
	if a.keys == nil || a.kept > maxAnswers {
		a.forget(e)
	}
	a.ids = room(a.ids, n)
	a.reader.put(outer, on, n, a.ids)
	values := make([]column.Value, len(outer))
	var failed error
	forEachOn(on, n, func(i int) {
		k := int(a.ids[i])
		if failed != nil {
			return
		}
		if k == len(a.list) { // keys are numbered as they come
			for c := range outer {
				values[c] = outer[c].Value(i)
			}
			failed = a.add(a.run(values))
		}
		if failed == nil && a.list[k].err != nil {
			failed = a.list[k].err
			var p *problem.Problem
			if errors.As(failed, &p) && p.Code == manyRows {
				failed = &expr.RowError{Row: i, Err: failed}
			}
		}
	})
	if failed != nil {
		// keys without an answer must not stay
		a.forget(e)
		return column.Vector{}, failed
	}
	if e.Kind == expr.InQuery {
		return a.among(x, on, n, e.Not), nil
	}
	return a.gather(e, on, n), nil
}

// forget starts without answers.
func (a *answers) forget(e *expr.Subquery) {
	types := make([]column.Type, len(e.Outer))
	for i, o := range e.Outer {
		types[i] = o.Type()
	}
	a.of.env.release(a.kept)
	a.keys = newKeyTable(types)
	a.reader = newKeyReader(a.keys)
	a.list, a.texts, a.dict, a.kept = nil, textCodes{codes: map[string]int32{}}, nil, 0
}

// add keeps the answer of the next key.
func (a *answers) add(x answer) error {
	if errors.Is(x.err, context.Canceled) || errors.Is(x.err, context.DeadlineExceeded) {
		return x.err
	}
	bytes := int64(96 + 8*a.keys.width + len(x.value.S))
	if x.set != nil {
		bytes += x.set.bytes()
	}
	if x.value.Type == column.Text && !x.value.Null {
		x.code = uint32(a.texts.code(x.value.S))
		x.value.S = ""
		a.dict = nil
	}
	a.list = append(a.list, x)
	a.kept += bytes
	return a.of.env.keep(bytes)
}

// gather is the answers of the active rows as a vector.
func (a *answers) gather(e *expr.Subquery, on []uint64, n int) column.Vector {
	v := column.New(e.Type(), nil, n)
	if e.Type() == column.Null {
		return v
	}
	if e.Type() == column.Text {
		if a.dict == nil { // others remember what they know of a dictionary
			texts := a.texts.dict().Texts
			a.dict = &column.Dict{Texts: texts[:len(texts):len(texts)]}
		}
		v.Dict = a.dict
	}
	v.Valid = make([]uint64, column.Words(n))
	forEachOn(on, n, func(i int) {
		x := &a.list[a.ids[i]]
		if x.value.Null {
			return
		}
		column.SetBit(v.Valid, i)
		switch {
		case v.Type.Counted():
			v.I[i] = x.value.I
		case v.Type == column.Real:
			v.F[i] = x.value.F
		case v.Type == column.Text:
			v.C[i] = x.code
		case v.Type == column.Boolean && x.value.I != 0:
			column.SetBit(v.Bits, i)
		case v.Type == column.Point:
			copy(v.F[3*i:], x.value.P[:])
		}
	})
	return v
}

// among says for each active row whether x is in the set of its key.
func (a *answers) among(x *column.Vector, on []uint64, n int, not bool) column.Vector {
	t := newTruths(n)
	forEachOn(on, n, func(i int) { t.set(i, a.list[a.ids[i]].set.has(x, i), not) })
	return t.vector()
}

// manyRows is the code of a scalar query with several rows.
const manyRows = "many-rows"

// run computes the query for one row outside.
func (a *answers) run(outer []column.Value) answer {
	q := a.of
	// what is kept on the way is given back, unlike what the run itself keeps
	held := &meter{}
	env := &Env{Env: q.env.Env, Memory: q.env.Memory, Places: q.env.Places, chunk: q.env.chunk, batch: q.env.batch, whole: q.env, holder: held, queries: q}
	defer func() { q.env.release(held.kept.Load()) }()
	env.Progress = nil
	if len(outer) == 0 {
		env.Measured = q.env.Measured
	}
	if len(outer) > 0 && env.Notes != nil {
		env.Notes = &q.said
	}
	node, fresh := a.query.For(outer)
	q.begin(fresh)
	defer q.end(fresh)
	got := a.rows(env, node)
	if errors.Is(got.err, errEnough) {
		got.err = nil
	}
	if got.err == nil {
		got.err = q.ctx.Err()
	}
	return got
}

func (a *answers) rows(env *Env, node plan.Node) answer {
	ctx := a.of.ctx
	got := answer{value: column.NullOf(a.ask.Type())}
	if a.ask.Kind == expr.ExistsQuery {
		got.value = column.Bool(false)
	}
	if a.ask.Kind == expr.InQuery {
		got.set = newValueSet(a.ask.X.Type(), a.query.Field().Type)
		got.set.keys.until(ctx.Err)
	}
	p, err := (&runner{env: env}).open(ctx, node)
	if err != nil {
		return answer{err: err}
	}
	rows := 0
	got.err = p.stream(ctx, NewWorker(env), func(b *column.Batch) error {
		if countOn(b.On, b.N) == 0 {
			return nil
		}
		switch a.ask.Kind {
		case expr.ExistsQuery:
			got.value = column.Bool(true)
			return errEnough
		case expr.InQuery:
			got.set.add(&b.Cols[0], b.On, b.N)
			return nil
		}
		forEachOn(b.On, b.N, func(i int) {
			if rows++; rows == 1 {
				got.value = b.Cols[0].Value(i)
				got.value.Type = a.ask.Type()
			}
		})
		if rows > 1 {
			return problem.New(manyRows, a.ask.Place(), "this query stands for one value and gives more than one row").
				WithHint("an aggregate or LIMIT 1 makes one of them; x IN (query) compares with all")
		}
		return nil
	})
	return got
}

// begin and end of the common parts that were made for one row outside.
func (q *queries) begin(fresh []*plan.Common) {
	if len(fresh) == 0 {
		return
	}
	q.mu.Lock()
	defer q.mu.Unlock()
	for _, c := range fresh {
		q.fresh[c] = true
	}
}

func (q *queries) end(fresh []*plan.Common) {
	if len(fresh) == 0 {
		return
	}
	q.mu.Lock()
	defer q.mu.Unlock()
	for _, c := range fresh {
		delete(q.fresh, c)
		delete(q.commons, c)
	}
}
