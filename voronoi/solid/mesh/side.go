package mesh

import (
	"math"

	"gonum.org/v1/gonum/spatial/r2"

	"nearcell/voronoi/predicate"
	"nearcell/voronoi/solid"
)

// surface is a set of triangles with an index, closed if over every edge the directed
// uses cancel.
type surface struct {
	v      []Vec
	t      [][3]int32
	tree   *tree
	lo, hi Vec
	pass   func(t int32) bool // nil; else the triangles that count
}

// vec2 is a place seen along an axis.
type vec2 = r2.Vec

func newSurface(v []Vec, t [][3]int32) *surface {
	s := &surface{v: v, t: t}
	s.lo, s.hi = Vec{X: inf, Y: inf, Z: inf}, Vec{X: -inf, Y: -inf, Z: -inf}
	for i := range t {
		lo, hi := s.box(int32(i))
		s.lo, s.hi = least(s.lo, lo), most(s.hi, hi)
	}
	s.tree = newTree(len(t), s.box)
	return s
}

func (s *surface) box(i int32) (lo, hi Vec) {
	a, b, c := s.corners(i)
	return least(least(a, b), c), most(most(a, b), c)
}

func (s *surface) corners(i int32) (a, b, c Vec) {
	t := &s.t[i]
	return s.v[t[0]], s.v[t[1]], s.v[t[2]]
}

// winding is how often the surface winds around p: 1 inside a solid, 0 outside; on tells
// that p lies on it. It counts the triangles above p, by exact predicates. Where p lies
// right below an edge, p is thought of as moved by an infinitesimal along y and a much
// smaller one along x, as for all triangles alike (simulation of simplicity; Edelsbrunner
// & Mücke 1990).
func (s *surface) winding(p Vec) (w int, on bool) {
	if !(p.X >= s.lo.X && p.X <= s.hi.X && p.Y >= s.lo.Y && p.Y <= s.hi.Y && p.Z >= s.lo.Z && p.Z <= s.hi.Z) {
		return 0, false
	}
	q := xy(p)
	s.tree.inBox(p, Vec{X: p.X, Y: p.Y, Z: inf}, func(i int32) bool {
		a, b, c := s.corners(i)
		if min(a.X, b.X, c.X) > p.X || max(a.X, b.X, c.X) < p.X ||
			min(a.Y, b.Y, c.Y) > p.Y || max(a.Y, b.Y, c.Y) < p.Y || max(a.Z, b.Z, c.Z) < p.Z || s.pass != nil && !s.pass(i) {
			return true
		}
		side := 2 // not known
		if min(a.Z, b.Z, c.Z) <= p.Z {
			if side = predicate.Orient3D(a, b, c, p); side == 0 && inTriangle(a, b, c, p) {
				on = true
				return false
			}
		}
		turn := predicate.Orient2D(xy(a), xy(b), xy(c))
		if turn == 0 {
			return true
		}
		if shifted(xy(a), xy(b), q) != turn || shifted(xy(b), xy(c), q) != turn || shifted(xy(c), xy(a), q) != turn {
			return true
		}
		if side == 2 || side != turn { // p lies below
			w += turn
		}
		return true
	})
	return w, on
}

// shifted is the side of the line ab on which q lies, moved by infinitesimals.
func shifted(a, b, q vec2) int {
	if s := predicate.Orient2D(a, b, q); s != 0 {
		return s
	}
	if s := signOf(b.X - a.X); s != 0 {
		return s
	}
	return -signOf(b.Y - a.Y)
}

func signOf(x float64) int {
	switch {
	case x > 0:
		return 1
	case x < 0:
		return -1
	}
	return 0
}

// inTriangle tells whether p, in the plane of the triangle, lies in it or on its rim. A
// triangle without area holds nothing: its rim is that of others.
func inTriangle(a, b, c, p Vec) bool {
	for axis := range 3 {
		u, v, w, q := along(a, axis), along(b, axis), along(c, axis), along(p, axis)
		turn := predicate.Orient2D(u, v, w)
		if turn == 0 {
			continue
		}
		return predicate.Orient2D(u, v, q)*turn >= 0 && predicate.Orient2D(v, w, q)*turn >= 0 && predicate.Orient2D(w, u, q)*turn >= 0
	}
	return false
}

// side tells where p lies.
func (s *surface) side(p Vec) solid.Side {
	w, on := s.winding(p)
	switch {
	case on:
		return solid.On
	case w > 0:
		return solid.Inside
	}
	return solid.Outside
}

// distance is the distance from p to the surface, or some number beyond within if it is
// farther than that.
func (s *surface) distance(p Vec, within float64) float64 {
	best := inf
	s.tree.nearest(p, within, func(i int32) float64 {
		a, b, c := s.corners(i)
		best = min(best, triangleDistance(sub(a, p), sub(b, p), sub(c, p)))
		return best
	})
	return best
}

// triangleDistance is the distance from the origin to a triangle.
func triangleDistance(a, b, c Vec) float64 {
	n := cross(sub(b, a), sub(c, a))
	if l := length(n); l > 0 {
		if dot(cross(sub(b, a), n), a) >= 0 && dot(cross(sub(c, b), n), b) >= 0 && dot(cross(sub(a, c), n), c) >= 0 {
			return math.Abs(dot(n, a)) / l
		}
	}
	return min(segmentDistance(a, b), segmentDistance(b, c), segmentDistance(c, a))
}

// segmentDistance is the distance from the origin to a segment.
func segmentDistance(a, b Vec) float64 {
	d := sub(b, a)
	t := -dot(a, d)
	if !(t > 0) {
		return length(a)
	}
	dd := dot(d, d)
	if t >= dd {
		return length(b)
	}
	return length(add(a, scale(t/dd, d)))
}
