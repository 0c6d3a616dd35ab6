package relation

import (
	"context"
	"runtime"
	"sync"

	"nearcell/catalog/column"
)

// ahead is how many slabs of a logger may wait for their turn.
const ahead = 8

// lane takes the slabs of one logger to where they are emitted.
type lane struct {
	slabs chan *column.Batch
	err   error // set before slabs is closed
}

// inOrder makes the rows of n loggers on several cores and emits them in the order of
// the loggers, in batches. rows puts the rows of one logger in slabs of any length; a
// core that is ahead of the others waits, so that memory is bounded. Of several
// loggers that fail, the first one's error is given.
func inOrder(ctx context.Context, threads, n int, rows func(ctx context.Context, logger int, put func(*column.Batch) error) error,
	emit func(*column.Batch) error) error {
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	ctx, stop := context.WithCancel(ctx)
	var workers sync.WaitGroup
	defer workers.Wait()
	defer stop()
	jobs, lanes := make(chan int), make([]lane, n)
	for i := range lanes {
		lanes[i].slabs = make(chan *column.Batch, ahead)
	}
	for range min(threads, n) {
		workers.Go(func() {
			for i := range jobs {
				l := &lanes[i]
				l.err = rows(ctx, i, func(s *column.Batch) error {
					select {
					case l.slabs <- s:
						return nil
					case <-ctx.Done():
						return ctx.Err()
					}
				})
				close(l.slabs)
			}
		})
	}
	// no logger is begun that is far ahead of the one being emitted
	begun := make(chan struct{}, 2*threads)
	workers.Go(func() {
		defer close(jobs)
		for i := range n {
			select {
			case begun <- struct{}{}:
			case <-ctx.Done():
				return
			}
			select {
			case jobs <- i:
			case <-ctx.Done():
				return
			}
		}
	})
	for i := range lanes {
		if err := lanes[i].drain(ctx, emit); err != nil {
			return err
		}
		<-begun
	}
	return nil
}

// drain emits what comes through a lane until it is closed.
func (l *lane) drain(ctx context.Context, emit func(*column.Batch) error) error {
	for {
		select {
		case s, open := <-l.slabs:
			if !open {
				return l.err
			}
			if err := emitBatches(s, emit); err != nil {
				return err
			}
		case <-ctx.Done():
			return ctx.Err()
		}
	}
}

// emitBatches hands over a slab in batches.
func emitBatches(s *column.Batch, emit func(*column.Batch) error) error {
	for lo := 0; lo < s.N; lo += BatchRows {
		hi := min(lo+BatchRows, s.N)
		b := column.Batch{N: hi - lo, Cols: make([]column.Vector, len(s.Cols))}
		for i := range s.Cols {
			if s.Cols[i].Type == column.Null {
				b.Cols[i] = column.Vector{Type: column.Null, N: hi - lo}
				continue
			}
			b.Cols[i] = s.Cols[i].Slice(lo, hi)
		}
		if err := emit(&b); err != nil {
			return err
		}
	}
	return nil
}
