package diagram

import (
	"context"
	"errors"
	"slices"
	"sync"
	"testing"

	"nearcell/voronoi"
	"nearcell/voronoi/coverage"
)

// However many ask at once, gaps are looked for once; who is stopped spoils nothing.
func TestGapsOnce(t *testing.T) {
	s := NewStore(0)
	sites := places(300, 3)
	h := get(t, s, sites, voronoi.Options{Solid: unitBox(t)})
	stopped, stop := context.WithCancel(context.Background())
	stop()
	if _, err := h.Gaps(stopped, sites, 1, nil); !errors.Is(err, context.Canceled) {
		t.Fatalf("stopped: %v", err)
	}
	before := s.Stats().Bytes
	var guard sync.Mutex
	full := 0
	answers := make([][]coverage.Gap, 6)
	var all sync.WaitGroup
	for i := range answers {
		all.Go(func() {
			got, err := h.Gaps(context.Background(), sites, 2, func(done, total int) {
				guard.Lock()
				defer guard.Unlock()
				if done == total {
					full++
				}
			})
			if err != nil {
				t.Error(err)
			}
			answers[i] = got
		})
	}
	all.Wait()
	for _, a := range answers {
		if len(a) == 0 || !slices.Equal(a, answers[0]) {
			t.Errorf("%d gaps, then %d", len(answers[0]), len(a))
		}
	}
	if full != 1 || s.Stats().Bytes-before != bytesPerGap*int64(len(answers[0])) {
		t.Errorf("looked %d times, %d bytes more for %d gaps", full, s.Stats().Bytes-before, len(answers[0]))
	}
}
