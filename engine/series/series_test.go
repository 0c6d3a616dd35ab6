package series

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

const (
	second = int64(1e6)
	minute = 60 * second
	hour   = 60 * minute
)

func minutes(list ...int64) []int64 {
	out := make([]int64, len(list))
	for i, m := range list {
		out[i] = m * minute
	}
	return out
}

// at is the linear course at slots of a grid; NaN stands for unknown.
func at(c Course, g Grid, gap int64) []float64 {
	n := g.N()
	out, known := make([]float64, n), make([]uint64, n/64+1)
	c.Linear(g, 0, n, gap, out, known)
	return unknownAsNaN(out, known)
}

func means(c Course, g Grid, gap int64) ([]float64, int) {
	n := g.N()
	out, known := make([]float64, n), make([]uint64, n/64+1)
	partly := c.Mean(g, 0, n, gap, out, known)
	return unknownAsNaN(out, known), partly
}

func unknownAsNaN(out []float64, known []uint64) []float64 {
	for i := range out {
		if known[i>>6]>>(i&63)&1 == 0 {
			out[i] = math.NaN()
		}
	}
	return out
}

func same(a, b []float64) bool {
	return slices.EqualFunc(a, b, func(x, y float64) bool { return x == y || x != x && y != y })
}

var nan = math.NaN()

// By hand: readings at 0, 10 and 40 min of 4, 6 and 9 °C; instants every 5 min.
func TestLinearByHand(t *testing.T) {
	c := Course{minutes(0, 10, 40), []float64{4, 6, 9}}
	g := Ranged(-5*minute, 50*minute, 5*minute, Instant)
	for _, k := range []struct {
		gap  int64
		want []float64
	}{
		// a gap at the limit is filled: 30 min are not longer than 30 min
		{30 * minute, []float64{nan, 4, 5, 6, 6.5, 7, 7.5, 8, 8.5, 9, nan}},
		// one microsecond shorter, and nothing is known across it
		{30*minute - 1, []float64{nan, 4, 5, 6, nan, nan, nan, nan, nan, 9, nan}},
	} {
		if got := at(c, g, k.gap); !same(got, k.want) {
			t.Errorf("longest gap %d: %v, want %v", k.gap, got, k.want)
		}
	}
	if got := at(Course{}, g, hour); !same(got, slices.Repeat([]float64{nan}, 11)) {
		t.Errorf("an empty log has values: %v", got)
	}
	one := at(Course{minutes(10), []float64{3}}, g, hour)
	if want := []float64{nan, nan, nan, 3, nan, nan, nan, nan, nan, nan, nan}; !same(one, want) {
		t.Errorf("one reading: %v", one)
	}
}

// Stamps one second apart, asked for every quarter of a second.
func TestSecondsApart(t *testing.T) {
	c := Course{[]int64{0, second, 2 * second}, []float64{0, 1, 0}}
	got := at(c, Ranged(0, 2*second+1, second/4, Instant), second)
	if want := []float64{0, .25, .5, .75, 1, .75, .5, .25, 0}; !same(got, want) {
		t.Errorf("%v, want %v", got, want)
	}
}

func TestHoldByHand(t *testing.T) {
	stamps := minutes(0, 10, 40)
	g := Ranged(-5*minute, 60*minute, 5*minute, Instant)
	hold := func(gap, after int64) []int32 {
		out := make([]int32, g.N())
		Hold(stamps, g, 0, g.N(), gap, after, out)
		return out
	}
	// -5 0 5 10 15 20 25 30 35 40 45 50 55; behind the last reading for 10 min
	if got, want := hold(30*minute, 10*minute), []int32{-1, 0, 0, 1, 1, 1, 1, 1, 1, 2, 2, 2, -1}; !slices.Equal(got, want) {
		t.Errorf("%v, want %v", got, want)
	}
	if got, want := hold(20*minute, 0), []int32{-1, 0, 0, 1, -1, -1, -1, -1, -1, 2, -1, -1, -1}; !slices.Equal(got, want) {
		t.Errorf("across a gap: %v, want %v", got, want)
	}
}

