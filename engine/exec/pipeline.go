package exec

import (
	"context"
	"errors"

	"nearcell/catalog/column"
)

// pipeline is a source and the steps through which each of its batches goes.
// It is a source itself, so that a Union can put pipelines one after another.
type pipeline struct {
	source Source
	steps  []Step
	schema column.Schema
}

// with is the pipeline with one more step that gives other columns.
func (p *pipeline) with(s Step, schema column.Schema) *pipeline {
	return &pipeline{source: p.source, steps: append(p.steps[:len(p.steps):len(p.steps)], s), schema: schema}
}

// Schema is the columns after the last step.
func (p *pipeline) Schema() column.Schema { return p.schema }

// Chunks is the number of chunks of the source.
func (p *pipeline) Chunks() int { return p.source.Chunks() }

// Read takes one chunk of the source through the steps.
func (p *pipeline) Read(ctx context.Context, w *Worker, chunk int, emit Emit) error {
	return p.source.Read(ctx, w, chunk, chain(ctx, w, p.steps, emit))
}

// chain is the emit that begins with the first of steps and ends with last.
func chain(ctx context.Context, w *Worker, steps []Step, last Emit) Emit {
	next := last
	for i := len(steps) - 1; i >= 0; i-- {
		step, after := steps[i], next
		next = func(b *column.Batch) error {
			if err := ctx.Err(); err != nil {
				return err
			}
			return step.Run(ctx, w, b, after)
		}
	}
	return next
}

// stream hands all rows to emit, in order.
func (p *pipeline) stream(ctx context.Context, w *Worker, emit Emit) error {
	chunks := p.Chunks()
	if chunks == Streamed {
		chunks = 1
	}
	for c := 0; c < chunks; c++ {
		if err := p.Read(ctx, w, c, emit); err != nil {
			return err
		}
	}
	return ctx.Err()
}

// into runs the pipeline into a sink and gives the sink's result.
func (p *pipeline) into(ctx context.Context, w *Worker, sink Sink) (Source, error) {
	var err error
	if p.Chunks() == Streamed {
		err = p.streamInto(ctx, w, sink)
	} else {
		err = p.chunksInto(ctx, w.Env, sink)
	}
	if err != nil && !errors.Is(err, errEnough) {
		return nil, err
	}
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	return sink.Finish(ctx)
}

// streamInto numbers the chunks of a stream by the rows that the source gave:
// a chunk ends with the batch that fills it, whatever the steps made of it.
func (p *pipeline) streamInto(ctx context.Context, w *Worker, sink Sink) error {
	chunk := 0
	part := sink.Part(chunk)
	steps := chain(ctx, w, p.steps, func(b *column.Batch) error { return part.Consume(w, b) })
	rows := 0
	err := p.source.Read(ctx, w, 0, func(b *column.Batch) error {
		if err := steps(b); err != nil {
			return err
		}
		if rows += b.N; rows < w.Env.chunkRows() {
			return nil
		}
		full := part
		part = nil
		if err := w.merge(sink, full); err != nil {
			return err
		}
		if err := later(full); err != nil {
			return err
		}
		rows = 0
		chunk++
		part = sink.Part(chunk)
		return nil
	})
	if part == nil || err != nil && !errors.Is(err, errEnough) {
		return err
	}
	if merged := sink.Merge(part); merged != nil {
		return merged
	}
	if err := later(part); err != nil {
		return err
	}
	return err
}
