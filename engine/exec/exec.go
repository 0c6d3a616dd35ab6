// Package exec runs plans: pipelines of a source, steps and a sink over
// numbered chunks of rows.
package exec

import (
	"context"

	"nearcell/catalog/column"
	"nearcell/engine/expr"
	"nearcell/engine/relation"
)

// Env is what one statement runs in.
type Env struct {
	relation.Env
	Memory int64 // bytes, 0: no limit
}

// Worker owns the scratch memory of one goroutine.
type Worker struct {
	Env  *Env
	Work expr.Work
}

// Emit hands a batch to the next step. The batch is valid until it returns.
type Emit func(*column.Batch) error

// Source gives numbered chunks of rows (64 Ki each), in batches.
type Source interface {
	Schema() column.Schema
	Chunks() int
	Read(ctx context.Context, w *Worker, chunk int, emit Emit) error
}

// Step turns batches into batches.
type Step interface {
	Run(w *Worker, chunk int, b *column.Batch, emit Emit) error
}

// Sink takes all rows and gives a new source. The chunk number orders every merge.
type Sink interface {
	Consume(w *Worker, chunk int, b *column.Batch) error
	Finish(ctx context.Context) (Source, error)
}
