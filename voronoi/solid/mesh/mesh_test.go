package mesh

import (
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/solid"
)

func lattice(lo, step Vec, nx, ny, nz int) []Vec {
	var out []Vec
	for i := range nx {
		for j := range ny {
			for k := range nz {
				out = append(out, Vec{X: lo.X + float64(i)*step.X, Y: lo.Y + float64(j)*step.Y, Z: lo.Z + float64(k)*step.Z})
			}
		}
	}
	return out
}

// The mesh of a box is the box: for scattered sites, for lattices whose faces lie in the
// walls' diagonals, near the origin and far from it.
func TestBoxMeshIsBox(t *testing.T) {
	for _, at := range []Vec{{}, {X: 5e5, Y: 4e5, Z: 300}} {
		lo, hi := at, add(at, Vec{X: 6, Y: 4, Z: 4})
		box, err := solid.NewBox(lo, hi)
		if err != nil {
			t.Fatal(err)
		}
		m := block(lo, hi).mesh(t)
		r := rand.New(rand.NewPCG(1, 2))
		same(t, "scattered", m, box, sitesIn(r, box, 40))
		same(t, "lattice", m, box, lattice(add(lo, Vec{X: 1, Y: 1, Z: 1}), Vec{X: 2, Y: 2, Z: 2}, 3, 2, 2))
		same(t, "on the walls", m, box, lattice(lo, Vec{X: 3, Y: 2, Z: 2}, 3, 3, 3))
		laws(t, "scattered", m, sitesIn(r, m, 60))
		same(t, "refined", block(lo, hi).split().split().mesh(t), box, lattice(add(lo, Vec{X: 1, Y: 1, Z: 1}), Vec{X: 2, Y: 2, Z: 2}, 3, 2, 2))
	}
}
