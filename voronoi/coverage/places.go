package coverage

import (
	"cmp"
	"container/heap"
	"context"
	"math"
	"slices"

	"nearcell/voronoi"
	"nearcell/voronoi/solid"
)

// Placement is a proposed further site.
type Placement struct {
	At     Vec
	Radius float64 // distance from At to the nearest site, those placed before among them
	After  float64 // covering radius with it; without a solid the radius of the largest gap left
	Left   Vec     // where that gap is; without meaning where After is 0
	Index  int32   // in PlaceOptions.Among; -1 without
}

// PlaceOptions say where further sites may stand. The zero value is: anywhere.
type PlaceOptions struct {
	Options
	Clearance float64 // least distance from the walls of the solid
	Among     []Vec   // the places that may be taken; nil: all
}

// Places proposes n further sites, each in the place that is then farthest from all sites (the
// greedy farthest point, Gonzalez 1985: within twice the least covering radius that as many sites can
// have, where they begin from nothing and may stand anywhere). It gives fewer
// where no place is left that is not a site already.
//
// Gaps are found once. A further site takes away the gaps that it is nearest to; new ones have
// it among their nearest sites, so that they are corners of its own cell, and no other cell is
// looked at. With Clearance, the place is found by branch and bound over boxes (the distances to
// sites and walls change no faster than the place), within ClearanceWithin of the greatest radius, and set where
// walls and sites meet in a corner to rounding.
//
// Radii never increase (with Clearance, by no more than ClearanceWithin). Equal ones are told apart by x, y, z. With
// Options.Within all this is of that part, and the walls are those of the part. With stretched
// distances Clearance without Among is ErrStretched. The error is as of [Gaps].
func Places(ctx context.Context, d *voronoi.Diagram, sites []Vec, n int, o PlaceOptions) ([]Placement, error) {
	if voronoi.IsStretch(d.Stretch()) {
		return stretchedPlaces(ctx, d, sites, n, o)
	}
	found, err := Gaps(ctx, d, sites, o.Options)
	if err != nil {
		return nil, err
	}
	s, err := newSearch(d, sites, o.Options)
	if err != nil {
		return nil, err
	}
	p := &placer{seeker: &seeker{search: s, ball: ball{tree: s.tree}}, gaps: gapHeap(slices.Clone(found)), size: s.grain * 0x1p46}
	heap.Init(&p.gaps)
	switch {
	case o.Among != nil:
		p.choose = p.amongOf(o)
	case o.Clearance > 0:
		p.choose = p.clearOf(o)
	default:
		p.choose = p.largestGap
	}
	var placed []Placement
	for len(placed) < n {
		if err := ctx.Err(); err != nil {
			return nil, err
		}
		next, ok := p.choose()
		if !ok || !(next.Radius > s.grain) {
			break
		}
		if err := p.add(next.At); err != nil {
			return nil, err
		}
		if g := p.top(); g != nil {
			next.After, next.Left = g.Radius, g.At
		}
		placed = append(placed, next)
		if o.Progress != nil {
			o.Progress(len(placed), n)
		}
	}
	return placed, nil
}

// placer has the gaps among the sites and those placed so far.
type placer struct {
	*seeker
	gaps   gapHeap
	size   float64
	choose func() (Placement, bool)
}

type gapHeap []Gap

func (h gapHeap) Len() int      { return len(h) }
func (h gapHeap) Swap(i, j int) { h[i], h[j] = h[j], h[i] }
func (h *gapHeap) Push(x any)   { *h = append(*h, x.(Gap)) }
func (h *gapHeap) Pop() any {
	last := (*h)[len(*h)-1]
	*h = (*h)[:len(*h)-1]
	return last
}
func (h gapHeap) Less(i, j int) bool {
	return cmp.Or(cmp.Compare(h[j].Radius, h[i].Radius), before(h[i].At, h[j].At)) < 0
}

func before(a, b Vec) int {
	return cmp.Or(cmp.Compare(a.X, b.X), cmp.Compare(a.Y, b.Y), cmp.Compare(a.Z, b.Z))
}

// top is the largest gap that is still one: those with a placed site nearer are gone.
func (p *placer) top() *Gap {
	for len(p.gaps) > 0 {
		g := &p.gaps[0]
		if p.toMore(g.At) >= g.Radius*(1-equal) {
			return g
		}
		heap.Pop(&p.gaps)
	}
	return nil
}

// toMore is the distance to the nearest placed site.
func (p *placer) toMore(at Vec) float64 {
	best := math.Inf(1)
	for _, q := range p.ball.more {
		best = min(best, length(sub(q, at)))
	}
	return best
}

func (p *placer) toSites(at Vec) float64 {
	i, _ := p.tree.Nearest(at)
	if i < 0 {
		return math.Inf(1)
	}
	return length(sub(p.tree.Point(i), at))
}

// add places a site and finds the gaps that it is nearest to.
func (p *placer) add(at Vec) error {
	p.ball.more = append(p.ball.more, at)
	p.found = p.found[:0]
	if err := p.cellAt(at); err != nil {
		return err
	}
	for _, g := range merge(slices.Clone(p.found)) {
		heap.Push(&p.gaps, g)
	}
	return nil
}

func (p *placer) largestGap() (Placement, bool) {
	g := p.top()
	if g == nil {
		return Placement{}, false
	}
	return Placement{At: g.At, Radius: min(g.Radius, p.toMore(g.At)), Index: -1}, true
}

// amongOf chooses from a list.
func (p *placer) amongOf(o PlaceOptions) func() (Placement, bool) {
	body := p.bodyOf(o)
	type place struct {
		index int32
		far   float64
	}
	var list []place
	for i, at := range o.Among {
		if Allowed(body, at, o.Clearance) {
			list = append(list, place{int32(i), p.toSites(at)})
		}
	}
	slices.SortStableFunc(list, func(a, b place) int { return before(o.Among[a.index], o.Among[b.index]) })
	known := 0
	return func() (Placement, bool) {
		best := -1
		for i := range list {
			at := o.Among[list[i].index]
			for _, q := range p.ball.more[known:] {
				list[i].far = min(list[i].far, length(sub(q, at)))
			}
			if best < 0 || list[i].far > list[best].far {
				best = i
			}
		}
		known = len(p.ball.more)
		if best < 0 {
			return Placement{}, false
		}
		return Placement{At: o.Among[list[best].index], Radius: list[best].far, Index: list[best].index}, true
	}
}

// bodyOf is the space in which sites may stand; nil: anywhere.
func (p *placer) bodyOf(o PlaceOptions) solid.Solid {
	if o.Within != nil {
		return o.Within
	}
	return p.d.Solid()
}

// Allowed tells whether a site may stand at a place: in the solid, and that far from its walls.
func Allowed(body solid.Solid, at Vec, clearance float64) bool {
	if body == nil {
		return true
	}
	switch body.Side(at, 0) {
	case solid.Outside:
		return false
	case solid.On:
		return clearance <= 0
	}
	return clearance <= 0 || body.Distance(at) >= clearance*(1-1e-12)
}
