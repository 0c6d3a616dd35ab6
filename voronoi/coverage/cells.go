package coverage

import (
	"context"
	"runtime"
	"sync"
	"sync/atomic"
)

// forCells calls do for 0 … n-1 on several goroutines, each with scratch of its own. What
// do writes for i must be apart from what it writes for others; then the answer does not
// depend on the number of threads.
func forCells[S any](ctx context.Context, n int, o Options, scratch func() S, do func(s S, i int) error) error {
	chunks := (n + chunkSize - 1) / chunkSize
	threads := o.Threads
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	var next, done atomic.Int64
	var guard sync.Mutex
	var failure error
	work := func() {
		s := scratch()
		for {
			chunk := int(next.Add(1)) - 1
			if chunk >= chunks {
				return
			}
			var err error
			for i := chunk * chunkSize; i < min(n, (chunk+1)*chunkSize) && err == nil; i++ {
				if err = ctx.Err(); err == nil {
					err = do(s, i)
				}
			}
			if err != nil {
				guard.Lock()
				failure = err
				guard.Unlock()
				next.Store(int64(chunks))
				return
			}
			if o.Progress != nil {
				guard.Lock()
				o.Progress(min(n, int(done.Add(1))*chunkSize), n)
				guard.Unlock()
			}
		}
	}
	var all sync.WaitGroup
	for range max(1, min(threads, chunks)) {
		all.Go(work)
	}
	all.Wait()
	return failure
}
