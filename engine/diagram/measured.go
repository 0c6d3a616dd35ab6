package diagram

import (
	"context"
	"slices"

	"nearcell/voronoi"
	"nearcell/voronoi/delaunay"
)

// cellSet is what is known of the cells that were made one way: the last bits of measures
// may differ between the ways, and what is answered must not depend on what was asked
// before.
type cellSet struct {
	known  []voronoi.Measures // by site; nil: nothing
	cells  voronoi.Cells
	whole  bool             // the way
	sought voronoi.Measures // looked for among what is kept
	kept   voronoi.Measures // found there, or put there
	strays bool             // some cells were made the other way for want of memory
}

// set is that of the way in which so many cells are made.
func (h *Handle) set(want voronoi.Measures, sites []int32) (*cellSet, error) {
	whole, err := h.d.Whole(want, sites)
	if err != nil {
		return nil, err
	}
	i := 0
	if whole {
		i = 1
	}
	h.measured[i].whole = whole
	return &h.measured[i], nil
}

// Measure computes the wanted measures of the given sites (nil: all), as far as
// they are not known. In the answer, entry s of each array belongs to site s of
// the diagram; only the entries of the sites asked for are to be read, and none
// is to be changed. Cells.Sites is nil. Cells that have to be made get the measures of
// also, too, for which somebody will ask next, where those are made in the same way.
func (h *Handle) Measure(ctx context.Context, want, also voronoi.Measures, sites []int32,
	progress func(done, total int)) (*voronoi.Cells, error) {
	if err := h.lock(ctx, progress); err != nil {
		return nil, err
	}
	defer h.unlock()
	set, err := h.set(want, sites)
	if err != nil {
		return nil, err
	}
	h.recall(set, want)
	with := want | also
	if whole, err := h.d.Whole(with, sites); err != nil {
		return nil, err
	} else if whole != set.whole {
		with = want
	}
	missing, all := set.missing(want, sites, h.d.Len())
	if len(missing) > 0 || all {
		if all {
			missing = nil
		}
		got, went, err := h.d.MeasureWay(ctx, set.whole, with, missing)
		if err != nil {
			return nil, err
		}
		set.strays = set.strays || went != set.whole
		h.store.count(len(got.Sites), 0)
		h.store.grow(h, set.merge(with, got, h.d.Len()))
		if all || sites == nil {
			h.retain(ctx, set, with)
		}
		h.grown(ctx)
	} else if !h.indexed && set.kept != 0 {
		h.retain(ctx, set, 0)
	}
	view := set.cells
	return &view, nil
}

// missing lists the sites asked for of which a wanted measure is unknown; all
// tells that these are all n sites of the diagram.
func (c *cellSet) missing(want voronoi.Measures, sites []int32, n int) (list []int32, all bool) {
	if c.known == nil {
		if sites == nil {
			return nil, true
		}
		return distinctSites(sites, n), false
	}
	if sites == nil {
		for s := range int32(n) {
			if want&^c.known[s] != 0 {
				list = append(list, s)
			}
		}
		return list, len(list) == n
	}
	for _, s := range sites {
		if want&^c.known[s] != 0 {
			list = append(list, s)
		}
	}
	return distinctSites(list, n), false
}

// distinctSites is the sites in ascending order, each once.
func distinctSites(sites []int32, n int) []int32 {
	if len(sites) == 0 {
		return nil
	}
	list := slices.Clone(sites)
	slices.Sort(list)
	return slices.Compact(list)
}

// merge takes measures over and returns the bytes of new arrays.
func (c *cellSet) merge(want voronoi.Measures, got *voronoi.Cells, n int) int64 {
	bytes := c.begin(n)
	into := target{got.Sites, c.known}
	to := &c.cells
	const any = ^voronoi.Measures(0) // present whatever was asked for
	bytes += put(into, any, &to.Inside, got.Inside, 1)
	bytes += put(into, any, &to.Multiplicity, got.Multiplicity, 4)
	bytes += put(into, voronoi.Volume, &to.Volume, got.Volume, 8)
	bytes += put(into, voronoi.Area, &to.Area, got.Area, 8)
	bytes += put(into, voronoi.WallArea, &to.WallArea, got.WallArea, 8)
	bytes += put(into, voronoi.Faces, &to.Faces, got.Faces, 4)
	bytes += put(into, voronoi.Faces, &to.Edges, got.Edges, 4)
	bytes += put(into, voronoi.Faces, &to.Vertices, got.Vertices, 4)
	bytes += put(into, voronoi.Faces, &to.Shaped, got.Shaped, 1)
	bytes += put(into, voronoi.Neighbours, &to.Neighbours, got.Neighbours, 4)
	bytes += put(into, voronoi.Bounded, &to.Bounded, got.Bounded, 1)
	bytes += put(into, voronoi.Clipped, &to.Clipped, got.Clipped, 1)
	bytes += put(into, voronoi.Centroid, &to.Centroid, got.Centroid, 24)
	bytes += put(into, voronoi.Centroid, &to.HasCentroid, got.HasCentroid, 1)
	bytes += put(into, voronoi.Farthest, &to.Farthest, got.Farthest, 8)
	bytes += put(into, voronoi.NearestFace, &to.NearestFace, got.NearestFace, 8)
	for _, s := range got.Sites {
		c.known[s] |= want
	}
	return bytes
}

// begin makes room for what is known of n sites, and returns its bytes.
func (c *cellSet) begin(n int) int64 {
	if c.known != nil {
		return 0
	}
	c.known = make([]voronoi.Measures, n)
	delaunay.AdviseHugePages(c.known)
	return 4 * int64(n)
}

// target is where measures go: the sites that were measured, and what was known
// of every site before.
type target struct {
	sites []int32
	known []voronoi.Measures
}

// put writes the values of the measured sites into an array over all sites. An
// entry that was known is not written again: somebody may be reading it, and a
// cell measured twice gives the same bits.
func put[T any](t target, measure voronoi.Measures, array *[]T, values []T, size int64) int64 {
	if values == nil {
		return 0
	}
	n := len(t.known)
	if *array == nil && len(t.sites) == n && sorted(t.sites) {
		*array = values
		return int64(n) * size
	}
	var bytes int64
	if *array == nil {
		*array = make([]T, n)
		bytes = int64(n) * size
	}
	for i, s := range t.sites {
		if t.known[s]&measure == 0 {
			(*array)[s] = values[i]
		}
	}
	return bytes
}

func sorted(sites []int32) bool {
	for i, s := range sites {
		if s != int32(i) {
			return false
		}
	}
	return true
}
