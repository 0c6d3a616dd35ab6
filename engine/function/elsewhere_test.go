package function

import "testing"

// TestElsewhere: names from elsewhere are no names here, and are found in any case.
func TestElsewhere(t *testing.T) {
	for name, here := range elsewhere {
		if LookupScalar(name) != nil || LookupAggregate(name) != nil || Planned(name) {
			t.Errorf("%s is a function of this language", name)
		}
		if here == "" || Elsewhere(name) != here {
			t.Errorf("%s is not found", name)
		}
	}
	if Elsewhere("stddev") == "" || Elsewhere("xyzzy") != "" {
		t.Error("names are not found in any case, or where there are none")
	}
}
