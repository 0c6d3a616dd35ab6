package relation

import (
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"nearcell/catalog/column"
	"nearcell/engine/diagram"
	"nearcell/engine/problem"
	"nearcell/voronoi/solid"
)

// The twenty sites with outside values (see testdata/reference/README.md).
func TestTwentyCells(t *testing.T) {
	s := &setup{def: cells, input: table(twenty(t), false), c: Clauses{Solid: box(t, 10, 8, 4)}}
	out := s.must(t)
	want := readCSV(t, "twenty_cells.csv")
	if out.N != len(want) {
		t.Fatalf("%d rows, want %d", out.N, len(want))
	}
	for i, w := range want {
		near(t, "id", float64(col(t, out, "id").I[i]), float(t, w["id"]), 0)
		near(t, "volume of "+w["id"], col(t, out, "volume").F[i], float(t, w["volume"]), 6e-10)
		near(t, "area of "+w["id"], col(t, out, "area").F[i], float(t, w["surface"]), 6e-7)
		for _, name := range []string{"faces", "edges", "vertices"} {
			near(t, name+" of "+w["id"], float64(col(t, out, name).I[i]), float(t, w[name]), 0)
		}
	}
	near(t, "room", sum(col(t, out, "volume")), 320, 320e-12)
	near(t, "surface of the room", sum(col(t, out, "wall_area")), 2*(80+40+32), 1e-9)
	for i := range out.N {
		if !column.Bit(col(t, out, "bounded").Bits, i) {
			t.Errorf("cell %d is not bounded", i)
		}
	}
	if got := col(t, out, "volume").Unit.String(); got != "m³" {
		t.Errorf("the unit of volume is %s", got)
	}
	if got := notes(s.env); got != "" {
		t.Errorf("notes about nothing: %s", got)
	}
}

// Without a solid: the bounded cells of the twenty sites are known (convex hull
// of the other 15; the same reference).
func TestUnboundedCells(t *testing.T) {
	s := &setup{def: cells, input: table(twenty(t), false)}
	out := s.must(t)
	bounded := map[int64]bool{7: true, 8: true, 14: true, 19: true, 20: true}
	for i := range out.N {
		id := col(t, out, "id").I[i]
		if got := column.Bit(col(t, out, "bounded").Bits, i); got != bounded[id] {
			t.Errorf("bounded of %d is %v", id, got)
		}
		if inf := math.IsInf(col(t, out, "volume").F[i], 1); inf == bounded[id] {
			t.Errorf("volume of %d is infinite: %v", id, inf)
		}
		if null := col(t, out, "cx").IsNull(i); null == bounded[id] {
			t.Errorf("cx of %d is NULL: %v", id, null)
		}
	}
	if want := "15 of 20 cells of hall are unbounded (no solid)"; !strings.Contains(notes(s.env), want) {
		t.Errorf("no note %q in %q", want, notes(s.env))
	}
	// Nobody needs to know where only what is finite was asked for.
	s = &setup{def: cells, input: table(twenty(t), false), need: []string{"id", "neighbours"}}
	s.must(t)
	if got := notes(s.env); got != "" {
		t.Errorf("notes about nothing: %s", got)
	}
}

func randomSites(n int, seed uint64) []site {
	r := rand.New(rand.NewPCG(seed, 3))
	out := make([]site, n)
	for i := range out {
		out[i] = site{id: strconv.Itoa(i + 1), x: 10 * r.Float64(), y: 8 * r.Float64(), z: 4 * r.Float64(), temp: 20 * r.Float64()}
	}
	return out
}

