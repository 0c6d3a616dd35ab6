package function

import (
	"errors"
	"math"
	"math/rand/v2"
	"strings"
	"testing"

	"nearcell/catalog/column"

	"pgregory.net/rapid"
)

func texts(list ...string) column.Vector {
	b := column.NewBuilder(column.Text, nil)
	for _, s := range list {
		b.AppendText(s)
	}
	return b.Finish()
}

// alongConsts are the constant arguments of INTERPOLATE: v and the word of OUTSIDE.
func alongConsts(v float64, outside string) []*column.Value {
	at, word := column.Float(v), column.String(outside)
	return []*column.Value{nil, nil, &at, &word}
}

// along is INTERPOLATE(y ALONG x AT v OUTSIDE word) of one group.
func along(t *testing.T, y, x column.Vector, v column.Value, outside string) (column.Value, error) {
	t.Helper()
	word := column.String(outside)
	at, words := column.NewBuilder(v.Type, nil), column.NewBuilder(column.Text, nil)
	for range x.N {
		at.Append(v)
		words.AppendText(outside)
	}
	args := []column.Vector{y, x, at.Finish(), words.Finish()}
	acc := accumulator(t, "INTERPOLATE", args, []*column.Value{nil, nil, &v, &word}, nil)
	if err := acc.Add(make([]int32, x.N), nil, x.N, args, nil); err != nil {
		return column.Value{}, err
	}
	got, err := acc.Result(1)
	if err != nil {
		return column.Value{}, err
	}
	return got.Value(0), nil
}

// A certificate of three points: at 0, 5 and 10 °C the corrections are 0.1, 0.2 and
// -0.1. By hand: at 2.5 it is 0.15, at 7.5 it is 0.05, at 6 it is 0.14.
func TestCalibration(t *testing.T) {
	x, y := reals(10, 0, 5), reals(-0.1, 0.1, 0.2)
	for _, k := range []struct {
		at      float64
		outside string
		want    float64 // NaN: NULL
	}{
		{2.5, "NULL", .15}, {7.5, "NULL", .05}, {6, "FAIL", .14}, {5, "FAIL", .2}, {0, "FAIL", .1}, {10, "FAIL", -.1},
		{-1, "NULL", math.NaN()}, {11, "NULL", math.NaN()}, {-1, "HOLD", .1}, {11, "HOLD", -.1},
	} {
		got, err := along(t, y, x, column.Float(k.at), k.outside)
		if err != nil || got.Null != math.IsNaN(k.want) || !got.Null && math.Abs(got.F-k.want) > 1e-15 {
			t.Errorf("at %v OUTSIDE %s: %v %v, want %v", k.at, k.outside, got, err, k.want)
		}
	}
	_, err := along(t, y, x, column.Float(10.5), "FAIL")
	var fault *GroupFault
	if !errors.As(err, &fault) || !strings.Contains(fault.Message, "10.5 is outside the rows, which reach from 0 to 10") {
		t.Errorf("a table that does not reach: %v", err)
	}
	if _, err = along(t, reals(), reals(), column.Float(1), "FAIL"); err == nil {
		t.Error("no table at all is no error")
	}
	if got, err := along(t, y, x, column.NullOf(column.Real), "FAIL"); err != nil || !got.Null {
		t.Errorf("at NULL: %v %v", got, err)
	}
	if got, err := along(t, reals(math.NaN(), 3), reals(1, math.NaN()), column.Float(1), "HOLD"); err != nil || !got.Null {
		t.Errorf("rows with NULL are points: %v %v", got, err)
	}
}

// A clock that showed 00:00:10 at 00:00:00 and 10:00:30 at 10:00:00 was 20 s ahead when
// it showed 05:00:20.
func TestClock(t *testing.T) {
	const s = int64(1e6)
	shown, actual := integers(column.Timestamp, 10*s, 36030*s), integers(column.Timestamp, 0, 36000*s)
	got, err := along(t, actual, shown, column.Value{Type: column.Timestamp, I: 18020 * s}, "FAIL")
	if err != nil || got.Type != column.Timestamp || got.I != 18000*s {
		t.Errorf("%v %v", got, err)
	}
}

