package series

// None marks a slot without a reading where readings are given by number.
const None = -1

// Linear is the course at the stamps of slots lo..hi-1: at a reading the reading, else
// the straight line between the two around it. known tells which values there are;
// bits of slots without one stay clear. known has a bit for each of out, from 0.
func (c Course) Linear(g Grid, lo, hi int, gap int64, out []float64, known []uint64) {
	if lo >= hi {
		return
	}
	i := c.after(g.Stamp(lo))
	for k := lo; k < hi; k++ {
		t := g.Stamp(k)
		for i < len(c.T) && c.T[i] < t {
			i++
		}
		switch {
		case i == len(c.T):
			return
		case c.T[i] == t:
			out[k-lo] = c.V[i]
		case i == 0 || c.T[i]-c.T[i-1] > gap:
			continue
		default:
			out[k-lo] = c.between(i, t)
		}
		known[(k-lo)>>6] |= 1 << uint((k-lo)&63)
	}
}

// Hold is the number of the last reading at or before the stamp of each slot, None
// across a gap. Behind the last reading it holds for `after`.
func Hold(stamps []int64, g Grid, lo, hi int, gap, after int64, out []int32) {
	if lo >= hi {
		return
	}
	i := Course{T: stamps}.after(g.Stamp(lo))
	for k := lo; k < hi; k++ {
		t := g.Stamp(k)
		for i < len(stamps) && stamps[i] <= t {
			i++
		}
		out[k-lo] = None
		switch { // reading i-1 is the last one up to t
		case i == 0:
		case stamps[i-1] == t:
			out[k-lo] = int32(i - 1)
		case i == len(stamps) && t-stamps[i-1] <= after, i < len(stamps) && stamps[i]-stamps[i-1] <= gap:
			out[k-lo] = int32(i - 1)
		}
	}
}

// LastIn is the number of the last reading in the window of each slot; where there is
// none, that of the reading held at its beginning.
func LastIn(stamps []int64, g Grid, lo, hi int, gap, after int64, out []int32) {
	c := Course{T: stamps}
	i := 0
	if lo < hi {
		from, _ := g.window(lo)
		i = c.after(from)
	}
	for k := lo; k < hi; k++ {
		from, to := g.window(k)
		for i < len(stamps) && stamps[i] < to {
			i++
		}
		out[k-lo] = None
		switch {
		case i == 0:
		case stamps[i-1] >= from:
			out[k-lo] = int32(i - 1)
		case i == len(stamps) && from-stamps[i-1] <= after, i < len(stamps) && stamps[i]-stamps[i-1] <= gap:
			out[k-lo] = int32(i - 1)
		}
	}
}

// Extreme is the number of the largest reading (of several, the first) in the window
// of each slot, None without one. Negated values give the smallest.
func Extreme(stamps []int64, v []float64, g Grid, lo, hi int, out []int32) {
	if lo >= hi {
		return
	}
	from, _ := g.window(lo)
	i := Course{T: stamps}.after(from)
	for k := lo; k < hi; k++ {
		from, to := g.window(k)
		for i < len(stamps) && stamps[i] < from {
			i++
		}
		best := None
		for ; i < len(stamps) && stamps[i] < to; i++ {
			if best == None || v[i] > v[best] {
				best = i
			}
		}
		out[k-lo] = int32(best)
	}
}

// Mean is the mean of the course over the window of each slot, by time: the integral
// of the straight lines between readings over what the window has of them. Where that
// is less than half of the window nothing is known. It gives the number of means that
// rest on a part of their window only.
func (c Course) Mean(g Grid, lo, hi int, gap int64, out []float64, known []uint64) (partly int) {
	if lo >= hi {
		return 0
	}
	from, _ := g.window(lo)
	i := max(1, c.after(from))
	for k := lo; k < hi; k++ {
		from, to := g.window(k)
		for i < len(c.T) && c.T[i] <= from {
			i++
		}
		m, covered := c.mean(i, from, to, gap)
		if covered == 0 || covered < to-from-covered {
			continue
		}
		if covered < to-from {
			partly++
		}
		out[k-lo] = m
		known[(k-lo)>>6] |= 1 << uint((k-lo)&63)
	}
	return partly
}

// mean is the mean of the course from `from` to `to`, and how much of that time it
// covers. Segment i, which ends in reading i, is the first that reaches beyond `from`.
func (c Course) mean(i int, from, to, gap int64) (m float64, covered int64) {
	var base, sum, lo, hi float64
	for ; i < len(c.T) && c.T[i-1] < to; i++ {
		if c.T[i]-c.T[i-1] > gap {
			continue
		}
		a, b := max(from, c.T[i-1]), min(to, c.T[i])
		va, vb := c.V[i-1], c.V[i]
		if a > c.T[i-1] {
			va = c.between(i, a)
		}
		if b < c.T[i] {
			vb = c.between(i, b)
		}
		if covered == 0 {
			base, lo, hi = va, va, va
		}
		covered += b - a
		lo, hi = min(lo, va, vb), max(hi, va, vb)
		sum += float64(float64(b-a) * ((va - base) + (vb - base)))
	}
	if covered == 0 {
		return 0, 0
	}
	return clamp(base+sum/float64(2*covered), lo, hi), covered
}
