package function

import (
	"bufio"
	"fmt"
	"math"
	"os"
	"strings"
	"testing"

	"nearcell/catalog/column"

	"gonum.org/v1/gonum/stat"
)

// reals is a REAL vector; NaN stands for NULL.
func reals(xs ...float64) column.Vector {
	b := column.NewBuilder(column.Real, nil)
	for _, x := range xs {
		if math.IsNaN(x) {
			b.AppendNull()
		} else {
			b.AppendFloat(x)
		}
	}
	return b.Finish()
}

func integers(t column.Type, xs ...int64) column.Vector {
	b := column.NewBuilder(t, nil)
	for _, x := range xs {
		b.AppendInt(x)
	}
	return b.Finish()
}

// accumulator starts an aggregate for arguments of the types, after Check.
func accumulator(t testing.TB, name string, args []column.Vector, consts []*column.Value, weight *column.Vector, keys ...Key) Accumulator {
	t.Helper()
	fn := LookupAggregate(name)
	seen := make([]Arg, len(args)-len(keys))
	for i := range seen {
		seen[i] = Arg{Type: args[i].Type}
		if i < len(consts) {
			seen[i].Const = consts[i]
		}
	}
	var w *Arg
	if weight != nil {
		w = &Arg{Type: weight.Type}
	}
	r, err := fn.Check(seen, w)
	if err != nil {
		t.Fatalf("%s: %v", name, err)
	}
	return fn.New(Setup{Args: r.Args, Consts: consts, Weighted: weight != nil, Keys: keys})
}

// aggregate computes one group of all rows.
func aggregate(t testing.TB, name string, weight *column.Vector, consts []*column.Value, args ...column.Vector) column.Value {
	t.Helper()
	acc := accumulator(t, name, args, consts, weight)
	if err := acc.Add(make([]int32, args[0].N), nil, args[0].N, args, weight); err != nil {
		t.Fatalf("%s: %v", name, err)
	}
	v, err := acc.Result(1)
	if err != nil {
		t.Fatalf("%s: %v", name, err)
	}
	return v.Value(0)
}

func fraction(f float64) []*column.Value {
	p := column.Float(f)
	return []*column.Value{nil, &p}
}

func repeatReal(x float64, n int) column.Vector {
	v := column.New(column.Real, nil, n)
	for i := range v.F {
		v.F[i] = x
	}
	return v
}

func twentySites(t testing.TB) (temp, volume column.Vector) {
	t.Helper()
	f, err := os.Open("testdata/twenty_sites.txt")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	var temps, volumes []float64
	for lines := bufio.NewScanner(f); lines.Scan(); {
		if strings.HasPrefix(lines.Text(), "#") {
			continue
		}
		var id int
		var x, w float64
		if _, err := fmt.Sscan(lines.Text(), &id, &x, &w); err != nil {
			t.Fatal(err)
		}
		temps, volumes = append(temps, x), append(volumes, w)
	}
	if len(temps) != 20 {
		t.Fatalf("%d sites", len(temps))
	}
	return reals(temps...), reals(volumes...)
}

func near(t *testing.T, what string, got column.Value, want, tolerance float64) {
	t.Helper()
	if got.Null || !(math.Abs(got.F-want) <= tolerance) {
		t.Errorf("%s is %s, want %.12g", what, got, want)
	}
}

