package series

import "slices"

// Course is the readings of one logger for one quantity: T ascends strictly, V are
// finite.
type Course struct {
	T []int64   // microseconds since 1970
	V []float64 // by stamp
}

// Hour is an hour in microseconds.
const Hour = 3600e6

// Merge sorts nothing: it makes a Course of readings whose stamps ascend but may
// repeat. Readings of one stamp become their mean. It works in place and gives the
// number of readings that were merged into others.
func Merge(t []int64, v []float64) (Course, int) {
	n := 0
	for lo := 0; lo < len(t); {
		hi := lo + 1
		for hi < len(t) && t[hi] == t[lo] {
			hi++
		}
		t[n], v[n] = t[lo], mean(v[lo:hi])
		n++
		lo = hi
	}
	return Course{t[:n], v[:n]}, len(t) - n
}

// mean is that of a few values, the same for any order of them.
func mean(v []float64) float64 {
	if len(v) == 1 {
		return v[0]
	}
	lo, hi := v[0], v[0]
	for _, x := range v {
		lo, hi = min(lo, x), max(hi, x)
	}
	if lo == hi {
		return lo
	}
	slices.Sort(v) // a sum depends on the order
	sum := 0.0
	for _, x := range v {
		sum += x - lo
	}
	return clamp(lo+sum/float64(len(v)), lo, hi)
}

func clamp(x, lo, hi float64) float64 { return max(lo, min(x, hi)) }

// after is the first reading with a stamp of at least t.
func (c Course) after(t int64) int {
	lo, hi := 0, len(c.T)
	for lo < hi {
		mid := int(uint(lo+hi) >> 1)
		if c.T[mid] < t {
			lo = mid + 1
		} else {
			hi = mid
		}
	}
	return lo
}

// between is the value at t on the straight line from reading i-1 to reading i.
func (c Course) between(i int, t int64) float64 {
	t0, t1, v0, v1 := c.T[i-1], c.T[i], c.V[i-1], c.V[i]
	if v0 == v1 {
		return v0
	}
	// halves, so that the difference of large values of two signs stays finite
	f := float64(t-t0) / float64(t1-t0)
	v := v0 + 2*float64(f*(v1/2-v0/2))
	return clamp(v, min(v0, v1), max(v0, v1))
}
