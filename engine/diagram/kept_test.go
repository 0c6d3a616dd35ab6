package diagram

import (
	"context"
	"errors"
	"math/rand/v2"
	"os"
	"path/filepath"
	"reflect"
	"slices"
	"strings"
	"testing"
	"time"

	"nearcell/catalog/store"
	"nearcell/voronoi"
	"nearcell/voronoi/solid"
)

// enough sites for both ways of making cells.
const keptSites = 900

func scattered(seed uint64) []voronoi.Vec {
	r := rand.New(rand.NewPCG(seed, 9))
	sites := make([]voronoi.Vec, keptSites)
	for i := range sites {
		sites[i] = voronoi.Vec{X: 30.2 * r.Float64(), Y: 18 * r.Float64(), Z: 7 * r.Float64()}
	}
	return append(sites, sites[5], sites[5], sites[80])
}

func hall(t *testing.T) voronoi.Options {
	t.Helper()
	body, err := solid.NewBox(voronoi.Vec{}, voronoi.Vec{X: 30, Y: 18, Z: 7})
	if err != nil {
		t.Fatal(err)
	}
	return voronoi.Options{Solid: body}
}

// run is one run of the program on a folder; a nil folder keeps nothing.
func run(t *testing.T, folder string) *Store {
	t.Helper()
	s := NewStore(0)
	if folder == "" {
		return s
	}
	d, err := store.Open(folder)
	if err != nil && d == nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { d.Close() })
	k := NewKeeper(d)
	k.from = keptSites
	s.Keep(k)
	return s
}

// asked is one request, and what came of it.
type asked struct {
	want  voronoi.Measures
	sites []int32
}

var few = []int32{3, 17, 902, 80}

func answer(t *testing.T, s *Store, sites []voronoi.Vec, o voronoi.Options, a asked) voronoi.Cells {
	t.Helper()
	h, err := s.Get(context.Background(), sites, o)
	if err != nil {
		t.Fatal(err)
	}
	c, err := h.Measure(context.Background(), a.want, 0, a.sites, nil)
	if err != nil {
		t.Fatal(err)
	}
	list := a.sites
	if list == nil {
		for i := range sites {
			list = append(list, int32(i))
		}
	}
	var out voronoi.Cells // only what was asked for
	v := reflect.ValueOf(c).Elem()
	for i := range v.NumField() {
		from, to := v.Field(i), reflect.ValueOf(&out).Elem().Field(i)
		if from.Len() == 0 || !belongs(v.Type().Field(i).Name, a.want) {
			continue
		}
		for _, s := range list {
			to.Set(reflect.Append(to, from.Index(int(s))))
		}
	}
	return out
}

func belongs(field string, want voronoi.Measures) bool {
	switch field {
	case "Edges", "Vertices", "Shaped":
		field = "Faces"
	case "HasCentroid":
		field = "Centroid"
	case "Inside", "Multiplicity":
		return true
	}
	name := strings.ToLower(field)
	for _, p := range measureParts {
		if strings.ReplaceAll(p.name, "_", "") == name {
			return want&p.measure != 0
		}
	}
	return false
}

// Every answer has the same bits whether it is computed at once, after others, or read
// from what an earlier run kept, in any order of asking.
func TestKeptAnswersAreThoseComputed(t *testing.T) {
	requests := []asked{
		{voronoi.Volume, nil}, {voronoi.Volume, few}, {voronoi.All, nil}, {voronoi.Area | voronoi.Volume, few},
		{voronoi.NearestFace, nil}, {voronoi.Centroid | voronoi.Farthest, nil}, {voronoi.Bounded | voronoi.Clipped, few},
	}
	o := hall(t)
	stretched := o
	stretched.Stretch = voronoi.Vec{X: 1, Y: 1, Z: 3}
	r := rand.New(rand.NewPCG(4, 4))
	for i, o := range []voronoi.Options{o, stretched, {}} {
		sites := scattered(uint64(i))
		var want []voronoi.Cells
		for _, a := range requests {
			want = append(want, answer(t, run(t, ""), sites, o, a))
		}
		folder := filepath.Join(t.TempDir(), "kept")
		for round := range 4 {
			s := run(t, folder)
			for _, k := range r.Perm(len(requests)) {
				if got := answer(t, s, sites, o, requests[k]); !reflect.DeepEqual(got, want[k]) {
					t.Fatalf("options %d, round %d: request %d has other bits", i, round, k)
				}
			}
			if list := s.Troubles(); len(list) > 0 {
				t.Fatal(list)
			}
			if x := s.Stats(); round > 0 && (x.Recalled != 1 || x.Cells > 20) {
				t.Errorf("round %d: %+v", round, x) // but for the few, which are made one by one
			}
		}
	}
}