// TestTwentySites: values computed for these sites by exact arithmetic and by
// other programs (R with Hmisc for the quantiles and the reliability variance).
func TestTwentySites(t *testing.T) {
	temp, volume := twentySites(t)
	near(t, "SUM(volume)", aggregate(t, "SUM", nil, nil, volume), 320, 1e-7)
	near(t, "AVG(temp)", aggregate(t, "AVG", nil, nil, temp), 19.535, 1e-14)
	near(t, "AVG(temp) by volume", aggregate(t, "AVG", &volume, nil, temp), 19.478136864, 5e-10)
	near(t, "VAR_POP by volume", aggregate(t, "VAR_POP", &volume, nil, temp), 1.410282877, 5e-10)
	near(t, "STDDEV_POP by volume", aggregate(t, "STDDEV_POP", &volume, nil, temp), 1.187553315, 5e-10)
	near(t, "VAR_SAMP by volume", aggregate(t, "VAR_SAMP", &volume, nil, temp), 1.496671945, 5e-10)
	near(t, "VAR_SAMP", aggregate(t, "VAR_SAMP", nil, nil, temp), 1.621342105, 5e-10)
	near(t, "MKT by volume", aggregate(t, "MKT", &volume, nil, temp), 19.558543414, 5e-10)
	near(t, "MKT", aggregate(t, "MKT", nil, nil, temp), 19.622155532, 5e-10)
	for p, want := range map[float64]float64{.05: 18.3, .25: 18.7, .5: 18.9, .75: 20.6, .95: 22.0} {
		near(t, fmt.Sprintf("QUANTILE(temp, %g) by volume", p), aggregate(t, "QUANTILE", &volume, fraction(p), temp, repeatReal(p, 20)), want, 0)
	}
	near(t, "MEDIAN by volume", aggregate(t, "MEDIAN", &volume, nil, temp), 18.9, 0)
	above := column.New(column.Boolean, nil, 20)
	for i, x := range temp.F {
		if x > 20 {
			column.SetBit(above.Bits, i)
		}
	}
	near(t, "SHARE(temp > 20) by volume", aggregate(t, "SHARE", &volume, nil, above), 100.362093293/320, 1e-10)

	acc := accumulator(t, "AVG", []column.Vector{temp}, nil, &volume)
	if err := acc.Add(make([]int32, 20), nil, 20, []column.Vector{temp}, &volume); err != nil {
		t.Fatal(err)
	}
	facts := acc.Weights(1)[0]
	if effective := facts.Sum * facts.Sum / facts.SumSquares; math.Abs(effective-17.324783914) > 5e-9 || facts.Rows != 20 || facts.Largest != 31.046164802 {
		t.Errorf("effective number %.9f, facts %+v", effective, facts)
	}
}

// TestMKT: values of the formula of Haynes (1971) with ΔH/R = 10 000 K,
// computed with more digits elsewhere.
func TestMKT(t *testing.T) {
	cases := []struct {
		temps, weights []float64
		want           float64
	}{
		{[]float64{20, 30}, nil, 26.259887}, {[]float64{20, 25, 30}, nil, 25.858208}, {[]float64{2, 8}, nil, 5.536425},
		{[]float64{15, 20, 25, 30}, nil, 24.104053}, {[]float64{5, 5, 5, 5, 25}, nil, 13.850874}, {[]float64{4, 4, 4, 4, 16}, nil, 8.108857},
		{[]float64{20, 40}, []float64{23, 1}, 22.447930},
	}
	for _, c := range cases {
		var w *column.Vector
		if c.weights != nil {
			v := reals(c.weights...)
			w = &v
		}
		near(t, fmt.Sprint("MKT of ", c.temps), aggregate(t, "MKT", w, nil, reals(c.temps...)), c.want, 6e-7)
	}
	for _, c := range []float64{25, 5, -200, 600, 0, 37.2} {
		near(t, "MKT of a constant", aggregate(t, "MKT", nil, nil, reals(c, c, c)), c, 2e-13)
	}
	// a high energy takes the warmest, a low one the mean of the reciprocals
	high := column.Float(1e6)
	near(t, "MKT at 1e6 kJ/mol", aggregate(t, "MKT", nil, []*column.Value{nil, &high}, reals(-150, 2, 8), repeatReal(1e6, 3)), 8, 1e-3)
	low := column.Float(1e-6)
	harmonic := 2/(1/275.15+1/281.15) - 273.15
	near(t, "MKT at 1e-6 kJ/mol", aggregate(t, "MKT", nil, []*column.Value{nil, &low}, reals(2, 8), repeatReal(1e-6, 2)), harmonic, 1e-6)
	acc := accumulator(t, "MKT", []column.Vector{reals(-300)}, nil, nil)
	wantFault(t, acc.Add([]int32{0, 0}, nil, 2, []column.Vector{reals(5, -300)}, nil), 1, "no-value", "-300 °C is not above absolute zero")
}

func wantFault(t *testing.T, err error, row int, code, message string) {
	t.Helper()
	f, ok := err.(*RowFault)
	if !ok || f.Row != row || f.Code != code || !strings.Contains(f.Message, message) {
		t.Errorf("got %v, want %s in row %d: %s", err, code, row, message)
	}
}

