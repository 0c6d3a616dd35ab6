package diagram

import (
	"context"
	"errors"
	"os"
	"path/filepath"
	"reflect"
	"slices"
	"testing"

	"nearcell/catalog/store"
	"nearcell/voronoi"
)

// touching are the contacts of all cells.
func touching(t *testing.T, s *Store, sites []voronoi.Vec, o voronoi.Options) [][]voronoi.Contact {
	t.Helper()
	h, err := s.Get(context.Background(), sites, o)
	if err != nil {
		t.Fatal(err)
	}
	all := make([][]voronoi.Contact, len(sites))
	if err := h.Contacts(context.Background(), nil, nil, func(site int32, c []voronoi.Contact) error {
		all[site] = slices.Clone(c)
		return nil
	}); err != nil {
		t.Fatal(err)
	}
	return all
}

// A tetrahedralisation that was built once serves later runs, with the same bits.
func TestTetrahedraAreKept(t *testing.T) {
	stretched := hall(t)
	stretched.Stretch = voronoi.Vec{X: 1, Y: 1, Z: 3}
	for i, o := range []voronoi.Options{hall(t), stretched, {}} {
		folder, sites := filepath.Join(t.TempDir(), "kept"), scattered(uint64(i))
		area := asked{voronoi.Area | voronoi.Centroid, nil}
		answer(t, run(t, folder), sites, o, asked{voronoi.Volume, nil})
		s := run(t, folder)
		if got, want := answer(t, s, sites, o, area), answer(t, run(t, ""), sites, o, area); !reflect.DeepEqual(got, want) {
			t.Fatalf("options %d: other measures", i)
		}
		again := run(t, folder)
		if got, want := touching(t, again, sites, o), touching(t, run(t, ""), sites, o); !reflect.DeepEqual(got, want) {
			t.Fatalf("options %d: other contacts", i)
		}
		for _, s := range []*Store{s, again} {
			if x := s.Stats(); x.Tetrahedra != 1 || len(s.Troubles()) != 0 {
				t.Errorf("options %d: %+v", i, x)
			}
		}
	}
}

// Damaged ones are named, not used, and kept anew.
func TestDamagedTetrahedraAreMadeAgain(t *testing.T) {
	folder, sites, o := filepath.Join(t.TempDir(), "kept"), scattered(3), hall(t)
	answer(t, run(t, folder), sites, o, asked{voronoi.Volume, nil})
	want := touching(t, run(t, ""), sites, o)
	for _, share := range []float64{0, 0.001, 0.4, 0.8, 0.999} {
		list, err := filepath.Glob(filepath.Join(folder, "columns", "*_whole_t-*.arrow"))
		if err != nil || len(list) != 1 {
			t.Fatal(list, err)
		}
		b, err := os.ReadFile(list[0])
		if err != nil {
			t.Fatal(err)
		}
		if err := os.Remove(list[0]); err != nil { // another file: one that is mapped must not change
			t.Fatal(err)
		}
		b[int(share*float64(len(b)))] ^= 16
		if err := os.WriteFile(list[0], b, 0o666); err != nil {
			t.Fatal(err)
		}
		for round, there := range []int{0, 1} {
			s := run(t, folder)
			if got := touching(t, s, sites, o); !reflect.DeepEqual(got, want) {
				t.Fatalf("damaged at %v: other contacts", share)
			}
			var damaged *store.DamagedError
			troubles := s.Troubles()
			if x := s.Stats(); x.Tetrahedra != there || (len(troubles) > 0) != (round == 0) ||
				round == 0 && (!errors.As(troubles[0], &damaged) || damaged.Path != list[0]) {
				t.Errorf("damaged at %v, round %d: %+v, %v", share, round, x, troubles)
			}
		}
	}
}
