package relation

import (
	"fmt"
	"math"
	"slices"
	"strings"
	"testing"

	"nearcell/catalog/column"
	"nearcell/voronoi/solid"
)

// The first gaps of the twenty sites in their box, as an independent program found them
// in rational numbers, with the columns' order, units and the nearest sites.
func TestTwentyGaps(t *testing.T) {
	s := &setup{def: gaps, input: table(twenty(t), false), c: Clauses{Solid: box(t, 10, 8, 4)}}
	out := s.must(t)
	var names []string
	for _, f := range out.Schema {
		names = append(names, f.Name)
	}
	if got := strings.Join(names, " "); got != "x y z radius a place" {
		t.Errorf("the columns are %s", got)
	}
	if out.Schema[3].Unit.String() != "m" || out.Schema[4].Type != column.Integer || out.Schema[5].Type != column.Text {
		t.Errorf("the columns are %v", out.Schema)
	}
	for i, w := range []struct {
		x, y, z, radius float64
		a               int64
		place           string
	}{
		{10, 8, 0, 4.102438299, 17, "corner"},
		{0, 8, 4, 3.661966685, 11, "corner"},
		{0, 919. / 124, 4, 3.644943256, 11, "edge"},
		{10, 8, 4, 3.581898938, 17, "corner"},
	} {
		for k, want := range []float64{w.x, w.y, w.z, w.radius} {
			near(t, fmt.Sprintf("%s of row %d", names[k], i), out.Cols[k].F[i], want, 1e-9)
		}
		if a, p := col(t, out, "a").I[i], col(t, out, "place").Text(i); a != w.a || p != w.place {
			t.Errorf("row %d: a %d, place %s", i, a, p)
		}
	}
	seen := map[string]bool{}
	for i := range out.N {
		seen[col(t, out, "place").Text(i)] = true
		if i > 0 && out.Cols[3].F[i] > out.Cols[3].F[i-1] {
			t.Errorf("row %d is larger than the one before", i)
		}
	}
	if len(seen) != 4 || notes(s.env) != "" {
		t.Errorf("places %v, notes %q", seen, notes(s.env))
	}
}

// Without a solid a note says what cannot be told.
func TestOpenGaps(t *testing.T) {
	s := &setup{def: gaps, input: table(twenty(t), false)}
	out := s.must(t)
	for i := range out.N {
		if col(t, out, "place").Text(i) != "inside" {
			t.Errorf("row %d lies on a %s of no solid", i, col(t, out, "place").Text(i))
		}
	}
	if out.N == 0 || !strings.Contains(notes(s.env), "only places among the sites of hall can be told") {
		t.Errorf("%d rows, notes %q", out.N, notes(s.env))
	}
}

// Neither the order of the input nor the number of threads changes a bit; TEXT
// identifiers decide which of several nearest sites is named.
func TestGapsOrder(t *testing.T) {
	var sites []site
	for i := range 27 { // every gap is as near to several sites
		sites = append(sites, site{id: fmt.Sprintf("L%02d", (i*7)%27), x: float64(i%3) + 0.5, y: float64(i/3%3) + 0.5, z: float64(i/9) + 0.5})
	}
	first := (&setup{def: gaps, input: table(sites, true), c: Clauses{Solid: box(t, 3, 3, 3)}}).must(t)
	if first.N != 64 {
		t.Errorf("%d gaps, want 64", first.N)
	}
	for seed := range uint64(4) {
		env := newEnv()
		env.Threads = 1 + int(seed)
		again := (&setup{def: gaps, input: table(shuffled(sites, seed), true), c: Clauses{Solid: box(t, 3, 3, 3)}, env: env}).must(t)
		if !same(first, again) {
			t.Fatalf("order %d gives other rows", seed)
		}
	}
	for i := range first.N {
		least := "Z"
		for _, s := range sites {
			d := math.Hypot(math.Hypot(s.x-first.Cols[0].F[i], s.y-first.Cols[1].F[i]), s.z-first.Cols[2].F[i])
			if d < first.Cols[3].F[i]*(1+1e-9) {
				least = min(least, s.id)
			}
		}
		if got := first.Cols[4].Text(i); got != least {
			t.Errorf("row %d names %s, want %s", i, got, least)
		}
	}
}