// TestWeightedMedianOfATextbook: the exercise "weighted median" of Cormen,
// Leiserson, Rivest and Stein, Introduction to Algorithms: with each element
// as its own weight the median is 0.2 (values from memory).
func TestWeightedMedianOfATextbook(t *testing.T) {
	x := reals(.1, .35, .05, .1, .15, .05, .2)
	near(t, "the weighted median", aggregate(t, "MEDIAN", &x, nil, x), .2, 0)
	near(t, "the median", aggregate(t, "MEDIAN", nil, nil, x), .1, 0)
}

// TestQuantileTies: p counts as the decimal that it is, and weights that are
// equal but for their last bits as equal.
func TestQuantileTies(t *testing.T) {
	for n := 1; n <= 60; n++ {
		xs := make([]float64, n)
		for i := range xs {
			xs[i] = float64(n - i)
		}
		x := reals(xs...)
		for k := 0; k <= 100; k++ { // p = k/100, the rank is ceil(k·n/100)
			p := float64(k) / 100
			want := float64(max(1, (k*n+99)/100))
			near(t, fmt.Sprintf("QUANTILE(1..%d, %g)", n, p), aggregate(t, "QUANTILE", nil, fraction(p), x, repeatReal(p, n)), want, 0)
			third := repeatReal(1.0/3, n)
			third.F[n/2] = math.Nextafter(third.F[n/2], 1)
			third.F[0] = math.Nextafter(third.F[0], 0)
			near(t, fmt.Sprintf("QUANTILE(1..%d, %g) by thirds", n, p), aggregate(t, "QUANTILE", &third, fraction(p), x, repeatReal(p, n)), want, 0)
		}
	}
	// rows without weight are no minimum, and p = 1 is the maximum however light
	w := reals(0, 1, 1e-20)
	near(t, "p = 0", aggregate(t, "QUANTILE", &w, fraction(0), reals(1, 2, 3), repeatReal(0, 3)), 2, 0)
	near(t, "p = 1", aggregate(t, "QUANTILE", &w, fraction(1), reals(1, 2, 3), repeatReal(1, 3)), 3, 0)
	inf := reals(math.Inf(1), -1, math.Inf(-1))
	near(t, "a median among infinities", aggregate(t, "MEDIAN", nil, nil, inf), -1, 0)
	if got := aggregate(t, "MEDIAN", nil, nil, integers(column.Timestamp, 30, 10, 20)); got.Type != column.Timestamp || got.I != 20 {
		t.Errorf("the median of time stamps is %v", got)
	}
}

// TestMomentsAgainstGonum compares with gonum's stat on data that it handles.
func TestMomentsAgainstGonum(t *testing.T) {
	seed := uint64(7)
	next := func() float64 {
		seed = seed*6364136223846793005 + 1442695040888963407
		return float64(seed>>11) / (1 << 53)
	}
	var xs, ys, ws []float64
	for range 1000 {
		x := 20 + 5*next()
		xs, ys, ws = append(xs, x), append(ys, 3*x+next()), append(ws, next())
	}
	x, y, w := reals(xs...), reals(ys...), reals(ws...)
	mean, variance := stat.PopMeanVariance(xs, nil)
	near(t, "AVG", aggregate(t, "AVG", nil, nil, x), mean, 1e-13)
	near(t, "VAR_POP", aggregate(t, "VAR_POP", nil, nil, x), variance, 1e-13)
	near(t, "VAR_SAMP", aggregate(t, "VAR_SAMP", nil, nil, x), stat.Variance(xs, nil), 1e-13)
	near(t, "STDDEV_SAMP", aggregate(t, "STDDEV_SAMP", nil, nil, x), stat.StdDev(xs, nil), 1e-13)
	mean, variance = stat.PopMeanVariance(xs, ws)
	near(t, "weighted AVG", aggregate(t, "AVG", &w, nil, x), mean, 1e-13)
	near(t, "weighted VAR_POP", aggregate(t, "VAR_POP", &w, nil, x), variance, 1e-13)
	near(t, "CORR", aggregate(t, "CORR", nil, nil, y, x), stat.Correlation(ys, xs, nil), 1e-13)
	near(t, "weighted CORR", aggregate(t, "CORR", &w, nil, y, x), stat.Correlation(ys, xs, ws), 1e-12)
}

