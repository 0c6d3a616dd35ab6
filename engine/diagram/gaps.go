package diagram

import (
	"context"

	"nearcell/voronoi"
	"nearcell/voronoi/coverage"
)

// bytesPerGap is what a remembered gap takes.
const bytesPerGap = 40

// Gaps are the places locally farthest from every site, computed once. sites are
// those of the diagram; threads 0: as many as there are processors. The gaps are not
// to be changed.
func (h *Handle) Gaps(ctx context.Context, sites []voronoi.Vec, threads int, progress func(done, total int)) ([]coverage.Gap, error) {
	if err := h.lock(ctx, nil); err != nil {
		return nil, err
	}
	defer h.unlock()
	if h.gaps != nil {
		return *h.gaps, nil
	}
	found, err := coverage.Gaps(ctx, h.d, sites, coverage.Options{Threads: threads, Progress: progress})
	if err != nil {
		return nil, err
	}
	h.gaps = &found
	h.store.grow(h, bytesPerGap*int64(len(found)))
	return found, nil
}
