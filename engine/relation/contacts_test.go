package relation

import (
	"fmt"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"nearcell/catalog/column"
)

// contactsOf gives the areas by the pair of identifiers, and checks the order of
// the rows.
func contactsOf(t testing.TB, out *column.Table) map[[2]int64]float64 {
	t.Helper()
	a, b := col(t, out, "a"), col(t, out, "b")
	got := map[[2]int64]float64{}
	for i := range out.N {
		pair := [2]int64{a.I[i], b.I[i]}
		if _, twice := got[pair]; twice {
			t.Errorf("the pair %v stands twice", pair)
		}
		got[pair] = col(t, out, "area").F[i]
		if i > 0 && (a.I[i] < a.I[i-1] || a.I[i] == a.I[i-1] && b.I[i] <= b.I[i-1]) {
			t.Errorf("rows %d and %d are not in order", i-1, i)
		}
	}
	return got
}

// The 69 contacts of the twenty sites (see testdata/reference/README.md), both
// ways round.
func TestTwentyContacts(t *testing.T) {
	s := &setup{def: contacts, input: table(twenty(t), false), c: Clauses{Solid: box(t, 10, 8, 4)}}
	out := s.must(t)
	want := readCSV(t, "twenty_contacts.csv")
	if out.N != 2*len(want) {
		t.Fatalf("%d rows, want %d", out.N, 2*len(want))
	}
	got := contactsOf(t, out)
	for _, w := range want {
		a, b := int64(float(t, w["a"])), int64(float(t, w["b"]))
		near(t, fmt.Sprintf("area %d-%d", a, b), got[[2]int64{a, b}], float(t, w["area"]), 6e-7)
		if got[[2]int64{a, b}] != got[[2]int64{b, a}] {
			t.Errorf("the areas of %d-%d differ", a, b)
		}
	}
	for i := range out.N {
		for _, name := range []string{"mx", "my", "mz", "distance"} {
			if col(t, out, name).IsNull(i) {
				t.Fatalf("%s of row %d is NULL", name, i)
			}
		}
	}
	if out.Schema[0].Name != "a" || out.Schema[3].Unit.String() != "m²" || len(out.Schema) != 7 {
		t.Errorf("the columns are %v", out.Schema)
	}
}

// Without a box there are 82 Delaunay edges (the same reference, Qhull 2020.2);
// contacts of cells on the hull do not end.
func TestOpenContacts(t *testing.T) {
	s := &setup{def: contacts, input: table(twenty(t), false)}
	out := s.must(t)
	if out.N != 2*82 {
		t.Errorf("%d rows, want 164", out.N)
	}
	open := 0
	for i := range out.N {
		inf := col(t, out, "area").F[i] > 1e300
		if inf != col(t, out, "mx").IsNull(i) {
			t.Errorf("row %d: mx is NULL: %v", i, !inf)
		}
		if inf {
			open++
		}
	}
	if open == 0 || !strings.Contains(notes(s.env), fmt.Sprintf("%d of 164 contacts of hall are unbounded", open)) {
		t.Errorf("%d open contacts, notes %q", open, notes(s.env))
	}
}

// Law 2 with duplicates: contacts are symmetric, and those of duplicates add up
// to the contact of their place.
func TestSharedContacts(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		sites := randomSites(25, uint64(rapid.IntRange(0, 1000).Draw(r, "seed")))
		plain := contactsOf(t, (&setup{def: contacts, input: table(sites, false), c: Clauses{Solid: box(t, 10, 8, 4)}}).must(t))
		place := map[int64]int64{}
		for i := range sites {
			place[int64(i+1)] = int64(i + 1)
		}
		for k := range rapid.IntRange(1, 4).Draw(r, "copies") {
			i := rapid.IntRange(0, 24).Draw(r, "copied")
			copied := sites[i]
			copied.id = fmt.Sprint(100 + k)
			place[int64(100+k)] = int64(i + 1)
			sites = append(sites, copied)
		}
		out := (&setup{def: contacts, input: table(shuffled(sites, 3), false), c: Clauses{Solid: box(t, 10, 8, 4)}}).must(t)
		sums := map[[2]int64]float64{}
		for pair, area := range contactsOf(t, out) {
			sums[[2]int64{place[pair[0]], place[pair[1]]}] += area
		}
		if len(sums) != len(plain) {
			r.Fatalf("%d places touch, want %d", len(sums), len(plain))
		}
		for pair, area := range plain {
			if d := sums[pair] - area; d > 1e-12*area+1e-15 || d < -1e-12*area-1e-15 {
				r.Fatalf("the contact %v is %g, want %g", pair, sums[pair], area)
			}
		}
	})
}

// A condition on a says which cells are computed, not which contacts they have.
func TestContactsOfOne(t *testing.T) {
	in := table(twenty(t), false)
	all := contactsOf(t, (&setup{def: contacts, input: in, c: Clauses{Solid: box(t, 10, 8, 4)}}).must(t))
	want := make([]uint64, 1)
	column.SetBit(want, 6) // site 7
	s := &setup{def: contacts, input: in, c: Clauses{Solid: box(t, 10, 8, 4)}, want: want}
	out := s.must(t)
	n := 0
	for pair := range all {
		if pair[0] == 7 {
			n++
		}
	}
	if out.N != n || n == 0 {
		t.Errorf("%d rows, want %d", out.N, n)
	}
	for pair, area := range contactsOf(t, out) {
		if pair[0] != 7 || all[pair] != area {
			t.Errorf("the contact %v is %g, want %g", pair, area, all[pair])
		}
	}
	if got := s.env.Diagrams.Stats().Contacts; got != 1 {
		t.Errorf("the contacts of %d cells were computed", got)
	}
}

// FOR EACH columns stand first.
func TestContactsForEach(t *testing.T) {
	var sites []site
	for i := range 3 {
		for _, b := range twenty(t) {
			b.t = int64(2-i) * 60e6
			sites = append(sites, b)
		}
	}
	s := &setup{def: contacts, input: table(sites, false), c: Clauses{Solid: box(t, 10, 8, 4), Each: []int{4}}}
	out := s.must(t)
	if out.N != 3*138 || out.Schema[0].Name != "t" {
		t.Fatalf("%d rows, first column %s", out.N, out.Schema[0].Name)
	}
	for i := range out.N {
		if got, want := out.Cols[0].I[i], int64(i/138)*60e6; got != want {
			t.Fatalf("row %d is of the instant %d, want %d", i, got, want)
		}
	}
	if st := s.env.Diagrams.Stats(); st.Built != 1 || st.Contacts != 20 {
		t.Errorf("%d diagrams, contacts of %d cells", st.Built, st.Contacts)
	}
}

// More rows than a batch holds.
func TestManyContacts(t *testing.T) {
	s := &setup{def: contacts, input: table(randomSites(1500, 8), false), c: Clauses{Solid: box(t, 10, 8, 4)}}
	out := s.must(t)
	if out.N <= 3*BatchRows {
		t.Fatalf("only %d rows", out.N)
	}
	got := contactsOf(t, out)
	for pair, area := range got {
		if got[[2]int64{pair[1], pair[0]}] != area {
			t.Fatalf("the contact %v is not symmetric", pair)
		}
	}
}
