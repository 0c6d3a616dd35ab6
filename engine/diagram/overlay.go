package diagram

import (
	"context"

	"nearcell/voronoi/overlay"
)

// Overlay are the pieces that the cells of the given sites (nil: all) share with those of
// another diagram, as overlay.Pieces gives them. They are not remembered.
func (h *Handle) Overlay(ctx context.Context, other *Handle, sites []int32, o overlay.Options, progress func(done, total int)) ([][]overlay.Piece, error) {
	// Not under the lock: a diagram may be laid over itself.
	if progress != nil {
		h.progress.Store(&progress)
		defer h.progress.Store(nil)
	}
	found, err := overlay.Pieces(ctx, h.d, other.d, sites, o)
	h.book(ctx)
	if other != h {
		other.book(ctx)
	}
	return found, err
}

// book counts what the diagram keeps by now.
func (h *Handle) book(ctx context.Context) {
	h.busy <- struct{}{}
	defer h.unlock()
	h.grown(ctx)
}