// Law 3: the order of the rows and the number of threads change no bit.
func TestOrderAndThreads(t *testing.T) {
	for _, text := range []bool{false, true} {
		for _, def := range []*Definition{cells, contacts} {
			sites := append(randomSites(300, 1), site{id: "1000", x: 3, y: 3, z: 3}, site{id: "1001", x: 3, y: 3, z: 3})
			var first *column.Table
			var firstNotes string
			for k := range uint64(5) {
				env := newEnv()
				env.Threads = 1 + int(k%3)
				s := &setup{def: def, input: table(shuffled(sites, k), text), c: Clauses{Solid: box(t, 10, 8, 4)}, env: env}
				out := s.must(t)
				if first == nil {
					first, firstNotes = out, notes(env)
					continue
				}
				if !same(first, out) {
					t.Fatalf("%s differ with another order of rows", def.Noun)
				}
				if notes(env) != firstNotes {
					t.Fatalf("notes differ: %q and %q", firstNotes, notes(env))
				}
			}
		}
	}
}

// Identifiers that are numbers sort as numbers, texts by code points.
func TestOrderOfRows(t *testing.T) {
	sites := []site{{id: "10", x: 1}, {id: "9", x: 2}, {id: "-1", x: 3}}
	got := func(text bool) string {
		s := &setup{def: cells, input: table(sites, text), need: []string{"id"}}
		out := s.must(t)
		var ids []string
		for i := range out.N {
			ids = append(ids, plainID(&out.Cols[0], i))
		}
		return strings.Join(ids, " ")
	}
	if g := got(false); g != "-1 9 10" {
		t.Errorf("numbers come out as %s", g)
	}
	if g := got(true); g != "-1 10 9" {
		t.Errorf("texts come out as %s", g)
	}
}

// Law 4: 672 instants with three different sets of loggers cost three partitions.
func TestForEachShares(t *testing.T) {
	var sites []site
	base := randomSites(20, 2)
	for i := range 672 {
		for k, b := range base {
			if i >= 300 && k == 4 || i >= 500 && k == 7 {
				continue
			}
			b.t = int64(i) * 900e6
			sites = append(sites, b)
		}
	}
	s := &setup{def: cells, input: table(shuffled(sites, 1), false), c: Clauses{Solid: box(t, 10, 8, 4), Each: []int{4}},
		need: []string{"t", "id", "volume"}}
	out := s.must(t)
	if out.N != len(sites) {
		t.Fatalf("%d rows, want %d", out.N, len(sites))
	}
	near(t, "rooms", sum(col(t, out, "volume")), 672*320, 1e-7)
	at := map[int64]float64{}
	for i := range out.N {
		at[col(t, out, "t").I[i]] += col(t, out, "volume").F[i]
		if i > 0 && col(t, out, "t").I[i] == col(t, out, "t").I[i-1] && col(t, out, "id").I[i] <= col(t, out, "id").I[i-1] {
			t.Fatal("rows of an instant are not in the order of identifiers")
		}
		if i > 0 && col(t, out, "t").I[i] < col(t, out, "t").I[i-1] {
			t.Fatal("instants are not in order")
		}
	}
	for instant, v := range at {
		near(t, fmt.Sprintf("room at %d", instant), v, 320, 320e-12)
	}
	st := s.env.Diagrams.Stats()
	if st.Built != 3 || st.Cells != 20+19+18 {
		t.Errorf("%d diagrams and %d cells were computed, want 3 and 57", st.Built, st.Cells)
	}
	// Asked again, nothing is computed.
	again := s.must(t)
	if !same(out, again) || s.env.Diagrams.Stats().Cells != st.Cells || s.env.Diagrams.Stats().Built != 3 {
		t.Error("the second run computed again, or something else")
	}
}

