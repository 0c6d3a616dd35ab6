package function

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"nearcell/catalog/column"

	"pgregory.net/rapid"
)

// TestShufflesAndChunks: a double-double sum has the same bits whatever the
// order of the rows and however they are cut into chunks. 10,000 orders.
func TestShufflesAndChunks(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	xs, ws := make([]float64, 200), make([]float64, 200)
	for i := range xs {
		xs[i] = (rng.Float64() - 0.3) * math.Pow(10, float64(rng.IntN(9)-4))
		ws[i] = rng.Float64()
	}
	names := []string{"SUM", "AVG", "VAR_POP", "STDDEV_SAMP", "MKT", "MEDIAN", "LEVEL_AVG", "DIRECTION_AVG"}
	want := map[string][2]float64{}
	for _, name := range names {
		w := reals(ws...)
		x := reals(bounded(xs)...)
		want[name] = [2]float64{aggregate(t, name, nil, nil, x).F, aggregate(t, name, &w, nil, x).F}
	}
	for round := range 10_000 {
		rng.Shuffle(len(xs), func(i, j int) { xs[i], xs[j] = xs[j], xs[i]; ws[i], ws[j] = ws[j], ws[i] })
		name := names[round%len(names)]
		if round < 5000 {
			name = "SUM"
		}
		x, w := reals(bounded(xs)...), reals(ws...)
		for k, weight := range []*column.Vector{nil, &w} {
			if got := inChunks(t, name, x, weight, 1+rng.IntN(3)); got != want[name][k] {
				t.Fatalf("round %d: %s, weighted %v, is %x and was %x", round, name, weight != nil, got, want[name][k])
			}
		}
	}
}

// bounded keeps temperatures above absolute zero, so that MKT takes them too.
func bounded(xs []float64) []float64 {
	out := make([]float64, len(xs))
	for i, x := range xs {
		out[i] = math.Mod(x, 200)
	}
	return out
}

// inChunks adds parts of 64 rows to several accumulators and merges them.
func inChunks(t *testing.T, name string, x column.Vector, weight *column.Vector, parts int) float64 {
	t.Helper()
	accs := make([]Accumulator, parts)
	for i := range accs {
		accs[i] = accumulator(t, name, []column.Vector{x}, nil, weight)
	}
	for lo := 0; lo < x.N; lo += 64 {
		hi := min(lo+64, x.N)
		part := x.Slice(lo, hi)
		var w *column.Vector
		if weight != nil {
			v := weight.Slice(lo, hi)
			w = &v
		}
		if err := accs[(lo/64)%parts].Add(make([]int32, hi-lo), nil, hi-lo, []column.Vector{part}, w); err != nil {
			t.Fatal(err)
		}
	}
	for _, a := range accs[1:] {
		if err := accs[0].Merge(a, []int32{0}); err != nil {
			t.Fatal(err)
		}
	}
	v, err := accs[0].Result(1)
	if err != nil {
		t.Fatal(err)
	}
	return v.F[0]
}

// TestGroupsAgreeWithSingles: for any groups, masks, NULLs and chunks, each
// group of an accumulator has the value that it has alone.
func TestGroupsAgreeWithSingles(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(0, 200).Draw(t, "rows")
		groups := rapid.IntRange(1, 6).Draw(t, "groups")
		seed := rapid.Uint64().Draw(t, "seed")
		rng := rand.New(rand.NewPCG(seed, 1))
		fn := rapid.SampledFrom(Aggregates()).Draw(t, "aggregate")
		in := randomInput(rng, fn, n, groups)
		weighted := fn.Weighted && in.args[0].Type != column.Integer && rapid.Bool().Draw(t, "weighted")
		if in.args[0].Type == column.Interval && fn.Name == "SUM" {
			weighted = false // refused by Check
		}

		acc := in.fresh(fn, weighted)
		other := in.fresh(fn, weighted)
		for lo := 0; lo < n; lo += 64 {
			// the second half goes to another accumulator, whose groups are
			// numbered the other way round
			to, flip := acc, false
			if lo >= n/2 {
				to, flip = other, true
			}
			in.add(t, to, lo, min(lo+64, n), weighted, func(g int32) int32 {
				if flip {
					return int32(groups) - 1 - g
				}
				return g
			}, -1)
		}
		back := make([]int32, groups)
		for g := range back {
			back[g] = int32(groups - 1 - g)
		}
		if err := acc.Merge(other, back); err != nil {
			t.Fatal(err)
		}
		got, err := acc.Result(groups)
		if err != nil {
			t.Fatalf("%s: %v", fn.Name, err)
		}
		for g := range groups {
			alone := in.fresh(fn, weighted)
			for lo := 0; lo < n; lo += 64 {
				in.add(t, alone, lo, min(lo+64, n), weighted, func(int32) int32 { return 0 }, int32(g))
			}
			want, err := alone.Result(1)
			if err != nil {
				t.Fatal(err)
			}
			a, b := got.Value(g), want.Value(0)
			if a.Null != b.Null || a.I != b.I || a.S != b.S || a.F != b.F {
				t.Fatalf("%s, weighted %v: group %d is %s among others and %s alone", fn.Name, weighted, g, a, b)
			}
			if want, ok := in.byDefinition(fn.Name, int32(g), weighted); ok && !a.Null && asReal(a) != want {
				t.Fatalf("%s, weighted %v: group %d is %s and by its definition %g", fn.Name, weighted, g, a, want)
			}
			if weighted {
				if x, y := acc.Weights(groups)[g], alone.Weights(1)[0]; x != y {
					t.Fatalf("%s: weights %+v among others and %+v alone", fn.Name, x, y)
				}
			}
		}
	})
}

