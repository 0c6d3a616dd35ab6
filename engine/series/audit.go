package series

import "slices"

// UsualStep is the median of the steps between successive stamps, which ascend (of an
// even number the smaller of the two in the middle); those that repeat make no step. It is
// 0 without two.
func UsualStep(stamps []int64) int64 {
	steps := make([]int64, 0, max(0, len(stamps)-1))
	for i := 1; i < len(stamps); i++ {
		if d := stamps[i] - stamps[i-1]; d != 0 {
			steps = append(steps, d)
		}
	}
	if len(steps) == 0 {
		return 0
	}
	return nth(steps, (len(steps)-1)/2)
}

// nth is the n-th smallest, from 0. It moves the values.
func nth(v []int64, n int) int64 {
	for len(v) > 16 {
		pivot := v[len(v)/2]
		if a, b := v[0], v[len(v)-1]; (a > pivot) != (a > b) {
			pivot = a
		} else if (b > pivot) != (b > a) {
			pivot = b
		}
		lo, mid, hi := 0, 0, len(v) // below, equal, above
		for mid < hi {
			switch x := v[mid]; {
			case x < pivot:
				v[lo], v[mid] = x, v[lo]
				lo++
				mid++
			case x > pivot:
				hi--
				v[mid], v[hi] = v[hi], x
			default:
				mid++
			}
		}
		switch {
		case n < lo:
			v = v[:lo]
		case n < hi:
			return pivot
		default:
			v, n = v[hi:], n-hi
		}
	}
	slices.Sort(v)
	return v[n]
}

// Audit is what the stamps of one logger say.
type Audit struct {
	First, Last int64
	Got         int   // stamps
	Repeated    int   // of them, stood there before
	Backward    int   // of them, before the one that they follow
	Step        int64 // usual, 0: not known
	Gaps        int
	Longest     int64 // of the gaps
	Expected    int   // -1: not known
	Came        int   // of those expected
}

// Asked is what readings were to be expected: every Every, 0: the usual step; from
// From on and before To where Ranged.
type Asked struct {
	Every    int64
	Ranged   bool
	From, To int64
}

// AuditOf looks at the stamps of a logger in the order in which they were recorded,
// all of them in the range, and sorts them.
//
// A gap is a step of more than one and a half of the expected ones; where a range is
// given also that from its beginning to the first stamp and from the last stamp to its
// end. Of those that were expected came as many as stand more than half a step apart:
// repeated stamps and a logger that was set too fast fill no gap.
func AuditOf(stamps []int64, ask Asked) Audit {
	a := Audit{Got: len(stamps), Expected: -1}
	for i := 1; i < len(stamps); i++ {
		if stamps[i] < stamps[i-1] {
			a.Backward++
		}
	}
	if a.Backward > 0 {
		slices.Sort(stamps)
	}
	stamps = slices.Compact(stamps)
	a.Repeated = a.Got - len(stamps)
	a.Step = UsualStep(stamps)
	every := ask.Every
	if every == 0 {
		every = a.Step
	}
	if len(stamps) > 0 {
		a.First, a.Last = stamps[0], stamps[len(stamps)-1]
	}
	switch {
	case ask.Ranged && every > 0:
		a.Expected = Ranged(ask.From, ask.To, every, Start).N()
	case len(stamps) == 0:
	case every > 0:
		a.Expected = int((a.Last-a.First+every/2)/every) + 1
	default:
		a.Expected = 1 // one reading is all there is to expect of it
	}
	a.came(stamps, every)
	a.gaps(stamps, every, ask)
	return a
}

func (a *Audit) came(stamps []int64, every int64) {
	for i, last := 0, int64(0); i < len(stamps); i++ {
		if i == 0 || stamps[i]-last > every/2 {
			a.Came++
			last = stamps[i]
		}
	}
	a.Came = min(a.Came, max(0, a.Expected))
}

func (a *Audit) gaps(stamps []int64, every int64, ask Asked) {
	gap := func(d int64) {
		if every > 0 && d > every+every/2 {
			a.Gaps++
			a.Longest = max(a.Longest, d)
		}
	}
	switch {
	case len(stamps) == 0 && ask.Ranged && ask.To > ask.From:
		a.Gaps, a.Longest = 1, ask.To-ask.From
		return
	case len(stamps) == 0:
		return
	case ask.Ranged:
		gap(a.First - ask.From)
		gap(ask.To - a.Last)
	}
	for i := 1; i < len(stamps); i++ {
		gap(stamps[i] - stamps[i-1])
	}
}

// A frozen run is of at least frozenReadings equal readings that last frozenTime.
const (
	frozenReadings = 12
	frozenTime     = Hour
)

// Frozen is the number of frozen runs of a course: equal readings, twelve or more in
// a row, that last an hour or longer.
func (c Course) Frozen() int {
	runs := 0
	for lo := 0; lo < len(c.V); {
		hi := lo + 1
		for hi < len(c.V) && c.V[hi] == c.V[lo] {
			hi++
		}
		if hi-lo >= frozenReadings && c.T[hi-1]-c.T[lo] >= frozenTime {
			runs++
		}
		lo = hi
	}
	return runs
}