// Each value of FOR EACH has its gaps; partitions that are alike share one computation,
// and those that are not shown cost nothing.
func TestGapsForEach(t *testing.T) {
	var sites []site
	for i := range 4 {
		for k, b := range twenty(t) {
			if i == 2 && k == 16 {
				continue // a logger is missing at one instant
			}
			b.t = int64(i) * 60e6
			sites = append(sites, b)
		}
	}
	c := Clauses{Solid: box(t, 10, 8, 4), Each: []int{4}}
	s := &setup{def: gaps, input: table(shuffled(sites, 2), false), c: c}
	out := s.must(t)
	rows := map[int64]int{}
	largest := map[int64]float64{}
	for i := range out.N {
		at := col(t, out, "t").I[i]
		rows[at]++
		largest[at] = max(largest[at], col(t, out, "radius").F[i])
	}
	if out.Schema[0].Name != "t" || len(rows) != 4 || rows[0] != rows[60e6] || rows[0] != rows[180e6] || s.env.Diagrams.Stats().Built != 2 {
		t.Errorf("first column %s, rows %v, %d diagrams", out.Schema[0].Name, rows, s.env.Diagrams.Stats().Built)
	}
	if largest[0] != largest[60e6] || !(largest[120e6] > largest[0]) {
		t.Errorf("the largest are %v", largest)
	}
	wanted := make([]uint64, column.Words(s.input.N))
	for i := range s.input.N {
		if s.input.Cols[4].I[i] == 120e6 {
			column.SetBit(wanted, i)
		}
	}
	one := &setup{def: gaps, input: s.input, c: c, want: wanted, need: []string{"radius", "place"}}
	if got := one.must(t); got.N != rows[120e6] || one.env.Diagrams.Stats().Built != 1 {
		t.Errorf("%d rows, want %d; %d diagrams", got.N, rows[120e6], one.env.Diagrams.Stats().Built)
	}
}

// The rows of one site that are left: a column of the input called as a computed one.
func TestGapsOwnNames(t *testing.T) {
	in := table([]site{{id: "1", x: 1, y: 1, z: 1, temp: 4}, {id: "2", x: 2, y: 1, z: 1, temp: 4}}, false)
	in.Schema[5].Name = "radius"
	s := &setup{def: gaps, input: in, c: Clauses{Solid: box(t, 3, 2, 2), Each: []int{5}}}
	out := s.must(t)
	if out.Schema[0].Name != "own_radius" || out.Schema[4].Name != "radius" {
		t.Errorf("the columns are %v", out.Schema)
	}
}

// A LIMIT that stops the rows early loses no note.
func TestNotesWhereRowsEnd(t *testing.T) {
	sites := append(twenty(t), site{id: "99", x: 30, y: 1, z: 1})
	for _, def := range []*Definition{cells, contacts, gaps} {
		s := &setup{def: def, input: table(sites, false), c: Clauses{Solid: box(t, 10, 8, 4)}}
		b := s.bound()
		rows, err := def.Open(b, s.env, s.input, Request{})
		if err != nil {
			t.Fatal(err)
		}
		enough := fmt.Errorf("enough")
		if err := rows.Run(t.Context(), func(*column.Batch) error { return enough }); err != enough {
			t.Errorf("%s: %v", def.Noun, err)
		}
		if got := notes(s.env); !strings.Contains(got, "99 (20 m)") {
			t.Errorf("%s: notes %q", def.Noun, got)
		}
	}
}

// DUPLICATES: gaps are those of the places; the first identifier stands for a place.
func TestGapsOfDuplicates(t *testing.T) {
	sites := twenty(t)
	plain := (&setup{def: gaps, input: table(sites, false), c: Clauses{Solid: box(t, 10, 8, 4)}}).must(t)
	doubled := slices.Clone(sites)
	for i, s := range sites {
		s.id = fmt.Sprint(100 + i)
		doubled = append(doubled, s)
	}
	for _, policy := range []string{Split, Mean, First} {
		s := &setup{def: gaps, input: table(shuffled(doubled, 9), false), c: Clauses{Solid: box(t, 10, 8, 4), Duplicates: policy}}
		if !same(plain, s.must(t)) {
			t.Errorf("%s: other gaps", policy)
		}
	}
	s := &setup{def: gaps, input: table(doubled, false), c: Clauses{Solid: box(t, 10, 8, 4), Duplicates: Fail}}
	if _, err := s.run(); err == nil || !strings.Contains(err.Error(), "stand at one place") {
		t.Errorf("FAIL: %v", err)
	}
}

// A solid that knows no parts of itself is refused with the reason.
func TestGapsNeedParts(t *testing.T) {
	s := &setup{def: gaps, input: table(twenty(t), false), c: Clauses{Solid: struct{ solid.Solid }{box(t, 10, 8, 4)}}}
	if _, err := s.run(); err == nil || !strings.Contains(err.Error(), "GAPS cannot be told in air") {
		t.Errorf("%v", err)
	}
}
