package series

import (
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"
)

// courses draws readings on whole seconds with gaps between.
func courses(t *rapid.T) Course {
	n := rapid.IntRange(0, 40).Draw(t, "n")
	c := Course{}
	at := int64(0)
	for range n {
		at += rapid.Int64Range(1, 90).Draw(t, "step") * second
		c.T = append(c.T, at)
		c.V = append(c.V, float64(rapid.IntRange(0, 160).Draw(t, "v"))/10)
	}
	return c
}

// value is the course read slowly: the definition.
func value(c Course, t, gap int64) (float64, bool) {
	for i := range c.T {
		switch {
		case c.T[i] == t:
			return c.V[i], true
		case i > 0 && c.T[i-1] < t && t < c.T[i]:
			if c.T[i]-c.T[i-1] > gap {
				return 0, false
			}
			return c.V[i-1] + (c.V[i]-c.V[i-1])*float64(t-c.T[i-1])/float64(c.T[i]-c.T[i-1]), true
		}
	}
	return 0, false
}

// Laws 1 and 2, against the definition; any cut of the grid gives the same.
func TestLinearLaws(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := courses(t)
		gap := rapid.Int64Range(1, 90).Draw(t, "gap") * second
		g := Ranged(rapid.Int64Range(-20, 100).Draw(t, "from")*second, 2000*second, rapid.Int64Range(1, 60).Draw(t, "every")*second, Instant)
		got := at(c, g, gap)
		for k, v := range got {
			want, known := value(c, g.Stamp(k), gap)
			if known == (v != v) || known && math.Abs(v-want) > 1e-12 {
				t.Fatalf("slot %d: %v, want %v %v", k, v, want, known)
			}
			if known && (v < slices.Min(c.V) || v > slices.Max(c.V)) {
				t.Fatalf("slot %d: %v leaves the readings", k, v)
			}
		}
		cut := rapid.IntRange(0, g.N()).Draw(t, "cut")
		out, known := make([]float64, g.N()), make([]uint64, g.N()/64+1)
		c.Linear(g, cut, g.N(), gap, out, known)
		if rest := unknownAsNaN(out, known)[:g.N()-cut]; !same(rest, got[cut:]) {
			t.Fatalf("from slot %d: %v, want %v", cut, rest, got[cut:])
		}
	})
}

// Laws 2 and 3: means of two halves are that of the whole, and stay among the readings.
func TestMeanLaws(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := courses(t)
		gap := rapid.Int64Range(1, 90).Draw(t, "gap") * second
		step := rapid.Int64Range(1, 60).Draw(t, "every") * second
		whole, partly := means(c, Ranged(0, 1200*second, 2*step, Start), gap)
		half, partlyHalf := means(c, Ranged(0, 1200*second, step, Start), gap)
		for k, m := range whole {
			if m != m {
				continue
			}
			if m < slices.Min(c.V) || m > slices.Max(c.V) {
				t.Fatalf("slot %d: %v leaves the readings", k, m)
			}
			if 2*k+1 < len(half) && partly+partlyHalf == 0 && int64(2*k+2)*step <= 1200*second {
				if want := (half[2*k] + half[2*k+1]) / 2; math.Abs(m-want) > 1e-10 && want == want {
					t.Fatalf("slot %d: %v, halves %v", k, m, want)
				}
			}
		}
	})
}

// Excursions against the course looked at every tenth of a second, and law 5.
func TestEpisodeLaws(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		c := courses(t)
		gap := rapid.Int64Range(1, 90).Draw(t, "gap") * second
		limit := Limit{Above: 7.95, Until: 7.95} // no reading is at it
		found := c.Episodes(limit, gap, 0)
		total, excess := int64(0), 0.0
		for i, e := range found {
			if e.Finish < e.Start || i > 0 && e.Start < found[i-1].Finish || e.Extreme <= limit.Above {
				t.Fatalf("%+v", found)
			}
			total += e.Finish - e.Start
			excess += e.Excess
		}
		const tick = second / 10
		ticks, sum := int64(0), 0.0
		for at := int64(0); len(c.T) > 0 && at <= c.T[len(c.T)-1]; at += tick {
			if v, known := value(c, at+tick/2, gap); known && v > limit.Above {
				ticks++
				sum += (v - limit.Above) * float64(tick) / Hour
			}
		}
		if math.Abs(float64(total-ticks*tick)) > float64(tick)*float64(len(c.T)+1) || math.Abs(sum-excess) > 1e-3*(1+sum) {
			t.Fatalf("over for %d, looked at %d; excess %v, looked at %v", total, ticks*tick, excess, sum)
		}
		mirrored := Course{c.T, make([]float64, len(c.V))}
		for i, v := range c.V {
			mirrored.V[i] = -v
		}
		again := mirrored.Episodes(Limit{Above: -7.95, Until: -7.95}, gap, 0) // where it is below
		for _, e := range again {
			for _, f := range found {
				if min(e.Finish, f.Finish) > max(e.Start, f.Start) {
					t.Fatalf("above and below at once: %+v %+v", e, f)
				}
			}
		}
		bridged := c.Episodes(limit, gap, 30*second)
		all := 0.0
		for _, e := range bridged {
			all += e.Excess
		}
		if len(bridged) > len(found) || math.Abs(all-excess) > 1e-12 {
			t.Fatalf("bridging changes the excess from %v to %v", excess, all)
		}
	})
}

const benchReadings = 10_000_000

// manyReadings is the course of one logger.
func manyReadings(n int) Course {
	c := Course{make([]int64, n), make([]float64, n)}
	for i := range c.T {
		c.T[i], c.V[i] = int64(i)*second, 5+4*math.Sin(float64(i)/500)+float64(i%7)/10
	}
	return c
}

func BenchmarkLinear(b *testing.B) {
	c := manyReadings(benchReadings)
	g := Ranged(second/2, int64(benchReadings)*second, second, Instant)
	out, known := make([]float64, g.N()), make([]uint64, g.N()/64+1)
	for b.Loop() {
		c.Linear(g, 0, g.N(), 2*second, out, known)
	}
}

func BenchmarkMean(b *testing.B) {
	c := manyReadings(benchReadings)
	g := Ranged(0, int64(benchReadings)*second, 60*second, Start)
	out, known := make([]float64, g.N()), make([]uint64, g.N()/64+1)
	for b.Loop() {
		c.Mean(g, 0, g.N(), 2*second, out, known)
	}
}

func BenchmarkEpisodes(b *testing.B) {
	c := manyReadings(benchReadings)
	for b.Loop() {
		c.Episodes(Limit{Above: 8, Until: 8}, 2*second, 0)
	}
}

func BenchmarkAudit(b *testing.B) {
	c := manyReadings(benchReadings)
	for b.Loop() {
		AuditOf(slices.Clone(c.T), Asked{})
	}
}