// Law 1 with duplicates: SPLIT shares a cell, the sum stays the room.
func TestDuplicates(t *testing.T) {
	sites := append(twenty(t), site{id: "107", x: 5.5, y: 2.9, z: 1.5, temp: 10}, site{id: "108", x: 5.5, y: 2.9, z: 1.5, temp: 31})
	in := table(sites, false)
	run := func(policy string) (*column.Table, *setup, error) {
		s := &setup{def: cells, input: in, c: Clauses{Solid: box(t, 10, 8, 4), Duplicates: policy}}
		out, err := s.run()
		return out, s, err
	}
	row := func(out *column.Table, id int64) int {
		for i := range out.N {
			if col(t, out, "id").I[i] == id {
				return i
			}
		}
		return -1
	}
	out, s, err := run(Split)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "room", sum(col(t, out, "volume")), 320, 320e-12)
	for _, id := range []int64{7, 107, 108} {
		i := row(out, id)
		near(t, "share of 7", col(t, out, "volume").F[i], 14.597742513/3, 6e-10)
		near(t, "faces of 7", float64(col(t, out, "faces").I[i]), 10, 0)
	}
	if want := "3 sites of hall share a place with another (7, 107, 108): the measures of their cell are split"; !strings.Contains(notes(s.env), want) {
		t.Errorf("no note %q in %q", want, notes(s.env))
	}
	out, _, err = run(First)
	if err != nil || out.N != 20 || row(out, 107) >= 0 {
		t.Fatalf("FIRST gives %d rows, %v", out.N, err)
	}
	near(t, "volume of 7", col(t, out, "volume").F[row(out, 7)], 14.597742513, 6e-10)
	near(t, "temp of 7", col(t, out, "temp").F[row(out, 7)], 20.2, 0)
	out, _, err = run(Mean)
	if err != nil || out.N != 20 {
		t.Fatalf("MEAN gives %d rows, %v", out.N, err)
	}
	near(t, "temp of 7", col(t, out, "temp").F[row(out, 7)], (20.2+10+31)/3, 1e-12)
	near(t, "temp of 8", col(t, out, "temp").F[row(out, 8)], 18.8, 0)
	_, _, err = run(Fail)
	wantProblem(t, err, "duplicates", "sites 7 and 107 of hall stand at one place (5.5, 2.9, 1.5)")
}

func wantProblem(t *testing.T, err error, code, text string) {
	t.Helper()
	var p *problem.Problem
	if !errors.As(err, &p) {
		t.Fatalf("got %v, want a problem %s", err, code)
	}
	if p.Code != code || !strings.Contains(p.Error(), text) {
		t.Errorf("got %s: %s\nwant %s: …%s…", p.Code, p.Error(), code, text)
	}
}