// A walk from (0, 0, 1) to (10, 4, 2) in ten seconds: after 2.5 s at (2.5, 1, 1.25).
func TestWalk(t *testing.T) {
	b := column.NewBuilder(column.Point, nil)
	b.AppendPoint([3]float64{0, 0, 1})
	b.AppendPoint([3]float64{10, 4, 2})
	got, err := along(t, b.Finish(), reals(0, 10), column.Float(2.5), "NULL")
	if err != nil || got.P != [3]float64{2.5, 1, 1.25} {
		t.Errorf("%v %v", got, err)
	}
}

func TestInterpolateRefuses(t *testing.T) {
	for _, args := range [][]Arg{
		{{Type: column.Text}, {Type: column.Real}, {Type: column.Real}, {Type: column.Text}},
		{{Type: column.Real}, {Type: column.Text}, {Type: column.Text}, {Type: column.Text}},
		{{Type: column.Real}, {Type: column.Timestamp}, {Type: column.Real}, {Type: column.Text}},
		{{Type: column.Real}, {Type: column.Real, Unit: column.Symbol("m")}, {Type: column.Real, Unit: column.Symbol("s")}, {Type: column.Text}},
	} {
		if r, err := LookupAggregate("INTERPOLATE").Check(args, nil); err == nil {
			t.Errorf("%v gives %v", args, r)
		}
	}
	if _, err := along(t, reals(1, math.Inf(1)), reals(0, 1), column.Float(0), "NULL"); err == nil {
		t.Error("Infinity is a point")
	}
	v := reals(1, 2)
	word := column.String("NULL")
	args := []column.Vector{reals(1, 2), reals(1, 2), v, texts("NULL", "NULL")}
	acc := accumulator(t, "INTERPOLATE", args, []*column.Value{nil, nil, nil, &word}, nil)
	if err := acc.Add([]int32{0, 0}, nil, 2, args, nil); err == nil {
		t.Error("two values of AT in a group are no error")
	}
}

// Knots against the definition, with repeated x, from any hint; contrary rows are
// counted and their mean does not depend on the order.
func TestKnots(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(0, 30).Draw(t, "n")
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
		x, y := make([]float64, n), make([]float64, n)
		sums, counts := map[float64]float64{}, map[float64]int{}
		contrary := map[float64]map[float64]bool{}
		for i := range x {
			x[i], y[i] = float64(rng.IntN(20)), float64(rng.IntN(64))/4
			sums[x[i]] += y[i]
			counts[x[i]]++
			if contrary[x[i]] == nil {
				contrary[x[i]] = map[float64]bool{}
			}
			contrary[x[i]][y[i]] = true
		}
		wantContrary := 0
		for at, values := range contrary {
			if len(values) > 1 {
				wantContrary += counts[at] - 1
			}
		}
		k, got := NewKnots(append([]float64(nil), x...), append([]float64(nil), y...), 1)
		if got != wantContrary {
			t.Fatalf("%d contrary, want %d", got, wantContrary)
		}
		rng.Shuffle(n, func(i, j int) { x[i], x[j] = x[j], x[i]; y[i], y[j] = y[j], y[i] })
		again, _ := NewKnots(x, y, 1)
		var out, other [1]float64
		for range 50 {
			v := float64(rng.IntN(100))/4 - 2
			at, ok := k.At(v, OutsideNull, rng.IntN(25), out[:])
			_, same := again.At(v, OutsideNull, at, other[:])
			if ok != same || ok && out != other {
				t.Fatalf("at %v: %v and %v", v, out, other)
			}
			lo, hi := math.Inf(-1), math.Inf(1)
			for u := range sums {
				if u <= v {
					lo = max(lo, u)
				}
				if u >= v {
					hi = min(hi, u)
				}
			}
			if inside := !math.IsInf(lo, 0) && !math.IsInf(hi, 0); inside != ok {
				t.Fatalf("at %v: %v", v, ok)
			}
			if !ok {
				continue
			}
			a, b := sums[lo]/float64(counts[lo]), sums[hi]/float64(counts[hi])
			want := a
			if hi > lo {
				want = a + (b-a)*(v-lo)/(hi-lo)
			}
			if math.Abs(out[0]-want) > 1e-12 {
				t.Fatalf("at %v: %v, want %v", v, out[0], want)
			}
		}
	})
}
