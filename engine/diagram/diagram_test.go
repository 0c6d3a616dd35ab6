package diagram

import (
	"context"
	"errors"
	"math"
	"math/rand/v2"
	"reflect"
	"slices"
	"sync"
	"testing"

	"pgregory.net/rapid"

	"nearcell/voronoi"
	"nearcell/voronoi/solid"
)

func places(n int, seed uint64) []voronoi.Vec {
	r := rand.New(rand.NewPCG(seed, 1))
	out := make([]voronoi.Vec, n)
	for i := range out {
		out[i] = voronoi.Vec{X: r.Float64(), Y: r.Float64(), Z: r.Float64()}
	}
	return out
}

func unitBox(t testing.TB) solid.Solid {
	t.Helper()
	b, err := solid.NewBox(solid.Vec{}, solid.Vec{X: 1, Y: 1, Z: 1})
	if err != nil {
		t.Fatal(err)
	}
	return b
}

func get(t testing.TB, s *Store, sites []voronoi.Vec, o voronoi.Options) *Handle {
	t.Helper()
	h, err := s.Get(context.Background(), sites, o)
	if err != nil {
		t.Fatal(err)
	}
	return h
}

// What makes two diagrams the same, and what does not.
func TestKey(t *testing.T) {
	sites := places(5, 1)
	b := unitBox(t)
	key := KeyOf(sites, voronoi.Options{Solid: b})
	same := func(what string, want bool, sites []voronoi.Vec, o voronoi.Options) {
		t.Helper()
		if got := KeyOf(sites, o) == key; got != want {
			t.Errorf("%s: the keys are equal: %v", what, got)
		}
	}
	same("threads", true, sites, voronoi.Options{Solid: b, Threads: 7, Progress: func(int, int) {}})
	same("an equal solid", true, sites, voronoi.Options{Solid: unitBox(t)})
	same("no solid", false, sites, voronoi.Options{})
	same("tolerance", false, sites, voronoi.Options{Solid: b, Tolerance: 0.1})
	moved := slices.Clone(sites)
	moved[4].Z = math.Nextafter(moved[4].Z, 2)
	same("one bit of one coordinate", false, moved, voronoi.Options{Solid: b})
	swapped := slices.Clone(sites)
	swapped[0], swapped[1] = swapped[1], swapped[0]
	same("another order", false, swapped, voronoi.Options{Solid: b})
	same("one site fewer", false, sites[:4], voronoi.Options{Solid: b})
	zero := slices.Clone(sites)
	zero[2].X = 0
	minus := slices.Clone(zero)
	minus[2].X = math.Copysign(0, -1)
	if KeyOf(zero, voronoi.Options{}) != KeyOf(minus, voronoi.Options{}) {
		t.Error("-0 and 0 make different keys")
	}
	if KeyOf(nil, voronoi.Options{}) == KeyOf(make([]voronoi.Vec, 1), voronoi.Options{}) {
		t.Error("no site and a site at the origin have one key")
	}
}

// However many ask at once, each cell is computed once and all get its bits.
func TestConcurrent(t *testing.T) {
	s := NewStore(0)
	sites, o := places(400, 2), voronoi.Options{Solid: unitBox(t), Threads: 2}
	want, err := mustNew(t, sites, o).Measure(context.Background(), voronoi.All, nil)
	if err != nil {
		t.Fatal(err)
	}
	var group sync.WaitGroup
	for g := range 16 {
		group.Add(1)
		go func() {
			defer group.Done()
			h, err := s.Get(context.Background(), sites, o)
			if err != nil {
				t.Error(err)
				return
			}
			measures := []voronoi.Measures{voronoi.Volume, voronoi.Volume | voronoi.Centroid, voronoi.Area}[g%3]
			var some []int32
			if g%2 == 0 {
				for i := range int32(200) {
					some = append(some, (i*7+int32(g))%400)
				}
			}
			c, err := h.Measure(context.Background(), measures, 0, some, nil)
			if err != nil {
				t.Error(err)
				return
			}
			if some == nil {
				some = all(400)
			}
			for _, i := range some {
				if measures&voronoi.Volume != 0 && c.Volume[i] != want.Volume[i] || measures&voronoi.Area != 0 && c.Area[i] != want.Area[i] ||
					measures&voronoi.Centroid != 0 && c.Centroid[i] != want.Centroid[i] {
					t.Errorf("cell %d has other measures", i)
					return
				}
			}
		}()
	}
	group.Wait()
	if st := s.Stats(); st.Built != 1 || st.Found != 15 || st.Diagrams != 1 {
		t.Errorf("built %d, found %d, holds %d", st.Built, st.Found, st.Diagrams)
	}
}

func mustNew(t testing.TB, sites []voronoi.Vec, o voronoi.Options) *voronoi.Diagram {
	t.Helper()
	d, err := voronoi.New(sites, o)
	if err != nil {
		t.Fatal(err)
	}
	return d
}

