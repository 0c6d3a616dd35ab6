package draw

import (
	"math"
	"slices"
)

// facet is a plane convex polygon in space, of a body.
type facet struct {
	at    []Spot
	edges []edgeKind // of each corner, the edge to the next one
	n     Spot       // the outward normal, of length 1
	body  int
	cap   bool // it lies in the plane of the cut
	area  float64
}

// edgeKind is how an edge is drawn.
type edgeKind uint8

const (
	noEdge   edgeKind = iota // where a facet was split for the order of painting
	cellEdge                 // between cells
	roomEdge                 // where two walls meet
)

// newFacet makes a facet; none of an area that vanishes beside the room's size.
func newFacet(at []Spot, body int, least float64) (facet, bool) {
	n := areaNormal(at)
	area := length(n)
	if !(area > least) {
		return facet{}, false
	}
	f := facet{at: at, n: toLength1(n), body: body, area: area, edges: make([]edgeKind, len(at))}
	for i := range f.edges {
		f.edges[i] = cellEdge
	}
	return f, true
}

// size is the diagonal of the bounds, 1 where there is none.
func (x *Space) size() float64 {
	lo, hi := x.Bounds()
	if d := length(minus(hi, lo)); d > 0 && !math.IsInf(d, 0) {
		return d
	}
	return 1
}

// walls are all faces on walls of the room.
func (x *Space) walls() []facet {
	size := x.size()
	least := float64(size*size) * 1e-14
	var list []facet
	add := func(at []Spot, body int) {
		if f, ok := newFacet(at, body, least); ok {
			list = append(list, f)
		}
	}
	for i := range x.Bodies {
		for k := range x.Bodies[i].Hulls {
			h := &x.Bodies[i].Hulls[k]
			for _, f := range h.Faces {
				switch f.Other {
				case Wall:
					add(h.spots(f.Loop), i)
					if n := len(list); n > 0 && list[n-1].body == i {
						h.plainEdges(&list[n-1], size*1e-9, false)
					}
				case Seam:
					for _, w := range f.Walls {
						add(slices.Clone(w), i)
					}
				}
			}
		}
	}
	markRoomEdges(list, x.middle(), size)
	return list
}

// plainEdges drops the edges of a facet of the hull that lie in its seams, where the cell
// goes on; with walls, those that lie in a wall are edges of the room.
func (h *Hull) plainEdges(f *facet, tol float64, walls bool) {
	for k := range h.Faces {
		face := &h.Faces[k]
		seam, wall := face.Other == Seam && len(face.Walls) == 0, walls && face.Other == Wall
		if !seam && !wall {
			continue
		}
		at := h.spots(face.Loop)
		n := areaNormal(at)
		if !(length(n) > 0) {
			continue
		}
		n = toLength1(n)
		if math.Abs(times(n, f.n)) > 0.999999 {
			continue // the facet itself, or one that goes on beside it
		}
		d := times(n, at[0])
		for i, a := range f.at {
			b := f.at[(i+1)%len(f.at)]
			if math.Abs(times(n, a)-d) > tol || math.Abs(times(n, b)-d) > tol {
				continue
			}
			if f.edges[i] = noEdge; wall {
				f.edges[i] = roomEdge
			}
		}
	}
}

// spots are the corners of a loop.
func (h *Hull) spots(loop []int32) []Spot {
	at := make([]Spot, len(loop))
	for i, c := range loop {
		at[i] = h.Corners[c]
	}
	return at
}

// slice is what of a facet lies on either side of a plane with the normal n through the
// places p with times(n, p) = d; what is nearer to it than tol lies on both.
func (f *facet) slice(n Spot, d, tol float64) (before, behind *facet) {
	before = &facet{n: f.n, body: f.body, cap: f.cap}
	behind = &facet{n: f.n, body: f.body, cap: f.cap}
	put := func(to *facet, p Spot, e edgeKind) {
		to.at = append(to.at, p)
		to.edges = append(to.edges, e)
	}
	for i, a := range f.at {
		b := f.at[(i+1)%len(f.at)]
		da, db := times(n, a)-d, times(n, b)-d
		up, down := da >= -tol, da <= tol
		kind := f.edges[i]
		switch {
		case up && down: // on the plane: the edge goes to the side of its other end
			put(before, a, either(db >= -tol, kind))
			put(behind, a, either(db <= tol, kind))
		case up:
			put(before, a, kind)
		default:
			put(behind, a, kind)
		}
		if da > tol && db < -tol || da < -tol && db > tol {
			p := between(a, b, da/(da-db))
			if da > 0 { // leaves the front along the plane
				put(before, p, noEdge)
				put(behind, p, kind)
			} else {
				put(before, p, kind)
				put(behind, p, noEdge)
			}
		}
	}
	before.area, behind.area = length(areaNormal(before.at)), length(areaNormal(behind.at))
	return before, behind
}

func either(is bool, kind edgeKind) edgeKind {
	if is {
		return kind
	}
	return noEdge
}

// cut is the convex polygon in which a plane cuts a hull, as seen from the side to which
// its normal n points; nil where it does not, and where the hull only touches it from that
// side.
func (h *Hull) cut(n Spot, d, tol float64) []Spot {
	depth := make([]float64, len(h.Corners))
	low := 0.0
	for i, c := range h.Corners {
		depth[i] = times(n, c) - d
		low = math.Min(low, depth[i])
	}
	if low >= -tol {
		return nil
	}
	var list []Spot
	for i, c := range h.Corners {
		if math.Abs(depth[i]) <= tol {
			list = append(list, c)
		}
	}
	for _, f := range h.Faces {
		for i, a := range f.Loop {
			b := f.Loop[(i+1)%len(f.Loop)]
			if a < b && (depth[a] > tol && depth[b] < -tol || depth[a] < -tol && depth[b] > tol) { // its other face has it the other way
				list = append(list, between(h.Corners[a], h.Corners[b], depth[a]/(depth[a]-depth[b])))
			}
		}
	}
	if len(list) < 3 {
		return nil
	}
	return around(list, n)
}

// around puts the corners of a convex polygon in order, counter-clockwise about n.
func around(list []Spot, n Spot) []Spot {
	var m Spot
	for _, p := range list {
		for k := range 3 {
			m[k] += p[k] / float64(len(list))
		}
	}
	u, v := across(n)
	angle := func(p Spot) float64 { d := minus(p, m); return math.Atan2(times(d, v), times(d, u)) }
	slices.SortStableFunc(list, func(a, b Spot) int {
		switch x, y := angle(a), angle(b); {
		case x < y:
			return -1
		case x > y:
			return 1
		}
		return 0
	})
	return list
}

// across are two directions that are right-handed with n, the second one upward where that
// can be.
func across(n Spot) (u, v Spot) {
	up := Spot{0, 0, 1}
	if math.Abs(n[2]) > 0.999999*length(n) {
		up = Spot{0, 1, 0}
	}
	u = toLength1(crossed(up, n))
	return u, toLength1(crossed(n, u))
}
