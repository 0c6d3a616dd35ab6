package function

import (
	"fmt"
	"slices"
	"testing"

	"nearcell/catalog/column"
)

// TestTextBuilder: codes are given in the order of first use, once a text, the
// empty text first.
func TestTextBuilder(t *testing.T) {
	var a Arena
	for range 2 {
		texts, other := a.Texts(), a.Texts()
		for i := range 500 {
			s := fmt.Sprint("L", i%250)
			if got := texts.Code(s); got != uint32(i%250+1) {
				t.Fatalf("%s has the code %d", s, got)
			}
			if got := texts.CodeBytes([]byte(s)); got != uint32(i%250+1) {
				t.Fatalf("%s as bytes has the code %d", s, got)
			}
		}
		if other.CodeBytes([]byte("x")) != 1 || other.Code("") != 0 {
			t.Error("a second builder shares the first one's texts")
		}
		d := texts.Finish()
		if len(d.Texts) != 251 || d.Texts[0] != "" || d.Texts[250] != "L249" {
			t.Errorf("the dictionary has %d texts", len(d.Texts))
		}
		a.Reset()
	}
}

// TestArena: slices are given again after Reset, in their order, and tables of
// many small dictionaries do not push out that of a large one.
func TestArena(t *testing.T) {
	var a Arena
	first, second := a.Floats(10), a.Floats(20)
	a.Reset()
	if &a.Floats(5)[0] != &first[0] || &a.Floats(20)[0] != &second[0] || len(a.Floats(7)) != 7 {
		t.Error("the slices are not given again")
	}
	big := &column.Dict{Texts: slices.Repeat([]string{"x"}, largeDict)}
	a.SetTable(TableKey{Owner: t, Dict: big}, "kept")
	for range 1000 {
		small := &column.Dict{Texts: []string{"y"}}
		a.SetTable(TableKey{Owner: t, Dict: small}, "small")
		if a.Table(TableKey{Owner: t, Dict: small}) != "small" || a.Table(TableKey{Owner: t, Slot: 1, Dict: small}) != nil {
			t.Fatal("a table is not found, or another one is")
		}
	}
	if a.Table(TableKey{Owner: t, Dict: big}) != "kept" || len(a.tables) > maxTables {
		t.Errorf("of 1000 small tables %d are kept, and of the large one %v", len(a.tables), a.Table(TableKey{Owner: t, Dict: big}))
	}
}
