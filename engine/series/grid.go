package series

// Stamp says where in the time that a row stands for its stamp is.
type Stamp uint8

// Start is the beginning of a slot, End its end, Instant its middle: the window then
// reaches half a step to both sides.
const (
	Start Stamp = iota
	Instant
	End
)

// Grid is slots of one length, the first of which begins at From.
type Grid struct {
	From int64
	Step int64 // > 0
	To   int64 // end of the last slot
	At   Stamp
}

// Ranged is the grid of the slots that begin from `from` on and before `to`; the last
// is cut off at `to`.
func Ranged(from, to, step int64, at Stamp) Grid {
	return Grid{From: from, Step: step, To: max(from, to), At: at}
}

// Over is the grid of the multiples of step, counted from 1970, over readings from
// first to last. With windows it is the slots that may hold a reading, else the
// instants that are not before the first nor behind the last one.
func Over(first, last, step int64, at Stamp, windows bool) Grid {
	g := Grid{Step: step, At: at}
	var lo, hi int64 // first and last slot
	switch {
	case !windows:
		lo, hi = -floorDiv(-first, step), floorDiv(last, step)
		if at == End {
			lo, hi = lo-1, hi-1
		}
	case at == Instant:
		lo, hi = floorDiv(first+step/2, step), floorDiv(last+step/2, step)
	default:
		lo, hi = floorDiv(first, step), floorDiv(last, step)
	}
	g.From, g.To = lo*step, max(lo, hi+1)*step
	return g
}

func floorDiv(a, b int64) int64 {
	q := a / b
	if a%b < 0 {
		q--
	}
	return q
}

// N is the number of slots.
func (g Grid) N() int { return int((g.To - g.From + g.Step - 1) / g.Step) }

// slot is the beginning and the end of a slot.
func (g Grid) slot(k int) (from, to int64) {
	from = g.From + int64(k)*g.Step
	return from, min(from+g.Step, g.To)
}

// Stamp is the stamp of a slot.
func (g Grid) Stamp(k int) int64 {
	from, to := g.slot(k)
	if g.At == End {
		return to
	}
	return from
}

// Span is the time that a slot stands for.
func (g Grid) Span(k int) int64 {
	from, to := g.slot(k)
	return to - from
}

// window is the time over which means and extremes of a slot are taken: from `from`
// on and before `to`.
func (g Grid) window(k int) (from, to int64) {
	from, to = g.slot(k)
	if g.At == Instant {
		return from - g.Step/2, from - g.Step/2 + g.Step
	}
	return from, to
}
