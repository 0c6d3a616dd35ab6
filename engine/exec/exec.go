package exec

import (
	"context"
	"errors"
	"sync/atomic"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/plan"
	"nearcell/engine/problem"
	"nearcell/engine/relation"
)

// BatchRows is the number of rows of a full batch, ChunkRows that of a full
// chunk, which holds a whole number of batches.
const (
	BatchRows = relation.BatchRows
	ChunkRows = 64 << 10
)

// Env is what one statement runs in.
type Env struct {
	relation.Env       // Threads: the number of workers, 0: one a core
	Memory       int64 // bytes that the statement's sinks may keep, 0: no limit
	// Places are the search trees that the program keeps; nil: a run has its own.
	Places *Places
	// Measured counts what each step of the plan does; nil: nobody asks.
	Measured *Measured

	kept atomic.Int64
	// Where somebody asks, each node has an environment of its own: what is kept
	// in it is told to its meter and to that of the statement.
	whole  *Env
	holder *meter
	// queries are those of the run that the environment serves.
	queries *queries
	// chunk and batch are the numbers of rows of a chunk and of a batch of a
	// table, 0: the usual ones. Tests set them: results must not depend on them
	// (but for the last bits of sums).
	chunk, batch int
}

// release takes back what was counted and is given up.
func (e *Env) release(bytes int64) {
	if e.whole != nil {
		e.holder.keep(-bytes)
		e.whole.release(bytes)
		return
	}
	e.kept.Add(-bytes)
}

// stop is asked between stretches of work that many rows share: it gives an error when
// the run is to end.
func (e *Env) stop() error {
	if e.queries == nil {
		return nil
	}
	return e.queries.ctx.Err()
}

func (e *Env) chunkRows() int {
	if e.chunk > 0 {
		return e.chunk
	}
	return ChunkRows
}

func (e *Env) batchRows() int {
	if e.batch > 0 {
		return e.batch
	}
	return BatchRows
}

// keep counts bytes that a sink holds on to against the limit.
func (e *Env) keep(bytes int64) error {
	if e.whole != nil {
		e.holder.keep(bytes)
		return e.whole.keep(bytes)
	}
	kept := e.kept.Add(bytes)
	if e.Memory > 0 && kept > e.Memory {
		return problem.New("memory", problem.Place{}, "%s need%s", inBetween, e.tooMuch()).
			WithHint("ask for fewer columns or rows, or give more with --memory")
	}
	return nil
}

// Worker owns the scratch memory of one goroutine.
type Worker struct {
	Env *Env
	// works[depth] is the scratch of the batches between two steps that give
	// several batches for one: those below must stay while those above pass.
	works []*expr.Work
	depth int
	row   int64 // of the first row of the current batch, counted from 0; -1: unknown
	local map[any]any
	watch watch // of meters, if there are any
}

// NewWorker is a worker with its own scratch memory.
func NewWorker(env *Env) *Worker {
	w := &Worker{Env: env, local: map[any]any{}}
	w.works = []*expr.Work{w.newWork()}
	return w
}

func (w *Worker) newWork() *expr.Work {
	work := new(expr.Work)
	if w.Env.queries != nil {
		work.Asker = asker{w}
	}
	return work
}

// Work is the scratch memory for the current batch.
func (w *Worker) Work() *expr.Work { return w.works[w.depth] }

// begin starts a new batch of a source: what was computed for the one before
// it at this depth is given up.
func (w *Worker) begin(row int64) {
	w.works[w.depth].Reset()
	w.row = row
}

// deeper emits a batch that a step made out of the current one, which stays
// valid meanwhile. Its rows have no number that a user could know.
func (w *Worker) deeper(b *column.Batch, emit Emit) error {
	before := w.row
	w.depth++
	if w.depth == len(w.works) {
		w.works = append(w.works, w.newWork())
	}
	w.begin(-1)
	err := emit(b)
	w.depth--
	w.row = before
	return err
}

// localOf is the state that a worker keeps for a step.
func localOf[T any](w *Worker, owner any, start func() *T) *T {
	if s, ok := w.local[owner]; ok {
		return s.(*T)
	}
	s := start()
	w.local[owner] = s
	return s
}

// Emit hands a batch to the next step. The batch is valid until it returns.
type Emit func(*column.Batch) error

// Streamed is the number of chunks of a source that knows it only at its end.
const Streamed = -1

// Source gives numbered chunks of rows, in batches. A source of Streamed
// chunks is read once, by Read of chunk 0, and its rows are numbered as they come.
type Source interface {
	Schema() column.Schema
	Chunks() int
	Read(ctx context.Context, w *Worker, chunk int, emit Emit) error
}

// Step turns batches into batches, in order. What it keeps between batches it
// keeps in the worker (localOf), so that workers share no state.
type Step interface {
	Run(ctx context.Context, w *Worker, b *column.Batch, emit Emit) error
}

// Sink takes all rows and gives a new source. The rows of a chunk go into a
// Part of their own; parts are merged in the order of their chunks, whichever
// worker filled them and when.
type Sink interface {
	// Part starts the chunk with this number.
	Part(chunk int) Part
	// Merge takes a full part; errEnough: the rows after it are not wanted.
	Merge(p Part) error
	// Finish gives the result once every part is merged.
	Finish(ctx context.Context) (Source, error)
}

// Part takes the rows of one chunk. errEnough says that it takes no more.
type Part interface {
	Consume(w *Worker, b *column.Batch) error
}

// laterPart is a part that has more to do once it is merged, beside the merging of
// others and in no order. Its worker calls Later; Finish comes after all of them.
type laterPart interface {
	Later() error
}

func later(p Part) error {
	if p, ok := p.(laterPart); ok {
		return p.Later()
	}
	return nil
}

// errEnough stops a source early; it never leaves this package.
var errEnough = errors.New("exec: enough rows")

// Run computes a plan and hands its rows to emit, in order, in batches without
// a mask (On is nil) that are valid until emit returns.
func Run(ctx context.Context, env *Env, n plan.Node, emit func(*column.Batch) error) error {
	r := start(ctx, env)
	defer env.queries.finish()
	p, err := r.open(ctx, n)
	if err != nil {
		return err
	}
	var dense compactor
	return p.stream(ctx, NewWorker(env), func(b *column.Batch) error {
		if b = dense.compact(b); b.N == 0 {
			return nil
		}
		return emit(b)
	})
}

// Collect computes a plan into a table. Where the plan is a table as it lies,
// the result is a view of it.
func Collect(ctx context.Context, env *Env, n plan.Node) (*column.Table, error) {
	r := start(ctx, env)
	defer env.queries.finish()
	return r.collect(ctx, n)
}

// runner opens the nodes of one plan.
type runner struct {
	env *Env
	// what aggregates above want counted
	removals map[plan.Node]*removal
	shown    map[*plan.Relation]*shownRows
}

func (r *runner) collect(ctx context.Context, n plan.Node) (*column.Table, error) {
	p, err := r.open(ctx, n)
	if err != nil {
		return nil, err
	}
	if len(p.steps) == 0 {
		if t := asTable(p.source); t != nil {
			return t, nil
		}
	}
	above := r.above(n)
	env := r.envOf(above)
	src, err := p.into(ctx, NewWorker(env), above.around(&collectSink{env: env, schema: n.Schema()}))
	if err != nil {
		return nil, err
	}
	return src.(*tableSource).table, nil
}
