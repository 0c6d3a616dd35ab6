package coverage

import (
	"context"
	"errors"
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"nearcell/voronoi"
	"nearcell/voronoi/solid"
	"nearcell/voronoi/solid/mesh"
)

// A gap on a re-entrant edge: the four nearest sites leave only ways up that lead into
// the corner that the room has not.
func TestReentrantEdge(t *testing.T) {
	r := 2.0
	var sites []Vec
	for _, a := range []Vec{{X: 1, Y: -0.2}, {X: -0.2, Y: 1}, {X: 0.5, Y: 0.5, Z: 1}, {X: 0.5, Y: 0.5, Z: -1}} {
		sites = append(sites, scale(-r/length(a), a))
	}
	outline := []solid.Vec2{{X: -4, Y: -4}, {X: 4, Y: -4}, {X: 4, Y: 0}, {X: 0, Y: 0}, {X: 0, Y: 4}, {X: -4, Y: 4}}
	l, err := solid.NewPrism(outline, nil, -4, 4)
	if err != nil {
		t.Fatal(err)
	}
	g, ok := find(gapsOf(t, sites, l), Vec{}, 1e-12)
	if !ok || g.Place != Edge || math.Abs(g.Radius-r) > 1e-15 || g.Site != 0 {
		t.Errorf("on the re-entrant edge: %+v, %v", g, ok)
	}
	full := box(t, Vec{X: -4, Y: -4, Z: -4}, Vec{X: 4, Y: 4, Z: 4})
	if g, ok := find(gapsOf(t, sites, full), Vec{}, 0.1); ok {
		t.Errorf("in the whole box the distance grows towards the corner, but there is %+v", g)
	}
}

// Neither the order of the sites nor the number of threads changes a bit; only the
// sites' numbers change with their order.
func TestOrderAndThreads(t *testing.T) {
	r := rand.New(rand.NewPCG(4, 4))
	m := newRoom(t, r, true)
	sites := m.places(r, 700)
	for i := range 125 { // and a regular part
		sites = append(sites, Vec{X: 0.1 * float64(i%5), Y: 0.1 * float64(i/5%5), Z: 0.1 * float64(i/25)})
	}
	shuffled := slices.Clone(sites)
	r.Shuffle(len(shuffled), func(i, j int) { shuffled[i], shuffled[j] = shuffled[j], shuffled[i] })
	var first []Gap
	for _, list := range [][]Vec{sites, shuffled} {
		d, err := voronoi.New(list, voronoi.Options{Solid: m.solid, Threads: 1})
		if err != nil {
			t.Fatal(err)
		}
		for _, threads := range []int{1, 2, 7, 0} {
			g, err := Gaps(context.Background(), d, list, Options{Threads: threads})
			if err != nil {
				t.Fatal(err)
			}
			if first == nil {
				first = g
			}
			if len(g) != len(first) || len(g) < 200 {
				t.Fatalf("%d gaps, then %d", len(first), len(g))
			}
			for i := range g {
				a, b := g[i], first[i]
				if a.At != b.At || a.Radius != b.Radius || a.Place != b.Place {
					t.Fatalf("%d threads: %+v, then %+v", threads, b, a)
				}
				if math.Abs(length(sub(list[a.Site], a.At))-a.Radius) > 1e-9*a.Radius {
					t.Fatalf("site %d is not the nearest of %+v", a.Site, a)
				}
			}
		}
	}
}

// Sites that coincide and sites left out of the partition.
func TestWhoTakesPart(t *testing.T) {
	body := box(t, Vec{}, Vec{X: 4, Y: 2, Z: 2})
	sites := []Vec{{X: 9, Y: 1, Z: 1}, {X: 1, Y: 1, Z: 1}, {X: 3, Y: 1, Z: 1}, {X: 1, Y: 1, Z: 1}, {X: 3, Y: 1, Z: 1}}
	got, want := gapsOf(t, sites, body), gapsOf(t, sites[1:3], body)
	if len(got) != len(want) {
		t.Fatalf("%d gaps, want %d", len(got), len(want))
	}
	for i := range got {
		want[i].Site++
		if got[i] != want[i] {
			t.Errorf("%+v, want %+v", got[i], want[i])
		}
	}
	d, err := voronoi.New(sites[:1], voronoi.Options{Solid: body})
	if err != nil {
		t.Fatal(err)
	}
	if g, err := Gaps(context.Background(), d, sites[:1], Options{}); len(g) != 0 || err != nil {
		t.Errorf("no site takes part: %v, %v", g, err)
	}
}

// solidOnly hides what a solid knows of its parts.
type solidOnly struct{ solid.Solid }

func TestRefused(t *testing.T) {
	sites := twenty(t)
	d, err := voronoi.New(sites, voronoi.Options{})
	if err != nil {
		t.Fatal(err)
	}
	if _, err := Gaps(context.Background(), d, sites[1:], Options{}); !errors.Is(err, ErrSites) {
		t.Errorf("other sites: %v", err)
	}
	stopped, stop := context.WithCancel(context.Background())
	stop()
	if _, err := Gaps(stopped, d, sites, Options{}); !errors.Is(err, context.Canceled) {
		t.Errorf("stopped: %v", err)
	}
	d, err = voronoi.New(sites, voronoi.Options{Solid: solidOnly{box(t, Vec{}, Vec{X: 10, Y: 8, Z: 4})}})
	if err != nil {
		t.Fatal(err)
	}
	var undivided *UndividedError
	if _, err := Gaps(context.Background(), d, sites, Options{}); !errors.As(err, &undivided) || undivided.Kind != "box" {
		t.Errorf("a solid without parts: %v", err)
	}
}

