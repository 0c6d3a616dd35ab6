package column

import (
	"math"
	"strconv"
	"strings"
	"testing"

	"pgregory.net/rapid"
)

func TestReals(t *testing.T) {
	for s, f := range map[string]float64{
		"0": 0, "-0": math.Copysign(0, -1), "0.1": 0.1, "1.5": 1.5, "-273.15": -273.15, "100000": 1e5,
		"999999999999999.9": 999999999999999.9, "1e+15": 1e15, "0.000001": 1e-6, "9.5e-07": 9.5e-7,
		"5e-324": 5e-324, "1.7976931348623157e+308": math.MaxFloat64, "Infinity": math.Inf(1), "-Infinity": math.Inf(-1),
	} {
		if got := FormatReal(f); got != s {
			t.Errorf("%g is written %q, want %q", f, got, s)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		f := math.Float64frombits(rapid.Uint64().Draw(t, "bits"))
		if f != f {
			return
		}
		s := FormatReal(f)
		if back, err := strconv.ParseFloat(s, 64); err != nil || !sameBits(back, f) {
			t.Fatalf("%b is written %q and reads as %b, %v", f, s, back, err)
		}
		if shortest := strconv.FormatFloat(f, 'e', -1, 64); len(strings.Trim(digits(s), "0")) > len(strings.Trim(digits(shortest), "0")) {
			t.Fatalf("%q has more digits than %q", s, shortest)
		}
		if !strings.ContainsAny(s, ".e") && !math.IsInf(f, 0) {
			if _, err := strconv.ParseInt(s, 10, 64); err != nil {
				t.Fatalf("%q looks like an integer and is too long for one", s)
			}
		}
	})
}

// digits is the digits of a number before its exponent.
func digits(s string) string {
	s, _, _ = strings.Cut(s, "e")
	return strings.Map(func(r rune) rune {
		if r >= '0' && r <= '9' {
			return r
		}
		return -1
	}, s)
}

func TestValueString(t *testing.T) {
	for _, c := range []struct {
		v    Value
		want string
	}{
		{Int(-7), "-7"}, {Float(0.1), "0.1"}, {String("a, \"b\""), "a, \"b\""}, {Bool(true), "TRUE"}, {Bool(false), "FALSE"},
		{Value{Type: Timestamp, I: 0}, "1970-01-01 00:00:00"}, {Value{Type: Interval, I: 90 * minute}, "01:30:00"},
		{Value{Type: Point, P: [3]float64{1.5, 2, 0.3}}, "POINT(1.5, 2, 0.3)"},
		{NullOf(Text), ""}, {Value{Type: Real, F: 1, Null: true}, ""}, {Value{}, ""},
	} {
		if got := c.v.String(); got != c.want {
			t.Errorf("%+v is written %q, want %q", c.v, got, c.want)
		}
	}
	rapid.Check(t, func(t *rapid.T) {
		v, model := drawColumn(t, rapid.SampledFrom(storedTypes).Draw(t, "type"), 3)
		for i, x := range model {
			if got := string(v.AppendValue([]byte("x"), i)); got != "x"+x.String() {
				t.Fatalf("the vector writes %q, the value %q", got, x)
			}
		}
	})
}

func TestUnits(t *testing.T) {
	for s, want := range map[string]string{
		"": "", " ": "", "-": "", "1": "", "m": "m", "m^3": "m³", "m³": "m³", "m3": "m³", "cm2": "cm²", " m ^ 3 ": "m³",
		"W/m^2": "W·m⁻²", "W/m²": "W·m⁻²", "µg/m3": "µg·m⁻³", "μg/m³": "µg·m⁻³", "m·s⁻²": "m·s⁻²", "kg*m^2/s": "kg·m²·s⁻¹",
		"1/h": "h⁻¹", "°C": "°C", "ºC": "°C", "℃": "°C", "°C·h": "°C·h", "\u212A": "K", "m/m": "", "m*m": "m²", "s^-1": "s⁻¹",
		"%": "%", "ppm": "ppm", "CO2": "CO2", "H2O": "H2O", "m2^2": "m2^2", "% RH": "% RH", "kW h": "kW h", "mg/m3 (dry)": "mg/m3 (dry)",
		"1/2 inch": "1/2 inch", "m^": "m^", "m^^2": "m^^2", "^2": "^2", "m^0": "m^0", "m^1.5": "m^1.5", "m^100": "m^100", "m/": "m/", "dB(A)": "dB(A)",
	} {
		if got := ParseUnit(s).String(); got != want {
			t.Errorf("%q is the unit %q, want %q", s, got, want)
		}
	}
}

func TestUnitsReadBack(t *testing.T) {
	piece := rapid.SampledFrom([]string{"m", "s", "°C", "kg", "2", "3", "^", "-", "³", "⁻", "¹", "·", "*", "/", " ", "1", "(x)", "²"})
	rapid.Check(t, func(t *rapid.T) {
		s := strings.Join(rapid.SliceOfN(piece, 0, 8).Draw(t, "pieces"), "")
		u := ParseUnit(s)
		if back := ParseUnit(u.String()); !SameUnit(u, back) {
			t.Fatalf("%q is %q, which reads back as %q", s, u, back)
		}
		if back := ParseUnit(u.ASCII()); !SameUnit(u, back) {
			t.Fatalf("%q is %q in ASCII, which reads back as %q", s, u.ASCII(), back)
		}
	})
}

// Products of units keep the laws of powers.
func TestUnitAlgebra(t *testing.T) {
	unit := rapid.Custom(func(t *rapid.T) *Unit {
		var u *Unit
		for _, s := range []string{"m", "s", "°C"} {
			u = Mul(u, Symbol(s).Pow(rapid.IntRange(-3, 3).Draw(t, s)))
		}
		return u
	})
	rapid.Check(t, func(t *rapid.T) {
		a, b, c := unit.Draw(t, "a"), unit.Draw(t, "b"), unit.Draw(t, "c")
		n, m := rapid.IntRange(-3, 3).Draw(t, "n"), rapid.IntRange(-3, 3).Draw(t, "m")
		for law, sides := range map[string][2]*Unit{
			"a·b = b·a":         {Mul(a, b), Mul(b, a)},
			"(a·b)·c = a·(b·c)": {Mul(Mul(a, b), c), Mul(a, Mul(b, c))},
			"a/a = 1":           {Div(a, a), nil},
			"a/b·b = a":         {Mul(Div(a, b), b), a},
			"aⁿ·aᵐ = aⁿ⁺ᵐ":      {Mul(a.Pow(n), a.Pow(m)), a.Pow(n + m)},
			"(a·b)ⁿ = aⁿ·bⁿ":    {Mul(a, b).Pow(n), Mul(a.Pow(n), b.Pow(n))},
		} {
			if !SameUnit(sides[0], sides[1]) {
				t.Fatalf("%s: %q, %q", law, sides[0], sides[1])
			}
		}
		if !SameUnit(ParseUnit(a.String()), a) || !SameUnit(ParseUnit(a.ASCII()), a) {
			t.Fatalf("%q does not read back", a)
		}
	})
}