// A logger keyed in outside the wall is named, and its space is its neighbours'.
func TestOutside(t *testing.T) {
	sites := append(twenty(t), site{id: "99", x: 12.5, y: 1, z: 1})
	s := &setup{def: cells, input: table(sites, false), c: Clauses{Solid: box(t, 10, 8, 4), Tolerance: 0.05}}
	out := s.must(t)
	if out.N != 20 {
		t.Fatalf("%d rows, want 20", out.N)
	}
	near(t, "room", sum(col(t, out, "volume")), 320, 320e-12)
	if want := "1 site of hall lies outside air and is left out of the partition: 99 (2.5 m)"; !strings.Contains(notes(s.env), want) {
		t.Errorf("no note %q in %q", want, notes(s.env))
	}
	// Within the tolerance it takes part.
	sites[20].x = 10.04
	s = &setup{def: cells, input: table(sites, false), c: Clauses{Solid: box(t, 10, 8, 4), Tolerance: 0.05}}
	if out := s.must(t); out.N != 21 {
		t.Errorf("%d rows, want 21", out.N)
	}
	// FOR EACH says it once.
	var many []site
	for i := range 10 {
		for _, b := range sites {
			b.t = int64(i)
			if b.id == "99" {
				b.x = 12.5
			}
			many = append(many, b)
		}
	}
	s = &setup{def: cells, input: table(many, false), c: Clauses{Solid: box(t, 10, 8, 4), Each: []int{4}}}
	s.must(t)
	if n := strings.Count(notes(s.env), "99"); n != 1 {
		t.Errorf("the site outside is named %d times: %s", n, notes(s.env))
	}
	// … with the farthest that it lies outside, whatever the order of the rows.
	moved := append(twenty(t), site{id: "99", x: 12.5, y: 1, z: 1}, site{id: "99", x: 13, y: 1, z: 1, t: 1}, site{id: "99", x: 12, y: 1, z: 1, t: 2})
	moved = append(moved, site{id: "1", x: 1, t: 1}, site{id: "1", x: 1, t: 2})
	for k := range uint64(6) {
		in := table(shuffled(moved, k), false)
		in.Schema[4].Type, in.Cols[4].Type = column.Integer, column.Integer // passes, which may be small
		s = &setup{def: cells, input: in, c: Clauses{Solid: box(t, 10, 8, 4), Each: []int{4}}}
		s.must(t)
		if want := "left out of the partition: 99 (3 m)"; !strings.Contains(notes(s.env), want) {
			t.Errorf("no note %q in %q", want, notes(s.env))
		}
	}
	// Nobody inside.
	for i := range sites {
		sites[i].x += 1000
	}
	s = &setup{def: cells, input: table(sites, false), c: Clauses{Solid: box(t, 10, 8, 4)}}
	_, err := s.run()
	wantProblem(t, err, "no-sites", "no site of hall lies in air")
	wantProblem(t, err, "no-sites", "have one origin and one unit")
	many[0].t = 1000 // one instant with a site far away only
	many[0].x = 50
	s = &setup{def: cells, input: table(many, false), c: Clauses{Solid: box(t, 10, 8, 4), Each: []int{4}}}
	_, err = s.run()
	wantProblem(t, err, "no-sites", "no site of hall lies in air at t = 1970-01-01 00:00:00.001, so")
}

// Law 5: what is shown changes nothing but what is shown, and costs only that.
func TestWanted(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		sites := randomSites(30, uint64(rapid.IntRange(0, 50).Draw(r, "seed")))
		in := table(sites, false)
		all := (&setup{def: cells, input: in, c: Clauses{Solid: box(t, 10, 8, 4)}}).must(t)
		want := make([]uint64, column.Words(in.N))
		var rows []int
		for i := range in.N {
			if rapid.Bool().Draw(r, "wanted") {
				column.SetBit(want, i)
				rows = append(rows, i)
			}
		}
		s := &setup{def: cells, input: in, c: Clauses{Solid: box(t, 10, 8, 4)}, want: want}
		some := s.must(t)
		if some.N != len(rows) {
			r.Fatalf("%d rows, want %d", some.N, len(rows))
		}
		for k, i := range rows { // identifiers are in the order of the input here
			for c := range some.Cols {
				x, y := some.Cols[c].Value(k), all.Cols[c].Value(i)
				x.Unit, y.Unit = nil, nil
				if x != y {
					r.Fatalf("column %s of row %d is %v, want %v", some.Schema[c].Name, i, x, y)
				}
			}
		}
		if got := s.env.Diagrams.Stats().Cells; got != int64(len(rows)) {
			r.Fatalf("%d cells were computed for %d rows", got, len(rows))
		}
	})
}

// One instant of many is one partition.
func TestOneInstant(t *testing.T) {
	var sites []site
	for i := range 20 {
		for _, b := range randomSites(12, uint64(i)) {
			b.t = int64(i)
			sites = append(sites, b)
		}
	}
	in := table(sites, false)
	want := make([]uint64, column.Words(in.N))
	for i := range 12 {
		column.SetBit(want, 7*12+i)
	}
	for _, def := range []*Definition{cells, contacts} {
		s := &setup{def: def, input: in, c: Clauses{Solid: box(t, 10, 8, 4), Each: []int{4}}, want: want}
		out := s.must(t)
		for i := range out.N {
			if col(t, out, "t").I[i] != 7 {
				t.Fatalf("%s: row %d is of instant %d", def.Noun, i, col(t, out, "t").I[i])
			}
		}
		if st := s.env.Diagrams.Stats(); out.N < 12 || st.Built != 1 {
			t.Errorf("%s: %d rows, %d diagrams", def.Noun, out.N, st.Built)
		}
	}
}