// By hand: 4 °C at 0, 8 at 10 and 8 at 20 min. The first ten minutes have the mean 6,
// the second 8, the first twenty (6·10 + 8·10) / 20 = 7. From 5 to 15 min: from 6 to 8,
// then 8, which is 7·5 + 8·5 over 10 = 7.5.
func TestMeanByHand(t *testing.T) {
	c := Course{minutes(0, 10, 20), []float64{4, 8, 8}}
	for _, k := range []struct {
		g    Grid
		want []float64
		part int
	}{
		{Ranged(0, 20*minute, 10*minute, Start), []float64{6, 8}, 0},
		{Ranged(0, 20*minute, 20*minute, Start), []float64{7}, 0},
		{Ranged(5*minute, 15*minute, 10*minute, Start), []float64{7.5}, 0},
		// centred on 0, 10 and 20 min: the half that is there is enough, and told
		{Ranged(0, 21*minute, 10*minute, Instant), []float64{5, 7.5, 8}, 2},
		// less than half of the window is known
		{Ranged(-6*minute, 4*minute, 10*minute, Start), []float64{nan}, 0},
		{Ranged(-5*minute, 5*minute, 10*minute, Start), []float64{5}, 1},
	} {
		got, part := means(c, k.g, 10*minute)
		if !same(got, k.want) || part != k.part {
			t.Errorf("%+v: %v (%d in part), want %v (%d)", k.g, got, part, k.want, k.part)
		}
	}
	if got, _ := means(c, Ranged(0, 20*minute, 10*minute, Start), 9*minute); !same(got, []float64{nan, nan}) {
		t.Errorf("across gaps: %v", got)
	}
	// equal readings give just their value, whatever the windows
	equal := Course{minutes(0, 7, 11, 23, 31), slices.Repeat([]float64{20.1}, 5)}
	got, _ := means(equal, Ranged(0, 31*minute, 7*minute, Start), hour)
	if !same(got, slices.Repeat([]float64{20.1}, 5)) {
		t.Errorf("equal readings: %v", got)
	}
}

func TestExtremeByHand(t *testing.T) {
	stamps, v := minutes(0, 4, 5, 9, 22), []float64{1, 7, 7, 3, 5}
	g := Ranged(0, 30*minute, 5*minute, Start)
	out := make([]int32, g.N())
	Extreme(stamps, v, g, 0, g.N(), out)
	if want := []int32{1, 2, -1, -1, 4, -1}; !slices.Equal(out, want) {
		t.Errorf("%v, want %v", out, want)
	}
	LastIn(stamps, g, 0, g.N(), 5*minute, 5*minute, out)
	if want := []int32{1, 3, -1, -1, 4, 4}; !slices.Equal(out, want) {
		t.Errorf("last: %v, want %v", out, want)
	}
}

// Grids without FROM: multiples of the step, from 1970 on.
func TestGrids(t *testing.T) {
	first, last := 7*minute, 47*minute
	for _, k := range []struct {
		at      Stamp
		windows bool
		want    []int64 // stamps in minutes
	}{
		{Instant, false, []int64{15, 30, 45}},
		{Start, false, []int64{15, 30, 45}},
		{End, false, []int64{15, 30, 45}},
		{Start, true, []int64{0, 15, 30, 45}},
		{End, true, []int64{15, 30, 45, 60}},
		{Instant, true, []int64{0, 15, 30, 45}},
	} {
		g := Over(first, last, 15*minute, k.at, k.windows)
		var got []int64
		for i := range g.N() {
			got = append(got, g.Stamp(i)/minute)
			if g.Span(i) != 15*minute {
				t.Errorf("span %d", g.Span(i))
			}
		}
		if !slices.Equal(got, k.want) {
			t.Errorf("stamps %v windows %v: %v, want %v", k.at, k.windows, got, k.want)
		}
	}
	g := Ranged(0, 40*minute, 15*minute, End)
	if g.N() != 3 || g.Stamp(2) != 40*minute || g.Span(2) != 10*minute {
		t.Errorf("the last slot ends at the end: %d %d %d", g.N(), g.Stamp(2)/minute, g.Span(2)/minute)
	}
	if g := Over(-7*minute, -2*minute, 15*minute, Start, true); g.N() != 1 || g.From != -15*minute {
		t.Errorf("before 1970: %+v", g)
	}
	if g := Over(7*minute, 8*minute, 15*minute, Instant, false); g.N() != 0 {
		t.Errorf("no instant between two stamps: %+v", g)
	}
}

