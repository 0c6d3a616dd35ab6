package oracle

import (
	"flag"
	"os"
	"slices"
	"strings"
	"testing"
)

var (
	seed    = flag.Uint64("seed", 1, "of the first tables and queries")
	queries = flag.Int("queries", 600, "how many")
	deep    = flag.Int("deep", 3, "how deep they nest")
	ask     = flag.String("ask", "", "a query to ask both sides about the tables of -seed")
	record  = flag.String("record", "", "a file for the queries on which both sides agree, with their answers")
	stop    = flag.Int("stop", 5, "differences after which to stop")
)

// Random queries give the rows that the other database gives, in every way in
// which this one runs them. go test ./oracle -queries 20000 -seed 7 for more.
func TestAgainstTheOther(t *testing.T) {
	against(t, func(g *Gen, n uint64) *Query { return g.Random(int(n) % (*deep + 1)) })
}

// against asks random queries of both sides.
func against(t *testing.T, random func(g *Gen, n uint64) *Query) {
	var b *Bench
	asked, refused, failed := 0, 0, 0
	for n := range uint64(*queries) {
		if n%100 == 0 {
			var err error
			if b, err = New(*seed + n); err != nil {
				t.Fatal(err)
			}
		}
		q := random(NewGen(*seed, n), n)
		asked++
		no, err := b.Check(q)
		if no {
			refused++
			if testing.Verbose() && refused < 5 {
				t.Logf("query %d: %v\n%s", n, err, q.Theirs())
			}
			continue
		}
		if err != nil {
			t.Errorf("query %d (table seed %d): %v\nours:   %s\ntheirs: %s", n, *seed+n/100*100, err, q.Ours(), q.Theirs())
			if failed++; failed >= *stop {
				t.FailNow()
			}
		}
	}
	t.Logf("%d queries, %d of them refused by the other side", asked, refused)
	if refused*10 > asked {
		t.Errorf("%d of %d queries were refused by the other side: too many to say anything", refused, asked)
	}
}

// What both sides say to one query (-ask).
func TestAsk(t *testing.T) {
	if *ask == "" {
		t.Skip("no query was given")
	}
	b, err := New(*seed)
	if err != nil {
		t.Fatal(err)
	}
	ours, err := b.ours(*ask, true, 1)
	t.Log("ours:", err, ours)
	theirs, err := b.theirs(*ask)
	t.Log("theirs:", err, theirs)
}

// recorded are the kinds of queries that take turns in the story.
var recorded = []func(g *Gen, n uint64) *Query{
	func(g *Gen, n uint64) *Query { return g.Random(int(n/3) % (*deep + 1)) },
	func(g *Gen, n uint64) *Query { return g.Windowed(int(n/3) % 2) },
	func(g *Gen, _ uint64) *Query { return g.Corpus() },
}

// The tables of a seed, and queries on which both sides agree, as a story that the
// product's own tests tell without the other database (-record).
func TestRecord(t *testing.T) {
	if *record == "" {
		t.Skip("no file was given")
	}
	b, err := New(*seed)
	if err != nil {
		t.Fatal(err)
	}
	var out strings.Builder
	out.WriteString("# Random queries and the answers that two databases agree on; recorded, not written by hand.\n")
	for _, table := range tables {
		rows, err := b.theirs("SELECT * FROM " + table.name)
		if err != nil {
			t.Fatal(err)
		}
		out.WriteString("\ntable " + table.name + "\n" + strings.Join(table.columns, " ") + "\n----\n" + strings.ReplaceAll(strings.Join(rows, "\n")+"\n", " | \n", "\n"))
	}
	for n, got := uint64(0), 0; got < *queries; n++ {
		q := recorded[n%uint64(len(recorded))](NewGen(*seed, n), n)
		if len(q.Ours()) > 600 { // a story is to be read
			continue
		}
		if no, err := b.Check(q); no || err != nil {
			continue
		}
		rows, err := b.theirs(q.Theirs())
		if err != nil {
			t.Fatal(err)
		}
		if len(rows) > 20 {
			continue
		}
		got++
		how := "ordered"
		if !q.Ordered {
			how = "any-order"
			slices.Sort(rows)
		}
		out.WriteString("\n" + how + "\n" + q.Ours() + "\n----\n")
		for _, r := range rows {
			out.WriteString(strings.TrimSuffix(r, " | ") + "\n")
		}
	}
	if err := os.WriteFile(*record, []byte(out.String()), 0o644); err != nil {
		t.Fatal(err)
	}
}