// One cell of many is one cell.
func TestOneOfMany(t *testing.T) {
	in := table(randomSites(20000, 9), false)
	want := make([]uint64, column.Words(in.N))
	column.SetBit(want, 12345)
	s := &setup{def: cells, input: in, c: Clauses{Solid: box(t, 10, 8, 4)}, want: want, need: []string{"id", "volume"}}
	out := s.must(t)
	if out.N != 1 || col(t, out, "id").I[0] != 12346 || s.env.Diagrams.Stats().Cells != 1 {
		t.Errorf("%d rows, %d cells", out.N, s.env.Diagrams.Stats().Cells)
	}
}

// No measure asked for, no cell computed.
func TestNoMeasure(t *testing.T) {
	s := &setup{def: cells, input: table(twenty(t), false), c: Clauses{Solid: box(t, 10, 8, 4)}, need: []string{"id", "temp"}}
	if out := s.must(t); out.N != 20 || s.env.Diagrams.Stats().Cells != 0 {
		t.Errorf("%d rows, %d cells", out.N, s.env.Diagrams.Stats().Cells)
	}
}

// Sites in one plane, on one line, at one place; two and one of them. Sums are
// those of the box (law 1).
func TestDegenerate(t *testing.T) {
	line := func(n int, f func(i int) site) []site {
		out := make([]site, n)
		for i := range out {
			out[i] = f(i)
			out[i].id = strconv.Itoa(i)
		}
		return out
	}
	for name, sites := range map[string][]site{
		"plane":   line(49, func(i int) site { return site{x: 1 + float64(i%7), y: 0.5 + float64(i/7), z: 2} }),
		"line":    line(9, func(i int) site { return site{x: 1 + float64(i), y: 3, z: 2} }),
		"place":   line(5, func(i int) site { return site{x: 1, y: 3, z: 2} }),
		"one":     line(1, func(i int) site { return site{x: 1, y: 3, z: 2} }),
		"two":     line(2, func(i int) site { return site{x: 2 + 4*float64(i), y: 3, z: 2} }),
		"lattice": line(5*4*2, func(i int) site { return site{x: 1 + 2*float64(i%5), y: 1 + 2*float64(i/5%4), z: 1 + 2*float64(i/20)} }),
	} {
		s := &setup{def: cells, input: table(sites, false), c: Clauses{Solid: box(t, 10, 8, 4)}}
		out := s.must(t)
		if out.N != len(sites) {
			t.Errorf("%s: %d rows", name, out.N)
		}
		near(t, name+": room", sum(col(t, out, "volume")), 320, 320e-12)
		near(t, name+": walls", sum(col(t, out, "wall_area")), 304, 304e-9)
	}
}

func TestOmitting(t *testing.T) {
	s := &setup{def: cells, input: table(twenty(t), false), c: Clauses{Solid: box(t, 10, 8, 4), Omitting: []string{"7"}, Because: "moved"}}
	out := s.must(t)
	if out.N != 19 {
		t.Errorf("%d rows, want 19", out.N)
	}
	near(t, "room", sum(col(t, out, "volume")), 320, 320e-12)
	if want := "'7' was left out before the partition (OMITTING: moved)"; !strings.Contains(notes(s.env), want) {
		t.Errorf("no note %q in %q", want, notes(s.env))
	}
}

