package column

import (
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// The naive model of a column is a list of values; every operation on vectors
// must do to the list what it says.

var storedTypes = []Type{Integer, Real, Text, Boolean, Timestamp, Interval, Point}

func drawValue(t *rapid.T, typ Type) Value {
	if rapid.IntRange(0, 4).Draw(t, "null") == 0 {
		return NullOf(typ)
	}
	real := rapid.OneOf(rapid.Float64(), rapid.SampledFrom([]float64{0, math.Copysign(0, -1), math.Inf(1), math.Inf(-1), 5e-324, 0.1}))
	x := Value{Type: typ}
	switch typ {
	case Integer, Interval:
		x.I = rapid.Int64().Draw(t, "i")
	case Timestamp:
		x.I = rapid.Int64Range(minTimestamp, maxTimestamp).Draw(t, "us")
	case Boolean:
		x.I = int64(rapid.IntRange(0, 1).Draw(t, "b"))
	case Real:
		x.F = real.Draw(t, "f")
	case Text:
		x.S = rapid.OneOf(rapid.SampledFrom([]string{"", "L01", "L02", "Tor-Süd"}), rapid.StringN(0, 5, -1)).Draw(t, "s")
	case Point:
		for k := range x.P {
			x.P[k] = real.Draw(t, "p")
		}
	}
	return x
}

func drawColumn(t *rapid.T, typ Type, n int) (Vector, []Value) {
	b := NewBuilder(typ, Symbol("m"))
	var model []Value
	for range n {
		x := drawValue(t, typ)
		b.Append(x)
		model = append(model, x)
	}
	return b.Finish(), model
}

// holds checks a vector against the model and against the rules of the package.
func holds(t *rapid.T, what string, v *Vector, model []Value) {
	t.Helper()
	if err := v.Validate(); err != nil {
		t.Fatalf("%s: %v", what, err)
	}
	if v.N != len(model) {
		t.Fatalf("%s: %d values, want %d", what, v.N, len(model))
	}
	nulls := 0
	for i, want := range model {
		if want.Null {
			nulls++
		}
		if got := v.Value(i); !sameValue(got, want) {
			t.Fatalf("%s: value %d is %v, want %v", what, i, got, want)
		}
		if v.Type == Text && !want.Null && v.Text(i) != want.S {
			t.Fatalf("%s: text %d is %q, want %q", what, i, v.Text(i), want.S)
		}
	}
	if v.NullCount() != nulls {
		t.Fatalf("%s: %d NULLs, want %d", what, v.NullCount(), nulls)
	}
}

func TestVectorsAgainstLists(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		typ := rapid.SampledFrom(storedTypes).Draw(t, "type")
		n := rapid.IntRange(0, 150).Draw(t, "n")
		v, model := drawColumn(t, typ, n)
		holds(t, "build", &v, model)

		lo := 64 * rapid.IntRange(0, n/64).Draw(t, "lo/64")
		hi := rapid.IntRange(lo, n).Draw(t, "hi")
		s := v.Slice(lo, hi)
		holds(t, "slice", &s, model[lo:hi])

		rows := rapid.SliceOfN(rapid.Int32Range(-1, int32(n)-1), 0, 80).Draw(t, "rows")
		var picked []Value
		for _, r := range rows {
			if r < 0 {
				picked = append(picked, NullOf(typ))
			} else {
				picked = append(picked, model[r])
			}
		}
		g := Gather(&v, rows)
		holds(t, "gather", &g, picked)

		w, more := drawColumn(t, typ, rapid.IntRange(0, 70).Draw(t, "m"))
		null := Vector{N: 3}
		all := slices.Concat(picked, model[lo:hi], more, []Value{NullOf(typ), NullOf(typ), NullOf(typ)}, model)
		c := Concat(&g, &s, &w, &null, &v)
		holds(t, "concat", &c, all)
		holds(t, "the source after it", &v, model)
		holds(t, "the slice after it", &s, model[lo:hi])

		on := make([]uint64, Words(n))
		var chosen []Value
		for i := range n {
			if rapid.Bool().Draw(t, "on") {
				SetBit(on, i)
				chosen = append(chosen, model[i])
			}
		}
		b := NewBuilder(typ, nil)
		b.AppendVector(&v, on)
		b.AppendVector(&w, nil)
		f := b.Finish()
		holds(t, "append", &f, slices.Concat(chosen, more))

		p := Compact(&v)
		holds(t, "compact", &p, model)
	})
}

