package voronoi

import (
	"math"
	"testing"
)

// Means of the cells of a Poisson process of intensity 1 (Meijering 1953; Gilbert
// 1962 for the variance of the volume, here by quadrature of his double integral;
// tables in Okabe, Boots, Sugihara & Chiu 2000, chapter 5). The spreads, from
// which the tolerance follows, were simulated over three million cells.
func TestPoissonCells(t *testing.T) {
	const n = 40000
	side := math.Cbrt(n)
	sites := random(n, 2024)
	for i, p := range sites {
		sites[i] = v(side*p.X, side*p.Y, side*p.Z)
	}
	c := measure(t, diagram(t, sites, Options{Solid: brick{v(0, 0, 0), v(side, side, side)}}), Volume|Area|Faces)
	var volume, square, area, faces, edges, vertices, count Sum
	for i, p := range sites {
		const margin = 3 // cells nearer to the walls are cut by them
		if beyond := unitBoxTimes(side).beyond(p); beyond > -margin {
			continue
		}
		count.Add(1)
		volume.Add(c.Volume[i])
		square.Add(c.Volume[i] * c.Volume[i])
		area.Add(c.Area[i])
		faces.Add(float64(c.Faces[i]))
		edges.Add(float64(c.Edges[i]))
		vertices.Add(float64(c.Vertices[i]))
		if c.Vertices[i] != 2*(c.Faces[i]-2) || c.Edges[i] != 3*(c.Faces[i]-2) {
			t.Fatalf("cell %d has %d faces, %d edges, %d vertices: three faces meet in each vertex of a random cell", i, c.Faces[i], c.Edges[i], c.Vertices[i])
		}
	}
	cells := count.Value()
	if cells < 20000 {
		t.Fatalf("%v cells", cells)
	}
	const errors = 4
	mean := func(what string, sum Sum, want, spread float64) {
		t.Helper()
		near(t, what, sum.Value()/cells, want, errors*spread/math.Sqrt(cells))
	}
	pi2 := math.Pi * math.Pi
	mean("volume", volume, 1, 0.4231)
	mean("faces", faces, 48*pi2/35+2, 3.3353)
	mean("edges", edges, 144*pi2/35, 10.006)
	mean("vertices", vertices, 96*pi2/35, 6.671)
	mean("surface", area, math.Cbrt(256*math.Pi/3)*math.Gamma(5.0/3), 1.4801)
	m := volume.Value() / cells
	near(t, "variance of the volume", square.Value()/cells-m*m, 0.17903244, errors*0.30/math.Sqrt(cells))
}

func unitBoxTimes(side float64) brick { return brick{v(0, 0, 0), v(side, side, side)} }
