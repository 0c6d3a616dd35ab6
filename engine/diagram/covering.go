package diagram

import (
	"context"

	"nearcell/voronoi"
	"nearcell/voronoi/coverage"
	"nearcell/voronoi/section"
)

// Section cuts the diagram by a plane. It is not kept.
func (h *Handle) Section(ctx context.Context, p section.Plane, sites []int32, o section.Options) (*section.Section, error) {
	return section.Cut(ctx, h.d, p, sites, o)
}

// Spacing measures how far the solid lies from the sites. It is not kept.
func (h *Handle) Spacing(ctx context.Context, distances []float64, across, up float64, o coverage.Options) (*coverage.Spread, error) {
	return coverage.Spacing(ctx, h.d, distances, across, up, o)
}

// Redundancy tells what becomes of the cell of each site without it. It is not kept.
func (h *Handle) Redundancy(ctx context.Context, o coverage.Options) ([]coverage.Loss, error) {
	return coverage.Redundancy(ctx, h.d, o)
}

// Places proposes further sites; sites are those of the diagram. They are not kept.
func (h *Handle) Places(ctx context.Context, sites []voronoi.Vec, n int, o coverage.PlaceOptions) ([]coverage.Placement, error) {
	return coverage.Places(ctx, h.d, sites, n, o)
}

// Allowed tells whether a site may stand at a place: in the solid, and that far from its walls.
func (h *Handle) Allowed(at voronoi.Vec, clearance float64) bool {
	return coverage.Allowed(h.d.Solid(), at, clearance)
}
