package series

import "math"

// Limit is what an excursion is over: it begins where the course rises above Above and
// ends where it comes back to Until (with Hysteresis: where it falls below Until, which
// is not above Above).
type Limit struct {
	Above, Until float64
	Hysteresis   bool
}

// Episode is one excursion. Excess is the integral of what is over the limit, in the
// value's unit times hours.
type Episode struct {
	Start, Finish   int64
	Extreme, Excess float64
	// TouchesGap: a gap hides where it began, where it ended, or both. TouchesEnd: the
	// course began or ended within it.
	TouchesGap, TouchesEnd bool
}

// Episodes gives the excursions of a course in the order of time. A return of up to
// bridging does not end one. What is before and behind a gap is never one excursion.
func (c Course) Episodes(l Limit, gap, bridging int64) []Episode {
	s := &scan{Course: c, Limit: l, bridging: bridging}
	for i := range c.T {
		s.reading(i, i > 0 && c.T[i]-c.T[i-1] > gap)
	}
	if s.on {
		s.finish(c.T[len(c.T)-1])
		s.found[len(s.found)-1].TouchesEnd = true
	}
	return s.found
}

// scan is the way through a course; on: within an excursion, the last of found.
type scan struct {
	Course
	Limit
	bridging int64
	found    []Episode
	on       bool
	whole    int // excursions before this one are beyond a gap
}

func (s *scan) reading(i int, gap bool) {
	if gap {
		if s.on {
			s.finish(s.T[i-1])
			s.found[len(s.found)-1].TouchesGap = true
		}
		s.whole = len(s.found)
	}
	over := s.V[i] > s.Above
	switch first := i == 0 || gap; {
	case !s.on && over && first:
		s.begin(s.T[i], i)
		e := &s.found[len(s.found)-1]
		e.TouchesGap, e.TouchesEnd = e.TouchesGap || gap, e.TouchesEnd || i == 0
	case !s.on && over:
		s.begin(s.crossing(i, s.Above), i)
		s.found[len(s.found)-1].Excess += s.excess(i)
	case s.on:
		e := &s.found[len(s.found)-1]
		e.Extreme = max(e.Extreme, s.V[i])
		e.Excess += s.excess(i)
		if s.over(s.V[i]) {
			return
		}
		s.finish(s.crossing(i, s.Until))
	}
}

// over tells whether an excursion goes on at a reading.
func (s *scan) over(v float64) bool {
	if s.Hysteresis {
		return v >= s.Until
	}
	return v > s.Above
}

// begin opens an excursion, or goes on with the last one where the return between is
// bridged.
func (s *scan) begin(t int64, i int) {
	s.on = true
	if n := len(s.found); n > s.whole && s.bridging > 0 && t-s.found[n-1].Finish <= s.bridging {
		s.found[n-1].Extreme = max(s.found[n-1].Extreme, s.V[i])
		return
	}
	s.found = append(s.found, Episode{Start: t, Extreme: s.V[i]})
}

func (s *scan) finish(t int64) {
	s.on = false
	s.found[len(s.found)-1].Finish = t
}

// crossing is when the course is at a level on its way to reading i.
func (s *scan) crossing(i int, level float64) int64 {
	t0, t1, v0, v1 := s.T[i-1], s.T[i], s.V[i-1], s.V[i]
	f := (level/2 - v0/2) / (v1/2 - v0/2)
	return t0 + int64(math.Round(float64(clamp(f, 0, 1)*float64(t1-t0))))
}

// excess is the integral over the limit on the way to reading i, in hours.
func (s *scan) excess(i int) float64 {
	a, b := s.V[i-1]-s.Above, s.V[i]-s.Above
	hours := float64(s.T[i]-s.T[i-1]) / Hour
	switch {
	case a >= 0 && b >= 0:
		return float64((a/2 + b/2) * hours)
	case a > 0:
		return float64(a / 2 * float64(a/(a-b)) * hours)
	case b > 0:
		return float64(b / 2 * float64(b/(b-a)) * hours)
	}
	return 0
}
