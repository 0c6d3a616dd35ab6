package function

import (
	"math"

	"nearcell/catalog/column"
)

// realScalars are the functions of analysis. Angles are in radians.
func realScalars() []*Scalar {
	list := []*Scalar{
		{Name: "POWER", Signature: "POWER(x, y)", Meaning: "x to the power of y; the operator ^ does the same",
			Example: "POWER(2, 10) = 1024", CanFail: true, Check: checkPower, Eval: evalPower},
		{Name: "ATAN2", Signature: "ATAN2(y, x)", Meaning: "the angle of the direction (x, y) in radians, from -π to π",
			Example: "ABS(ATAN2(1, 1) - PI() / 4) < 1E-15", Check: checkReals("ATAN2", 2, noUnit), Eval: evalAtan2},
		{Name: "PI", Signature: "PI()", Meaning: "3.14159…, the circumference of a circle over its diameter",
			Example: "ROUND(PI(), 4) = 3.1416", Check: checkReals("PI", 0, noUnit), Eval: evalPi},
		{Name: "DISTANCE", Signature: "DISTANCE(p, q)", Meaning: "the straight distance between two points",
			Example: "DISTANCE(POINT(0, 0, 0), POINT(1, 2, 2)) = 3", CanFail: true, Check: checkDistance, Eval: evalDistance},
	}
	for _, f := range realFunctions {
		list = append(list, f.scalar())
	}
	return list
}

// realFunction is a function of one real number.
type realFunction struct {
	name, meaning, example string
	f                      func(float64) float64
	fails                  bool // it has rows without a value, or without a finite one
	noValue                string
	unit                   func(*column.Unit) *column.Unit
}

var realFunctions = []realFunction{
	{"SQRT", "the square root", "SQRT(2.25) = 1.5", math.Sqrt, true, "the square root of %s has no value", halfUnit},
	{"LN", "the natural logarithm", "LN(EXP(1)) = 1", math.Log, true, "the logarithm of %s has no value", noUnit},
	{"LOG10", "the logarithm to the base 10", "LOG10(1000) = 3", log10, true, "the logarithm of %s has no value", noUnit},
	{"EXP", "e to the power of x", "EXP(0) = 1", math.Exp, true, "EXP(%s) has no finite value", noUnit},
	{"SIN", "the sine of an angle in radians", "SIN(0) = 0", math.Sin, true, "SIN(%s) has no value", noUnit},
	{"COS", "the cosine of an angle in radians", "COS(0) = 1", math.Cos, true, "COS(%s) has no value", noUnit},
	{"TAN", "the tangent of an angle in radians", "TAN(0) = 0", math.Tan, true, "TAN(%s) has no value", noUnit},
	{"ASIN", "the angle in radians whose sine is x", "ASIN(1) = PI() / 2", math.Asin, true, "ASIN(%s) has no value", noUnit},
	{"ACOS", "the angle in radians whose cosine is x", "ACOS(1) = 0", math.Acos, true, "ACOS(%s) has no value", noUnit},
	{"ATAN", "the angle in radians whose tangent is x", "ATAN(0) = 0", math.Atan, false, "", noUnit},
}

func noUnit(*column.Unit) *column.Unit { return nil }

// log10 is exact for powers of ten, which a quotient of logarithms is not.
func log10(x float64) float64 {
	y := math.Log10(x)
	if r := math.Round(y); r >= 0 && r <= 22 && powersOfTen[int(r)] == x {
		return r
	}
	return y
}

func (f *realFunction) scalar() *Scalar {
	return &Scalar{Name: f.name, Signature: f.name + "(x)", Meaning: f.meaning, Example: f.example, CanFail: f.fails,
		Check: checkReals(f.name, 1, f.unit), Eval: f.eval}
}

func checkReals(name string, n int, unit func(*column.Unit) *column.Unit) func([]Arg) (Result, error) {
	return func(args []Arg) (Result, error) {
		if err := wantCount(name, args, n, n); err != nil {
			return Result{}, err
		}
		var u *column.Unit
		for i := range args {
			if err := wantNumber(name, args, i); err != nil {
				return Result{}, err
			}
			u = unit(args[i].Unit)
		}
		return Result{column.Real, u, repeatType(column.Real, n)}, nil
	}
}

func (f *realFunction) eval(_ *Arena, args []column.Vector, on []uint64, n int, out *column.Vector) error {
	x := args[0].F[:n]
	row := FirstRow(on, n, func(i int) bool {
		y := f.f(x[i]) + 0
		out.F[i] = y
		return y-y != 0 && f.fault(x[i], y)
	})
	return noValue(row, f.noValue, &args[0])
}

// fault: NaN is no value, and an infinity is one only if it came in.
func (f *realFunction) fault(x, y float64) bool { return y != y || !math.IsInf(x, 0) }

func checkPower(args []Arg) (Result, error) {
	r, err := checkReals("POWER", 2, noUnit)(args)
	if err != nil {
		return r, err
	}
	if y, ok := constReal(args[1].Const); ok && y == math.Trunc(y) && math.Abs(y) <= 99 {
		r.Unit = args[0].Unit.Pow(int(y))
	}
	return r, nil
}

func evalPower(_ *Arena, args []column.Vector, on []uint64, n int, out *column.Vector) error {
	x, y := args[0].F[:n], args[1].F[:n]
	row := FirstRow(on, n, func(i int) bool {
		r := math.Pow(x[i], y[i]) + 0
		if y[i] == 2 {
			r = float64(x[i] * x[i])
		}
		out.F[i] = r
		came := math.IsInf(x[i], 0) || math.IsInf(y[i], 0)
		return r != r || math.IsInf(r, 0) && !came
	})
	format := "%s ^ %s has no finite value"
	if row >= 0 && x[row] < 0 {
		format = "(%s) ^ %s has no finite value" // without them it is the negative of a power
	}
	return noValue(row, format, &args[0], &args[1])
}

func evalAtan2(_ *Arena, args []column.Vector, on []uint64, n int, out *column.Vector) error {
	FirstRow(on, n, func(i int) bool {
		out.F[i] = math.Atan2(args[0].F[i], args[1].F[i]) + 0
		return false
	})
	return nil
}

func evalPi(_ *Arena, _ []column.Vector, _ []uint64, n int, out *column.Vector) error {
	for i := range n {
		out.F[i] = math.Pi
	}
	return nil
}

func checkDistance(args []Arg) (Result, error) {
	if err := wantCount("DISTANCE", args, 2, 2); err != nil {
		return Result{}, err
	}
	for i := range args {
		if err := wantType("DISTANCE", args, i, column.Point); err != nil {
			return Result{}, err.(*ArgumentError).hint("write POINT(x, y, z)")
		}
	}
	unit, err := commonUnit("DISTANCE", args)
	return Result{column.Real, unit, repeatType(column.Point, 2)}, err
}

func evalDistance(_ *Arena, args []column.Vector, on []uint64, n int, out *column.Vector) error {
	p, q := args[0].F, args[1].F
	row := FirstRow(on, n, func(i int) bool {
		dx, dy, dz := p[3*i]-q[3*i], p[3*i+1]-q[3*i+1], p[3*i+2]-q[3*i+2]
		d := math.Sqrt(float64(dx*dx) + float64(dy*dy) + float64(dz*dz))
		if d == 0 || math.IsInf(d, 0) { // the squares may be beyond the range
			d = math.Hypot(math.Hypot(dx, dy), dz)
		}
		out.F[i] = d
		return d-d != 0
	})
	return noValue(row, "DISTANCE(%s, %s) has no finite value", &args[0], &args[1])
}