func asReal(v column.Value) float64 {
	if v.Type == column.Real {
		return v.F
	}
	return float64(v.I)
}

// byDefinition computes an aggregate of a group in the plainest way. Values are
// eighths and weights quarters, so that plain sums of them are exact.
func (in *input) byDefinition(name string, group int32, weighted bool) (float64, bool) {
	x := &in.args[0]
	if x.Type == column.Text || x.Type == column.Boolean || x.Type == column.Timestamp || x.Type == column.Interval {
		return 0, false
	}
	var xs, ws []float64
	var sum, total float64
	for i := range x.N {
		w := 1.0
		if weighted {
			w = in.weight.F[i]
		}
		if in.groups[i] == group && column.Bit(in.on, i) && !x.IsNull(i) && w > 0 {
			xs, ws = append(xs, asReal(x.Value(i))), append(ws, w)
			sum, total = sum+w*xs[len(xs)-1], total+w
		}
	}
	if len(xs) == 0 {
		return 0, name == "COUNT"
	}
	quantile := func(tenths float64) float64 {
		best := math.Inf(1)
		for _, at := range xs {
			below := 0.0
			for j := range xs {
				if xs[j] <= at {
					below += ws[j]
				}
			}
			if 10*below >= tenths*total {
				best = min(best, at)
			}
		}
		return best
	}
	switch name {
	case "COUNT":
		return float64(len(xs)), true
	case "SUM":
		return sum, true
	case "AVG":
		return sum / total, true
	case "MIN":
		return slices.Min(xs), true
	case "MAX":
		return slices.Max(xs), true
	case "QUANTILE":
		return quantile(3), true
	case "MEDIAN":
		return quantile(5), true
	}
	return 0, false
}

type input struct {
	args   []column.Vector
	consts []*column.Value
	keys   []Key
	types  []column.Type
	weight column.Vector
	groups []int32
	on     []uint64
}

func randomInput(rng *rand.Rand, fn *Aggregate, n, groups int) *input {
	in := &input{groups: make([]int32, n), on: make([]uint64, column.Words(n))}
	number := func() column.Vector {
		b := column.NewBuilder(column.Real, nil)
		for range n {
			if rng.IntN(8) == 0 {
				b.AppendNull()
			} else {
				b.AppendFloat(float64(rng.IntN(40)) / 8)
			}
		}
		return b.Finish()
	}
	in.args = []column.Vector{number()}
	if types := otherTypes[fn.Name]; len(types) > 0 && rng.IntN(2) == 0 {
		in.args[0] = randomVector(rng, types[rng.IntN(len(types))], n)
	}
	switch fn.Name {
	case "SHARE":
		b := column.NewBuilder(column.Boolean, nil)
		for range n {
			if rng.IntN(8) == 0 {
				b.AppendNull()
			} else {
				b.AppendBool(rng.IntN(2) == 0)
			}
		}
		in.args[0] = b.Finish()
	case "CORR":
		in.args = append(in.args, number())
	case "QUANTILE":
		in.args, in.consts = append(in.args, repeatReal(.3, n)), fraction(.3)
	case "INTERPOLATE":
		outside := texts(slices.Repeat([]string{"HOLD"}, n)...)
		in.args, in.consts = append(in.args, number(), repeatReal(2.1, n), outside), alongConsts(2.1, "HOLD")
	case "FIRST", "LAST":
		key := randomVector(rng, []column.Type{column.Real, column.Text, column.Timestamp}[rng.IntN(3)], n)
		in.args, in.keys = append(in.args, key), []Key{{Type: key.Type, Descending: rng.IntN(2) == 0}}
	}
	for _, a := range in.args[:len(in.args)-len(in.keys)] {
		in.types = append(in.types, a.Type)
	}
	in.weight = column.New(column.Real, nil, n)
	for i := range n {
		in.weight.F[i] = float64(rng.IntN(5)) / 4
		in.groups[i] = int32(rng.IntN(groups))
		if rng.IntN(5) > 0 {
			column.SetBit(in.on, i)
		}
	}
	return in
}