// A kept measure of all cells is not computed again.
func TestComputedOnce(t *testing.T) {
	folder, sites, o := filepath.Join(t.TempDir(), "kept"), scattered(1), hall(t)
	all := asked{voronoi.Volume | voronoi.Centroid, nil}
	answer(t, run(t, folder), sites, o, all)
	s := run(t, folder)
	answer(t, s, sites, o, all)
	if x := s.Stats(); x.Cells != 0 || x.Recalled != 1 {
		t.Errorf("%+v", x)
	}
	few := sites[:keptSites-1]
	answer(t, s, few, o, all)
	list, err := s.Keeper().List()
	if err != nil || len(list) != 1 || list[0].Sites != len(sites) || !slices.Equal(list[0].Parts, []string{"centroid", "tetrahedra", "volume"}) {
		t.Errorf("kept: %+v, %v", list, err)
	}
}

// A file with any of its bytes changed, cut off anywhere or gone is named, not used, and
// made again by the next request of all cells.
func TestDamagedFilesAreMadeAgain(t *testing.T) {
	folder, sites, o := filepath.Join(t.TempDir(), "kept"), scattered(2), hall(t)
	all := asked{voronoi.Volume | voronoi.Neighbours, nil}
	want := answer(t, run(t, folder), sites, o, all)
	names := func() []string {
		list, err := filepath.Glob(filepath.Join(folder, "columns", "*.arrow"))
		list = slices.DeleteFunc(list, func(name string) bool { return strings.Contains(name, "_whole_t-") })
		if err != nil || len(list) != 3 {
			t.Fatal(list, err)
		}
		return append(list, filepath.Join(folder, "manifest.json"))
	}
	spoils := map[string]func(b []byte, at int) []byte{
		"flipped": func(b []byte, at int) []byte { b[at] ^= 4; return b },
		"cut":     func(b []byte, at int) []byte { return b[:at] },
		"longer":  func(b []byte, at int) []byte { return append(b, 0) },
	}
	for file := range names() {
		for how, spoil := range spoils {
			for _, share := range []float64{0, 0.3, 0.99} {
				path := names()[file]
				b, err := os.ReadFile(path)
				if err != nil {
					t.Fatal(err)
				}
				// a new file in its place: one that is mapped must not be cut
				if err := os.Remove(path); err != nil {
					t.Fatal(err)
				}
				if err := os.WriteFile(path, spoil(b, min(len(b)-1, int(share*float64(len(b))))), 0o666); err != nil {
					t.Fatal(err)
				}
				s := run(t, folder)
				if got := answer(t, s, sites, o, all); !reflect.DeepEqual(got, want) {
					t.Fatalf("%s %s at %v: other values", filepath.Base(path), how, share)
				}
				var damaged *store.DamagedError
				if list := s.Troubles(); len(list) == 0 || !errors.As(list[0], &damaged) || damaged.Path != path {
					t.Errorf("%s %s at %v: %v", filepath.Base(path), how, share, list)
				}
				again := run(t, folder)
				answer(t, again, sites, o, all)
				if x := again.Stats(); x.Cells != 0 || x.Recalled != 1 || len(again.Troubles()) != 0 {
					t.Errorf("%s %s at %v: not made again: %+v", filepath.Base(path), how, share, x)
				}
			}
		}
	}
}