// TestAccuracy: small differences of large values, and sums that cancel.
func TestAccuracy(t *testing.T) {
	near(t, "VAR_POP of 1e9+1..3", aggregate(t, "VAR_POP", nil, nil, reals(1e9+1, 1e9+2, 1e9+3)), 2.0/3, 1e-16)
	near(t, "VAR_SAMP of 1e15+1..3", aggregate(t, "VAR_SAMP", nil, nil, reals(1e15+1, 1e15+2, 1e15+3)), 1, 0)
	near(t, "VAR_POP of a constant", aggregate(t, "VAR_POP", nil, nil, repeatReal(0.1, 1000)), 0, 0)
	near(t, "SUM", aggregate(t, "SUM", nil, nil, reals(1e16, 1, -1e16)), 1, 0)
	near(t, "SUM of tenths", aggregate(t, "SUM", nil, nil, repeatReal(0.1, 10)), 1, 0)
	near(t, "AVG of tenths", aggregate(t, "AVG", nil, nil, repeatReal(0.1, 10)), 0.1, 0)
	w := repeatReal(0.3, 7)
	near(t, "weighted AVG of a constant", aggregate(t, "AVG", &w, nil, repeatReal(18.7, 7)), 18.7, 0)
	if got := aggregate(t, "CORR", nil, nil, repeatReal(1, 5), reals(1, 2, 3, 4, 5)); !got.Null {
		t.Errorf("CORR with a constant is %s", got)
	}
	near(t, "CORR on a line", aggregate(t, "CORR", nil, nil, reals(1, 2, 3), reals(1e9+2, 1e9+4, 1e9+6)), 1, 0)
	big := integers(column.Integer, math.MaxInt64, math.MaxInt64, -math.MaxInt64)
	if got := aggregate(t, "SUM", nil, nil, big); got.I != math.MaxInt64 {
		t.Errorf("a sum that leaves 64 bits on its way is %s", got)
	}
	near(t, "AVG of large integers", aggregate(t, "AVG", nil, nil, integers(column.Integer, math.MaxInt64, math.MaxInt64)), math.MaxInt64, 0)
	if got := aggregate(t, "AVG", nil, nil, integers(column.Timestamp, 1, 2)); got.Type != column.Timestamp || got.I != 2 {
		t.Errorf("the mean of two time stamps is %v", got)
	}
	weight := reals(3, 1)
	if got := aggregate(t, "AVG", &weight, nil, integers(column.Interval, 1<<60+8, 1<<60+16)); got.I != 1<<60+10 {
		t.Errorf("the weighted mean of two intervals is %v", got)
	}
}

// TestEmptyAndNull: what aggregates of no rows are, and that NULLs are left out
// with their weight.
func TestEmptyAndNull(t *testing.T) {
	nan := math.NaN()
	for _, fn := range Aggregates() {
		args, consts := []column.Vector{reals(nan, nan)}, []*column.Value(nil)
		var keys []Key
		switch fn.Name {
		case "SHARE":
			v := column.New(column.Boolean, nil, 2)
			v.SetNull(0)
			v.SetNull(1)
			args[0] = v
		case "CORR":
			args = append(args, reals(1, 2))
		case "QUANTILE":
			args, consts = append(args, reals(.5, .5)), fraction(.5)
		case "INTERPOLATE":
			args, consts = append(args, reals(1, 2), reals(1, 1), texts("NULL", "NULL")), alongConsts(1, "NULL")
		case "FIRST", "LAST":
			args, keys = append(args, reals(1, 2)), []Key{{Type: column.Real}}
		}
		weights := []*column.Vector{nil}
		if fn.Weighted {
			w := reals(2, 3)
			weights = append(weights, &w)
		}
		for _, w := range weights {
			acc := accumulator(t, fn.Name, args, consts, w, keys...)
			if err := acc.Add([]int32{0, 1}, nil, 2, args, w); err != nil {
				t.Fatalf("%s: %v", fn.Name, err)
			}
			v, err := acc.Result(3)
			if err != nil {
				t.Fatal(err)
			}
			for g := range 3 {
				if got := v.Value(g); fn.Name == "COUNT" && got.I != 0 || fn.Name != "COUNT" && !got.Null {
					t.Errorf("%s of nothing is %s", fn.Name, got)
				}
			}
			if w == nil {
				if acc.Weights(1) != nil {
					t.Errorf("%s without weights tells of weights", fn.Name)
				}
				continue
			}
			if f := acc.Weights(3); f[1].NullWeight != 3 || f[1].Rows != 0 || f[1].Sum != 0 || f[2] != (WeightFacts{}) {
				t.Errorf("%s: weights %+v", fn.Name, f)
			}
		}
	}
	w := reals(1, 2, 4)
	near(t, "AVG beside a NULL", aggregate(t, "AVG", &w, nil, reals(10, nan, 40)), 34, 0)
	zero := reals(0, 0)
	if got := aggregate(t, "AVG", &zero, nil, reals(1, 2)); !got.Null {
		t.Errorf("AVG of weight 0 is %s", got)
	}
	if got := aggregate(t, "VAR_SAMP", nil, nil, reals(1)); !got.Null {
		t.Errorf("VAR_SAMP of one row is %s", got)
	}
	one := reals(5, 0)
	if got := aggregate(t, "VAR_SAMP", &one, nil, reals(1, 2)); !got.Null {
		t.Errorf("VAR_SAMP of one row with weight is %s", got)
	}
}

