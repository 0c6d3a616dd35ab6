package delaunay

import (
	"context"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"
)

// everyRoundParallel lets even small rounds be inserted by several workers.
func everyRoundParallel(t *testing.T) {
	p, r := leastParallel, leastRetry
	leastParallel, leastRetry = 24, 2
	t.Cleanup(func() { leastParallel, leastRetry = p, r })
}

// Law 7: the set of tetrahedra is the same for any number of threads. The race
// detector sees the same runs.
func TestThreads(t *testing.T) {
	everyRoundParallel(t)
	rapid.Check(t, func(t *rapid.T) {
		sites := drawSites(t, 500)
		threads := rapid.IntRange(2, 7).Draw(t, "threads")
		one, err := Build(context.Background(), sites, Options{Threads: 1})
		if err != nil {
			t.Fatal(err)
		}
		many, err := Build(context.Background(), sites, Options{Threads: threads})
		if err != nil {
			t.Fatal(err)
		}
		if one.Fingerprint() != many.Fingerprint() || one.NumTets() != many.NumTets() || one.NumGhosts() != many.NumGhosts() {
			t.Fatalf("%d tetrahedra by one thread, %d by %d", one.NumTets(), many.NumTets(), threads)
		}
		for i := range sites {
			if one.Representative(i) != many.Representative(i) {
				t.Fatalf("site %d stands for %d and %d", i, one.Representative(i), many.Representative(i))
			}
		}
		if err := many.Validate(); err != nil {
			t.Fatal(err)
		}
	})
}

func TestThreadsOnLargerSets(t *testing.T) {
	for _, kind := range []string{"uniform", "FCC", "two far clusters", "sphere", "walk"} {
		sites := kinds[kind](rand.New(rand.NewPCG(5, 5)), 30000)
		one, two, three := build(t, sites, 1), build(t, sites, 2), build(t, sites, 3)
		if f := one.Fingerprint(); f != two.Fingerprint() || f != three.Fingerprint() {
			t.Errorf("%s: the set depends on the number of threads", kind)
		}
		if err := two.Validate(); err != nil {
			t.Errorf("%s: %v", kind, err)
		}
	}
}