func all(n int32) []int32 {
	out := make([]int32, n)
	for i := range out {
		out[i] = int32(i)
	}
	return out
}

// Any sequence of requests gives what one request for everything gives, and no
// cell is computed twice for the same measure.
func TestMemory(t *testing.T) {
	sites, o := places(40, 3), voronoi.Options{Solid: unitBox(t), Threads: 1}
	sites[11] = voronoi.Vec{X: 3, Y: 0.5, Z: 0.5} // outside
	sites[12] = sites[13]
	want, err := mustNew(t, sites, o).Measure(context.Background(), voronoi.All, nil)
	if err != nil {
		t.Fatal(err)
	}
	full := reflect.ValueOf(*want)
	rapid.Check(t, func(r *rapid.T) {
		s := NewStore(0)
		h := get(t, s, sites, o)
		for range rapid.IntRange(1, 6).Draw(r, "steps") {
			m := voronoi.Measures(rapid.IntRange(0, int(voronoi.All)).Draw(r, "measures"))
			list := rapid.SliceOf(rapid.Int32Range(0, 39)).Draw(r, "sites")
			if rapid.IntRange(0, 4).Draw(r, "all") == 0 {
				list = nil
			}
			got, err := h.Measure(context.Background(), m, 0, list, nil)
			if err != nil {
				r.Fatal(err)
			}
			before := s.Stats().Cells
			if _, err := h.Measure(context.Background(), m, 0, list, nil); err != nil || s.Stats().Cells != before {
				r.Fatalf("asked again, %d cells were computed, %v", s.Stats().Cells-before, err)
			}
			if list == nil {
				list = all(40)
			}
			compare(r, m, list, reflect.ValueOf(*got), full)
		}
	})
}

// compare checks the arrays of the wanted measures.
func compare(r *rapid.T, m voronoi.Measures, list []int32, got, want reflect.Value) {
	fields := map[voronoi.Measures][]string{voronoi.Volume: {"Volume"}, voronoi.Area: {"Area"}, voronoi.WallArea: {"WallArea"},
		voronoi.Faces: {"Faces", "Edges", "Vertices", "Shaped"}, voronoi.Neighbours: {"Neighbours"}, voronoi.Bounded: {"Bounded"},
		voronoi.Clipped: {"Clipped"}, voronoi.Centroid: {"Centroid", "HasCentroid"}, voronoi.Farthest: {"Farthest"},
		voronoi.NearestFace: {"NearestFace"}}
	if m == 0 {
		return
	}
	for bit, names := range fields {
		if m&bit == 0 {
			continue
		}
		for _, name := range append(names, "Inside", "Multiplicity") {
			for _, i := range list {
				g, w := got.FieldByName(name).Index(int(i)).Interface(), want.FieldByName(name).Index(int(i)).Interface()
				if g != w {
					r.Fatalf("%s of site %d is %v, want %v", name, i, g, w)
				}
			}
		}
	}
}

// Contacts are remembered, and passed through where they would take too much.
func TestContacts(t *testing.T) {
	sites, o := places(100, 4), voronoi.Options{Solid: unitBox(t)}
	type face struct {
		site int32
		c    voronoi.Contact
	}
	collect := func(s *Store, list []int32) []face {
		var out []face
		err := get(t, s, sites, o).Contacts(context.Background(), list, nil, func(site int32, cs []voronoi.Contact) error {
			for _, c := range cs {
				out = append(out, face{site, c})
			}
			return nil
		})
		if err != nil {
			t.Fatal(err)
		}
		return out
	}
	s, tight := NewStore(0), NewStore(1)
	want := collect(tight, nil)
	if tight.Stats().Contacts != 0 {
		t.Error("contacts were remembered beyond the limit")
	}
	some := collect(s, []int32{5, 3, 5})
	if len(some) == 0 || some[0].site != 5 || s.Stats().Contacts != 2 {
		t.Errorf("%d contacts, %d cells computed", len(some), s.Stats().Contacts)
	}
	if got := collect(s, nil); !slices.Equal(got, want) {
		t.Error("remembered contacts are others")
	}
	if s.Stats().Contacts != 100 {
		t.Errorf("%d cells were computed, want 100", s.Stats().Contacts)
	}
	stop := errors.New("stop")
	if err := get(t, s, sites, o).Contacts(context.Background(), nil, nil, func(int32, []voronoi.Contact) error { return stop }); err != stop {
		t.Errorf("got %v, want the error of yield", err)
	}
}

