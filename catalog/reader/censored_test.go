package reader

import (
	"math"
	"testing"
)

// TestParseCensored: bounds by hand, with either decimal mark, and what is none.
func TestParseCensored(t *testing.T) {
	inf := math.Inf(1)
	for _, c := range []struct {
		text string
		mark byte
		want Bounds
	}{
		{"0.25", '.', Bounds{0.25, 0.25}}, {"<0.1", '.', Bounds{0, 0.1}}, {"< 0.1", '.', Bounds{0, 0.1}}, {"<=0.1", '.', Bounds{0, 0.1}},
		{"≤ 0,1", ',', Bounds{0, 0.1}}, {">5", '.', Bounds{5, inf}}, {">= 5e1", '.', Bounds{50, inf}}, {"≥5", '.', Bounds{5, inf}},
		{" 7 ", '.', Bounds{7, 7}}, {"-1.5", '.', Bounds{-1.5, -1.5}}, {">-1", '.', Bounds{-1, inf}}, {"<1,5", ',', Bounds{0, 1.5}}, {"-0", '.', Bounds{0, 0}},
	} {
		if got, ok := ParseCensored(c.text, c.mark); !ok || got != c.want || math.Signbit(got.Low) != math.Signbit(c.want.Low) {
			t.Errorf("%q is %v (%v), want %v", c.text, got, ok, c.want)
		}
	}
	for _, text := range []string{"", "<", "<<1", "n.d.", "<0", "<-1", "0,1", "0x10", "inf", "nan", "1_000", "<0.1>", "1 2", "1e999"} {
		if got, ok := ParseCensored(text, '.'); ok {
			t.Errorf("%q is %v, and it is nothing", text, got)
		}
	}
	if got, ok := ParseCensored("0.1", ','); ok {
		t.Errorf("0.1 is %v where the comma is the mark", got)
	}
}