// Stopping in the middle, told by the progress.
func TestStop(t *testing.T) {
	r := rand.New(rand.NewPCG(8, 8))
	m := newRoom(t, r, false)
	sites := m.places(r, 3000)
	d, err := voronoi.New(sites, voronoi.Options{Solid: m.solid})
	if err != nil {
		t.Fatal(err)
	}
	ctx, stop := context.WithCancel(context.Background())
	last, calls := 0, 0
	_, err = Gaps(ctx, d, sites, Options{Threads: 2, Progress: func(done, total int) {
		if done < last || done > total || total != len(sites) {
			t.Errorf("progress goes from %d to %d of %d", last, done, total)
		}
		last = done
		if calls++; calls == 3 {
			stop()
		}
	}})
	if !errors.Is(err, context.Canceled) || last > 20*chunkSize {
		t.Errorf("stopped after %d cells: %v", last, err)
	}
}

// Scaling by a power of two scales everything to the last bit.
func TestScaling(t *testing.T) {
	sites := twenty(t)
	g := gapsOf(t, sites, box(t, Vec{}, Vec{X: 10, Y: 8, Z: 4}))
	const by = 0x1p20
	for i := range sites {
		sites[i] = scale(by, sites[i])
	}
	large := gapsOf(t, sites, box(t, Vec{}, Vec{X: 10 * by, Y: 8 * by, Z: 4 * by}))
	if len(large) != len(g) {
		t.Fatalf("%d gaps, then %d", len(g), len(large))
	}
	for i := range g {
		if large[i] != (Gap{scale(by, g[i].At), by * g[i].Radius, g[i].Site, g[i].Place}) {
			t.Errorf("%+v, then %+v", g[i], large[i])
		}
	}
}

// The largest gap is the farthest point of its site's cell, which package voronoi
// measures in its own way.
func TestAgainstFarthest(t *testing.T) {
	for seed := range uint64(20) {
		r := rand.New(rand.NewPCG(seed, 31))
		m := newRoom(t, r, seed%2 == 0)
		sites := m.places(r, 3+int(seed)*5)
		d, err := voronoi.New(sites, voronoi.Options{Solid: m.solid})
		if err != nil {
			t.Fatal(err)
		}
		cells, err := d.Measure(context.Background(), voronoi.Farthest, nil)
		if err != nil {
			t.Fatal(err)
		}
		g, err := Gaps(context.Background(), d, sites, Options{})
		if err != nil {
			t.Fatal(err)
		}
		if far := slices.Max(cells.Farthest); math.Abs(far-g[0].Radius) > 1e-13*far {
			t.Errorf("room %d: the farthest point is at %v, the largest gap at %v", seed, far, g[0].Radius)
		}
	}
}

// A part that is a mesh has the gaps of the box that it is, in a prism, in a mesh and
// without a solid, stretched or not.
func TestGapsWithinMesh(t *testing.T) {
	room, err := solid.NewPrism([]solid.Vec2{{}, {X: 10}, {X: 10, Y: 4}, {X: 6, Y: 4}, {X: 6, Y: 8}, {Y: 8}}, nil, 0, 4)
	if err != nil {
		t.Fatal(err)
	}
	pillar, _ := solid.NewBox(Vec{X: 2, Y: 2, Z: -1}, Vec{X: 3, Y: 3, Z: 5})
	rough, err := mesh.Combine(mesh.Minus, room, pillar)
	if err != nil {
		t.Fatal(err)
	}
	whole, err := mesh.Combine(mesh.Plus, room, room)
	if err != nil {
		t.Fatal(err)
	}
	part, _ := solid.NewBox(Vec{X: 4, Y: 1, Z: 0.5}, Vec{X: 9, Y: 9, Z: 2})
	r := rand.New(rand.NewPCG(8, 8))
	var sites []Vec
	for len(sites) < 25 {
		if p := (Vec{X: 10 * r.Float64(), Y: 8 * r.Float64(), Z: 4 * r.Float64()}); rough.Side(p, 0) == solid.Inside {
			sites = append(sites, p)
		}
	}
	for _, stretch := range []Vec{{}, {X: 1, Y: 1, Z: 3}} {
		for name, of := range map[string][2]solid.Solid{"prism": {room, room}, "mesh": {whole, room}, "none": {nil, nil}} {
			d, err := voronoi.New(sites, voronoi.Options{Solid: of[0], Stretch: stretch})
			if err != nil {
				t.Fatal(err)
			}
			plain, err := voronoi.New(sites, voronoi.Options{Solid: of[1], Stretch: stretch})
			if err != nil {
				t.Fatal(err)
			}
			region, err := mesh.NewRegion(of[0], part)
			if err != nil {
				t.Fatal(err)
			}
			got, err := Gaps(context.Background(), d, sites, Options{Within: region})
			if err != nil {
				t.Fatal(err)
			}
			want, err := Gaps(context.Background(), plain, sites, Options{Within: part})
			if err != nil {
				t.Fatal(err)
			}
			if len(got) != len(want) || len(got) < 5 {
				t.Fatalf("%s, stretched by %v: gaps in the mesh %v, in the box %v", name, stretch, got, want)
			}
			for i := range got {
				if math.Abs(got[i].Radius-want[i].Radius) > 1e-9 || got[i].Site != want[i].Site || got[i].Place != want[i].Place {
					t.Errorf("%s: %+v, in the box %+v", name, got[i], want[i])
				}
			}
		}
	}
}
