package relation

import (
	"math"
	"strings"
	"testing"

	"nearcell/catalog/column"
)

// Input without a partition: one clear message each.
func TestRefusedInput(t *testing.T) {
	each := Clauses{Each: []int{4}}
	for _, c := range []struct {
		name  string
		sites []site
		null  int // column made NULL in row 0; -1: none
		c     Clauses
		code  string
		text  string
	}{
		{"twice", []site{{id: "L1", x: 1}, {id: "L2"}, {id: "L1"}}, -1, Clauses{}, "repeated-id", "id 'L1' stands 2 times in hall: identifiers of sites must differ (FOR EACH makes"},
		{"twice at one instant", []site{{id: "L1", x: 1, t: 60e6}, {id: "L1", t: 60e6}}, -1, each, "repeated-id", "id 'L1' stands 2 times in hall at t = 1970-01-01 00:01:00"},
		{"no id", []site{{id: "L1"}}, 0, Clauses{}, "no-id", "row 1 of hall has no id"},
		{"no y", []site{{id: "L1"}}, 2, Clauses{}, "no-position", "site 'L1' of hall has no y"},
		{"endless x", []site{{id: "L1", x: math.Inf(1)}}, -1, Clauses{}, "no-position", "x of site 'L1' of hall is Infinity, no coordinate"},
		{"huge x", []site{{id: "L1", x: 1e200}}, -1, Clauses{}, "no-position", "of site 'L1' is too large"},
		{"omitting nobody", []site{{id: "L17"}, {id: "L2", x: 1}}, -1, Clauses{Omitting: []string{"L71"}}, "no-site", "there is no site 'L71' in hall to leave out (did you mean 'L17'?)"},
		{"empty room", nil, -1, Clauses{Solid: box(t, 1, 1, 1)}, "no-sites", "there is no site in hall, so air belongs to nobody"},
	} {
		in := table(c.sites, true)
		if c.null >= 0 {
			in.Cols[c.null].SetNull(0)
		}
		_, err := (&setup{def: cells, input: in, c: c.c}).run()
		t.Run(c.name, func(t *testing.T) { wantProblem(t, err, c.code, c.text) })
	}
}

// Stamps that the loggers never had in common make partitions of one site each:
// refused for time stamps, and not for passes of a walk whose readings are all
// different.
func TestScattered(t *testing.T) {
	var sites []site
	for i := range 50 {
		for k, b := range randomSites(10, 4) {
			b.t = int64(i)*900e6 + int64(k)*7e6
			sites = append(sites, b)
		}
	}
	_, err := (&setup{def: cells, input: table(sites, false), c: Clauses{Each: []int{4}}}).run()
	wantProblem(t, err, "scattered", "FOR EACH t makes 500 partitions of hall, half of them with at most 1 of the 10 sites")
	wantProblem(t, err, "scattered", "SERIES OF hall BY id ON t EVERY INTERVAL '15' MINUTE")

	walk := randomSites(30, 5)
	in := table(walk, false)
	pass := column.NewBuilder(column.Integer, nil)
	for i := range walk {
		pass.AppendInt(int64(i % 3))
	}
	in.Cols[4] = pass.Finish()
	in.Schema[4] = column.Field{Name: "pass", Type: column.Integer}
	s := &setup{def: cells, input: in, c: Clauses{Each: []int{4}, Solid: box(t, 10, 8, 4)}}
	if out := s.must(t); out.N != 30 {
		t.Errorf("%d rows of the walk", out.N)
	}
	if got := notes(s.env); got != "" {
		t.Errorf("notes about nothing: %s", got)
	}
}

// Rows without an instant are in no partition, and that is said.
func TestNullEach(t *testing.T) {
	sites := append(randomSites(5, 1), site{id: "6", x: 1, t: -1}, site{id: "7", x: 2, t: -1})
	s := &setup{def: cells, input: table(sites, false), c: Clauses{Each: []int{4}, Solid: box(t, 10, 8, 4)}}
	if out := s.must(t); out.N != 5 {
		t.Errorf("%d rows, want 5", out.N)
	}
	if want := "2 rows without a value of t are in no partition of FOR EACH t and left out"; !strings.Contains(notes(s.env), want) {
		t.Errorf("no note %q in %q", want, notes(s.env))
	}
}
