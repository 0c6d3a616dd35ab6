package voronoi

import (
	"fmt"
	"math"
	"testing"
)

// lattice is a set of sites around the origin, the cell of the site at the origin
// known in closed form (volume, surface, reach and inradius by arithmetic; the
// polyhedra and their counts by Föppl 1914 and Grünbaum & Shephard 1980).
type lattice struct {
	name                   string
	sites                  []Vec // the first is the origin
	faces, edges, vertices int32
	volume, surface        float64
	nearestFace, farthest  float64
}

// fill returns the origin and all other integer combinations of the basis plus one
// of the offsets within the radius.
func fill(radius float64, basis [3]Vec, offsets ...Vec) []Vec {
	sites := []Vec{{}}
	at := func(i, j, k int, o Vec) Vec {
		f := [3]float64{float64(i), float64(j), float64(k)}
		for n, b := range basis {
			o = add(o, v(f[n]*b.X, f[n]*b.Y, f[n]*b.Z))
		}
		return o
	}
	for i := -6; i <= 6; i++ {
		for j := -6; j <= 6; j++ {
			for k := -6; k <= 6; k++ {
				for _, o := range append([]Vec{{}}, offsets...) {
					if p := at(i, j, k, o); p != (Vec{}) && length(p) <= radius {
						sites = append(sites, p)
					}
				}
			}
		}
	}
	return sites
}

func lattices() []lattice {
	cube := [3]Vec{v(1, 0, 0), v(0, 1, 0), v(0, 0, 1)}
	hexagon := [2]Vec{v(1, 0, 0), v(0.5, math.Sqrt(3)/2, 0)}
	c := math.Sqrt(8.0 / 3)
	layer := v(0.5, math.Sqrt(3)/6, c/2)
	sqrt := math.Sqrt
	return []lattice{
		{"cubic", fill(3.1, cube), 6, 12, 8, 1, 6, 0.5, sqrt(3) / 2},
		{"body-centred", fill(3.1, cube, v(0.5, 0.5, 0.5)), 14, 36, 24, 0.5, 0.75 + 1.5*sqrt(3), sqrt(3) / 4, sqrt(5) / 4},
		{"face-centred", fill(3.1, cube, v(0.5, 0.5, 0), v(0.5, 0, 0.5), v(0, 0.5, 0.5)), 12, 24, 14, 0.25, 1.5 * sqrt(2), sqrt(2) / 4, 0.5},
		{"hexagonal close-packed", fill(3.6, [3]Vec{hexagon[0], hexagon[1], v(0, 0, c)}, layer), 12, 24, 14, 1 / sqrt(2), 3 * sqrt(2), 0.5, 1 / sqrt(2)},
		{"simple hexagonal", fill(3.1, [3]Vec{hexagon[0], hexagon[1], v(0, 0, 1)}), 8, 18, 12, sqrt(3) / 2, 3 * sqrt(3), 0.5, sqrt(1.0/3 + 0.25)},
	}
}

func (l lattice) check(t *testing.T, what string, d *Diagram, scale, tol float64) {
	t.Helper()
	c := measure(t, d, All, 0)
	if c.Faces[0] != l.faces || c.Edges[0] != l.edges || c.Vertices[0] != l.vertices || c.Neighbours[0] != l.faces {
		t.Errorf("%s, %s: %d faces, %d edges, %d vertices, %d neighbours; want %d, %d, %d", l.name, what,
			c.Faces[0], c.Edges[0], c.Vertices[0], c.Neighbours[0], l.faces, l.edges, l.vertices)
	}
	if !c.Bounded[0] || c.Clipped[0] || c.WallArea[0] != 0 || !c.HasCentroid[0] {
		t.Errorf("%s, %s: bounded %v, clipped %v", l.name, what, c.Bounded[0], c.Clipped[0])
	}
	near(t, l.name+" volume, "+what, c.Volume[0]/(scale*scale*scale), l.volume, tol)
	near(t, l.name+" surface, "+what, c.Area[0]/(scale*scale), l.surface, tol)
	near(t, l.name+" nearest face, "+what, c.NearestFace[0]/scale, l.nearestFace, tol)
	near(t, l.name+" farthest, "+what, c.Farthest[0]/scale, l.farthest, tol)
}

func TestLatticeCells(t *testing.T) {
	for _, l := range lattices() {
		l.check(t, "open", diagram(t, l.sites, Options{}), 1, 1e-14)
		room := brick{v(-4, -4, -4), v(4, 4, 4)}
		l.check(t, "in a box", diagram(t, l.sites, Options{Solid: room}), 1, 1e-14)
		for _, scale := range []float64{1e-6, 1e6} {
			scaled := make([]Vec, len(l.sites))
			for i, p := range l.sites {
				scaled[i] = v(p.X*scale, p.Y*scale, p.Z*scale)
			}
			l.check(t, fmt.Sprint("scaled by ", scale), diagram(t, scaled, Options{}), scale, 1e-13)
		}
	}
}

// A rotated lattice has rounded coordinates: what was cospherical is so to the
// last bits only, and crumbs of faces appear that must not be counted.
func TestRotatedLatticeCells(t *testing.T) {
	for _, l := range lattices() {
		for turn := range 20 {
			a, b := 0.1+0.3*float64(turn), 0.7+0.2*float64(turn)
			ca, sa, cb, sb := math.Cos(a), math.Sin(a), math.Cos(b), math.Sin(b)
			turned := make([]Vec, len(l.sites))
			for i, p := range l.sites {
				p = v(ca*p.X-sa*p.Y, sa*p.X+ca*p.Y, p.Z)
				turned[i] = v(p.X, cb*p.Y-sb*p.Z, sb*p.Y+cb*p.Z)
			}
			l.check(t, fmt.Sprint("turn ", turn), diagram(t, turned, Options{}), 1, 1e-13)
		}
	}
}

// Shifts by whole numbers keep the coordinates of the first three lattices exact.
func TestLatticeCellsInWorldCoordinates(t *testing.T) {
	for _, l := range lattices()[:3] {
		for _, at := range []Vec{v(5e5, 5e6, 100), v(-5e6, 5e5, -3)} {
			moved := make([]Vec, len(l.sites))
			for i, p := range l.sites {
				moved[i] = add(p, at)
			}
			d := diagram(t, moved, Options{})
			l.check(t, fmt.Sprint("moved by ", at), d, 1, 1e-14)
			if c := measure(t, d, Centroid, 0); length(sub(c.Centroid[0], at)) > 1e-9 {
				t.Errorf("%s: centroid %v, want %v", l.name, c.Centroid[0], at)
			}
			if o := d.Facts().Origin; math.Abs(o.X-at.X) > 10 || math.Abs(o.Y-at.Y) > 10 {
				t.Errorf("%s: origin %v for sites about %v", l.name, o, at)
			}
		}
	}
}
