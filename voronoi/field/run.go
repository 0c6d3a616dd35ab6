package field

import (
	"context"
	"runtime"
	"sync"
	"sync/atomic"
)

// chunkSize is how many places a goroutine takes at a time; the context is looked at
// for each of them.
const chunkSize = 64

// Run says how many places are worked on. The zero value is good.
type Run struct {
	// Threads is how many goroutines work; 0: as many as there are processors. The
	// weights are the same for any number.
	Threads int
	// Progress is told now and then how many are done, from one goroutine at a time.
	// It may be nil.
	Progress func(done, total int)
}

// EachAt calls do with the weights at each of the places, from several goroutines and
// in any order, once each: what it writes must belong to place i alone. The error is
// that of the earliest place that failed, or of ctx.
func (f *Field) EachAt(ctx context.Context, places []Vec, r Run, do func(i int, at Place, weights []Weight) error) error {
	return each(ctx, len(places), r, func(w *Work, i int) error {
		at, weights, err := f.At(ctx, places[i], w)
		if err != nil {
			return err
		}
		return do(i, at, weights)
	})
}

// EachWithout is EachAt for the weights of the others at the places of sites.
func (f *Field) EachWithout(ctx context.Context, sites []int32, r Run, do func(i int, at Place, weights []Weight) error) error {
	return each(ctx, len(sites), r, func(w *Work, i int) error {
		at, weights, err := f.Without(ctx, sites[i], w)
		if err != nil {
			return err
		}
		return do(i, at, weights)
	})
}

// EachCell calls do with the number of neighbours of the cell that each place would
// get, -1 where it has none, as EachAt does.
func (f *Field) EachCell(ctx context.Context, places []Vec, r Run, do func(i, neighbours int) error) error {
	return each(ctx, len(places), r, func(w *Work, i int) error {
		n, err := f.Neighbours(places[i], w)
		if err != nil {
			return err
		}
		return do(i, n)
	})
}

// each calls do for 0 … n-1 in chunks shared among goroutines.
func each(ctx context.Context, n int, r Run, do func(w *Work, i int) error) error {
	threads := r.Threads
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	chunks := (n + chunkSize - 1) / chunkSize
	var next, done atomic.Int64
	var guard sync.Mutex // of failed, failure and calls of Progress
	failed, failure := chunks, error(nil)
	work := func() {
		w := &Work{}
		for {
			k := int(next.Add(1)) - 1
			if k >= chunks {
				return
			}
			var err error
			for i := k * chunkSize; i < min(n, (k+1)*chunkSize) && err == nil; i++ {
				if err = ctx.Err(); err == nil {
					err = do(w, i)
				}
			}
			guard.Lock()
			if err != nil {
				if k < failed {
					failed, failure = k, err
				}
				next.Store(int64(chunks))
			} else if r.Progress != nil {
				r.Progress(min(n, int(done.Add(1))*chunkSize), n)
			}
			guard.Unlock()
			if err != nil {
				return
			}
		}
	}
	if threads = min(threads, chunks); threads <= 1 {
		work()
		return failure
	}
	var all sync.WaitGroup
	for range threads {
		all.Go(work)
	}
	all.Wait()
	return failure
}

// EachOf calls do for 0 … n-1 from several goroutines, once each: for questions to a
// diagram that need no weights.
func EachOf(ctx context.Context, n int, r Run, do func(i int) error) error {
	return each(ctx, n, r, func(_ *Work, i int) error { return do(i) })
}
