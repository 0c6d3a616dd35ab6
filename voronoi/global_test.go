package voronoi

import (
	"context"
	"fmt"
	"math"
	"testing"
)

// measureBoth measures all cells in both ways.
func measureBoth(t testing.TB, d *Diagram, want Measures) (single, whole *Cells) {
	t.Helper()
	ctx := context.Background()
	r, err := d.request(nil)
	if err != nil {
		t.Fatal(err)
	}
	g, err := d.dual(ctx)
	if err != nil {
		t.Fatal(err)
	}
	single, whole = newCells(want, r.sites), newCells(want, r.sites)
	b := d.builder()
	defer d.free(b)
	for k, c := range r.cells {
		row := r.rows[r.start[k]]
		b.use(nil)
		if err := b.measure(c, want, single, row); err != nil {
			t.Fatal(err)
		}
		b.use(g)
		if err := b.measure(c, want, whole, row); err != nil {
			t.Fatal(err)
		}
	}
	return single, whole
}

// Law 9: both ways make the same cells.
func TestLaw9BothWays(t *testing.T) {
	for name, sites := range sets(1000) {
		for _, o := range []Options{{Solid: unitBox}, {}} {
			d := diagram(t, sites, o)
			if d.facts.Dimension < 3 {
				continue
			}
			a, b := measureBoth(t, d, All)
			compareCells(t, fmt.Sprint(name, ", in a box: ", o.Solid != nil), d, a, b)
		}
	}
}

func compareCells(t *testing.T, name string, d *Diagram, a, b *Cells) {
	t.Helper()
	worst := map[string]float64{}
	bad := 0
	for i := range a.Volume {
		if a.Volume[i] == 0 && b.Volume[i] == 0 {
			continue
		}
		same := func(what string, x, y, unit, tol float64) {
			if x == y {
				return
			}
			e := math.Abs(x-y) / unit
			worst[what] = max(worst[what], e)
			if !(e <= tol) {
				if bad++; bad < 10 {
					t.Errorf("%s: %s of %d is %.17g one by one, else %.17g", name, what, i, x, y)
				}
			}
		}
		same("volume", a.Volume[i], b.Volume[i], a.Volume[i], 1e-11)
		same("area", a.Area[i], b.Area[i], a.Area[i], 1e-11)
		same("wall area", a.WallArea[i], b.WallArea[i], a.Area[i], 1e-11)
		same("farthest", a.Farthest[i], b.Farthest[i], a.Farthest[i], 1e-9)
		same("nearest face", a.NearestFace[i], b.NearestFace[i], 1, 0)
		same("centroid", length(sub(a.Centroid[i], b.Centroid[i])), 0, a.Farthest[i], 1e-10)
		if a.Faces[i] != b.Faces[i] || a.Edges[i] != b.Edges[i] || a.Vertices[i] != b.Vertices[i] || a.Shaped[i] != b.Shaped[i] ||
			a.Neighbours[i] != b.Neighbours[i] || a.Bounded[i] != b.Bounded[i] || a.Clipped[i] != b.Clipped[i] || a.HasCentroid[i] != b.HasCentroid[i] {
			if bad++; bad < 10 {
				t.Errorf("%s: cell %d is %s one by one, else %s", name, i, cellText(a, i), cellText(b, i))
			}
		}
	}
	t.Log(name, len(a.Volume), worst)
}
