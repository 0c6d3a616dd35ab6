package diagram

import (
	"context"

	"nearcell/voronoi"
	"nearcell/voronoi/delaunay"
)

// Tetrahedra is the Delaunay tetrahedralisation of the sites that take part; see
// voronoi.Diagram.Tetrahedra.
func (h *Handle) Tetrahedra(ctx context.Context, progress func(done, total int)) (*delaunay.T, func(int32) int32, error) {
	if err := h.lock(ctx, progress); err != nil {
		return nil, nil, err
	}
	defer h.unlock()
	t, site, err := h.d.Tetrahedra(ctx)
	h.store.grow(h, h.keptMore())
	return t, site, err
}

// CostOfTetrahedra estimates what Tetrahedra takes if nothing is there yet.
func (h *Handle) CostOfTetrahedra() voronoi.Cost { return h.d.CostOfTetrahedra() }

// keptMore is what the diagram keeps beside its sites and did not at the last call.
func (h *Handle) keptMore() int64 {
	before := h.kept
	h.kept = h.d.Kept()
	return h.kept - before
}
