package coverage

import (
	"cmp"
	"container/heap"
	"math"
	"slices"

	"nearcell/voronoi/solid"
)

// ClearanceWithin is the share of the radius within which a place that keeps clear of walls is the
// farthest there is.
const ClearanceWithin = 1e-4

// part of space that may hold the place: a cube.
type cube struct {
	at      Vec
	half    float64
	far     float64 // from its middle to the nearest site
	wall    float64 // from its middle to the walls, negative outside
	counted int     // placed sites that far knows of
}

// most is what no place in the cube exceeds: the distance grows no faster than one goes.
func (c *cube) most() float64 { return c.far + c.reach() }

func (c *cube) reach() float64 { return c.half * math.Sqrt(3) }

type cubes []cube

func (h cubes) Len() int      { return len(h) }
func (h cubes) Swap(i, j int) { h[i], h[j] = h[j], h[i] }
func (h *cubes) Push(x any)   { *h = append(*h, x.(cube)) }
func (h *cubes) Pop() any {
	last := (*h)[len(*h)-1]
	*h = (*h)[:len(*h)-1]
	return last
}
func (h cubes) Less(i, j int) bool {
	return cmp.Or(cmp.Compare(h[j].most(), h[i].most()), before(h[i].at, h[j].at)) < 0
}

// clearOf chooses places that keep clear of the walls. The cubes stay from one place to the next:
// what they may hold only falls.
func (p *placer) clearOf(o PlaceOptions) func() (Placement, bool) {
	clearance, body := o.Clearance, p.bodyOf(o)
	if body == nil {
		return p.largestGap
	}
	var open cubes
	look := func(at Vec, half float64) {
		c := cube{at: at, half: half, wall: body.Distance(at), counted: len(p.ball.more)}
		if body.Side(at, 0) == solid.Outside {
			c.wall = -c.wall
		}
		if c.wall+c.reach() < clearance {
			return
		}
		c.far = min(p.toSites(at), p.toMore(at))
		heap.Push(&open, c)
	}
	lo, hi := body.Bounds()
	look(scale(0.5, add(lo, hi)), 0.5*max(hi.X-lo.X, hi.Y-lo.Y, hi.Z-lo.Z))
	return func() (Placement, bool) {
		best := cube{far: -1}
		for len(open) > 0 {
			c := open[0]
			if c.counted < len(p.ball.more) {
				for _, q := range p.ball.more[c.counted:] {
					c.far = min(c.far, length(sub(q, c.at)))
				}
				c.counted = len(p.ball.more)
				open[0] = c
				heap.Fix(&open, 0)
				continue
			}
			if c.wall >= clearance && (c.far > best.far || c.far == best.far && before(c.at, best.at) < 0) {
				best = c
			}
			if c.most() <= best.far*(1+ClearanceWithin) || c.reach() <= 1e-9*p.size {
				break
			}
			heap.Pop(&open)
			for k := range 8 {
				h := c.half / 2
				d := Vec{X: h, Y: h, Z: h}
				if k&1 == 0 {
					d.X = -h
				}
				if k&2 == 0 {
					d.Y = -h
				}
				if k&4 == 0 {
					d.Z = -h
				}
				look(add(c.at, d), h)
			}
		}
		if best.far < 0 {
			return Placement{}, false
		}
		at, far := p.sharpen(best.at, best.far, clearance, body)
		// A cube that was taken apart still holds its middle.
		heap.Push(&open, best)
		return Placement{At: at, Radius: far, Index: -1}, true
	}
}

// sharpen sets a place that walls and sites fix where they do, by Newton's method for equal
// distances. It stays where it was if that is no better.
func (p *placer) sharpen(at Vec, far, clearance float64, body solid.Solid) (Vec, float64) {
	slack := 4 * ClearanceWithin * far
	walls := p.wallsNear(at, clearance, slack, body)
	p.ball.list(at, far+slack)
	near := make([]Vec, 0, len(p.ball.in))
	for _, i := range p.ball.in {
		near = append(near, p.ball.point(i))
	}
	slices.SortFunc(near, before)
	if len(walls)+len(near) < 4 || len(near) == 0 {
		return at, far
	}
	x, r := at, far
	for range 8 {
		var m [4][5]float64 // normal equations
		put := func(row [5]float64) {
			for i := range 4 {
				for j := range 5 {
					m[i][j] += float64(row[i] * row[j])
				}
			}
		}
		for _, w := range walls {
			put([5]float64{w.N.X, w.N.Y, w.N.Z, 0, w.D - clearance - dot(w.N, x)})
		}
		for _, q := range near {
			d := sub(x, q)
			l := length(d)
			put([5]float64{d.X / l, d.Y / l, d.Z / l, -1, r - l})
		}
		step, ok := solve(m)
		if !ok {
			return at, far
		}
		x, r = add(x, Vec{X: step[0], Y: step[1], Z: step[2]}), r+step[3]
	}
	for _, w := range walls {
		for _, axis := range [3]struct{ n, x *float64 }{{&w.N.X, &x.X}, {&w.N.Y, &x.Y}, {&w.N.Z, &x.Z}} {
			if math.Abs(*axis.n) == 1 && math.Abs(*axis.x-*axis.n*(w.D-clearance)) <= 1e-9*p.size {
				*axis.x = *axis.n * (w.D - clearance)
			}
		}
	}
	better := min(p.toSites(x), p.toMore(x))
	if !(length(sub(x, at)) <= 100*slack) || body.Side(x, 0) != solid.Inside || !(body.Distance(x) >= clearance-1e-12*p.size) || !(better >= far*(1-1e-12)) {
		return at, far
	}
	return x, better
}

// wallsNear lists the walls at about the clearance from a place.
func (p *placer) wallsNear(at Vec, clearance, slack float64, body solid.Solid) []solid.Plane {
	var all []solid.Plane
	switch s := body.(type) {
	case solid.Divided:
		all = s.WallsAt(at, clearance+slack, nil)
	case solid.Faceted:
		all = s.WallsAt(at, clearance+slack, nil)
	}
	return slices.DeleteFunc(all, func(w solid.Plane) bool {
		return math.Abs(w.D-dot(w.N, at)-clearance) > slack
	})
}

// solve is Gauss's elimination with the largest pivot first.
func solve(m [4][5]float64) (x [4]float64, ok bool) {
	for k := range 4 {
		pivot := k
		for i := k + 1; i < 4; i++ {
			if math.Abs(m[i][k]) > math.Abs(m[pivot][k]) {
				pivot = i
			}
		}
		if math.Abs(m[pivot][k]) < 1e-9 {
			return x, false
		}
		m[k], m[pivot] = m[pivot], m[k]
		for i := range 4 {
			if i == k {
				continue
			}
			f := m[i][k] / m[k][k]
			for j := k; j < 5; j++ {
				m[i][j] -= float64(f * m[k][j])
			}
		}
	}
	for k := range 4 {
		x[k] = m[k][4] / m[k][k]
	}
	return x, true
}
