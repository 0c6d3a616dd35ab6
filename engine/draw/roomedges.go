package draw

import (
	"math"
	"slices"
)

// The edges of a room are where two of its walls meet at an angle. Its walls come as facets
// of cells, whose edges on one line need not end at the same places, so that lines are taken
// apart at all of them.

// lineKey is the line that an edge lies on, in steps that are large beside rounding.
type lineKey [6]int64

// onLine is an edge on its line: a facet's edge i, from its lower end to its upper one.
type onLine struct {
	facet, edge int
	lo, hi      float64
}

// stretch is a part of a line between two ends of edges.
type stretch struct {
	lo, hi float64
	sharp  bool // walls meet here at an angle
}

// lineOf is the line of an edge, its direction, and where the edge lies along it.
func lineOf(a, b, origin Spot, size float64) (key lineKey, along Spot, lo, hi float64, ok bool) {
	a, b = minus(a, origin), minus(b, origin)
	along = minus(b, a)
	if !(length(along) > 1e-9*size) {
		return key, along, 0, 0, false
	}
	along = toLength1(along)
	for k := range 3 {
		if math.Abs(along[k]) > 1e-6 {
			if along[k] < 0 {
				along = Spot{-along[0], -along[1], -along[2]}
			}
			break
		}
	}
	lo, hi = times(a, along), times(b, along)
	for k := range 3 {
		key[k] = int64(math.Round(along[k] / 1.2345e-6)) // no round numbers, so that no line lies between two steps
		key[3+k] = int64(math.Round((a[k] - float64(lo*along[k])) / (1.2345e-6 * size)))
	}
	return key, along, min(lo, hi), max(lo, hi), true
}

// middle is that of the bounds.
func (x *Space) middle() (m Spot) {
	lo, hi := x.Bounds()
	for k := range 3 {
		m[k] = lo[k]/2 + hi[k]/2
	}
	return m
}

// markRoomEdges marks the parts of facets' edges where walls meet at an angle. An edge that
// is one in part is split there.
func markRoomEdges(list []facet, origin Spot, size float64) {
	lines := map[lineKey][]onLine{}
	for f := range list {
		for i, a := range list[f].at {
			if key, _, lo, hi, ok := lineOf(a, list[f].at[(i+1)%len(list[f].at)], origin, size); ok {
				lines[key] = append(lines[key], onLine{f, i, lo, hi})
			}
		}
	}
	stretches := map[lineKey][]stretch{}
	for key, edges := range lines { // each by itself: the order does not matter
		stretches[key] = apart(list, edges, 1e-7*size)
	}
	for f := range list {
		list[f].splitAt(stretches, origin, size)
	}
}

// apart takes a line apart at the ends of its edges.
func apart(list []facet, edges []onLine, tol float64) []stretch {
	var ends []float64
	for _, e := range edges {
		ends = append(ends, e.lo, e.hi)
	}
	slices.Sort(ends)
	slices.SortStableFunc(edges, func(a, b onLine) int {
		switch {
		case a.lo < b.lo:
			return -1
		case a.lo > b.lo:
			return 1
		}
		return 0
	})
	var out []stretch
	var here []onLine // edges that have begun and not ended
	next := 0
	for i := 0; i+1 < len(ends); i++ {
		lo, hi := ends[i], ends[i+1]
		if hi-lo <= tol {
			continue
		}
		m := (lo + hi) / 2
		for ; next < len(edges) && edges[next].lo < m; next++ {
			here = append(here, edges[next])
		}
		here = slices.DeleteFunc(here, func(e onLine) bool { return e.hi < m })
		sharp := slices.ContainsFunc(here, func(e onLine) bool { return times(list[e.facet].n, list[here[0].facet].n) < 0.999 })
		if n := len(out); n > 0 && out[n-1].sharp == sharp && lo-out[n-1].hi <= 2*tol {
			out[n-1].hi = hi
			continue
		}
		out = append(out, stretch{lo, hi, sharp})
	}
	return out
}

// splitAt gives the edges of a facet the kinds of their stretches.
func (f *facet) splitAt(stretches map[lineKey][]stretch, origin Spot, size float64) {
	var at []Spot
	var kinds []edgeKind
	for i, a := range f.at {
		b := f.at[(i+1)%len(f.at)]
		key, along, lo, hi, ok := lineOf(a, b, origin, size)
		if !ok {
			at, kinds = append(at, a), append(kinds, f.edges[i])
			continue
		}
		var within []stretch
		for _, s := range stretches[key] {
			if s.lo < hi-1e-7*size && s.hi > lo+1e-7*size {
				within = append(within, s)
			}
		}
		forward := times(minus(b, a), along) > 0
		if !forward {
			slices.Reverse(within)
		}
		if len(within) == 0 {
			within = []stretch{{}}
		}
		for k, s := range within {
			start := a
			if k > 0 {
				end := s.lo
				if !forward {
					end = s.hi
				}
				share := (end - lo) / (hi - lo)
				if !forward {
					share = 1 - share
				}
				start = between(a, b, share)
			}
			kind := f.edges[i]
			if s.sharp {
				kind = roomEdge
			}
			at, kinds = append(at, start), append(kinds, kind)
		}
	}
	f.at, f.edges = at, kinds
}

// RoomEdges are the edges where two walls of the room meet, each once.
func (x *Space) RoomEdges() [][2]Spot { return roomEdges(x.walls(), x.middle(), x.size()) }

func roomEdges(walls []facet, origin Spot, size float64) [][2]Spot {
	type span struct {
		a, along Spot // the first edge on the line, from which the others are measured
		at       float64
		spans    [][2]float64
	}
	lines := map[lineKey]*span{}
	var keys []lineKey
	for k := range walls {
		f := &walls[k]
		for i, a := range f.at {
			b := f.at[(i+1)%len(f.at)]
			key, along, lo, hi, ok := lineOf(a, b, origin, size)
			if !ok || f.edges[i] != roomEdge {
				continue
			}
			l := lines[key]
			if l == nil {
				l = &span{a: a, along: along, at: times(minus(a, origin), along)}
				lines[key] = l
				keys = append(keys, key)
			}
			l.spans = append(l.spans, [2]float64{lo, hi})
		}
	}
	var list [][2]Spot
	for _, key := range keys {
		l := lines[key]
		for _, s := range united(l.spans, 1e-7*size) {
			var e [2]Spot
			for side := range 2 {
				for k := range 3 {
					e[side][k] = l.a[k] + float64((s[side]-l.at)*l.along[k])
				}
			}
			list = append(list, e)
		}
	}
	return list
}

// united joins spans that touch.
func united(spans [][2]float64, tol float64) (out [][2]float64) {
	slices.SortFunc(spans, func(a, b [2]float64) int {
		switch {
		case a[0] < b[0]:
			return -1
		case a[0] > b[0]:
			return 1
		}
		return 0
	})
	for _, s := range spans {
		if n := len(out); n > 0 && s[0] <= out[n-1][1]+tol {
			out[n-1][1] = math.Max(out[n-1][1], s[1])
			continue
		}
		out = append(out, s)
	}
	return out
}