// TestWeightFaults: a weight that is no share of anything is refused, with the
// row and what an engineer can do.
func TestWeightFaults(t *testing.T) {
	x := reals(1, math.NaN(), 3)
	groups := make([]int32, 3)
	for _, c := range []struct {
		weight        []float64
		row           int
		message, hint string
	}{
		{[]float64{1, 2, -1}, 2, "the weight -1 is negative", "0 or more"},
		{[]float64{1, math.Inf(1), 1}, 1, "the weight is infinite", "WITHIN a solid"},
		{[]float64{math.NaN(), 1, 1}, 0, "the weight is NULL", "COALESCE"},
	} {
		for _, fn := range []string{"SUM", "AVG", "VAR_POP", "MEDIAN", "MKT"} {
			w := reals(c.weight...)
			acc := accumulator(t, fn, []column.Vector{x}, nil, &w)
			err := acc.Add(groups, nil, 3, []column.Vector{x}, &w)
			wantFault(t, err, c.row, "weight", c.message)
			if f, ok := err.(*RowFault); ok && !strings.Contains(f.Hint, c.hint) {
				t.Errorf("%s: the hint is %q", c.message, f.Hint)
			}
			// the same row switched off raises nothing
			on := []uint64{0b111 &^ (1 << c.row)}
			if err := acc.Add(groups, on, 3, []column.Vector{x}, &w); err != nil {
				t.Errorf("%s, switched off: %v", c.message, err)
			}
		}
	}
	whole := integers(column.Integer, 3, 1, 0)
	near(t, "AVG by integers", aggregate(t, "AVG", &whole, nil, reals(1, 5, 100)), 2, 0)
}

// TestInfinity: an infinite value makes a sum infinite, never NaN; two of
// opposite signs, and moments, have no value.
func TestInfinity(t *testing.T) {
	inf := math.Inf(1)
	near := func(name string, want float64, xs ...float64) {
		t.Helper()
		if got := aggregate(t, name, nil, nil, reals(xs...)); got.F != want {
			t.Errorf("%s of %v is %s", name, xs, got)
		}
	}
	near("SUM", inf, 1, inf, 2)
	near("AVG", -inf, 1, -inf, 2)
	near("MAX", inf, 1, inf, 2)
	near("MIN", 1, 1, inf, 2)
	acc := accumulator(t, "SUM", []column.Vector{reals(1)}, nil, nil)
	if err := acc.Add([]int32{1, 1}, nil, 2, []column.Vector{reals(inf, -inf)}, nil); err != nil {
		t.Fatal(err)
	}
	_, err := acc.Result(2)
	if f, ok := err.(*GroupFault); !ok || f.Group != 1 || f.Code != "no-value" {
		t.Errorf("Infinity and -Infinity sum up to %v", err)
	}
	for _, fn := range []string{"VAR_POP", "STDDEV_SAMP", "MKT"} {
		acc := accumulator(t, fn, []column.Vector{reals(1)}, nil, nil)
		wantFault(t, acc.Add([]int32{0, 0}, nil, 2, []column.Vector{reals(1, inf)}, nil), 1, "no-value", "Infinity")
	}
	for _, c := range []struct {
		fn string
		x  column.Vector
	}{{"SUM", reals(1e308, 1e308)}, {"SUM", integers(column.Integer, math.MaxInt64, 1)}, {"VAR_POP", reals(1e300, -1e300)}} {
		acc := accumulator(t, c.fn, []column.Vector{c.x}, nil, nil)
		if err := acc.Add([]int32{0, 0}, nil, 2, []column.Vector{c.x}, nil); err != nil {
			t.Fatal(err)
		}
		_, err := acc.Result(1)
		if f, ok := err.(*GroupFault); !ok || f.Code != "overflow" {
			t.Errorf("%s beyond the range: %v", c.fn, err)
		}
	}
	w := reals(1e200, 1)
	acc = accumulator(t, "SUM", []column.Vector{reals(1)}, nil, &w)
	if err := acc.Add([]int32{0, 0}, nil, 2, []column.Vector{reals(1e200, 1)}, &w); err != nil {
		t.Fatal(err)
	}
	if _, err := acc.Result(1); err == nil {
		t.Error("a product beyond the range was summed")
	}
}