// An L-shaped room: the volumes add up to it, and a cell around its re-entrant
// edge has no count of edges.
func TestReentrant(t *testing.T) {
	room, err := solid.NewPrism([]solid.Vec2{{X: 0, Y: 0}, {X: 10, Y: 0}, {X: 10, Y: 4}, {X: 5, Y: 4}, {X: 5, Y: 8}, {X: 0, Y: 8}}, nil, 0, 4)
	if err != nil {
		t.Fatal(err)
	}
	sites := []site{{id: "1", x: 4, y: 3, z: 2}, {id: "2", x: 9, y: 1, z: 2}, {id: "3", x: 1, y: 7, z: 2}}
	s := &setup{def: cells, input: table(sites, false), c: Clauses{Solid: room}, need: []string{"id", "volume", "edges", "vertices", "faces"}}
	out := s.must(t)
	near(t, "room", sum(col(t, out, "volume")), 240, 240e-12)
	for i, null := range []bool{true, false, false} {
		if got := col(t, out, "edges").IsNull(i); got != null || col(t, out, "vertices").IsNull(i) != null {
			t.Errorf("edges of cell %d are NULL: %v", i+1, got)
		}
		if col(t, out, "faces").IsNull(i) {
			t.Errorf("faces of cell %d are NULL", i+1)
		}
	}
	if want := "1 cell of hall is cut by a re-entrant part of air: edges and vertices are NULL there"; !strings.Contains(notes(s.env), want) {
		t.Errorf("no note %q in %q", want, notes(s.env))
	}
	s = &setup{def: cells, input: table(sites, false), c: Clauses{Solid: room}, need: []string{"id", "faces"}}
	s.must(t)
	if got := notes(s.env); got != "" {
		t.Errorf("notes about nothing: %s", got)
	}
}

// Sheets and curved surfaces are not slow: their cells come from the tetrahedralisation.
func TestSheet(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 1))
	flat := make([]site, 6000)
	for i := range flat {
		flat[i] = site{id: strconv.Itoa(i), x: 10 * r.Float64(), y: 8 * r.Float64(), z: 2 + 1e-4*r.Float64()}
	}
	s := &setup{def: cells, input: table(flat, false), c: Clauses{Solid: box(t, 10, 8, 4)}, need: []string{"volume"}}
	near(t, "room", sum(col(t, s.must(t), "volume")), 320, 320e-12)
	if got := notes(s.env); got != "" {
		t.Errorf("a note about a sheet: %s", got)
	}
	b := s.bound()
	rows, err := b.Def.Open(b, s.env, s.input, Request{})
	if err != nil {
		t.Fatal(err)
	}
	if c, err := rows.Cost(); err != nil || c.OneByOne || c.Slow {
		t.Errorf("all cells of a sheet: %+v, %v", c, err)
	}
}

// A site's column that has the name of a computed one is read as own_<name>.
func TestOwnNames(t *testing.T) {
	in := table(twenty(t), false)
	in.Schema[5].Name = "Area"
	b := (&setup{def: cells, input: in}).bound()
	if b.Columns[5].Name != "own_Area" || b.Columns[5].Site != 5 {
		t.Errorf("the column is called %s", b.Columns[5].Name)
	}
	in.Schema[4].Name = "own_area"
	b = (&setup{def: cells, input: in}).bound()
	if b.Columns[4].Name != "own_area" || b.Columns[5].Name != "own_own_Area" {
		t.Errorf("the columns are called %s and %s", b.Columns[4].Name, b.Columns[5].Name)
	}
}

func BenchmarkCellsForEach(b *testing.B) {
	var sites []site
	for i := range 672 {
		for _, s := range randomSites(54, 2) {
			s.t = int64(i)
			sites = append(sites, s)
		}
	}
	in := table(sites, false)
	b.ResetTimer()
	for range b.N {
		s := &setup{def: cells, input: in, c: Clauses{Each: []int{4}, Solid: box(b, 10, 8, 4)}, env: &Env{
			Diagrams: diagram.NewStore(0), Notes: newEnv().Notes, Threads: 2}, need: []string{"t", "id", "volume"}}
		s.must(b)
	}
}
