package diagram

import (
	"context"

	"nearcell/voronoi"
	"nearcell/voronoi/field"
)

// Field gives the weights of the sites of the diagram at places. tolerance is that of
// the diagram; places is how many the field will be asked about.
func (h *Handle) Field(ctx context.Context, tolerance float64, o field.Options, places int, progress func(done, total int)) (*field.Field, error) {
	if err := h.lock(ctx, progress); err != nil {
		return nil, err
	}
	defer h.unlock()
	f, err := field.New(ctx, h.d, tolerance, o)
	if err == nil {
		err = f.Prepare(ctx, places)
	}
	h.grown(ctx)
	return f, err
}

// Nearest is the site nearest to p, the representative of its group, and the distance.
func (h *Handle) Nearest(p voronoi.Vec) (site int32, distance float64) { return h.d.Nearest(p) }