// TestFirstLast: by key, ties in the order of the rows, rows without a value or
// a key left out.
func TestFirstLast(t *testing.T) {
	nan := math.NaN()
	x := reals(1, 2, 3, nan, 5, 6)
	key := reals(4, 2, 2, 1, 9, nan)
	cases := []struct {
		name       string
		descending bool
		want       float64
	}{{"FIRST", false, 2}, {"LAST", false, 5}, {"FIRST", true, 5}, {"LAST", true, 3}}
	for _, c := range cases {
		acc := accumulator(t, c.name, []column.Vector{x, key}, nil, nil, Key{Type: column.Real, Descending: c.descending})
		if err := acc.Add(make([]int32, 6), nil, 6, []column.Vector{x, key}, nil); err != nil {
			t.Fatal(err)
		}
		v, err := acc.Result(1)
		if err != nil || v.Value(0).F != c.want {
			t.Errorf("%s, descending %v, is %s (%v), want %g", c.name, c.descending, v.Value(0), err, c.want)
		}
	}
	texts := column.NewBuilder(column.Text, nil)
	for _, s := range []string{"b", "a", "c", "a"} {
		texts.AppendText(s)
	}
	names := texts.Finish()
	for name, want := range map[string]string{"MIN": "a", "MAX": "c"} {
		if got := aggregate(t, name, nil, nil, names); got.S != want {
			t.Errorf("%s of texts is %s", name, got)
		}
	}
	acc := accumulator(t, "LAST", []column.Vector{integers(column.Integer, 1, 2, 3, 4), names}, nil, nil, Key{Type: column.Text})
	if err := acc.Add(make([]int32, 4), nil, 4, []column.Vector{integers(column.Integer, 1, 2, 3, 4), names}, nil); err != nil {
		t.Fatal(err)
	}
	if v, _ := acc.Result(1); v.Value(0).I != 3 {
		t.Errorf("LAST by a text is %s", v.Value(0))
	}
}

// Weighted CORR: a row of weight k is k rows. The plain values are those of Anscombe's
// first set (Anscombe 1973, Graphs in Statistical Analysis, The American Statistician 27,
// 17-21: r = 0.816, here with the digits that its data give). The weighted median of
// Cormen, Leiserson, Rivest and Stein (Introduction to Algorithms, problem "weighted
// median"), whose values are their own weights, is 0.2. Both from memory.
func TestWeightedCorrelationAndMedian(t *testing.T) {
	x := []float64{10, 8, 13, 9, 11, 14, 6, 4, 12, 7, 5}
	y := []float64{8.04, 6.95, 7.58, 8.81, 8.33, 9.96, 7.24, 4.26, 10.84, 4.82, 5.68}
	near(t, "CORR", aggregate(t, "CORR", nil, nil, reals(x...), reals(y...)), 0.81642051634484, 1e-12)
	var weights, manyX, manyY []float64
	for i := range x {
		k := 1 + i%4
		weights = append(weights, float64(k))
		for range k {
			manyX, manyY = append(manyX, x[i]), append(manyY, y[i])
		}
	}
	w := reals(weights...)
	want := aggregate(t, "CORR", nil, nil, reals(manyX...), reals(manyY...))
	near(t, "CORR by weight", aggregate(t, "CORR", &w, nil, reals(x...), reals(y...)), want.F, 1e-12)
	if math.Abs(want.F-0.81642051634484) < 1e-3 {
		t.Errorf("the weights do not matter: %g", want.F)
	}
	own := reals(.1, .35, .05, .1, .15, .05, .2)
	near(t, "MEDIAN by its own values", aggregate(t, "MEDIAN", &own, nil, own), .2, 0)
}
