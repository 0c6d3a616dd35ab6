package voronoi

import (
	"context"
	"slices"
	"sync"
	"sync/atomic"
)

// chunkSize is how many cells a goroutine takes at a time; the context is looked
// at between chunks.
const chunkSize = 64

// forEach calls do for positions 0 … n-1, in chunks shared among the diagram's
// goroutines, each with its own builder. do must write only what belongs to its
// position. The error of the lowest chunk that failed is returned, so that it does
// not depend on timing. base and total are for the progress only.
func (d *Diagram) forEach(ctx context.Context, n, base, total int, do func(b *builder, i int) error) error {
	if d.progress == nil {
		return d.forEachTold(ctx, n, nil, do)
	}
	return d.forEachTold(ctx, n, func(done, _ int) { d.progress(base+done, total) }, do)
}

// forEachTold is forEach that tells of the positions done, from one goroutine at a time.
func (d *Diagram) forEachTold(ctx context.Context, n int, tell func(done, of int), do func(b *builder, i int) error) error {
	chunks := (n + chunkSize - 1) / chunkSize
	workers := min(d.threads, chunks)
	var next, done atomic.Int64
	var guard sync.Mutex // of failed, failure and calls of progress
	failed, failure := chunks, error(nil)
	work := func() {
		b := d.builder()
		defer d.free(b)
		for {
			k := int(next.Add(1)) - 1
			if k >= chunks {
				return
			}
			err := ctx.Err()
			for i := k * chunkSize; i < min(n, (k+1)*chunkSize) && err == nil; i++ {
				err = do(b, i)
			}
			if err != nil {
				guard.Lock()
				if k < failed {
					failed, failure = k, err
				}
				guard.Unlock()
				next.Store(int64(chunks))
				return
			}
			if tell != nil {
				guard.Lock()
				tell(min(n, int(done.Add(1))*chunkSize), n)
				guard.Unlock()
			}
		}
	}
	if workers <= 1 {
		work()
		return failure
	}
	var all sync.WaitGroup
	for range workers {
		all.Go(work)
	}
	all.Wait()
	return failure
}

// request is what is asked of a diagram, in an order that is good to work in.
type request struct {
	sites []int32 // as asked
	rows  []int32 // rows that have a cell, by cell
	cells []int32 // distinct cells, ascending
	start []int32 // rows[start[k]:start[k+1]] belong to cells[k]
}

// request checks the sites (nil: all) and sorts them by cell.
func (d *Diagram) request(sites []int32) (*request, error) {
	if sites == nil {
		sites = make([]int32, len(d.cell))
		for i := range sites {
			sites[i] = int32(i)
		}
	}
	r := &request{sites: sites, rows: make([]int32, 0, len(sites))}
	for row, s := range sites {
		if s < 0 || int(s) >= len(d.cell) {
			return nil, &NoSuchSiteError{int(s), len(d.cell)}
		}
		if d.cell[s] >= 0 {
			r.rows = append(r.rows, int32(row))
		}
	}
	d.sortRows(r)
	for i, row := range r.rows {
		if c := d.cell[sites[row]]; i == 0 || c != r.cells[len(r.cells)-1] {
			r.cells = append(r.cells, c)
			r.start = append(r.start, int32(i))
		}
	}
	r.start = append(r.start, int32(len(r.rows)))
	return r, nil
}

// sortRows orders the rows by cell, and rows of one cell as they were asked for:
// by counting where most sites are asked for, else by comparing.
func (d *Diagram) sortRows(r *request) {
	n := d.tree.Len()
	if len(r.rows) < n/8 {
		slices.SortFunc(r.rows, func(a, b int32) int {
			if c := d.cell[r.sites[a]] - d.cell[r.sites[b]]; c != 0 {
				return int(c)
			}
			return int(a - b)
		})
		return
	}
	next := make([]int32, n+1)
	for _, row := range r.rows {
		next[d.cell[r.sites[row]]+1]++
	}
	for c := range n {
		next[c+1] += next[c]
	}
	sorted := make([]int32, len(r.rows))
	for _, row := range r.rows {
		c := d.cell[r.sites[row]]
		sorted[next[c]] = row
		next[c]++
	}
	r.rows = sorted
}