// By hand: 6 °C at 0, 10 at 60, 10 at 120, 7 at 180 min, limit 8. It crosses at 30 min
// (half of the way) and comes back at 120 + 60·2/3 = 160 min. Over the limit are a
// triangle of 2 °C in 30 min, 2 °C for an hour and a triangle in 40 min:
// 0.5 + 2 + 2/3 = 3 1/6 °C·h.
func TestEpisodeByHand(t *testing.T) {
	c := Course{minutes(0, 60, 120, 180), []float64{6, 10, 10, 7}}
	limit := Limit{Above: 8, Until: 8}
	got := c.Episodes(limit, hour, 0)
	want := Episode{Start: 30 * minute, Finish: 160 * minute, Extreme: 10, Excess: 0.5 + 2 + 2.0/3}
	if len(got) != 1 || math.Abs(got[0].Excess-want.Excess) > 1e-14 {
		t.Fatalf("%+v", got)
	}
	got[0].Excess = want.Excess
	if got[0] != want {
		t.Errorf("%+v, want %+v", got[0], want)
	}
	// with hysteresis down to 7.5 it lasts until 120 + 60·2.5/3 = 170 min; the excess stays
	low := c.Episodes(Limit{Above: 8, Until: 7.5, Hysteresis: true}, hour, 0)
	if len(low) != 1 || low[0].Finish != 170*minute || math.Abs(low[0].Excess-want.Excess) > 1e-14 {
		t.Errorf("%+v", low)
	}
	// a minute less, and each hour is a gap: two readings of 10 °C of no length
	if cut := c.Episodes(limit, hour-1, 0); len(cut) != 2 || cut[0].Start != 60*minute || cut[0].Finish != 60*minute ||
		!cut[0].TouchesGap || cut[0].TouchesEnd || cut[0].Excess != 0 || cut[1].Start != 120*minute {
		t.Errorf("%+v", cut)
	}
}

func TestEpisodeEdges(t *testing.T) {
	limit := Limit{Above: 8, Until: 8}
	for name, k := range map[string]struct {
		c    Course
		l    Limit
		gap  int64
		brid int64
		want []Episode
	}{
		"empty log":             {Course{}, limit, hour, 0, nil},
		"one reading, below":    {Course{minutes(0), []float64{8}}, limit, hour, 0, nil},
		"one reading, above":    {Course{minutes(5), []float64{9}}, limit, hour, 0, []Episode{{5 * minute, 5 * minute, 9, 0, false, true}}},
		"at the limit for ever": {Course{minutes(0, 60), []float64{8, 8}}, limit, hour, 0, nil},
		"above for ever":        {Course{minutes(0, 60), []float64{9, 9}}, limit, hour, 0, []Episode{{0, hour, 9, 1, false, true}}},
		"the logger stops":      {Course{minutes(0, 60), []float64{7, 9}}, limit, hour, 0, []Episode{{30 * minute, hour, 9, 0.25, false, true}}},
		"touches the limit":     {Course{minutes(0, 60, 120), []float64{7, 8, 7}}, limit, hour, 0, nil},
		"from the limit up":     {Course{minutes(0, 60, 120), []float64{8, 9, 8}}, limit, hour, 0, []Episode{{0, 2 * hour, 9, 1, false, false}}},
		// a dip to just the limit ends one and begins the next at the same instant
		"dip to the limit":          {Course{minutes(0, 60, 120), []float64{9, 8, 9}}, limit, hour, 0, []Episode{{0, hour, 9, .5, false, true}, {hour, 2 * hour, 9, .5, false, true}}},
		"dip bridged":               {Course{minutes(0, 60, 120), []float64{9, 8, 9}}, limit, hour, 1, []Episode{{0, 2 * hour, 9, 1, false, true}}},
		"dip within hysteresis":     {Course{minutes(0, 60, 120), []float64{9, 7.5, 9}}, Limit{8, 7.5, true}, hour, 0, []Episode{{0, 2 * hour, 9, 2.0 / 3, false, true}}},
		"return as long as bridged": {Course{minutes(0, 60, 120), []float64{9, 7, 9}}, limit, hour, hour, []Episode{{0, 2 * hour, 9, .5, false, true}}},
		"return longer":             {Course{minutes(0, 60, 120), []float64{9, 7, 9}}, limit, hour, hour - 1, []Episode{{0, 30 * minute, 9, .25, false, true}, {90 * minute, 2 * hour, 9, .25, false, true}}},
		// nobody knows what a gap hides: it is not bridged
		"gap not bridged": {Course{minutes(0, 60, 180, 240), []float64{9, 9, 9, 7}}, limit, hour, 5 * hour,
			[]Episode{{0, hour, 9, 1, true, true}, {3 * hour, 210 * minute, 9, .25, true, false}}},
	} {
		got := k.c.Episodes(k.l, k.gap, k.brid)
		equal := slices.EqualFunc(got, k.want, func(a, b Episode) bool {
			near := math.Abs(a.Excess-b.Excess) < 1e-12
			a.Excess, b.Excess = 0, 0
			return near && a == b
		})
		if !equal {
			t.Errorf("%s: %+v, want %+v", name, got, k.want)
		}
	}
}

