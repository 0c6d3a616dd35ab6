package predicate

import (
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/spatial/r3"
)

var sink int

func benchSets(f func(*rand.Rand) [5]r3.Vec) [][5]r3.Vec {
	r := rand.New(rand.NewPCG(1, 1))
	sets := make([][5]r3.Vec, 1024)
	for i := range sets {
		sets[i] = f(r)
	}
	return sets
}

func benchEach(b *testing.B, f func([5]r3.Vec) int) {
	for _, w := range []family{
		{"random", 0, random}, {"lattice", 0, unitLattice}, {"decimal lattice", 0, decimalLattice},
		{"near a sphere", 0, nearSphere}, {"near a plane", 0, nearPlane},
	} {
		sets := benchSets(w.make)
		b.Run(w.name, func(b *testing.B) {
			b.ReportAllocs()
			for i := 0; b.Loop(); i++ {
				sink += f(sets[i&1023])
			}
		})
	}
}

func BenchmarkOrient3D(b *testing.B) {
	benchEach(b, func(p [5]r3.Vec) int { return Orient3D(p[0], p[1], p[2], p[3]) })
}

func BenchmarkInSphere(b *testing.B) {
	benchEach(b, func(p [5]r3.Vec) int { return InSphere(p[0], p[1], p[2], p[3], p[4]) })
}

func BenchmarkSideOfBisector(b *testing.B) {
	benchEach(b, func(p [5]r3.Vec) int { return SideOfBisector(p[0], p[1], p[2]) })
}
