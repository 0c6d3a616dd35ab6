package voronoi

import (
	"context"
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

func v(x, y, z float64) Vec { return Vec{X: x, Y: y, Z: z} }

// brick is a box of the plainest kind. It keeps the diagram's tests apart from the
// solids' own.
type brick struct{ lo, hi Vec }

func (b brick) Bounds() (lo, hi Vec) { return b.lo, b.hi }
func (b brick) Volume() float64 {
	return (b.hi.X - b.lo.X) * (b.hi.Y - b.lo.Y) * (b.hi.Z - b.lo.Z)
}
func (b brick) Area() float64 {
	e := sub(b.hi, b.lo)
	return 2 * (e.X*e.Y + e.Y*e.Z + e.Z*e.X)
}
func (b brick) Key() (key [16]byte) {
	k := contentKey([]Vec{b.lo, b.hi}, Options{})
	return k
}
func (b brick) Pieces() int { return 1 }
func (b brick) Facts() solid.Facts {
	return solid.Facts{Kind: "brick", Walls: 6, Corners: 8, Convex: true}
}

// beyond is how far p lies beyond the side farthest behind it; negative inside.
func (b brick) beyond(p Vec) float64 {
	return max(b.lo.X-p.X, p.X-b.hi.X, b.lo.Y-p.Y, p.Y-b.hi.Y, b.lo.Z-p.Z, p.Z-b.hi.Z)
}

func (b brick) Side(p Vec, tol float64) solid.Side {
	switch d := b.beyond(p); {
	case d > tol:
		return solid.Outside
	case d < -tol:
		return solid.Inside
	}
	return solid.On
}
func (b brick) Distance(p Vec) float64 { return math.Abs(b.beyond(p)) }
func (b brick) Planes() []solid.Plane {
	return []solid.Plane{
		{N: v(-1, 0, 0), D: -b.lo.X, Wall: 0}, {N: v(1, 0, 0), D: b.hi.X, Wall: 1},
		{N: v(0, -1, 0), D: -b.lo.Y, Wall: 2}, {N: v(0, 1, 0), D: b.hi.Y, Wall: 3},
		{N: v(0, 0, -1), D: -b.lo.Z, Wall: 4}, {N: v(0, 0, 1), D: b.hi.Z, Wall: 5},
	}
}
func (b brick) ClipConvex(c *polyhedron.Cell, site Vec) polyhedron.Result {
	panic("a box is its own bounding box")
}
func (b brick) Measure(*polyhedron.Cell, Vec, solid.Want, *solid.Work, *solid.Measures) error {
	panic("a box is convex")
}

var unitBox = brick{v(0, 0, 0), v(1, 1, 1)}

func diagram(t testing.TB, sites []Vec, o Options) *Diagram {
	t.Helper()
	d, err := New(sites, o)
	if err != nil {
		t.Fatal(err)
	}
	return d
}

func measure(t testing.TB, d *Diagram, want Measures, sites ...int32) *Cells {
	t.Helper()
	c, err := d.Measure(context.Background(), want, sites)
	if err != nil {
		t.Fatal(err)
	}
	return c
}

// random are n sites, uniform in the unit cube.
func random(n int, seed uint64) []Vec {
	r := rand.New(rand.NewPCG(seed, 1))
	sites := make([]Vec, n)
	for i := range sites {
		sites[i] = v(r.Float64(), r.Float64(), r.Float64())
	}
	return sites
}

// The generators forbid fused products too: all builds are to get the same sites.

// clustered are n sites in ten tight clusters in the unit cube.
func clustered(n int, seed uint64) []Vec {
	r := rand.New(rand.NewPCG(seed, 2))
	centres := random(10, seed)
	sites := make([]Vec, n)
	for i := range sites {
		c := centres[i%10]
		on := func(x float64) float64 { return min(1, max(0, x+float64(0.02*r.NormFloat64()))) }
		sites[i] = v(on(c.X), on(c.Y), on(c.Z))
	}
	return sites
}

// grid is a lattice of k³ cells of the unit cube.
func grid(k int) []Vec {
	var sites []Vec
	at := func(i int) float64 { return (float64(i) + 0.5) / float64(k) }
	for i := range k {
		for j := range k {
			for l := range k {
				sites = append(sites, v(at(i), at(j), at(l)))
			}
		}
	}
	return sites
}

// sheet are n sites of a walk at nearly constant height.
func sheet(n int, seed uint64) []Vec {
	sites := random(n, seed)
	for i := range sites {
		sites[i].Z = 0.5 + float64(5e-4*(sites[i].Z-0.5))
	}
	return sites
}

func near(t testing.TB, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s = %.17g, want %.17g within %g", what, got, want, tol)
	}
}
