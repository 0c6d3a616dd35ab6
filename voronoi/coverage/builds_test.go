package coverage

import (
	"crypto/sha256"
	"fmt"
	"math/rand/v2"
	"testing"

	"nearcell/voronoi/solid"
)

// builds is the hash of gaps as every build gives them, also those that fuse products
// (GOAMD64=v3, arm64). Whoever changes a rounding on purpose sets it anew, after a look at
// both levels.
const builds = "2c28990666d6bd3f"

// The same bits come out of every build.
func TestBuilds(t *testing.T) {
	h := sha256.New()
	p, err := solid.NewPrism([]solid.Vec2{{X: 0, Y: 0}, {X: 30.25, Y: 1}, {X: 30, Y: 12}, {X: 18, Y: 12.5}, {X: 17, Y: 18}, {X: 0.3, Y: 18.7}}, nil, 0, 7.5)
	if err != nil {
		t.Fatal(err)
	}
	for seed := range uint64(6) {
		r := rand.New(rand.NewPCG(seed, 5))
		var sites []Vec
		for len(sites) < 300 {
			v := Vec{X: float64(r.IntN(31000)) / 1000, Y: float64(r.IntN(19000)) / 1000, Z: float64(r.IntN(7500)) / 1000}
			if p.Side(v, 0) == solid.Inside {
				sites = append(sites, v)
			}
		}
		fmt.Fprintf(h, "%x", fmt.Sprint(gapsOf(t, sites, p)))
		fmt.Fprintf(h, "%x", fmt.Sprint(gapsOf(t, sites, nil)))
	}
	if got := fmt.Sprintf("%x", h.Sum(nil)[:8]); got != builds {
		t.Errorf("the hash is %s, want %s", got, builds)
	}
}
