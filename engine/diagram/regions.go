package diagram

import (
	"context"
	"crypto/sha256"

	"nearcell/voronoi"
	"nearcell/voronoi/coverage"
	"nearcell/voronoi/solid"
)

// Regions are parts of the solid in which cells are measured. What was measured in them
// is kept with the diagram, as what was measured of whole cells is.
type Regions []solid.Solid

// key identifies regions by their content, in their order.
func (r Regions) key() Key {
	h := sha256.New()
	for _, s := range r {
		var k [16]byte // nowhere
		if s != nil {
			k = s.Key()
		}
		h.Write(k[:])
	}
	var key Key
	copy(key[:], h.Sum(nil))
	return key
}

// inRegions is what is known of the cells of a diagram in some regions, by site.
type inRegions struct {
	known []voronoi.Measures
	in    [][]voronoi.PartMeasures
}

// bytesPerRegion is what a cell in a region takes.
const bytesPerRegion = 96

// MeasureIn is Measure in regions: entry s of the answer belongs to site s of the diagram
// and holds what of its cell lies in each region, as voronoi.Diagram.MeasureIn gives it.
// Only the entries of the sites asked for are to be read, and none is to be changed.
func (h *Handle) MeasureIn(ctx context.Context, want voronoi.Measures, sites []int32, regions Regions,
	progress func(done, total int)) ([][]voronoi.PartMeasures, error) {
	if err := h.lock(ctx, progress); err != nil {
		return nil, err
	}
	defer h.unlock()
	key := regions.key()
	r := h.regions[key]
	if r == nil {
		r = &inRegions{known: make([]voronoi.Measures, h.d.Len()), in: make([][]voronoi.PartMeasures, h.d.Len())}
		if h.regions == nil {
			h.regions = map[Key]*inRegions{}
		}
		h.regions[key] = r
		h.store.grow(h, 32*int64(h.d.Len()))
	}
	want |= voronoi.Volume
	missing, all := r.missing(want, sites)
	if len(missing) == 0 {
		return r.in, nil
	}
	asked := missing
	if all {
		asked = nil // which way cells are made depends on how many are asked for
	}
	got, err := h.d.MeasureIn(ctx, want, asked, regions)
	if err != nil {
		return nil, err
	}
	var bytes int64
	in := make([][]voronoi.PartMeasures, len(r.in)) // others may be reading the old one
	copy(in, r.in)
	for i, s := range missing {
		in[s] = got[i]
		r.known[s] = want
		bytes += bytesPerRegion * int64(len(got[i]))
	}
	r.in = in
	h.store.count(len(missing), 0)
	h.store.grow(h, bytes)
	h.grown(ctx)
	return in, nil
}

// missing lists the sites asked for (nil: all) of which a wanted measure is unknown.
func (r *inRegions) missing(want voronoi.Measures, sites []int32) (list []int32, all bool) {
	if sites == nil {
		for s := range int32(len(r.known)) {
			if want&^r.known[s] != 0 {
				list = append(list, s)
			}
		}
		return list, len(list) == len(r.known)
	}
	for _, s := range sites {
		if want&^r.known[s] != 0 {
			list = append(list, s)
		}
	}
	return distinctSites(list, len(r.known)), false
}

// ContactsIn is Contacts as far as they lie in regions. They are not remembered.
func (h *Handle) ContactsIn(ctx context.Context, sites []int32, regions Regions, progress func(done, total int),
	yield func(site int32, contacts []voronoi.Contact) error) error {
	if progress != nil {
		h.progress.Store(&progress)
		defer h.progress.Store(nil)
	}
	defer h.book(ctx)
	return h.d.ContactsIn(ctx, sites, regions, yield)
}

// GapsIn are the places of one region that are farther from every site than all around
// them in it, computed once. sites are those of the diagram.
func (h *Handle) GapsIn(ctx context.Context, sites []voronoi.Vec, region solid.Solid, threads int, progress func(done, total int)) ([]coverage.Gap, error) {
	if err := h.lock(ctx, nil); err != nil {
		return nil, err
	}
	defer h.unlock()
	key := Key(region.Key())
	if found, known := h.gapsIn[key]; known {
		return found, nil
	}
	found, err := coverage.Gaps(ctx, h.d, sites, coverage.Options{Threads: threads, Progress: progress, Within: region})
	if err != nil {
		return nil, err
	}
	if h.gapsIn == nil {
		h.gapsIn = map[Key][]coverage.Gap{}
	}
	h.gapsIn[key] = found
	h.store.grow(h, bytesPerGap*int64(len(found)))
	return found, nil
}