func TestSetNull(t *testing.T) {
	for _, typ := range storedTypes {
		v := New(typ, nil, 70)
		if typ == Text {
			v.Dict = v.Dict.withText()
		}
		v.SetNull(69)
		if err := v.Validate(); err != nil || !v.IsNull(69) || v.IsNull(68) || v.NullCount() != 1 {
			t.Errorf("%s: %v, NULLs %d", typ, err, v.NullCount())
		}
	}
}

// Equal, Diff and Key see every single change, and nothing but the values.
func TestEqualAndKey(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		typ := rapid.SampledFrom(storedTypes).Draw(t, "type")
		n := rapid.IntRange(1, 100).Draw(t, "n")
		v, model := drawColumn(t, typ, n)
		b := NewBuilder(typ, Symbol("m"))
		if typ == Text {
			b.codeOf("another first code")
		}
		for _, x := range model {
			b.Append(x)
		}
		same := b.Finish()
		if d := Diff(&v, &same); d != "" || v.Key() != same.Key() {
			t.Fatalf("coded in another way they differ: %s", d)
		}
		i := rapid.IntRange(0, n-1).Draw(t, "i")
		changed := slices.Clone(model)
		changed[i] = drawValue(t, typ)
		b = NewBuilder(typ, Symbol("m"))
		for _, x := range changed {
			b.Append(x)
		}
		other := b.Finish()
		if equal := sameValue(model[i], changed[i]); Equal(&v, &other) != equal || (v.Key() == other.Key()) != equal {
			t.Fatalf("%v against %v: Equal %v", model[i], changed[i], !equal)
		}
	})
	a, b := New(Real, Symbol("m"), 1), New(Real, Symbol("ft"), 1)
	if Equal(&a, &b) || a.Key() == b.Key() {
		t.Error("the unit does not count")
	}
}

func TestValidateFindsWhatIsWrong(t *testing.T) {
	text := func() Vector { b := NewBuilder(Text, nil); b.AppendText("a"); b.AppendNull(); return b.Finish() }
	for name, spoil := range map[string]func(*Vector){
		"code beyond the dictionary": func(v *Vector) { v.C[0] = 1 },
		"NULL that is not zero":      func(v *Vector) { v.Dict.Texts = append(v.Dict.Texts, "b"); v.C[1] = 1 },
		"bit beyond the end":         func(v *Vector) { SetBit(v.Valid, 2) },
		"too short":                  func(v *Vector) { v.C = v.C[:1] },
		"a slice too many":           func(v *Vector) { v.I = []int64{1, 2} },
		"no dictionary":              func(v *Vector) { v.Dict = nil },
	} {
		v := text()
		if err := v.Validate(); err != nil {
			t.Fatal(err)
		}
		if spoil(&v); v.Validate() == nil {
			t.Errorf("%s: not found", name)
		}
	}
	v := New(Real, nil, 1)
	if v.F[0] = math.NaN(); v.Validate() == nil {
		t.Error("NaN: not found")
	}
}

func TestRanksAndUnify(t *testing.T) {
	texts := rapid.SliceOfN(rapid.StringN(0, 3, -1), 1, 30)
	rapid.Check(t, func(t *rapid.T) {
		a, b := &Dict{Texts: texts.Draw(t, "a")}, &Dict{Texts: texts.Draw(t, "b")}
		r := a.Ranks()
		for i, s := range a.Texts {
			for j, u := range a.Texts {
				if (s < u) != (r[i] < r[j]) {
					t.Fatalf("%q and %q have ranks %d and %d", s, u, r[i], r[j])
				}
			}
		}
		d, fa, fb := Unify(a, b)
		for i, s := range a.Texts {
			if d.Texts[fa[i]] != s {
				t.Fatalf("%q became %q", s, d.Texts[fa[i]])
			}
		}
		for i, s := range b.Texts {
			if d.Texts[fb[i]] != s {
				t.Fatalf("%q became %q", s, d.Texts[fb[i]])
			}
		}
		if c, ok := d.Find(a.Texts[0]); !ok || d.Texts[c] != a.Texts[0] {
			t.Fatalf("Find(%q) = %d, %v", a.Texts[0], c, ok)
		}
		if len(d.Index()) != len(d.Texts) {
			t.Fatal("a text stands twice in the union")
		}
	})
}
