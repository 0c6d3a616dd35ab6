package reader

import "testing"

func TestFaultsError(t *testing.T) {
	f := &Faults{File: "hall.csv", More: 3, List: []Fault{
		{Line: 4, Column: 7, Kind: FieldCount, Got: 2, Expected: 3},
		{Line: 5, Column: 1, Kind: NotANumber, Text: "err", FieldName: "temp"},
	}}
	want := "hall.csv:4:7: wrong number of fields (2, expected 3)\nhall.csv:5:1: not a number \"err\" in temp\nand 3 more"
	if got := f.Error(); got != want {
		t.Errorf("%s", got)
	}
}

// Every kind has a name of its own.
func TestFaultKinds(t *testing.T) {
	seen := map[string]FaultKind{}
	for k := NoFault; k <= TypesDiffer; k++ {
		if other, ok := seen[k.String()]; ok || k.String() == "?" {
			t.Errorf("%d and %d are called %s", other, k, k)
		}
		seen[k.String()] = k
	}
	if (TypesDiffer + 1).String() != "?" {
		t.Error("a kind is missing in this test")
	}
}
