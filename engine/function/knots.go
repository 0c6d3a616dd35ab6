package function

import (
	"math"
	"slices"
)

// Outside says what INTERPOLATE answers beyond the first and the last x.
type Outside uint8

// NULL is the rule; HOLD takes the value at the nearer end; FAIL is an error.
const (
	OutsideNull Outside = iota
	OutsideHold
	OutsideFail
)

var outsideWords = []string{OutsideNull: "NULL", OutsideHold: "HOLD", OutsideFail: "FAIL"}

// String is the word of the language.
func (o Outside) String() string { return outsideWords[o] }

// OutsideNamed finds the word of the language.
func OutsideNamed(word string) (Outside, bool) {
	i := slices.Index(outsideWords, word)
	return Outside(max(i, 0)), i >= 0
}

// Knots are the points of a piecewise straight line: X ascends strictly, Y has Width
// values for each of them.
type Knots struct {
	X, Y  []float64
	Width int
}

// NewKnots sorts points, in place. Those of one x become their mean; contrary is how
// many of them stand at an x with another value.
func NewKnots(x, y []float64, width int) (k Knots, contrary int) {
	k = Knots{x, y, width}
	if !sortedPoints(&k) {
		k = sortPoints(k)
	}
	n := 0
	for lo := 0; lo < len(k.X); {
		hi := lo + 1
		for hi < len(k.X) && k.X[hi] == k.X[lo] {
			hi++
		}
		if k.mean(n, lo, hi) {
			contrary += hi - lo - 1
		}
		n++
		lo = hi
	}
	k.X, k.Y = k.X[:n], k.Y[:n*width]
	return k, contrary
}

// comparePoints orders points by x, then by y, so that means do not depend on the
// order of the rows.
func (k *Knots) comparePoints(i, j int) int {
	switch {
	case k.X[i] < k.X[j]:
		return -1
	case k.X[i] > k.X[j]:
		return 1
	}
	return slices.Compare(k.Y[i*k.Width:(i+1)*k.Width], k.Y[j*k.Width:(j+1)*k.Width])
}

func sortedPoints(k *Knots) bool {
	for i := 1; i < len(k.X); i++ {
		if k.comparePoints(i-1, i) > 0 {
			return false
		}
	}
	return true
}

func sortPoints(k Knots) Knots {
	order := make([]int, len(k.X))
	for i := range order {
		order[i] = i
	}
	slices.SortStableFunc(order, k.comparePoints)
	out := Knots{make([]float64, 0, len(k.X)), make([]float64, 0, len(k.Y)), k.Width}
	for _, i := range order {
		out.X, out.Y = append(out.X, k.X[i]), append(out.Y, k.Y[i*k.Width:(i+1)*k.Width]...)
	}
	return out
}

// mean makes point n of points lo..hi-1, and tells whether they differ.
func (k *Knots) mean(n, lo, hi int) (differ bool) {
	k.X[n] = k.X[lo]
	for c := range k.Width {
		first, sum := k.Y[lo*k.Width+c], 0.0
		for i := lo + 1; i < hi; i++ {
			sum += k.Y[i*k.Width+c] - first
			differ = differ || k.Y[i*k.Width+c] != first
		}
		k.Y[n*k.Width+c] = first + sum/float64(hi-lo)
	}
	return differ
}

// At writes the line's point at v to out, and reports whether it has one: beyond both
// ends only with OutsideHold. hint is the number of a point near v, as the last call
// gave it: for values that ascend the search costs a step.
func (k *Knots) At(v float64, o Outside, hint int, out []float64) (at int, ok bool) {
	n := len(k.X)
	if n == 0 {
		return 0, false
	}
	i := k.search(v, hint) // the first point at or beyond v
	switch {
	case i < n && k.X[i] == v:
		copy(out, k.Y[i*k.Width:])
	case i == 0 || i == n:
		if o != OutsideHold {
			return i, false
		}
		copy(out, k.Y[min(i, n-1)*k.Width:])
	default:
		f := (v - k.X[i-1]) / (k.X[i] - k.X[i-1])
		for c := range k.Width {
			y0, y1 := k.Y[(i-1)*k.Width+c], k.Y[i*k.Width+c]
			out[c] = max(min(y0, y1), min(y0+float64(f*(y1-y0)), max(y0, y1)))
		}
	}
	return i, true
}

func (k *Knots) search(v float64, hint int) int {
	lo, hi := 0, len(k.X)
	// near the hint first: values that follow each other are near each other
	for i := max(0, hint-1); i <= hint+1 && i < len(k.X); i++ {
		if k.X[i] >= v {
			hi = i // of what is below the hint nothing is known but if lo says so
			break
		}
		lo = i + 1
	}
	for lo < hi {
		mid := int(uint(lo+hi) >> 1)
		if k.X[mid] < v {
			lo = mid + 1
		} else {
			hi = mid
		}
	}
	return lo
}

// finite tells whether a point can be a knot.
func finite(f float64) bool { return !math.IsInf(f, 0) && !math.IsNaN(f) }
