package coverage

import (
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/solid"
)

// plane is n·x = d.
type plane struct {
	n Vec
	d float64
}

// meetingPoint solves three planes by Cramer's rule; false if they hardly meet.
func meetingPoint(a, b, c plane) (Vec, bool) {
	det := dot(a.n, cross(b.n, c.n))
	if math.Abs(det) < 1e-9*length(a.n)*length(b.n)*length(c.n) {
		return Vec{}, false
	}
	p := add(add(scale(a.d, cross(b.n, c.n)), scale(b.d, cross(c.n, a.n))), scale(c.d, cross(a.n, b.n)))
	return scale(1/det, p), true
}

// bisector is the plane between two sites.
func bisector(a, b Vec) plane { return plane{sub(b, a), (dot(b, b) - dot(a, a)) / 2} }

// walls are the planes of the room's walls, floor and ceiling, from its rings.
func (m *room) walls() []plane {
	out := []plane{{Vec{Z: 1}, m.z0}, {Vec{Z: 1}, m.z1}}
	for _, ring := range m.rings {
		for i, a := range ring {
			b := ring[(i+1)%len(ring)]
			n := Vec{X: b.Y - a.Y, Y: a.X - b.X}
			n = scale(1/length(n), n)
			out = append(out, plane{n, n.X*a.X + n.Y*a.Y})
		}
	}
	return out
}

// candidates are the places where three planes meet, k of them walls and the others
// bisectors of one group of sites: the four kinds that the package's text names.
func candidates(sites []Vec, walls []plane) []Vec {
	var out []Vec
	put := func(a, b, c plane) {
		if p, ok := meetingPoint(a, b, c); ok {
			out = append(out, p)
		}
	}
	for i := range walls {
		for j := range i {
			for k := range j {
				put(walls[i], walls[j], walls[k])
			}
		}
	}
	for s := range sites {
		for u := range s {
			one := bisector(sites[s], sites[u])
			for i := range walls {
				for j := range i {
					put(one, walls[i], walls[j])
				}
			}
			for v := range u {
				two := bisector(sites[s], sites[v])
				for i := range walls {
					put(one, two, walls[i])
				}
				for w := range v {
					put(one, two, bisector(sites[s], sites[w]))
				}
			}
		}
	}
	return out
}

// steepest is the greatest slope with which the distance grows in a direction that
// stays in the solid, found by trying many directions, those along two walls among
// them, and refining the best: the derivative in a direction is the least over the
// nearest sites.
func steepest(sites []Vec, body solid.Solid, walls []plane, p Vec, r *rand.Rand) float64 {
	d := toNearest(sites, p)
	var away []Vec
	for _, s := range sites {
		if a := sub(p, s); length(a) <= d*(1+1e-9) {
			away = append(away, scale(1/length(a), a))
		}
	}
	slope := func(u Vec) float64 {
		if body != nil && body.Side(add(p, scale(1e-5*d, u)), 1e-9*d) == solid.Outside {
			return -1
		}
		least := 1.0
		for _, a := range away {
			least = min(least, dot(a, u))
		}
		return least
	}
	best, at := -1.0, Vec{}
	try := func(u Vec) {
		if s := slope(u); s > best {
			best, at = s, u
		}
	}
	for range 400 {
		try(direction(r))
	}
	for i := range walls {
		for j := range i {
			if n := cross(walls[i].n, walls[j].n); length(n) > 1e-3 {
				try(scale(1/length(n), n))
				try(scale(-1/length(n), n))
			}
		}
	}
	for step := 0.3; step > 1e-5; step *= 0.7 {
		for range 16 {
			u := add(at, scale(step, direction(r)))
			try(scale(1/length(u), u))
		}
	}
	return best
}

// All gaps and no others, against a search that shares nothing with the package:
// every meeting of three planes is tried, and the slope around it is sampled.
func TestAllGaps(t *testing.T) {
	doubtful, told := 0, 0
	for seed := range uint64(30) {
		r := rand.New(rand.NewPCG(seed, 29))
		m := newRoom(t, r, seed%2 == 1)
		sites := m.places(r, 1+int(seed%6))
		g := gapsOf(t, sites, m.solid)
		seen := make([]bool, len(g))
		walls := m.walls()
		for _, p := range candidates(sites, walls) {
			if m.solid.Side(p, 1e-9) == solid.Outside {
				continue
			}
			up := steepest(sites, m.solid, walls, p, r)
			got := false
			for i := range g {
				if length(sub(g[i].At, p)) <= 1e-8 {
					got, seen[i] = true, true
				}
			}
			switch {
			case math.Abs(up) < 0.02:
				doubtful++ // sampling cannot tell
			case got != (up < 0):
				t.Errorf("room %d: %v, with the steepest slope %.3f, is a gap: %v", seed, p, up, got)
			default:
				told++
			}
		}
		for i, ok := range seen {
			if !ok {
				t.Errorf("room %d: %+v is at no meeting of planes", seed, g[i])
			}
		}
	}
	if doubtful*20 > told {
		t.Errorf("%d places could not be told, %d could", doubtful, told)
	}
}
