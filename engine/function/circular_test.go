package function

import (
	"math"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"nearcell/catalog/column"
)

// TestLevelMean: cases by hand. Two equal powers add 3.0103 dB to one, so that 80
// and 90 dB are 90 + 10 lg(1.1) - 10 lg 2 = 87.4036 dB on average (common practice
// of acoustics; by hand from the formula). Eight hours of which one is at 90 dB and
// seven at 80: 10 lg((10^9 + 7·10^8)/8) = 83.2736.
func TestLevelMean(t *testing.T) {
	for _, c := range []struct {
		levels, weights []float64
		want            float64
	}{
		{[]float64{80, 90}, nil, 87.40362689494244},
		{[]float64{90, 80}, []float64{1, 7}, 83.27358934386329},
		{[]float64{80, 80, 80}, nil, 80},
		{[]float64{63.7, 63.7}, []float64{0.1, 0.7}, 63.7},
		{[]float64{0}, nil, 0},
		{[]float64{3000, 2990}, nil, 3000 + 10*math.Log10(1.1) - 10*math.Log10(2)},
		{[]float64{-5000, 60}, nil, 60 - 10*math.Log10(2)},
		{[]float64{math.NaN(), 50}, nil, 50},
	} {
		var w *column.Vector
		if c.weights != nil {
			v := reals(c.weights...)
			w = &v
		}
		got := aggregate(t, "LEVEL_AVG", w, nil, reals(c.levels...))
		if got.Null || math.Abs(got.F-c.want) > 1e-11*math.Max(1, math.Abs(c.want)) {
			t.Errorf("LEVEL_AVG%v weighted %v is %v, want %v", c.levels, c.weights, got, c.want)
		}
	}
	if got := aggregate(t, "LEVEL_AVG", nil, nil, reals(math.NaN())); !got.Null {
		t.Errorf("LEVEL_AVG of no value is %v", got)
	}
	if got := aggregate(t, "LEVEL_AVG", nil, nil, reals(63.7, 63.7, 63.7)); got.F != 63.7 {
		t.Errorf("the mean of equal levels is %v", got.F)
	}
}

// TestDirectionMean: cases by hand; 350° and 10° meet at north, opposite
// directions nowhere, and a wind twice as strong pulls the mean to its side:
// atan2(2, 1) = 63.4349°.
func TestDirectionMean(t *testing.T) {
	for _, c := range []struct {
		angles, weights []float64
		want            float64
	}{
		{[]float64{350, 10}, nil, 0},
		{[]float64{350, 10, 370, -10}, nil, 0},
		{[]float64{355, 5, 15}, nil, 5},
		{[]float64{0, 90}, []float64{1, 2}, 63.43494882292201},
		{[]float64{170, 190}, nil, 180},
		{[]float64{260, 280}, nil, 270},
		{[]float64{37.3, 37.3}, nil, 37.3},
		{[]float64{-90}, nil, 270},
		{[]float64{360}, nil, 0},
		{[]float64{-1e-300}, nil, 0},
	} {
		var w *column.Vector
		if c.weights != nil {
			v := reals(c.weights...)
			w = &v
		}
		got := aggregate(t, "DIRECTION_AVG", w, nil, reals(c.angles...))
		if got.Null || math.Abs(got.F-c.want) > 1e-12 {
			t.Errorf("DIRECTION_AVG%v weighted %v is %v, want %v", c.angles, c.weights, got, c.want)
		}
	}
	for _, opposite := range [][]float64{{10, 190}, {0, 90, 180, 270}, {0, 120, 240}, {math.NaN()}} {
		if got := aggregate(t, "DIRECTION_AVG", nil, nil, reals(opposite...)); !got.Null {
			t.Errorf("DIRECTION_AVG%v is %v, and there is none", opposite, got)
		}
	}
}

// TestDirectionTurns: turning all directions turns the mean, and whole turns
// change nothing.
func TestDirectionTurns(t *testing.T) {
	rapid.Check(t, func(r *rapid.T) {
		angles := rapid.SliceOfN(rapid.Float64Range(0, 100), 1, 8).Draw(r, "angles") // within a half turn: no cancelling
		by := rapid.Float64Range(-720, 720).Draw(r, "by")
		moved := make([]float64, len(angles))
		for i, a := range angles {
			moved[i] = a + by
		}
		a := aggregate(t, "DIRECTION_AVG", nil, nil, reals(angles...)).F
		b := aggregate(t, "DIRECTION_AVG", nil, nil, reals(moved...)).F
		if d := math.Abs(turned(a+by+180-b) - 180); d > 1e-9 || b < 0 || b >= 360 {
			r.Fatalf("mean %v, turned by %v it is %v", a, by, b)
		}
	})
}

// TestNoPlainMean: AVG of what has no plain mean names what has.
func TestNoPlainMean(t *testing.T) {
	for unit, want := range map[string]string{"dB": "LEVEL_AVG", "dB(A)": "LEVEL_AVG", "dBA": "LEVEL_AVG", "°": "DIRECTION_AVG", "deg": "DIRECTION_AVG", "pH": "LOG10"} {
		_, err := LookupAggregate("AVG").Check([]Arg{{Type: column.Real, Unit: column.ParseUnit(unit)}}, nil)
		e, ok := err.(*ArgumentError)
		if !ok || e.Code != "mean" || !strings.Contains(e.Hint, want) || !strings.Contains(e.Hint, "CAST") {
			t.Errorf("AVG of %s: %v", unit, err)
		}
	}
	for _, unit := range []string{"°C", "", "m", "degC", "%"} {
		if _, err := LookupAggregate("AVG").Check([]Arg{{Type: column.Real, Unit: column.ParseUnit(unit)}}, nil); err != nil {
			t.Errorf("AVG of %q: %v", unit, err)
		}
	}
	for _, c := range [][2]string{{"LEVEL_AVG", "°C"}, {"DIRECTION_AVG", "°C"}, {"DIRECTION_AVG", "dB"}} {
		if _, err := LookupAggregate(c[0]).Check([]Arg{{Type: column.Real, Unit: column.ParseUnit(c[1])}}, nil); err == nil {
			t.Errorf("%s of %s is not refused", c[0], c[1])
		}
	}
}
