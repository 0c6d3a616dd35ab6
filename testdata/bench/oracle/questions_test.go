package oracle

import "testing"

// Every question that the rules of the standard were turned into is answered as the other
// database answers it, about the tables of several seeds.
func TestQuestions(t *testing.T) {
	list := Questions()
	refused := 0
	for k := range uint64(3) {
		b, err := New(*seed + k)
		if err != nil {
			t.Fatal(err)
		}
		for _, q := range list {
			no, err := b.Check(q)
			switch {
			case no:
				refused++
				t.Errorf("refused: %v\n%s", err, q.Theirs())
			case err != nil:
				t.Errorf("table seed %d: %v\nours:   %s\ntheirs: %s", *seed+k, err, q.Ours(), q.Theirs())
			}
		}
	}
	t.Logf("%d questions", len(list))
	if len(list) < 1000 || refused > 0 {
		t.Errorf("%d questions, %d refused", len(list), refused)
	}
}
