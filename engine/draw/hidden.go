package draw

import "math"

// What hides what is found by splitting space (Fuchs, Kedem and Naylor, 1980): the plane of
// a facet has the others before it, behind it, or in it; what lies on both sides is split.
// Painted from the far side of each plane to the near one, the picture is right for facets
// that do not run through each other, whatever their shape together. The walls of a room
// lie in few planes, so that little is split.

// plane is a node: the facets in a plane, and what lies on its sides.
type plane struct {
	n              Spot
	d              float64
	in             []*facet
	before, behind *plane
}

// triedPlanes is how many facets are tried for the next plane.
const triedPlanes = 12

// split builds the tree; tol is how near to a plane is in it.
func split(list []*facet, tol float64) *plane {
	if len(list) == 0 {
		return nil
	}
	node := &plane{}
	best := math.MaxInt
	for k := range min(len(list), triedPlanes) {
		f := list[k*len(list)/min(len(list), triedPlanes)]
		d := times(f.n, f.at[0])
		if cost := costOf(list, f.n, d, tol); cost < best {
			best, node.n, node.d = cost, f.n, d
		}
	}
	var before, behind []*facet
	for _, f := range list {
		lo, hi := f.reach(node.n, node.d)
		switch {
		case lo >= -tol && hi <= tol:
			node.in = append(node.in, f)
		case lo >= -tol:
			before = append(before, f)
		case hi <= tol:
			behind = append(behind, f)
		default:
			a, b := f.slice(node.n, node.d, tol)
			before, behind = append(before, a), append(behind, b)
		}
	}
	if len(node.in) == 0 { // a facet that is not quite plane: it alone is the node
		node.in = list[:1]
		node.before = split(list[1:], tol)
		return node
	}
	node.before, node.behind = split(before, tol), split(behind, tol)
	return node
}

// costOf is what a plane costs: facets split, and sides that differ.
func costOf(list []*facet, n Spot, d, tol float64) int {
	parted, ahead, back := 0, 0, 0
	for _, f := range list {
		lo, hi := f.reach(n, d)
		switch {
		case lo >= -tol && hi <= tol:
		case lo >= -tol:
			ahead++
		case hi <= tol:
			back++
		default:
			parted++
		}
	}
	return 8*parted + max(ahead-back, back-ahead)
}

// reach is how far a facet reaches from a plane along its normal.
func (f *facet) reach(n Spot, d float64) (lo, hi float64) {
	lo, hi = math.Inf(1), math.Inf(-1)
	for _, p := range f.at {
		x := times(n, p) - d
		lo, hi = math.Min(lo, x), math.Max(hi, x)
	}
	return lo, hi
}

// paint gives the facets from far to near as seen from a direction, those of one plane
// together.
func (p *plane) paint(from Spot, draw func(list []*facet)) {
	if p == nil {
		return
	}
	far, near := p.behind, p.before
	if times(p.n, from) < 0 {
		far, near = near, far
	}
	far.paint(from, draw)
	draw(p.in)
	near.paint(from, draw)
}
