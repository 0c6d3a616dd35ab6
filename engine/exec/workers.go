package exec

import (
	"context"
	"errors"
	"runtime"
	"sync"
	"sync/atomic"

	"nearcell/catalog/column"
)

// inOrderSink is a sink whose parts gain from knowing those before them, so that
// one worker does better than several.
type inOrderSink interface{ inOrder() }

// chunksInto takes the chunks into the sink. Each worker takes the next chunk
// that nobody has, fills a part and waits until all parts before it are merged,
// so that no more parts are under way than there are workers.
func (p *pipeline) chunksInto(ctx context.Context, env *Env, sink Sink) error {
	chunks := p.Chunks()
	workers := env.Threads
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	workers = min(workers, chunks)
	if _, ordered := sink.(inOrderSink); ordered {
		workers = min(1, chunks)
	}
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	t := turnstile{cancel: cancel}
	t.moved.L = &t.mu
	var next atomic.Int64
	var group sync.WaitGroup
	work := func() {
		w := NewWorker(env)
		for {
			c := int(next.Add(1)) - 1
			if c >= chunks {
				return
			}
			f := p.fill(ctx, w, c, sink)
			if !t.take(c, f, sink) {
				return
			}
			if err := later(f.part); err != nil {
				t.fail(err)
				return
			}
		}
	}
	for range workers - 1 {
		group.Go(func() {
			defer t.catch()
			work()
		})
	}
	if workers > 0 {
		func() {
			defer t.catch()
			work()
		}()
	}
	group.Wait()
	if t.panicked != nil {
		panic(t.panicked)
	}
	return t.err
}

// filled is a part, or the error that its chunk ended with.
type filled struct {
	part Part
	err  error
}

func (p *pipeline) fill(ctx context.Context, w *Worker, chunk int, sink Sink) filled {
	part := sink.Part(chunk)
	err := p.Read(ctx, w, chunk, func(b *column.Batch) error { return part.Consume(w, b) })
	if errors.Is(err, errEnough) {
		err = nil // of this chunk; whether of all, the merge says
	}
	return filled{part, err}
}

// turnstile lets the parts through to the sink in the order of their chunks.
type turnstile struct {
	mu       sync.Mutex
	moved    sync.Cond
	next     int // chunk whose turn it is
	stopped  bool
	err      error // of the first chunk that had one
	panicked any
	cancel   context.CancelFunc
}

// take waits for the turn of a chunk and merges its part. It reports whether
// to go on.
func (t *turnstile) take(chunk int, f filled, sink Sink) bool {
	t.mu.Lock()
	defer t.mu.Unlock()
	for t.next != chunk && !t.stopped {
		t.moved.Wait()
	}
	if t.stopped {
		return false
	}
	if f.err == nil {
		f.err = sink.Merge(f.part)
	}
	t.next++
	if f.err != nil {
		t.err = f.err
		t.stop()
	}
	t.moved.Broadcast()
	return !t.stopped
}

// fail ends the work with an error of what came after a merge.
func (t *turnstile) fail(err error) {
	t.mu.Lock()
	defer t.mu.Unlock()
	if t.err == nil {
		t.err = err
	}
	t.stop()
}

// stop makes all workers leave; t.mu is held.
func (t *turnstile) stop() {
	t.stopped = true
	t.cancel()
	t.moved.Broadcast()
}

// catch keeps a panic of a worker for the caller's goroutine, whose business
// panics are.
func (t *turnstile) catch() {
	if r := recover(); r != nil {
		t.mu.Lock()
		defer t.mu.Unlock()
		if t.panicked == nil {
			t.panicked = r
		}
		t.stop()
	}
}
