package function

import (
	"math"

	"nearcell/catalog/column"
)

// The mean of directions is that of the sum of unit vectors, each times its weight
// (Mardia & Jupp, Directional Statistics, 2000, section 2.2): it does not depend on
// where 0° lies or which way degrees are counted. Angles are reduced to a quarter
// turn before their sine is taken, so that 90° and 270°, or 350° and 10°, cancel to
// the last bit. Where the directions cancel there is no mean: it is NULL.
func directionAggregate() *Aggregate {
	return &Aggregate{Name: "DIRECTION_AVG", Signature: "DIRECTION_AVG(degrees)",
		Meaning: "the mean of directions in degrees, by vectors, from 0 to below 360 (Mardia & Jupp 2000); NULL where they cancel out",
		Example: "DIRECTION_AVG(10 * temp) WEIGHTED BY volume", Weighted: true, Check: checkDirection,
		New: func(s Setup) Accumulator { return &directions{tally: tally{weighted: s.Weighted}} }, Slide: slideDirection}
}

func checkDirection(args []Arg, weight *Arg) (Result, error) {
	if err := firstError(wantCount("DIRECTION_AVG", args, 1, 1), checkWeight(weight)); err != nil {
		return Result{}, err
	}
	if err := wantNumber("DIRECTION_AVG", args, 0); err != nil {
		return Result{}, err
	}
	u := args[0].Unit
	if u != nil && !isDirection(u) {
		return Result{}, wrong(0, "units", "DIRECTION_AVG takes directions in degrees, and this is in %s", u).hint("AVG is the plain mean")
	}
	if u == nil {
		u = column.Symbol("°")
	}
	return Result{column.Real, u, repeatType(column.Real, 1)}, nil
}

// cancelled is the length of the mean vector below which there is only rounding.
const cancelled = 1e-13

type directions struct {
	tally
	sums []directionSum
}

type directionSum struct {
	sin, cos dd
	n        int64
	first    float64 // direction of the first row, from 0 to below 360
	differ   bool    // another row has another direction
}

func (a *directions) Add(groups []int32, on []uint64, n int, args []column.Vector, weight *column.Vector) error {
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
		if err := a.sums[groups[i]].addAngle(args[0].F[i], w, i); err != nil {
			return err
		}
	}
	return nil
}

// addAngle adds a vector of length w.
func (s *directionSum) addAngle(angle, w float64, row int32) error {
	if angle-angle != 0 {
		return infiniteValue(int(row), "DIRECTION_AVG", angle)
	}
	angle = turned(angle)
	sin, cos := sinCosDegrees(angle)
	s.add(&directionSum{twoProduct(sin, w), twoProduct(cos, w), 1, angle, false})
	return nil
}

func (s *directionSum) add(o *directionSum) {
	if o.n == 0 {
		return
	}
	if s.n == 0 {
		*s = *o
		return
	}
	s.differ = s.differ || o.differ || s.first != o.first
	s.n += o.n
	s.sin, s.cos = s.sin.add(o.sin), s.cos.add(o.cos)
}

func (a *directions) Merge(other Accumulator, to []int32) error {
	o := other.(*directions)
	a.mergeFacts(&o.tally, to)
	for g := range o.sums {
		a.sums = grow(a.sums, to[g])
		a.sums[to[g]].add(&o.sums[g])
	}
	return nil
}

func (a *directions) Result(groups int) (column.Vector, error) {
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
		var ok bool
		if v.F[g], ok = s.direction(by); !ok {
			v.SetNull(g)
		}
	}
	return v, nil
}

// direction is the mean direction of so many rows, or of so much weight, if the
// directions do not cancel.
func (s *directionSum) direction(by dd) (float64, bool) {
	sin, cos := s.sin.over(by).value(), s.cos.over(by).value()
	switch {
	case !s.differ:
		return s.first, true
	case math.Hypot(sin, cos) < cancelled:
		return 0, false
	}
	return turned(math.Atan2(sin, cos) * 180 / math.Pi), true
}

// turned is the same direction from 0 to below 360.
func turned(angle float64) float64 {
	angle = math.Mod(angle, 360) // exact
	if angle < 0 {
		angle += 360
	}
	if angle == 360 { // a tiny negative one
		angle = 0
	}
	return angle + 0
}

// sinCosDegrees is the sine and cosine of an angle from 0 to below 360, with the
// symmetries of the circle kept to the last bit.
func sinCosDegrees(angle float64) (sin, cos float64) {
	sinSign, cosSign := 1.0, 1.0
	if angle > 180 {
		angle, sinSign = 360-angle, -1
	}
	if angle > 90 {
		angle, cosSign = 180-angle, -1
	}
	if angle > 45 {
		cos, sin = math.Sincos((90 - angle) * math.Pi / 180)
		return sin * sinSign, cos * cosSign
	}
	sin, cos = math.Sincos(angle * math.Pi / 180)
	return sin * sinSign, cos * cosSign
}
