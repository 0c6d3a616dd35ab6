package field

import (
	"context"
	"math"
	"runtime"
	"slices"
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
	if err := f.Prepare(ctx, len(places)); err != nil {
		return err
	}
	order := alongCurve(places)
	return each(ctx, len(places), r, func(w *Work, i int) error {
		if order != nil {
			i = int(uint32(order[i]))
		}
		at, weights, err := f.At(ctx, places[i], w)
		if err != nil {
			return err
		}
		return do(i, at, weights)
	})
}

// alongCurve orders places, in the lower halves of the words, so that near ones follow
// each other (Morton 1966): what the one needs of the diagram is then at hand for the
// next. nil: as they are.
func alongCurve(places []Vec) []uint64 {
	if len(places) < 1024 || len(places) > math.MaxUint32 {
		return nil
	}
	lo, hi := places[0], places[0]
	for _, p := range places {
		lo = Vec{X: min(lo.X, p.X), Y: min(lo.Y, p.Y), Z: min(lo.Z, p.Z)}
		hi = Vec{X: max(hi.X, p.X), Y: max(hi.Y, p.Y), Z: max(hi.Z, p.Z)}
	}
	size := max(hi.X-lo.X, hi.Y-lo.Y, hi.Z-lo.Z)
	if !(size > 0) || math.IsInf(size, 0) {
		return nil
	}
	order := make([]uint64, len(places))
	for i, p := range places {
		e := sub(p, lo)
		order[i] = (thirds(e.X/size)|thirds(e.Y/size)<<1|thirds(e.Z/size)<<2)<<32 | uint64(i)
	}
	slices.Sort(order)
	return order
}

// thirds spreads ten bits of a number of [0, 1] to every third bit.
func thirds(x float64) uint64 {
	n := uint64(min(1023, max(0, 1024*x)))
	n = (n | n<<16) & 0x30000ff
	n = (n | n<<8) & 0x300f00f
	n = (n | n<<4) & 0x30c30c3
	return (n | n<<2) & 0x9249249
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
	if err := f.Prepare(ctx, len(places)); err != nil {
		return err
	}
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
