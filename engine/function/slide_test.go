package function

import (
	"math"
	"math/rand/v2"
	"testing"

	"nearcell/catalog/column"

	"pgregory.net/rapid"
)

// TestSlideIsTheAggregateOfTheFrame: over any frames that only move forwards, each
// aggregate gives the bits that it gives of the rows of the frame alone.
func TestSlideIsTheAggregateOfTheFrame(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(1, 90).Draw(t, "rows")
		rng := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
		fn := rapid.SampledFrom(Aggregates()).Draw(t, "aggregate")
		if fn.Slide == nil { // INTERPOLATE has no frames
			return
		}
		in := randomInput(rng, fn, n, 1)
		weighted := fn.Weighted && in.args[0].Type != column.Integer && rapid.Bool().Draw(t, "weighted")
		if in.args[0].Type == column.Interval && fn.Name == "SUM" {
			weighted = false // refused by Check
		}
		rows := make([]int32, n)
		for i, at := range rng.Perm(n) {
			rows[i] = int32(at)
		}
		lo, hi := forwards(rng, n)
		data := Rows{N: n, Args: in.args, On: in.on}
		if weighted {
			data.Weight = &in.weight
		}
		s, err := fn.Slide(Setup{Args: in.types, Consts: in.consts, Weighted: weighted, Keys: in.keys}, data)
		if err != nil {
			t.Fatal(err)
		}
		want := func(from, to int32) column.Value {
			frame := *in
			frame.on = make([]uint64, len(in.on))
			for _, row := range rows[from:to] {
				if column.Bit(in.on, int(row)) {
					column.SetBit(frame.on, int(row))
				}
			}
			acc := frame.fresh(fn, weighted)
			for at := 0; at < n; at += 64 {
				frame.add(t, acc, at, min(at+64, n), weighted, func(int32) int32 { return 0 }, -1)
			}
			v, err := acc.Result(1)
			if err != nil {
				t.Fatal(err)
			}
			return v.Value(0)
		}
		out := NewSlid(want(0, 0).Type, n, s.Picks)
		slider := s.New(out)
		for range 2 { // a Slider takes one partition after another
			if err := slider.Slide(rows, lo, hi, out, func() error { return nil }); err != nil {
				t.Fatal(err)
			}
		}
		for k, row := range rows {
			got, want := out.value(&in.args[0], row), want(lo[k], hi[k])
			if got.Null != want.Null || !got.Null && (got.I != want.I || got.S != want.S || got.F != want.F) {
				t.Fatalf("%s, weighted %v: frame %d..%d is %s and %s alone", fn.Name, weighted, lo[k], hi[k], got, want)
			}
		}
	})
}

// forwards is frames whose ends never fall.
func forwards(rng *rand.Rand, n int) (lo, hi []int32) {
	a, b, most := 0, 0, 1+rng.IntN(4)
	for range n {
		a = min(n, a+rng.IntN(most))
		b = min(n, max(a, b+rng.IntN(most+1)))
		lo, hi = append(lo, int32(a)), append(hi, int32(b))
	}
	return lo, hi
}

func (s *Slid) value(picked *column.Vector, row int32) column.Value {
	switch {
	case s.Pick != nil && s.Pick[row] < 0, s.Pick == nil && s.Null[row]:
		return column.NullOf(s.Type)
	case s.Pick != nil:
		v := picked.Value(int(s.Pick[row]))
		v.F += 0
		return v
	case s.F != nil:
		return column.Float(s.F[row])
	}
	return column.Value{Type: s.Type, I: s.I[row]}
}

// A sum over a frame keeps nothing of what has left the frame: prefix sums that are
// taken off each other would give 0 here.
func TestSlideForgets(t *testing.T) {
	x := reals(1e300, 1, 2, 3)
	for _, fn := range []string{"SUM", "AVG", "VAR_POP"} {
		s, err := LookupAggregate(fn).Slide(Setup{Args: []column.Type{column.Real}}, Rows{N: 4, Args: []column.Vector{x}})
		if err != nil {
			t.Fatal(err)
		}
		out := NewSlid(column.Real, 4, false)
		err = s.New(out).Slide([]int32{0, 1, 2, 3}, []int32{0, 1, 1, 2}, []int32{1, 2, 3, 4}, out, func() error { return nil })
		want := map[string][3]float64{"SUM": {1, 3, 5}, "AVG": {1, 1.5, 2.5}, "VAR_POP": {0, 0.25, 0.25}}[fn]
		if err != nil || [3]float64(out.F[1:]) != want {
			t.Errorf("%s: %v %v, want %v", fn, out.F[1:], err, want)
		}
	}
}

func TestDecimalSum(t *testing.T) {
	for _, c := range [][3]float64{{0.8, -0.1, 0.7}, {0.3, -0.1, 0.2}, {1.1, 2.2, 3.3}, {-0.7, 0.1, -0.6}, {5, 3, 8},
		{math.Inf(1), -0.1, math.Inf(1)}, {1e300, 0.5, 1e300}, {0.1, -0.1, 0}} {
		if got := DecimalSum(c[0], c[1]); got != c[2] {
			t.Errorf("%g + %g is %g, want %g", c[0], c[1], got, c[2])
		}
	}
}

// Moving frames cost the same whatever their length.
func BenchmarkSlide(b *testing.B) {
	const n = 1 << 18
	rng := rand.New(rand.NewPCG(3, 4))
	x, rows := column.New(column.Real, nil, n), make([]int32, n)
	for i := range rows {
		x.F[i], rows[i] = rng.Float64(), int32(i)
	}
	for _, fn := range []string{"SUM", "MAX", "STDDEV_SAMP", "MEDIAN"} {
		for _, length := range []int32{0, 10, 1000, n} {
			b.Run(fn+"/"+column.Int(int64(length)).String(), func(b *testing.B) {
				lo, hi := make([]int32, n), make([]int32, n)
				for k := range lo {
					lo[k], hi[k] = max(0, int32(k)-length), int32(k)+1
				}
				for b.Loop() {
					s, err := LookupAggregate(fn).Slide(Setup{Args: []column.Type{column.Real}}, Rows{N: n, Args: []column.Vector{x}})
					if err != nil {
						b.Fatal(err)
					}
					out := NewSlid(column.Real, n, s.Picks)
					if err := s.New(out).Slide(rows, lo, hi, out, func() error { return nil }); err != nil {
						b.Fatal(err)
					}
				}
				b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/n, "ns/row")
			})
		}
	}
}
