package diagram

import (
	"context"
	"encoding/hex"
	"fmt"

	"nearcell/catalog/store"
	"nearcell/voronoi"
	"nearcell/voronoi/delaunay"
)

// tetrahedraPart is the name of the part that holds a tetrahedralisation.
const tetrahedraPart = "whole.tetrahedra"

// Tetrahedra is the Delaunay tetrahedralisation of the sites that take part; see
// voronoi.Diagram.Tetrahedra.
func (h *Handle) Tetrahedra(ctx context.Context, progress func(done, total int)) (*delaunay.T, func(int32) int32, error) {
	if err := h.lock(ctx, progress); err != nil {
		return nil, nil, err
	}
	defer h.unlock()
	t, site, err := h.d.Tetrahedra(ctx)
	h.grown(ctx)
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

// grown counts a tetrahedralisation that may have been built, and keeps it for later
// runs. It is to be called while the handle is locked, after whatever may build one.
func (h *Handle) grown(ctx context.Context) {
	more := h.keptMore()
	if more == 0 {
		return
	}
	h.store.grow(h, more)
	h.retainTetrahedra(ctx)
}

// recallTetrahedra is the tetrahedralisation that an earlier run has kept, nil if none.
func (h *Handle) recallTetrahedra(sites []float64, threads int) *delaunay.T {
	arrays, err := h.store.keeper.find(h.key, tetrahedraPart)
	if err != nil || arrays == nil {
		h.store.trouble(err)
		return nil
	}
	t, err := delaunay.Restore(storedTetrahedra(arrays), sites, threads)
	if err != nil {
		h.store.trouble(fmt.Errorf("the kept tetrahedra of %s are not used: %w", hex.EncodeToString(h.key[:]), err))
		return nil
	}
	h.store.mu.Lock()
	h.store.stats.Tetrahedra++
	h.store.mu.Unlock()
	return t
}

// retainTetrahedra keeps a tetrahedralisation that was built here.
func (h *Handle) retainTetrahedra(ctx context.Context) {
	if !h.store.keeps(h.d.Len()) || ctx.Err() != nil {
		return
	}
	s := h.d.StoreTetrahedra()
	if s == nil {
		return
	}
	parts := []part{{tetrahedraPart, tetrahedraArrays(s)}}
	if !h.indexed {
		parts = append(parts, part{indexPart, storedArrays(h.d.Store())})
	}
	h.indexed = true // or tried
	if err := h.store.keeper.keep(ctx, h, parts); err != nil {
		h.store.trouble(&KeepError{err})
	}
}

// tetrahedraArrays is a tetrahedralisation as the arrays of a record, storedTetrahedra
// the way back.
func tetrahedraArrays(s *delaunay.Stored) store.Arrays {
	return store.Arrays{
		{Name: "facts", I32: s.Facts}, {Name: "order", I32: s.Order}, {Name: "place", I32: s.Place},
		{Name: "repeats", I32: s.Repeats}, {Name: "points", F64: s.Points}, {Name: "tetrahedra", I32: s.Tets},
	}
}

func storedTetrahedra(a store.Arrays) *delaunay.Stored {
	return &delaunay.Stored{
		Facts: a.Find("facts").I32, Order: a.Find("order").I32, Place: a.Find("place").I32,
		Repeats: a.Find("repeats").I32, Points: a.Find("points").F64, Tets: a.Find("tetrahedra").I32,
	}
}