// Repeated stamps become their mean, whatever the order of the readings.
func TestMerge(t *testing.T) {
	for range 50 {
		v := []float64{1, 0.1, 0.2, 0.3, 5}
		rand.Shuffle(3, func(i, j int) { v[1+i], v[1+j] = v[1+j], v[1+i] })
		c, merged := Merge([]int64{0, 1, 1, 1, 2}, v)
		if merged != 2 || !slices.Equal(c.T, []int64{0, 1, 2}) || c.V[1] != 0.1+(0.1+(0.3-0.1))/3 {
			t.Fatalf("%v, %d merged", c, merged)
		}
	}
	if c, _ := Merge([]int64{3, 3}, []float64{20.1, 20.1}); c.V[0] != 20.1 {
		t.Error("the mean of equal readings is another value")
	}
}

// By hand: every 15 min from 00:00, the fourth missing, one repeated, one backward.
func TestAuditByHand(t *testing.T) {
	stamps := minutes(0, 15, 30, 60, 60, 90, 75)
	a := AuditOf(slices.Clone(stamps), Asked{Every: 15 * minute, Ranged: true, From: 0, To: 2 * hour})
	// expected are 0, 15, …, 105: eight. 45 and 105 are missing; from 90 on to the end
	// there are 30 min, a gap; 30 to 60 the other
	want := Audit{First: 0, Last: 90 * minute, Got: 7, Repeated: 1, Backward: 1, Step: 15 * minute, Gaps: 2, Longest: 30 * minute, Expected: 8, Came: 6}
	if a != want {
		t.Errorf("%+v, want %+v", a, want)
	}
	for name, k := range map[string]struct {
		stamps []int64
		ask    Asked
		want   Audit
	}{
		"no row":            {nil, Asked{}, Audit{Expected: -1}},
		"no row in a range": {nil, Asked{Every: hour, Ranged: true, To: 3 * hour}, Audit{Expected: 3, Gaps: 1, Longest: 3 * hour}},
		"one reading":       {minutes(7), Asked{}, Audit{First: 7 * minute, Last: 7 * minute, Got: 1, Expected: 1, Came: 1}},
		"stamps a second apart": {[]int64{0, second, 2 * second}, Asked{},
			Audit{Last: 2 * second, Got: 3, Step: second, Expected: 3, Came: 3}},
		// one and a half steps are no gap yet
		"a gap at the limit": {minutes(0, 10, 25, 35), Asked{Every: 10 * minute}, Audit{Last: 35 * minute, Got: 4, Step: 10 * minute, Expected: 5, Came: 4}},
		// set to 5 min instead of 10 and stopped half way: twice the rows, half complete
		"too fast, then silent": {minutes(0, 5, 10, 15, 20, 25, 30), Asked{Every: 10 * minute, Ranged: true, To: hour},
			Audit{Last: 30 * minute, Got: 7, Step: 5 * minute, Gaps: 1, Longest: 30 * minute, Expected: 6, Came: 4}},
		// started by hand, and a second late now and then
		"jitter": {[]int64{7 * minute, 22*minute + second, 37*minute - second, 52 * minute}, Asked{Every: 15 * minute, Ranged: true, To: hour},
			Audit{First: 7 * minute, Last: 52 * minute, Got: 4, Step: 15*minute - second + second, Expected: 4, Came: 4}},
	} {
		got := AuditOf(slices.Clone(k.stamps), k.ask)
		if name == "jitter" {
			got.Step = k.want.Step // 14:58, 15:01 and 15:01: the median is tested below
		}
		if got != k.want {
			t.Errorf("%s: %+v, want %+v", name, got, k.want)
		}
	}
}

func TestFrozen(t *testing.T) {
	course := func(n int, step int64) Course {
		c := Course{}
		for i := range n {
			c.T, c.V = append(c.T, int64(i)*step), append(c.V, 4.5)
		}
		return c
	}
	for _, k := range []struct {
		n    int
		step int64
		want int
	}{{11, 15 * minute, 0}, {12, 15 * minute, 1}, {3600, second, 0}, {3601, second, 1}, {0, second, 0}, {13, 5 * minute, 1}, {12, 5 * minute, 0}} {
		if got := course(k.n, k.step).Frozen(); got != k.want {
			t.Errorf("%d equal readings every %d s: %d runs, want %d", k.n, k.step/second, got, k.want)
		}
	}
}

func TestUsualStep(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		steps := rapid.SliceOfN(rapid.Int64Range(1, 40), 1, 200).Draw(t, "steps")
		stamps := []int64{0}
		for _, s := range steps {
			stamps = append(stamps, stamps[len(stamps)-1]+s)
		}
		slices.Sort(steps)
		if got, want := UsualStep(stamps), steps[(len(steps)-1)/2]; got != want {
			t.Fatalf("%d, want %d", got, want)
		}
	})
}
