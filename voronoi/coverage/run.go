package coverage

import (
	"context"
	"runtime"
	"sync"
	"sync/atomic"
)

// chunkSize is how many cells a goroutine takes at a time; the context is looked at
// before each.
const chunkSize = 64

// run looks through all cells and gives what it finds, cell by cell in their order.
func (s *search) run(ctx context.Context, o Options) ([]Gap, error) {
	n := s.tree.Len()
	chunks := (n + chunkSize - 1) / chunkSize
	threads := o.Threads
	if threads <= 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	found := make([][]Gap, chunks)
	var next, done atomic.Int64
	var guard sync.Mutex // of failure and calls of Progress
	var failure error
	work := func() {
		k := &seeker{search: s, ball: ball{tree: s.tree}}
		for {
			chunk := int(next.Add(1)) - 1
			if chunk >= chunks {
				return
			}
			var err error
			for i := chunk * chunkSize; i < min(n, (chunk+1)*chunkSize) && err == nil; i++ {
				if err = ctx.Err(); err == nil { // on a sphere of sites a cell takes its time
					err = k.cellOf(int32(i))
				}
			}
			if err != nil {
				guard.Lock()
				failure = err
				guard.Unlock()
				next.Store(int64(chunks))
				return
			}
			found[chunk], k.found = k.found, nil
			if o.Progress != nil {
				guard.Lock()
				o.Progress(min(n, int(done.Add(1))*chunkSize), n)
				guard.Unlock()
			}
		}
	}
	if threads = min(threads, chunks); threads <= 1 {
		work()
	} else {
		var all sync.WaitGroup
		for range threads {
			all.Go(work)
		}
		all.Wait()
	}
	if failure != nil {
		return nil, failure
	}
	var all []Gap
	for _, f := range found {
		all = append(all, f...)
	}
	return all, nil
}
