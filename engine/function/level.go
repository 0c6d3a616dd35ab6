package function

import (
	"math"
	"strings"

	"nearcell/catalog/column"
)

// The mean of levels is the level of the mean energy,
//
//	L = 10 lg( Σ w 10^(Li/10) / Σ w ),
//
// the equivalent continuous level of acoustics (ISO 1996-1; common practice for
// anything in dB that stands for a power). As with mean kinetic temperatures the
// powers are kept as a fraction and a power of two, with one common power for the
// sum: nothing overflows, and the order of the rows does not matter. A mean lies
// between its smallest and its largest value; the result is kept there, so that the
// mean of equal levels is that level to the last bit.
func levelAggregate() *Aggregate {
	return &Aggregate{Name: "LEVEL_AVG", Signature: "LEVEL_AVG(level)",
		Meaning: "the mean of levels in dB by their energy: 10 lg of the mean of 10^(L/10) (equivalent continuous level, ISO 1996-1)",
		Example: "LEVEL_AVG(60 + temp) WEIGHTED BY volume", Weighted: true, Check: checkLevel,
		New: func(s Setup) Accumulator { return &levels{tally: tally{weighted: s.Weighted}} }, Slide: slideLevel}
}

func checkLevel(args []Arg, weight *Arg) (Result, error) {
	if err := firstError(wantCount("LEVEL_AVG", args, 1, 1), checkWeight(weight)); err != nil {
		return Result{}, err
	}
	if err := wantNumber("LEVEL_AVG", args, 0); err != nil {
		return Result{}, err
	}
	if u := args[0].Unit; u != nil && !isLevel(u) {
		return Result{}, wrong(0, "units", "LEVEL_AVG takes levels in dB, and this is in %s", u).hint("AVG is the plain mean")
	}
	return Result{column.Real, args[0].Unit, repeatType(column.Real, 1)}, nil
}

type levels struct {
	tally
	sums []levelSum
}

// levelSum is Σ w·2^(y - exponent), y the binary logarithm of the power, and the
// smallest and the largest level.
type levelSum struct {
	kineticSum
	low, high float64
}

func (s *levelSum) look(low, high float64) {
	if s.n == 0 {
		s.low, s.high = low, high
		return
	}
	s.low, s.high = math.Min(s.low, low), math.Max(s.high, high)
}

// binaryPerDecibel is log2(10)/10.
const binaryPerDecibel = math.Ln10 / math.Ln2 / 10

func (a *levels) Add(groups []int32, on []uint64, n int, args []column.Vector, weight *column.Vector) error {
	rows, weights, err := a.begin(groups, on, n, args, weight)
	if err != nil {
		return err
	}
	for _, i := range rows {
		w := 1.0
		if weights != nil {
			w = weights[i]
		}
		a.sums = grow(a.sums, groups[i])
		if err := a.sums[groups[i]].addLevel(args[0].F[i], w, i); err != nil {
			return err
		}
	}
	return nil
}

// addLevel adds the power of a level.
func (s *levelSum) addLevel(level, w float64, row int32) error {
	if level-level != 0 {
		return infiniteValue(int(row), "LEVEL_AVG", level)
	}
	y := float64(max(-1<<40, min(1<<40, level)) * binaryPerDecibel)
	k := math.Floor(y)
	s.look(level, level)
	s.add(twoProduct(math.Exp2(y-k), w), int(k), 1)
	return nil
}

func (s *levelSum) merge(o *levelSum) {
	if o.n > 0 {
		s.look(o.low, o.high)
		s.add(o.s, o.exponent, o.n)
	}
}

// level is the mean level of so many rows, or of so much weight.
func (s *levelSum) level(by dd) float64 {
	level := (math.Log2(s.s.over(by).value()) + float64(s.exponent)) / binaryPerDecibel
	return max(s.low, min(s.high, level)) + 0
}

func (a *levels) Merge(other Accumulator, to []int32) error {
	o := other.(*levels)
	a.mergeFacts(&o.tally, to)
	for g := range o.sums {
		if o.sums[g].n > 0 {
			a.sums = grow(a.sums, to[g])
			a.sums[to[g]].merge(&o.sums[g])
		}
	}
	return nil
}

func (a *levels) Result(groups int) (column.Vector, error) {
	v := column.New(column.Real, nil, groups)
	for g := range groups {
		if g >= len(a.sums) || a.sums[g].n == 0 {
			v.SetNull(g)
			continue
		}
		s := &a.sums[g]
		by := dd{hi: float64(s.n)}
		if a.weighted {
			by = a.fact(g).sum
		}
		v.F[g] = s.level(by)
	}
	return v, nil
}

// isLevel knows the units of levels: dB, dB(A), dBA, dB re 20 µPa …
func isLevel(u *column.Unit) bool { return strings.HasPrefix(u.String(), "dB") }

// isDirection knows the units of directions in degrees; °C is none.
func isDirection(u *column.Unit) bool {
	switch strings.ToLower(u.String()) {
	case "°", "deg", "degree", "degrees", "°n", "° true":
		return true
	}
	return false
}

// isAcidity knows pH, the logarithm of a concentration.
func isAcidity(u *column.Unit) bool { return strings.EqualFold(u.String(), "ph") }

// plainMean refuses to add up and divide what has no such mean, and names what
// has. Without a unit nothing can be known.
func plainMean(u *column.Unit) error {
	const dropped = "; CAST(… AS REAL) drops the unit where the plain mean is meant"
	switch {
	case u == nil:
		return nil
	case isLevel(u):
		return wrong(0, "mean", "AVG of levels in %s is no mean level: 80 dB and 90 dB together are 87.4 dB on average, not 85", u).
			hint("LEVEL_AVG is the mean by energy%s", dropped)
	case isDirection(u):
		return wrong(0, "mean", "AVG of directions in %s is no mean direction: of 350° and 10° it would be 180°", u).
			hint("DIRECTION_AVG is the mean by vectors%s", dropped)
	case isAcidity(u):
		return wrong(0, "mean", "AVG of pH is the pH of no mixture: pH is a logarithm").
			hint("-LOG10(AVG(POWER(10, -CAST(… AS REAL)))) is the pH of the mean acid%s", dropped)
	}
	return nil
}

// What NoPlainMean says: the aggregate that is the mean, or words where there is none.
const (
	NoMeanLevel     = "LEVEL_AVG"
	NoMeanDirection = "DIRECTION_AVG"
	NoMeanAcid      = "a mean of the acid"
)

// NoPlainMean names the aggregate that is the mean of values in a unit, "" where
// the plain mean is one.
func NoPlainMean(u *column.Unit) string {
	switch {
	case u == nil:
		return ""
	case isLevel(u):
		return NoMeanLevel
	case isDirection(u):
		return NoMeanDirection
	case isAcidity(u):
		return NoMeanAcid
	}
	return ""
}
