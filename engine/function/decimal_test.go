package function

import (
	"math"
	"math/big"
	"strconv"
	"testing"

	"pgregory.net/rapid"
)

// roundByRationals rounds the shortest decimal text of x, half away from zero,
// in exact rational arithmetic.
func roundByRationals(x float64, digits int) float64 {
	r, _ := new(big.Rat).SetString(strconv.FormatFloat(x, 'g', -1, 64))
	ten := new(big.Int).Exp(big.NewInt(10), big.NewInt(int64(max(digits, -digits))), nil)
	scale := new(big.Rat).SetInt(ten)
	if digits < 0 {
		scale.Inv(scale)
	}
	r.Mul(r, scale)
	r.Mul(r, big.NewRat(2, 1)).Add(r, big.NewRat(int64(r.Sign()), 1)).Quo(r, big.NewRat(2, 1)) // + half
	whole := new(big.Int).Quo(r.Num(), r.Denom())                                              // towards zero
	f, _ := new(big.Rat).Quo(new(big.Rat).SetInt(whole), scale).Float64()
	return f
}

func TestRoundDecimal(t *testing.T) {
	for _, c := range []struct {
		x      float64
		digits int
		want   float64
	}{
		{2.675, 2, 2.68}, {1.005, 2, 1.01}, {-2.5, 0, -3}, {0.5, 0, 1}, {-0.4, 0, 0}, {1234.5, -2, 1200}, {1250, -2, 1300}, {9.995, 2, 10},
		{1e300, 2, 1e300}, {1e-300, 5, 0}, {5e-324, 400, 5e-324}, {0.1, 1, 0.1}, {99, -2, 100}, {49, -2, 0}, {8.25, 1, 8.3}, {1e22, 3, 1e22},
	} {
		if got := RoundDecimal(c.x, c.digits); got != c.want || math.Signbit(got) != math.Signbit(c.want) {
			t.Errorf("ROUND(%g, %d) is %g, want %g", c.x, c.digits, got, c.want)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		x := rapid.Float64Range(-1e6, 1e6).Draw(t, "x")
		digits := rapid.IntRange(-7, 18).Draw(t, "digits")
		if rapid.Bool().Draw(t, "near a half") { // decimal halves, as they are typed
			x = float64(rapid.IntRange(-1e7, 1e7).Draw(t, "k"))/math.Pow(10, float64(max(0, digits))) + 0.5/math.Pow(10, float64(digits))
		}
		if got, want := RoundDecimal(x, digits), roundByRationals(x, digits); got != want {
			t.Fatalf("ROUND(%v, %d) is %v, want %v", x, digits, got, want)
		}
	})
}

func TestRoundInteger(t *testing.T) {
	for _, c := range []struct {
		x, digits, want int64
		ok              bool
	}{
		{1250, -2, 1300, true}, {-1250, -2, -1300, true}, {1249, -2, 1200, true}, {7, 3, 7, true}, {math.MaxInt64, -1, 0, false},
		{math.MinInt64, -1, 0, false}, {math.MinInt64, -18, -9000000000000000000, true}, {math.MaxInt64, -18, 9000000000000000000, true},
		{4e18, -19, 0, true}, {math.MaxInt64, -19, 0, false}, {math.MaxInt64, -20, 0, true}, {math.MinInt64, 0, math.MinInt64, true},
	} {
		got, ok := roundInteger(c.x, c.digits)
		if ok != c.ok || ok && got != c.want {
			t.Errorf("ROUND(%d, %d) is %d, %v; want %d, %v", c.x, c.digits, got, ok, c.want, c.ok)
		}
	}
}