// The least recently used go first; who holds one goes on with it.
func TestLimit(t *testing.T) {
	o := voronoi.Options{Solid: unitBox(t)}
	s := NewStore(0)
	var held []*Handle
	for i := range uint64(5) {
		h := get(t, s, places(1000, i), o)
		if _, err := h.Measure(context.Background(), voronoi.Volume, 0, nil, nil); err != nil {
			t.Fatal(err)
		}
		held = append(held, h)
	}
	each := s.Stats().Bytes / 5
	if each < 1000*(96+8) {
		t.Errorf("a diagram of 1000 sites counts %d bytes", each)
	}
	get(t, s, places(1000, 0), o) // used again
	s.SetLimit(3*each + each/2)
	st := s.Stats()
	if st.Diagrams != 3 || st.Dropped != 2 || st.Bytes > 3*each+each/2 {
		t.Errorf("%d diagrams, %d dropped, %d bytes", st.Diagrams, st.Dropped, st.Bytes)
	}
	get(t, s, places(1000, 0), o)
	if s.Stats().Built != 5 {
		t.Error("the one used last was dropped")
	}
	get(t, s, places(1000, 1), o)
	if s.Stats().Built != 6 {
		t.Error("the one used least recently was kept")
	}
	if c, err := held[1].Measure(context.Background(), voronoi.Volume|voronoi.Area, 0, nil, nil); err != nil || len(c.Area) != 1000 {
		t.Errorf("a dropped diagram does not go on: %v", err)
	}
	if got := s.Stats().Bytes; got > 3*each+each/2 {
		t.Errorf("%d bytes are held: a dropped diagram is counted", got)
	}
	s.Clear()
	if st := s.Stats(); st.Diagrams != 0 || st.Bytes != 0 {
		t.Errorf("after Clear %d diagrams, %d bytes", st.Diagrams, st.Bytes)
	}
}

// Errors are passed on and not remembered; a cancelled request leaves nothing
// half done.
func TestErrors(t *testing.T) {
	s := NewStore(0)
	if _, err := s.Get(context.Background(), nil, voronoi.Options{}); !errors.Is(err, voronoi.ErrNoSites) {
		t.Errorf("got %v", err)
	}
	var notFinite *voronoi.NotFiniteError
	if _, err := s.Get(context.Background(), []voronoi.Vec{{X: math.NaN()}}, voronoi.Options{}); !errors.As(err, &notFinite) {
		t.Errorf("got %v", err)
	}
	if st := s.Stats(); st.Diagrams != 0 || st.Built != 0 || st.Bytes != 0 {
		t.Errorf("faulty diagrams are held: %+v", st)
	}
	ctx, cancel := context.WithCancel(context.Background())
	h := get(t, s, places(3000, 5), voronoi.Options{Solid: unitBox(t), Threads: 1})
	_, err := h.Measure(ctx, voronoi.Volume, 0, nil, func(done, total int) { cancel() })
	if !errors.Is(err, context.Canceled) {
		t.Fatalf("the measures were done before the first progress: %v", err)
	}
	c, err := h.Measure(context.Background(), voronoi.Volume, 0, nil, nil)
	if err != nil {
		t.Fatal(err)
	}
	if v := voronoi.Total(c.Volume); math.Abs(v-1) > 1e-12 {
		t.Errorf("after a cancelled request the volumes add up to %v", v)
	}
	if _, err := s.Get(ctx, places(3, 1), voronoi.Options{}); !errors.Is(err, context.Canceled) {
		t.Errorf("got %v", err)
	}
}

// Progress goes to who asks now, not to who asked first.
func TestProgress(t *testing.T) {
	s := NewStore(0)
	o := voronoi.Options{Solid: unitBox(t), Threads: 2}
	h := get(t, s, places(2000, 6), o)
	first, second := 0, 0
	if _, err := h.Measure(context.Background(), voronoi.Volume, 0, nil, func(done, total int) { first++ }); err != nil {
		t.Fatal(err)
	}
	told := first
	if _, err := h.Measure(context.Background(), voronoi.Area, 0, nil, func(done, total int) { second++ }); err != nil {
		t.Fatal(err)
	}
	if told == 0 || first != told || second == 0 {
		t.Errorf("the first was told %d times, then %d; the second %d times", told, first, second)
	}
}

// brokenSolid panics when it is asked anything.
type brokenSolid struct{ solid.Solid }

func (brokenSolid) Key() [16]byte   { return [16]byte{1} }
func (brokenSolid) Volume() float64 { panic("broken") }

// A build that panics keeps nobody waiting.
func TestPanic(t *testing.T) {
	s := NewStore(0)
	for range 2 {
		func() {
			defer func() {
				if recover() == nil {
					t.Error("the panic was swallowed")
				}
			}()
			s.Get(context.Background(), places(3, 1), voronoi.Options{Solid: brokenSolid{}})
		}()
	}
	if st := s.Stats(); st.Diagrams != 0 || st.Built != 0 {
		t.Errorf("a broken diagram is held: %+v", st)
	}
}
