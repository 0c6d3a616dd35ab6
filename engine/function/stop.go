package function

import "slices"

// Stopping is an accumulator whose Result can take long. It asks stop between stretches
// of its work, and gives the error that stop gives.
type Stopping interface{ Until(stop func() error) }

// Until sets what is asked whether to go on.
func (t *tally) Until(stop func() error) { t.stop = stop }

// stopRows is how many groups or values are worked on between two questions.
const stopRows = 1 << 14

// stopped asks whether to leave before item i.
func (t *tally) stopped(i int) error {
	if t.stop == nil || i&(stopRows-1) != 0 {
		return nil
	}
	return t.stop()
}

// SortUntil sorts x as slices.SortFunc does, and leaves with the error of stop soon
// after it gives one: x is then in any order. Stretches are sorted and merged.
func SortUntil[T any](stop func() error, x []T, compare func(a, b T) int) error {
	if len(x) <= stopRows {
		slices.SortFunc(x, compare)
		return nil
	}
	for lo := 0; lo < len(x); lo += stopRows {
		if err := stop(); err != nil {
			return err
		}
		slices.SortFunc(x[lo:min(lo+stopRows, len(x))], compare)
	}
	from, to := x, make([]T, len(x))
	for width := stopRows; width < len(x); width *= 2 {
		for lo := 0; lo < len(x); lo += 2 * width {
			mid, hi := min(lo+width, len(x)), min(lo+2*width, len(x))
			if err := merged(stop, to[lo:hi], from[lo:mid], from[mid:hi], compare); err != nil {
				return err
			}
		}
		from, to = to, from
	}
	if &from[0] != &x[0] {
		copy(x, from)
	}
	return nil
}

// merged puts two sorted slices into one, equals of the first before those of the second.
func merged[T any](stop func() error, to, a, b []T, compare func(a, b T) int) error {
	for k := range to {
		if k&(stopRows-1) == 0 {
			if err := stop(); err != nil {
				return err
			}
		}
		if len(b) == 0 || len(a) > 0 && compare(a[0], b[0]) <= 0 {
			to[k], a = a[0], a[1:]
		} else {
			to[k], b = b[0], b[1:]
		}
	}
	return nil
}