// TestFloorTo: the result is k·step as people write it, not above x, and the
// next multiple is.
func TestFloorTo(t *testing.T) {
	for _, c := range []struct{ x, step, want float64 }{
		{0.3, 0.1, 0.3}, {0.7, 0.1, 0.7}, {7.3, 0.5, 7}, {-0.3, 0.1, -0.3}, {-0.25, 0.1, -0.3}, {1.1, 0.1, 1.1}, {4.35, 0.05, 4.35},
		{0.29999999999999993, 0.1, 0.2}, {1e15, 0.3, 999999999999999.9}, {17, 5, 15}, {-17, 5, -20}, {0, 3, 0}, {2.5e-7, 1e-7, 2e-7},
	} {
		m := multiplesOf(c.step)
		if got := m.floor(c.x); got != c.want {
			t.Errorf("FLOOR_TO(%v, %v) is %v, want %v", c.x, c.step, got, c.want)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		step := float64(rapid.IntRange(1, 500).Draw(t, "step")) / math.Pow(10, float64(rapid.IntRange(0, 4).Draw(t, "places")))
		x := rapid.Float64Range(-1e5, 1e5).Draw(t, "x")
		m := multiplesOf(step)
		if k := rapid.IntRange(-10000, 10000).Draw(t, "k"); rapid.Bool().Draw(t, "on a multiple") {
			x = decimalProduct(step, k)
			if got := m.floor(x); got != x {
				t.Fatalf("FLOOR_TO(%v, %v) is %v", x, step, got)
			}
		}
		got := m.floor(x)
		if k := math.Round(got / step); got != decimalProduct(step, int(k)) || got > x || decimalProduct(step, int(k)+1) <= x {
			t.Fatalf("FLOOR_TO(%v, %v) is %v, which is no multiple or not the next below", x, step, got)
		}
	})
}

// decimalProduct is the float64 nearest to k times the decimal number step.
func decimalProduct(step float64, k int) float64 {
	r, _ := new(big.Rat).SetString(strconv.FormatFloat(step, 'g', -1, 64))
	f, _ := r.Mul(r, big.NewRat(int64(k), 1)).Float64()
	return f
}

// TestDoubleDouble: the operations against 400-bit arithmetic.
func TestDoubleDouble(t *testing.T) {
	exact := func(a dd) *big.Float {
		x := new(big.Float).SetPrec(400).SetFloat64(a.hi)
		return x.Add(x, new(big.Float).SetFloat64(a.lo))
	}
	draw := func(t *rapid.T, name string) dd {
		hi := rapid.Float64Range(1e-10, 1e10).Draw(t, name) * rapid.SampledFrom([]float64{1, -1}).Draw(t, "sign")
		return twoSum(hi, hi*rapid.Float64Range(-1, 1).Draw(t, "low")*1e-17)
	}
	rapid.Check(t, func(t *rapid.T) {
		a, b := draw(t, "a"), draw(t, "b")
		x, y := exact(a), exact(b)
		z := new(big.Float).SetPrec(400)
		check := func(name string, got dd, want *big.Float, scale float64) {
			diff, _ := new(big.Float).Sub(exact(got), want).Float64()
			if math.Abs(diff) > 1e-31*scale {
				t.Fatalf("%v %s %v is off by %g", a, name, b, diff/scale)
			}
		}
		abs := math.Abs
		check("plus", a.add(b), z.Add(x, y), abs(a.hi)+abs(b.hi))
		check("times", a.mul(b), z.Mul(x, y), abs(a.hi*b.hi))
		check("over", a.over(b), z.Quo(x, y), abs(a.hi/b.hi))
		check("plus float", a.plus(b.hi), z.Add(x, new(big.Float).SetFloat64(b.hi)), abs(a.hi)+abs(b.hi))
		check("times float", a.times(b.hi), z.Mul(x, new(big.Float).SetFloat64(b.hi)), abs(a.hi*b.hi))
	})
	for _, i := range []int64{0, 1, -1, math.MaxInt64, math.MinInt64, 1<<62 + 12345, -(1<<61 + 1)} {
		want := new(big.Float).SetPrec(400).SetInt64(i)
		if exact(ofInt(i)).Cmp(want) != 0 || exact(widen(i).plus(widen(i)).real()).Cmp(want.Add(want, want)) != 0 {
			t.Errorf("%d is not kept", i)
		}
		if roundToInt(ofInt(i)) != i {
			t.Errorf("%d rounds to %d", i, roundToInt(ofInt(i)))
		}
	}
	for f, want := range map[float64]int64{1.5: 2, -1.5: -2, 2.4: 2, -2.6: -3, -0.5: -1, 0.5: 1} {
		if got := roundToInt(dd{hi: f}); got != want {
			t.Errorf("%g rounds to %d", f, got)
		}
	}
}