// What is beyond the limit goes, least recently used first; the limit outlives the run.
func TestLimitOfKeptDiagrams(t *testing.T) {
	folder, o := filepath.Join(t.TempDir(), "kept"), hall(t)
	all := asked{voronoi.Volume, nil}
	s := run(t, folder)
	for i := range 3 {
		answer(t, s, scattered(uint64(i)), o, all)
	}
	list, err := s.Keeper().List()
	if err != nil || len(list) != 3 {
		t.Fatal(list, err)
	}
	size := list[0].Bytes
	early := time.Now().Add(-time.Hour)
	for i := range 3 { // as if used in the order 1, 2, 0
		h, err := s.Get(context.Background(), scattered(uint64(i)), o)
		if err != nil {
			t.Fatal(err)
		}
		files, _ := filepath.Glob(filepath.Join(folder, "columns", partKey(h.key, "")[:32]+"*"))
		for _, f := range files {
			at := early.Add(time.Duration((i+2)%3) * time.Minute)
			if err := os.Chtimes(f, at, at); err != nil {
				t.Fatal(err)
			}
		}
	}
	if err := s.Keeper().SetLimit(context.Background(), 2*size+size/2); err != nil {
		t.Fatal(err)
	}
	s = run(t, folder)
	kept := func(i int) bool {
		_, ok, err := s.Keeper().dir.Find(partKey(KeyOf(scattered(uint64(i)), o), indexPart))
		if err != nil {
			t.Fatal(err)
		}
		return ok
	}
	if !kept(0) || kept(1) || !kept(2) {
		t.Errorf("kept: %v, %v, %v", kept(0), kept(1), kept(2))
	}
	answer(t, s, scattered(2), o, all) // used now, so that 0 goes next
	answer(t, s, scattered(7), o, all)
	if kept(0) || !kept(2) || !kept(7) {
		t.Errorf("kept: %v, %v, %v", kept(0), kept(2), kept(7))
	}
	if err := s.Keeper().SetLimit(context.Background(), size/2); err != nil {
		t.Fatal(err)
	}
	answer(t, run(t, folder), scattered(8), o, all) // without its tetrahedra it has room
	if list, err := run(t, folder).Keeper().List(); err != nil || len(list) != 1 || !slices.Equal(list[0].Parts, []string{"volume"}) {
		t.Errorf("within the limit: %v, %v", list, err)
	}
	if err := s.Keeper().SetLimit(context.Background(), size/100); err != nil {
		t.Fatal(err)
	}
	answer(t, run(t, folder), scattered(8), o, all)
	if list, err := run(t, folder).Keeper().List(); err != nil || len(list) != 0 {
		t.Errorf("beyond the limit: %v, %v", list, err)
	}
	n, _, err := s.Keeper().Drop(context.Background())
	if limit, e := s.Keeper().Limit(); err != nil || e != nil || n != 0 || limit != size/100 {
		t.Errorf("%d dropped, limit %d: %v, %v", n, limit, err, e)
	}
}

// What another version or kind of machine has kept is computed anew and replaced.
func TestAnotherFormIsNotUsed(t *testing.T) {
	folder, sites, o := filepath.Join(t.TempDir(), "kept"), scattered(3), hall(t)
	all := asked{voronoi.Volume, nil}
	mine := form
	form = "0/other"
	answer(t, run(t, folder), sites, o, all)
	form = mine
	s := run(t, folder)
	answer(t, s, sites, o, all)
	if x := s.Stats(); x.Recalled != 0 || x.Cells == 0 {
		t.Errorf("used: %+v", x)
	}
	s = run(t, folder)
	answer(t, s, sites, o, all)
	if x := s.Stats(); x.Recalled != 1 || x.Cells != 0 {
		t.Errorf("not replaced: %+v", x)
	}
}
