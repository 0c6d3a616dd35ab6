package function

import (
	"fmt"
	"math"
	"strings"

	"nearcell/catalog/column"
)

// Mean kinetic temperature (Haynes, J. Pharm. Sci. 60 (1971) 927): the constant
// temperature at which a reaction of the activation energy ΔH would run as far
// as at the given ones,
//
//	T = (ΔH/R) / -ln( Σ w e^(-ΔH/(R T)) / Σ w ),   T in kelvin.
//
// The exponentials are taken relative to 25 °C and kept as a fraction and a
// power of two, with one common power for the whole sum: the terms are those
// relative to the warmest temperature, nothing overflows, and the order of the
// rows does not matter.
const (
	gasConstant    = 8.3144 // J/(mol K)
	defaultEnergy  = 83.144 // kJ/mol: ΔH/R is 10 000 K
	absoluteZero   = -273.15
	referenceMKT   = 25 - absoluteZero // K
	joulePerKilo   = 1000
	celsiusSymbols = "°C degC C celsius"
)

func checkMKT(args []Arg, weight *Arg) (Result, error) {
	if err := firstError(wantCount("MKT", args, 1, 2), checkWeight(weight)); err != nil {
		return Result{}, err
	}
	for i := range args {
		if err := wantNumber("MKT", args, i); err != nil {
			return Result{}, err
		}
	}
	if u := args[0].Unit; u != nil && !strings.Contains(" "+celsiusSymbols+" ", " "+u.String()+" ") {
		return Result{}, wrong(0, "units", "MKT takes temperatures in °C, and this is in %s", u).
			hint("convert it, and drop the unit with CAST(… AS REAL)")
	}
	if len(args) == 2 {
		if e, ok := constReal(args[1].Const); !ok || !(e > 0) || math.IsInf(e, 1) {
			return Result{}, wrong(1, "arguments", "MKT needs a constant activation energy in kJ/mol above 0")
		}
	}
	return Result{column.Real, column.Symbol("°C"), repeatType(column.Real, len(args))}, nil
}

type kinetic struct {
	tally
	perKelvin float64 // ΔH/R, in kelvin
	sums      []kineticSum
}

// kineticSum is Σ w·2^(y - exponent), y the binary logarithm of the rate
// relative to that at 25 °C.
type kineticSum struct {
	s        dd
	n        int64
	exponent int
}

func newMKT(s Setup) Accumulator {
	energy := defaultEnergy
	if len(s.Consts) > 1 {
		if e, ok := constReal(s.Consts[1]); ok {
			energy = e
		}
	}
	return &kinetic{tally: tally{weighted: s.Weighted}, perKelvin: energy * joulePerKilo / gasConstant}
}

func (a *kinetic) Add(groups []int32, on []uint64, n int, args []column.Vector, weight *column.Vector) error {
	rows, weights, err := a.begin(groups, on, n, args[:1], weight)
	if err != nil {
		return err
	}
	for _, i := range rows {
		c, w := args[0].F[i], 1.0
		if weights != nil {
			w = weights[i]
		}
		a.sums = grow(a.sums, groups[i])
		if err := a.addTo(&a.sums[groups[i]], c, w, i); err != nil {
			return err
		}
	}
	return nil
}

// addTo adds the rate at a temperature to a sum.
func (a *kinetic) addTo(s *kineticSum, c, w float64, row int32) error {
	if c-c != 0 {
		return infiniteValue(int(row), "MKT", c)
	}
	if c <= absoluteZero {
		return &RowFault{Row: int(row), Code: "no-value", Message: fmt.Sprintf("%s °C is not above absolute zero", column.FormatReal(c))}
	}
	t := c - absoluteZero
	y := a.perKelvin * (c - 25) / (t * referenceMKT) * math.Log2E
	y = max(y, -1<<40) // far colder than anything that counts
	k := math.Floor(y)
	s.add(twoProduct(math.Exp2(y-k), w), int(k), 1)
	return nil
}

// add adds term·2^exponent.
func (s *kineticSum) add(term dd, exponent int, rows int64) {
	switch {
	case s.n == 0:
		s.exponent = exponent
	case exponent > s.exponent:
		s.s = s.s.scale(s.exponent - exponent)
		s.exponent = exponent
	case exponent < s.exponent:
		term = term.scale(exponent - s.exponent)
	}
	s.n += rows
	s.s = s.s.add(term)
}

// scale multiplies by 2^n, n <= 0.
func (a dd) scale(n int) dd {
	n = max(n, -5000)
	return dd{math.Ldexp(a.hi, n), math.Ldexp(a.lo, n)}
}

func (a *kinetic) Merge(other Accumulator, to []int32) error {
	o := other.(*kinetic)
	a.mergeFacts(&o.tally, to)
	for g := range o.sums {
		if s := &o.sums[g]; s.n > 0 {
			a.sums = grow(a.sums, to[g])
			a.sums[to[g]].add(s.s, s.exponent, s.n)
		}
	}
	return nil
}

func (a *kinetic) Result(groups int) (column.Vector, error) {
	v := column.New(column.Real, nil, groups)
	for g := range groups {
		if g >= len(a.sums) || a.sums[g].n == 0 {
			v.SetNull(g)
			continue
		}
		by := dd{hi: float64(a.sums[g].n)}
		if a.weighted {
			by = a.fact(g).sum
		}
		var err error
		if v.F[g], err = a.valueOf(&a.sums[g], by, g); err != nil {
			return v, err
		}
	}
	return v, nil
}

// valueOf is the temperature of a sum of so many rows, or of so much weight.
func (a *kinetic) valueOf(s *kineticSum, by dd, g int) (float64, error) {
	mean := s.s.over(by).value()
	// ln of the mean rate relative to that at 25 °C, times Tref·R/ΔH
	u := (math.Log(mean) + float64(float64(s.exponent)*math.Ln2)) * referenceMKT / a.perKelvin
	f := 25 + referenceMKT*u/(1-u)
	if f-f != 0 {
		return 0, &GroupFault{Group: g, Code: "no-value", Message: "MKT has no finite value"}
	}
	return f, nil
}
