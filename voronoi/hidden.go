package voronoi

import (
	"context"
	"math"
	"math/rand/v2"

	"nearcell/voronoi/polyhedron"
	"nearcell/voronoi/solid"
)

// strata is the number of boxes along each axis into which the bounds of a cell are
// divided; a place is drawn in each.
const strata = 12

// Sight tells what of its cell each site sees; entry i belongs to the i-th of the sites
// that were asked for.
type Sight struct {
	Hidden []float64 // share of the cell's part in the solid that the site does not see
	Error  []float64 // standard error of that share
}

// Hidden estimates for each of the given sites (nil: all) what share of its cell it does
// not see for the walls of the solid. It is 0 without a solid and in a convex one. Places
// are drawn by the sites' coordinates, so that the same question has the same answer. It
// fails as Measure does.
func (d *Diagram) Hidden(ctx context.Context, sites []int32) (*Sight, error) {
	r, err := d.request(sites)
	if err != nil {
		return nil, err
	}
	out := &Sight{Hidden: make([]float64, len(r.sites)), Error: make([]float64, len(r.sites))}
	if d.solid == nil || d.convex {
		return out, nil
	}
	err = d.forEach(ctx, len(r.cells), 0, len(r.cells), func(b *builder, k int) error {
		b.use(nil, nil)
		cell := r.cells[k]
		at := d.place(cell)
		b.build(&b.cell, d.tree.Point(cell), at, cell)
		share, spread := d.hidden(&b.cell, at)
		for _, row := range r.rows[r.start[k]:r.start[k+1]] {
			out.Hidden[row], out.Error[row] = share, spread
		}
		return nil
	})
	return out, err
}

// hidden estimates the share of the cell's part in the solid that the site at this place
// does not see, from places drawn one in each of equal boxes (stratified sampling;
// Cochran 1977), and the standard error of that share as if they had been drawn freely,
// which is no less. The draw depends on the site's coordinates alone. The cell is local to
// the site.
func (d *Diagram) hidden(c *polyhedron.Cell, at Vec) (share, err float64) {
	sight, ok := d.solid.(solid.Sighted)
	if !ok || d.convex || c.Empty() {
		return 0, 0
	}
	skip := 1e-9 * length(sub(d.hi, d.lo))
	if d.solid.Side(at, 0) != solid.Inside {
		// A site on a wall, or beyond it within the tolerance, sees past that wall.
		skip += d.solid.Distance(at) * (1 + 1e-9)
	}
	r := rand.New(rand.NewPCG(math.Float64bits(at.X)^math.Float64bits(at.Z)<<1, math.Float64bits(at.Y)))
	lo, hi := c.Bounds()
	step := scaled(sub(hi, lo), 1.0/strata)
	in, dark := 0, 0
	for i := range strata {
		for j := range strata {
			for k := range strata {
				p := Vec{
					X: lo.X + float64((float64(i)+r.Float64())*step.X),
					Y: lo.Y + float64((float64(j)+r.Float64())*step.Y),
					Z: lo.Z + float64((float64(k)+r.Float64())*step.Z),
				}
				if !c.Contains(p) {
					continue
				}
				q := add(at, p)
				if d.solid.Side(q, 0) == solid.Outside {
					continue
				}
				in++
				if !sight.Sees(at, q, skip) {
					dark++
				}
			}
		}
	}
	if in == 0 {
		return 0, 0
	}
	share = float64(dark) / float64(in)
	return share, math.Sqrt(share * (1 - share) / float64(in))
}
