package voronoi

import (
	"encoding/binary"
	"math"
	"testing"

	"github.com/cespare/xxhash/v2"
)

// All builds (amd64 levels, arm64) give the same bits, since no product is fused
// with a sum. The hash over all measures was taken from a build without fused
// instructions; whoever changes the arithmetic on purpose takes it anew.
func TestAllBuildsAgree(t *testing.T) {
	h := xxhash.New()
	write := func(x uint64) { h.Write(binary.LittleEndian.AppendUint64(nil, x)) }
	for _, sites := range [][]Vec{random(500, 31), clustered(500, 32), grid(7), sheet(300, 33)} {
		for _, o := range []Options{{Solid: unitBox}, {}} {
			c := measure(t, diagram(t, sites, o), All)
			for i := range sites {
				for _, x := range []float64{c.Volume[i], c.Area[i], c.WallArea[i], c.Farthest[i], c.NearestFace[i], c.Centroid[i].X, c.Centroid[i].Y, c.Centroid[i].Z} {
					write(math.Float64bits(x))
				}
				for _, n := range []int32{c.Faces[i], c.Edges[i], c.Vertices[i], c.Neighbours[i]} {
					write(uint64(n))
				}
			}
		}
	}
	if got, want := h.Sum64(), uint64(0x635522d20b815a1d); got != want {
		t.Errorf("the measures have the hash %#x, want %#x", got, want)
	}
}