// otherTypes are types beside REAL that aggregates take without weights.
var otherTypes = map[string][]column.Type{
	"SUM": {column.Integer, column.Interval}, "AVG": {column.Integer, column.Interval, column.Timestamp},
	"MIN": allButPoint, "MAX": allButPoint, "COUNT": allButPoint, "FIRST": allButPoint, "LAST": allButPoint,
	"QUANTILE": {column.Integer, column.Timestamp}, "MEDIAN": {column.Integer, column.Interval},
}

var allButPoint = []column.Type{column.Integer, column.Text, column.Boolean, column.Timestamp, column.Interval}

func randomVector(rng *rand.Rand, t column.Type, n int) column.Vector {
	b := column.NewBuilder(t, nil)
	for range n {
		k := int64(rng.IntN(9) - 4)
		switch {
		case rng.IntN(8) == 0:
			b.AppendNull()
		case t == column.Text:
			b.AppendText(string(rune('e' + k)))
		case t == column.Boolean:
			b.AppendBool(k > 0)
		case t == column.Real:
			b.AppendFloat(float64(k) / 4)
		default:
			b.AppendInt(k)
		}
	}
	return b.Finish()
}

func (in *input) fresh(fn *Aggregate, weighted bool) Accumulator {
	return fn.New(Setup{Args: in.types, Consts: in.consts, Weighted: weighted, Keys: in.keys})
}

// add adds rows lo..hi-1, of one group only where only >= 0.
func (in *input) add(t *rapid.T, acc Accumulator, lo, hi int, weighted bool, rename func(int32) int32, only int32) {
	args := make([]column.Vector, len(in.args))
	for i := range args {
		args[i] = in.args[i].Slice(lo, hi)
	}
	groups, on := make([]int32, hi-lo), []uint64{in.on[lo>>6]}
	for i := range groups {
		if groups[i] = rename(in.groups[lo+i]); only >= 0 && in.groups[lo+i] != only {
			column.ClearBit(on, i)
		}
	}
	var w *column.Vector
	if weighted {
		v := in.weight.Slice(lo, hi)
		w = &v
	}
	if err := acc.Add(groups, on, hi-lo, args, w); err != nil {
		t.Fatalf("%v", err)
	}
}

func BenchmarkGroupedAvg(b *testing.B) {
	const rows, batch = 1 << 20, 2048
	rng := rand.New(rand.NewPCG(3, 4))
	x, w, groups := column.New(column.Real, nil, rows), column.New(column.Real, nil, rows), make([]int32, rows)
	for i := range rows {
		x.F[i], w.F[i], groups[i] = rng.Float64()*30, rng.Float64(), int32(rng.IntN(1000))
	}
	for range rows / 100 { // 1 % NULL
		x.SetNull(rng.IntN(rows))
	}
	for _, weighted := range []bool{false, true} {
		name := "plain"
		if weighted {
			name = "weighted"
		}
		b.Run(name, func(b *testing.B) {
			for b.Loop() {
				acc := LookupAggregate("AVG").New(Setup{Args: []column.Type{column.Real}, Weighted: weighted})
				for lo := 0; lo < rows; lo += batch {
					args := []column.Vector{x.Slice(lo, lo+batch)}
					var weight *column.Vector
					if weighted {
						v := w.Slice(lo, lo+batch)
						weight = &v
					}
					if err := acc.Add(groups[lo:lo+batch], nil, batch, args, weight); err != nil {
						b.Fatal(err)
					}
				}
				if _, err := acc.Result(1000); err != nil {
					b.Fatal(err)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/rows, "ns/row")
		})
	}
}
