package oracle

import (
	"flag"
	"testing"
)

var (
	seed    = flag.Uint64("seed", 1, "of the first tables and queries")
	queries = flag.Int("queries", 600, "how many")
	deep    = flag.Int("deep", 3, "how deep they nest")
	ask     = flag.String("ask", "", "a query to ask both sides about the tables of -seed")
	stop    = flag.Int("stop", 5, "differences after which to stop")
)

// Random queries give the rows that the other database gives, in every way in
// which this one runs them. go test ./oracle -queries 20000 -seed 7 for more.
func TestAgainstTheOther(t *testing.T) {
	var b *Bench
	asked, refused, failed := 0, 0, 0
	for n := range uint64(*queries) {
		if n%100 == 0 {
			var err error
			if b, err = New(*seed + n); err != nil {
				t.Fatal(err)
			}
		}
		q := NewGen(*seed, n).Random(int(n) % (*deep + 1))
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
			t.Errorf("query %d: %v\nours:   %s\ntheirs: %s", n, err, q.Ours(), q.Theirs())
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
